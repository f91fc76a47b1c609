//! The console blocks of README.md: each command is run in the repository's folder, and what it
//! prints must be what the block shows.
//!
//! A block is fenced with `console`. A line that begins with `$ ` is a command, perhaps with
//! `echo "…" |` before it; what follows, up to the next command, is its standard output and then
//! its standard error. A line `[…]` stands for any lines. A command that ends with a code other
//! than 0 has `[ends with 1]` as its last line.
//!
//! Machines differ in the last bits: a bound (what stands behind `±`) may be any number, another
//! number is compared to a part in 100,000, and how many blanks align a table does not count.

#![allow(clippy::unwrap_used, reason = "a test that cannot go on panics")]

use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

fn repository() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../..")
}

/// A command and the lines it should print.
struct Example {
    command: String,
    shown: Vec<String>,
}

fn examples(text: &str) -> Vec<Example> {
    let mut found: Vec<Example> = Vec::new();
    let mut inside = false;
    for line in text.lines() {
        match (inside, line.strip_prefix("$ ")) {
            (false, _) => inside = line == "```console",
            (true, _) if line == "```" => inside = false,
            (true, Some(command)) => found.push(Example {
                command: command.to_owned(),
                shown: Vec::new(),
            }),
            (true, None) => {
                if let Some(example) = found.last_mut() {
                    example.shown.push(line.to_owned());
                }
            }
        }
    }
    for example in &mut found {
        while example.shown.last().is_some_and(String::is_empty) {
            example.shown.pop();
        }
    }
    found
}

/// The words of a command; quotes keep blanks together.
fn words(command: &str) -> Vec<String> {
    let mut words = vec![String::new()];
    let mut quoted = false;
    for c in command.chars() {
        match c {
            '"' | '\'' => quoted = !quoted,
            ' ' if !quoted => words.push(String::new()),
            _ => words.last_mut().unwrap().push(c),
        }
    }
    words.retain(|w| !w.is_empty());
    words
}

/// What is piped in, and the words of the command itself.
fn parts(command: &str) -> (String, Vec<String>) {
    let all = words(command);
    match all.as_slice() {
        [echo, text, pipe, rest @ ..] if echo == "echo" && pipe == "|" => {
            (format!("{text}\n"), rest.to_vec())
        }
        _ => (String::new(), all),
    }
}

fn run(command: &str) -> Vec<String> {
    let (input, words) = parts(command);
    assert_eq!(
        words.first().map(String::as_str),
        Some("pulsewright"),
        "`{command}` is no command of ours"
    );
    let mut child = Command::new(env!("CARGO_BIN_EXE_pulsewright"))
        .args(&words[1..])
        .current_dir(repository())
        .env_remove("COLUMNS")
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    child
        .stdin
        .take()
        .unwrap()
        .write_all(input.as_bytes())
        .unwrap();
    let output = child.wait_with_output().unwrap();
    let text =
        String::from_utf8(output.stdout).unwrap() + &String::from_utf8(output.stderr).unwrap();
    let mut lines: Vec<String> = text.lines().map(|l| l.trim_end().to_owned()).collect();
    while lines.last().is_some_and(String::is_empty) {
        lines.pop();
    }
    match output.status.code() {
        Some(0) => {}
        Some(code) => lines.push(format!("[ends with {code}]")),
        None => lines.push("[killed]".to_owned()),
    }
    lines
}

/// Whether what was printed is what is shown, `[…]` standing for any lines.
fn fits(shown: &[String], printed: &[String]) -> bool {
    match shown.split_first() {
        None => printed.is_empty(),
        Some((line, rest)) if line == "[…]" => {
            (0..=printed.len()).any(|k| fits(rest, &printed[k..]))
        }
        Some((line, rest)) => {
            printed.first().is_some_and(|p| same_line(line, p)) && fits(rest, &printed[1..])
        }
    }
}

fn same_line(shown: &str, printed: &str) -> bool {
    let (shown, printed) = (comparable(shown), comparable(printed));
    shown.len() == printed.len() && shown.iter().zip(&printed).all(|(a, b)| same_word(a, b))
}

/// The words of a line, without bounds.
fn comparable(line: &str) -> Vec<String> {
    let mut words = Vec::new();
    let mut rest = line.split_whitespace().peekable();
    while let Some(word) = rest.next() {
        if word != "±" {
            words.push(word.replace('−', "-"));
            continue;
        }
        // the number, perhaps `× 10⁻⁹`, and its unit
        rest.next();
        if rest.peek() == Some(&"×") {
            rest.nth(1);
        }
        let is_unit = |word: &&str| {
            word.chars().all(|c| c.is_alphabetic() || "²·/".contains(c))
                && word.chars().count() <= 5
        };
        if rest
            .peek()
            .is_some_and(|w| is_unit(w) && !["holds", "fails"].contains(w))
        {
            rest.next();
        }
    }
    words
}

fn same_word(a: &str, b: &str) -> bool {
    match (a.parse::<f64>(), b.parse::<f64>()) {
        (Ok(x), Ok(y)) => (x - y).abs() <= 1e-5 * x.abs().max(y.abs()),
        _ => a == b,
    }
}

#[test]
fn readme_shows_what_the_command_prints() {
    let text = std::fs::read_to_string(repository().join("README.md")).unwrap();
    let examples = examples(&text);
    assert!(!examples.is_empty(), "README.md shows no example");
    // Where examples write to; elsewhere than usual it may not be there yet.
    std::fs::create_dir_all(repository().join("target")).unwrap();
    for example in examples {
        let printed = run(&example.command);
        assert!(
            fits(&example.shown, &printed),
            "`{}` prints\n\n{}\n",
            example.command,
            printed.join("\n")
        );
    }
}

/// Every netlist that README.md names is there.
#[test]
fn readme_names_netlists_that_exist() {
    let text = std::fs::read_to_string(repository().join("README.md")).unwrap();
    let names = text
        .split(|c: char| c.is_whitespace() || "`()|,".contains(c))
        .filter(|w| w.starts_with("netlists/"));
    for name in names.filter(|w| w.ends_with(".shot")) {
        assert!(repository().join(name).exists(), "{name}");
    }
}

#[test]
fn dots_stand_for_any_lines() {
    let lines = |text: &str| text.lines().map(str::to_owned).collect::<Vec<_>>();
    assert!(fits(&lines("a\n[…]\nd"), &lines("a\nb\nc\nd")));
    assert!(fits(&lines("[…]"), &[]));
    assert!(!fits(&lines("a\n[…]"), &lines("b\na")));
}

#[test]
fn bounds_may_differ_and_values_may_not() {
    assert!(same_line(
        "1  3.12345678 J  ± 30 pJ  −1 J  holds",
        "1  3.123456  J  ± 2.5 nJ   −1 J holds"
    ));
    assert!(same_line(
        "0.25  ± 2.5 × 10⁻⁹  holds",
        "0.25  ± 96 × 10⁻¹⁵ holds"
    ));
    assert!(!same_line("1  3.12 J  ± 30 pJ", "1  3.13 J  ± 30 pJ"));
}

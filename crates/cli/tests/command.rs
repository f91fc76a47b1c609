//! The command as a process: exit codes, streams, files, pipes, signals.

#![allow(clippy::unwrap_used, reason = "what serves tests only may stop them")]

use std::fs;
use std::io::{Read, Write};
use std::path::PathBuf;
use std::process::{Command, Output, Stdio};

/// A discharge of known numbers: 400 J in the bank, all but e⁻¹⁰⁰ of it into the chest.
const STAGE: &str = r#"title "A bank into a resistor"
let load = 50 ohm
capacitor bank  from top to ground = 32 uF, charged to 5 kV
switch    fire  from top to pad    : open, closes at 1 us
resistor  chest from pad to ground = load
span 80 ms
reading crest = largest current through chest
"#;

fn folder() -> tempfile::TempDir {
    tempfile::tempdir().unwrap()
}

/// The stage with more statements, in a file.
fn stage(folder: &tempfile::TempDir, more: &str) -> PathBuf {
    let path = folder.path().join("stage.shot");
    fs::write(&path, format!("{STAGE}{more}\n")).unwrap();
    path
}

fn pulsewright() -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_pulsewright"));
    command.stdin(Stdio::null());
    command
}

fn run(verb: &str, path: &PathBuf, more: &[&str]) -> Output {
    pulsewright()
        .arg(verb)
        .arg(path)
        .args(more)
        .output()
        .unwrap()
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn messages(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

fn record(output: &Output) -> serde_json::Value {
    serde_json::from_slice(&output.stdout).unwrap()
}

/// Fires or judges the stage with a claim, and compares the exit code.
fn ends(verb: &str, claim: &str, more: &[&str], code: i32) {
    let folder = folder();
    let output = run(verb, &stage(&folder, claim), more);
    assert_eq!(
        output.status.code(),
        Some(code),
        "{}{}",
        out(&output),
        messages(&output)
    );
}

const HOLDS: &str = "claim dose: energy into chest is within 1 % of 400 J";
const FAILS: &str = "claim dose: energy into chest is within 1 % of 300 J";
const UNDECIDED: &str = "claim dose: energy into chest is at least 1 J, when load >= 1 kohm";

#[test]
fn judge_ends_with_what_the_claims_say() {
    ends("judge", HOLDS, &[], 0);
    ends("judge", FAILS, &[], 1);
    ends("judge", UNDECIDED, &[], 4);
    ends(
        "judge",
        &format!("{FAILS}\nclaim other: energy into chest is at least 1 J, when load >= 1 kohm"),
        &[],
        1,
    );
}

#[test]
fn judge_without_claims_is_a_mistake() {
    ends("judge", "", &[], 2);
}

#[test]
fn fire_ends_well_even_where_a_claim_fails_unless_strict() {
    ends("fire", FAILS, &[], 0);
    ends("fire", FAILS, &["--strict"], 1);
    ends("fire", HOLDS, &["--strict"], 0);
}

#[test]
fn a_file_that_is_not_there_breaks_the_run() {
    let output = run("fire", &folder().path().join("nothing.shot"), &["--json"]);
    assert_eq!(output.status.code(), Some(3));
    assert!(messages(&output).contains("there is no such file"));
    assert!(output.stdout.is_empty());
}

#[test]
fn a_limit_breaks_the_run() {
    ends("fire", "time step 1 us\nlimit steps 10", &[], 3);
}

#[test]
fn a_wrong_word_on_the_command_line_gets_the_near_one() {
    let output = pulsewright().arg("fier").output().unwrap();
    assert_eq!(output.status.code(), Some(2));
    assert!(
        messages(&output).contains("'fire'"),
        "{}",
        messages(&output)
    );
}

#[test]
fn a_mistake_leaves_standard_output_empty() {
    let folder = folder();
    let output = run(
        "fire",
        &stage(&folder, "resistor path from top to ground = 5"),
        &[],
    );
    assert_eq!(output.status.code(), Some(2));
    assert!(output.stdout.is_empty());
    assert!(
        messages(&output).contains("stage.shot:8:36: mistake P0107"),
        "{}",
        messages(&output)
    );
}

#[test]
fn with_json_a_mistake_is_a_record_too() {
    let folder = folder();
    let output = run(
        "fire",
        &stage(&folder, "resistor path from top to ground = 5"),
        &["--json"],
    );
    assert_eq!(output.status.code(), Some(2));
    let record = record(&output);
    assert_eq!(record["record"], "pulsewright.mistakes/1");
    assert_eq!(record["mistakes"][0]["code"], "P0107");
    assert_eq!(record["mistakes"][0]["line"], 8);
    assert_eq!(record["mistakes"][0]["replacement"], "5 ohm");
    assert!(messages(&output).contains("mistake P0107"));
}

#[test]
fn a_loop_of_sources_is_a_mistake_at_its_last_source() {
    let folder = folder();
    let more = "voltage one from a to ground = 5 V\nvoltage two from a to ground = 6 V";
    for verb in ["check", "fire"] {
        let output = run(verb, &stage(&folder, more), &[]);
        assert_eq!(output.status.code(), Some(2), "{verb}");
        assert!(
            messages(&output).contains("stage.shot:9:9: mistake P0751"),
            "{}",
            messages(&output)
        );
    }
}

#[test]
fn a_record_names_its_input_and_holds_the_readings() {
    let folder = folder();
    let path = stage(&folder, HOLDS);
    let record = record(&run("fire", &path, &["--json", "--set", "load=100 ohm"]));
    assert_eq!(record["record"], "pulsewright.fire/1");
    assert_eq!(record["input"]["title"], "A bank into a resistor");
    assert_eq!(
        record["input"]["sha256"],
        pulsewright::sha256(&fs::read(&path).unwrap())
    );
    assert_eq!(
        record["input"]["set"],
        serde_json::json!({"load": {"value": 100.0, "unit": "ohm"}})
    );
    let crest = &record["readings"][0];
    let (value, bound) = (
        crest["value"].as_f64().unwrap(),
        crest["bound"].as_f64().unwrap(),
    );
    assert!((value - 50.0).abs() <= bound + 1e-9, "{crest}");
    assert_eq!(record["claims"][0]["verdict"], "holds");
    assert_eq!(record["events"][0]["part"], "fire");
}

#[test]
fn modes_are_listed_for_each_topology() {
    let folder = folder();
    let path = stage(&folder, "cases load = 25 ohm, 100 ohm");
    let output = run("modes", &path, &["--json", "--case", "2"]);
    assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
    let record = record(&output);
    assert_eq!(record["record"], "pulsewright.modes/1");
    let [open, closed] = [0, 1].map(|k| &record["topologies"][k]);
    assert_eq!(open["states"]["fire"], "open");
    assert_eq!(open["modes"][0]["kind"], "holds");
    assert_eq!(
        (&closed["from"], &closed["to"]),
        (&1e-6.into(), &0.08.into())
    );
    assert_eq!(closed["modes"][0]["kind"], "decays");
    let tau = closed["modes"][0]["time_constant"].as_f64().unwrap();
    assert!((tau - 3.2e-3).abs() < 1e-15, "{tau}");
    assert_eq!(closed["modes"][0]["energy"]["bank"], 1.0);
}

#[test]
fn methods_are_drawn_beside_their_table() {
    let folder = folder();
    let plot = folder.path().join("work.svg");
    let path = stage(&folder, "");
    let name = plot.to_str().unwrap();
    let more = ["--svg", name, "--step", "1 ms", "--halvings", "3"];
    let output = run("methods", &path, &more);
    assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
    assert!(out(&output).contains("crest: largest current through chest"));
    assert!(out(&output).contains("factorisations"));
    assert!(fs::read_to_string(&plot).unwrap().starts_with("<svg"));
    let output = run("methods", &path, &["--svg", "-"]);
    assert!(out(&output).starts_with("<svg") && out(&output).ends_with("</svg>\n"));
    let output = run("methods", &path, &["--step", "0 s"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(messages(&output).contains("--step 0 s: it must be above 0 s"));
}

#[test]
fn the_same_input_gives_the_same_bytes() {
    let folder = folder();
    let path = stage(&folder, HOLDS);
    for verb in ["fire", "judge", "modes", "methods"] {
        assert_eq!(
            run(verb, &path, &["--json"]).stdout,
            run(verb, &path, &["--json"]).stdout
        );
    }
}

#[test]
fn a_setting_without_sense_is_a_mistake() {
    for (written, said) in [
        ("load", "a name, `=` and a value"),
        ("load=3 V", "load"),
        ("lod=3 ohm", "load"),
    ] {
        let folder = folder();
        let output = run("fire", &stage(&folder, ""), &["--set", written]);
        assert_eq!(output.status.code(), Some(2), "{written}");
        assert!(
            messages(&output).contains(said),
            "{written}: {}",
            messages(&output)
        );
    }
}

#[test]
fn a_case_takes_the_place_of_the_let_values() {
    let folder = folder();
    let path = stage(&folder, "cases load = 25 ohm, 100 ohm");
    let record = record(&run("fire", &path, &["--json", "--case", "2"]));
    assert_eq!(record["input"]["set"]["load"]["value"], 100.0);
    let output = run("fire", &path, &["--case", "3"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(messages(&output).contains("there are 2 cases"));
}

#[test]
fn what_is_adjusted_is_a_column_of_the_table_and_stands_in_records() {
    let folder = folder();
    let adjust = "adjust load from 10 ohm to 100 ohm so that largest current through chest is";
    let path = stage(&folder, &format!("{adjust} 200 A"));
    let fired = record(&run("fire", &path, &["--json"]));
    let load = &fired["adjusted"]["load"];
    assert!(
        (load["value"].as_f64().unwrap() - 25.0).abs() < 1e-6,
        "{load}"
    );
    let table = out(&run("table", &path, &[])).to_owned();
    assert!(table.starts_with("load (ohm),crest (A)\n"), "{table}");
    let output = run("fire", &path, &["--set", "load=20 ohm"]);
    assert_eq!(output.status.code(), Some(2), "{}", messages(&output));
    assert!(messages(&output).contains("P0563"));
    let path = stage(&folder, &format!("{adjust} 2 kA"));
    let output = run("table", &path, &[]);
    assert_eq!(output.status.code(), Some(2), "{}", messages(&output));
    let said = "P0761: `load` cannot be adjusted: from 10 ohm to 100 ohm largest current through chest is found";
    assert!(messages(&output).contains(said), "{}", messages(&output));
}

#[test]
fn a_dash_reads_standard_input() {
    let mut child = Command::new(env!("CARGO_BIN_EXE_pulsewright"))
        .args(["judge", "-", "--json"])
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    child
        .stdin
        .take()
        .unwrap()
        .write_all(format!("{STAGE}{HOLDS}\n").as_bytes())
        .unwrap();
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
    assert_eq!(record(&output)["claims"][0]["verdict"], "holds");
}

#[test]
fn a_file_is_written_whole_or_not_at_all() {
    let folder = folder();
    let target = folder.path().join("shot.json");
    fs::write(&target, "old").unwrap();
    let name = target.to_str().unwrap();
    let failed = run("fire", &stage(&folder, "oops"), &["--json", "-o", name]);
    assert_eq!(failed.status.code(), Some(2));
    assert_eq!(fs::read_to_string(&target).unwrap(), "old");
    let done = run("fire", &stage(&folder, HOLDS), &["--json", "-o", name]);
    assert_eq!(done.status.code(), Some(0), "{}", messages(&done));
    assert!(done.stdout.is_empty());
    assert!(fs::read_to_string(&target).unwrap().ends_with("}\n"));
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 2);
}

#[test]
fn a_folder_that_is_not_there_breaks_the_run() {
    let folder = folder();
    let target = folder.path().join("no/such/shot.json");
    let output = run(
        "fire",
        &stage(&folder, ""),
        &["-o", target.to_str().unwrap()],
    );
    assert_eq!(output.status.code(), Some(3));
    assert!(output.stdout.is_empty());
}

#[test]
fn a_closed_pipe_is_no_error() {
    let folder = folder();
    let mut child = pulsewright()
        .arg("waveform")
        .arg(stage(&folder, ""))
        .args(["--every", "100 ns"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    let mut first = [0; 4];
    let mut pipe = child.stdout.take().unwrap();
    pipe.read_exact(&mut first).unwrap();
    drop(pipe);
    assert_eq!(&first, b"time");
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0));
    assert!(output.stderr.is_empty(), "{}", messages(&output));
}

#[test]
fn a_waveform_has_units_and_two_rows_an_event() {
    let folder = folder();
    let output = run(
        "waveform",
        &stage(&folder, "channels voltage across chest"),
        &[],
    );
    let text = out(&output);
    assert!(
        text.starts_with("time (s),voltage across chest (V)\n"),
        "{text}"
    );
    assert_eq!(text.lines().filter(|l| l.starts_with("1e-6,")).count(), 2);
    let rows = out(&run(
        "waveform",
        &stage(&folder, "channels voltage across chest"),
        &["--every", "10 ms"],
    ));
    assert_eq!(rows.lines().count(), 10);
}

#[test]
fn neaten_settles() {
    let folder = folder();
    let path = stage(&folder, "");
    let neat = run("neaten", &path, &[]);
    assert_eq!(neat.status.code(), Some(0));
    let other = folder.path().join("neat.shot");
    fs::write(&other, &neat.stdout).unwrap();
    assert_eq!(run("neaten", &other, &["--check"]).status.code(), Some(0));
    fs::write(&other, "let load=50ohm\nspan 1ms\n").unwrap();
    assert_eq!(run("neaten", &other, &["--check"]).status.code(), Some(1));
}

#[test]
fn check_takes_several_files_and_ends_with_the_worst() {
    let folder = folder();
    let good = stage(&folder, "");
    let bad = folder.path().join("bad.shot");
    fs::write(&bad, "span 1 kV\n").unwrap();
    let output = pulsewright()
        .arg("check")
        .args([&good, &bad])
        .output()
        .unwrap();
    assert_eq!(output.status.code(), Some(2));
    assert!(
        out(&output).contains("stage.shot (A bank into a resistor): no mistakes; 3 parts"),
        "{}",
        out(&output)
    );
    assert!(messages(&output).contains("bad.shot:1:6"));
}

#[test]
fn help_fits_a_screen_and_says_it_all_at_length() {
    let short = out(&pulsewright().arg("-h").output().unwrap());
    assert!(short.lines().count() <= 28, "{short}");
    assert!(short.contains("pulsewright judge stage.shot"));
    let long = out(&pulsewright().arg("--help").output().unwrap());
    for words in [
        "exit codes:",
        "no safety approval",
        "qualified people",
        "no medical device",
    ] {
        assert!(long.contains(words), "{words}");
    }
}

#[test]
fn the_manual_explains_codes_and_verbs() {
    for word in ["P0107", "p0751", "judge", "claim"] {
        let output = pulsewright().args(["manual", word]).output().unwrap();
        assert_eq!(
            output.status.code(),
            Some(0),
            "{word}: {}",
            messages(&output)
        );
        assert!(!output.stdout.is_empty());
    }
    assert_eq!(
        pulsewright()
            .args(["manual", "gobbledygook"])
            .output()
            .unwrap()
            .status
            .code(),
        Some(2)
    );
}

#[cfg(unix)]
#[test]
fn a_signal_ends_a_run_with_its_code() {
    for (signal, code) in [("INT", 130), ("TERM", 143)] {
        let folder = folder();
        let path = stage(&folder, "time step 10 ns\nlimit steps 10_000_000_000");
        let target = folder.path().join("shot.json");
        let child = pulsewright()
            .arg("fire")
            .arg(&path)
            .args(["--json", "-o", target.to_str().unwrap()])
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        std::thread::sleep(std::time::Duration::from_millis(500));
        let sent = Command::new("kill")
            .arg(format!("-{signal}"))
            .arg(child.id().to_string())
            .status()
            .unwrap();
        assert!(sent.success());
        let output = child.wait_with_output().unwrap();
        assert_eq!(output.status.code(), Some(code), "{}", messages(&output));
        assert!(
            messages(&output).contains("interrupted"),
            "{}",
            messages(&output)
        );
        assert!(output.stdout.is_empty());
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }
}

#[test]
fn chart_draws_the_channels_the_same_each_time() {
    let folder = folder();
    let path = stage(
        &folder,
        "claim top: largest current through chest is at most 120 A",
    );
    let target = folder.path().join("stage.svg");
    let output = run("chart", &path, &["-o", target.to_str().unwrap()]);
    assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
    assert!(output.stdout.is_empty());
    let picture = fs::read_to_string(&target).unwrap();
    assert!(picture.starts_with("<svg") && picture.ends_with("</svg>\n"));
    assert!(picture.contains(">100 A at 1 µs<") && picture.contains(">fire closes<"));
    assert_eq!(out(&run("chart", &path, &[])), picture);
    let other = out(&run("chart", &path, &["--set", "load=75ohm"]));
    assert!(other.contains(">A bank into a resistor: load = 75 Ω<"));
}

#[test]
fn chart_shows_a_part_of_the_span() {
    let folder = folder();
    let path = stage(&folder, "");
    let zoomed = out(&run("chart", &path, &["--between", "0s", "2us"]));
    assert!(zoomed.contains(">time (µs)<"));
    for (from, to) in [("2us", "1us"), ("0s", "1s"), ("0s", "5V"), ("0s", "soon")] {
        let output = run("chart", &path, &["--between", from, to]);
        assert_eq!(output.status.code(), Some(2), "{from} {to}");
        assert!(output.stdout.is_empty());
    }
}

#[test]
fn a_pipe_gets_no_plot() {
    let folder = folder();
    let page = out(&run("fire", &stage(&folder, ""), &["--color", "always"]));
    assert!(!page.contains('┤') && !page.contains(": crest "));
}

#[test]
fn a_report_is_the_same_each_time_and_verified() {
    let folder = folder();
    let path = stage(&folder, HOLDS);
    let page = folder.path().join("stage.html");
    let target = page.to_str().unwrap();
    assert_eq!(run("report", &path, &["-o", target]).status.code(), Some(0));
    assert_eq!(
        out(&run("report", &path, &[])),
        fs::read_to_string(&page).unwrap()
    );
    let checked = |more: &[&str]| {
        let output = run("report", &path, &[&["--verify", target], more].concat());
        (output.status.code(), out(&output))
    };
    assert_eq!(checked(&[]).0, Some(0));
    let (code, said) = checked(&["--set", "load=60ohm"]);
    assert_eq!(code, Some(1));
    assert!(
        said.contains("let-values set from outside differ"),
        "{said}"
    );
    let changed = fs::read_to_string(&page).unwrap().replace("holds", "HOLDS");
    fs::write(&page, changed).unwrap();
    assert_eq!(checked(&[]).0, Some(1));
    fs::write(&page, [0xff, 0xfe]).unwrap();
    let (code, said) = checked(&[]);
    assert_eq!(code, Some(1));
    assert!(said.contains("no record"), "{said}");
}

#[test]
fn a_report_is_done_whatever_the_verdicts_and_wants_claims() {
    ends("report", FAILS, &[], 0);
    ends("report", UNDECIDED, &[], 0);
    ends("report", "", &[], 2);
}

#[test]
fn the_report_of_seven_loads_is_small() {
    let netlist = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../../netlists/damped-sine.shot");
    let page = run("report", &netlist, &["--stamp", "filed under 42"]).stdout;
    assert!((50_000..500_000).contains(&page.len()), "{}", page.len());
    assert!(
        String::from_utf8(page)
            .unwrap()
            .contains(">filed under 42<")
    );
}

#[test]
fn completions_know_every_verb() {
    for shell in ["bash", "zsh", "fish"] {
        let output = pulsewright().args(["completions", shell]).output().unwrap();
        assert_eq!(output.status.code(), Some(0), "{shell}");
        for verb in ["fire", "judge", "chart", "report", "--between", "--verify"] {
            let bare = verb.trim_start_matches('-');
            assert!(out(&output).contains(bare), "{shell}: {verb}");
        }
    }
    let output = pulsewright()
        .args(["completions", "cobol"])
        .output()
        .unwrap();
    assert_eq!(output.status.code(), Some(2));
}

#[test]
fn manual_pages_are_written_for_every_verb() {
    let folder = folder();
    let write = || {
        let output = pulsewright()
            .arg("pages")
            .arg(folder.path())
            .output()
            .unwrap();
        assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
        fs::read_to_string(folder.path().join("pulsewright-chart.1")).unwrap()
    };
    let page = write();
    assert!(page.contains("between") && page.contains("SVG"), "{page}");
    assert_eq!(write(), page);
    assert!(folder.path().join("pulsewright.1").exists());
    assert!(!folder.path().join("pulsewright-pages.1").exists());
    let gone = pulsewright()
        .args(["pages", "no/such/folder"])
        .output()
        .unwrap();
    assert_eq!(gone.status.code(), Some(3));
}

/// A divider whose yield is three quarters, in two cases of which the second draws the same.
const DIVIDER: &str = r#"title "A supply"
let load = 5 ohm
voltage  feed from top to ground = 10 V, tolerance 10 %
resistor path from top to ground = load, standard deviation 2 %
span 1 ms
cases load = 5 ohm, 10 ohm
"#;

fn divider(folder: &tempfile::TempDir, claim: &str) -> PathBuf {
    let path = folder.path().join("divider.shot");
    fs::write(&path, format!("{DIVIDER}{claim}\n")).unwrap();
    path
}

const MOSTLY: &str =
    "claim low: highest voltage across path is at most 10.5 V, in at least 50 % of shots";

#[test]
fn spread_ends_with_what_the_shares_say() {
    for (claim, code) in [
        (MOSTLY, 0),
        (
            "claim low: highest voltage across path is at most 10.5 V",
            1,
        ),
        (
            "claim low: highest voltage across path is at most 10.5 V, in at least 75 % of shots",
            4,
        ),
        ("", 0),
    ] {
        let folder = folder();
        let output = run("spread", &divider(&folder, claim), &["--shots", "60"]);
        assert_eq!(
            output.status.code(),
            Some(code),
            "{}{}",
            out(&output),
            messages(&output)
        );
        assert!(out(&output).lines().all(|l| l.chars().count() <= 80));
    }
}

#[test]
fn slices_merge_to_the_bytes_of_the_whole_on_any_threads() {
    let folder = folder();
    let path = divider(&folder, MOSTLY);
    let spread = |more: &[&str]| {
        let output = run(
            "spread",
            &path,
            &[&["--shots", "40", "--seed", "9"], more].concat(),
        );
        assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
        output.stdout
    };
    let whole = spread(&["--json"]);
    let mut merged = pulsewright();
    merged.arg("merge").arg("--json");
    for k in 1..=7 {
        let (slice, threads) = (format!("{k}/7"), (1 + k % 2).to_string());
        let part = folder.path().join(format!("part{k}.json"));
        fs::write(&part, spread(&["--slice", &slice, "--threads", &threads])).unwrap();
        merged.arg(part);
    }
    assert_eq!(merged.output().unwrap().stdout, whole);
    assert_eq!(spread(&["--json", "--threads", "1"]), whole);
}

#[test]
fn merge_says_which_slice_is_missing() {
    let folder = folder();
    let part = folder.path().join("part.json");
    let path = divider(&folder, "");
    let target = part.to_str().unwrap();
    run(
        "spread",
        &path,
        &["--shots", "4", "--slice", "1/2", "-o", target],
    );
    let output = run("merge", &part, &[]);
    assert_eq!(output.status.code(), Some(2));
    assert!(
        messages(&output).contains("slice 2 of 2 is missing"),
        "{}",
        messages(&output)
    );
    let output = run("merge", &path, &[]);
    assert_eq!(output.status.code(), Some(2));
    assert!(
        messages(&output).contains("it is no record"),
        "{}",
        messages(&output)
    );
}

#[test]
fn a_slice_is_one_of_its_number() {
    let folder = folder();
    for slice in ["0/7", "8/7", "3", "a/b"] {
        let output = run(
            "spread",
            &divider(&folder, ""),
            &["--shots", "5", "--slice", slice],
        );
        assert_eq!(output.status.code(), Some(2));
        assert!(messages(&output).contains("which of how many slices"));
    }
}

#[test]
fn a_draw_of_a_study_is_fired_again() {
    let folder = folder();
    let path = divider(
        &folder,
        "claim low: highest voltage across path is at most 10.5 V",
    );
    let study = record(&run(
        "spread",
        &path,
        &["--shots", "30", "--seed", "5", "--json"],
    ));
    let most = &study["cases"][1]["readings"][0]["most"];
    let draw = most["draw"].to_string();
    let again = ["--case", "2", "--draw", &draw, "--seed", "5", "--json"];
    let fired = record(&run("fire", &path, &again));
    let (a, b) = (
        most["value"].as_f64().unwrap(),
        fired["claims"][0]["value"].as_f64().unwrap(),
    );
    assert!((a - b).abs() < 1e-9 * a, "{a} {b}");
    assert!(fired["values"]["feed"].as_f64().unwrap() > 10.5);
    let page = out(&run("fire", &path, &["--draw", &draw, "--seed", "5"]));
    assert!(page.contains("at feed = "), "{page}");
}

#[test]
fn the_worst_corner_of_a_claim_is_fired_again() {
    let folder = folder();
    let path = divider(
        &folder,
        "claim low: highest voltage across path is at most 10.5 V",
    );
    let judged = run("judge", &path, &["--json"]);
    assert_eq!(judged.status.code(), Some(1));
    let claim = &record(&judged)["claims"][0];
    assert_eq!(
        (claim["verdict"].as_str(), claim["nominal"].as_str()),
        (Some("fails"), Some("holds"))
    );
    assert!((claim["worst"]["corner"]["feed"].as_f64().unwrap() - 11.0).abs() < 1e-9);
    let fired = run("fire", &path, &["--corner", "low", "--strict", "--json"]);
    assert_eq!(fired.status.code(), Some(1), "{}", messages(&fired));
    assert_eq!(
        record(&fired)["claims"][0]["value"],
        claim["worst"]["value"]
    );
    let rows = out(&run("waveform", &path, &["--corner", "low"]));
    assert!(rows.contains(",11.0") || rows.contains(",11"), "{rows}");
    let unknown = run("fire", &path, &["--corner", "lwo"]);
    assert_eq!(unknown.status.code(), Some(2));
    assert!(
        messages(&unknown).contains("the claims are low"),
        "{}",
        messages(&unknown)
    );
}

#[test]
fn a_table_has_a_row_a_case() {
    let folder = folder();
    let text = "cases load = 50 ohm, open circuit\nreading dose = energy into chest";
    let output = run("table", &stage(&folder, text), &[]);
    assert_eq!(output.status.code(), Some(0), "{}", messages(&output));
    let text = out(&output);
    let rows: Vec<Vec<&str>> = text.lines().map(|l| l.split(',').collect()).collect();
    assert_eq!(rows[0], ["load (ohm)", "crest (A)", "dose (J)"]);
    let number = |cell: &str| cell.parse::<f64>().unwrap();
    assert_eq!(number(rows[1][0]), 50.0);
    assert!((number(rows[1][1]) - 100.0).abs() < 1e-3);
    assert!((number(rows[1][2]) - 400.0).abs() < 1e-3);
    assert_eq!(
        (rows[2][0], number(rows[2][2]), rows.len()),
        ("open circuit", 0.0, 3)
    );
    let nothing = run("table", &PathBuf::from("-"), &[]);
    assert_eq!(nothing.status.code(), Some(2));
}

#[test]
fn without_a_spread_there_is_neither_draw_nor_corner() {
    let folder = folder();
    for more in [["--draw", "3"], ["--corner", "dose"]] {
        let output = run("fire", &stage(&folder, HOLDS), &more);
        assert_eq!(output.status.code(), Some(2));
        assert!(messages(&output).contains("no value of the netlist has a spread"));
    }
}

#[test]
fn a_rating_is_judged_like_a_claim() {
    let folder = folder();
    let path = stage(&folder, "");
    let text = fs::read_to_string(&path).unwrap();
    let rated = text.replace("charged to 5 kV", "charged to 5 kV, rated 6 kV, 90 A");
    fs::write(&path, rated).unwrap();
    let output = run("judge", &path, &["--json"]);
    assert_eq!(output.status.code(), Some(1), "{}", messages(&output));
    let claims = record(&output)["claims"].clone();
    let verdict = |k: usize| [claims[k]["name"].clone(), claims[k]["verdict"].clone()];
    assert_eq!(verdict(0), ["bank.voltage", "holds"]);
    assert_eq!(verdict(1), ["bank.current", "fails"]);
    let neat = out(&run("neaten", &path, &[]));
    assert!(neat.contains("charged to 5 kV, rated 6 kV, 90 A"), "{neat}");
}

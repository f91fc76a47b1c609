//! Files and settings: from a path and `--set` to a netlist that was read and checked.

use crate::say;
use crate::shell::{Shell, Talk};
use crate::trouble::Trouble;
use pulsewright::circuit::fault::Fault;
use pulsewright::circuit::{Dimension, Span};
use pulsewright::language::{Source, parse_value};
use pulsewright::{LetValue, Netlist, Settings};
use std::fs::File;
use std::io::{self, ErrorKind, IsTerminal, Read};
use std::path::Path;

/// The most bytes of text that are read.
const MOST_BYTES: u64 = 256 * 1024 * 1024;

/// Reads a file whole; `-` is standard input.
pub fn bytes(path: &Path, shell: &Shell) -> Result<Vec<u8>, Trouble> {
    let read = if path.as_os_str() == "-" {
        standard(shell)
    } else {
        File::open(path).and_then(limited)
    };
    let bytes =
        read.map_err(|e| Trouble::Broke(format!("cannot read {}: {}", name(path), why(&e))))?;
    if u64::try_from(bytes.len()).is_ok_and(|n| n > MOST_BYTES) {
        return Err(Trouble::Broke(format!(
            "{} is longer than the limit of 256 MB of text",
            name(path)
        )));
    }
    Ok(bytes)
}

fn standard(shell: &Shell) -> io::Result<Vec<u8>> {
    let input = io::stdin().lock();
    if input.is_terminal() && shell.talk >= Talk::Usual {
        say::note(shell, "reading a netlist from standard input");
    }
    limited(input)
}

fn limited(from: impl Read) -> io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    from.take(MOST_BYTES + 1).read_to_end(&mut bytes)?;
    Ok(bytes)
}

/// What messages call a file.
pub fn name(path: &Path) -> String {
    if path.as_os_str() == "-" {
        "standard input".to_owned()
    } else {
        path.display().to_string()
    }
}

/// Why a file could not be read or written, in words.
pub fn why(error: &io::Error) -> String {
    match error.kind() {
        ErrorKind::NotFound => "there is no such file or folder".to_owned(),
        ErrorKind::PermissionDenied => "that is not permitted".to_owned(),
        ErrorKind::IsADirectory => "it is a folder".to_owned(),
        ErrorKind::StorageFull => "there is no space left".to_owned(),
        _ => error.to_string(),
    }
}

/// Reads a netlist with settings, and checks it in every case.
pub fn netlist(path: &Path, settings: &[String], shell: &Shell) -> Result<Netlist, Trouble> {
    let set = settings
        .iter()
        .map(|s| setting(s))
        .collect::<Result<Settings, Trouble>>()?;
    if let Some(name) = twice(&set) {
        return Err(Trouble::Usage(format!("--set {name} is given twice")));
    }
    let netlist = Netlist::read_named(&bytes(path, shell)?, &name(path), set)?;
    for ((name, value), written) in netlist.settings().iter().zip(settings) {
        netlist
            .circuit()
            .check_override(name, value)
            .map_err(|fault| at_setting(written, fault))?;
    }
    netlist.check()?;
    Ok(netlist)
}

/// A name that is set more than once.
fn twice(set: &Settings) -> Option<&str> {
    let earlier = |k: usize, name: &String| set.iter().take(k).any(|(other, _)| other == name);
    set.iter()
        .enumerate()
        .find(|(k, (name, _))| earlier(*k, name))
        .map(|(_, (name, _))| name.as_str())
}

/// The let-values of a case, or those held where none is asked for.
pub fn case(netlist: &Netlist, number: Option<u32>) -> Result<Settings, Trouble> {
    let Some(number) = number else {
        return Ok(netlist.settings().clone());
    };
    let cases = netlist.cases()?;
    let index = usize::try_from(number)
        .unwrap_or(usize::MAX)
        .saturating_sub(1);
    let count = cases.len();
    let words = if count == 1 {
        "1 case".to_owned()
    } else {
        format!("{count} cases")
    };
    cases
        .into_iter()
        .nth(index)
        .ok_or_else(|| Trouble::Usage(format!("--case {number}: there {} {words}", is(count))))
}

const fn is(count: usize) -> &'static str {
    if count == 1 { "is" } else { "are" }
}

/// `load=75ohm`
fn setting(written: &str) -> Result<(String, LetValue), Trouble> {
    let Some((name, value)) = written.split_once('=') else {
        return Err(Trouble::Usage(format!(
            "--set {written}: a name, `=` and a value belong here (`load=75ohm`)"
        )));
    };
    let value = value.trim();
    match parse_value(value) {
        Ok(parsed) => Ok((name.trim().to_owned(), parsed)),
        Err(fault) => Err(Trouble::Mistakes(
            Source::new(value.as_bytes(), &called(name)).mistakes(vec![fault]),
        )),
    }
}

/// A fault of a setting that was read, placed on its value.
fn at_setting(written: &str, mut fault: Fault) -> Trouble {
    let (name, value) = written.split_once('=').unwrap_or((written, ""));
    let value = value.trim();
    fault.span = Span::new(0, u32::try_from(value.len()).unwrap_or(0));
    Trouble::Mistakes(Source::new(value.as_bytes(), &called(name)).mistakes(vec![fault]))
}

fn called(name: &str) -> String {
    format!("--set {}", name.trim())
}

/// The seconds of an option's value (`1us`).
pub fn seconds(option: &str, written: &str) -> Result<f64, Trouble> {
    let refused =
        |fault| Trouble::Mistakes(Source::new(written.as_bytes(), option).mistakes(vec![fault]));
    match parse_value(written).map_err(refused)? {
        LetValue::Number { value, dimension } if dimension == Dimension::SECOND => Ok(value),
        _ => Err(Trouble::Usage(format!(
            "{option} {written}: a time belongs here (`1us`)"
        ))),
    }
}

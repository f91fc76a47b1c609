//! The records of the example netlists fit the schemas that are kept beside the code, and their
//! pages fit 80 columns.

#![allow(clippy::unwrap_used, reason = "what serves tests only may stop them")]

#[path = "../../report/tests/schema/mod.rs"]
mod schema;

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

fn examples() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../netlists");
    let mut all: Vec<PathBuf> = std::fs::read_dir(folder)
        .unwrap()
        .map(|e| e.unwrap().path())
        .collect();
    all.retain(|path| path.extension().is_some_and(|e| e == "shot"));
    all.sort();
    all
}

fn run(verb: &str, path: &Path, more: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_pulsewright"))
        .arg(verb)
        .arg(path)
        .args(more)
        .output()
        .unwrap()
}

fn text(output: Output) -> String {
    String::from_utf8(output.stdout).unwrap()
}

#[test]
fn there_are_examples() {
    assert!(!examples().is_empty());
}

#[test]
fn records_fit_their_schemas() {
    for path in examples() {
        for (verb, file) in [
            ("fire", "pulsewright.fire-1.json"),
            ("judge", "pulsewright.judge-1.json"),
            ("modes", "pulsewright.modes-1.json"),
            ("methods", "pulsewright.methods-1.json"),
        ] {
            let output = run(verb, &path, &["--json"]);
            if output.status.code() == Some(2) {
                schema::check("pulsewright.mistakes-1.json", &text(output));
            } else {
                schema::check(file, &text(output));
            }
        }
    }
}

#[test]
fn records_of_studies_fit_their_schema() {
    let path = examples()
        .into_iter()
        .find(|p| p.ends_with("damped-sine.shot"))
        .unwrap();
    let whole = run("spread", &path, &["--shots", "2", "--json"]);
    schema::check("pulsewright.spread-1.json", &text(whole));
    let slice = run("spread", &path, &["--shots", "2", "--slice", "1/2"]);
    schema::check("pulsewright.slice-1.json", &text(slice));
}

#[test]
fn pages_fit_80_columns() {
    for path in examples() {
        for verb in ["list", "fire", "judge", "modes", "methods"] {
            for line in text(run(verb, &path, &[])).lines() {
                assert!(
                    line.chars().count() <= 80,
                    "{verb} {}: {line}",
                    path.display()
                );
            }
        }
    }
}

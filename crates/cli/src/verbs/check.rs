//! `check`: reads files and says what is wrong with them; fires nothing.

use super::deliver;
use crate::exit::Ending;
use crate::input;
use crate::say;
use crate::shell::{Shell, Talk};
use crate::trouble::Trouble;
use pulsewright::report::record;
use pulsewright::{Mistakes, Netlist};
use std::path::{Path, PathBuf};

/// Checks the files; of several endings the worst counts.
pub fn check(
    files: &[PathBuf],
    settings: &[String],
    json: bool,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let mut ending = Ending::Done;
    let (mut sound, mut lists): (Vec<String>, Vec<Mistakes>) = (Vec::new(), Vec::new());
    for file in files {
        match one(file, settings, shell) {
            Ok(netlist) => {
                if shell.talk >= Talk::Usual {
                    say::mistakes(shell, &netlist.remarks());
                }
                sound.push(summary(file, &netlist));
                lists.push(netlist.remarks());
            }
            Err(trouble) => {
                say::trouble(shell, &trouble);
                ending = ending.max(trouble.ending(shell.stop.came()));
                if let Trouble::Mistakes(mistakes) = trouble {
                    lists.push(mistakes);
                }
            }
        }
    }
    if json && ending < Ending::Broke {
        deliver(shell, record::text(&say::record(&lists)).as_bytes())?;
    } else if !json && !sound.is_empty() {
        deliver(shell, sound.concat().as_bytes())?;
    }
    Ok(ending)
}

fn one(file: &Path, settings: &[String], shell: &Shell) -> Result<Netlist, Trouble> {
    if shell.stop.came().is_some() {
        return Err(Trouble::Stopped(None));
    }
    input::netlist(file, settings, shell)
}

/// `stage.shot: no mistakes; 4 parts, 1 reading, 2 claims, 7 cases`
fn summary(file: &Path, netlist: &Netlist) -> String {
    let draft = netlist.circuit().draft();
    let cases = netlist.cases().map_or(1, |c| c.len());
    let counts = [
        (draft.parts.len(), "part"),
        (draft.readings.len(), "reading"),
        (draft.claims.len(), "claim"),
        (cases, "case"),
    ];
    let words: Vec<String> = counts.iter().map(|(n, word)| counted(*n, word)).collect();
    let title = draft
        .title
        .as_deref()
        .map(|t| format!(" ({t})"))
        .unwrap_or_default();
    format!(
        "{}{title}: no mistakes; {}\n",
        input::name(file),
        words.join(", ")
    )
}

fn counted(n: usize, word: &str) -> String {
    if n == 1 {
        format!("1 {word}")
    } else {
        format!("{n} {word}s")
    }
}

//! `report`: every case on one page, and a page against a fresh one.

use super::deliver;
use super::judge::every_case;
use super::watch::watched;
use crate::exit::Ending;
use crate::input;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::Options;
use pulsewright::report::page::{
    Difference, Extras, corners_section, modes_section, opinion_section, page, verify,
};
use std::path::Path;

/// Judges every case and writes the page, or compares it with one that was written.
pub fn report(
    file: &Path,
    settings: &[String],
    stamp: Option<String>,
    written: Option<&Path>,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let written = match written {
        Some(path) if path.as_os_str() == "-" && file.as_os_str() == "-" => {
            return Err(Trouble::Usage(
                "report --verify: the page and the netlist cannot both be standard input"
                    .to_owned(),
            ));
        }
        Some(path) => Some(input::bytes(path, shell)?),
        None => None,
    };
    let netlist = input::netlist(file, settings, shell)?;
    let judged = every_case(&netlist, true, shell)?;
    let modes = watched(shell, |hook| {
        netlist.modes(&Options {
            hook: Some(hook),
            ..Options::default()
        })
    });
    // Too many parts for modes leave the page without them; a signal leaves no page.
    if let Err(Trouble::Stopped(_)) = modes {
        return Err(Trouble::Stopped(None));
    }
    let extras = Extras {
        stamp,
        second_opinion: opinion_section(&judged),
        worst_corners: corners_section(&judged),
        modes: modes.ok().map(|m| modes_section(&m)),
        ..Extras::default()
    };
    let fresh = page(&judged, &netlist.origin(), &extras).map_err(Trouble::Broke)?;
    if let Some(written) = written {
        let written = String::from_utf8_lossy(&written);
        return compared(&verify(&written, &fresh), file, shell);
    }
    say::remarks(
        shell,
        &netlist,
        judged.cases.iter().flat_map(|c| &c.remarks),
    );
    deliver(shell, fresh.as_bytes())?;
    Ok(Ending::Done)
}

/// The most differences that are said.
const MOST: usize = 20;

fn compared(found: &[Difference], file: &Path, shell: &Shell) -> Result<Ending, Trouble> {
    let file = input::name(file);
    if found.is_empty() {
        deliver(
            shell,
            format!("the page is what {file} gives, byte for byte\n").as_bytes(),
        )?;
        return Ok(Ending::Done);
    }
    let mut text = format!("the page is not what {file} gives\n");
    for difference in found.iter().take(MOST) {
        text.push_str("  ");
        text.push_str(match difference {
            Difference::NoRecord => "it holds no record of a judged netlist",
            Difference::Record(words) => words,
            Difference::Page => {
                "its record agrees within the bounds, but the page is not as it was written: it was \
                 changed, stamped otherwise, or written by another build"
            }
            _ => "in a way that this command has no words for",
        });
        text.push('\n');
    }
    if found.len() > MOST {
        text.push_str(&format!("  and {} more\n", found.len() - MOST));
    }
    deliver(shell, text.as_bytes())?;
    Ok(Ending::Fails)
}

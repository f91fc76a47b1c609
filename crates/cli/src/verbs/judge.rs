//! `judge`: every case, each claim with its verdict.

use super::deliver;
use super::fire::details;
use super::watch::watched;
use crate::exit::Ending;
use crate::input;
use crate::output::Target;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::report::{record, table};
use pulsewright::{Judged, Netlist, Options};
use std::path::Path;

/// Fires and judges every case until the last, or until a signal comes; on request with the stress
/// on every part.
pub fn every_case(netlist: &Netlist, stress: bool, shell: &Shell) -> Result<Judged, Trouble> {
    if netlist.circuit().draft().claims.is_empty() {
        return Err(Trouble::Mistakes(netlist.nothing_to_judge()));
    }
    let judged = watched(shell, |hook| {
        netlist.judge(&Options {
            stress,
            hook: Some(hook),
            ..netlist.options()
        })
    })?;
    judged.cases.iter().for_each(|fired| details(shell, fired));
    Ok(judged)
}

/// Judges every case and shows the verdicts.
pub fn judge(
    file: &Path,
    settings: &[String],
    json: bool,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let netlist = input::netlist(file, settings, shell)?;
    let judged = every_case(&netlist, false, shell)?;
    let origin = netlist.origin();
    let text = if json {
        record::text(&record::judge(&judged, &origin))
    } else {
        table::judge(&judged, &origin, shell.look)
    };
    if json || shell.target != Target::Standard {
        say::remarks(
            shell,
            &netlist,
            judged.cases.iter().flat_map(|c| &c.remarks),
        );
    }
    deliver(shell, text.as_bytes())?;
    Ok(Ending::of(judged.claims.iter().map(|c| c.verdict)))
}

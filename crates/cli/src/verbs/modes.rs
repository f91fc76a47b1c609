//! `modes`: natural frequencies and damping in each topology that a shot passes through.

use super::deliver;
use super::fire::positions;
use super::watch::watched;
use crate::args::Which;
use crate::exit::Ending;
use crate::input;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::Options;
use pulsewright::report::{record, table};
use std::path::Path;

/// Fires one shot and shows the modes of its topologies.
pub fn modes(
    file: &Path,
    settings: &[String],
    which: &Which,
    json: bool,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let netlist = input::netlist(file, settings, shell)?;
    let held = input::case(&netlist, which.case.case)?;
    let at = positions(&netlist, &held, which, shell)?;
    let found = watched(shell, |hook| {
        netlist.modes(&Options {
            held,
            at,
            hook: Some(hook),
            ..Options::default()
        })
    })?;
    let origin = netlist.origin();
    let text = if json {
        record::text(&record::modes(&found, &origin))
    } else {
        table::modes(&found, &origin, shell.look)
    };
    deliver(shell, text.as_bytes())?;
    Ok(Ending::Done)
}

//! `table`: cases by readings as CSV.

use super::deliver;
use super::watch::watched;
use crate::exit::Ending;
use crate::input;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::Options;
use pulsewright::report::cases;
use std::path::Path;

/// Fires every case at nominal values and writes its readings.
pub fn table(file: &Path, settings: &[String], shell: &Shell) -> Result<Ending, Trouble> {
    let netlist = input::netlist(file, settings, shell)?;
    let draft = netlist.circuit().draft();
    if draft.readings.is_empty() && draft.claims.is_empty() {
        return Err(Trouble::Usage(
            "there is nothing to tabulate: the netlist has neither readings nor claims".to_owned(),
        ));
    }
    let fired = watched(shell, |hook| {
        netlist.fire_cases(&Options {
            hook: Some(hook),
            ..netlist.options()
        })
    })?;
    say::remarks(shell, &netlist, fired.iter().flat_map(|c| &c.remarks));
    let mut bytes = Vec::new();
    cases::cases(&fired, &mut bytes)
        .map_err(|e| Trouble::Broke(format!("cannot write the table: {}", input::why(&e))))?;
    deliver(shell, &bytes)?;
    Ok(Ending::Done)
}

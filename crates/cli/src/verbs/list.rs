//! `list`: the circuit as it was understood.

use super::deliver;
use crate::exit::Ending;
use crate::input;
use crate::say;
use crate::shell::{Shell, Talk};
use crate::trouble::Trouble;
use pulsewright::report::table;
use std::path::Path;

/// Lists a circuit, with the numbers of one case.
pub fn list(
    file: &Path,
    settings: &[String],
    case: Option<u32>,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let netlist = input::netlist(file, settings, shell)?;
    let set = input::case(&netlist, case)?;
    let lets = netlist.lets(&set)?;
    let cases = netlist.cases()?.len();
    if shell.talk >= Talk::Usual {
        say::mistakes(shell, &netlist.remarks());
    }
    deliver(
        shell,
        table::list(netlist.circuit(), &lets, cases, shell.look).as_bytes(),
    )?;
    Ok(Ending::Done)
}

//! `chart`: the channels as SVG.

use super::deliver;
use super::fire::shot;
use crate::args::Which;
use crate::exit::Ending;
use crate::input;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::report::number::quantity;
use pulsewright::report::plot::{Plot, svg};
use pulsewright::report::table::titled;
use std::path::Path;

/// Fires one shot and draws its channels.
pub fn chart(
    file: &Path,
    settings: &[String],
    which: &Which,
    between: Option<&[String]>,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let between = between.map(interval).transpose()?;
    let netlist = input::netlist(file, settings, shell)?;
    let fired = shot(&netlist, which, false, shell)?;
    say::remarks(shell, &netlist, &fired.remarks);
    let plot = match between {
        None => Plot::whole(&fired),
        Some((from, to)) => {
            Plot::between(&fired, from, to).ok_or_else(|| outside(from, to, fired.span))?
        }
    };
    let title = titled(netlist.origin().title, &fired.set);
    deliver(shell, svg(&plot, &title).as_bytes())?;
    Ok(Ending::Done)
}

fn interval(written: &[String]) -> Result<(f64, f64), Trouble> {
    match written {
        [from, to] => Ok((
            input::seconds("--between", from)?,
            input::seconds("--between", to)?,
        )),
        _ => Err(Trouble::Usage(
            "--between: two times belong here (`--between 0s 20us`)".to_owned(),
        )),
    }
}

fn outside(from: f64, to: f64, span: f64) -> Trouble {
    let [from, to, span] = [from, to, span].map(|t| quantity(t, "s"));
    Trouble::Usage(format!(
        "--between {from} and {to}: the first time must be before the second, and both within the \
         span of {span}"
    ))
}

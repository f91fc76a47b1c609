//! `waveform`: the channels as CSV.

use super::deliver;
use super::fire::shot;
use crate::args::Which;
use crate::exit::Ending;
use crate::input;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::report::number::quantity;
use pulsewright::report::waveform::{self, Raster};
use std::path::Path;

/// Fires one shot and writes its channels.
pub fn waveform(
    file: &Path,
    settings: &[String],
    which: &Which,
    every: Option<&str>,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let every = every
        .map(|written| input::seconds("--every", written))
        .transpose()?;
    let netlist = input::netlist(file, settings, shell)?;
    let fired = shot(&netlist, which, false, shell)?;
    say::remarks(shell, &netlist, &fired.remarks);
    let mut bytes = Vec::new();
    let written = match every {
        None => waveform::at_steps(&fired.channels, &mut bytes),
        Some(interval) => {
            waveform::check_interval(interval, fired.span)
                .map_err(|raster| refused(raster, fired.span))?;
            waveform::every(&fired.channels, interval, &mut bytes)
        }
    };
    written
        .map_err(|e| Trouble::Broke(format!("cannot write the channels: {}", input::why(&e))))?;
    deliver(shell, &bytes)?;
    Ok(Ending::Done)
}

fn refused(raster: Raster, span: f64) -> Trouble {
    Trouble::Usage(match raster {
        Raster::NotPositive(interval) => {
            format!("--every {}: it must be above 0 s", quantity(interval, "s"))
        }
        Raster::TooFine(interval) => {
            format!(
                "--every {}: that is more than 100 million rows in {}",
                quantity(interval, "s"),
                quantity(span, "s")
            )
        }
    })
}

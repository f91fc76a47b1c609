//! `methods`: the integrators on one case, error against work.

use super::watch::watched;
use super::{deliver, deliver_to};
use crate::exit::Ending;
use crate::input;
use crate::output::Target;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::report::number::quantity;
use pulsewright::report::{record, table, work_precision};
use pulsewright::{Options, Rungs};
use std::path::Path;
use std::time::Instant;

/// In which form the comparison is shown, and over which steps.
#[derive(Clone, Copy, Debug)]
pub struct Form<'a> {
    /// A record in place of tables.
    pub json: bool,
    /// Where the plot goes.
    pub svg: Option<&'a Path>,
    /// The largest step as written.
    pub step: Option<&'a str>,
    /// How often it is halved.
    pub halvings: Option<u32>,
}

/// Compares the integrators and shows their errors, with a plot where one is asked for.
pub fn methods(
    file: &Path,
    settings: &[String],
    case: Option<u32>,
    form: Form<'_>,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let largest = form.step.map(step).transpose()?;
    let netlist = input::netlist(file, settings, shell)?;
    let held = input::case(&netlist, case)?;
    let start = Instant::now();
    let clock = || start.elapsed().as_secs_f64();
    let found = watched(shell, |hook| {
        let options = Options {
            held,
            hook: Some(hook),
            ..Options::default()
        };
        let rungs = Rungs {
            largest,
            halvings: form.halvings,
            clock: Some(&clock),
        };
        netlist.methods(&options, &rungs)
    })?;
    let origin = netlist.origin();
    let text = if form.json {
        record::text(&record::methods(&found, &origin))
    } else {
        table::methods(&found, &origin, shell.look)
    };
    if let Some(path) = form.svg {
        let plot = work_precision::work_precision(&found, &origin);
        let target = Target::of(Some(path));
        deliver_to(&target, shell, plot.as_bytes())?;
        if target == shell.target {
            return Ok(Ending::Done);
        }
    }
    deliver(shell, text.as_bytes())?;
    Ok(Ending::Done)
}

/// The seconds of `--step`.
fn step(written: &str) -> Result<f64, Trouble> {
    let seconds = input::seconds("--step", written)?;
    if seconds > 0.0 {
        Ok(seconds)
    } else {
        Err(Trouble::Usage(format!(
            "--step {}: it must be above 0 s",
            quantity(seconds, "s")
        )))
    }
}

//! `fire`: one shot.

use super::deliver;
use super::watch::watched;
use crate::exit::Ending;
use crate::input;
use crate::output::Target;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::report::number::{brief, quantity};
use pulsewright::report::plot::{Plot, terminal};
use pulsewright::report::{record, table};
use pulsewright::{Fired, Netlist, Options, Settings};
use std::path::Path;

/// In which form a shot is shown, and whether its claims decide the exit code.
#[derive(Clone, Copy, Debug)]
pub struct Form {
    /// A record in place of tables.
    pub json: bool,
    /// Claims decide the exit code.
    pub strict: bool,
}

/// Fires one shot and shows it.
pub fn fire(
    file: &Path,
    settings: &[String],
    case: Option<u32>,
    form: Form,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let netlist = input::netlist(file, settings, shell)?;
    let fired = shot(&netlist, &input::case(&netlist, case)?, true, shell)?;
    let origin = netlist.origin();
    let text = if form.json {
        record::text(&record::fire(&fired, &origin))
    } else {
        let picture = shell
            .ink
            .map(|ink| terminal(&Plot::whole(&fired), shell.look, ink));
        table::fire_with(&fired, &origin, shell.look, &picture.unwrap_or_default())
    };
    if form.json || shell.target != Target::Standard {
        say::remarks(shell, &netlist, &fired.remarks);
    }
    deliver(shell, text.as_bytes())?;
    Ok(if form.strict {
        Ending::of(fired.claims.iter().map(|c| c.verdict))
    } else {
        Ending::Done
    })
}

/// Fires one shot with these let-values, until it ends or a signal comes; on request with the
/// stress on every part.
pub fn shot(
    netlist: &Netlist,
    set: &Settings,
    stress: bool,
    shell: &Shell,
) -> Result<Fired, Trouble> {
    let fired = watched(shell, |hook| {
        netlist.fire(&Options {
            held: set.clone(),
            stress,
            hook: Some(hook),
            ..Options::default()
        })
    })?;
    details(shell, &fired);
    Ok(fired)
}

/// What `-v` says of a shot.
pub fn details(shell: &Shell, fired: &Fired) {
    let [least, most] =
        [fired.shot.smallest_step, fired.shot.largest_step].map(|h| brief(h, "s", 3));
    say::detail(
        shell,
        &format!(
            "{} by {}: {} unknowns, {} steps of {least} to {most}, {} stretches, {} events",
            quantity(fired.span, "s"),
            fired.method,
            fired.shot.unknowns,
            fired.shot.steps,
            fired.shot.stretches.len(),
            fired.events.len()
        ),
    );
}

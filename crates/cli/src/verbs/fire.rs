//! `fire`: one shot.

use super::deliver;
use super::watch::watched;
use crate::args::Which;
use crate::exit::Ending;
use crate::input;
use crate::output::Target;
use crate::say;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::circuit::Positions;
use pulsewright::report::number::{brief, quantity};
use pulsewright::report::plot::{Plot, terminal};
use pulsewright::report::{record, table};
use pulsewright::study::spread::draw;
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
    which: &Which,
    form: Form,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let netlist = input::netlist(file, settings, shell)?;
    let fired = shot(&netlist, which, true, shell)?;
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

/// Fires the shot that is asked for, until it ends or a signal comes; on request with the stress
/// on every part.
pub fn shot(
    netlist: &Netlist,
    which: &Which,
    stress: bool,
    shell: &Shell,
) -> Result<Fired, Trouble> {
    let set = input::case(netlist, which.case.case)?;
    let at = positions(netlist, &set, which, shell)?;
    let fired = watched(shell, |hook| {
        netlist.fire(&Options {
            held: set,
            at,
            stress,
            hook: Some(hook),
            ..Options::default()
        })
    })?;
    details(shell, &fired);
    Ok(fired)
}

/// Where the values stand in the shot that is asked for.
pub(super) fn positions(
    netlist: &Netlist,
    set: &Settings,
    which: &Which,
    shell: &Shell,
) -> Result<Positions, Trouble> {
    let varies = !netlist.circuit().varying().is_empty();
    match (&which.corner, which.draw) {
        (None, None) => Ok(Positions::nominal()),
        _ if !varies => Err(Trouble::Usage(
            "there is neither draw nor corner: no value of the netlist has a spread".to_owned(),
        )),
        (None, Some(k)) => Ok(draw(netlist.circuit(), which.seed.seed, k)),
        (Some(claim), _) => {
            let claims = &netlist.circuit().draft().claims;
            if !claims.iter().any(|c| c.name.text == *claim) {
                let all: Vec<&str> = claims.iter().map(|c| c.name.text.as_str()).collect();
                return Err(Trouble::Usage(format!(
                    "--corner {claim}: there is no such claim; the claims are {}",
                    all.join(", ")
                )));
            }
            let found = watched(shell, |hook| {
                let options = Options {
                    held: set.clone(),
                    hook: Some(hook),
                    ..Options::default()
                };
                netlist.corner(&options, claim)
            })?;
            found.map(|worst| worst.positions).ok_or_else(|| {
                Trouble::Usage(format!("--corner {claim}: the claim does not apply there"))
            })
        }
    }
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

//! `spread`: draws over the tolerances, in every case.

use super::deliver;
use super::watch::{Unit, watched_by};
use crate::exit::Ending;
use crate::input;
use crate::shell::Shell;
use crate::trouble::Trouble;
use pulsewright::Options;
use pulsewright::report::{Origin, record, table};
use pulsewright::study::spread::{Draws, Spread};
use std::path::Path;

/// The draws that the options ask for; `slice` is `I/N`.
pub fn draws(
    shots: u64,
    seed: u64,
    slice: Option<&str>,
    threads: Option<u32>,
) -> Result<Draws, Trouble> {
    Ok(Draws {
        shots,
        seed,
        slice: slice.map_or(Ok([0, 0]), part)?,
        threads: threads.and_then(|n| usize::try_from(n).ok()),
    })
}

/// `3/7`
fn part(written: &str) -> Result<[u64; 2], Trouble> {
    let numbers = written.split_once('/').and_then(|(at, of)| {
        let number = |s: &str| s.trim().parse::<u64>().ok();
        Some([number(at)?, number(of)?])
    });
    match numbers {
        Some([at, of]) if at >= 1 && at <= of => Ok([at, of]),
        _ => Err(Trouble::Usage(format!(
            "--slice {written}: which of how many slices belongs here (`3/7`)"
        ))),
    }
}

/// Fires the draws and shows what they say; of a slice its record, for `merge`.
pub fn spread(
    file: &Path,
    settings: &[String],
    draws: Draws,
    json: bool,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let netlist = input::netlist(file, settings, shell)?;
    let is_slice = draws.slice != [0, 0];
    let draws = Draws {
        slice: if is_slice { draws.slice } else { [1, 1] },
        ..draws
    };
    let tally = watched_by(shell, Unit::Shot, |hook| {
        let options = Options {
            hook: Some(hook),
            ..netlist.options()
        };
        netlist.spread(&options, draws)
    })?;
    let origin = netlist.origin();
    if is_slice {
        let text = record::slice_text(&record::slice(&tally, &origin));
        deliver(shell, text.as_bytes())?;
        return Ok(Ending::Done);
    }
    shown(&Spread::from(tally), &origin, json, shell)
}

/// Shows a whole study, and ends with its verdicts.
pub fn shown(
    spread: &Spread,
    origin: &Origin<'_>,
    json: bool,
    shell: &Shell,
) -> Result<Ending, Trouble> {
    let text = if json {
        record::text(&record::spread(spread, origin))
    } else {
        table::spread(spread, origin, shell.look)
    };
    deliver(shell, text.as_bytes())?;
    Ok(Ending::of(spread.claims.iter().map(|(_, v)| *v)))
}

//! The page of the natural frequencies.
//!
//! ```text
//! 1 µs to 50 ms: fire closed
//!   kind         time constant  frequency  damping  energy
//!   underdamped       949.2 µs   134.5 Hz   0.7810  bank 50 %, choke 50 %
//! ```
//!
//! A natural frequency is `-1 / time constant ± 2πj frequency`. A topology that comes again is not
//! listed again.

use super::fire::{defaults, opening};
use super::{Align, Cell, Grid, set_in_words};
use crate::look::{Look, Tone, paragraph};
use crate::number::{brief, quantity};
use crate::record::Origin;
use pulsewright_engine::modes::{Kind, NaturalMode};
use pulsewright_study::{Modes, TopologyModes};

/// Significant digits.
const DIGITS: i32 = 5;
/// Parts named beside a mode at most.
const PARTS: usize = 4;
/// A share that is named.
const SHARE: f64 = 0.005;

/// What `modes` prints: for each topology a table of its modes.
#[must_use]
pub fn modes(modes: &Modes, origin: &Origin<'_>, look: Look) -> String {
    let mut out = String::new();
    let run = format!("{} by {}", quantity(modes.span, "s"), modes.method);
    opening(&mut out, look, origin, &run);
    if !modes.set.is_empty() {
        let set = format!("with {}", set_in_words(&modes.set));
        paragraph(&mut out, look, 0, &set, Tone::Plain);
    }
    for (k, one) in modes.topologies.iter().enumerate() {
        let before = modes.topologies.iter().take(k);
        let known = before.into_iter().find(|t| t.states == one.states);
        topology(&mut out, look, one, known, &modes.parts);
    }
    defaults(&mut out, look, &modes.defaults);
    out
}

fn topology(
    out: &mut String,
    look: Look,
    topology: &TopologyModes,
    known: Option<&TopologyModes>,
    parts: &[String],
) {
    out.push('\n');
    paragraph(out, look, 0, &title(topology), Tone::Heading);
    if let Some(known) = known {
        let text = format!("the modes are those from {} on", time(known.from));
        return paragraph(out, look, 2, &text, Tone::Plain);
    }
    if topology.modes.is_empty() {
        let text = "no part holds energy of its own: there are no modes";
        return paragraph(out, look, 2, text, Tone::Plain);
    }
    table(&topology.modes, parts).write(out, look);
    for mode in topology.modes.iter().filter(|m| m.kind == Kind::Holds) {
        paragraph(out, look, 2, &held(mode, parts), Tone::Plain);
    }
}

/// A row a mode; a column that all modes leave empty is left out.
fn table(modes: &[NaturalMode], parts: &[String]) -> Grid {
    type Number = fn(&NaturalMode) -> Option<f64>;
    let numbers: [(&str, Number, &str); 3] = [
        ("time constant", NaturalMode::time_constant, "s"),
        ("frequency", NaturalMode::frequency, "Hz"),
        ("damping", |m| m.damping_ratio, ""),
    ];
    let used: Vec<_> = numbers
        .into_iter()
        .filter(|(_, of, _)| modes.iter().any(|m| of(m).is_some()))
        .collect();
    let mut columns = vec![Align::Left];
    columns.extend(used.iter().map(|_| Align::Point));
    columns.push(Align::Text);
    let heads = used.iter().map(|(head, ..)| *head);
    let mut grid = Grid::new(columns).headed(["kind"].into_iter().chain(heads).chain(["energy"]));
    for mode in modes {
        let mut row = vec![Cell::from(mode.kind.words())];
        row.extend(used.iter().map(|(_, of, unit)| {
            of(mode).map_or_else(Cell::default, |x| brief(x, unit, DIGITS).into())
        }));
        row.push(energy(mode, parts).into());
        grid.row(row);
    }
    grid
}

/// `1 µs to 50 ms: fire closed`
pub(crate) fn title(topology: &TopologyModes) -> String {
    let times = format!("{} to {}", time(topology.from), time(topology.to));
    let states: Vec<String> = topology
        .states
        .iter()
        .map(|(part, state)| format!("{part} {state}"))
        .collect();
    if states.is_empty() {
        times
    } else {
        format!("{times}: {}", states.join(", "))
    }
}

fn time(t: f64) -> String {
    brief(t, "s", 6)
}

/// The parts with the greatest shares first, the small ones together.
fn shares<'a>(mode: &NaturalMode, parts: &'a [String]) -> Vec<(&'a str, f64)> {
    let mut all = mode.energy.clone();
    // Equal but for rounding is equal: the order of the parts then decides.
    all.sort_by(|a, b| (1e6 * b.1).round().total_cmp(&(1e6 * a.1).round()));
    all.into_iter()
        .filter(|(_, share)| *share >= SHARE)
        .map(|(part, share)| (parts.get(part).map_or("", String::as_str), share))
        .collect()
}

/// `bank 50 %, choke 50 %`
pub(crate) fn energy(mode: &NaturalMode, parts: &[String]) -> String {
    let all = shares(mode, parts);
    let percent = |share: f64| format!("{} %", brief(100.0 * share, "", 3));
    // One part too many is named as well: it takes no more room than `1 other`.
    let named = if all.len() <= PARTS + 1 {
        all.len()
    } else {
        PARTS
    };
    let (named, rest) = all.split_at(named);
    let mut words: Vec<String> = named
        .iter()
        .map(|(name, share)| format!("{name} {}", percent(*share)))
        .collect();
    if !rest.is_empty() {
        let sum = rest.iter().map(|r| r.1).sum();
        words.push(format!("{} others {}", rest.len(), percent(sum)));
    }
    words.join(", ")
}

/// What a mode that holds means.
pub(crate) fn held(mode: &NaturalMode, parts: &[String]) -> String {
    let names: Vec<&str> = shares(mode, parts).iter().map(|s| s.0).collect();
    let (names, keep) = match names.as_slice() {
        [] => (String::new(), "keeps its"),
        [one] => ((*one).to_owned(), "keeps its"),
        [init @ .., last] if names.len() <= PARTS => {
            (format!("{} and {last}", init.join(", ")), "keep their")
        }
        [first, rest @ ..] => (format!("{first} and {} others", rest.len()), "keep their"),
    };
    if mode.electric > 0.5 {
        format!("holds: {names} {keep} charge, which has no way to flow off")
    } else {
        format!("holds: {names} {keep} current, which nothing brakes")
    }
}

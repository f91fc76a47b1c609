//! What each part had to stand: largest values with their instants, and totals.

use super::{Align, Cell, Grid};
use crate::look::{Look, Tone, heading};
use crate::number::brief;
use pulsewright_study::outcome::{Extreme, Stress};

/// Significant digits: enough to choose a part by. The record has all.
const DIGITS: i32 = 4;

/// Adds the stress on each part.
pub(super) fn stress(out: &mut String, look: Look, stress: &[Stress]) {
    if stress.is_empty() {
        return;
    }
    heading(out, look, "stress: largest values and when", Tone::Heading);
    let mut grid = Grid::new([
        Align::Left,
        Align::Point,
        Align::Point,
        Align::Point,
        Align::Point,
        Align::Point,
        Align::Point,
    ])
    .headed(["part", "voltage", "at", "current", "at", "power", "at"]);
    for s in stress {
        let [v, vt] = extreme(s.voltage.as_ref(), "V");
        let [i, it] = extreme(s.current.as_ref(), "A");
        let [p, pt] = extreme(s.power.as_ref(), "W");
        grid.row([s.part.as_str().into(), v, vt, i, it, p, pt]);
    }
    grid.write(out, look);
    heading(out, look, "stress: over the span", Tone::Heading);
    let mut grid =
        Grid::new([Align::Left, Align::Point, Align::Point]).headed(["part", "energy", "action"]);
    for s in stress {
        grid.row([
            s.part.as_str().into(),
            total(s.energy, "J"),
            total(s.action, "A²*s"),
        ]);
    }
    grid.write(out, look);
}

fn extreme(extreme: Option<&Extreme>, unit: &str) -> [Cell; 2] {
    let Some(extreme) = extreme else {
        return [Cell::default(), Cell::default()];
    };
    [
        total(Some((extreme.value, extreme.bound)), unit),
        brief(extreme.time, "s", DIGITS).into(),
    ]
}

fn total(total: Option<(f64, f64)>, unit: &str) -> Cell {
    match total {
        None => Cell::default(),
        Some((value, bound)) if value.is_finite() && bound.is_finite() => {
            brief(value, unit, DIGITS).into()
        }
        Some(_) => Cell::toned("unbounded", Tone::Open),
    }
}

//! The event log of a shot: instant, part, change, and what the instant cost.

use super::{Align, Cell, Grid, bound_cell};
use crate::look::{Look, Tone, heading};
use crate::number::{Scale, brief};
use pulsewright_study::outcome::Fired;

/// Significant digits of charges, fluxes and losses.
const DIGITS: i32 = 5;

/// Adds the event log.
pub(super) fn events(out: &mut String, look: Look, fired: &Fired) {
    if fired.events.is_empty() {
        return;
    }
    heading(out, look, "events", Tone::Heading);
    let mut grid = Grid::new([
        Align::Point,
        Align::Left,
        Align::Left,
        Align::Left,
        Align::Text,
    ]);
    for (k, (event, bound)) in fired.events.iter().enumerate() {
        let time = Scale::of("s", [event.time, *bound]).show(event.time, Some(*bound));
        let part = fired.parts.get(event.part).map_or("", String::as_str);
        let change = fired.changes.get(k).map_or("", String::as_str);
        let cost = [
            ("charge", event.charge, "C"),
            ("flux", event.flux, "Wb"),
            ("lost", event.loss, "J"),
        ];
        let cost: Vec<String> = cost
            .iter()
            .filter(|c| c.1 != 0.0)
            .map(|(word, x, unit)| format!("{word} {}", brief(*x, unit, DIGITS)))
            .collect();
        grid.row([
            time.into(),
            bound_cell(*bound, "s"),
            part.into(),
            change.into(),
            Cell::from(cost.join(", ")),
        ]);
    }
    grid.write(out, look);
}

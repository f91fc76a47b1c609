//! Plots: channels as panels of one quantity each over a common time axis.
//!
//! ```text
//! Fired -> Plot            which channels share a panel, what is marked, from when to when
//!            -> svg        a picture for files and pages
//!            -> terminal   dots in a grid of characters
//! ```
//!
//! `scale` maps values to places and finds round ticks, `curve` reads a channel between its points
//! and thins it to what a picture of that width can show. Nothing is computed that a reader could
//! take for a result: crests, instants, limits and windows were found earlier.

mod curve;
mod scale;
mod svg;
mod terminal;

pub use curve::{Trace, knots, thinned, value_at};
pub use scale::{Axis, Tick};
pub(crate) use svg::escaped;
#[cfg(feature = "html")]
pub(crate) use svg::short;
pub use svg::{Figure, SHEET, figure, svg};
pub use terminal::{Ink, terminal};

use crate::number::printed;
use pulsewright_study::outcome::{Channel, Fired};

/// What is plotted: one shot, from one instant to another.
#[derive(Clone, Copy, Debug)]
pub struct Plot<'a> {
    /// The shot.
    pub fired: &'a Fired,
    /// First instant shown, s.
    pub from: f64,
    /// Last instant shown, s; after the first.
    pub to: f64,
}

impl<'a> Plot<'a> {
    /// The whole span of a shot.
    #[must_use]
    pub fn whole(fired: &'a Fired) -> Self {
        Plot {
            fired,
            from: 0.0,
            to: fired.span,
        }
    }

    /// A part of it, in seconds; `None` where it is empty or reaches beyond the span.
    #[must_use]
    pub fn between(fired: &'a Fired, from: f64, to: f64) -> Option<Self> {
        let inside = from >= 0.0 && from < to && to <= fired.span * (1.0 + 1e-12);
        inside.then_some(Plot { fired, from, to })
    }

    /// Whether an instant is shown.
    fn shows(&self, time: f64) -> bool {
        time >= self.from && time <= self.to
    }

    /// The channels by quantity, in the order in which the quantities first appear.
    fn panels(&self) -> Vec<Panel<'a>> {
        let mut panels: Vec<Panel<'a>> = Vec::new();
        let drawn = self.fired.channels.iter().filter(|c| c.times.len() > 1);
        for (index, channel) in drawn.enumerate() {
            let member = (index, channel);
            match panels.iter_mut().find(|p| p.unit == channel.unit) {
                Some(panel) => panel.channels.push(member),
                None => panels.push(Panel {
                    unit: &channel.unit,
                    channels: vec![member],
                }),
            }
        }
        panels
    }
}

/// The channels of one quantity.
struct Panel<'a> {
    unit: &'a str,
    /// With their place among all channels, which decides colour and dashes.
    channels: Vec<(usize, &'a Channel)>,
}

/// The quantity that a unit measures, in a word, for the title of an axis.
fn quantity_of(unit: &str) -> String {
    match unit {
        "V" => "voltage".to_owned(),
        "A" => "current".to_owned(),
        "W" => "power".to_owned(),
        "J" => "energy".to_owned(),
        "C" => "charge".to_owned(),
        "Wb" | "V*s" => "flux".to_owned(),
        "ohm" => "resistance".to_owned(),
        "" => "ratio".to_owned(),
        other => printed(other),
    }
}

/// The events shown: instant in s, and what happened in words; those at one instant together.
fn events(plot: &Plot<'_>) -> Vec<(f64, String)> {
    let mut found: Vec<(f64, String)> = Vec::new();
    for (k, (event, _)) in plot.fired.events.iter().enumerate() {
        if !plot.shows(event.time) {
            continue;
        }
        let part = plot.fired.parts.get(event.part).map_or("?", String::as_str);
        let change = plot.fired.changes.get(k).map_or("", String::as_str);
        let words = format!("{part} {change}");
        match found.last_mut() {
            Some((time, all)) if *time == event.time => {
                all.push_str(", ");
                all.push_str(&words);
            }
            _ => found.push((event.time, words)),
        }
    }
    found
}

//! Sections that come of results of their own: the second opinion, the modes.

use super::view::{Cell, Section, Table};
use crate::number::brief;
use crate::table::{energy_in_words, held_in_words, opinion_in_words, topology_title};
use pulsewright_engine::modes::Kind;
use pulsewright_study::outcome::Judged;
use pulsewright_study::{Modes, TopologyModes};

/// Significant digits of a mode's numbers.
const DIGITS: i32 = 5;

/// What another method says of all cases; nothing where none was asked.
#[must_use]
pub fn opinion_section(judged: &Judged) -> Option<Section> {
    let paragraphs = opinion_in_words(&judged.cases);
    (!paragraphs.is_empty()).then(|| Section {
        heading: "Second opinion".to_owned(),
        paragraphs,
        table: None,
    })
}

/// Natural frequencies and damping at nominal values, each topology once.
#[must_use]
pub fn modes_section(modes: &Modes) -> Section {
    let mut section = Section {
        heading: "Natural frequencies and damping".to_owned(),
        ..Section::default()
    };
    let mut table = Table {
        caption: "Modes of each topology that the shot passes through".to_owned(),
        head: [
            "while",
            "kind",
            "time constant",
            "frequency",
            "damping",
            "energy",
        ]
        .map(str::to_owned)
        .to_vec(),
        rows: Vec::new(),
    };
    let mut seen: Vec<&TopologyModes> = Vec::new();
    for one in &modes.topologies {
        if seen.iter().any(|t| t.states == one.states) {
            continue;
        }
        seen.push(one);
        for mode in &one.modes {
            if mode.kind == Kind::Holds {
                section.paragraphs.push(format!(
                    "{}: {}",
                    topology_title(one),
                    held_in_words(mode, &modes.parts)
                ));
            }
            let number = |x: Option<f64>, unit: &str| {
                Cell::number(x.map_or_else(String::new, |x| brief(x, unit, DIGITS)))
            };
            table.rows.push(vec![
                Cell::text(topology_title(one)),
                Cell::text(mode.kind.words().to_owned()),
                number(mode.time_constant(), "s"),
                number(mode.frequency(), "Hz"),
                number(mode.damping_ratio, ""),
                Cell::text(energy_in_words(mode, &modes.parts)),
            ]);
        }
    }
    section.table = Some(table);
    section
}

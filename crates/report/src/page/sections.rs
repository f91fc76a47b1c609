//! Sections that come of results of their own: the second opinion, the worst corners, the modes.

use super::view::{Cell, Section, Table};
use crate::number::{brief, with_bound};
use crate::record::unit_of;
use crate::table::{
    energy_in_words, held_in_words, opinion_in_words, stands_in_words, topology_title,
};
use pulsewright_engine::modes::Kind;
use pulsewright_study::outcome::{Found, Judged};
use pulsewright_study::{Modes, TopologyModes};

/// Significant digits of a mode's numbers.
const DIGITS: i32 = 5;
/// The same of a margin.
const MARGIN_DIGITS: i32 = 6;

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

/// Every claim at its worst corner in every case; nothing where no value has a spread.
#[must_use]
pub fn corners_section(judged: &Judged) -> Option<Section> {
    let mut rows = Vec::new();
    for (n, case) in judged.worst.iter().enumerate() {
        for worst in case.iter().flatten() {
            let claim = &worst.claim;
            let unit = unit_of(&claim.answer, &claim.text);
            let value = match &claim.answer.found {
                Found::Value { value, bound } => Cell::number(with_bound(*value, *bound, &unit)),
                Found::Absent(why) | Found::Unbounded(why) | Found::Floating(why) => {
                    Cell::text(why.clone())
                }
            };
            let margin = claim.margin.map(|m| brief(m, &unit, MARGIN_DIGITS));
            rows.push(vec![
                Cell::text(claim.name.clone()),
                Cell::text((n + 1).to_string()),
                value,
                Cell::number(margin.unwrap_or_default()),
                Cell::verdict(claim.verdict),
                Cell::text(stands_in_words(&worst.corner)),
            ]);
        }
    }
    rows.sort_by_key(|row| row.first().map(|name| claim_order(judged, &name.text)));
    (!rows.is_empty()).then(|| Section {
        heading: "Worst corners".to_owned(),
        paragraphs: vec![
            "Each claim where its margin is least over the tolerances, found there as the nominal cases are."
                .to_owned(),
        ],
        table: Some(Table {
            caption: "Claims at their worst corners, by case".to_owned(),
            head: ["claim", "case", "value", "margin", "verdict", "at"]
                .map(str::to_owned)
                .to_vec(),
            rows,
        }),
    })
}

fn claim_order(judged: &Judged, name: &str) -> usize {
    let mut names = judged.claims.iter();
    names.position(|c| c.name == name).unwrap_or(usize::MAX)
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

//! Tables for people: what a verb prints where no record is asked for.
//!
//! Each page is a pure function of a result and a [`Look`]. Everything fits the
//! width: columns stand side by side where they fit, and one under the other where not, a
//! value and its unit always together.

mod balance;
mod claims;
mod events;
mod fire;
mod grid;
mod hazards;
mod judge;
mod list;
mod methods;
mod modes;
mod opinion;
mod spread;
mod stress;

pub use fire::{fire, fire_with};
pub use grid::{Align, Cell, Grid};
pub use hazards::CAUTIONS;
#[cfg(feature = "html")]
pub(crate) use hazards::in_words as hazard_in_words;
pub use judge::judge;
pub use list::list;
pub use methods::methods;
pub use modes::modes;
#[cfg(feature = "html")]
pub(crate) use modes::{energy as energy_in_words, held as held_in_words, title as topology_title};
#[cfg(feature = "html")]
pub(crate) use opinion::opinion_in_words;
pub use spread::spread;
#[cfg(feature = "html")]
pub(crate) use {
    balance::{entries, least},
    claims::reason,
    hazards::{is_said, worst},
};

use crate::look::{Look, Tone, paragraph};
use crate::number;
use crate::record::{RemarkRecord, unit_of};
use pulsewright_circuit::Stand;
use pulsewright_study::outcome::{Adjusted, Answer, Found, Remark, Set, SetValue, Verdict};

/// `1 case`, `7 cases`
fn counted(n: usize, word: &str) -> String {
    if n == 1 {
        format!("1 {word}")
    } else {
        format!("{n} {word}s")
    }
}

/// The tone of a verdict; the word says the same.
fn tone(verdict: Verdict) -> Tone {
    match verdict {
        Verdict::Holds => Tone::Good,
        Verdict::Fails => Tone::Bad,
        Verdict::Undecided => Tone::Open,
        Verdict::DoesNotApply => Tone::Faint,
    }
}

/// An answer as a value and its bound, each a cell; where there is no value, in a word.
fn answer(answer: &Answer, text: &str) -> [Cell; 2] {
    match &answer.found {
        Found::Value { value, bound } => {
            let unit = unit_of(answer, text);
            let scale = number::Scale::of(&unit, [*value, *bound]);
            [
                Cell::from(scale.show(*value, Some(*bound))),
                bound_cell(*bound, &unit),
            ]
        }
        Found::Absent(_) => [Cell::toned("absent", Tone::Open), Cell::default()],
        Found::Unbounded(_) => [Cell::toned("unbounded", Tone::Open), Cell::default()],
        Found::Floating(_) => [Cell::toned("floating", Tone::Open), Cell::default()],
    }
}

/// Why an answer has no value.
fn why(answer: &Answer) -> Option<&str> {
    match &answer.found {
        Found::Value { .. } => None,
        Found::Absent(why) | Found::Unbounded(why) | Found::Floating(why) => Some(why),
    }
}

/// `± 12 µJ`; nothing where the value is exact.
fn bound_cell(bound: f64, unit: &str) -> Cell {
    if bound == 0.0 {
        Cell::default()
    } else {
        Cell::from(format!("± {}", number::bound(bound, unit)))
    }
}

/// `load = 25 Ω, bank_v = 4.8 kV`
#[must_use]
pub fn set_in_words(set: &Set) -> String {
    let one = |(name, value): &(String, SetValue)| match value {
        SetValue::Number { value, unit } => format!("{name} = {}", number::quantity(*value, unit)),
        SetValue::Circuit(words) => format!("{name} = {words}"),
    };
    set.iter().map(one).collect::<Vec<_>>().join(", ")
}

/// `bank_v = 4.33013 kV ± 12 µV`
fn adjusted_in_words(all: &[Adjusted]) -> String {
    let one = |a: &Adjusted| {
        let value = number::with_bound(a.value, a.bound, &a.unit);
        format!("{} = {value}", a.name)
    };
    all.iter().map(one).collect::<Vec<_>>().join(", ")
}

/// A circuit's title and what its case sets: `Field unit: load = 25 Ω`; empty where there is neither.
#[must_use]
pub fn titled(title: Option<&str>, set: &Set) -> String {
    let set = set_in_words(set);
    match title {
        Some(title) if set.is_empty() => title.to_owned(),
        Some(title) => format!("{title}: {set}"),
        None => set,
    }
}

/// `bank = 34.2 µF, choke winding = 9.9 Ω`
pub(crate) fn stands_in_words(stands: &[Stand]) -> String {
    let one = |s: &Stand| {
        let value = number::brief(s.value, &s.dimension.unit(), 6);
        format!("{} = {value}", s.name)
    };
    stands.iter().map(one).collect::<Vec<_>>().join(", ")
}

/// Adds remarks, one a paragraph.
fn remarks<'a>(
    out: &mut String,
    look: Look,
    remarks: impl IntoIterator<Item = &'a Remark>,
    text: &str,
) {
    let mut seen: Vec<RemarkRecord> = Vec::new();
    for remark in remarks {
        let record = RemarkRecord::new(remark, text);
        if !seen.contains(&record) {
            seen.push(record);
        }
    }
    if seen.is_empty() {
        return;
    }
    crate::look::heading(out, look, "remarks", Tone::Heading);
    for remark in seen {
        let place = remark
            .line
            .map(|line| format!(" line {line}"))
            .unwrap_or_default();
        paragraph(
            out,
            look,
            2,
            &format!("{}{place}: {}", remark.code, remark.text),
            Tone::Plain,
        );
    }
}

//! Records: JSON for other programs and for the file, one type a kind.
//!
//! `"record": "pulsewright.fire/1"` names the kind and its number. The number changes when a
//! field goes, moves or changes meaning; a new field keeps it, and readers ignore what they do
//! not know. The schemas stand in `schema/`, one a kind and number, kept for ever.
//!
//! Numbers are in coherent SI units with the shortest digits that read back to the same
//! number, bounds rounded up to two digits. No record holds a date, a path (but the files that
//! mistakes are in, as the user wrote them) or a name of a machine: the same input gives the
//! same bytes. Keys stand in declared order; what is named by the user stands in file order.

mod finite;
mod fire;
mod judge;
mod methods;
mod mistakes;
mod modes;
mod opinion;
mod reading;
mod shot;
mod spread;

pub use finite::{Finite, Ordered};
pub use fire::{FireRecord, fire};
pub use judge::{CaseRecord, CornerRecord, JudgeRecord, SummaryRecord, WorstRecord, judge};
pub use methods::{ComparedRecord, MethodRecord, MethodsRecord, RunRecord, methods};
pub use mistakes::{Bytes, MistakeRecord, MistakesRecord};
pub use modes::{ModeRecord, ModesRecord, TopologyRecord, modes};
pub use opinion::{DifferenceRecord, OpinionRecord};
pub(crate) use reading::unit as unit_of;
pub use reading::{AnswerRecord, ClaimRecord, ReadingRecord};
pub use shot::{
    BalanceRecord, EventRecord, ExtremeRecord, HazardRecord, RemarkRecord, StressRecord,
    TotalRecord,
};

pub use spread::{
    DrawRecord, ReadingSpreadRecord, ShareRecord, SliceError, SliceRecord, SpreadCaseRecord,
    SpreadRecord, SpreadVerdictRecord, joined, read_slice, slice, slice_text, spread,
};

use pulsewright_circuit::Stand;
use pulsewright_study::outcome::{Adjusted, Fired, Set, SetValue};
use serde::{Deserialize, Serialize};

/// Where a result came from: what a record says of its input.
#[derive(Clone, Debug, Default)]
pub struct Origin<'a> {
    /// The circuit's title.
    pub title: Option<&'a str>,
    /// SHA-256 of the text, in lower-case hexadecimal; empty where there was no text.
    pub sha256: &'a str,
    /// The text itself, for the lines of remarks; empty where there was none.
    pub text: &'a str,
    /// The let-values that were set from outside.
    pub set: Set,
}

/// The program that wrote a record.
#[derive(Clone, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct Program {
    /// Its name.
    pub name: String,
    /// Its version.
    pub version: String,
}

impl Program {
    /// This program.
    #[must_use]
    pub fn this() -> Self {
        Program {
            name: "pulsewright".to_owned(),
            version: env!("CARGO_PKG_VERSION").to_owned(),
        }
    }
}

/// What was fired.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Input {
    /// The circuit's title.
    pub title: Option<String>,
    /// SHA-256 of the netlist's text; `null` where the circuit was built in code.
    pub sha256: Option<String>,
    /// Let-values that were set from outside, or held at a case's.
    pub set: Ordered<SetRecord>,
}

impl Input {
    pub(crate) fn new(origin: &Origin<'_>, set: &Set) -> Self {
        let sha256 = (!origin.sha256.is_empty()).then(|| origin.sha256.to_owned());
        Input {
            title: origin.title.map(str::to_owned),
            sha256,
            set: set_record(set),
        }
    }
}

/// A let-value as it was set: a number with its unit, or `open circuit`, `short circuit`.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum SetRecord {
    /// A number.
    Number {
        /// In coherent SI units.
        value: Option<Finite>,
        /// The unit.
        unit: String,
    },
    /// `open circuit` or `short circuit`.
    Circuit(String),
}

pub(crate) fn set_record(set: &Set) -> Ordered<SetRecord> {
    let record = |value: &SetValue| match value {
        SetValue::Number { value, unit } => SetRecord::Number {
            value: Finite::new(*value),
            unit: unit.clone(),
        },
        SetValue::Circuit(words) => SetRecord::Circuit(words.clone()),
    };
    Ordered(
        set.iter()
            .map(|(name, value)| (name.clone(), record(value)))
            .collect(),
    )
}

/// What values that vary came to, in coherent SI units.
pub(crate) fn stands(all: &[Stand]) -> Ordered<Finite> {
    let number = |s: &Stand| Some((s.name.clone(), Finite::new(s.value)?));
    Ordered(all.iter().filter_map(number).collect())
}

/// A let-value that was solved for.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct AdjustedRecord {
    /// Its value in coherent SI units; `null` where it is no finite number.
    pub value: Option<Finite>,
    /// Its unit.
    pub unit: String,
    /// The bound on the value, rounded up to two digits.
    pub bound: Option<Finite>,
}

/// Let-values that were solved for, by name.
pub(crate) fn adjusted(all: &[Adjusted]) -> Ordered<AdjustedRecord> {
    let one = |a: &Adjusted| {
        let record = AdjustedRecord {
            value: Finite::new(a.value),
            unit: a.unit.clone(),
            bound: Finite::bound(a.bound),
        };
        (a.name.clone(), record)
    };
    Ordered(all.iter().map(one).collect())
}

/// A record's let-value as results hold it.
pub(crate) fn set_value(record: &SetRecord) -> SetValue {
    match record {
        SetRecord::Number { value, unit } => SetValue::Number {
            value: value.map_or(f64::NAN, Finite::value),
            unit: unit.clone(),
        },
        SetRecord::Circuit(words) => SetValue::Circuit(words.clone()),
    }
}

/// How it was run.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Run {
    /// The integrator in words.
    pub method: String,
    /// How long the shot was followed, s.
    pub span: Option<Finite>,
    /// Accepted steps of the finest shot; of all shots together under `judge` and `spread`.
    pub steps: u64,
    /// The sizes of the steps, s.
    pub step: StepRecord,
    /// Defaults that were taken, in words.
    pub defaults: Vec<String>,
}

/// The smallest and the largest step, s.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct StepRecord {
    /// The smallest, s.
    pub smallest: Option<Finite>,
    /// The largest, s.
    pub largest: Option<Finite>,
}

impl Run {
    /// The run of one shot, or of several taken together.
    pub(crate) fn of<'a>(shots: impl IntoIterator<Item = &'a Fired>) -> Self {
        let mut run = Run {
            method: String::new(),
            span: None,
            steps: 0,
            step: StepRecord {
                smallest: None,
                largest: None,
            },
            defaults: Vec::new(),
        };
        let (mut smallest, mut largest) = (f64::INFINITY, 0.0f64);
        for fired in shots {
            if run.method.is_empty() {
                run.method.clone_from(&fired.method);
                run.span = Finite::new(fired.span);
                run.defaults.clone_from(&fired.defaults);
            }
            run.steps = run.steps.saturating_add(fired.shot.steps);
            if fired.shot.steps > 0 {
                smallest = smallest.min(fired.shot.smallest_step);
                largest = largest.max(fired.shot.largest_step);
            }
        }
        run.step = StepRecord {
            smallest: Finite::new(smallest),
            largest: Finite::new(largest),
        };
        run
    }
}

/// The record as text: two blanks of indentation, one line feed at the end.
///
/// Empty in the one case that a record cannot be written, which its types rule out.
#[must_use]
pub fn text<R: Serialize>(record: &R) -> String {
    let mut text = serde_json::to_string_pretty(record).unwrap_or_default();
    text.push('\n');
    text
}

/// The line, from 1, that a byte of a text stands in.
pub(crate) fn line_of(text: &str, byte: u32) -> Option<u64> {
    let before = text.as_bytes().get(..usize::try_from(byte).ok()?)?;
    u64::try_from(before.iter().filter(|b| **b == b'\n').count())
        .ok()
        .map(|n| n + 1)
}

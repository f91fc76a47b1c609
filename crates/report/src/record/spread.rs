//! `pulsewright.spread/1`: a study over spreads; `pulsewright.slice/1`: a part of one, with what
//! merging needs.
//!
//! A slice holds its tally as the study keeps it: counts, exact sums, bins. It is written on one
//! line, being for the program and not for readers.

use super::{Finite, HazardRecord, Input, Ordered, Origin, Program, Run, SetRecord, StepRecord};
use super::{set_record, set_value};
use pulsewright_study::outcome::Set;
use pulsewright_study::spread::{
    CONFIDENCE, ClaimShare, Extreme, MergeError, ReadingSpread, Spread, SpreadCase, Tally, merge,
};
use serde::{Deserialize, Serialize};

/// The record of a study over spreads.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SpreadRecord {
    /// `pulsewright.spread/1`.
    pub record: String,
    /// The program that wrote it.
    pub program: Program,
    /// What was fired.
    pub input: Input,
    /// How it was run: steps of all shots together.
    pub run: Run,
    /// How many draws each case was fired with.
    pub shots: u64,
    /// What they were drawn from.
    pub seed: u64,
    /// The confidence of the intervals.
    pub confidence: Option<Finite>,
    /// The values that vary, by name.
    pub varying: Vec<String>,
    /// What `matters` is: `squared correlation`.
    pub matters_by: String,
    /// The cases in order.
    pub cases: Vec<SpreadCaseRecord>,
    /// Each claim over all cases.
    pub claims: Vec<SpreadVerdictRecord>,
}

/// One case.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SpreadCaseRecord {
    /// The let-values as the case sets them.
    pub set: Ordered<SetRecord>,
    /// The claims, in the file's order.
    pub claims: Vec<ShareRecord>,
    /// The readings: those with a name, then those of claims without.
    pub readings: Vec<ReadingSpreadRecord>,
    /// Hazards at nominal values.
    pub hazards: Vec<HazardRecord>,
}

/// In what share of the shots a claim holds.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ShareRecord {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub reading: String,
    /// The relation as the language writes it.
    pub relation: String,
    /// The share of shots that it is to hold in; `null`: every one.
    pub asked: Option<Finite>,
    /// Shots in which it holds.
    pub holds: u64,
    /// Shots in which it fails.
    pub fails: u64,
    /// Shots that its bound leaves undecided.
    pub undecided: u64,
    /// Shots in which it applies.
    pub of: u64,
    /// The share that holds.
    pub share: Option<Finite>,
    /// The lower end of its exact interval.
    pub low: Option<Finite>,
    /// The upper end.
    pub high: Option<Finite>,
    /// The verdict on the share that is asked for.
    pub verdict: String,
    /// The requirements it answers.
    pub answers: Vec<String>,
}

/// A reading over the shots.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ReadingSpreadRecord {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub reading: String,
    /// Its unit.
    pub unit: String,
    /// The nominal value.
    pub nominal: Option<Finite>,
    /// Shots in which it has a value.
    pub of: u64,
    /// Shots in which it has none.
    pub missing: u64,
    /// The largest bound on its numerical error in a shot, rounded up to two digits.
    pub bound: Option<Finite>,
    /// The mean.
    pub mean: Option<Finite>,
    /// The standard deviation of the sample.
    pub deviation: Option<Finite>,
    /// The value that a share of the shots does not exceed, by that share.
    pub quantiles: Ordered<Finite>,
    /// The least value.
    pub least: Option<DrawRecord>,
    /// The greatest value.
    pub most: Option<DrawRecord>,
    /// The share of the variance that each value that varies explains.
    pub matters: Ordered<Finite>,
}

/// A value and the draw it came in.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct DrawRecord {
    /// The value.
    pub value: Option<Finite>,
    /// The draw, from 1: `--draw`.
    pub draw: u64,
}

/// A claim over all cases.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SpreadVerdictRecord {
    /// Its name.
    pub name: String,
    /// Its verdict over the cases.
    pub verdict: String,
}

/// The record of one slice.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SliceRecord {
    /// `pulsewright.slice/1`.
    pub record: String,
    /// The program that wrote it.
    pub program: Program,
    /// What was fired.
    pub input: Input,
    /// What was counted.
    pub tally: Tally,
}

/// The kind of a slice's record.
const SLICE: &str = "pulsewright.slice/1";

/// The record of a study.
#[must_use]
pub fn spread(spread: &Spread, origin: &Origin<'_>) -> SpreadRecord {
    let tally = &spread.tally;
    let number = |x: Option<f64>| x.and_then(Finite::new);
    SpreadRecord {
        record: "pulsewright.spread/1".to_owned(),
        program: Program::this(),
        input: Input::new(origin, &origin.set),
        run: Run {
            method: tally.method.clone(),
            span: Finite::new(tally.span),
            steps: tally.steps,
            step: StepRecord {
                smallest: number(tally.smallest_step),
                largest: number(tally.largest_step),
            },
            defaults: tally.defaults.clone(),
        },
        shots: tally.shots,
        seed: tally.seed,
        confidence: Finite::new(CONFIDENCE),
        varying: tally.varying.clone(),
        matters_by: "squared correlation".to_owned(),
        cases: spread.cases.iter().map(case).collect(),
        claims: spread
            .claims
            .iter()
            .map(|(name, verdict)| SpreadVerdictRecord {
                name: name.clone(),
                verdict: verdict.words().to_owned(),
            })
            .collect(),
    }
}

/// The record of a slice.
#[must_use]
pub fn slice(tally: &Tally, origin: &Origin<'_>) -> SliceRecord {
    SliceRecord {
        record: SLICE.to_owned(),
        program: Program::this(),
        input: Input::new(origin, &origin.set),
        tally: tally.clone(),
    }
}

/// A slice's record as text: one line.
#[must_use]
pub fn slice_text(record: &SliceRecord) -> String {
    let mut text = serde_json::to_string(record).unwrap_or_default();
    text.push('\n');
    text
}

/// Why records of slices do not make a record of the whole.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum SliceError {
    /// It is no record of a slice: why.
    NotASlice(String),
    /// The place of a slice, from 0, whose program or input is not the first one's.
    OfAnother(usize),
    /// They are not each slice of one study once.
    Merge(MergeError),
}

/// Reads the record of a slice.
///
/// # Errors
///
/// [`SliceError::NotASlice`].
pub fn read_slice(text: &[u8]) -> Result<SliceRecord, SliceError> {
    #[derive(Deserialize)]
    struct Kind {
        record: String,
    }
    let not = |e: serde_json::Error| SliceError::NotASlice(format!("it is no record: {e}"));
    let kind: Kind = serde_json::from_slice(text).map_err(not)?;
    if kind.record != SLICE {
        let is = format!("it is a `{}`, and a `{SLICE}` belongs here", kind.record);
        return Err(SliceError::NotASlice(is));
    }
    serde_json::from_slice(text).map_err(not)
}

/// Joins slices: the study, and the title, hash and settings of its input.
///
/// # Errors
///
/// [`SliceError`].
pub fn joined(slices: Vec<SliceRecord>) -> Result<(Spread, Input), SliceError> {
    let Some(first) = slices.first() else {
        return Err(SliceError::Merge(MergeError::Nothing));
    };
    let (program, input) = (first.program.clone(), first.input.clone());
    let other = slices
        .iter()
        .position(|s| s.program != program || s.input != input);
    if let Some(place) = other {
        return Err(SliceError::OfAnother(place));
    }
    let tallies = slices.into_iter().map(|s| s.tally).collect();
    let tally = merge(tallies).map_err(SliceError::Merge)?;
    Ok((Spread::from(tally), input))
}

impl Input {
    /// What a page and a record of the same input say of it; the text is not known any more.
    #[must_use]
    pub fn origin(&self) -> Origin<'_> {
        let set: Set = self
            .set
            .0
            .iter()
            .map(|(name, value)| (name.clone(), set_value(value)))
            .collect();
        Origin {
            title: self.title.as_deref(),
            sha256: self.sha256.as_deref().unwrap_or_default(),
            text: "",
            set,
        }
    }
}

fn case(case: &SpreadCase) -> SpreadCaseRecord {
    SpreadCaseRecord {
        set: set_record(&case.set),
        claims: case.claims.iter().map(share).collect(),
        readings: case.readings.iter().map(reading).collect(),
        hazards: case.hazards.iter().map(Into::into).collect(),
    }
}

fn share(claim: &ClaimShare) -> ShareRecord {
    let number = |x: Option<f64>| x.and_then(Finite::new);
    let counts = &claim.counts;
    ShareRecord {
        name: counts.name.clone(),
        reading: counts.text.clone(),
        relation: counts.relation.clone(),
        asked: number(counts.asked),
        holds: counts.holds,
        fails: counts.fails,
        undecided: counts.undecided,
        of: counts.of(),
        share: number(claim.share),
        low: number(claim.low),
        high: number(claim.high),
        verdict: claim.verdict.words().to_owned(),
        answers: counts.answers.clone(),
    }
}

fn reading(reading: &ReadingSpread) -> ReadingSpreadRecord {
    let number = |x: Option<f64>| x.and_then(Finite::new);
    let extreme = |e: Extreme| DrawRecord {
        value: Finite::new(e.value),
        draw: e.draw,
    };
    let named = |all: &mut dyn Iterator<Item = (String, f64)>| {
        Ordered(
            all.filter_map(|(name, x)| Some((name, Finite::new(x)?)))
                .collect(),
        )
    };
    ReadingSpreadRecord {
        name: reading.name.clone(),
        reading: reading.text.clone(),
        unit: reading.unit.clone(),
        nominal: number(reading.nominal),
        of: reading.of,
        missing: reading.missing,
        bound: reading.bound.and_then(Finite::bound),
        mean: number(reading.mean),
        deviation: number(reading.deviation),
        quantiles: named(&mut reading.quantiles.iter().map(|(q, x)| (q.to_string(), *x))),
        least: reading.least.map(extreme),
        most: reading.most.map(extreme),
        matters: named(&mut reading.matters.iter().cloned()),
    }
}

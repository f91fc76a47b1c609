//! What a fired or judged circuit answers: the values that reports are made of.
//!
//! All numbers are in coherent SI units, every bound is absolute and in the same unit.

use pulsewright_circuit::dimension::Dimension;
use pulsewright_circuit::{Positions, Stand};
use pulsewright_engine::{Event, Shot};

/// One reading's answer.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Answer {
    /// The value with its bound, or why there is none.
    pub found: Found,
    /// Its dimension.
    #[cfg_attr(feature = "serde", serde(skip))]
    pub dimension: Dimension,
    /// Its unit in coherent SI, empty for a plain number.
    pub unit: String,
}

/// A value with its bound, or why there is none.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub enum Found {
    /// A value whose error is at most `bound`.
    Value {
        /// The value.
        value: f64,
        /// The bound on its numerical error, 0 or more.
        bound: f64,
    },
    /// It does not exist in this shot; why, in words.
    Absent(String),
    /// It is without bound; why, in words, with the instant.
    Unbounded(String),
    /// It depends on the potential at which an island was held; what to name instead.
    Floating(String),
}

/// A named reading.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct ReadingResult {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub text: String,
    /// Its answer.
    pub answer: Answer,
}

/// The verdicts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub enum Verdict {
    /// The whole interval meets the claim.
    Holds,
    /// None of it does.
    Fails,
    /// Refinement ended before it was decided.
    Undecided,
    /// The claim does not apply in this case.
    DoesNotApply,
}

impl Verdict {
    /// The verdict in words: `holds`, `fails`, `undecided`, `does not apply`.
    #[must_use]
    pub const fn words(self) -> &'static str {
        match self {
            Verdict::Holds => "holds",
            Verdict::Fails => "fails",
            Verdict::Undecided => "undecided",
            Verdict::DoesNotApply => "does not apply",
        }
    }
}

/// A claim in one case.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct ClaimResult {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub text: String,
    /// The reading's answer; in a case where the claim does not apply too.
    pub answer: Answer,
    /// The relation as the language writes it (`is at most 90 A`).
    pub relation: String,
    /// The lower limit, `allowing` included.
    pub least: Option<f64>,
    /// The upper limit, `allowing` included.
    pub most: Option<f64>,
    /// How far the value is inside the limits (negative: outside).
    pub margin: Option<f64>,
    /// The verdict.
    pub verdict: Verdict,
    /// Why, where a number does not say it (absent, undecided with what to do).
    pub reason: Option<String>,
    /// The requirements it answers.
    pub answers: Vec<String>,
}

/// A let-value as set in a case.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub enum SetValue {
    /// A number with its unit.
    Number {
        /// The value in coherent SI units.
        value: f64,
        /// Its unit.
        unit: String,
    },
    /// `open circuit` or `short circuit`.
    Circuit(String),
}

/// Let-values held or varied, in the order of the file.
pub type Set = Vec<(String, SetValue)>;

/// A let-value that was solved for.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Adjusted {
    /// Its name.
    pub name: String,
    /// Its value in coherent SI units.
    pub value: f64,
    /// Its unit.
    pub unit: String,
    /// The bound on the value, from that of the reading and its slope.
    pub bound: f64,
}

/// A value, its bound and when it was.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Extreme {
    /// The value.
    pub value: f64,
    /// Its bound; infinite where it is unbounded.
    pub bound: f64,
    /// The instant, s.
    pub time: f64,
}

/// What a part had to stand.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Stress {
    /// The part's name.
    pub part: String,
    /// Largest voltage across it, V (none for a changeover).
    pub voltage: Option<Extreme>,
    /// Largest current through it, A.
    pub current: Option<Extreme>,
    /// Largest power into it, W.
    pub power: Option<Extreme>,
    /// Energy into it, J, with its bound.
    pub energy: Option<(f64, f64)>,
    /// Action, A²·s, with its bound.
    pub action: Option<(f64, f64)>,
}

/// A stored-energy hazard.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Hazard {
    /// The part, or `the circuit` for the energy of all.
    pub part: String,
    /// Its highest voltage, V.
    pub voltage: f64,
    /// The most energy it held, J.
    pub energy: f64,
    /// From when on its voltage stays at or below 60 V, s; `None`: never in sight.
    pub at_most_60_v_from: Option<f64>,
    /// Whether that instant was estimated beyond the span.
    pub estimated: bool,
}

/// The energy balance, with its bound.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct BalanceResult {
    /// Stored at the start, J.
    pub stored_start: f64,
    /// Stored at the end, J.
    pub stored_end: f64,
    /// Out of each source, by name, J.
    pub supplied: Vec<(String, f64)>,
    /// Heat in each part with resistance, by name, J.
    pub dissipated: Vec<(String, f64)>,
    /// Lost at jumps, J.
    pub lost_at_events: f64,
    /// What does not add up, J.
    pub residual: f64,
    /// The bound on it, J.
    pub bound: f64,
}

/// What another method made of the same readings.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct SecondOpinion {
    /// The method in words.
    pub method: String,
    /// Why there is none; `None` where the two agree.
    pub missing: Option<String>,
    /// The reading that differs most against the bounds; `None` where there is no number.
    pub largest: Option<Difference>,
}

/// How far two methods are apart in a reading.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Difference {
    /// The reading's name, or the reading as the language writes it.
    pub reading: String,
    /// The difference over the sum of the two bounds.
    pub share: f64,
}

/// A remark: what was seen, what it may mean, what to try.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Remark {
    /// Its code (`R0203`).
    pub code: String,
    /// Its text.
    pub text: String,
    /// Bytes of the source text that it is about.
    #[cfg_attr(feature = "serde", serde(skip))]
    pub span: pulsewright_circuit::Span,
}

/// One shot, read and judged.
#[derive(Clone, Debug)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Fired {
    /// The let-values that were set or varied.
    pub set: Set,
    /// The let-values that were solved for.
    pub adjusted: Vec<Adjusted>,
    /// What the values that vary came to, where the shot was not fired at nominal ones.
    #[cfg_attr(feature = "serde", serde(skip))]
    pub stands: Vec<Stand>,
    /// The named readings, in the file's order.
    pub readings: Vec<ReadingResult>,
    /// The claims, in the file's order.
    pub claims: Vec<ClaimResult>,
    /// The event log of the finest shot, with a bound on each instant, s.
    pub events: Vec<(Event, f64)>,
    /// The balance.
    pub balance: BalanceResult,
    /// What each part had to stand; empty where not asked for.
    pub stress: Vec<Stress>,
    /// What another method says; `None` where it was not asked.
    pub second_opinion: Option<SecondOpinion>,
    /// Hazards.
    pub hazards: Vec<Hazard>,
    /// Remarks on the model and the run.
    pub remarks: Vec<Remark>,
    /// Defaults that were taken, in words.
    pub defaults: Vec<String>,
    /// The integrator in words.
    pub method: String,
    /// How long the shot was followed, s.
    pub span: f64,
    /// The finest shot; its first probes are the channels where channels were asked for.
    pub shot: Shot,
    /// The channels read off the finest shot.
    pub channels: Vec<Channel>,
    /// The windows of readings and claims that have one.
    pub windows: Vec<WindowResult>,
    /// The names of the parts, for [`Event::part`].
    pub parts: Vec<String>,
    /// For each event, what happened in words (`closes`, `moves to pad`, `conducts`).
    pub changes: Vec<String>,
}

impl Fired {
    /// Every answer by name: named readings, then the readings of claims, but of a claim that
    /// shares its name with the reading it is on; each with the reading as the language writes
    /// it.
    pub fn answers(&self) -> impl Iterator<Item = (&str, &str, &Answer)> {
        crate::fire::listed(&self.readings, &self.claims)
    }
}

/// A channel: a signal along the shot.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Channel {
    /// The signal as the language writes it.
    pub text: String,
    /// Its unit.
    pub unit: String,
    /// Instants, s; an event stands twice.
    pub times: Vec<f64>,
    /// Values.
    pub values: Vec<f64>,
    /// Slopes, for reading between the instants.
    pub slopes: Vec<f64>,
    /// Its largest absolute value on this shot, with its sign; for plots, without a bound.
    pub crest: Option<Extreme>,
    /// Limits of claims on an extreme of it.
    pub gates: Vec<Gate>,
}

/// A limit of a claim on an extreme of a channel, as a level across its plot.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Gate {
    /// The claim's name.
    pub claim: String,
    /// The level, in the channel's unit.
    pub level: f64,
    /// Whether the forbidden side is above the level; else it is below.
    pub above: bool,
    /// Whether no point of the channel may lie on that side; else only its extreme must not.
    pub every: bool,
    /// Where the claim looks: starts and ends, s.
    pub intervals: Vec<(f64, f64)>,
    /// The extreme that the claim is on, without a bound.
    pub extreme: Extreme,
}

/// The window of a named reading or of a claim.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct WindowResult {
    /// The reading's or the claim's name.
    pub name: String,
    /// Starts and ends, s, in order of time.
    pub intervals: Vec<(f64, f64)>,
}

/// Every case, judged.
#[derive(Clone, Debug)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Judged {
    /// The cases in order, the last stated let-value running fastest; one where there are none.
    pub cases: Vec<Fired>,
    /// For each case the claims at their worst corners: none for a claim that does not apply in
    /// it, empty where no value has a spread.
    #[cfg_attr(feature = "serde", serde(skip))]
    pub worst: Vec<Vec<Option<Worst>>>,
    /// Each claim over all cases.
    pub claims: Vec<ClaimSummary>,
}

/// A claim at its worst corner over the tolerances.
#[derive(Clone, Debug, PartialEq)]
pub struct Worst {
    /// The claim there.
    pub claim: ClaimResult,
    /// Where the values stand within their spreads.
    pub positions: Positions,
    /// What they come to.
    pub corner: Vec<Stand>,
}

/// A claim over all cases.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct ClaimSummary {
    /// Its name.
    pub name: String,
    /// Its verdict, in each case that of its worst corner: `fails` where any case fails, else `undecided` where any is, else `holds`;
    /// `undecided` where it applies in no case.
    pub verdict: Verdict,
    /// The same at nominal values.
    pub nominal: Verdict,
    /// Index of the case with the least margin among those with the verdict.
    pub worst: Option<usize>,
}

//! Every mistake and remark of this crate, with the names and numbers that tell it apart.

use std::fmt::{self, Display, Formatter};

use crate::dimension::Dimension;
use crate::fault::Fault;
use crate::span::Span;
use crate::words::quantity;

/// A kind of mistake or remark. Texts named `found`, `base`, … are expressions as the language
/// writes them; `what` names the thing that asks (`` `chest` ``, `the span`).
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
#[allow(missing_docs, reason = "each field is named for what it holds")]
pub enum FaultKind {
    // Values
    /// A quantity is needed, and the value has no unit.
    NeedsUnit {
        what: String,
        wants: Dimension,
        found: String,
        write: Option<String>,
    },
    /// Another quantity is needed.
    WrongDimension {
        what: String,
        wants: Dimension,
        found: String,
        is: Dimension,
    },
    /// A sum or difference of unlike things.
    UnlikeSum {
        left: String,
        left_is: Dimension,
        right: String,
        right_is: Dimension,
        write: Option<String>,
    },
    /// `min` or `max` of unlike things, or knots of unlike ordinates.
    UnlikeArguments {
        of: String,
        first: String,
        first_is: Dimension,
        other: String,
        other_is: Dimension,
    },
    /// A share is needed, and the value has no `%` or `ppm`.
    NeedsShare {
        what: String,
        found: String,
        write: Option<String>,
    },
    /// A quantity raised to something that is no written number.
    PowerOfQuantity {
        base: String,
        base_is: Dimension,
        exponent: String,
    },
    /// A function that takes plain numbers, given a quantity.
    PlainArgument {
        function: &'static str,
        found: String,
        is: Dimension,
    },
    /// A unit whose exponents grow too large, or are no whole sixtieths.
    NoSuchUnit { found: String },
    /// A value that is no finite number.
    NotFinite { what: String, given: Given },
    /// A value out of its range.
    OutOfRange {
        what: String,
        bound: Bound,
        value: f64,
        dimension: Dimension,
        share: bool,
        given: Given,
    },
    /// `open circuit` or `short circuit` where it means nothing.
    CircuitWord { word: &'static str },
    /// A let-value that may be a circuit word, used as a number.
    CircuitLet { name: String },
    /// Knots whose abscissas do not ascend, or repeat three times.
    KnotOrder {
        before: f64,
        after: f64,
        dimension: Dimension,
    },
    /// An expression nested deeper than is kept.
    TooDeep { deepest: usize },
    /// `points` of a signal.
    PointsOfSignal { argument: String },
    /// Limits of a spread that do not ascend.
    SpreadOrder { low: String, high: String },
    /// A function with too few or too many arguments.
    ArgumentCount {
        function: &'static str,
        count: usize,
        several: bool,
    },
    // Names
    /// A name that is no name.
    BadName { name: String },
    /// A name that the language needs for itself.
    Reserved {
        name: String,
        space: NameSpace,
        offer: String,
    },
    /// A name given twice.
    Twice {
        name: String,
        first: String,
        second: String,
    },
    /// A name that nothing has; `near` is a similar one, `also` what has the name elsewhere.
    Unknown {
        name: String,
        space: NameSpace,
        near: Option<String>,
        also: Option<String>,
    },
    /// A named value where its kind may not stand.
    NotHere {
        name: String,
        is: NameSpace,
        place: &'static str,
    },
    /// Definitions in a circle.
    Circle {
        path: Vec<String>,
        verb: &'static str,
    },
    // Statements and phrases
    /// A part of a kind that the phrase does not take.
    PartKind {
        phrase: String,
        wants: &'static str,
        part: String,
        is: &'static str,
    },
    /// `voltage across` a changeover.
    AcrossChangeover { part: String, common: String },
    /// `t` where nothing runs.
    TimeHere { place: &'static str },
    /// A signal where none may stand.
    SignalHere { signal: String, place: &'static str },
    /// A reading where none may stand.
    ReadingHere {
        reading: String,
        place: &'static str,
    },
    /// An edge where none may stand.
    EdgeHere { edge: String, place: &'static str },
    /// A signal where one number is needed.
    BareSignal { signal: String },
    /// A constant where a signal is needed.
    ConstantSignal { found: String },
    /// A coupling of an inductor with itself.
    CoupledToItself { part: String },
    /// A second coupling of the same pair.
    CoupledTwice {
        first: String,
        second: String,
        earlier: String,
    },
    /// Windings whose couplings contradict each other.
    NotPositiveDefinite { windings: Vec<String> },
    /// A node that is none of a changeover's two.
    NotItsNode {
        part: String,
        node: String,
        first: String,
        second: String,
    },
    /// A changeover between a node and itself.
    SameContacts { part: String, node: String },
    /// A source that is not linear in its signals.
    NotLinear {
        what: String,
        found: String,
        changes: bool,
    },
    /// A written time outside the span.
    OutsideSpan { time: f64, span: f64 },
    /// A window whose end is not after its start.
    WindowOrder { start: f64, end: f64 },
    /// `duration` without a window.
    NeedsWindow { phrase: String },
    /// A window on a phrase that takes none.
    NoWindow { phrase: String },
    /// `phase 0`.
    PhaseNumber,
    /// Fractions in the wrong order.
    FractionOrder {
        phrase: &'static str,
        from: f64,
        to: f64,
        rising: bool,
    },
    /// A signal that grows too large with the signals it uses.
    TooLarge { name: String },
    /// A circuit word tested on a let-value that is no resistance.
    NeverCircuit { name: String, is: Dimension },
    /// A window on one phrase of a sum and not on another.
    PartlyWindowed { with: String, without: String },
    /// A builder's qualifier that fits nothing before it.
    Misplaced {
        qualifier: &'static str,
        follows: &'static str,
        part: Option<String>,
    },
    // Schedules
    /// Stated instants that do not rise.
    InstantOrder { earlier: f64, later: f64 },
    /// Two `at` among the triggers of one action.
    TwoInstants,
    /// An action that the part cannot take.
    WrongAction {
        part: String,
        is: &'static str,
        action: String,
    },
    /// An action without a trigger.
    NoTrigger { part: String },
    /// An instant past the span.
    PastSpan { part: String, time: f64, span: f64 },
    // The run, claims, cases
    /// No span.
    NoSpan,
    /// `between X and Y` that does not ascend.
    LimitOrder {
        low: f64,
        high: f64,
        dimension: Dimension,
        given: Given,
    },
    /// An amount for a reading without a unit.
    UnitlessAmount {
        found: String,
        points: Option<String>,
    },
    /// Percentage points for a reading with a unit.
    PointsOfQuantity { reading: String, is: Dimension },
    /// Two amounts, two shares, or nothing after `within`.
    WithinTwice,
    /// A second `cases` of the same let-value.
    CasesTwice { name: String },
    /// A range of no values, or of one where the ends differ.
    CaseCount { count: u32 },
    /// A row with more or fewer values than names.
    CaseWidth { names: usize, values: usize },
    /// A range by equal ratio whose ends have no ratio.
    CaseRatio {
        from: f64,
        to: f64,
        dimension: Dimension,
    },
    /// More cases than are run.
    TooManyCases { count: u64, most: u64 },
    /// A case's value that uses a let-value which is varied as well.
    CaseUsesVaried { name: String, varied: String },
    /// A let-value that is adjusted and given a value in another way too; `by` in words.
    AdjustVaried { name: String, by: &'static str },
    /// The ends of where a let-value is adjusted that do not ascend.
    AdjustOrder {
        low: f64,
        high: f64,
        dimension: Dimension,
        given: Given,
    },
    /// A limit of nothing.
    ZeroLimit { limit: &'static str },
    /// More parts than the limit.
    TooManyParts { count: u64, limit: u64 },
    /// An override that does not fit.
    NotOverridable { name: String },
    // Topology
    /// Nothing touches `ground`.
    NoGround { near: Option<String> },
    /// Both ends of a part on one node.
    OneNode { part: String, node: String },
    /// A node that one part only touches.
    LonelyNode {
        node: String,
        part: String,
        near: Option<String>,
    },
}

/// Under which let-values a value was taken: `name = value` each; empty where as written.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Given {
    /// The let-values of the case, in words.
    pub case: Vec<String>,
    /// Whether the value is an end of its own spread.
    pub spread: bool,
}

impl Display for Given {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        if self.spread {
            f.write_str(" at an end of its spread")?;
        }
        for (i, set) in self.case.iter().take(4).enumerate() {
            write!(f, "{}{set}", if i == 0 { " with " } else { ", " })?;
        }
        Ok(())
    }
}

/// What a value must meet.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(missing_docs, reason = "named as read; in the value's unit")]
pub enum Bound {
    /// Any finite number.
    Any,
    Above(f64),
    AtLeast(f64),
    /// Strictly between.
    Inside(f64, f64),
    /// Between, ends included.
    From(f64, f64),
}

impl Bound {
    /// Whether a value meets it.
    #[must_use]
    pub fn admits(self, x: f64) -> bool {
        match self {
            Bound::Any => true,
            Bound::Above(least) => x > least,
            Bound::AtLeast(least) => x >= least,
            Bound::Inside(low, high) => x > low && x < high,
            Bound::From(low, high) => x >= low && x <= high,
        }
    }

    /// In words: `above 0 ohm`.
    #[must_use]
    pub fn words(self, dimension: Dimension, is_share: bool) -> String {
        let q = |x: f64| {
            if is_share {
                crate::words::share(x)
            } else {
                quantity(x, dimension)
            }
        };
        match self {
            Bound::Any => "finite".to_owned(),
            Bound::Above(x) => format!("above {}", q(x)),
            Bound::AtLeast(x) => format!("of {} or more", q(x)),
            Bound::Inside(x, y) => format!("between {} and {}, both excluded", q(x), q(y)),
            Bound::From(x, y) => format!("between {} and {}", q(x), q(y)),
        }
    }
}

/// What a name is the name of.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs, reason = "named as read")]
pub enum NameSpace {
    Part,
    Node,
    Let,
    Signal,
    Reading,
    Claim,
    Counter,
    /// A let-value or a signal.
    LetOrSignal,
    /// A let-value or a reading.
    LetOrReading,
}

impl NameSpace {
    /// In words, without an article.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            NameSpace::Part => "part",
            NameSpace::Node => "node",
            NameSpace::Let => "let-value",
            NameSpace::Signal => "signal",
            NameSpace::Reading => "reading",
            NameSpace::Claim => "claim",
            NameSpace::Counter => "counter",
            NameSpace::LetOrSignal => "let-value or signal",
            NameSpace::LetOrReading => "let-value or reading",
        }
    }
}

impl FaultKind {
    /// The fault at a place.
    #[must_use]
    pub fn at(self, span: Span) -> Fault {
        Fault {
            code: self.code(),
            span,
            message: self.message(),
            label: self.label(),
            write: self.write(),
        }
    }
}

//! A circuit as written: names and expressions, nothing checked or resolved.

use crate::expr::Expr;
use crate::parts::Part;
use crate::span::{Name, Span};
use crate::spread::Value;

/// Everything a netlist states.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Draft {
    /// `title "…"`
    pub title: Option<String>,
    /// `let NAME = EXPRESSION`
    pub lets: Vec<Let>,
    /// The parts, couplings and wires included, in the order written.
    pub parts: Vec<Part>,
    /// `signal NAME = …`
    pub signals: Vec<Named>,
    /// `reading NAME = …`
    pub readings: Vec<Named>,
    /// `claim NAME: …`
    pub claims: Vec<Claim>,
    /// `cases …`, the last stated running fastest.
    pub cases: Vec<Cases>,
    /// `adjust …`
    pub adjust: Option<Adjust>,
    /// How the shot is run.
    pub run: Run,
    /// `note "…"`
    pub notes: Vec<String>,
}

/// A let-value.
#[derive(Clone, Debug, PartialEq)]
pub struct Let {
    /// Its name.
    pub name: Name,
    /// Its value, an expression of let-values; or an open or a short circuit.
    pub value: Value,
}

/// A named signal or reading.
#[derive(Clone, Debug, PartialEq)]
pub struct Named {
    /// Its name.
    pub name: Name,
    /// What it is.
    pub value: Expr,
}

/// A requirement on a reading.
#[derive(Clone, Debug, PartialEq)]
pub struct Claim {
    /// Its name.
    pub name: Name,
    /// The reading judged, an expression of readings and let-values.
    pub reading: Expr,
    /// What it must meet.
    pub relation: Relation,
    /// The requirements it answers (`REQ-12`).
    pub answers: Vec<String>,
    /// The cases it applies to: all of these must hold.
    pub when: Vec<Applies>,
    /// What is added to each limit.
    pub allowing: Option<Expr>,
    /// `in at least 99.7 % of shots`: the share of a study's shots that it is to hold in.
    pub in_shots: Option<Expr>,
    /// Where it stands.
    pub span: Span,
}

/// What a claim asks of its reading.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Relation {
    /// `at most X`
    AtMost(Expr),
    /// `at least X`
    AtLeast(Expr),
    /// `between X and Y`, ascending
    Between(Expr, Expr),
    /// `within 15 % or 3 J of X`: the greater of a share of X and an amount
    Within {
        /// A share of the target's absolute value.
        share: Option<Expr>,
        /// An amount in the reading's unit.
        amount: Option<Expr>,
        /// `within N percentage points`: N as a plain number; then `amount` and `share` are none.
        points: Option<Expr>,
        /// The target.
        of: Expr,
    },
}

/// A condition on let-values under which a claim applies.
#[derive(Clone, Debug, PartialEq)]
pub enum Applies {
    /// `when load >= 25 ohm`; false in a case where either side is a circuit word.
    Compare {
        /// Left side.
        left: Expr,
        /// How they are compared.
        comparison: Comparison,
        /// Right side.
        right: Expr,
    },
    /// `when load is open circuit`; `open` is false for `short circuit`.
    Circuit {
        /// The let-value.
        name: Name,
        /// Open, or short.
        open: bool,
    },
}

/// The comparisons of `when`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs, reason = "named as read")]
pub enum Comparison {
    Less,
    LessOrEqual,
    Greater,
    GreaterOrEqual,
    Equal,
}

/// One `cases` statement.
#[derive(Clone, Debug, PartialEq)]
pub struct Cases {
    /// The let-values it varies; several move together.
    pub names: Vec<Name>,
    /// What they take.
    pub values: CaseValues,
    /// Where it stands.
    pub span: Span,
}

/// The values of a `cases` statement.
#[derive(Clone, Debug, PartialEq)]
pub enum CaseValues {
    /// One row a case, one expression a name.
    Rows(Vec<Vec<Expr>>),
    /// `25 ohm to 175 ohm, 7 values`: ends included.
    Range {
        /// First value.
        from: Expr,
        /// Last value.
        to: Expr,
        /// How many.
        count: u32,
        /// By equal ratio, else by equal difference.
        by_ratio: bool,
        /// Where the count stands.
        count_span: Span,
    },
}

/// `adjust NAME from X to Y so that READING is Z`: a let-value that each case solves for.
#[derive(Clone, Debug, PartialEq)]
pub struct Adjust {
    /// The let-value.
    pub name: Name,
    /// The lower end of where it is looked for.
    pub from: Expr,
    /// The upper end.
    pub to: Expr,
    /// The reading that is to reach a value, an expression of readings and let-values.
    pub reading: Expr,
    /// That value, an expression of let-values.
    pub value: Expr,
    /// Where it stands.
    pub span: Span,
}

/// How the shot is run. `None` is the default.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Run {
    /// `span 30 ms`; needed.
    pub span: Option<Expr>,
    /// `start steady`; else at rest.
    pub steady: Option<bool>,
    /// `integrate by …`
    pub method: Option<(Method, Span)>,
    /// `error at most 1 ppm`
    pub error: Option<Expr>,
    /// `time step 1 us`
    pub step: Option<Expr>,
    /// `channels …`; each is a signal.
    pub channels: Option<Vec<Expr>>,
    /// `limit steps 10_000_000` and the like.
    pub limits: Vec<(Limit, u64, Span)>,
}

/// The integrators.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[non_exhaustive]
pub enum Method {
    /// Trapezoidal rule: order 2, A-stable.
    Trapezoidal,
    /// Backward Euler: order 1, L-stable.
    BackwardEuler,
    /// Exact propagation between events.
    Exact,
}

impl Method {
    /// The method as the language writes it.
    #[must_use]
    pub const fn words(self) -> &'static str {
        match self {
            Method::Trapezoidal => "trapezoidal rule",
            Method::BackwardEuler => "backward Euler",
            Method::Exact => "exact propagation",
        }
    }
}

/// What `limit` raises.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs, reason = "the words of the language")]
pub enum Limit {
    Steps,
    Events,
    Unknowns,
    Parts,
    Nesting,
}

impl Limit {
    /// Every limit with its word and its default.
    pub const ALL: &'static [(&'static str, Limit, u64)] = &[
        ("steps", Limit::Steps, 10_000_000),
        ("events", Limit::Events, 100_000),
        ("unknowns", Limit::Unknowns, 5_000_000),
        ("parts", Limit::Parts, 5_000_000),
        ("nesting", Limit::Nesting, 64),
    ];
}

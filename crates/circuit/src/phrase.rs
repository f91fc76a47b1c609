//! Signals, edges, windows and readings as written.

use crate::expr::Expr;
use crate::span::{Name, Span};

/// A quantity of the circuit over time, taken at a part's terminals.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Signal {
    /// `voltage across PART`: first node less second node, V.
    VoltageAcross(Name),
    /// `voltage at NODE`, against ground, V.
    VoltageAt(Name),
    /// `voltage from NODE to NODE`, V.
    VoltageFrom(Name, Name),
    /// `current through PART`: in at the first node, out at the second, A.
    CurrentThrough(Name),
    /// `power into PART`, W.
    PowerInto(Name),
    /// `charge held by CAPACITOR`: of the ideal element within, C.
    ChargeHeld(Name),
    /// `flux held by INDUCTOR`: linked with it, mutual flux included, Wb.
    FluxHeld(Name),
    /// `energy held by PART` or by a coupling, J.
    EnergyHeld(Name),
}

/// One of the changes of a part, as an instant: `second opening of fire`.
#[derive(Clone, Debug, PartialEq)]
pub struct Edge {
    /// The part that changes.
    pub part: Name,
    /// The change.
    pub kind: EdgeKind,
    /// Which one; none written means the first, or at a window's end the next after its start.
    pub ordinal: Option<Ordinal>,
    /// Where it stands.
    pub span: Span,
}

/// The changes that edges name.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
#[non_exhaustive]
pub enum EdgeKind {
    /// `closing of SWITCH`
    Closing,
    /// `opening of SWITCH`
    Opening,
    /// `moving of CHANGEOVER to NODE`
    Moving(Name),
    /// `conducting of DIODE`
    Conducting,
    /// `blocking of DIODE`
    Blocking,
}

impl std::hash::Hash for Name {
    fn hash<H: std::hash::Hasher>(&self, state: &mut H) {
        self.text.hash(state);
    }
}

/// Which of several edges.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Ordinal {
    /// `first` is 1, `tenth` is 10.
    Nth(u8),
    /// The last one in the shot.
    Last,
}

/// A part of the span, in which a reading is taken. `None` in a [`Phrase`] is the whole span.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Window {
    /// `between T1 and T2`
    Between(Expr, Expr),
    /// `after T`
    After(Expr),
    /// `before T`
    Before(Expr),
    /// `while fire is closed and relay is at pad`
    While(Vec<Condition>),
    /// `during phase 2 of SIGNAL`
    Phase {
        /// Counted from 1.
        number: u32,
        /// The signal whose runs of one sign are counted.
        signal: Expr,
    },
}

/// One condition of a `while` window.
#[derive(Clone, Debug, PartialEq)]
pub struct Condition {
    /// A switch or a changeover.
    pub part: Name,
    /// The state that it must be in.
    pub state: StateWord,
}

/// A state of a switch or changeover.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum StateWord {
    /// `closed`
    Closed,
    /// `open`
    Open,
    /// `at NODE`
    At(Name),
}

/// A reading's phrase: what is measured, and in which window.
#[derive(Clone, Debug, PartialEq)]
pub struct Phrase {
    /// What is measured.
    pub measure: Measure,
    /// Where in the span; `None` is all of it.
    pub window: Option<Window>,
    /// Where it stands.
    pub span: Span,
}

/// What a reading measures. Each expression named `signal` is a signal, each `time` a time.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
#[allow(
    missing_docs,
    reason = "the fields are named as in the language reference"
)]
pub enum Measure {
    /// `energy into PART`, J.
    EnergyInto(Name),
    /// `energy out of PART`, J.
    EnergyOutOf(Name),
    /// `charge through PART`, C.
    Charge(Name),
    /// `gross charge through PART`, C.
    GrossCharge(Name),
    /// `action of PART`, A²·s.
    Action(Name),
    /// `heat in PART`, J.
    Heat(Name),
    /// `area of SIGNAL`.
    Area(Expr),
    /// `highest SIGNAL`.
    Highest(Expr),
    /// `lowest SIGNAL`.
    Lowest(Expr),
    /// `largest SIGNAL`: of the absolute value.
    Largest(Expr),
    /// `peak to peak SIGNAL`.
    PeakToPeak(Expr),
    /// `steepest SIGNAL`, with `between jumps` where jumps do not count.
    Steepest { signal: Expr, between_jumps: bool },
    /// `mean SIGNAL`.
    Mean(Expr),
    /// `rms SIGNAL`.
    Rms(Expr),
    /// `SIGNAL at T`.
    At { signal: Expr, time: Expr },
    /// `SIGNAL just before T`.
    JustBefore { signal: Expr, time: Expr },
    /// `final SIGNAL`.
    Final(Expr),
    /// `time of highest SIGNAL`, `lowest`, `largest`.
    TimeOf { extreme: Extreme, signal: Expr },
    /// `time SIGNAL first rises through LEVEL`.
    Crossing {
        signal: Expr,
        which: Which,
        direction: Direction,
        level: Level,
    },
    /// `time SIGNAL is above LEVEL` (or below).
    TimeSpent {
        signal: Expr,
        above: bool,
        level: Level,
    },
    /// `rise of SIGNAL from 10 % to 90 %`.
    Rise { signal: Expr, from: Expr, to: Expr },
    /// `fall of SIGNAL from 90 % to 10 %`.
    Fall { signal: Expr, from: Expr, to: Expr },
    /// `front time of SIGNAL from 30 % to 90 %`.
    FrontTime { signal: Expr, from: Expr, to: Expr },
    /// `virtual origin of SIGNAL from 30 % to 90 %`.
    VirtualOrigin { signal: Expr, from: Expr, to: Expr },
    /// `time to half value of SIGNAL with front from 30 % to 90 %`.
    TimeToHalf { signal: Expr, from: Expr, to: Expr },
    /// `width of SIGNAL at 50 %`.
    Width { signal: Expr, fraction: Expr },
    /// `undershoot of SIGNAL`.
    Undershoot(Expr),
    /// `overshoot of SIGNAL over VALUE`.
    Overshoot { signal: Expr, over: Expr },
    /// `tilt of SIGNAL`.
    Tilt(Expr),
    /// `settling time of SIGNAL to VALUE`.
    Settling { signal: Expr, to: Expr },
    /// `period of SIGNAL`.
    Period(Expr),
    /// `energy stored at T`, by the whole circuit, J.
    StoredAt(Expr),
    /// `energy stored just before T`, J.
    StoredJustBefore(Expr),
    /// `duration WINDOW`, s.
    Duration,
}

/// Which extreme.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs, reason = "the words of the language")]
pub enum Extreme {
    Highest,
    Lowest,
    Largest,
}

/// The first or the last crossing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs, reason = "the words of the language")]
pub enum Which {
    First,
    Last,
}

/// The direction of a crossing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs, reason = "the words of the language")]
pub enum Direction {
    Rises,
    Falls,
}

/// A level that a signal crosses.
#[derive(Clone, Debug, PartialEq)]
pub enum Level {
    /// A value of the signal's dimension.
    Value(Expr),
    /// `P % of largest`; the expression is the share.
    OfLargest(Expr),
}

//! A circuit with numbers in: what the engine fires, for one set of let-values.
//!
//! Node 0 is ground. Every index is into the vectors of the same [`Setup`]. All numbers are in
//! coherent SI units.

use crate::draft::Method;
use crate::formula::Formula;

/// Index of a node; 0 is ground.
pub type NodeIndex = usize;
/// Index of a part in [`Setup::parts`], which is that of the draft's part.
pub type PartIndex = usize;

/// A circuit with numbers in.
#[derive(Clone, Debug, PartialEq)]
pub struct Setup {
    /// The nodes' names; `nodes[0]` is `ground`.
    pub nodes: Vec<String>,
    /// The parts, in the draft's order, couplings included.
    pub parts: Vec<SetPart>,
    /// How long the shot is followed, s.
    pub span: f64,
    /// Starts in the steady state, else at rest.
    pub steady: bool,
    /// The integrator.
    pub method: Method,
    /// The error allowed in each reading, relative to its scale.
    pub error: f64,
    /// Fixed step, s; `None` lets the tool choose.
    pub step: Option<f64>,
    /// The limits in force.
    pub limits: Limits,
}

/// Limits of a run; at each there is an error that names it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs, reason = "the words of the language")]
pub struct Limits {
    pub steps: u64,
    pub events: u64,
    pub unknowns: u64,
    pub parts: u64,
    pub nesting: u64,
}

impl Element {
    /// Whether it stores energy.
    #[must_use]
    pub const fn stores(&self) -> bool {
        matches!(self, Element::Capacitor { .. } | Element::Inductor { .. })
    }
}

impl Default for Limits {
    fn default() -> Self {
        Limits {
            steps: 10_000_000,
            events: 100_000,
            unknowns: 5_000_000,
            parts: 5_000_000,
            nesting: 64,
        }
    }
}

/// A part with numbers in.
#[derive(Clone, Debug, PartialEq)]
pub struct SetPart {
    /// Its name.
    pub name: String,
    /// Its kind and numbers.
    pub element: Element,
}

/// The kinds of part with their numbers.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
#[allow(
    missing_docs,
    reason = "a, b: first and second node; the rest is named as in the language, in SI units"
)]
pub enum Element {
    Resistor {
        a: NodeIndex,
        b: NodeIndex,
        ohms: Ohms,
    },
    Capacitor {
        a: NodeIndex,
        b: NodeIndex,
        farads: f64,
        charged: Option<f64>,
        series: f64,
        leakage: Option<f64>,
    },
    Inductor {
        a: NodeIndex,
        b: NodeIndex,
        henrys: f64,
        carrying: Option<f64>,
        winding: f64,
    },
    Coupling {
        first: PartIndex,
        second: PartIndex,
        factor: f64,
    },
    Wire {
        a: NodeIndex,
        b: NodeIndex,
    },
    Voltage {
        a: NodeIndex,
        b: NodeIndex,
        source: Formula,
    },
    Current {
        a: NodeIndex,
        b: NodeIndex,
        source: Formula,
    },
    Switch {
        a: NodeIndex,
        b: NodeIndex,
        control: SetControl,
        contact: Option<f64>,
        insulation: Option<f64>,
    },
    /// `contacts[0]` and `contacts[1]` are the two nodes; `at` the index of the one it starts at.
    Changeover {
        common: NodeIndex,
        contacts: [NodeIndex; 2],
        at: usize,
        actions: Vec<SetAction>,
        contact: Option<f64>,
        insulation: Option<f64>,
    },
    Diode {
        a: NodeIndex,
        b: NodeIndex,
        threshold: f64,
        slope: f64,
    },
}

/// A resistance, or one of the two circuit words.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Ohms {
    /// In ohm.
    Finite(f64),
    /// `open circuit`
    Open,
    /// `short circuit`
    Short,
}

/// What sets a switch's state.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs, reason = "as in parts::Control")]
pub enum SetControl {
    Schedule {
        closed: bool,
        actions: Vec<SetAction>,
    },
    Ganged(PartIndex),
}

/// One action with numbers in.
#[derive(Clone, Debug, PartialEq)]
pub struct SetAction {
    /// The state it brings: for a switch 0 is open and 1 closed, for a changeover the index of
    /// the contact.
    pub state: usize,
    /// What sets it off.
    pub triggers: Vec<SetTrigger>,
}

/// A trigger with numbers in.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum SetTrigger {
    /// At an instant, s.
    At(f64),
    /// When a signal meets a level.
    When {
        /// The signal.
        signal: Formula,
        /// How.
        passing: crate::schedule::Passing,
        /// The level.
        level: f64,
    },
    /// A delay after an edge; the delay is a formula of numbers and earlier edges, s.
    Delay {
        /// The delay.
        delay: Formula,
        /// The edge.
        edge: SetEdge,
    },
    /// At the first zero of the switch's current after a time (a formula of numbers and edges).
    ZeroCurrent {
        /// From when on; `None` is the action's turn.
        after: Option<Formula>,
    },
}

/// An edge with indices in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct SetEdge {
    /// The part.
    pub part: PartIndex,
    /// The state it enters: for a switch 0 open and 1 closed, for a changeover the contact's
    /// index, for a diode 0 blocks and 1 conducts.
    pub state: usize,
    /// Which one; `None` where none was written.
    pub ordinal: Option<crate::phrase::Ordinal>,
}

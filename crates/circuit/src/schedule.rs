//! What a switch does and when, as written.

use crate::expr::Expr;
use crate::phrase::Edge;
use crate::span::{Name, Span};
use crate::spread::Value;

/// One action of a schedule. Actions are taken in order, each waiting for the one before it.
#[derive(Clone, Debug, PartialEq)]
pub struct Action {
    /// What it does.
    pub change: Change,
    /// What sets it off: the first of these to come.
    pub triggers: Vec<Trigger>,
    /// Where it stands.
    pub span: Span,
}

/// What an action does.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Change {
    /// `closes`
    Closes,
    /// `opens`
    Opens,
    /// `moves to NODE`
    MovesTo(Name),
}

/// What sets an action off.
#[derive(Clone, Debug, PartialEq)]
pub struct Trigger {
    /// Its form.
    pub kind: TriggerKind,
    /// Where it stands.
    pub span: Span,
}

/// The forms of a trigger.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum TriggerKind {
    /// `at 1 ms`
    At(Value),
    /// `when SIGNAL falls below LEVEL` and the like.
    When {
        /// The signal watched.
        signal: Expr,
        /// How the level is met.
        passing: Passing,
        /// The level.
        level: Value,
    },
    /// `0.5 ms after opening of other`; the delay may use earlier edges in a bracket.
    Delay {
        /// The delay, s.
        delay: Value,
        /// The edge it counts from.
        edge: Edge,
    },
    /// `at zero current`, `at zero current after 25 ms`: the first zero from then on.
    ZeroCurrent {
        /// A time or an edge; `None` is the action's turn.
        after: Option<Expr>,
    },
}

/// How a level is met.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Passing {
    /// `falls below`: passed downwards, by crossing or by jump.
    FallsBelow,
    /// `rises above`
    RisesAbove,
    /// `is below`: acts on the state itself, at once too.
    IsBelow,
    /// `is above`
    IsAbove,
}

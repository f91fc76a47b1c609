//! A switch: ideal unless it states a contact or an insulation resistance.

use crate::schedule::Action;
use crate::span::Name;
use crate::spread::Value;

/// A switch.
#[derive(Clone, Debug, PartialEq)]
pub struct Switch {
    /// First node; the reference direction is from it to the second.
    pub from: Name,
    /// Second node.
    pub to: Name,
    /// What sets its state.
    pub control: Control,
    /// Resistance when closed, ohm, 0 or more; `None` is 0 V.
    pub contact: Option<Value>,
    /// Resistance when open, ohm, above 0; `None` is 0 A.
    pub insulation: Option<Value>,
}

/// What sets a switch's state.
#[derive(Clone, Debug, PartialEq)]
pub enum Control {
    /// A starting state and a schedule.
    Schedule {
        /// Closed at the start.
        closed: bool,
        /// The schedule.
        actions: Vec<Action>,
    },
    /// `ganged with OTHER`: always in the state of another switch, in the same events.
    Ganged(Name),
}

//! A changeover: one common contact that rests on one of two nodes.

use crate::schedule::Action;
use crate::span::Name;
use crate::spread::Value;

/// A changeover switch; its current is the common contact's, flowing in there.
#[derive(Clone, Debug, PartialEq)]
pub struct Changeover {
    /// The common contact's node.
    pub common: Name,
    /// One of the two nodes it rests on.
    pub first: Name,
    /// The other.
    pub second: Name,
    /// Where it starts: `first` or `second` by name.
    pub start: Name,
    /// Its schedule.
    pub actions: Vec<Action>,
    /// Resistance of the contact made, ohm, 0 or more; `None` is 0 V.
    pub contact: Option<Value>,
    /// Resistance of the contact left, ohm, above 0; `None` is 0 A.
    pub insulation: Option<Value>,
}

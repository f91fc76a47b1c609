//! An ideal valve: conducts from its first node to its second.

use crate::span::Name;
use crate::spread::Value;

/// A diode.
#[derive(Clone, Debug, PartialEq)]
pub struct Diode {
    /// First node; the reference direction is from it to the second.
    pub from: Name,
    /// Second node.
    pub to: Name,
    /// Voltage at which it begins to conduct, V, 0 or more.
    pub threshold: Option<Value>,
    /// Resistance while it conducts, ohm, 0 or more.
    pub slope: Option<Value>,
}

//! A resistor: v = R i.

use crate::span::Name;
use crate::spread::Value;

/// A resistor.
#[derive(Clone, Debug, PartialEq)]
pub struct Resistor {
    /// First node; the reference direction is from it to the second.
    pub from: Name,
    /// Second node.
    pub to: Name,
    /// Resistance, ohm, above 0; or an open or a short circuit.
    pub value: Value,
}

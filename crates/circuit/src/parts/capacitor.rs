//! A capacitor: i = C v' of the ideal capacitance, with its leakage across it and its series resistance outside both.

use crate::span::Name;
use crate::spread::Value;

/// A capacitor.
#[derive(Clone, Debug, PartialEq)]
pub struct Capacitor {
    /// First node; the reference direction is from it to the second.
    pub from: Name,
    /// Second node.
    pub to: Name,
    /// Capacitance, F, above 0.
    pub value: Value,
    /// Voltage of the ideal capacitance at the start, V.
    pub charged: Option<Value>,
    /// Series resistance, ohm, 0 or more.
    pub series: Option<Value>,
    /// Leakage resistance across the ideal capacitance, ohm, above 0.
    pub leakage: Option<Value>,
}

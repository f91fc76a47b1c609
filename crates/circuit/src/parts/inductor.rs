//! An inductor: v = L i' of the ideal inductance, with its winding resistance in series.

use crate::span::Name;
use crate::spread::Value;

/// An inductor.
#[derive(Clone, Debug, PartialEq)]
pub struct Inductor {
    /// First node; the reference direction is from it to the second.
    pub from: Name,
    /// Second node.
    pub to: Name,
    /// Inductance, H, above 0.
    pub value: Value,
    /// Current at the start, A.
    pub carrying: Option<Value>,
    /// Winding resistance, ohm, 0 or more.
    pub winding: Option<Value>,
}

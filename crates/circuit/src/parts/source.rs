//! Ideal voltage and current sources.

use crate::span::Name;
use crate::spread::Value;

/// A source; which of the two is said by the kind of the part.
#[derive(Clone, Debug, PartialEq)]
pub struct Source {
    /// First node; the reference direction is from it to the second.
    pub from: Name,
    /// Second node.
    pub to: Name,
    /// Its value over time, V or A: an expression of let-values, `t` and signals.
    pub value: Value,
}

//! Magnetic coupling of two inductors; dots at their first nodes.

use crate::span::Name;
use crate::spread::Value;

/// A coupling: mutual inductance k sqrt(L1 L2).
#[derive(Clone, Debug, PartialEq)]
pub struct Coupling {
    /// One inductor.
    pub first: Name,
    /// The other.
    pub second: Name,
    /// The coupling factor k, between -1 and 1, both excluded.
    pub factor: Value,
}

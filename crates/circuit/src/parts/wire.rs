//! An ideal connection, whose current can be read.

use crate::span::Name;

/// A wire.
#[derive(Clone, Debug, PartialEq)]
pub struct Wire {
    /// First node; the reference direction is from it to the second.
    pub from: Name,
    /// Second node.
    pub to: Name,
}

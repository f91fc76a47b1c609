//! The data as the language writes them: canonical text of expressions, phrases and claims.
//!
//! Reading the text back gives the same data: a number keeps its shortest digits that name
//! the same `f64`, with an SI prefix so that 1 <= mantissa < 1000; brackets stand only where
//! the reading would change without them. Statements and lines are the printer's, not ours.

mod claim;
mod expression;
mod number;
mod phrase;

pub use number::{quantity, share, text_of};
pub use phrase::ORDINALS;

use std::fmt::{self, Display};

use crate::spread::{Spread, SpreadKind, Value};

impl Display for Value {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}", self.nominal)?;
        self.spread.as_ref().map_or(Ok(()), |s| write!(f, ", {s}"))
    }
}

impl Display for Spread {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match &self.kind {
            SpreadKind::Tolerance(a) => write!(f, "tolerance {a}"),
            SpreadKind::Limits(a, b) => write!(f, "tolerance {a} to {b}"),
            SpreadKind::Deviation(a) => write!(f, "standard deviation {a}"),
            SpreadKind::Lognormal(a) => write!(f, "standard deviation {a} lognormal"),
        }
    }
}

//! How a value varies in a study, and a value with it.

use crate::expr::Expr;
use crate::span::Span;

/// A value with what it varies by.
#[derive(Clone, Debug, PartialEq)]
pub struct Value {
    /// The nominal value, an expression of let-values.
    pub nominal: Expr,
    /// What it varies by in a study; a single shot uses the nominal value.
    pub spread: Option<Spread>,
}

impl From<Expr> for Value {
    fn from(nominal: Expr) -> Self {
        Value {
            nominal,
            spread: None,
        }
    }
}

/// What a value varies by.
#[derive(Clone, Debug, PartialEq)]
pub struct Spread {
    /// The form of the spread.
    pub kind: SpreadKind,
    /// Where it stands.
    pub span: Span,
}

/// The forms of a spread. Amounts are shares of the nominal value or of its dimension.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum SpreadKind {
    /// `tolerance 5 %` or `tolerance 50 us`: drawn evenly within plus and minus the amount.
    Tolerance(Expr),
    /// `tolerance -20 % to 50 %`: drawn evenly between the limits.
    Limits(Expr, Expr),
    /// `standard deviation 2 %`: normal, cut at three.
    Deviation(Expr),
    /// `standard deviation 25 % lognormal`: of the logarithm.
    Lognormal(Expr),
}

impl SpreadKind {
    /// Its expressions: the amount, or the lower and the upper limit.
    pub(crate) fn amounts(&self) -> Vec<&Expr> {
        match self {
            SpreadKind::Tolerance(e) | SpreadKind::Deviation(e) | SpreadKind::Lognormal(e) => {
                vec![e]
            }
            SpreadKind::Limits(low, high) => vec![low, high],
        }
    }
}

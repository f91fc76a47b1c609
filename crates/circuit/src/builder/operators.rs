//! Arithmetic of expressions: `+ - * /` and the sign, also of phrases and edges with numbers.

use std::ops::{Add, Div, Mul, Neg, Sub};

use crate::dimension::Dimension;
use crate::expr::{Expr, ExprKind, Operator};
use crate::phrase::{Edge, Phrase, Signal};
use crate::span::Span;

impl From<f64> for Expr {
    fn from(value: f64) -> Self {
        Expr::number(value, Dimension::NONE)
    }
}

impl From<Phrase> for Expr {
    fn from(phrase: Phrase) -> Self {
        let span = phrase.span;
        Expr::new(ExprKind::Reading(Box::new(phrase)), span)
    }
}

impl From<Edge> for Expr {
    fn from(edge: Edge) -> Self {
        let span = edge.span;
        Expr::new(ExprKind::Edge(Box::new(edge)), span)
    }
}

impl From<Signal> for Expr {
    fn from(signal: Signal) -> Self {
        Expr::signal(signal)
    }
}

macro_rules! operators {
    ($($left:ty),*) => {$(
        operators!(@ $left, Add, add, Operator::Add);
        operators!(@ $left, Sub, sub, Operator::Subtract);
        operators!(@ $left, Mul, mul, Operator::Multiply);
        operators!(@ $left, Div, div, Operator::Divide);

        impl Neg for $left {
            type Output = Expr;

            fn neg(self) -> Expr {
                Expr::new(ExprKind::Negative(Box::new(self.into())), Span::NONE)
            }
        }
    )*};
    (@ $left:ty, $trait:ident, $method:ident, $operator:expr) => {
        impl<R: Into<Expr>> $trait<R> for $left {
            type Output = Expr;

            fn $method(self, right: R) -> Expr {
                Expr::binary($operator, self.into(), right.into())
            }
        }
    };
}

operators!(Expr, Phrase, Edge);

impl Mul<Expr> for f64 {
    type Output = Expr;

    fn mul(self, right: Expr) -> Expr {
        Expr::binary(Operator::Multiply, self.into(), right)
    }
}

impl Div<Expr> for f64 {
    type Output = Expr;

    fn div(self, right: Expr) -> Expr {
        Expr::binary(Operator::Divide, self.into(), right)
    }
}

impl Expr {
    /// A power.
    ///
    /// ```
    /// use pulsewright_circuit::builder::*;
    /// assert_eq!(name("v").to_the(2.0).to_string(), "v^2");
    /// ```
    #[must_use]
    pub fn to_the(self, exponent: impl Into<Expr>) -> Expr {
        Expr::binary(Operator::Power, self, exponent.into())
    }
}

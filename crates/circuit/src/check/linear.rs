//! Controlled sources: linear in their signals, with factors that stay as they are.
//!
//! An expression is a *constant*, *timed* (of `t` alone), or *linear*: a timed part plus
//! constants times voltages, currents, charges or fluxes. Power and energy are products of
//! these, and so are products and functions of signals.

use super::Checker;
use crate::expr::{Expr, ExprKind, Operator};
use crate::index::Item;
use crate::phrase::Signal;
use crate::span::Span;

/// What an expression is of its signals.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Class {
    Constant,
    Timed,
    Linear,
    /// What is not linear, and whether it is a factor that changes with time.
    NotLinear {
        span: Span,
        text: String,
        changes: bool,
    },
}

impl Class {
    const fn rank(&self) -> u8 {
        match self {
            Class::Constant => 0,
            Class::Timed => 1,
            Class::Linear => 2,
            Class::NotLinear { .. } => 3,
        }
    }

    fn not_linear(e: &Expr, changes: bool) -> Class {
        Class::NotLinear {
            span: e.span,
            text: format!("`{e}`"),
            changes,
        }
    }
}

impl Checker<'_> {
    /// The class of a source's or a signal's expression.
    pub fn class(&self, e: &Expr) -> Class {
        match &e.kind {
            ExprKind::Time => Class::Timed,
            ExprKind::Signal(s) => match **s {
                Signal::PowerInto(_) | Signal::EnergyHeld(_) => Class::not_linear(e, false),
                _ => Class::Linear,
            },
            ExprKind::Name(name) => match self.index.names.get(name) {
                Some(Item::Signal(i)) => match self.classes.get(*i) {
                    Some(Class::NotLinear { changes, .. }) => Class::not_linear(e, *changes),
                    Some(class) => class.clone(),
                    None => Class::Constant,
                },
                _ => Class::Constant,
            },
            ExprKind::Negative(a) => self.class(a),
            ExprKind::Binary {
                operator,
                left,
                right,
                ..
            } => self.class_of_two(e, *operator, left, right),
            ExprKind::Call { arguments, .. } => self.curved(e, arguments.iter()),
            ExprKind::Points { argument, .. } => self.curved(e, std::iter::once(&**argument)),
            _ => Class::Constant,
        }
    }

    fn class_of_two(&self, e: &Expr, operator: Operator, left: &Expr, right: &Expr) -> Class {
        if operator == Operator::Power {
            return self.curved(e, [left, right].into_iter());
        }
        let (a, b) = (self.class(left), self.class(right));
        if a.rank() == 3 {
            return a;
        }
        if b.rank() == 3 {
            return b;
        }
        match operator {
            Operator::Multiply => match (a.rank(), b.rank()) {
                (2, 2) => Class::not_linear(e, false),
                (1, 2) => Class::not_linear(right, true),
                (2, 1) => Class::not_linear(left, true),
                _ => greater(a, b),
            },
            Operator::Divide => match (a.rank(), b.rank()) {
                (_, 2) => Class::not_linear(e, false),
                (2, 1) => Class::not_linear(left, true),
                _ => greater(a, b),
            },
            _ => greater(a, b),
        }
    }

    /// Of a function: not linear as soon as an argument uses signals.
    fn curved<'e>(&self, e: &Expr, arguments: impl Iterator<Item = &'e Expr>) -> Class {
        let most = arguments
            .map(|a| self.class(a))
            .fold(Class::Constant, greater);
        if most.rank() == 2 {
            Class::not_linear(e, false)
        } else {
            most
        }
    }
}

fn greater(a: Class, b: Class) -> Class {
    if b.rank() > a.rank() { b } else { a }
}

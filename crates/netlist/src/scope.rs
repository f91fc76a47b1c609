//! What a statement may use besides its own tokens: counters, and let-values for counts.
//!
//! Bounds and indices are whole numbers, worked out while reading, since they decide which
//! parts there are. They may use let-values; those are looked up here by name and worked out
//! on demand, each once, a circle being a mistake.

use std::cell::RefCell;
use std::collections::HashMap;

use pulsewright_circuit::expr::{Expr, ExprKind, Operator};

/// The whole numbers that doubles hold without gaps.
const MOST_WHOLE: f64 = 9_007_199_254_740_992.0;
/// How many operations and let-values may follow one out of the other.
const MOST_DEPTH: usize = 1000;

/// Let-values by name, and which of them counts have used.
#[derive(Default)]
pub(crate) struct Lets {
    values: HashMap<String, Expr>,
    worked_out: RefCell<HashMap<String, Worked>>,
}

/// A let-value as a count.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Count {
    Whole(i64),
    NotWhole,
    /// It is worked out from itself.
    Circle,
}

/// What working out a let-value has come to.
#[derive(Clone, Copy, Debug)]
enum Worked {
    /// It is under way, or goes in a circle.
    Circle,
    Number(f64),
    NoNumber,
}

impl Lets {
    pub(crate) fn new(values: HashMap<String, Expr>) -> Self {
        Lets {
            values,
            worked_out: RefCell::default(),
        }
    }

    pub(crate) fn get(&self, name: &str) -> Option<&Expr> {
        self.values.get(name)
    }

    /// The let-values that counts have used, in alphabetical order.
    pub(crate) fn counted(&self) -> Vec<String> {
        let mut names: Vec<String> = self.worked_out.borrow().keys().cloned().collect();
        names.sort_unstable();
        names
    }

    /// A let-value as a whole number; `None` where there is none of that name.
    pub(crate) fn count(&self, name: &str) -> Option<Count> {
        self.values.get(name)?;
        Some(match self.work_out(name, 0) {
            #[allow(clippy::cast_possible_truncation, reason = "whole and within range")]
            Worked::Number(x) if x.fract() == 0.0 && x.abs() <= MOST_WHOLE => {
                Count::Whole(x as i64)
            }
            Worked::Circle => Count::Circle,
            _ => Count::NotWhole,
        })
    }

    /// A let-value as a plain number, worked out once.
    fn work_out(&self, name: &str, depth: usize) -> Worked {
        if let Some(known) = self.worked_out.borrow().get(name) {
            return *known;
        }
        let Some(expr) = self.values.get(name) else {
            return Worked::NoNumber;
        };
        self.worked_out
            .borrow_mut()
            .insert(name.to_owned(), Worked::Circle);
        let worked = self.number(expr, depth).map_or_else(|w| w, Worked::Number);
        self.worked_out.borrow_mut().insert(name.to_owned(), worked);
        worked
    }

    fn number(&self, expr: &Expr, depth: usize) -> Result<f64, Worked> {
        if depth > MOST_DEPTH {
            return Err(Worked::NoNumber);
        }
        match &expr.kind {
            ExprKind::Number {
                value,
                dimension,
                share: false,
            } if dimension.is_none() => Ok(*value),
            ExprKind::Negative(a) => Ok(-self.number(a, depth + 1)?),
            ExprKind::Name(name) => match self.work_out(name, depth + 1) {
                Worked::Number(x) => Ok(x),
                other => Err(other),
            },
            ExprKind::Binary {
                operator,
                left,
                right,
                ..
            } => {
                let (a, b) = (
                    self.number(left, depth + 1)?,
                    self.number(right, depth + 1)?,
                );
                Ok(match operator {
                    Operator::Add => a + b,
                    Operator::Subtract => a - b,
                    Operator::Multiply => a * b,
                    Operator::Divide => a / b,
                    Operator::Power => a.powf(b),
                })
            }
            _ => Err(Worked::NoNumber),
        }
    }
}

/// What a statement is read with.
pub(crate) struct Scope<'a> {
    /// Counters of the blocks around it; `None` while a block is read for its form.
    pub(crate) counters: Vec<(&'a str, Option<i64>)>,
    pub(crate) lets: &'a Lets,
    /// How deep brackets and phrases may nest.
    pub(crate) nesting: usize,
    /// Whether signs are marked for the printer.
    pub(crate) marking: bool,
}

impl Scope<'_> {
    /// The counter of this name, the innermost first.
    pub(crate) fn counter(&self, name: &str) -> Option<Option<i64>> {
        self.counters
            .iter()
            .rev()
            .find(|(n, _)| *n == name)
            .map(|(_, v)| *v)
    }
}

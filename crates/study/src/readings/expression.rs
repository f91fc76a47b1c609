//! Expressions of readings: arithmetic on numbers that carry their scales.
//!
//! Recursion is as deep as the expression, which the circuit's check limits.

use pulsewright_circuit::expr::{ExprKind, Function, Operator};
use pulsewright_circuit::formula::{NoLeaves, Side};
use pulsewright_circuit::{Expr, Formula, LetValue};

use super::{Number, Reader, Sample, absent};

impl Reader<'_> {
    /// The value of an expression of readings and let-values.
    ///
    /// # Errors
    ///
    /// [`Lack`](super::Lack) where something in it has none.
    pub fn value(&self, expr: &Expr) -> Sample {
        match &expr.kind {
            ExprKind::Number { value, .. } => Ok(Number::exact(*value)),
            ExprKind::Pi => Ok(Number::exact(std::f64::consts::PI)),
            ExprKind::Name(name) => self.named(name),
            ExprKind::Negative(a) => self.value(a).map(Number::negative),
            ExprKind::Binary {
                operator,
                left,
                right,
                ..
            } => {
                let (a, b) = (self.value(left)?, self.value(right)?);
                let number = self.operation(*operator, a, b, expr)?;
                if number.value.is_finite() {
                    Ok(number)
                } else {
                    absent(format!("{expr} is no finite number"))
                }
            }
            ExprKind::Call {
                function,
                arguments,
            } => self.call(*function, arguments, expr),
            ExprKind::Reading(phrase) => self.measure(phrase),
            ExprKind::Edge(edge) => self.edge(edge),
            _ => absent(format!("{expr} is no reading")),
        }
    }

    fn named(&self, name: &str) -> Sample {
        if let Some(known) = self.named.borrow().get(name) {
            return known.clone();
        }
        let found = match (
            self.case.lets.get(name),
            self.case.circuit.find_reading(name),
        ) {
            (Some(LetValue::Number { value, .. }), _) => Ok(Number::exact(*value)),
            (None, Some(reading)) => self.value(&reading.value),
            (Some(_), _) => absent(format!("`{name}` is a circuit word in this case")),
            (None, None) => absent(format!("`{name}` is no reading")),
        };
        self.named
            .borrow_mut()
            .insert(name.to_owned(), found.clone());
        found
    }

    fn operation(&self, operator: Operator, a: Number, b: Number, expr: &Expr) -> Sample {
        match operator {
            Operator::Add => Ok(a.plus(b)),
            Operator::Subtract
                if self.case.circuit.dimension(expr) == pulsewright_circuit::Dimension::SECOND =>
            {
                Ok(Number::between(b, a))
            }
            Operator::Subtract => Ok(a.plus(b.negative())),
            Operator::Multiply => Ok(a.times(b)),
            Operator::Divide if b.value == 0.0 => absent(format!("{expr} divides by zero")),
            Operator::Divide => Ok(a.over(b)),
            Operator::Power => Ok(power(a, b)),
        }
    }

    fn call(&self, function: Function, arguments: &[Expr], expr: &Expr) -> Sample {
        let numbers = arguments
            .iter()
            .map(|a| self.value(a))
            .collect::<Result<Vec<_>, _>>()?;
        let number = match (function, numbers.as_slice()) {
            (Function::Min | Function::Max, [first, rest @ ..]) => rest
                .iter()
                .fold(*first, |best, next| chosen(function, best, *next)),
            (_, [x]) => applied(function, *x),
            _ => return absent(format!("{expr} is no reading")),
        };
        if number.value.is_finite() {
            Ok(number)
        } else {
            absent(format!("{expr} is no finite number"))
        }
    }
}

fn chosen(function: Function, a: Number, b: Number) -> Number {
    let first = (a.value <= b.value) == (function == Function::Min);
    let value = if first { a.value } else { b.value };
    Number {
        value,
        scale: a.scale.max(b.scale),
        size: a.size.max(b.size),
    }
}

fn applied(function: Function, x: Number) -> Number {
    let jet = Formula::Call(function, vec![Formula::Time]).jet(x.value, Side::After, &NoLeaves);
    x.mapped(jet.value, finite(jet.rate))
}

fn power(a: Number, b: Number) -> Number {
    let formula = Formula::Power(Box::new(Formula::Time), Box::new(Formula::Number(b.value)));
    let by_base = formula.jet(a.value, Side::After, &NoLeaves);
    let made = a.mapped(by_base.value, finite(by_base.rate));
    let by_exponent = finite(by_base.value * a.value.ln()).abs();
    if b.size == 0.0 && b.scale == b.value.abs() {
        return made;
    }
    Number {
        scale: made.scale + by_exponent * b.scale,
        size: made.size + by_exponent * b.size,
        ..made
    }
}

fn finite(d: f64) -> f64 {
    if d.is_finite() { d } else { 0.0 }
}

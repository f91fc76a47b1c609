//! Expressions, with brackets only where the reading would change without them.
//!
//! Operators bind, weakest first: `+ -`, then `* /`, then a sign, then `^` (to the right).
//! `1 / (2 ohm)` keeps its bracket: without it, a reader might mean `(1/2) ohm`.

use std::fmt::{self, Display, Formatter};

use super::number::text_of;
use crate::expr::{Expr, ExprKind, Function, Operator};

/// How strongly an expression's outermost operator binds.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Binding {
    Sum,
    Product,
    Sign,
    Power,
    Atom,
}

fn binding(e: &Expr) -> Binding {
    match &e.kind {
        ExprKind::Binary {
            operator: Operator::Add | Operator::Subtract,
            ..
        } => Binding::Sum,
        ExprKind::Binary {
            operator: Operator::Multiply | Operator::Divide,
            ..
        } => Binding::Product,
        ExprKind::Negative(_) => Binding::Sign,
        ExprKind::Number { value, .. } if *value < 0.0 => Binding::Sign,
        ExprKind::Binary {
            operator: Operator::Power,
            ..
        } => Binding::Power,
        _ => Binding::Atom,
    }
}

impl Display for Expr {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match &self.kind {
            ExprKind::Number {
                value,
                dimension,
                share,
            } => f.write_str(&text_of(*value, *dimension, *share)),
            ExprKind::Name(name) => f.write_str(name),
            ExprKind::Time => f.write_str("t"),
            ExprKind::Pi => f.write_str("pi"),
            ExprKind::Negative(a) => {
                f.write_str("-")?;
                within(f, a, Binding::Power)
            }
            ExprKind::Binary {
                operator: Operator::Power,
                left,
                right,
                ..
            } => power(f, left, right),
            ExprKind::Binary { .. } => chain(f, self),
            ExprKind::Call {
                function,
                arguments,
            } => call(f, *function, arguments),
            ExprKind::Points { argument, knots } => points(f, argument, knots),
            ExprKind::Signal(s) => write!(f, "{s}"),
            ExprKind::Reading(p) => write!(f, "{p}"),
            ExprKind::Edge(e) => write!(f, "{e}"),
            ExprKind::OpenCircuit => f.write_str("open circuit"),
            ExprKind::ShortCircuit => f.write_str("short circuit"),
        }
    }
}

/// A run of `+ -`, or of `* /`, from the left; a long one needs no deep recursion.
fn chain(f: &mut Formatter<'_>, e: &Expr) -> fmt::Result {
    let level = binding(e);
    let (mut first, mut rest) = (e, Vec::new());
    while let ExprKind::Binary {
        operator,
        left,
        right,
        ..
    } = &first.kind
        && binding(first) == level
    {
        rest.push((*operator, &**left, &**right));
        first = left;
    }
    within(f, first, level)?;
    let above = if level == Binding::Sum {
        Binding::Product
    } else {
        Binding::Sign
    };
    for (operator, left, right) in rest.into_iter().rev() {
        write!(f, " {} ", operator.sign())?;
        if operator == Operator::Divide && has_unit(right) && only_numbers(left) {
            write!(f, "({right})")?;
        } else {
            within(f, right, above)?;
        }
    }
    Ok(())
}

fn power(f: &mut Formatter<'_>, base: &Expr, exponent: &Expr) -> fmt::Result {
    let bare = matches!(
        base.kind,
        ExprKind::Name(_) | ExprKind::Time | ExprKind::Pi | ExprKind::Call { .. }
    ) || matches!(base.kind, ExprKind::Number { value, .. } if value >= 0.0 && !has_unit(base));
    if bare {
        write!(f, "{base}")?
    } else {
        write!(f, "({base})")?
    }
    f.write_str("^")?;
    if has_unit(exponent) || is_phrase(exponent) {
        write!(f, "({exponent})")
    } else {
        within(f, exponent, Binding::Sign)
    }
}

/// The expression, in brackets where it binds less than `least`.
fn within(f: &mut Formatter<'_>, e: &Expr, least: Binding) -> fmt::Result {
    if binding(e) < least {
        write!(f, "({e})")
    } else {
        write!(f, "{e}")
    }
}

fn call(f: &mut Formatter<'_>, function: Function, arguments: &[Expr]) -> fmt::Result {
    write!(f, "{}(", function.name())?;
    for (i, a) in arguments.iter().enumerate() {
        write!(f, "{}{a}", if i == 0 { "" } else { ", " })?;
    }
    f.write_str(")")
}

fn points(f: &mut Formatter<'_>, argument: &Expr, knots: &[(Expr, Expr)]) -> fmt::Result {
    write!(f, "points({argument}")?;
    for (x, y) in knots {
        write!(f, "; {x}: {y}")?;
    }
    f.write_str(")")
}

fn has_unit(e: &Expr) -> bool {
    matches!(&e.kind, ExprKind::Number { dimension, share, .. } if *share || !dimension.is_none())
}

fn is_phrase(e: &Expr) -> bool {
    matches!(
        e.kind,
        ExprKind::Signal(_) | ExprKind::Reading(_) | ExprKind::Edge(_)
    )
}

/// Whether it is made of numbers without a unit alone.
fn only_numbers(e: &Expr) -> bool {
    let mut stack = vec![e];
    while let Some(e) = stack.pop() {
        match &e.kind {
            ExprKind::Number { .. } if !has_unit(e) => {}
            ExprKind::Negative(a) => stack.push(a),
            ExprKind::Binary { left, right, .. } => stack.extend([&**left, &**right]),
            _ => return false,
        }
    }
    true
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::dimension::Dimension;
    use crate::phrase::Signal;

    fn n(x: f64) -> Expr {
        Expr::number(x, Dimension::NONE)
    }

    fn op(operator: Operator, left: Expr, right: Expr) -> Expr {
        Expr::binary(operator, left, right)
    }

    fn minus(e: Expr) -> Expr {
        Expr::new(ExprKind::Negative(Box::new(e)), crate::Span::NONE)
    }

    fn check(e: Expr, text: &str) {
        assert_eq!(e.to_string(), text);
    }

    #[test]
    fn brackets_stand_where_a_product_holds_a_sum() {
        let sum = op(Operator::Add, n(1.0), Expr::share(0.05));
        check(
            op(Operator::Multiply, Expr::number(100.0, Dimension::OHM), sum),
            "100 ohm * (1 + 5 %)",
        );
    }

    #[test]
    fn a_difference_on_the_right_keeps_its_bracket() {
        let right = op(Operator::Subtract, Expr::name("b"), Expr::name("c"));
        check(
            op(Operator::Subtract, Expr::name("a"), right),
            "a - (b - c)",
        );
        let left = op(Operator::Subtract, Expr::name("a"), Expr::name("b"));
        check(op(Operator::Subtract, left, Expr::name("c")), "a - b - c");
    }

    #[test]
    fn powers_group_to_the_right() {
        let right = op(Operator::Power, Expr::name("b"), Expr::name("c"));
        check(op(Operator::Power, Expr::name("a"), right), "a^b^c");
        let left = op(Operator::Power, Expr::name("a"), Expr::name("b"));
        check(op(Operator::Power, left, Expr::name("c")), "(a^b)^c");
        check(minus(op(Operator::Power, Expr::name("a"), n(2.0))), "-a^2");
        check(
            op(Operator::Power, minus(Expr::name("a")), n(2.0)),
            "(-a)^2",
        );
        check(op(Operator::Power, n(2.0), minus(n(3.0))), "2^-3");
    }

    #[test]
    fn a_quantity_is_raised_in_brackets() {
        check(
            op(
                Operator::Power,
                Expr::number(4800.0, Dimension::VOLT),
                n(2.0),
            ),
            "(4.8 kV)^2",
        );
    }

    #[test]
    fn a_bare_fraction_of_a_unit_is_not_written() {
        check(
            op(Operator::Divide, n(1.0), Expr::number(2.0, Dimension::OHM)),
            "1 / (2 ohm)",
        );
        check(
            op(
                Operator::Divide,
                Expr::name("v"),
                Expr::number(2.0, Dimension::OHM),
            ),
            "v / 2 ohm",
        );
    }

    #[test]
    fn phrases_stand_in_expressions_as_they_are() {
        check(
            op(
                Operator::Multiply,
                n(10.0),
                Expr::signal(Signal::VoltageAt("sense".into())),
            ),
            "10 * voltage at sense",
        );
    }

    #[test]
    fn a_long_sum_needs_no_deep_stack() {
        let mut e = n(1.0);
        for _ in 0..20_000 {
            e = op(Operator::Add, e, n(1.0));
        }
        assert_eq!(e.to_string().len(), 1 + 4 * 20_000);
        std::mem::forget(e);
    }
}

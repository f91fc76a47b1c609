//! Where mistakes stand: at the value, at the operator, at a circle's first member.

use super::*;
use crate::Dimension;
use crate::draft::{Draft, Let};
use crate::expr::{Expr, ExprKind, Operator};
use crate::span::{Name, Span};

fn number(value: f64, dimension: Dimension, start: u32, end: u32) -> Expr {
    let kind = ExprKind::Number {
        value,
        dimension,
        share: false,
    };
    Expr::new(kind, Span::new(start, end))
}

fn with_let(value: Expr) -> Draft {
    let mut draft = stage().draft().clone();
    draft.lets.push(Let {
        name: Name::new("x", Span::new(4, 5)),
        value: value.into(),
    });
    draft
}

fn first(draft: Draft) -> (&'static str, u32, u32) {
    let fault = draft.check().unwrap_err().remove(0);
    (fault.code, fault.span.start, fault.span.end)
}

#[test]
fn a_sum_of_unlike_things_is_marked_at_its_operator() {
    let (left, right) = (
        number(1.0, Dimension::VOLT, 8, 11),
        number(2.0, Dimension::OHM, 14, 19),
    );
    let kind = ExprKind::Binary {
        operator: Operator::Add,
        at: Span::new(12, 13),
        left: Box::new(left),
        right: Box::new(right),
    };
    assert_eq!(
        first(with_let(Expr::new(kind, Span::new(8, 19)))),
        ("P0151", 12, 13)
    );
}

#[test]
fn a_wrong_unit_is_marked_at_the_value() {
    let mut draft = stage().draft().clone();
    draft.run.span = Some(number(1.0, Dimension::VOLT, 205, 208));
    assert_eq!(first(draft), ("P0150", 205, 208));
}

#[test]
fn a_circle_is_marked_at_the_member_that_stands_first() {
    let mut draft = with_let(name("y"));
    draft.lets.insert(
        0,
        Let {
            name: Name::new("y", Span::new(90, 91)),
            value: name("x").into(),
        },
    );
    let fault = draft.check().unwrap_err().remove(0);
    assert_eq!(
        (fault.span.start, fault.message.as_str()),
        (4, "`x` is in a circle: `x` uses `y`, `y` uses `x`")
    );
}

#[test]
fn mistakes_stand_in_the_order_of_the_text() {
    let mut draft = with_let(number(1.0, Dimension::VOLT, 8, 9));
    draft.run.step = Some(number(1.0, Dimension::VOLT, 300, 303));
    draft.run.span = Some(number(1.0, Dimension::NONE, 100, 103));
    let starts: Vec<u32> = draft
        .check()
        .unwrap_err()
        .iter()
        .map(|f| f.span.start)
        .collect();
    assert_eq!(starts, [100, 300]);
}

//! Numbers with their units.
//!
//! ```text
//! value   = number [ product [ "/" ( factor | "(" product ")" ) ] ]
//! product = factor ( "*" factor )*
//! factor  = unit [ "²" ]
//! ```
//!
//! What could be meant in two ways is a mistake that offers both: `^` after a unit, more than
//! one unit after `/`, and `1/2 ohm`.

use pulsewright_circuit::{Dimension, Expr, ExprKind, Span};

use super::{Mark, Parser, Read};
use crate::slip::What;
use crate::token::{Gap, Kind};
use crate::unit::{Unit, near_unit, unit, value};
use crate::words::{AFTER_NUMBER, is_connective};

impl Parser<'_> {
    /// A number, with its unit where it has one.
    pub(super) fn number(&mut self) -> Read<Expr> {
        let from = self.at;
        let place = self.place();
        let number = self.token(0).map_or("", |t| t.text(self.text));
        self.at += 1;
        let unit_from = self.at;
        let unit = self.units()?;
        self.refuse_unknown_unit(from);
        let span = self.since(from);
        let given = unit.unwrap_or(Unit::ONE);
        let held = self.held(number, given, place);
        if unit.is_some() && self.kind(0) == Some(Kind::Caret) {
            return self.power_on_unit(from, unit_from);
        }
        let (dimension, share) = (given.dimension, given.share);
        Ok(Expr::new(
            ExprKind::Number {
                value: held,
                dimension,
                share,
            },
            span,
        ))
    }

    /// The number's value; one that no double holds is noted.
    fn held(&mut self, number: &str, unit: Unit, place: Span) -> f64 {
        let x = value(number, unit);
        if x.is_finite() && (x != 0.0 || is_zero(number)) {
            return x;
        }
        if !x.is_nan() {
            let size = if x == 0.0 { "smaller" } else { "larger" };
            let number = super::shown(number);
            self.note(place, What::NumberRange { number, size });
        }
        1.0
    }

    /// Whether the number `ahead` has a unit straight after it.
    pub(super) fn has_unit(&self, ahead: usize) -> bool {
        self.kind(ahead) == Some(Kind::Number) && self.factor_at(ahead + 1).is_some()
    }

    /// The unit at `ahead`, and how many tokens it takes.
    fn factor_at(&self, ahead: usize) -> Option<(Unit, usize)> {
        let token = self
            .token(ahead)
            .filter(|t| matches!(t.kind, Kind::Word | Kind::Percent))?;
        let one = unit(token.text(self.text))?;
        let squared = self
            .token(ahead + 1)
            .is_some_and(|t| t.kind == Kind::Square && t.before == Gap::None);
        if squared {
            one.squared().map(|u| (u, 2))
        } else {
            Some((one, 1))
        }
    }

    fn factor(&mut self) -> Option<Unit> {
        let (unit, n) = self.factor_at(0)?;
        for i in 0..n {
            self.mark(self.at + i, Mark::Unit);
        }
        self.at += n;
        Some(unit)
    }

    /// The unit here, if one stands here.
    fn units(&mut self) -> Read<Option<Unit>> {
        let from = self.at;
        let Some(first) = self.factor() else {
            return Ok(None);
        };
        let mut all = self.unit_product(first)?;
        if self.kind(0) == Some(Kind::Slash) {
            if self.factor_at(1).is_some() {
                self.unit_sign();
                let below = self.factor().unwrap_or(Unit::ONE);
                all = self.joined(all.over(below))?;
                self.refuse_more_units(from)?;
            } else if self.kind(1) == Some(Kind::Open) && self.factor_at(2).is_some() {
                self.unit_sign();
                self.unit_sign();
                let first = self.factor().unwrap_or(Unit::ONE);
                let below = self.unit_product(first)?;
                all = self.joined(all.over(below))?;
                self.mark(self.at, Mark::Unit);
                self.expect(Kind::Close, ")")?;
                self.refuse_more_units(from)?;
            }
        }
        Ok(Some(all))
    }

    fn unit_sign(&mut self) {
        self.mark(self.at, Mark::Unit);
        self.at += 1;
    }

    fn unit_product(&mut self, first: Unit) -> Read<Unit> {
        let mut all = first;
        while self.kind(0) == Some(Kind::Star) && self.factor_at(1).is_some() {
            self.unit_sign();
            let next = self.factor().unwrap_or(Unit::ONE);
            all = self.joined(all.times(next))?;
        }
        Ok(all)
    }

    fn joined(&self, unit: Option<Unit>) -> Read<Unit> {
        match unit {
            Some(unit) => Ok(unit),
            None => self.slip(self.place(), What::UnitPower),
        }
    }

    /// `J/ohm*s`, `V/s/s`: read to their end and refused.
    fn refuse_more_units(&mut self, from: usize) -> Read<()> {
        let more = |p: &Self| {
            matches!(p.kind(0), Some(Kind::Star | Kind::Slash)) && p.factor_at(1).is_some()
        };
        if !more(self) {
            return Ok(());
        }
        while more(self) {
            self.unit_sign();
            self.factor();
        }
        let span = self.since(from);
        let text: String = self.source(span).chars().filter(|c| *c != ' ').collect();
        let write = match text.split_once('/') {
            Some((top, below)) => {
                let below = below.replace(['/', '*'], "*").replace(['(', ')'], "");
                format!("{top}/({below})")
            }
            None => text.clone(),
        };
        self.note(span, What::UnitQuotient { unit: text, write });
        Ok(())
    }

    /// A word after a number that is no unit and that nothing else can make of.
    fn refuse_unknown_unit(&mut self, from: usize) {
        let Some(word) = self.word(0) else { return };
        let after_unit = self.at > from + 1;
        if after_unit || is_connective(word) || AFTER_NUMBER.contains(&word) || unit(word).is_some()
        {
            return;
        }
        let number = self.source(self.since(from));
        self.note(
            self.place(),
            What::UnknownUnit {
                number,
                unit: word.to_owned(),
                near: near_unit(word),
            },
        );
        self.at += 1;
        if self.kind(0) == Some(Kind::Square) {
            self.at += 1;
        }
    }

    fn power_on_unit(&mut self, from: usize, unit_from: usize) -> Read<Expr> {
        let value = self.source(self.since(from));
        let number = self.source(self.tokens.get(from).map_or(Span::NONE, |t| t.span()));
        let units = self.source(self.since(unit_from));
        let power = self.token(1).map_or("2", |t| t.text(self.text)).to_owned();
        let simple = self.at == unit_from + 1;
        let squared = (simple && power == "2").then(|| format!("{number} {units}²"));
        self.slip(
            self.place(),
            What::PowerOnUnit {
                value,
                power,
                squared,
            },
        )
    }
}

fn is_zero(number: &str) -> bool {
    let mantissa = number.split(['e', 'E']).next().unwrap_or_default();
    !mantissa.chars().any(|c| matches!(c, '1'..='9'))
}

/// The dimension of an expression that is made of written numbers alone.
pub(super) fn written_dimension(expr: &Expr) -> Option<Dimension> {
    use pulsewright_circuit::expr::Operator::{Add, Divide, Multiply, Power, Subtract};
    match &expr.kind {
        ExprKind::Number { dimension, .. } => Some(*dimension),
        ExprKind::Pi => Some(Dimension::NONE),
        ExprKind::Negative(a) => written_dimension(a),
        ExprKind::Binary {
            operator,
            left,
            right,
            ..
        } => {
            let (a, b) = (written_dimension(left)?, written_dimension(right)?);
            match operator {
                Add | Subtract => (a == b).then_some(a),
                Multiply => a.times(b),
                Divide => a.over(b),
                Power => a.is_none().then_some(a),
            }
        }
        _ => None,
    }
}

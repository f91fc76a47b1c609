//! Whole-number arithmetic: bounds and indices, with `+ - *`, brackets and let-values.
//!
//! ```text
//! whole   = product ( ( "+" | "-" ) product )*
//! product = operand ( "*" operand )*
//! operand = digits | name | "-" operand | "(" whole ")"
//! ```
//!
//! `None` stands for a number that is not known yet: a counter while a `repeat` is read for
//! its form.

use super::{Mark, Parser, Read};
use crate::scope::{Count, Scope};
use crate::slip::What;
use crate::token::{Kind, Token};
use pulsewright_circuit::Name;

/// A known whole number, or one that depends on a counter yet unknown.
type Whole = Option<i64>;

/// `repeat k from 1 to 40`.
pub(crate) struct RepeatHead {
    pub(crate) counter: Name,
    pub(crate) bounds: (Whole, Whole),
}

/// Reads the head of a `repeat`; the counter's name also where the bounds are amiss.
pub(crate) fn repeat_head<'a>(
    text: &'a str,
    tokens: &'a [Token],
    scope: &'a Scope<'a>,
) -> (
    Option<RepeatHead>,
    Vec<crate::slip::Slip>,
    Vec<(usize, Mark)>,
) {
    let mut parser = Parser::new(text, tokens, scope);
    parser.named_by = 1;
    let head = parser.repeat();
    let head = parser.recover(head);
    (head, parser.slips, parser.marks)
}

impl Parser<'_> {
    fn repeat(&mut self) -> Read<RepeatHead> {
        self.at += 1;
        let counter = self.new_name()?;
        self.named_by = self.at;
        self.expect_word("from")?;
        let from = self.whole()?;
        self.expect_word("to")?;
        let to = self.whole()?;
        self.finish()?;
        Ok(RepeatHead {
            counter,
            bounds: (from, to),
        })
    }

    /// A whole number.
    pub(super) fn whole(&mut self) -> Read<Whole> {
        let mut sum = self.whole_product()?;
        loop {
            let place = self.place();
            let add = match self.kind(0) {
                Some(Kind::Plus) => i64::checked_add,
                Some(Kind::Minus) => i64::checked_sub,
                Some(Kind::Slash | Kind::Caret) => {
                    return self.slip(
                        place,
                        What::WholeForm {
                            text: self.source(place),
                        },
                    );
                }
                _ => return Ok(sum),
            };
            self.at += 1;
            let next = self.whole_product()?;
            sum = self.both(place, sum, next, add)?;
        }
    }

    fn whole_product(&mut self) -> Read<Whole> {
        let mut product = self.whole_operand()?;
        loop {
            let place = self.place();
            if !self.take(Kind::Star) {
                return Ok(product);
            }
            let next = self.whole_operand()?;
            product = self.both(place, product, next, i64::checked_mul)?;
        }
    }

    fn both(
        &self,
        place: pulsewright_circuit::Span,
        a: Whole,
        b: Whole,
        join: fn(i64, i64) -> Option<i64>,
    ) -> Read<Whole> {
        match (a, b) {
            (Some(a), Some(b)) => match join(a, b) {
                Some(c) => Ok(Some(c)),
                None => self.slip(place, What::WholeOverflow),
            },
            _ => Ok(None),
        }
    }

    fn whole_operand(&mut self) -> Read<Whole> {
        let mut negative = false;
        while self.kind(0) == Some(Kind::Minus) {
            self.mark(self.at, Mark::Sign);
            self.at += 1;
            negative = !negative;
        }
        let place = self.place();
        let value = match self.kind(0) {
            Some(Kind::Number) => self.whole_number()?,
            Some(Kind::Word) => self.whole_name()?,
            Some(Kind::Open) => {
                self.at += 1;
                let inner = self.deeper(Parser::whole)?;
                self.expect(Kind::Close, ")")?;
                inner
            }
            None => return self.expected("a whole number", &[]),
            Some(_) => {
                return self.slip(
                    place,
                    What::WholeForm {
                        text: self.source(place),
                    },
                );
            }
        };
        match value {
            Some(v) if negative => match v.checked_neg() {
                Some(v) => Ok(Some(v)),
                None => self.slip(place, What::WholeOverflow),
            },
            v => Ok(v),
        }
    }

    fn whole_number(&mut self) -> Read<Whole> {
        let place = self.place();
        let text = self.source(place);
        self.at += 1;
        let digits: String = text.chars().filter(|c| *c != '_').collect();
        if !digits.chars().all(|c| c.is_ascii_digit()) {
            return self.slip(
                place,
                What::NotWhole {
                    what: format!("`{text}`"),
                },
            );
        }
        match digits.parse() {
            Ok(n) => Ok(Some(n)),
            Err(_) => self.slip(place, What::WholeOverflow),
        }
    }

    fn whole_name(&mut self) -> Read<Whole> {
        let name = self.indexed()?;
        if let Some(value) = self.scope.counter(&name.text) {
            return Ok(value);
        }
        match self.scope.lets.count(&name.text) {
            Some(Count::Whole(n)) => Ok(Some(n)),
            Some(Count::Circle) => self.slip(name.span, What::WholeCircle { name: name.text }),
            Some(Count::NotWhole) => self.slip(
                name.span,
                What::NotWhole {
                    what: format!("`{}`", name.text),
                },
            ),
            None if name.text.contains('[') && !self.scope.counters.is_empty() => Ok(None),
            None => self.slip(
                name.span,
                What::NotWhole {
                    what: format!("`{}`", name.text),
                },
            ),
        }
    }
}

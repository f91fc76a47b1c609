//! The slots within phrases: places for one signal, one time, one level.
//!
//! ```text
//! slot   = [ "-" ] value | name | bracket | function "(" … ")"
//! signal = slot | a signal's phrase
//! time   = slot | an edge | a reading's phrase that is a time
//! level  = slot [ "of largest" ]
//! ```
//!
//! So a phrase ends where its slots are filled: `highest a - b` is the highest of `a`, less `b`.

use pulsewright_circuit::phrase::Level;
use pulsewright_circuit::{Expr, ExprKind};

use super::expr::Deep;
use super::{Mark, Parser, Read};
use crate::slip::What;
use crate::token::Kind;

/// First words of the readings that are times.
const TIMES: &[&str] = &[
    "time", "rise", "fall", "front", "virtual", "width", "settling", "period", "duration",
];

impl Parser<'_> {
    fn slot(&mut self, what: &str) -> Read<Deep> {
        match self.kind(0) {
            Some(Kind::Minus) if self.kind(1) == Some(Kind::Number) => {
                let from = self.at;
                self.mark(self.at, Mark::Sign);
                self.at += 1;
                let number = self.number()?;
                let span = self.since(from);
                self.counted(Expr::new(ExprKind::Negative(Box::new(number)), span), 1)
            }
            Some(Kind::Minus) => self.slip(self.place(), What::BracketsNeeded),
            Some(Kind::Number) => Ok(self.number()?.into()),
            Some(Kind::Open) => self.bracket(),
            Some(Kind::Word) if !self.begins_reading() => match self.named() {
                Ok(value) => Ok(value),
                Err(slip)
                    if matches!(slip.what, What::Expected { near: None, .. })
                        && slip.span == self.place() =>
                {
                    self.expected(what, &[])
                }
                Err(slip) => Err(slip),
            },
            _ => self.expected(what, &[]),
        }
    }

    /// A signal within a phrase.
    pub(super) fn signal_slot(&mut self) -> Read<Deep> {
        if let Some(signal) = self.signal_phrase()? {
            return Ok(signal.into());
        }
        self.slot("a signal")
    }

    /// A time within a phrase.
    pub(super) fn time_slot(&mut self) -> Read<Deep> {
        if let Some(edge) = self.edge_phrase()? {
            let span = edge.span;
            return Ok(Expr::new(ExprKind::Edge(Box::new(edge)), span).into());
        }
        if self.begins_reading() && self.word(0).is_some_and(|w| TIMES.contains(&w)) {
            return self.deeper(Parser::reading_phrase);
        }
        self.slot("a time or an edge")
    }

    /// A value within a phrase.
    pub(super) fn value_slot(&mut self) -> Read<Deep> {
        self.slot("a value")
    }

    /// A level that a signal crosses.
    pub(super) fn level(&mut self) -> Read<(Level, usize)> {
        let Deep { expr, depth } = self.value_slot()?;
        if self.is_word(0, "of") {
            self.expect_words(&["of", "largest"])?;
            return Ok((Level::OfLargest(expr), depth));
        }
        Ok((Level::Value(expr), depth))
    }

    /// One of these words after a signal; an operator there wants brackets.
    pub(super) fn expected_after_signal<T>(&self, expected: &str, words: &[&str]) -> Read<T> {
        if matches!(
            self.kind(0),
            Some(Kind::Plus | Kind::Minus | Kind::Star | Kind::Slash | Kind::Caret)
        ) {
            return self.slip(self.place(), What::BracketsNeeded);
        }
        self.expected(expected, words)
    }
}

//! Written times and fractions in readings: within the span, in order.
//!
//! A time of numbers and let-values counts as written; one that uses an edge or a reading is
//! computed in the shot, and then the reading is absent where it makes no sense.

use super::Setter;
use crate::dimension::Dimension;
use crate::expr::{Expr, ExprKind};
use crate::fault::{Bound, FaultKind};
use crate::index::Item;
use crate::phrase::{Level, Measure, Phrase, Window};

impl Setter<'_> {
    /// Checks every phrase in a reading, and the knots of its signals.
    pub fn reading(&mut self, e: &Expr) {
        let mut phrases = Vec::new();
        crate::walk::each(e, &mut |e, _| {
            if let ExprKind::Reading(phrase) = &e.kind {
                phrases.push(&**phrase);
            }
        });
        self.knots(e);
        for phrase in phrases {
            self.phrase(phrase);
        }
    }

    fn phrase(&mut self, phrase: &Phrase) {
        match &phrase.measure {
            Measure::At { time, .. }
            | Measure::JustBefore { time, .. }
            | Measure::StoredAt(time)
            | Measure::StoredJustBefore(time) => {
                self.written(time);
            }
            Measure::Crossing {
                level: Level::OfLargest(e),
                ..
            }
            | Measure::TimeSpent {
                level: Level::OfLargest(e),
                ..
            }
            | Measure::Width { fraction: e, .. } => {
                self.fraction(e);
            }
            Measure::Rise { from, to, .. } => self.fractions("rise", from, to, true),
            Measure::Fall { from, to, .. } => self.fractions("fall", from, to, false),
            Measure::FrontTime { from, to, .. } => self.fractions("front time", from, to, true),
            Measure::VirtualOrigin { from, to, .. } => {
                self.fractions("virtual origin", from, to, true)
            }
            Measure::TimeToHalf { from, to, .. } => {
                self.fractions("time to half value", from, to, true)
            }
            _ => {}
        }
        match &phrase.window {
            Some(Window::Between(from, to)) => {
                if let (Some(start), Some(end)) = (self.written(from), self.written(to))
                    && end <= start
                {
                    self.fault(FaultKind::WindowOrder { start, end }.at(to.span));
                }
            }
            Some(Window::After(e) | Window::Before(e)) => {
                self.written(e);
            }
            _ => {}
        }
    }

    /// The number of a written time that lies within the span.
    fn written(&mut self, e: &Expr) -> Option<f64> {
        if !self.is_written(e) {
            return None;
        }
        let time = self.finite(e, "a time")?;
        let span = self.span?;
        if time < 0.0 || time > span {
            self.fault(FaultKind::OutsideSpan { time, span }.at(e.span));
            return None;
        }
        Some(time)
    }

    /// Whether it is made of numbers and let-values alone.
    pub fn is_written(&self, e: &Expr) -> bool {
        !crate::walk::any(e, &|e| match &e.kind {
            ExprKind::Reading(_) | ExprKind::Edge(_) | ExprKind::Signal(_) => true,
            ExprKind::Name(name) => !matches!(self.index.names.get(name), Some(Item::Let(_))),
            _ => false,
        })
    }

    fn fraction(&mut self, e: &Expr) -> Option<f64> {
        self.share(e, "a fraction of the largest value", Bound::From(0.0, 1.0))
    }

    fn fractions(&mut self, phrase: &'static str, from: &Expr, to: &Expr, rising: bool) {
        let (low, high) = (self.fraction(from), self.fraction(to));
        if let (Some(a), Some(b)) = (low, high)
            && (if rising { a >= b } else { a <= b })
        {
            self.fault(
                FaultKind::FractionOrder {
                    phrase,
                    from: a,
                    to: b,
                    rising,
                }
                .at(from.span.to(to.span)),
            );
        }
    }

    /// A number that is written must meet a bound; one that is computed is left to the shot.
    pub fn written_number(
        &mut self,
        e: &Expr,
        what: &str,
        dimension: Dimension,
        bound: Bound,
    ) -> Option<f64> {
        if self.is_written(e) {
            self.number(e, what, dimension, bound)
        } else {
            None
        }
    }
}

//! A remark on sums of phrases of which some have a window and others none: a window belongs
//! to the one phrase before it, which a reader of the sum easily overlooks.

use super::Checker;
use crate::expr::Operator::{Add, Multiply, Subtract};
use crate::expr::{Expr, ExprKind};
use crate::fault::FaultKind;
use crate::phrase::{Measure, Phrase};

impl Checker<'_> {
    pub(super) fn sums(&mut self) {
        let draft = self.draft;
        let readings = draft.readings.iter().map(|r| &r.value);
        for e in readings.chain(draft.claims.iter().map(|c| &c.reading)) {
            self.sums_within(e);
        }
    }

    /// Looks at every sum that is no term of another sum.
    fn sums_within(&mut self, e: &Expr) {
        let mut stack = vec![e];
        while let Some(e) = stack.pop() {
            if !is_sum(e) {
                crate::walk::children(e, &mut |c| stack.push(c));
                continue;
            }
            let (mut terms, mut inner) = (vec![e], Vec::new());
            let mut phrases: Vec<&Phrase> = Vec::new();
            while let Some(term) = terms.pop() {
                match &term.kind {
                    ExprKind::Binary {
                        operator: Add | Subtract | Multiply,
                        left,
                        right,
                        ..
                    } => {
                        terms.extend([&**right, &**left]);
                    }
                    ExprKind::Negative(a) => terms.push(a),
                    ExprKind::Reading(p) => {
                        phrases.push(p);
                        inner.push(term);
                    }
                    _ => inner.push(term),
                }
            }
            self.compare(&phrases);
            for e in inner {
                crate::walk::children(e, &mut |c| stack.push(c));
            }
        }
    }

    fn compare(&mut self, phrases: &[&Phrase]) {
        let with = phrases.iter().find(|p| windowed(p) == Some(true));
        let without = phrases.iter().find(|p| windowed(p) == Some(false));
        if let (Some(with), Some(without)) = (with, without) {
            let kind = FaultKind::PartlyWindowed {
                with: with.to_string(),
                without: without.to_string(),
            };
            self.remarks.push(kind.at(without.span));
        }
    }
}

fn is_sum(e: &Expr) -> bool {
    matches!(
        &e.kind,
        ExprKind::Binary {
            operator: Add | Subtract,
            ..
        }
    )
}

/// Whether a phrase has a window or an instant; `None` where it takes neither.
fn windowed(phrase: &Phrase) -> Option<bool> {
    match phrase.measure {
        Measure::Final(_) => None,
        Measure::At { .. }
        | Measure::JustBefore { .. }
        | Measure::StoredAt(_)
        | Measure::StoredJustBefore(_) => Some(true),
        _ => Some(phrase.window.is_some()),
    }
}

//! The run: a span, times and shares where they belong, channels that are signals, limits.

use super::Checker;
use super::typing::Place;
use crate::dimension::Dimension;
use crate::draft::Limit;
use crate::fault::FaultKind;
use crate::span::Span;

impl Checker<'_> {
    pub(super) fn run(&mut self) {
        let draft = self.draft;
        match &draft.run.span {
            Some(e) => {
                self.of(
                    e,
                    Place::Constant("the span"),
                    "the span",
                    Dimension::SECOND,
                );
            }
            None => self.fault(FaultKind::NoSpan.at(Span::new(0, 0))),
        }
        if let Some(e) = &draft.run.step {
            self.of(
                e,
                Place::Constant("the time step"),
                "the time step",
                Dimension::SECOND,
            );
        }
        if let Some(e) = &draft.run.error {
            self.share(e, "the allowed error");
        }
        for e in draft.run.channels.iter().flatten() {
            self.measured(e);
        }
        for (limit, n, span) in &draft.run.limits {
            if *n == 0 {
                let word = Limit::ALL
                    .iter()
                    .find(|(_, l, _)| l == limit)
                    .map_or("", |(word, ..)| word);
                self.fault(FaultKind::ZeroLimit { limit: word }.at(*span));
            }
        }
        self.number_of_parts();
    }

    fn number_of_parts(&mut self) {
        let written = self
            .draft
            .run
            .limits
            .iter()
            .rev()
            .find(|(l, ..)| *l == Limit::Parts)
            .map(|(_, n, _)| *n);
        let limit = written.unwrap_or(crate::setup::Limits::default().parts);
        let count = self.draft.parts.len() as u64;
        if count > limit
            && limit > 0
            && let Some(first) = usize::try_from(limit)
                .ok()
                .and_then(|i| self.draft.parts.get(i))
        {
            let span = first.name.span;
            self.fault(FaultKind::TooManyParts { count, limit }.at(span));
        }
    }
}

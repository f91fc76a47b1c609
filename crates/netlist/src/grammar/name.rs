//! Names: `bank`, `n[3]`, `l[k][2*k+1]`.
//!
//! An index is worked out while reading and printed without leading zeros, so that `n[03]` and
//! `n[2+1]` are one node. Where a counter is unknown the name keeps the text of its index.

use std::fmt::Write as _;

use pulsewright_circuit::{Name, Span};

use super::{Mark, Parser, Read};
use crate::slip::What;
use crate::token::{Gap, Kind};
use crate::words::is_connective;

impl Parser<'_> {
    /// A node's or a part's name; `what` says which (`a node`).
    pub(super) fn thing(&mut self, what: &str) -> Read<Name> {
        match self.word(0) {
            Some(word) if !is_connective(word) || word == "in" => self.indexed(),
            _ => self.expected(what, &[]),
        }
    }

    /// The name of a let-value, a signal, a reading, a claim or a counter.
    pub(super) fn new_name(&mut self) -> Read<Name> {
        match self.word(0) {
            Some(_) => self.indexed(),
            None => self.expected("a name", &[]),
        }
    }

    /// The word here with its indices.
    pub(super) fn indexed(&mut self) -> Read<Name> {
        let from = self.at;
        let word = self.word(0).unwrap_or_default();
        let place = self.place();
        self.at += 1;
        if !word.is_ascii() || !word.starts_with(|c: char| c.is_ascii_alphabetic()) {
            self.note(
                place,
                What::NameForm {
                    name: word.to_owned(),
                },
            );
        }
        let mut text = word.to_owned();
        while self.kind(0) == Some(Kind::OpenIndex) {
            self.index(&mut text, from)?;
        }
        self.refuse_inner(from)?;
        Ok(Name::new(text, self.since(from)))
    }

    fn index(&mut self, text: &mut String, from: usize) -> Read<()> {
        let bracket = self.place();
        if self.token(0).is_some_and(|t| t.before != Gap::None) {
            self.note(
                bracket,
                What::BlankBeforeIndex {
                    name: self.source(self.since(from)),
                },
            );
        }
        let open = self.at;
        self.at += 1;
        let inner = self.at;
        let value = self.deeper(Parser::whole)?;
        let place = self.since(inner);
        self.expect(Kind::CloseIndex, "]")?;
        for i in open..self.at {
            self.mark(i, Mark::Index);
        }
        match value {
            Some(value) if value < 0 => {
                let name = self.source(self.since(from));
                self.slip(place, What::NegativeIndex { name, value })
            }
            Some(value) => {
                let _ = write!(text, "[{value}]");
                Ok(())
            }
            None => {
                let _ = write!(text, "[{}]", self.source(place));
                Ok(())
            }
        }
    }

    /// `s1.coil` reaches into an assembly.
    fn refuse_inner(&mut self, from: usize) -> Read<()> {
        let dotted =
            self.kind(0) == Some(Kind::Dot) && self.token(0).is_some_and(|t| t.before == Gap::None);
        if !dotted || self.word(1).is_none() {
            return Ok(());
        }
        self.at += 2;
        let what = format!(
            "`{}`, a name within an assembly,",
            self.source(self.since(from))
        );
        self.slip(self.since(from), What::Later { what })
    }

    /// Where the name at `ahead` tokens from here ends: the number of tokens up to past it.
    pub(super) fn past_name(&self, ahead: usize) -> Option<usize> {
        self.word(ahead)
            .filter(|w| !is_connective(w) || *w == "in")?;
        let mut ahead = ahead + 1;
        while self.kind(ahead) == Some(Kind::OpenIndex) {
            while self.kind(ahead)? != Kind::CloseIndex {
                ahead += 1;
            }
            ahead += 1;
        }
        Some(ahead)
    }

    /// The span of what was taken since a token, for names and phrases.
    pub(super) fn span_since(&self, from: usize) -> Span {
        self.since(from)
    }
}

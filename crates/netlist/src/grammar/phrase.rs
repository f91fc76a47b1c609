//! Phrases whose first or second word is misspelt.
//!
//! A word of a phrase is a name unless the phrase's next word follows it, so `energy int r1` is
//! the name `energy` with something left over, and `enrgy into r1` the name `enrgy`. When a
//! statement is left over like that, the phrase that was probably meant is looked for here.

use pulsewright_circuit::Span;
use pulsewright_circuit::near::nearest;

use super::Parser;
use super::edge::ORDINAL;
use super::reading::BEGINNINGS;
use crate::slip::{Slip, What};
use crate::token::{Kind, Token};
use crate::words::ORDINALS;

/// First and second words of the phrases that are no readings.
const OTHERS: &[(&str, &[&str])] = &[
    ("voltage", &["across", "at", "from"]),
    ("current", &["through"]),
    ("power", &["into"]),
    ("charge", &["held"]),
    ("flux", &["held"]),
    ("energy", &["held"]),
    ("closing", &["of"]),
    ("opening", &["of"]),
    ("moving", &["of"]),
    ("conducting", &["of"]),
    ("blocking", &["of"]),
    ("open", &["circuit"]),
    ("short", &["circuit"]),
];

/// What is written for a word, but too unlike it to be a slip of the pen.
const SHORT: &[(&str, &str)] = &[("thru", "through"), ("in", "into")];

/// The word that was probably meant.
pub(super) fn meant<'a>(
    word: &str,
    mut words: impl Iterator<Item = &'a str> + Clone,
) -> Option<&'a str> {
    nearest(word, words.clone()).or_else(|| words.find(|w| SHORT.contains(&(word, w))))
}

impl Parser<'_> {
    /// The mistake of the word here that is near what a phrase's first word, before it, needs.
    pub(super) fn misspelt_second(&self) -> Option<Box<Slip>> {
        let before = self.at.checked_sub(1).and_then(|i| self.tokens.get(i))?;
        let (first, second) = (before.text(self.text), self.word(0)?);
        let seconds = BEGINNINGS
            .iter()
            .chain(OTHERS)
            .filter(|(f, _)| *f == first)
            .flat_map(|(_, s)| s.iter().copied());
        let meant = meant(second, seconds)?;
        let expected = format!("`{meant}` after `{first}`");
        Some(self.misspelt(self.place(), expected, second, meant))
    }

    /// The mistake of the word here, or of the one before it, that is near a phrase's word.
    pub(super) fn misspelt_phrase(&self) -> Option<Box<Slip>> {
        let before = self.at.checked_sub(1).and_then(|i| self.tokens.get(i))?;
        let (first, second) = (before.text(self.text), self.word(0)?);
        if let Some(slip) = self.misspelt_ordinal(before) {
            return Some(slip);
        }
        if let Some(slip) = self.misspelt_second() {
            return Some(slip);
        }
        let all = || BEGINNINGS.iter().chain(OTHERS);
        let firsts = all().filter(|(_, s)| s.contains(&second)).map(|(f, _)| *f);
        let alone = all()
            .filter(|(_, s)| s.is_empty() && self.begins_signal())
            .map(|(f, _)| *f);
        let meant = nearest(first, firsts.chain(alone))?;
        Some(self.misspelt(before.span(), format!("`{meant}`"), first, meant))
    }

    /// A word before `closing of` or its like that is near an ordinal, or follows `=`.
    fn misspelt_ordinal(&self, before: &Token) -> Option<Box<Slip>> {
        let found = before.text(self.text);
        if before.kind != Kind::Word || ORDINALS.contains(&found) || !self.is_change(0) {
            return None;
        }
        let near = nearest(found, ORDINALS.iter().copied());
        let alone = self.at.checked_sub(2).and_then(|i| self.tokens.get(i));
        if near.is_none() && alone.is_none_or(|t| t.kind != Kind::Equal) {
            return None;
        }
        let (within, expected) = (self.subject(), ORDINAL.to_owned());
        let what = What::Expected {
            within,
            expected: near.map_or(expected, |n| format!("`{n}`")),
            found: format!("`{found}`"),
            near: near.map(str::to_owned),
        };
        Some(Box::new(Slip::new(before.span(), what)))
    }

    fn misspelt(&self, place: Span, expected: String, found: &str, meant: &str) -> Box<Slip> {
        let (within, found, near) = (self.subject(), format!("`{found}`"), Some(meant.to_owned()));
        Box::new(Slip::new(
            place,
            What::Expected {
                within,
                expected,
                found,
                near,
            },
        ))
    }

    fn begins_signal(&self) -> bool {
        let second = |words: &[&str]| self.word(1).is_some_and(|w| words.contains(&w));
        self.word(0)
            .is_some_and(|w| OTHERS.iter().any(|(f, s)| *f == w && second(s)))
    }
}

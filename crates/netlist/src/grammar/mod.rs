//! The grammar: from the tokens of one statement to the data that it states.
//!
//! Every function reads from where the parser stands, takes what belongs to it, and says what
//! was expected where it cannot go on. A statement's first word decides what it is, and from
//! then on every message speaks of that statement. A mistake that leaves no doubt about what
//! was meant is noted and reading goes on ([`Parser::note`]); another ends its qualifier, and
//! reading goes on after the next comma.
//!
//! In a `repeat` a statement is read once for its form, with counters unknown, and once for
//! each round, with numbers in their place.

mod adjust;
mod claim;
mod edge;
mod expr;
mod name;
mod part;
mod phrase;
mod reading;
mod run;
mod schedule;
mod signal;
mod slot;
mod spread;
mod statement;
mod value;
mod whole;
mod window;

pub(crate) use statement::{Made, constant, read};
pub(crate) use whole::{RepeatHead, repeat_head};

use pulsewright_circuit::{Dimension, Expr, ExprKind, Span};

use self::phrase::meant;
use crate::scope::Scope;
use crate::slip::{Slip, What};
use crate::token::{Kind, Token};
use crate::unit::unit;
use pulsewright_circuit::near::nearest;

/// What a reader of part of a statement yields: the thing, or why there is none.
pub(crate) type Read<T> = Result<T, Box<Slip>>;

/// The most operations that an expression may hold one within or after the other.
const MOST_DEPTH: usize = 400;

/// Words that a value or a phrase may go on with.
const FURTHER: &[&str] = &[
    "between", "after", "before", "while", "during", "at", "just", "with", "or",
];

/// Words that begin a clause or a spread, after a comma.
const AFTER_COMMA: &[&str] = &["answers", "when", "allowing", "tolerance", "standard"];

/// What a sign is for the printer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Mark {
    /// A minus that stands before its one operand.
    Sign,
    /// A unit, or a sign within one.
    Unit,
    /// Within an index.
    Index,
    /// The bracket of a function.
    Call,
}

/// Where reading stands in a statement.
pub(crate) struct Parser<'a> {
    text: &'a str,
    tokens: &'a [Token],
    at: usize,
    scope: &'a Scope<'a>,
    slips: Vec<Slip>,
    nesting: usize,
    /// How many tokens name the statement in messages.
    named_by: usize,
    /// Set within the delay of a schedule.
    in_delay: bool,
    /// Signs by the number of their token in the statement.
    marks: Vec<(usize, Mark)>,
    /// The ratings of the part that is read.
    rated: Vec<Expr>,
}

impl<'a> Parser<'a> {
    pub(crate) fn new(text: &'a str, tokens: &'a [Token], scope: &'a Scope<'a>) -> Self {
        let (slips, marks) = (Vec::new(), Vec::new());
        Parser {
            text,
            tokens,
            at: 0,
            scope,
            slips,
            nesting: 0,
            named_by: 1,
            in_delay: false,
            marks,
            rated: Vec::new(),
        }
    }

    fn token(&self, ahead: usize) -> Option<&'a Token> {
        self.tokens.get(self.at + ahead)
    }

    fn kind(&self, ahead: usize) -> Option<Kind> {
        self.token(ahead).map(|t| t.kind)
    }

    /// The word `ahead` tokens from here.
    fn word(&self, ahead: usize) -> Option<&'a str> {
        self.token(ahead)
            .filter(|t| t.kind == Kind::Word)
            .map(|t| t.text(self.text))
    }

    fn is_word(&self, ahead: usize, word: &str) -> bool {
        self.word(ahead) == Some(word)
    }

    /// Whether these words stand here.
    fn are_words(&self, words: &[&str]) -> bool {
        words.iter().enumerate().all(|(i, w)| self.is_word(i, w))
    }

    /// Takes these words where all of them stand here.
    fn take_words(&mut self, words: &[&str]) -> bool {
        let found = self.are_words(words);
        if found {
            self.at += words.len();
        }
        found
    }

    fn take(&mut self, kind: Kind) -> bool {
        let found = self.kind(0) == Some(kind);
        self.at += usize::from(found);
        found
    }

    fn is_end(&self) -> bool {
        self.at >= self.tokens.len()
    }

    /// The place of the next token, or the one just past the last.
    fn place(&self) -> Span {
        self.token(0).map_or_else(|| self.end_place(), |t| t.span())
    }

    fn end_place(&self) -> Span {
        self.tokens
            .last()
            .map_or(Span::NONE, |t| Span::new(t.end, t.end))
    }

    /// From the token numbered `from` to the last one taken.
    fn since(&self, from: usize) -> Span {
        let first = self.tokens.get(from).map_or(Span::NONE, |t| t.span());
        let last = self
            .at
            .checked_sub(1)
            .and_then(|i| self.tokens.get(i))
            .map_or(Span::NONE, |t| t.span());
        if last.is_some() && first.is_some() && last.end < first.start {
            first
        } else {
            first.to(last)
        }
    }

    /// The text of a place, blanks and ends of lines as one blank.
    fn source(&self, span: Span) -> String {
        let text = self
            .text
            .get(span.start as usize..span.end as usize)
            .unwrap_or_default();
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    }

    fn note(&mut self, span: Span, what: What) {
        self.slips.push(Slip::new(span, what));
    }

    fn mark(&mut self, at: usize, mark: Mark) {
        if self.scope.marking {
            self.marks.push((at, mark));
        }
    }

    fn slip<T>(&self, span: Span, what: What) -> Read<T> {
        Err(Box::new(Slip::new(span, what)))
    }

    /// The statement as messages name it.
    fn subject(&self) -> String {
        let words: Vec<&str> = self
            .tokens
            .iter()
            .take(self.named_by)
            .map(|t| t.text(self.text))
            .collect();
        format!("`{}`", words.join(" "))
    }

    /// What stands here, for a message.
    fn found(&self) -> String {
        self.token(0).map_or_else(
            || "the end of the statement".to_owned(),
            |t| format!("`{}`", shown(t.text(self.text))),
        )
    }

    /// That something else was expected here; `words` are those that might have been meant.
    fn expected<T>(&self, expected: impl Into<String>, words: &[&str]) -> Read<T> {
        if let Some(slip) = self.unit_alone() {
            return Err(slip);
        }
        // A claim's `is` is nearer to `in` than `into` is, but the reading's own word decides.
        if words == ["is"]
            && let Some(slip) = self.misspelt_second()
        {
            return Err(slip);
        }
        let near = self
            .word(0)
            .and_then(|w| meant(w, words.iter().copied()))
            .map(str::to_owned);
        if let Some(slip) = self.misspelt_phrase().filter(|_| near.is_none()) {
            return Err(slip);
        }
        let (within, found) = (self.subject(), self.found());
        self.slip(
            self.place(),
            What::Expected {
                within,
                expected: expected.into(),
                found,
                near,
            },
        )
    }

    /// A unit where none can stand.
    fn unit_alone(&self) -> Option<Box<Slip>> {
        let token = self.token(0)?;
        let text = token.text(self.text);
        let is_unit = matches!(token.kind, Kind::Word | Kind::Percent) && unit(text).is_some();
        let before = self
            .at
            .checked_sub(1)
            .and_then(|i| self.tokens.get(i))
            .map(|t| t.kind);
        let operand = matches!(before, Some(Kind::Close | Kind::Word | Kind::CloseIndex));
        let write = if operand {
            format!("* 1 {text}")
        } else {
            format!("1 {text}")
        };
        is_unit.then(|| {
            Box::new(Slip::new(
                token.span(),
                What::UnitAlone {
                    unit: text.to_owned(),
                    write,
                },
            ))
        })
    }

    fn expect_word(&mut self, word: &'static str) -> Read<()> {
        if self.take_words(&[word]) {
            Ok(())
        } else {
            self.expected(format!("`{word}`"), &[word])
        }
    }

    fn expect_words(&mut self, words: &[&'static str]) -> Read<()> {
        words.iter().try_for_each(|w| self.expect_word(w))
    }

    fn expect(&mut self, kind: Kind, sign: &str) -> Read<()> {
        if self.take(kind) {
            Ok(())
        } else {
            self.expected(format!("`{sign}`"), &[])
        }
    }

    /// The place of the whole statement.
    fn whole_span(&self) -> Span {
        let last = self.tokens.last().map_or(Span::NONE, |t| t.span());
        self.tokens
            .first()
            .map_or(Span::NONE, |t| t.span().to(last))
    }

    /// Stands for an expression that could not be read.
    fn stand_in(&self) -> Expr {
        let kind = ExprKind::Number {
            value: 1.0,
            dimension: Dimension::NONE,
            share: false,
        };
        Expr::new(kind, self.whole_span())
    }

    /// Goes one bracket, phrase or index deeper.
    fn deeper<T>(&mut self, read: impl FnOnce(&mut Self) -> Read<T>) -> Read<T> {
        let limit = self.scope.nesting;
        if self.nesting >= limit {
            return self.slip(self.place(), What::TooDeep { limit });
        }
        self.nesting += 1;
        let result = read(self);
        self.nesting -= 1;
        result
    }

    /// Passes on to the next comma outside brackets, or to the end.
    fn skip_to_comma(&mut self) {
        let mut depth = 0_usize;
        while let Some(kind) = self.kind(0) {
            match kind {
                Kind::Open | Kind::OpenIndex => depth += 1,
                Kind::Close | Kind::CloseIndex => depth = depth.saturating_sub(1),
                Kind::Comma if depth == 0 => return,
                _ => {}
            }
            self.at += 1;
        }
    }

    /// Keeps what could be read; notes why not otherwise, and passes on to the next comma.
    fn recover<T>(&mut self, result: Read<T>) -> Option<T> {
        match result {
            Ok(value) => Some(value),
            Err(slip) => {
                self.slips.push(*slip);
                self.nesting = 0;
                self.skip_to_comma();
                None
            }
        }
    }

    /// That the statement is over, or a comma comes.
    fn over(&self) -> Read<()> {
        match self.kind(0) {
            None | Some(Kind::Comma) => Ok(()),
            _ => self.left_over("a comma or the statement's end"),
        }
    }

    /// That the statement is over.
    fn finish(&self) -> Read<()> {
        if self.is_end() {
            Ok(())
        } else {
            self.left_over("the statement's end")
        }
    }

    fn left_over(&self, expected: &str) -> Read<()> {
        match self.kind(0) {
            Some(Kind::Close) => self.slip(self.place(), What::BracketAlone { bracket: ")" }),
            Some(Kind::CloseIndex) => self.slip(self.place(), What::BracketAlone { bracket: "]" }),
            _ if self.unit_alone().is_some() => self.expected(expected, &[]),
            _ => {
                if let Some(slip) = self.misspelt_phrase() {
                    return Err(slip);
                }
                let near = |words: &[&'static str]| {
                    let word = self.word(0)?;
                    nearest(word, words.iter().copied())
                };
                let (expected, near) = match (near(FURTHER), near(AFTER_COMMA)) {
                    (Some(near), _) => (format!("`{near}` or {expected}"), Some(near.to_owned())),
                    (None, near) => (expected.to_owned(), near.map(|n| format!(", {n}"))),
                };
                let (within, found) = (self.subject(), self.found());
                let what = What::Expected {
                    within,
                    expected,
                    found,
                    near,
                };
                self.slip(self.place(), what)
            }
        }
    }
}

/// A text cut to what a message can show.
fn shown(text: &str) -> String {
    if text.chars().count() <= 40 {
        text.to_owned()
    } else {
        text.chars().take(39).chain(['…']).collect()
    }
}

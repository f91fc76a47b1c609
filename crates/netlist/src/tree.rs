//! Tokens to statements, and statements to blocks.
//!
//! A statement is one line; it goes on after a comma, after `+ - * / ^ = :` and inside an open
//! bracket. A line that surely begins another statement (its first word and what that needs
//! next) ends it anyway, so that a bracket left open costs one statement and not the file.
//!
//! ```text
//! item = statement | "repeat …" item* "end"
//! ```
//!
//! The tree holds ranges of tokens; what a statement says is read by the grammar, in a
//! `repeat` once for every round.

use crate::slip::{Slip, What};
use crate::token::{Gap, Kind, Token};
use crate::words::{OUTSIDE_REPEAT, PARTS, is_connective};

/// A statement: a range of the file's tokens, never empty.
#[derive(Clone, Debug)]
pub(crate) struct Statement {
    pub(crate) first: usize,
    /// One past the last token.
    pub(crate) last: usize,
    /// The token after which it ought to go on and does not.
    pub(crate) open: Option<usize>,
}

/// A statement, or a block of them.
#[derive(Clone, Debug)]
pub(crate) enum Item {
    One(Statement),
    Block(Block),
}

/// `repeat` or another block, with its `end`.
#[derive(Clone, Debug)]
pub(crate) struct Block {
    pub(crate) head: Statement,
    pub(crate) body: Vec<Item>,
    pub(crate) end: Option<Statement>,
}

/// Cuts tokens into statements.
pub(crate) fn statements(text: &str, tokens: &[Token]) -> Vec<Statement> {
    let lines = Lines { text, tokens };
    let mut found = Vec::new();
    let mut first = 0;
    while first < tokens.len() {
        let statement = lines.statement(first);
        first = statement.last;
        found.push(statement);
    }
    found
}

/// Builds blocks of statements; those deeper than `limit` are mistakes, and are left flat.
pub(crate) fn blocks(
    text: &str,
    tokens: &[Token],
    statements: Vec<Statement>,
    limit: usize,
) -> (Vec<Item>, Vec<Slip>) {
    let mut slips = Vec::new();
    let mut open: Vec<Block> = Vec::new();
    let mut top: Vec<Item> = Vec::new();
    let mut too_deep = 0_usize;
    for statement in statements {
        let Some(token) = tokens.get(statement.first) else {
            continue;
        };
        let word = token.text(text);
        if matches!(word, "repeat" | "assembly") {
            if open.len() >= limit {
                slips.push(Slip::new(token.span(), What::TooDeep { limit }));
                too_deep += 1;
            } else {
                open.push(Block {
                    head: statement,
                    body: Vec::new(),
                    end: None,
                });
            }
            continue;
        }
        if word == "end" {
            if too_deep > 0 {
                too_deep -= 1;
            } else if let Some(mut block) = open.pop() {
                block.end = Some(statement);
                let into = open.last_mut().map_or(&mut top, |b| &mut b.body);
                into.push(Item::Block(block));
            } else {
                slips.push(Slip::new(token.span(), What::EndAlone));
            }
            continue;
        }
        let into = open.last_mut().map_or(&mut top, |b| &mut b.body);
        into.push(Item::One(statement));
    }
    let lines = Lines { text, tokens };
    while let Some(mut block) = open.pop() {
        if let Some(token) = tokens.get(block.head.first) {
            slips.push(Slip::new(
                token.span(),
                What::NoEnd {
                    word: token.text(text).to_owned(),
                },
            ));
        }
        let outside = |item: &Item| matches!(item, Item::One(s) if lines.ends_repeat(s));
        let past = block.body.iter().position(outside);
        let rest = block.body.split_off(past.unwrap_or(block.body.len()));
        let into = open.last_mut().map_or(&mut top, |b| &mut b.body);
        into.push(Item::Block(block));
        into.extend(rest);
    }
    (top, slips)
}

struct Lines<'a> {
    text: &'a str,
    tokens: &'a [Token],
}

impl Lines<'_> {
    /// Whether a `repeat` without `end` is read as closed before this statement: one that may
    /// not stand in a `repeat`, or would give one name in every round.
    fn ends_repeat(&self, statement: &Statement) -> bool {
        let Some(token) = self.tokens.get(statement.first) else {
            return false;
        };
        let word = token.text(self.text);
        let names = PARTS.contains(&word) || matches!(word, "signal" | "reading" | "claim");
        let indexed = self.kind(statement.first + 2) == Some(Kind::OpenIndex);
        OUTSIDE_REPEAT.contains(&word) || (names && !indexed)
    }

    fn statement(&self, first: usize) -> Statement {
        let mut brackets: Vec<usize> = Vec::new();
        let mut last = first;
        let mut open = None;
        while let Some(token) = self.tokens.get(last) {
            if last > first && token.before == Gap::Line {
                match self.going_on(last - 1, &brackets) {
                    None => break,
                    place if self.begins(last) => {
                        open = place;
                        break;
                    }
                    Some(_) => {}
                }
            }
            match token.kind {
                Kind::Open | Kind::OpenIndex => brackets.push(last),
                Kind::Close | Kind::CloseIndex => drop(brackets.pop()),
                _ => {}
            }
            last += 1;
        }
        if last == self.tokens.len() {
            open = self.going_on(last - 1, &brackets);
        }
        Statement { first, last, open }
    }

    /// The token for whose sake a statement goes on after its token `last`.
    fn going_on(&self, last: usize, brackets: &[usize]) -> Option<usize> {
        use Kind::{Caret, Colon, Comma, Equal, Minus, Plus, Slash, Star};
        if let Some(outermost) = brackets.first() {
            return Some(*outermost);
        }
        let kind = self.tokens.get(last)?.kind;
        matches!(
            kind,
            Comma | Plus | Minus | Star | Slash | Caret | Equal | Colon
        )
        .then_some(last)
    }

    fn kind(&self, i: usize) -> Option<Kind> {
        self.tokens
            .get(i)
            .filter(|t| t.before != Gap::Line)
            .map(|t| t.kind)
    }

    fn word(&self, i: usize) -> Option<&str> {
        let token = self
            .tokens
            .get(i)
            .filter(|t| t.before != Gap::Line && t.kind == Kind::Word)?;
        Some(token.text(self.text))
    }

    /// The token after a name at `i` on this line.
    fn after_name(&self, i: usize) -> Option<usize> {
        self.word(i).filter(|w| !is_connective(w) || *w == "in")?;
        let mut i = i + 1;
        while self.kind(i) == Some(Kind::OpenIndex) {
            while self.kind(i)? != Kind::CloseIndex {
                i += 1;
            }
            i += 1;
        }
        Some(if self.kind(i) == Some(Kind::Dot) {
            i + 2
        } else {
            i
        })
    }

    /// Whether the line at `i` surely begins a statement.
    fn begins(&self, i: usize) -> bool {
        let Some(token) = self.tokens.get(i) else {
            return false;
        };
        let named = |next: &str| self.after_name(i + 1).and_then(|j| self.word(j)) == Some(next);
        let signed = |kind: Kind| self.after_name(i + 1).and_then(|j| self.kind(j)) == Some(kind);
        let next = |word: &str| self.word(i + 1) == Some(word);
        let two = |a: &str, b: &str| next(a) && self.word(i + 2) == Some(b);
        match token.text(self.text) {
            "coupling" => named("between"),
            "transformer" | "thyristor" | "gap" | "varistor" | "repeat" | "adjust" | "measured" => {
                named("from")
            }
            "let" | "signal" | "reading" => signed(Kind::Equal),
            "cases" => signed(Kind::Equal) || self.kind(i + 1) == Some(Kind::Open),
            "claim" => signed(Kind::Colon),
            "title" | "note" => self.kind(i + 1) == Some(Kind::Quoted),
            "span" => self.kind(i + 1) == Some(Kind::Number),
            "end" => self.tokens.get(i + 1).is_none_or(|t| t.before == Gap::Line),
            "start" => next("steady") || two("at", "rest"),
            "integrate" => next("by"),
            "error" => two("at", "most"),
            "time" => next("step") && self.kind(i + 2) == Some(Kind::Number),
            "channels" => {
                self.kind(i + 1) == Some(Kind::Open)
                    || self.word(i + 1).is_some_and(|w| !is_connective(w))
            }
            "limit" => self.word(i + 1).is_some() && self.kind(i + 2) == Some(Kind::Number),
            "take" => next("in") && self.kind(i + 2) == Some(Kind::Quoted),
            "mount" => named("as"),
            "assembly" => signed(Kind::Open),
            word => PARTS.contains(&word) && named("from"),
        }
    }
}

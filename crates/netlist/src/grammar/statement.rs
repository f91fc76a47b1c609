//! One statement: its first word decides what is read.

use pulsewright_circuit::draft::{Adjust, Cases, Claim, Let, Limit, Method, Named};
use pulsewright_circuit::parts::Part;
use pulsewright_circuit::spread::Value;
use pulsewright_circuit::{Expr, Span};

use super::{Mark, Parser, Read};
use crate::scope::Scope;
use crate::slip::{Slip, What};
use crate::token::{Kind, Token};
use crate::words::{LATER, PARTS, STATEMENTS};
use pulsewright_circuit::near::nearest;

/// What a statement states.
#[derive(Debug)]
#[allow(
    clippy::large_enum_variant,
    reason = "most statements are parts, and each is taken apart as soon as it is made"
)]
pub(crate) enum Made {
    Title(String),
    Note(String),
    Let(Let),
    /// With the claims that its ratings make.
    Part(Part, Vec<Claim>),
    Signal(Named),
    Reading(Named),
    Claim(Claim),
    Cases(Cases),
    Adjust(Adjust),
    Span(Expr),
    Start(bool),
    Integrate(Method, Span),
    Error(Expr),
    Step(Expr),
    Channels(Vec<Expr>),
    Limit(Limit, u64, Span),
}

/// What reading a statement yields.
pub(crate) struct Outcome {
    /// What could be read.
    pub(crate) made: Option<Made>,
    pub(crate) slips: Vec<Slip>,
    pub(crate) marks: Vec<(usize, Mark)>,
}

/// Reads a statement, whose tokens these are.
pub(crate) fn read<'a>(text: &'a str, tokens: &'a [Token], scope: &'a Scope<'a>) -> Outcome {
    let mut parser = Parser::new(text, tokens, scope);
    let made = match parser.statement() {
        Ok(made) => Some(made),
        Err(slip) => {
            parser.slips.push(*slip);
            None
        }
    };
    Outcome {
        made,
        slips: parser.slips,
        marks: parser.marks,
    }
}

/// Reads an expression that stands alone.
pub(crate) fn constant<'a>(
    text: &'a str,
    tokens: &'a [Token],
    scope: &'a Scope<'a>,
) -> Result<Expr, Slip> {
    let mut parser = Parser::new(text, tokens, scope);
    parser.named_by = 0;
    let read = parser
        .expression()
        .and_then(|e| parser.finish().map(|()| e));
    match (read, parser.slips.into_iter().next()) {
        (_, Some(slip)) => Err(slip),
        (Ok(expr), None) => Ok(expr),
        (Err(slip), None) => Err(*slip),
    }
}

impl Parser<'_> {
    fn statement(&mut self) -> Read<Made> {
        let Some(word) = self.word(0) else {
            return self.unknown_statement();
        };
        if word == "time" {
            return self.time_step();
        }
        if PARTS.contains(&word) {
            return self.part(word);
        }
        if STATEMENTS.contains(&word) {
            return self.of_word(word);
        }
        self.unknown_statement()
    }

    fn of_word(&mut self, word: &str) -> Read<Made> {
        match word {
            "let" => return self.let_value().map(Made::Let),
            "signal" => return self.named_expression().map(Made::Signal),
            "reading" => return self.named_expression().map(Made::Reading),
            "claim" => return self.claim().map(Made::Claim),
            "cases" => return self.cases().map(Made::Cases),
            "adjust" => return self.adjust().map(Made::Adjust),
            _ => self.at += 1,
        }
        let made = match word {
            "title" => Made::Title(self.text()?),
            "note" => Made::Note(self.text()?),
            "span" => Made::Span(self.expression()?),
            "start" => Made::Start(self.start()?),
            "integrate" => {
                let (method, span) = self.method()?;
                Made::Integrate(method, span)
            }
            "error" => {
                self.expect_words(&["at", "most"])?;
                Made::Error(self.expression()?)
            }
            "channels" => Made::Channels(self.channels()),
            _ => {
                let (limit, number, span) = self.limit()?;
                Made::Limit(limit, number, span)
            }
        };
        self.finish()?;
        Ok(made)
    }

    fn time_step(&mut self) -> Read<Made> {
        self.at += 1;
        self.expect_word("step")?;
        self.named_by = 2;
        let step = self.expression()?;
        self.finish()?;
        Ok(Made::Step(step))
    }

    fn let_value(&mut self) -> Read<Let> {
        self.at += 1;
        let name = self.new_name()?;
        self.named_by = self.at;
        let read = self.equals_value();
        let value = self.recover(read).unwrap_or_else(|| self.stand_in().into());
        if self.slips.is_empty() {
            self.finish()?;
        }
        Ok(Let { name, value })
    }

    fn equals_value(&mut self) -> Read<Value> {
        self.expect(Kind::Equal, "=")?;
        let value = self.value()?;
        self.finish()?;
        Ok(value)
    }

    fn named_expression(&mut self) -> Read<Named> {
        self.at += 1;
        let name = self.new_name()?;
        self.named_by = self.at;
        let read = self.equals_expression();
        let value = self.recover(read).unwrap_or_else(|| self.stand_in());
        Ok(Named { name, value })
    }

    fn equals_expression(&mut self) -> Read<Expr> {
        self.expect(Kind::Equal, "=")?;
        let value = self.expression()?;
        self.finish()?;
        Ok(value)
    }

    /// A first word that begins no statement. One that is near a part's is read as that part,
    /// so that what it declares is known.
    fn unknown_statement(&mut self) -> Read<Made> {
        let place = self.place();
        let Some(word) = self.word(0) else {
            let word = self.source(place);
            return self.slip(
                place,
                What::UnknownStatement {
                    word: super::shown(&word),
                    near: None,
                },
            );
        };
        if let Some((_, what)) = LATER.iter().find(|(w, _)| *w == word) {
            return self.slip(
                place,
                What::Later {
                    what: (*what).to_owned(),
                },
            );
        }
        let all = PARTS
            .iter()
            .chain(STATEMENTS)
            .chain(LATER.iter().map(|(w, _)| w));
        let found = nearest(word, all.copied());
        let what = What::UnknownStatement {
            word: super::shown(word),
            near: found.map(str::to_owned),
        };
        match found {
            Some(found) if self.looks_like(found) => {
                self.note(place, what);
                if PARTS.contains(&found) {
                    self.part(found)
                } else {
                    self.of_word(found)
                }
            }
            _ => self.slip(place, what),
        }
    }

    /// Whether the statement goes on as one of this word does, so that it surely is one.
    fn looks_like(&self, word: &str) -> bool {
        let Some(past) = self.past_name(1) else {
            return false;
        };
        match word {
            "coupling" => self.is_word(past, "between"),
            "let" | "signal" | "reading" => self.kind(past) == Some(Kind::Equal),
            "claim" => self.kind(past) == Some(Kind::Colon),
            word => (PARTS.contains(&word) || word == "adjust") && self.is_word(past, "from"),
        }
    }
}

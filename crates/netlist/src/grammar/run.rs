//! How the shot is run, and its cases.
//!
//! ```text
//! cases = "cases" NAME "=" ( EXPR "to" EXPR "," N "values" [ "by equal ratio" ] | EXPR ( "," EXPR )* )
//!       | "cases" "(" NAME ( "," NAME )* ")" "=" row ( "," row )*
//! row   = "(" EXPR ( "," EXPR )* ")"
//! ```

use pulsewright_circuit::draft::{CaseValues, Cases, Limit, Method};
use pulsewright_circuit::{Expr, Name, Span};

use super::{Parser, Read};
use crate::slip::What;
use crate::token::Kind;
use pulsewright_circuit::near::nearest;

/// What `limit` knows.
const WHAT: &str = "`steps`, `events`, `unknowns`, `parts` or `nesting`";

impl Parser<'_> {
    /// `integrate by …`, after its first word.
    pub(super) fn method(&mut self) -> Read<(Method, Span)> {
        self.expect_word("by")?;
        let from = self.at;
        let method = match self.word(0) {
            Some("trapezoidal") => Method::Trapezoidal,
            Some("backward") => Method::BackwardEuler,
            Some("exact") => Method::Exact,
            _ => {
                let words = &["trapezoidal", "backward", "exact"];
                return self.expected(
                    "`trapezoidal rule`, `backward Euler` or `exact propagation`",
                    words,
                );
            }
        };
        self.at += 1;
        self.expect_word(match method {
            Method::Trapezoidal => "rule",
            Method::BackwardEuler => "Euler",
            _ => "propagation",
        })?;
        Ok((method, self.span_since(from)))
    }

    /// `start steady`, `start at rest`, after the first word; true for steady.
    pub(super) fn start(&mut self) -> Read<bool> {
        if self.take_words(&["steady"]) {
            return Ok(true);
        }
        if !self.take_words(&["at"]) {
            return self.expected("`at rest` or `steady`", &["at", "steady"]);
        }
        self.expect_word("rest")?;
        Ok(false)
    }

    /// `limit steps 10_000_000`, after its first word.
    pub(super) fn limit(&mut self) -> Read<(Limit, u64, Span)> {
        let from = self.at;
        let Some(word) = self.word(0) else {
            return self.expected(WHAT, &[]);
        };
        let Some((_, limit, _)) = Limit::ALL.iter().find(|(name, _, _)| *name == word) else {
            return match nearest(word, Limit::ALL.iter().map(|(name, _, _)| *name)) {
                Some(_) => {
                    self.expected(WHAT, &["steps", "events", "unknowns", "parts", "nesting"])
                }
                None => self.slip(
                    self.place(),
                    What::UnknownLimit {
                        word: word.to_owned(),
                    },
                ),
            };
        };
        self.at += 1;
        let most = if *limit == Limit::Nesting {
            crate::MOST_NESTING as u64
        } else {
            1_000_000_000_000
        };
        let number = self.count("a limit", 1, most)?;
        Ok((*limit, number, self.span_since(from)))
    }

    /// `channels …`, after its first word.
    pub(super) fn channels(&mut self) -> Vec<Expr> {
        let mut all = Vec::new();
        loop {
            let read = self.channel();
            all.extend(self.recover(read));
            if !self.take(Kind::Comma) {
                return all;
            }
        }
    }

    fn channel(&mut self) -> Read<Expr> {
        let signal = self.signal_slot()?.expr;
        match self.kind(0) {
            None | Some(Kind::Comma) => Ok(signal),
            _ => self.expected_after_signal("a comma or the statement's end", &[]),
        }
    }

    pub(super) fn cases(&mut self) -> Read<Cases> {
        self.at += 1;
        let together = self.take(Kind::Open);
        let mut names: Vec<Name> = vec![self.new_name()?];
        while together && self.take(Kind::Comma) {
            names.push(self.new_name()?);
        }
        if together {
            self.expect(Kind::Close, ")")?;
        }
        self.expect(Kind::Equal, "=")?;
        let values = if together {
            self.rows()?
        } else {
            self.single()?
        };
        self.finish()?;
        Ok(Cases {
            names,
            values,
            span: self.whole_span(),
        })
    }

    fn rows(&mut self) -> Read<CaseValues> {
        let mut rows = Vec::new();
        loop {
            self.expect(Kind::Open, "(")?;
            let mut row = vec![self.expression()?];
            while self.take(Kind::Comma) {
                row.push(self.expression()?);
            }
            self.expect(Kind::Close, ")")?;
            rows.push(row);
            if !self.take(Kind::Comma) {
                return Ok(CaseValues::Rows(rows));
            }
        }
    }

    fn single(&mut self) -> Read<CaseValues> {
        let first = self.expression()?;
        if self.take_words(&["to"]) {
            return self.range(first);
        }
        let mut rows = vec![vec![first]];
        while self.take(Kind::Comma) {
            rows.push(vec![self.expression()?]);
        }
        Ok(CaseValues::Rows(rows))
    }

    fn range(&mut self, from: Expr) -> Read<CaseValues> {
        let to = self.expression()?;
        self.expect(Kind::Comma, ",")?;
        let at = self.at;
        let count = self.count("the number of values", 1, u64::from(u32::MAX))?;
        let count_span = self.span_since(at);
        self.expect_word("values")?;
        let by_ratio = self.take_words(&["by"]);
        if by_ratio {
            self.expect_words(&["equal", "ratio"])?;
        }
        let count = u32::try_from(count).unwrap_or(u32::MAX);
        Ok(CaseValues::Range {
            from,
            to,
            count,
            by_ratio,
            count_span,
        })
    }
}

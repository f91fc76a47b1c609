//! Claims: `claim dose: energy into chest is within 25 % or 3 J of 300 J, answers "REQ-12"`.
//!
//! ```text
//! claim    = "claim" NAME ":" EXPR "is" relation ( "," clause )*
//! relation = "at most" EXPR | "at least" EXPR | "between" EXPR "and" EXPR
//!          | "within" EXPR [ "or" EXPR ] "of" EXPR | "within" EXPR "percentage points of" EXPR
//! clause   = "answers" TEXT | "allowing" EXPR | "when" condition | "in at least" EXPR "of shots"
//! ```

use pulsewright_circuit::draft::{Applies, Claim, Comparison, Relation};
use pulsewright_circuit::expr::Operator;
use pulsewright_circuit::{Dimension, Expr, ExprKind, Name, Span};

use super::{Parser, Read};
use crate::lex::unquote;
use crate::slip::What;
use crate::token::Kind;
use pulsewright_circuit::near::nearest;

/// The words that begin a clause.
const CLAUSES: &[&str] = &["answers", "when", "allowing", "in"];

impl Parser<'_> {
    pub(super) fn claim(&mut self) -> Read<Claim> {
        self.at += 1;
        let name = self.new_name()?;
        self.named_by = self.at;
        let read = self.judged();
        let judged = self.recover(read);
        let stand_in = || (self.stand_in(), Relation::AtMost(self.stand_in()));
        let (reading, relation) = judged.unwrap_or_else(stand_in);
        let mut claim = Claim {
            name,
            reading,
            relation,
            answers: Vec::new(),
            when: Vec::new(),
            allowing: None,
            in_shots: None,
            span: self.whole_span(),
        };
        while self.take(Kind::Comma) {
            let read = self.clause(&mut claim);
            self.recover(read);
        }
        let read = self.finish();
        self.or_give_up(read);
        Ok(claim)
    }

    fn judged(&mut self) -> Read<(Expr, Relation)> {
        self.expect(Kind::Colon, ":")?;
        let reading = self.expression()?;
        self.expect_word("is")?;
        let relation = self.relation()?;
        self.over()?;
        Ok((reading, relation))
    }

    fn relation(&mut self) -> Read<Relation> {
        if self.take_words(&["at", "most"]) {
            return Ok(Relation::AtMost(self.expression()?));
        }
        if self.take_words(&["at", "least"]) {
            return Ok(Relation::AtLeast(self.expression()?));
        }
        if self.take_words(&["between"]) {
            let low = self.expression()?;
            self.expect_word("and")?;
            return Ok(Relation::Between(low, self.expression()?));
        }
        if self.take_words(&["within"]) {
            return self.within();
        }
        if self.take_words(&["at"]) {
            return self.expected("`most` or `least`", &["most", "least"]);
        }
        self.expected(
            "`at most`, `at least`, `between` or `within`",
            &["at", "between", "within"],
        )
    }

    fn within(&mut self) -> Read<Relation> {
        let (mut share, mut amount) = (None, None);
        let first = self.expression()?;
        if self.take_words(&["percentage"]) {
            self.expect_words(&["points", "of"])?;
            return Ok(Relation::Within {
                share,
                amount,
                points: Some(first),
                of: self.expression()?,
            });
        }
        let is_share = self.is_share(&first);
        *(if is_share { &mut share } else { &mut amount }) = Some(first);
        if self.take_words(&["or"]) {
            let place = self.place();
            let second = self.expression()?;
            if self.is_share(&second) == is_share {
                let kind = if is_share { "shares" } else { "amounts" };
                return self.slip(place, What::SameAllowance { kind });
            }
            *(if is_share { &mut amount } else { &mut share }) = Some(second);
        }
        self.expect_word("of")?;
        Ok(Relation::Within {
            share,
            amount,
            points: None,
            of: self.expression()?,
        })
    }

    /// Whether an allowance is a share: a number without a dimension, let-values looked up.
    fn is_share(&self, expr: &Expr) -> bool {
        self.dimension(expr, 0).is_none_or(Dimension::is_none)
    }

    /// The dimension of an expression of let-values, where it can be told.
    pub(super) fn dimension(&self, expr: &Expr, depth: usize) -> Option<Dimension> {
        if depth > 500 {
            return None;
        }
        match &expr.kind {
            ExprKind::Number { dimension, .. } => Some(*dimension),
            ExprKind::Pi => Some(Dimension::NONE),
            ExprKind::Negative(a) => self.dimension(a, depth + 1),
            ExprKind::Name(name) => self.dimension(self.scope.lets.get(name)?, depth + 64),
            ExprKind::Call { arguments, .. } => self.dimension(arguments.first()?, depth + 1),
            ExprKind::Binary {
                operator,
                left,
                right,
                ..
            } => {
                let a = self.dimension(left, depth + 1)?;
                match operator {
                    Operator::Add | Operator::Subtract => Some(a),
                    Operator::Multiply => a.times(self.dimension(right, depth + 1)?),
                    Operator::Divide => a.over(self.dimension(right, depth + 1)?),
                    Operator::Power => a.is_none().then_some(a),
                }
            }
            _ => None,
        }
    }

    fn clause(&mut self, claim: &mut Claim) -> Read<()> {
        let place = self.place();
        match self.word(0) {
            Some("answers") => {
                self.at += 1;
                claim.answers.push(self.text()?);
            }
            Some("when") => {
                self.at += 1;
                let condition = self.applies()?;
                claim.when.push(condition);
            }
            Some("allowing") => {
                self.at += 1;
                let allowing = self.expression()?;
                if claim.allowing.is_some() {
                    return self.twice(place, "allowing");
                }
                claim.allowing = Some(allowing);
            }
            Some("in") => {
                self.at += 1;
                self.expect_words(&["at", "least"])?;
                let share = self.expression()?;
                self.expect_words(&["of", "shots"])?;
                if claim.in_shots.is_some() {
                    return self.twice(place, "in at least");
                }
                claim.in_shots = Some(share);
            }
            Some(word) => {
                let (near, word) = (
                    nearest(word, CLAUSES.iter().copied()).map(str::to_owned),
                    word.to_owned(),
                );
                let known = "`answers`, `when`, `allowing` and `in at least`";
                return self.slip(
                    place,
                    What::NoQualifier {
                        word,
                        kind: "claim",
                        known,
                        near,
                    },
                );
            }
            None => {
                return self.expected("`answers`, `when`, `allowing` or `in at least`", CLAUSES);
            }
        }
        self.over()
    }

    fn twice(&mut self, place: Span, word: &str) -> Read<()> {
        let within = self.subject();
        let word = word.to_owned();
        self.slip(place, What::Twice { word, within })
    }

    /// A text in quotes.
    pub(super) fn text(&mut self) -> Read<String> {
        match self.token(0) {
            Some(token) if token.kind == Kind::Quoted => {
                self.at += 1;
                Ok(unquote(token.text(self.text)))
            }
            _ => self.expected("a text in quotes", &[]),
        }
    }

    fn applies(&mut self) -> Read<Applies> {
        let circuit = self.past_name(0).filter(|past| {
            self.is_word(*past, "is")
                && self
                    .word(past + 1)
                    .is_some_and(|w| matches!(w, "open" | "short"))
        });
        if circuit.is_some() {
            return self.circuit_word();
        }
        let left = self.expression()?;
        let comparison = match self.kind(0) {
            Some(Kind::Less) => Comparison::Less,
            Some(Kind::LessOrEqual) => Comparison::LessOrEqual,
            Some(Kind::Greater) => Comparison::Greater,
            Some(Kind::GreaterOrEqual) => Comparison::GreaterOrEqual,
            Some(Kind::Equal) => Comparison::Equal,
            _ => return self.expected("`<`, `<=`, `>`, `>=`, `=` or `is open circuit`", &[]),
        };
        self.at += 1;
        Ok(Applies::Compare {
            left,
            comparison,
            right: self.expression()?,
        })
    }

    fn circuit_word(&mut self) -> Read<Applies> {
        let name: Name = self.indexed()?;
        self.expect_word("is")?;
        let open = self.is_word(0, "open");
        self.at += 1;
        self.expect_word("circuit")?;
        Ok(Applies::Circuit { name, open })
    }
}

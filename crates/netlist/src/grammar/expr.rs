//! Expressions.
//!
//! ```text
//! sum     = product ( ( "+" | "-" ) product )*
//! product = signed ( ( "*" | "/" ) signed )*
//! signed  = "-"* power
//! power   = operand [ "^" "-"* power ]
//! operand = primary [ "at" T | "just before" T ]         the value of a signal at an instant
//! primary = value | name | "t" | "pi" | "(" sum ")" | function "(" sum ( "," sum )* ")"
//!         | "points" "(" sum ( ";" sum ":" sum )+ ")" | phrase | "open circuit" | "short circuit"
//! ```
//!
//! Trees lean to the left and grow with every operation, and whoever walks one later goes as
//! deep as the tree is; so their depth is counted and limited here.

use pulsewright_circuit::expr::{Function, Operator};
use pulsewright_circuit::phrase::{Measure, Phrase};
use pulsewright_circuit::{Dimension, Expr, ExprKind};

use super::value::written_dimension;
use super::{MOST_DEPTH, Mark, Parser, Read};
use crate::slip::What;
use crate::token::Kind;
use crate::words::is_connective;

/// An expression and how many operations it has one within the other.
pub(super) struct Deep {
    pub(super) expr: Expr,
    pub(super) depth: usize,
}

impl From<Expr> for Deep {
    fn from(expr: Expr) -> Self {
        Deep { expr, depth: 1 }
    }
}

impl Parser<'_> {
    /// An expression.
    pub(super) fn expression(&mut self) -> Read<Expr> {
        self.sum().map(|d| d.expr)
    }

    pub(super) fn sum(&mut self) -> Read<Deep> {
        let mut left = self.product()?;
        loop {
            let operator = match self.kind(0) {
                Some(Kind::Plus) => Operator::Add,
                Some(Kind::Minus) => Operator::Subtract,
                _ => return Ok(left),
            };
            let at = self.place();
            self.at += 1;
            let right = self.product()?;
            self.refuse_added_share(at, operator, &left, &right)?;
            left = self.join(operator, at, left, right)?;
        }
    }

    fn product(&mut self) -> Read<Deep> {
        let from = self.at;
        let mut left = self.signed()?;
        loop {
            let operator = match self.kind(0) {
                Some(Kind::Star) => Operator::Multiply,
                Some(Kind::Slash) => Operator::Divide,
                _ => return Ok(left),
            };
            let at = self.place();
            self.at += 1;
            if operator == Operator::Divide {
                self.refuse_fraction_before_unit(from)?;
            }
            let right = self.signed()?;
            left = self.join(operator, at, left, right)?;
        }
    }

    fn signed(&mut self) -> Read<Deep> {
        let from = self.at;
        while self.kind(0) == Some(Kind::Minus) {
            self.mark(self.at, Mark::Sign);
            self.at += 1;
        }
        let signs = self.at - from;
        let mut inner = self.power()?;
        for i in (0..signs).rev() {
            let span = self.since(from + i);
            inner = self.counted(
                Expr::new(ExprKind::Negative(Box::new(inner.expr)), span),
                inner.depth,
            )?;
        }
        Ok(inner)
    }

    fn power(&mut self) -> Read<Deep> {
        let base = self.operand()?;
        let at = self.place();
        if !self.take(Kind::Caret) {
            return Ok(base);
        }
        let exponent = self.deeper(Parser::signed)?;
        self.join(Operator::Power, at, base, exponent)
    }

    fn join(
        &self,
        operator: Operator,
        at: pulsewright_circuit::Span,
        left: Deep,
        right: Deep,
    ) -> Read<Deep> {
        let depth = left.depth.max(right.depth);
        let span = left.expr.span.to(right.expr.span);
        let (left, right) = (Box::new(left.expr), Box::new(right.expr));
        self.counted(
            Expr::new(
                ExprKind::Binary {
                    operator,
                    at,
                    left,
                    right,
                },
                span,
            ),
            depth,
        )
    }

    /// One operation over something `depth` deep.
    pub(super) fn counted(&self, expr: Expr, depth: usize) -> Read<Deep> {
        if depth >= MOST_DEPTH {
            return self.slip(expr.span, What::TooManyOperations { limit: MOST_DEPTH });
        }
        Ok(Deep {
            expr,
            depth: depth + 1,
        })
    }

    fn operand(&mut self) -> Read<Deep> {
        let from = self.at;
        let primary = self.primary()?;
        if matches!(primary.expr.kind, ExprKind::Reading(_) | ExprKind::Edge(_)) {
            return Ok(primary);
        }
        let just_before = self.are_words(&["just", "before"]);
        if !just_before && self.take_words(&["just"]) {
            return self.expected("`before`", &["before"]);
        }
        if !just_before && (!self.is_word(0, "at") || self.begins_relation()) {
            return Ok(primary);
        }
        self.at += if just_before { 2 } else { 1 };
        let time = self.deeper(Parser::time_slot)?;
        let depth = primary.depth.max(time.depth);
        let (signal, time) = (primary.expr, time.expr);
        let measure = if just_before {
            Measure::JustBefore { signal, time }
        } else {
            Measure::At { signal, time }
        };
        let span = self.since(from);
        if self.in_delay {
            return self.slip(
                span,
                What::Later {
                    what: "a signal's value within a delay".to_owned(),
                },
            );
        }
        self.counted(
            Expr::new(
                ExprKind::Reading(Box::new(Phrase {
                    measure,
                    window: None,
                    span,
                })),
                span,
            ),
            depth,
        )
    }

    /// `at most 5 J`, of a claim that lacks its `is`.
    fn begins_relation(&self) -> bool {
        self.word(1).is_some_and(|w| matches!(w, "most" | "least"))
            && matches!(self.kind(2), Some(Kind::Number | Kind::Word | Kind::Open))
    }

    /// An operand without a sign.
    pub(super) fn primary(&mut self) -> Read<Deep> {
        match self.kind(0) {
            Some(Kind::Number) => Ok(self.number()?.into()),
            Some(Kind::Open) => self.bracket(),
            Some(Kind::Word) => self.worded(),
            _ => self.expected("a value", &[]),
        }
    }

    pub(super) fn bracket(&mut self) -> Read<Deep> {
        let from = self.at;
        self.at += 1;
        let mut inner = self.deeper(Parser::sum)?;
        self.expect(Kind::Close, ")")?;
        inner.expr.span = self.since(from);
        Ok(inner)
    }

    fn worded(&mut self) -> Read<Deep> {
        if let Some(signal) = self.signal_phrase()? {
            return Ok(signal.into());
        }
        if let Some(edge) = self.edge_phrase()? {
            let span = edge.span;
            return Ok(Expr::new(ExprKind::Edge(Box::new(edge)), span).into());
        }
        if self.begins_reading() {
            return self.deeper(Parser::reading_phrase);
        }
        self.named()
    }

    /// A function, `t`, `pi`, a circuit word, a counter or a name.
    pub(super) fn named(&mut self) -> Read<Deep> {
        let Some(word) = self.word(0) else {
            return self.expected("a value", &[]);
        };
        let span = self.place();
        let one = |p: &mut Self, kind| {
            p.at += 1;
            Ok(Expr::new(kind, span).into())
        };
        match word {
            "t" => one(self, ExprKind::Time),
            "pi" => one(self, ExprKind::Pi),
            "points" => self.points(),
            "open" if self.is_word(1, "circuit") => self.circuit(ExprKind::OpenCircuit),
            "short" if self.is_word(1, "circuit") => self.circuit(ExprKind::ShortCircuit),
            _ if is_connective(word) => self.expected("a value", &[]),
            _ => match Function::ALL.iter().find(|(name, _)| *name == word) {
                Some((name, function)) => self.call(name, *function),
                None => self.let_or_counter(),
            },
        }
    }

    fn circuit(&mut self, kind: ExprKind) -> Read<Deep> {
        let from = self.at;
        self.at += 2;
        Ok(Expr::new(kind, self.since(from)).into())
    }

    fn let_or_counter(&mut self) -> Read<Deep> {
        if let Some(slip) = self.unit_alone() {
            return Err(slip);
        }
        if self.kind(1) == Some(Kind::Open) {
            return self.unknown_function();
        }
        let name = self.indexed()?;
        let kind = match self.scope.counter(&name.text) {
            #[allow(
                clippy::cast_precision_loss,
                reason = "counters are far below 2^53 in number"
            )]
            Some(value) => ExprKind::Number {
                value: value.unwrap_or(1) as f64,
                dimension: Dimension::NONE,
                share: false,
            },
            None => ExprKind::Name(name.text),
        };
        Ok(Expr::new(kind, name.span).into())
    }

    /// A name before a bracket, which is no function.
    fn unknown_function(&self) -> Read<Deep> {
        let functions: Vec<&str> = Function::ALL.iter().map(|(name, _)| *name).collect();
        let words: Vec<&str> = functions.into_iter().chain(["points"]).collect();
        self.expected("a function before `(`", &words)
    }

    fn call(&mut self, name: &'static str, function: Function) -> Read<Deep> {
        let from = self.at;
        self.at += 1;
        self.mark(self.at, Mark::Call);
        self.expect(Kind::Open, "(")?;
        let (mut arguments, mut depth) = (Vec::new(), 0);
        loop {
            let argument = self.deeper(Parser::sum)?;
            depth = depth.max(argument.depth);
            arguments.push(argument.expr);
            if !self.take(Kind::Comma) {
                break;
            }
        }
        self.expect(Kind::Close, ")")?;
        let span = self.since(from);
        let many = matches!(function, Function::Min | Function::Max);
        let given = arguments.len();
        if many && given < 2 {
            return self.slip(
                span,
                What::Arguments {
                    function: name,
                    takes: "two or more arguments",
                    given,
                },
            );
        }
        if !many && given > 1 {
            return self.slip(
                span,
                What::Arguments {
                    function: name,
                    takes: "one argument",
                    given,
                },
            );
        }
        self.counted(
            Expr::new(
                ExprKind::Call {
                    function,
                    arguments,
                },
                span,
            ),
            depth,
        )
    }

    fn points(&mut self) -> Read<Deep> {
        let from = self.at;
        self.at += 1;
        self.mark(self.at, Mark::Call);
        self.expect(Kind::Open, "(")?;
        let argument = self.deeper(Parser::sum)?;
        let (mut knots, mut depth) = (Vec::new(), argument.depth);
        while self.take(Kind::Semicolon) {
            let x = self.deeper(Parser::sum)?;
            self.expect(Kind::Colon, ":")?;
            let y = self.deeper(Parser::sum)?;
            depth = depth.max(x.depth).max(y.depth);
            knots.push((x.expr, y.expr));
        }
        if knots.is_empty() {
            return self.expected("`;` and a first point", &[]);
        }
        self.expect(Kind::Close, ")")?;
        let kind = ExprKind::Points {
            argument: Box::new(argument.expr),
            knots,
        };
        self.counted(Expr::new(kind, self.since(from)), depth)
    }

    /// `100 ohm + 5 %`.
    fn refuse_added_share(
        &mut self,
        at: pulsewright_circuit::Span,
        operator: Operator,
        left: &Deep,
        right: &Deep,
    ) -> Read<()> {
        let share = matches!(right.expr.kind, ExprKind::Number { share: true, .. });
        if share && written_dimension(&left.expr).is_some_and(|d| !d.is_none()) {
            let (left, share) = (self.source(left.expr.span), self.source(right.expr.span));
            return self.slip(
                at,
                What::ShareAdded {
                    sign: operator.sign(),
                    left,
                    share,
                },
            );
        }
        Ok(())
    }

    /// `1/2 ohm`, standing after the `/`; `from` is where the product begins.
    fn refuse_fraction_before_unit(&mut self, from: usize) -> Read<()> {
        if !self.has_unit(0) {
            return Ok(());
        }
        use Kind::{Caret, Close, Minus, Number, Open, Plus, Slash, Star};
        let left = self.tokens.get(from..self.at - 1).unwrap_or_default();
        if !left.iter().all(|t| {
            matches!(
                t.kind,
                Number | Plus | Minus | Star | Slash | Caret | Open | Close
            )
        }) {
            return Ok(());
        }
        let slash = self.since(self.at - 1);
        let text = |p: &Self, i: usize| p.tokens.get(i).map_or("", |t| t.text(p.text)).to_owned();
        let top: String = self
            .source(self.since(from))
            .trim_end_matches('/')
            .trim_end()
            .to_owned();
        let bottom = text(self, self.at);
        let value = self.at;
        let kept = self.slips.len();
        let number = self.number();
        self.slips.truncate(kept);
        number?;
        let unit = self.source(self.since(value + 1));
        self.at = value;
        let fraction = format!("{top}/{bottom}");
        self.note(
            slash,
            What::FractionBeforeUnit {
                fraction,
                top,
                bottom,
                unit,
            },
        );
        Ok(())
    }
}

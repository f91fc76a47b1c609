//! Schedules: what a switch does, and what sets it off.
//!
//! ```text
//! action  = ( "closes" | "opens" | "moves to" NODE ) trigger ( "or" trigger )*
//! trigger = "at zero current" [ "after" T ] | "at" EXPR
//!         | "when" SIGNAL ( "falls below" | "rises above" | "is below" | "is above" ) EXPR
//!         | EXPR "after" EDGE
//! ```
//!
//! A spread may follow a trigger after a comma, and belongs to its instant, level or delay.

use pulsewright_circuit::near::nearest;
use pulsewright_circuit::schedule::{Action, Change, Passing, Trigger, TriggerKind};
use pulsewright_circuit::spread::Value;

use super::{Parser, Read};
use crate::slip::What;

impl Parser<'_> {
    pub(super) fn action(&mut self) -> Read<Action> {
        let from = self.at;
        let change = match self.word(0) {
            Some("closes") => Change::Closes,
            Some("opens") => Change::Opens,
            _ => {
                self.expect_words(&["moves", "to"])?;
                Change::MovesTo(self.thing("a node")?)
            }
        };
        if !matches!(change, Change::MovesTo(_)) {
            self.at += 1;
        }
        if self.is_word(0, "every") {
            return self.slip(
                self.place(),
                What::Later {
                    what: "`every`, a chopper,".to_owned(),
                },
            );
        }
        let mut triggers = vec![self.trigger()?];
        while self.is_word(0, "or") {
            self.at += 1;
            triggers.push(self.trigger()?);
        }
        Ok(Action {
            change,
            triggers,
            span: self.since(from),
        })
    }

    fn trigger(&mut self) -> Read<Trigger> {
        let from = self.at;
        let kind = match self.word(0) {
            Some("at") if self.is_word(1, "zero") && self.is_word(2, "current") => {
                self.zero_current()?
            }
            Some("at") if self.is_word(1, "zero") && self.is_near(2, "current") => {
                self.at += 2;
                return self.expected("`current`", &["current"]);
            }
            Some("at") => {
                self.at += 1;
                TriggerKind::At(self.value()?)
            }
            Some("when") => self.level_trigger()?,
            None if self.is_end() => {
                return self.expected("`at`, `when` or a delay `after` an edge", &[]);
            }
            _ => self.delay()?,
        };
        Ok(Trigger {
            kind,
            span: self.since(from),
        })
    }

    fn is_near(&self, ahead: usize, word: &str) -> bool {
        self.word(ahead)
            .is_some_and(|w| nearest(w, [word]).is_some())
    }

    fn zero_current(&mut self) -> Read<TriggerKind> {
        self.at += 3;
        let after = if self.take_words(&["after"]) {
            Some(self.time_slot()?.expr)
        } else {
            None
        };
        Ok(TriggerKind::ZeroCurrent { after })
    }

    fn level_trigger(&mut self) -> Read<TriggerKind> {
        self.at += 1;
        let signal = self.signal_slot()?.expr;
        let passing = match (self.word(0), self.word(1)) {
            (Some("falls"), Some("below")) => Passing::FallsBelow,
            (Some("rises"), Some("above")) => Passing::RisesAbove,
            (Some("is"), Some("below")) => Passing::IsBelow,
            (Some("is"), Some("above")) => Passing::IsAbove,
            (Some("falls"), _) => {
                self.at += 1;
                return self.expected("`below`", &["below"]);
            }
            (Some("rises"), _) => {
                self.at += 1;
                return self.expected("`above`", &["above"]);
            }
            (Some("is"), _) => {
                self.at += 1;
                return self.expected("`below` or `above`", &["below", "above"]);
            }
            _ => {
                let words = &["falls", "rises", "is"];
                return self.expected_after_signal(
                    "`falls below`, `rises above`, `is below` or `is above`",
                    words,
                );
            }
        };
        self.at += 2;
        Ok(TriggerKind::When {
            signal,
            passing,
            level: self.value()?,
        })
    }

    fn delay(&mut self) -> Read<TriggerKind> {
        self.in_delay = true;
        let delay = self.expression();
        self.in_delay = false;
        let mut delay = Value::from(delay?);
        self.expect_word("after")?;
        let edge = self.edge()?;
        self.spread_of(&mut delay)?;
        Ok(TriggerKind::Delay { delay, edge })
    }
}

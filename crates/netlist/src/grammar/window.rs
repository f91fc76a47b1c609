//! Windows: the part of the span that a reading is taken in.
//!
//! ```text
//! window = "between" T "and" T | "after" T | "before" T
//!        | "while" PART "is" STATE ( "and" PART "is" STATE )*
//!        | "during phase" N "of" SIGNAL
//! STATE  = "closed" | "open" | "at" NODE
//! ```

use pulsewright_circuit::phrase::{Condition, StateWord, Window};

use super::expr::Deep;
use super::{Parser, Read};
use crate::slip::What;
use crate::token::Kind;

/// The words that begin a window.
pub(super) const WINDOWS: &[&str] = &["between", "after", "before", "while", "during"];

impl Parser<'_> {
    /// The window that begins here, if one does, and how deep its expressions are.
    pub(super) fn window(&mut self) -> Read<(Option<Window>, usize)> {
        let Some(word) = self.word(0).filter(|w| WINDOWS.contains(w)) else {
            return Ok((None, 0));
        };
        self.at += 1;
        let (window, depth) = match word {
            "between" => self.between()?,
            "after" => {
                let Deep { expr, depth } = self.time_slot()?;
                (Window::After(expr), depth)
            }
            "before" => {
                let Deep { expr, depth } = self.time_slot()?;
                (Window::Before(expr), depth)
            }
            "while" => (Window::While(self.conditions()?), 0),
            _ => self.phase()?,
        };
        Ok((Some(window), depth))
    }

    fn between(&mut self) -> Read<(Window, usize)> {
        let first = self.time_slot()?;
        self.expect_word("and")?;
        let second = self.time_slot()?;
        Ok((
            Window::Between(first.expr, second.expr),
            first.depth.max(second.depth),
        ))
    }

    fn conditions(&mut self) -> Read<Vec<Condition>> {
        let mut all = vec![self.condition()?];
        while self.is_word(0, "and") && self.begins_condition(1) {
            self.at += 1;
            all.push(self.condition()?);
        }
        Ok(all)
    }

    fn begins_condition(&self, ahead: usize) -> bool {
        self.past_name(ahead).is_some_and(|past| {
            self.is_word(past, "is")
                && self
                    .word(past + 1)
                    .is_some_and(|w| matches!(w, "closed" | "open" | "at"))
                && !(self.is_word(past + 1, "at")
                    && self
                        .word(past + 2)
                        .is_some_and(|w| matches!(w, "most" | "least")))
        })
    }

    fn condition(&mut self) -> Read<Condition> {
        let part = self.thing("a switch or a changeover")?;
        self.expect_word("is")?;
        let state = match self.word(0) {
            Some("closed") => StateWord::Closed,
            Some("open") => StateWord::Open,
            Some("at") => {
                self.at += 1;
                return Ok(Condition {
                    part,
                    state: StateWord::At(self.thing("a node")?),
                });
            }
            _ => return self.expected("`closed`, `open` or `at`", &["closed", "open", "at"]),
        };
        self.at += 1;
        Ok(Condition { part, state })
    }

    fn phase(&mut self) -> Read<(Window, usize)> {
        self.expect_word("phase")?;
        let number = self.count("the number of a phase", 1, u64::from(u32::MAX))?;
        let number = u32::try_from(number).unwrap_or(u32::MAX);
        self.expect_word("of")?;
        let Deep { expr, depth } = self.signal_slot()?;
        Ok((
            Window::Phase {
                number,
                signal: expr,
            },
            depth,
        ))
    }

    /// A count written as a whole number.
    pub(super) fn count(&mut self, what: &'static str, least: u64, most: u64) -> Read<u64> {
        let place = self.place();
        if self.kind(0) != Some(Kind::Number) {
            return self.expected(what, &[]);
        }
        let text: String = self.source(place).chars().filter(|c| *c != '_').collect();
        self.at += 1;
        match text.parse::<u64>() {
            Ok(n) if (least..=most).contains(&n) => Ok(n),
            _ => self.slip(place, What::Count { what, least, most }),
        }
    }
}

//! Signals: `voltage across bank`, `energy held by bank`.
//!
//! ```text
//! signal = "voltage" ( "across" PART | "at" NODE | "from" NODE "to" NODE )
//!        | "current through" PART | "power into" PART
//!        | ( "charge" | "flux" | "energy" ) "held by" PART
//! ```

use pulsewright_circuit::phrase::Signal;
use pulsewright_circuit::{Expr, ExprKind, Name};

use super::{Parser, Read};
use crate::slip::What;

impl Parser<'_> {
    /// The signal's phrase that begins here, if one does.
    pub(super) fn signal_phrase(&mut self) -> Read<Option<Expr>> {
        self.refuse_so_far()?;
        let from = self.at;
        let signal = match (self.word(0), self.word(1)) {
            (Some("voltage"), _) => self.voltage()?,
            (Some("current"), Some("through")) => Signal::CurrentThrough(self.of_part(2)?),
            (Some("power"), Some("into")) => Signal::PowerInto(self.of_part(2)?),
            (Some("charge"), Some("held")) => Signal::ChargeHeld(self.held_by()?),
            (Some("flux"), Some("held")) => Signal::FluxHeld(self.held_by()?),
            (Some("energy"), Some("held")) => Signal::EnergyHeld(self.held_by()?),
            _ => return Ok(None),
        };
        Ok(Some(Expr::new(
            ExprKind::Signal(Box::new(signal)),
            self.since(from),
        )))
    }

    fn voltage(&mut self) -> Read<Signal> {
        match self.word(1) {
            Some("across") => Ok(Signal::VoltageAcross(self.of_part(2)?)),
            Some("at") => {
                self.at += 2;
                Ok(Signal::VoltageAt(self.thing("a node")?))
            }
            Some("from") => {
                self.at += 2;
                let from = self.thing("a node")?;
                self.expect_word("to")?;
                Ok(Signal::VoltageFrom(from, self.thing("a node")?))
            }
            _ => {
                self.at += 1;
                self.expected("`across`, `at` or `from`", &["across", "at", "from"])
            }
        }
    }

    /// The part after `words` words of a phrase.
    pub(super) fn of_part(&mut self, words: usize) -> Read<Name> {
        self.at += words;
        self.thing("a part")
    }

    fn held_by(&mut self) -> Read<Name> {
        self.at += 2;
        self.expect_word("by")?;
        self.thing("a part")
    }

    /// `charge through PART so far` and its like.
    fn refuse_so_far(&self) -> Read<()> {
        let running = matches!(
            (self.word(0), self.word(1)),
            (Some("charge"), Some("through"))
                | (Some("energy"), Some("into"))
                | (Some("action"), Some("of"))
        );
        match self.past_name(2).filter(|_| running) {
            Some(past) if self.is_word(past, "so") && self.is_word(past + 1, "far") => self.slip(
                self.place(),
                What::Later {
                    what: "a signal with `so far`".to_owned(),
                },
            ),
            _ => Ok(()),
        }
    }
}

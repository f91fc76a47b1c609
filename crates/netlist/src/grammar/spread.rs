//! Spreads: `tolerance 5 %`, `tolerance -20 % to 50 %`, `standard deviation 2 % lognormal`.

use pulsewright_circuit::spread::{Spread, SpreadKind, Value};

use super::{Parser, Read};
use crate::slip::What;
use crate::token::Kind;

impl Parser<'_> {
    /// Whether a spread begins `ahead` tokens from here.
    pub(super) fn begins_spread(&self, ahead: usize) -> bool {
        self.is_word(ahead, "tolerance")
            || (self.is_word(ahead, "standard") && self.is_word(ahead + 1, "deviation"))
    }

    /// A spread.
    pub(super) fn spread(&mut self) -> Read<Spread> {
        let from = self.at;
        let kind = if self.take_words(&["tolerance"]) {
            self.tolerance()?
        } else {
            self.deviation()?
        };
        Ok(Spread {
            kind,
            span: self.since(from),
        })
    }

    fn tolerance(&mut self) -> Read<SpreadKind> {
        let first = self.expression()?;
        if !self.take_words(&["to"]) {
            return Ok(SpreadKind::Tolerance(first));
        }
        Ok(SpreadKind::Limits(first, self.expression()?))
    }

    fn deviation(&mut self) -> Read<SpreadKind> {
        self.expect_words(&["standard", "deviation"])?;
        let amount = self.expression()?;
        let lognormal = self.take_words(&["lognormal"]);
        Ok(if lognormal {
            SpreadKind::Lognormal(amount)
        } else {
            SpreadKind::Deviation(amount)
        })
    }

    /// A spread after a comma, for the value before it, where one follows.
    pub(super) fn spread_of(&mut self, value: &mut Value) -> Read<()> {
        while self.kind(0) == Some(Kind::Comma) && self.begins_spread(1) {
            self.at += 1;
            let place = self.place();
            let word = self.word(0).unwrap_or_default().to_owned();
            let spread = self.spread()?;
            if value.spread.is_some() {
                return self.slip(
                    place,
                    What::Twice {
                        word,
                        within: "one value".to_owned(),
                    },
                );
            }
            value.spread = Some(spread);
        }
        Ok(())
    }

    /// An expression with its spread.
    pub(super) fn value(&mut self) -> Read<Value> {
        let mut value = Value::from(self.expression()?);
        self.spread_of(&mut value)?;
        Ok(value)
    }
}

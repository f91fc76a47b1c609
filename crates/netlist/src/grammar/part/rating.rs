//! Ratings: `rated 6 kV, 200 A, 5 W, 20 J, 3 A²*s`, what a part stands.
//!
//! Each is a claim of its own, named after the part and what is rated (`bank.voltage`), and goes
//! by its unit: the largest voltage and current, the mean power over the span, the energy into
//! the part in one shot, its action. A value after a comma is a further rating; a let-value
//! among them stands in brackets, since a word after a comma is a qualifier.

use pulsewright_circuit::builder::{
    action_of, at_most, current_through, energy_into, largest, mean, power_into, voltage_across,
};
use pulsewright_circuit::draft::Claim;
use pulsewright_circuit::{Dimension, Expr, Name, Phrase};

use crate::grammar::{Parser, Read};
use crate::slip::{Slip, What};
use crate::token::Kind;

impl Parser<'_> {
    /// The values from `rated` on.
    pub(super) fn ratings(&mut self) -> Read<()> {
        self.at += 1;
        loop {
            let value = self.expression()?;
            self.rated.push(value);
            let further = matches!(self.kind(1), Some(Kind::Number | Kind::Open));
            if self.kind(0) != Some(Kind::Comma) || !further {
                return Ok(());
            }
            self.at += 1;
        }
    }

    /// The claims that the ratings read since the last call make of a part.
    pub(super) fn rated_claims(&mut self, part: &Name) -> Vec<Claim> {
        let mut claims = Vec::new();
        for value in std::mem::take(&mut self.rated) {
            let dimension = self.dimension(&value, 0);
            let Some((word, reading)) = dimension.and_then(|d| stands(&part.text, d)) else {
                let what = What::NotRated {
                    part: part.text.clone(),
                    found: value.to_string(),
                };
                self.slips.push(Slip::new(value.span, what));
                continue;
            };
            claims.push(self.rated_claim(
                Name::new(format!("{part}.{word}"), value.span),
                reading,
                value,
            ));
        }
        claims
    }

    fn rated_claim(&self, name: Name, reading: Phrase, most: Expr) -> Claim {
        Claim {
            name,
            reading: reading.into(),
            relation: at_most(most),
            answers: Vec::new(),
            when: Vec::new(),
            allowing: None,
            in_shots: None,
            span: self.whole_span(),
        }
    }
}

/// What a rating of a dimension is called, and what it is held against.
fn stands(part: &str, dimension: Dimension) -> Option<(&'static str, Phrase)> {
    Some(match dimension {
        Dimension::VOLT => ("voltage", largest(voltage_across(part))),
        Dimension::AMPERE => ("current", largest(current_through(part))),
        Dimension::WATT => ("power", mean(power_into(part))),
        Dimension::JOULE => ("energy", energy_into(part)),
        Dimension::ACTION => ("action", action_of(part)),
        _ => return None,
    })
}

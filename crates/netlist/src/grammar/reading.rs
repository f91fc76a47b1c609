//! Readings: `energy into chest`, `time voltage across bank first falls through 60 V`.
//!
//! A reading begins with words of its own (the table [`BEGINNINGS`]); a word of these is a name
//! unless the phrase's next word follows. Each takes its slots and then its window, which
//! belongs to it alone.

use pulsewright_circuit::phrase::{Direction, Extreme, Level, Measure, Phrase, Which};
use pulsewright_circuit::{Expr, ExprKind};

use super::expr::Deep;
use super::window::WINDOWS;
use super::{Parser, Read};
use crate::slip::What;

/// First and second words of the readings; no second word where the first is reserved.
pub(super) const BEGINNINGS: &[(&str, &[&str])] = &[
    ("energy", &["into", "out", "stored"]),
    ("charge", &["through"]),
    ("gross", &["charge"]),
    ("action", &["of"]),
    ("heat", &["in"]),
    ("area", &["of"]),
    ("highest", &[]),
    ("lowest", &[]),
    ("largest", &[]),
    ("peak", &["to"]),
    ("steepest", &[]),
    ("mean", &[]),
    ("rms", &[]),
    ("final", &[]),
    ("time", &[]),
    ("rise", &["of"]),
    ("fall", &["of"]),
    ("front", &["time"]),
    ("virtual", &["origin"]),
    ("width", &["of"]),
    ("undershoot", &["of"]),
    ("overshoot", &["of"]),
    ("tilt", &["of"]),
    ("settling", &["time"]),
    ("period", &["of"]),
    ("duration", WINDOWS),
];

/// A measure and how deep its expressions are.
type Measured = (Measure, usize);

impl Parser<'_> {
    /// Whether a reading's phrase begins here.
    pub(super) fn begins_reading(&self) -> bool {
        let Some(first) = self.word(0) else {
            return false;
        };
        if first == "peak" {
            return self.are_words(&["peak", "to", "peak"]);
        }
        let second =
            |words: &[&str]| words.is_empty() || self.word(1).is_some_and(|w| words.contains(&w));
        BEGINNINGS
            .iter()
            .any(|(word, next)| *word == first && second(next))
    }

    /// A reading's phrase with its window.
    pub(super) fn reading_phrase(&mut self) -> Read<Deep> {
        let from = self.at;
        let (measure, inner) = self.measure()?;
        let (window, outer) = if takes_window(&measure) {
            self.window()?
        } else {
            (None, 0)
        };
        if self.is_word(0, "with") {
            let what = "a reading `with` another let-value".to_owned();
            return self.slip(self.place(), What::Later { what });
        }
        let span = self.since(from);
        let phrase = Phrase {
            measure,
            window,
            span,
        };
        self.counted(
            Expr::new(ExprKind::Reading(Box::new(phrase)), span),
            inner.max(outer),
        )
    }

    fn measure(&mut self) -> Read<Measured> {
        let first = self.word(0).unwrap_or_default();
        match first {
            "energy" => self.energy(),
            "charge" => Ok((Measure::Charge(self.of_part(2)?), 0)),
            "gross" => {
                self.at += 1;
                self.expect_words(&["charge", "through"])?;
                Ok((Measure::GrossCharge(self.of_part(0)?), 0))
            }
            "action" => Ok((Measure::Action(self.of_part(2)?), 0)),
            "heat" => Ok((Measure::Heat(self.of_part(2)?), 0)),
            "time" => self.time(),
            "rise" | "fall" | "front" | "virtual" => self.between_fractions(first),
            "width" | "overshoot" | "settling" => self.with_value(first),
            "steepest" => self.steepest(),
            "duration" => {
                self.at += 1;
                Ok((Measure::Duration, 0))
            }
            _ => self.of_signal(first),
        }
    }

    fn energy(&mut self) -> Read<Measured> {
        match self.word(1) {
            Some("into") => Ok((Measure::EnergyInto(self.of_part(2)?), 0)),
            Some("out") => {
                self.at += 1;
                self.expect_words(&["out", "of"])?;
                Ok((Measure::EnergyOutOf(self.of_part(0)?), 0))
            }
            _ => self.stored(),
        }
    }

    fn stored(&mut self) -> Read<Measured> {
        self.at += 2;
        if self.is_word(0, "just") {
            self.expect_words(&["just", "before"])?;
            let Deep { expr, depth } = self.time_slot()?;
            return Ok((Measure::StoredJustBefore(expr), depth));
        }
        if !self.take_words(&["at"]) {
            return self.expected("`at` or `just before`", &["at", "just"]);
        }
        let Deep { expr, depth } = self.time_slot()?;
        Ok((Measure::StoredAt(expr), depth))
    }

    /// The readings of a signal and nothing else.
    fn of_signal(&mut self, first: &str) -> Read<Measured> {
        self.at += 1;
        let make: fn(Expr) -> Measure = match first {
            "highest" => Measure::Highest,
            "lowest" => Measure::Lowest,
            "largest" => Measure::Largest,
            "mean" => Measure::Mean,
            "rms" => Measure::Rms,
            "final" => Measure::Final,
            "area" => Measure::Area,
            "undershoot" => Measure::Undershoot,
            "tilt" => Measure::Tilt,
            "period" => Measure::Period,
            _ => Measure::PeakToPeak,
        };
        match first {
            "area" | "undershoot" | "tilt" | "period" => self.expect_word("of")?,
            "peak" => self.expect_words(&["to", "peak"])?,
            "largest" | "rms" => self.refuse_difference()?,
            _ => {}
        }
        let Deep { expr, depth } = self.signal_slot()?;
        Ok((make(expr), depth))
    }

    /// `largest difference of SIGNAL and MEASURED`.
    fn refuse_difference(&self) -> Read<()> {
        if self.are_words(&["difference", "of"]) {
            return self.slip(
                self.place(),
                What::Later {
                    what: "a `difference` from a measured waveform".to_owned(),
                },
            );
        }
        Ok(())
    }

    fn steepest(&mut self) -> Read<Measured> {
        self.at += 1;
        let Deep {
            expr: signal,
            depth,
        } = self.signal_slot()?;
        let between_jumps = self.take_words(&["between", "jumps"]);
        Ok((
            Measure::Steepest {
                signal,
                between_jumps,
            },
            depth,
        ))
    }

    fn time(&mut self) -> Read<Measured> {
        self.at += 1;
        if self.take_words(&["to"]) {
            self.expect_words(&["half", "value", "of"])?;
            let Deep {
                expr: signal,
                depth,
            } = self.signal_slot()?;
            if !self.take_words(&["with"]) {
                return self.expected_after_signal("`with front from`", &["with"]);
            }
            self.expect_word("front")?;
            let (from, to, inner) = self.fractions()?;
            return Ok((Measure::TimeToHalf { signal, from, to }, depth.max(inner)));
        }
        if self.take_words(&["of"]) {
            return self.time_of();
        }
        let Deep {
            expr: signal,
            depth,
        } = self.signal_slot()?;
        let (measure, inner) = self.crossing(signal)?;
        Ok((measure, depth.max(inner)))
    }

    fn time_of(&mut self) -> Read<Measured> {
        let extreme = match self.word(0) {
            Some("highest") => Extreme::Highest,
            Some("lowest") => Extreme::Lowest,
            Some("largest") => Extreme::Largest,
            _ => {
                let words = &["highest", "lowest", "largest"];
                return self.expected("`highest`, `lowest` or `largest`", words);
            }
        };
        self.at += 1;
        let Deep {
            expr: signal,
            depth,
        } = self.signal_slot()?;
        Ok((Measure::TimeOf { extreme, signal }, depth))
    }

    /// What follows the signal in `time SIGNAL first rises through LEVEL`, `… is above LEVEL`.
    fn crossing(&mut self, signal: Expr) -> Read<Measured> {
        let which = match self.word(0) {
            Some("first") => Which::First,
            Some("last") => Which::Last,
            Some("is") => return self.time_spent(signal),
            _ => {
                return self
                    .expected_after_signal("`first`, `last` or `is`", &["first", "last", "is"]);
            }
        };
        self.at += 1;
        let direction = match self.word(0) {
            Some("rises") => Direction::Rises,
            Some("falls") => Direction::Falls,
            _ => return self.expected("`rises` or `falls`", &["rises", "falls"]),
        };
        self.at += 1;
        self.expect_word("through")?;
        let (level, depth) = self.level()?;
        Ok((
            Measure::Crossing {
                signal,
                which,
                direction,
                level,
            },
            depth,
        ))
    }

    fn time_spent(&mut self, signal: Expr) -> Read<Measured> {
        self.at += 1;
        let above = match self.word(0) {
            Some("above") => true,
            Some("below") => false,
            _ => return self.expected("`above` or `below`", &["above", "below"]),
        };
        self.at += 1;
        let (level, depth): (Level, usize) = self.level()?;
        Ok((
            Measure::TimeSpent {
                signal,
                above,
                level,
            },
            depth,
        ))
    }

    /// `rise of SIGNAL from 10 % to 90 %` and its like.
    fn between_fractions(&mut self, first: &str) -> Read<Measured> {
        self.at += 1;
        match first {
            "front" => self.expect_word("time")?,
            "virtual" => self.expect_word("origin")?,
            _ => {}
        }
        self.expect_word("of")?;
        let Deep {
            expr: signal,
            depth,
        } = self.signal_slot()?;
        let (from, to, inner) = self.fractions()?;
        let measure = match first {
            "rise" => Measure::Rise { signal, from, to },
            "fall" => Measure::Fall { signal, from, to },
            "front" => Measure::FrontTime { signal, from, to },
            _ => Measure::VirtualOrigin { signal, from, to },
        };
        Ok((measure, depth.max(inner)))
    }

    /// `from 30 % to 90 %`.
    fn fractions(&mut self) -> Read<(Expr, Expr, usize)> {
        if !self.take_words(&["from"]) {
            return self.expected_after_signal("`from`", &["from"]);
        }
        let from = self.value_slot()?;
        self.expect_word("to")?;
        let to = self.value_slot()?;
        Ok((from.expr, to.expr, from.depth.max(to.depth)))
    }

    /// `width of SIGNAL at 50 %`, `overshoot of SIGNAL over 5 V`, `settling time of SIGNAL to 60 V`.
    fn with_value(&mut self, first: &str) -> Read<Measured> {
        self.at += 1;
        if first == "settling" {
            self.expect_word("time")?;
        }
        self.expect_word("of")?;
        let Deep {
            expr: signal,
            depth,
        } = self.signal_slot()?;
        let joint = match first {
            "width" => "at",
            "overshoot" => "over",
            _ => "to",
        };
        if !self.take_words(&[joint]) {
            return self.expected_after_signal(&format!("`{joint}`"), &[joint]);
        }
        let Deep {
            expr: value,
            depth: inner,
        } = self.value_slot()?;
        let measure = match first {
            "width" => Measure::Width {
                signal,
                fraction: value,
            },
            "overshoot" => Measure::Overshoot {
                signal,
                over: value,
            },
            _ => Measure::Settling { signal, to: value },
        };
        Ok((measure, depth.max(inner)))
    }
}

/// Whether a window may follow the measure.
fn takes_window(measure: &Measure) -> bool {
    !matches!(
        measure,
        Measure::Final(_) | Measure::StoredAt(_) | Measure::StoredJustBefore(_)
    )
}

//! Crossings of a level, and the time above or below it.
//!
//! A level that is a value is met by the signal as it is. `P % of largest` is the signal's value
//! at the instant of its largest absolute value, times the share: there the signal is turned
//! over where that value is negative, so that rising and above mean away from zero.

use std::rc::Rc;

use pulsewright_circuit::Expr;
use pulsewright_circuit::phrase::{Direction, Level, Which, Window};

use super::{Extent, Lack, Number, Reader, Sample, Signal, absent};
use crate::waveform::{Extremum, Run, falls, rises};

/// A signal turned so that its largest value is positive, and that value.
pub(super) struct Crested<'a> {
    pub signal: Rc<Signal<'a>>,
    /// The sign of the largest value.
    pub sign: f64,
    /// Its absolute value.
    pub crest: f64,
    /// Its instant.
    pub at: Extremum,
}

impl Crested<'_> {
    /// The runs of the turned signal against a share of its crest.
    pub fn runs(&self, extent: &Extent, share: f64) -> Vec<Run> {
        self.signal
            .wave
            .runs(&extent.intervals, self.sign, share * self.crest)
    }

    /// The level at a share of the crest, in words, with the signal's own sign.
    pub fn said(&self, share: f64) -> String {
        self.signal.said(self.sign * share * self.crest)
    }
}

impl<'a> Reader<'a> {
    /// A signal with its largest value in a window.
    pub(super) fn crested(&self, signal: &Expr, extent: &Extent) -> Result<Crested<'a>, Lack> {
        let signal = self.signal_in(signal, extent)?;
        signal.without_impulse(&extent.intervals)?;
        match signal.wave.largest_in(&extent.intervals) {
            Some(at) if at.value != 0.0 => {
                let (sign, crest) = (at.value.signum(), at.value.abs());
                Ok(Crested {
                    signal,
                    sign,
                    crest,
                    at,
                })
            }
            _ => absent(format!("{} has no crest: it is 0 throughout", signal.text)),
        }
    }

    /// The instant of a crossing, s, with what it moves by.
    pub(super) fn crossing_at(&self, signal: &Signal<'_>, t: f64) -> Number {
        self.instant(t, signal.wave.shift(t) * signal.wave.largest())
    }

    /// The instant of a crossing upwards; one at the very start of the window is that start.
    pub(super) fn rise_at(&self, signal: &Signal<'_>, (t, from_start): (f64, bool)) -> Number {
        if from_start {
            self.instant(t, 0.0)
        } else {
            self.crossing_at(signal, t)
        }
    }

    /// The signal, its runs against a level, and the level in words.
    fn levelled(
        &self,
        signal: &Expr,
        level: &Level,
        extent: &Extent,
    ) -> Result<(Rc<Signal<'a>>, Vec<Run>, String), Lack> {
        match level {
            Level::Value(e) => {
                let level = self.value(e)?.value;
                let signal = self.signal_in(signal, extent)?;
                let runs = signal.wave.runs(&extent.intervals, 1.0, level);
                let said = signal.said(level);
                Ok((signal, runs, said))
            }
            Level::OfLargest(e) => {
                let share = self.value(e)?.value;
                let crested = self.crested(signal, extent)?;
                let runs = crested.runs(extent, share);
                let said = crested.said(share);
                Ok((crested.signal, runs, said))
            }
        }
    }

    /// `time SIGNAL first rises through LEVEL` and the like, s.
    pub(super) fn crossing(
        &self,
        signal: &Expr,
        which: Which,
        direction: Direction,
        level: &Level,
        w: Option<&Window>,
    ) -> Sample {
        let extent = self.filled(w)?;
        let (signal, runs, said) = self.levelled(signal, level, &extent)?;
        let all: Vec<(f64, bool)> = match direction {
            Direction::Rises => rises(&runs),
            Direction::Falls => falls(&runs).into_iter().map(|t| (t, false)).collect(),
        };
        let found = match which {
            Which::First => all.first(),
            Which::Last => all.last(),
        };
        match found {
            Some(found) => Ok(self.rise_at(&signal, *found)),
            None => absent(never(&signal, direction, &runs, &said, &extent)),
        }
    }

    /// `time SIGNAL is above LEVEL`, or below it: the total, s.
    pub(super) fn time_spent(
        &self,
        signal: &Expr,
        above: bool,
        level: &Level,
        w: Option<&Window>,
    ) -> Sample {
        let extent = self.extent(w)?;
        if extent.intervals.is_empty() {
            return Ok(Number::default());
        }
        let (signal, runs, _) = self.levelled(signal, level, &extent)?;
        let wanted = if above { 1 } else { -1 };
        let mut total = Number::default();
        for run in runs.iter().filter(|r| r.sign == wanted && r.end > r.start) {
            let (start, end) = (
                self.crossing_at(&signal, run.start),
                self.crossing_at(&signal, run.end),
            );
            total.value += run.end - run.start;
            total.size += start.size + end.size;
            total.scale += start.scale + end.scale;
        }
        Ok(Number::itself(total.value, total.scale, total.size))
    }
}

/// Why there is no crossing, in words.
fn never(
    signal: &Signal<'_>,
    direction: Direction,
    runs: &[Run],
    level: &str,
    extent: &Extent,
) -> String {
    let text = &signal.text;
    let last = runs.last().map_or(0, |r| r.sign);
    match direction {
        Direction::Falls if last > 0 => format!(
            "{text} is still above {level} at the end of {}",
            extent.end_words
        ),
        Direction::Falls => format!("{text} never falls through {level}: it is never above"),
        Direction::Rises => {
            let top = signal
                .wave
                .highest(&extent.intervals)
                .map_or(0.0, |e| e.value);
            format!(
                "{text} never rises through {level}; its highest value is {}",
                signal.said(top)
            )
        }
    }
}

//! What follows the crest: undershoot, overshoot, tilt, settling time, period.

use pulsewright_circuit::Expr;
use pulsewright_circuit::phrase::Window;

use super::{Number, Reader, Sample, absent};
use crate::waveform::{Run, falls, rises};

impl Reader<'_> {
    /// `undershoot of SIGNAL`: the largest excursion of the other sign after the largest value, as
    /// a fraction of it; 0 where there is none.
    pub(super) fn undershoot(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        extent.unbroken()?;
        let crested = self.crested(signal, &extent)?;
        let after = self.part_of(&extent, crested.at.time);
        let wave = &crested.signal.wave;
        let other = if crested.sign > 0.0 {
            wave.lowest(&after.intervals)
        } else {
            wave.highest(&after.intervals)
        };
        let excursion = other.map_or(0.0, |e| (-crested.sign * e.value).max(0.0));
        let scale = wave.largest() / crested.crest;
        Ok(Number::itself(excursion / crested.crest, scale, scale))
    }

    /// `overshoot of SIGNAL over VALUE`: how far the largest value exceeds it, as a fraction of
    /// it; 0 where it does not.
    pub(super) fn overshoot(&self, signal: &Expr, over: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        let over = self.value(over)?;
        if over.value == 0.0 {
            return absent("the value that it would exceed is 0");
        }
        let crested = self.crested(signal, &extent)?;
        let ratio = crested.at.value / over.value;
        let scale = (crested.signal.wave.largest() + ratio.abs() * over.size) / over.value.abs();
        Ok(Number::itself((ratio - 1.0).max(0.0), scale, scale))
    }

    /// `tilt of SIGNAL`: 1 - abs(end) / abs(start), just inside the window's edges.
    pub(super) fn tilt(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        let window = extent.unbroken()?;
        let signal = self.signal_in(signal, &extent)?;
        let (start, end) = (
            signal.wave.after(window.start).abs(),
            signal.wave.before(window.end).abs(),
        );
        if start <= crate::waveform::noise(signal.wave.largest()) {
            return absent(format!("{} is 0 at the start of its window", signal.text));
        }
        let size = signal.wave.largest() / start * (1.0 + end / start);
        Ok(Number::itself(1.0 - end / start, size, size))
    }

    /// `settling time of SIGNAL to VALUE`, s: from the window's start to the instant after which
    /// the absolute value stays at or below it to the window's end.
    pub(super) fn settling(&self, signal: &Expr, to: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        let level = self.value(to)?.value;
        let signal = self.signal_in(signal, &extent)?;
        let start = extent.intervals.first().map_or(0.0, |i| i.start);
        let last = |k: f64| {
            let runs = signal.wave.runs(&extent.intervals, k, level);
            let still = runs.last().is_some_and(|r| r.sign > 0);
            runs.iter()
                .rev()
                .find(|r| r.sign > 0)
                .map(|r: &Run| (r.end, still))
        };
        let ends = [last(1.0), last(-1.0)];
        if ends.iter().flatten().any(|(_, still)| *still) {
            let value = signal.wave.before(extent.end()).abs();
            let (value, level) = (signal.said(value), signal.said(level));
            return absent(format!(
                "{} is still at {value}, above {level}, at the end of {}",
                signal.text, extent.end_words
            ));
        }
        let from = self.instant(start, 0.0);
        match ends.into_iter().flatten().map(|(t, _)| t).reduce(f64::max) {
            Some(t) => Ok(Number::between(from, self.crossing_at(&signal, t))),
            None => Ok(Number::default()),
        }
    }

    /// `period of SIGNAL`, s: between the first two zero crossings of one direction.
    pub(super) fn period(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        let signal = self.signal_in(signal, &extent)?;
        let runs = signal.wave.runs(&extent.intervals, 1.0, 0.0);
        let up: Vec<f64> = rises(&runs)
            .into_iter()
            .filter(|(_, from_start)| !from_start)
            .map(|(t, _)| t)
            .collect();
        let pair = |all: &[f64]| Some((*all.first()?, *all.get(1)?));
        let found = [pair(&up), pair(&falls(&runs))]
            .into_iter()
            .flatten()
            .min_by(|a, b| a.1.total_cmp(&b.1));
        match found {
            Some((a, b)) => Ok(Number::between(
                self.crossing_at(&signal, a),
                self.crossing_at(&signal, b),
            )),
            None => absent(format!(
                "{} does not cross zero twice in one direction",
                signal.text
            )),
        }
    }
}

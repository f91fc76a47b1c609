//! Highest, lowest, largest, peak to peak and steepest.

use pulsewright_circuit::Expr;
use pulsewright_circuit::phrase::Window;

use super::{Lack, Number, Reader, Sample, absent, said_time};
use crate::waveform::{Extremum, Interval, Wave};

impl Reader<'_> {
    /// `highest SIGNAL`: the supremum.
    pub(super) fn highest(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        self.read_extreme(signal, w, |wave, i| Some(wave.highest(i)?.value))
    }

    /// `lowest SIGNAL`: the infimum.
    pub(super) fn lowest(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        self.read_extreme(signal, w, |wave, i| Some(wave.lowest(i)?.value))
    }

    /// `largest SIGNAL`: the supremum of the absolute value.
    pub(super) fn largest(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        self.read_extreme(signal, w, |wave, i| Some(wave.largest_in(i)?.value.abs()))
    }

    /// `peak to peak SIGNAL`: highest less lowest.
    pub(super) fn peak_to_peak(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        self.read_extreme(signal, w, |wave, i| {
            Some(wave.highest(i)?.value - wave.lowest(i)?.value)
        })
    }

    fn read_extreme(
        &self,
        signal: &Expr,
        w: Option<&Window>,
        read: impl Fn(&Wave<'_>, &[Interval]) -> Option<f64>,
    ) -> Sample {
        let extent = self.filled(w)?;
        let signal = self.signal_in(signal, &extent)?;
        signal.without_impulse(&extent.intervals)?;
        match read(&signal.wave, &extent.intervals) {
            Some(value) => Ok(Number::new(value, signal.wave.largest())),
            None => absent(format!("{} has no value in its window", signal.text)),
        }
    }

    /// `steepest SIGNAL`: the supremum of the absolute rate of change.
    pub(super) fn steepest(
        &self,
        signal: &Expr,
        between_jumps: bool,
        w: Option<&Window>,
    ) -> Sample {
        let extent = self.filled(w)?;
        let signal = self.signal_in(signal, &extent)?;
        if !between_jumps {
            signal.without_impulse(&extent.intervals)?;
            if let Some(t) = signal.wave.first_jump(&extent.intervals) {
                return Err(Lack::Unbounded(format!(
                    "{} jumps at {}",
                    signal.text,
                    said_time(t)
                )));
            }
        }
        match signal.wave.steepest(&extent.intervals) {
            Some(Extremum { value, .. }) => Ok(Number::new(value, value)),
            None => absent(format!("{} has no value in its window", signal.text)),
        }
    }
}

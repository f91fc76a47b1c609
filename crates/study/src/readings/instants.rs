//! A signal at an instant, and the instants of extremes.

use pulsewright_circuit::Expr;
use pulsewright_circuit::formula::Side;
use pulsewright_circuit::phrase::{Extreme, Window};

use super::{Number, Reader, Sample, absent};

impl Reader<'_> {
    /// `SIGNAL at T`: just after it; at the span's end just before.
    pub(super) fn at(&self, signal: &Expr, time: &Expr) -> Sample {
        self.value_at(signal, time, Side::After)
    }

    /// `SIGNAL just before T`; `just before 0 s` is the stated start.
    pub(super) fn just_before(&self, signal: &Expr, time: &Expr) -> Sample {
        self.value_at(signal, time, Side::Before)
    }

    fn value_at(&self, signal: &Expr, time: &Expr, side: Side) -> Sample {
        let t = self.time(time)?;
        self.value_on(signal, t, side)
    }

    fn value_on(&self, signal: &Expr, t: f64, side: Side) -> Sample {
        let signal = self.signal(signal)?;
        signal.grounded_at(t, side)?;
        let value = match side {
            Side::After => signal.wave.after(t),
            Side::Before => signal.wave.before(t),
        };
        Ok(Number::new(value, signal.wave.largest()))
    }

    /// `final SIGNAL`: just before the end, of the window where one is written.
    pub(super) fn last(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        let end = self.filled(w)?.end();
        self.value_on(signal, end, Side::Before)
    }

    /// `time of highest SIGNAL`: the first where there are several.
    pub(super) fn time_of(&self, extreme: Extreme, signal: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        let signal = self.signal_in(signal, &extent)?;
        signal.without_impulse(&extent.intervals)?;
        let found = match extreme {
            Extreme::Highest => signal.wave.highest(&extent.intervals),
            Extreme::Lowest => signal.wave.lowest(&extent.intervals),
            Extreme::Largest => signal.wave.largest_in(&extent.intervals),
        };
        let Some(found) = found else {
            return absent(format!("{} has no value in its window", signal.text));
        };
        let all = [crate::waveform::Interval {
            start: 0.0,
            end: self.record.end(),
        }];
        let steepest = signal.wave.steepest(&all).map_or(0.0, |e| e.value);
        Ok(self.instant(found.time, found.shift * steepest))
    }
}

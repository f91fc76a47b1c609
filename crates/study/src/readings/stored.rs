//! `energy stored at T`: what the whole circuit holds, J.

use pulsewright_circuit::formula::Side;
use pulsewright_circuit::{Expr, Formula, Probe};

use super::{Number, Reader, Sample};
use crate::waveform::Wave;

impl Reader<'_> {
    /// Just after the instant.
    pub(super) fn stored_at(&self, time: &Expr) -> Sample {
        self.stored(time, Side::After)
    }

    /// Just before the instant.
    pub(super) fn stored_just_before(&self, time: &Expr) -> Sample {
        self.stored(time, Side::Before)
    }

    fn stored(&self, time: &Expr, side: Side) -> Sample {
        let t = self.time(time)?;
        let wave = Wave::of(&Formula::Probe(Probe::EnergyStored), &self.record);
        let value = match side {
            Side::After => wave.after(t),
            Side::Before => wave.before(t),
        };
        Ok(Number::new(value, wave.largest()))
    }
}

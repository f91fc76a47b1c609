//! Integrals: energy, charge, action, area, and the means.
//!
//! Energy and charge go by the rules of the stepping method (see `waveform::product`), the
//! others by the integrals of the cubics. Energy, charge and area count impulses; the square of
//! an impulse has no integral, so that `action` and `rms` are unbounded where there is one.

use pulsewright_circuit::phrase::Window;
use pulsewright_circuit::{Expr, Formula, Name, Probe};
use pulsewright_engine::ports;

use super::{Extent, Lack, Number, Reader, Sample, said_time};
use crate::waveform::{Interval, Sum, Wave, charge, energy};

impl Reader<'_> {
    /// `energy into PART`, J.
    pub(super) fn energy_into(&self, part: &Name, w: Option<&Window>) -> Sample {
        let extent = self.extent(w)?;
        let part = self.part(part)?;
        let sum = self.energy_of(part, &extent.intervals);
        Ok(Number::new(sum.net, sum.gross))
    }

    /// The energy into a part through its terminals, jumps included, J.
    pub(crate) fn energy_of(&self, part: usize, window: &[Interval]) -> Sum {
        let mut sum = self.products(&ports(self.case.setup, part), window);
        for jump in self.record.jumps_in(window) {
            jump.energies
                .iter()
                .filter(|e| e.0 == part)
                .for_each(|e| sum.add(e.1));
        }
        sum
    }

    /// The sum over pairs of a voltage and a current of their energies, without jumps, J.
    pub(super) fn products(&self, pairs: &[(Probe, Probe)], window: &[Interval]) -> Sum {
        let mut sum = Sum::default();
        for (v, i) in pairs {
            if let (Some(v), Some(i)) = (self.record.row(*v), self.record.row(*i)) {
                sum.join(energy(&self.record, v, i, window));
            }
        }
        sum
    }

    /// `charge through PART`, C.
    pub(super) fn charge(&self, part: &Name, w: Option<&Window>) -> Sample {
        let sum = self.charges(part, w)?;
        Ok(Number::new(sum.net, sum.gross))
    }

    /// `gross charge through PART`, C.
    pub(super) fn gross_charge(&self, part: &Name, w: Option<&Window>) -> Sample {
        let sum = self.charges(part, w)?;
        Ok(Number::new(sum.gross, sum.gross))
    }

    fn charges(&self, part: &Name, w: Option<&Window>) -> Result<Sum, Lack> {
        let extent = self.extent(w)?;
        let Some(row) = self.record.row(Probe::CurrentThrough(self.part(part)?)) else {
            return Ok(Sum::default());
        };
        let mut sum = charge(&self.record, row, &extent.intervals);
        for jump in self.record.jumps_in(&extent.intervals) {
            sum.add(jump.impulses.get(row).copied().unwrap_or(0.0));
        }
        Ok(sum)
    }

    /// `action of PART`, A²·s: the sum over its contacts for a changeover.
    pub(super) fn action(&self, part: &Name, w: Option<&Window>) -> Sample {
        let extent = self.extent(w)?;
        match self.action_of(self.part(part)?, &extent.intervals) {
            Ok(sum) => Ok(Number::new(sum, sum)),
            Err(t) => Err(Lack::Unbounded(format!(
                "current through {part} has an impulse at {}",
                said_time(t)
            ))),
        }
    }

    /// The action of a part, A²·s, or the instant of the impulse that makes it unbounded, s.
    pub(crate) fn action_of(&self, part: usize, window: &[Interval]) -> Result<f64, f64> {
        let mut sum = 0.0;
        for (_, current) in ports(self.case.setup, part) {
            let wave = Wave::of(&Formula::Probe(current), &self.record);
            if let Some((t, _)) = window
                .iter()
                .find_map(|i| wave.impulses_in(*i).first().copied())
            {
                return Err(t);
            }
            sum += wave.square(window);
        }
        Ok(sum)
    }

    /// `area of SIGNAL`, its unit times s.
    pub(super) fn area(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.extent(w)?;
        self.area_over(signal, &extent)
    }

    fn area_over(&self, signal: &Expr, extent: &Extent) -> Sample {
        let signal = self.signal_in(signal, extent)?;
        Ok(Number::new(
            signal.wave.area(&extent.intervals),
            signal.wave.gross(&extent.intervals),
        ))
    }

    /// `mean SIGNAL`.
    pub(super) fn mean(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        let area = self.area_over(signal, &extent)?;
        let length = extent.length();
        Ok(Number::new(area.value / length, area.scale / length))
    }

    /// `rms SIGNAL`.
    pub(super) fn rms(&self, signal: &Expr, w: Option<&Window>) -> Sample {
        let extent = self.filled(w)?;
        let signal = self.signal_in(signal, &extent)?;
        signal.without_impulse(&extent.intervals)?;
        let value = (signal.wave.square(&extent.intervals) / extent.length()).sqrt();
        Ok(Number::new(value, value))
    }
}

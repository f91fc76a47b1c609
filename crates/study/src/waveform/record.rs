//! A shot with its probes indexed, and the leaves of formulas over it.
//!
//! A formula's leaf is a probe; its jet at a mesh point is the recorded value and slope, between
//! mesh points those of the cubic, at a jump the impulse in place of the slope (so that the
//! rate of the formula becomes the impulse of the formula).

use std::collections::HashMap;

use pulsewright_circuit::Probe;
use pulsewright_circuit::formula::{Jet, Leaves};
use pulsewright_circuit::setup::SetEdge;
use pulsewright_engine::{Jump, Shot, Stretch};

use super::{Cubic, Interval};

/// A shot with its probes indexed.
pub struct Record<'a> {
    /// The shot.
    pub shot: &'a Shot,
    index: HashMap<Probe, usize>,
}

impl<'a> Record<'a> {
    /// Indexes the probes of a shot.
    #[must_use]
    pub fn new(shot: &'a Shot) -> Self {
        let index = shot
            .probes
            .iter()
            .enumerate()
            .map(|(i, p)| (*p, i))
            .collect();
        Record { shot, index }
    }

    /// Where a probe stands in the shot's vectors.
    #[must_use]
    pub fn row(&self, probe: Probe) -> Option<usize> {
        self.index.get(&probe).copied()
    }

    /// The span's end, s.
    #[must_use]
    pub fn end(&self) -> f64 {
        self.shot
            .stretches
            .last()
            .and_then(|s| s.times.last())
            .copied()
            .unwrap_or(0.0)
    }

    /// The instant of a jump that lies within rounding of `t`, else `t`; so for the span's end.
    #[must_use]
    pub fn snap(&self, t: f64) -> f64 {
        let end = self.end();
        let near = |at: f64| (t - at).abs() <= 8.0 * f64::EPSILON * t.abs() + f64::EPSILON * end;
        let jumps = &self.shot.jumps;
        let after = jumps.partition_point(|j| j.time < t);
        let around = [
            after.checked_sub(1).and_then(|i| jumps.get(i)),
            jumps.get(after),
        ];
        let nearest = around
            .into_iter()
            .flatten()
            .map(|j| j.time)
            .chain([end])
            .filter(|at| near(*at));
        nearest
            .min_by(|a, b| (a - t).abs().total_cmp(&(b - t).abs()))
            .unwrap_or(t)
    }

    /// The jumps that lie in any of the intervals, in order of time.
    pub fn jumps_in<'w>(
        &self,
        window: &'w [Interval],
    ) -> impl Iterator<Item = &'a Jump> + use<'a, 'w> {
        let jumps = &self.shot.jumps;
        window.iter().flat_map(move |interval| {
            let first = jumps.partition_point(|j| j.time < interval.start);
            jumps
                .iter()
                .skip(first)
                .take_while(|j| j.time < interval.end)
        })
    }
}

/// The cubic of row `p` of a stretch over the step from point `n`.
pub(super) fn cubic(stretch: &Stretch, p: usize, n: usize) -> Option<Cubic> {
    let (values, slopes) = (stretch.values.get(p)?, stretch.slopes.get(p)?);
    Some(Cubic {
        t0: *stretch.times.get(n)?,
        t1: *stretch.times.get(n + 1)?,
        v0: *values.get(n)?,
        v1: *values.get(n + 1)?,
        s0: *slopes.get(n)?,
        s1: *slopes.get(n + 1)?,
    })
}

const NOTHING: Jet = Jet::constant(f64::NAN);

/// Leaves at a mesh point.
pub(super) struct AtPoint<'r, 'a> {
    pub record: &'r Record<'a>,
    pub stretch: &'a Stretch,
    pub point: usize,
}

impl Leaves for AtPoint<'_, '_> {
    fn probe(&self, probe: Probe) -> Jet {
        let read = || {
            let p = self.record.row(probe)?;
            let value = *self.stretch.values.get(p)?.get(self.point)?;
            let rate = *self.stretch.slopes.get(p)?.get(self.point)?;
            Some(Jet {
                value,
                rate,
                second: 0.0,
            })
        };
        read().unwrap_or(NOTHING)
    }

    fn edge(&self, _: SetEdge) -> f64 {
        f64::NAN
    }
}

/// Leaves inside a step.
pub(super) struct Inside<'r, 'a> {
    pub record: &'r Record<'a>,
    pub stretch: &'a Stretch,
    pub step: usize,
    pub time: f64,
}

impl Leaves for Inside<'_, '_> {
    fn probe(&self, probe: Probe) -> Jet {
        let curve = self
            .record
            .row(probe)
            .and_then(|p| cubic(self.stretch, p, self.step));
        curve.map_or(NOTHING, |c| Jet {
            value: c.value(self.time),
            rate: c.slope(self.time),
            second: c.bend(self.time),
        })
    }

    fn edge(&self, _: SetEdge) -> f64 {
        f64::NAN
    }
}

/// Leaves as stated, just before 0 s.
pub(super) struct Stated<'r, 'a>(pub &'r Record<'a>);

impl Leaves for Stated<'_, '_> {
    fn probe(&self, probe: Probe) -> Jet {
        let value = self.0.row(probe).and_then(|p| self.0.shot.stated.get(p));
        value.map_or(NOTHING, |v| Jet::constant(*v))
    }

    fn edge(&self, _: SetEdge) -> f64 {
        f64::NAN
    }
}

/// Leaves just after a jump whose rates are the impulses there, or zero.
pub(super) struct Impulses<'r, 'a> {
    pub record: &'r Record<'a>,
    pub jump: usize,
    pub counted: bool,
}

impl Impulses<'_, '_> {
    fn impulse(&self, probe: Probe, row: usize) -> f64 {
        let Some(jump) = self
            .record
            .shot
            .jumps
            .get(self.jump)
            .filter(|_| self.counted)
        else {
            return 0.0;
        };
        match probe {
            Probe::PowerInto(part) => jump
                .energies
                .iter()
                .filter(|e| e.0 == part)
                .map(|e| e.1)
                .sum(),
            _ => jump.impulses.get(row).copied().unwrap_or(0.0),
        }
    }
}

impl Leaves for Impulses<'_, '_> {
    fn probe(&self, probe: Probe) -> Jet {
        let read = || {
            let row = self.record.row(probe)?;
            let stretch = self.record.shot.stretches.get(self.jump)?;
            let value = *stretch.values.get(row)?.first()?;
            Some(Jet {
                value,
                rate: self.impulse(probe, row),
                second: 0.0,
            })
        };
        read().unwrap_or(NOTHING)
    }

    fn edge(&self, _: SetEdge) -> f64 {
        f64::NAN
    }
}

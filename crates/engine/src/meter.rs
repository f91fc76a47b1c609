//! Meters the energies of the balance along the steps.
//!
//! A step's energy in a branch is `h v̄ ī`, the product of the means of its ends. That makes the
//! balance of a trapezoidal run exact to rounding, whatever the step; so a balance that closes
//! says nothing about accuracy. By exact propagation it is the integral of the product of the
//! cubics, as every reading of such a run.

use crate::equations::{Equations, Point};
use crate::run::Run;
use crate::topology::Mode;

/// What is metered: one branch, its part, and whether it supplies.
pub(crate) struct Meter {
    pub(crate) branch: usize,
    pub(crate) part: usize,
    pub(crate) supplies: bool,
    pub(crate) before: Reading,
}

/// Voltage and current of a branch with their rates.
#[derive(Clone, Copy, Debug, Default)]
pub(crate) struct Reading {
    volts: [f64; 2],
    amperes: [f64; 2],
}

impl Reading {
    /// Energy over a step of `h` that ends at `end`: the product of the means.
    fn by_means(&self, end: &Reading, h: f64) -> f64 {
        let ([v0, _], [v1, _]) = (self.volts, end.volts);
        let ([i0, _], [i1, _]) = (self.amperes, end.amperes);
        0.25 * h * (v0 + v1) * (i0 + i1)
    }

    /// The integral of the product of the cubics.
    fn by_cubics(&self, end: &Reading, h: f64) -> f64 {
        let four = |a: [f64; 2], b: [f64; 2]| [a[0], h * a[1], b[0], h * b[1]];
        let (v, i) = (four(self.volts, end.volts), four(self.amperes, end.amperes));
        let row = |r: &[f64; 4]| r.iter().zip(&i).map(|(a, b)| a * b).sum::<f64>();
        let sum: f64 = MASS.iter().zip(&v).map(|(r, v)| v * row(r)).sum();
        h / 420.0 * sum
    }
}

/// Integrals of the products of the cubics that have one value or slope of 1 at one end, times
/// 420 (the consistent mass matrix of a beam).
const MASS: [[f64; 4]; 4] = [
    [156.0, 22.0, 54.0, -13.0],
    [22.0, 4.0, 13.0, -3.0],
    [54.0, 13.0, 156.0, -22.0],
    [-13.0, -3.0, -22.0, 4.0],
];

impl Run<'_> {
    /// Reads the meters at a stretch's start.
    pub(crate) fn meter_start(&mut self, equations: &Equations, p: &Point) {
        let mut meters = std::mem::take(&mut self.meters);
        for m in &mut meters {
            m.before = self.reading(equations, m.branch, p);
        }
        self.meters = meters;
    }

    /// Adds a step's energies.
    pub(crate) fn meter(&mut self, equations: &Equations, p: &Point, h: f64) {
        let mut meters = std::mem::take(&mut self.meters);
        for m in &mut meters {
            let now = self.reading(equations, m.branch, p);
            let energy = if self.shot.exact {
                m.before.by_cubics(&now, h)
            } else {
                m.before.by_means(&now, h)
            };
            if m.supplies {
                self.shot.balance.supplied[m.part] -= energy;
            } else {
                self.shot.balance.dissipated[m.part] += energy;
            }
            m.before = now;
        }
        self.meters = meters;
    }

    fn reading(&self, equations: &Equations, branch: usize, p: &Point) -> Reading {
        let (v, i) = self.branch_state(equations, branch, p);
        if !self.shot.exact {
            return Reading {
                volts: [v, 0.0],
                amperes: [i, 0.0],
            };
        }
        let b = &self.net.branches[branch];
        let rate = crate::equations::volts(&p.dy, b.a, b.b);
        let current = match (b.current, equations.topology.modes[branch]) {
            (Some(c), _) => p.dy[self.net.nodes - 1 + c],
            (None, Mode::Resistive { siemens, .. }) => siemens * rate,
            (None, Mode::Inductance(j)) => p.dil[j],
            (None, Mode::Current(s)) => p.sources.jets[s][1],
            _ => 0.0,
        };
        Reading {
            volts: [v, rate],
            amperes: [i, current],
        }
    }

    /// Voltage and current of a branch at a point.
    pub(crate) fn branch_state(
        &self,
        equations: &Equations,
        branch: usize,
        p: &Point,
    ) -> (f64, f64) {
        let b = &self.net.branches[branch];
        let v = crate::equations::volts(&p.y, b.a, b.b);
        let i = match (b.current, equations.topology.modes[branch]) {
            (Some(c), _) => p.y[self.net.nodes - 1 + c],
            (None, Mode::Resistive { siemens, offset }) => siemens * (v - offset),
            (None, Mode::Inductance(j)) => p.il[j],
            (None, Mode::Current(s)) => p.sources.jets[s][0],
            _ => 0.0,
        };
        (v, i)
    }
}

//! Meters the energies of the balance along the steps.
//!
//! A step's energy in a branch is `h v̄ ī`, the product of the means of its ends. That makes the
//! balance of a trapezoidal run exact to rounding, whatever the step; so a balance that closes
//! says nothing about accuracy.

use crate::equations::{Equations, Point};
use crate::run::Run;
use crate::topology::Mode;

/// What is metered: one branch, its part, and whether it supplies.
pub(crate) struct Meter {
    pub(crate) branch: usize,
    pub(crate) part: usize,
    pub(crate) supplies: bool,
    pub(crate) before: (f64, f64),
}

impl Run<'_> {
    /// Reads the meters at a stretch's start.
    pub(crate) fn meter_start(&mut self, equations: &Equations, p: &Point) {
        let mut meters = std::mem::take(&mut self.meters);
        for m in &mut meters {
            m.before = self.branch_state(equations, m.branch, p);
        }
        self.meters = meters;
    }

    /// Adds a step's energies by the product of the means.
    pub(crate) fn meter(&mut self, equations: &Equations, p: &Point, h: f64) {
        let mut meters = std::mem::take(&mut self.meters);
        for m in &mut meters {
            let (v, i) = self.branch_state(equations, m.branch, p);
            let energy = 0.25 * h * (v + m.before.0) * (i + m.before.1);
            if m.supplies {
                self.shot.balance.supplied[m.part] -= energy;
            } else {
                self.shot.balance.dissipated[m.part] += energy;
            }
            m.before = (v, i);
        }
        self.meters = meters;
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

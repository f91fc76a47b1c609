//! One step of an integrator, and the search for an instant within it.
//!
//! ```text
//!   trapezoidal      x₊ = x + h/2 (x' + x₊')     order 2, A-stable
//!   backward Euler   x₊ = x + h x₊'              order 1, L-stable
//!   exact            x₊ = exp(A h) x                order: all (exact/)
//!   damped           two backward-Euler half steps, which share the trapezoidal step's matrix
//!                    (Marti and Lin, IEEE Trans. Power Systems 4(2), 1989)
//! ```
//!
//! A method is one entry of [`Rule`]; those that step are the same equations with another θ and base.

use pulsewright_circuit::formula::Side;
use pulsewright_circuit::setup::Setup;

use crate::equations::{Equations, Point};
use crate::failure::Failure;
use crate::network::Network;

/// How one step is taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Rule {
    /// Trapezoidal rule.
    Trapezoidal,
    /// Backward Euler.
    BackwardEuler,
    /// Two backward-Euler half steps.
    Damped,
    /// Exact propagation, the equations being ready for it; the step's matrix is kept.
    Exact,
    /// The same, for a step of which there is no other.
    ExactOnce,
}

/// The circuit and its equations, as a step needs them.
pub struct Stepper<'a> {
    /// Its branches.
    pub net: &'a Network,
    /// Its numbers.
    pub setup: &'a Setup,
    /// The equations of the topology.
    pub equations: &'a mut Equations,
}

impl Stepper<'_> {
    /// Takes a step of `h` from `from` into `to`, which ends at `time`; without slopes of the
    /// dependent quantities.
    ///
    /// # Errors
    ///
    /// [`Failure::Singular`], [`Failure::NotFinite`].
    pub fn step(
        &mut self,
        rule: Rule,
        from: &Point,
        h: f64,
        time: f64,
        to: &mut Point,
    ) -> Result<(), Failure> {
        match rule {
            Rule::Trapezoidal => self.implicit(from, 0.5 * h, 0.5 * h, time, to),
            Rule::BackwardEuler => self.implicit(from, 0.0, h, time, to),
            Rule::Damped => {
                let mut middle = Point::default();
                self.implicit(from, 0.0, 0.5 * h, time - 0.5 * h, &mut middle)?;
                self.implicit(&middle, 0.0, 0.5 * h, time, to)
            }
            Rule::Exact | Rule::ExactOnce => {
                self.begin(from, time, to);
                let once = rule == Rule::ExactOnce;
                self.equations
                    .propagate(self.net, self.setup, from, (h, once), to)?;
                self.finite(to)
            }
        }
    }

    fn begin(&self, from: &Point, time: f64, to: &mut Point) {
        to.time = time;
        copy(&mut to.vc, &from.vc);
        copy(&mut to.il, &from.il);
        copy(&mut to.dvc, &from.dvc);
        copy(&mut to.dil, &from.dil);
        if to.sources.jets.len() != from.sources.jets.len() {
            to.sources.clone_from(&from.sources);
        }
        to.sources.at(self.net, time, Side::Before);
    }

    fn finite(&self, to: &Point) -> Result<(), Failure> {
        if to.y.iter().all(|v| v.is_finite()) {
            Ok(())
        } else {
            Err(self.not_finite(to))
        }
    }

    /// x₊ = x + before x' + after x₊'.
    fn implicit(
        &mut self,
        from: &Point,
        before: f64,
        after: f64,
        time: f64,
        to: &mut Point,
    ) -> Result<(), Failure> {
        self.begin(from, time, to);
        if before != 0.0 {
            to.vc
                .iter_mut()
                .zip(&from.dvc)
                .for_each(|(x, d)| *x += before * d);
            to.il
                .iter_mut()
                .zip(&from.dil)
                .for_each(|(x, d)| *x += before * d);
        }
        self.equations.solve(self.net, self.setup, after, to)?;
        self.finite(to)
    }

    fn not_finite(&self, p: &Point) -> Failure {
        let bad = p
            .sources
            .jets
            .iter()
            .position(|j| !j[0].is_finite() || !j[1].is_finite());
        let part = bad.map(|s| self.net.branches[self.net.sources[s].branch].part);
        let what = part.map_or_else(
            || self.unknown(p.y.iter().position(|v| !v.is_finite()).unwrap_or(0)),
            |k| format!("the value of `{}`", crate::network::name(self.setup, k)),
        );
        Failure::NotFinite { what, time: p.time }
    }

    fn unknown(&self, k: usize) -> String {
        if let Some(node) = self.setup.nodes.get(k + 1) {
            return format!("the voltage at `{node}`");
        }
        let current = (k + 1).checked_sub(self.net.nodes);
        let part = self
            .net
            .branches
            .iter()
            .find(|b| current.is_some() && b.current == current)
            .map(|b| b.part);
        part.map_or_else(
            || "a voltage".to_owned(),
            |p| format!("the current of `{}`", crate::network::name(self.setup, p)),
        )
    }

    /// Fills in the slopes of a solved point.
    ///
    /// # Errors
    ///
    /// [`Failure::Singular`].
    pub fn slopes(&mut self, p: &mut Point) -> Result<(), Failure> {
        self.equations.slopes(self.net, self.setup, p)
    }
}

fn copy(to: &mut Vec<f64>, from: &[f64]) {
    to.clear();
    to.extend_from_slice(from);
}

/// A cubic Hermite interpolant over a step of `h`: values and slopes at both ends.
#[derive(Clone, Copy, Debug)]
pub struct Cubic {
    /// Value at the start.
    pub p0: f64,
    /// Slope at the start, times h.
    pub m0: f64,
    /// Value at the end.
    pub p1: f64,
    /// Slope at the end, times h.
    pub m1: f64,
}

impl Cubic {
    /// The value at share `s` of the step.
    #[must_use]
    pub fn at(&self, s: f64) -> f64 {
        let r = 1.0 - s;
        self.p0 * (1.0 + 2.0 * s) * r * r + self.m0 * s * r * r + self.p1 * s * s * (3.0 - 2.0 * s)
            - self.m1 * s * s * r
    }

    /// Shares at which it turns, ascending, strictly within the step.
    fn turns(&self) -> impl Iterator<Item = f64> {
        let rise = self.p1 - self.p0;
        let (a, b, c) = (
            3.0 * (self.m0 + self.m1 - 2.0 * rise),
            2.0 * (3.0 * rise - 2.0 * self.m0 - self.m1),
            self.m0,
        );
        let root = b * b - 4.0 * a * c;
        let mut found = [f64::NAN; 2];
        if root >= 0.0 {
            let q = -0.5 * (b + root.sqrt().copysign(b));
            found = [q / a, c / q];
        }
        found.sort_by(f64::total_cmp);
        found.into_iter().filter(|s| *s > 0.0 && *s < 1.0)
    }

    /// The first share at which it passes from 0 or above to below `-dead`, taken where it meets
    /// zero; `None` where it does not.
    #[must_use]
    pub fn first_fall(&self, dead: f64) -> Option<f64> {
        let ends = self.turns().chain(std::iter::once(1.0));
        let (mut a, mut pa) = (0.0, self.p0);
        for b in ends {
            let pb = if b == 1.0 { self.p1 } else { self.at(b) };
            // Within the deadband counts as not yet below, or a step's end there would hide a fall.
            if pa >= -dead && pb < -dead {
                return Some(self.zero_between(a, b));
            }
            if pb >= 0.0 || pa < -dead || pb < -dead {
                (a, pa) = (b, pb);
            }
        }
        None
    }

    fn zero_between(&self, mut a: f64, mut b: f64) -> f64 {
        for _ in 0..60 {
            let m = 0.5 * (a + b);
            if self.at(m) >= 0.0 {
                a = m;
            } else {
                b = m;
            }
            if b - a <= f64::EPSILON * b {
                break;
            }
        }
        b
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_dip_between_two_positive_ends_is_found() {
        let c = Cubic {
            p0: 1.0,
            m0: -10.0,
            p1: 1.0,
            m1: 10.0,
        };
        let s = c.first_fall(0.0).unwrap();
        assert!(c.at(s).abs() < 1e-12 && s < 0.5);
    }

    #[test]
    fn touching_is_no_fall() {
        assert_eq!(
            Cubic {
                p0: 0.0,
                m0: 1.0,
                p1: 1.0,
                m1: 1.0
            }
            .first_fall(0.0),
            None
        );
    }
}

//! Chooses the points of an exact march: so close that the cubic between them is right.
//!
//! A step is accepted where the cubic through its ends, values and slopes, meets the exact solution
//! in the middle to the tolerance. The first step is short against everything that can move, and
//! steps grow by twos at most, so that what is under way is seen before it can be passed over: the
//! cubic's error grows sixteenfold with each doubling.

use crate::equations::{Equations, Point};
use crate::failure::Failure;
use crate::march::Way;
use crate::run::Run;
use crate::shot::Cause;
use crate::step::{Cubic, Rule};

/// Finest step, as a power of two of the planned length.
const FINEST: u32 = 70;
/// Coarsest.
const COARSEST: u32 = 3;
/// Relative rounding of a solved voltage or current.
const ROUNDING: f64 = 5e-14;
/// Smallest scale of a quantity against the largest of its kind.
const FLOOR: f64 = 1e-3;

impl Run<'_> {
    /// Makes the equations ready for exact propagation over the stretch from now to `end`.
    pub(crate) fn prepare(&mut self, equations: &mut Equations, end: f64) -> Result<(), Failure> {
        let stretch = (self.point.time, 0.5 * (self.point.time + end));
        equations.prepare(&self.net, self.setup, stretch)?;
        let moved = equations.exact_norm() * (end - self.point.time);
        self.shot.rounding += 2.0 * f64::EPSILON * moved.sqrt();
        Ok(())
    }

    pub(crate) fn march_exact(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        tolerance: f64,
    ) -> Result<Option<Cause>, Failure> {
        let plan = way.stretch.plan;
        let mut power = COARSEST;
        while power < FINEST && equations.exact_norm() * plan * share(power) > 0.25 {
            power += 1;
        }
        let mut largest = vec![0.0_f64; self.point.y.len()];
        let keep = |largest: &mut [f64], p: &Point| {
            for (m, y) in largest.iter_mut().zip(&p.y) {
                *m = m.max(y.abs());
            }
        };
        keep(&mut largest, &self.point);
        let (mut half, mut full) = (Point::default(), Point::default());
        while way.share() < 1.0 {
            self.count(way, 1)?;
            let size = share(power);
            let h = plan * size;
            let next = way.share() + size;
            let (t_mid, t_next) = (way.time(way.share() + 0.5 * size), way.time(next));
            let mut stepper = self.stepper(equations);
            stepper.step(Rule::Exact, &self.point, h, t_next, &mut full)?;
            stepper.slopes(&mut full)?;
            stepper.step(Rule::Exact, &self.point, 0.5 * h, t_mid, &mut half)?;
            let error = self.bow(&largest, &full, &half, h);
            if error > tolerance && power < FINEST && t_mid > self.point.time {
                power += 1;
                continue;
            }
            keep(&mut largest, &full);
            let to = std::mem::take(&mut full);
            if let Some(cause) = self.finish_sloped(equations, way, Rule::Exact, to, next)? {
                return Ok(Some(cause));
            }
            let aligned = (way.share() / (2.0 * size)).fract() == 0.0;
            if power > COARSEST && aligned && error < tolerance / 20.0 {
                power -= 1;
            }
        }
        Ok(None)
    }

    /// How far the cubics over a step are off in its middle, over the size of each quantity.
    fn bow(&self, largest: &[f64], end: &Point, middle: &Point, h: f64) -> f64 {
        let from = &self.point;
        // What rounding alone drives through a circuit at rest is not followed.
        let volts = self.volts.max(self.rounding.volts(self.amperes) / ROUNDING);
        let amperes = self
            .amperes
            .max(self.rounding.amperes(self.volts) / ROUNDING);
        let off = |v0: f64, s0: f64, v1: f64, s1: f64, exact: f64, (own, all): (f64, f64)| {
            let cubic = Cubic {
                p0: v0,
                m0: h * s0,
                p1: v1,
                m1: h * s1,
            };
            let d = (cubic.at(0.5) - exact).abs();
            let scale = own.max(v1.abs()).max(FLOOR * all);
            if d <= ROUNDING * all || scale <= 0.0 {
                0.0
            } else {
                d / scale
            }
        };
        let n = self.net.nodes - 1;
        let mut worst = 0.0_f64;
        for (k, exact) in middle.y.iter().enumerate() {
            let all = if k < n { volts } else { amperes };
            let (v0, s0, v1, s1) = (from.y[k], from.dy[k], end.y[k], end.dy[k]);
            worst = worst.max(off(v0, s0, v1, s1, *exact, (largest[k], all)));
        }
        for (k, exact) in middle.vc.iter().enumerate() {
            let scale = (self.largest[k], volts);
            let (v0, s0, v1, s1) = (from.vc[k], from.dvc[k], end.vc[k], end.dvc[k]);
            worst = worst.max(off(v0, s0, v1, s1, *exact, scale));
        }
        let first = middle.vc.len();
        for (k, exact) in middle.il.iter().enumerate() {
            let scale = (self.largest[first + k], amperes);
            let (v0, s0, v1, s1) = (from.il[k], from.dil[k], end.il[k], end.dil[k]);
            worst = worst.max(off(v0, s0, v1, s1, *exact, scale));
        }
        worst
    }
}

fn share(power: u32) -> f64 {
    (-f64::from(power)).exp2()
}

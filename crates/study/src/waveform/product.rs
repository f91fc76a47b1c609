//! The energy of a voltage and a current, by the rule that the stepping method keeps.
//!
//! Over a whole step of length `h` the energy is
//!
//! ```text
//! M = h (v0 + v1) / 2 (i0 + i1) / 2
//! ```
//!
//! the product of the means. By the trapezoidal rule this is, for a capacitor or an inductor,
//! exactly the change of what it holds, so that the joules of a shot add up to rounding on every
//! mesh, and its error is even in `h`. Over a part of a step, a share `x` of it, the integral of
//! the product of the two cubics is taken, and `x (M - H)` added, where `H` is that integral over
//! the whole step: the parts of a step add up to `M`, and a window's edge that wanders through
//! the steps of different meshes disturbs the error expansion only at order 4.
//!
//! Charge goes by the trapezoid `h (i0 + i1) / 2` in the same way, which is exactly the change
//! of the charge that a capacitor holds, and the same through all parts in series.
//!
//! In a shot by exact propagation both are the integrals of the cubics.

use pulsewright_engine::Stretch;

use super::record::cubic;
use super::{Cubic, Interval, Record};

/// An integral with the integral of the absolute value.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Sum {
    /// The integral.
    pub net: f64,
    /// The integral of the absolute value.
    pub gross: f64,
}

impl Sum {
    /// Adds an amount.
    pub fn add(&mut self, amount: f64) {
        self.net += amount;
        self.gross += amount.abs();
    }

    /// Adds another sum.
    pub fn join(&mut self, other: Sum) {
        self.net += other.net;
        self.gross += other.gross;
    }
}

/// The energy of the voltage in row `v` and the current in row `i` over intervals, J, without
/// what flows at jumps.
#[must_use]
pub fn energy(record: &Record<'_>, v: usize, i: usize, window: &[Interval]) -> Sum {
    let mut sum = Sum::default();
    each_step(record, window, |stretch, n, from, to| {
        let (Some(v), Some(i)) = (cubic(stretch, v, n), cubic(stretch, i, n)) else {
            return;
        };
        let mean = if record.shot.exact {
            v.product(&i)
        } else {
            0.25 * (v.v0 + v.v1) * (i.v0 + i.v1) * v.length()
        };
        sum.add(shared(&v, from, to, mean, |a, b| {
            v.between(a, b).product(&i.between(a, b))
        }));
    });
    sum
}

/// The charge of the current in row `i` over intervals, C, without what flows at jumps.
#[must_use]
pub fn charge(record: &Record<'_>, i: usize, window: &[Interval]) -> Sum {
    let mut sum = Sum::default();
    each_step(record, window, |stretch, n, from, to| {
        let Some(i) = cubic(stretch, i, n) else {
            return;
        };
        let trapezoid = if record.shot.exact {
            i.integral()
        } else {
            0.5 * (i.v0 + i.v1) * i.length()
        };
        let net = shared(&i, from, to, trapezoid, |a, b| i.between(a, b).integral());
        sum.net += net;
        sum.gross += if i.v0 * i.v1 >= 0.0 {
            net.abs()
        } else {
            gross(&i, from, to, trapezoid)
        };
    });
    sum
}

/// The absolute charge of a step whose current changes sign: that of its parts of one sign.
fn gross(i: &Cubic, from: f64, to: f64, trapezoid: f64) -> f64 {
    let mut sum = 0.0;
    i.between(from, to).signs(0.0, |a, b, _| {
        if b > a {
            sum += shared(i, a, b, trapezoid, |a, b| i.between(a, b).integral()).abs();
        }
    });
    sum
}

/// The share of a step's sum `whole` that falls between two instants.
fn shared(step: &Cubic, from: f64, to: f64, whole: f64, exact: impl Fn(f64, f64) -> f64) -> f64 {
    if from <= step.t0 && to >= step.t1 {
        return whole;
    }
    let (from, to) = (from.max(step.t0), to.min(step.t1));
    exact(from, to) + (to - from) / step.length() * (whole - exact(step.t0, step.t1))
}

/// Calls `visit` with every step that an interval touches: stretch, step, interval.
fn each_step(
    record: &Record<'_>,
    window: &[Interval],
    mut visit: impl FnMut(&Stretch, usize, f64, f64),
) {
    let stretches = &record.shot.stretches;
    for Interval { start, end } in window.iter().copied() {
        let first = stretches.partition_point(|s| s.times.last().is_none_or(|t| *t <= start));
        for stretch in stretches.iter().skip(first) {
            if stretch.times.first().is_none_or(|t| *t >= end) {
                break;
            }
            let n = stretch
                .times
                .partition_point(|t| *t <= start)
                .saturating_sub(1);
            let steps = stretch.times.len().saturating_sub(1);
            for n in n..steps {
                if stretch.times.get(n).is_none_or(|t| *t >= end) {
                    break;
                }
                visit(stretch, n, start, end);
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::sample;
    use super::*;
    use pulsewright_circuit::Probe;

    const PROBES: [Probe; 2] = [Probe::VoltageAcross(0), Probe::CurrentThrough(0)];

    fn shot(n: u32) -> pulsewright_engine::Shot {
        sample::pieces(
            &PROBES,
            &[0.0, 1.0],
            n,
            &[&|t: f64| {
                vec![
                    ((2.0 * t).sin(), 2.0 * (2.0 * t).cos()),
                    ((-t).exp(), -(-t).exp()),
                ]
            }],
        )
    }

    #[test]
    fn windows_add_up_to_the_whole() {
        let shot = shot(9);
        let record = Record::new(&shot);
        let over = |a, b| energy(&record, 0, 1, &[Interval { start: a, end: b }]).net;
        assert!(
            (over(0.0, 0.37) + over(0.37, 0.4) + over(0.4, 1.0) - over(0.0, 1.0)).abs() < 1e-15
        );
    }

    #[test]
    fn the_error_is_even_in_the_step() {
        // ∫ sin 2t exp(-t) = (2 - exp(-t) (sin 2t + 2 cos 2t)) / 5
        let exact = (2.0 - (-0.6_f64).exp() * (1.2_f64.sin() + 2.0 * 1.2_f64.cos())) / 5.0;
        let at = |n| {
            let shot = shot(n);
            energy(
                &Record::new(&shot),
                0,
                1,
                &[Interval {
                    start: 0.0,
                    end: 0.6,
                }],
            )
            .net - exact
        };
        let (coarse, fine) = (at(41), at(82));
        assert!((coarse / fine - 4.0).abs() < 0.02, "{}", coarse / fine);
        assert!((4.0 * fine - coarse).abs() < 2e-2 * fine.abs());
    }

    #[test]
    fn charge_is_counted_with_and_without_its_sign() {
        let shot = sample::pieces(
            &PROBES,
            &[0.0, 1.0],
            5,
            &[&|t: f64| vec![(0.0, 0.0), (t - 0.5, 1.0)]],
        );
        let sum = charge(
            &Record::new(&shot),
            1,
            &[Interval {
                start: 0.0,
                end: 1.0,
            }],
        );
        assert!(sum.net.abs() < 1e-16 && (sum.gross - 0.25).abs() < 1e-15);
    }
}

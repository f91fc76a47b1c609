//! Integrals of a signal over intervals: of itself, of its absolute value, of its square.
//!
//! Each is that of the cubics, exactly. [`Wave::area`] also counts impulses.

use super::{Cubic, Interval, Wave};

impl Wave<'_> {
    /// The integral, impulses included, in the signal's unit times s.
    #[must_use]
    pub fn area(&self, window: &[Interval]) -> f64 {
        let smooth = self.sum(window, |c| c.integral());
        window
            .iter()
            .flat_map(|i| self.impulses_in(*i))
            .fold(smooth, |sum, (_, s)| sum + s)
    }

    /// The integral of the absolute value, impulses included.
    #[must_use]
    pub fn gross(&self, window: &[Interval]) -> f64 {
        let smooth = self.sum(window, absolute);
        window
            .iter()
            .flat_map(|i| self.impulses_in(*i))
            .fold(smooth, |sum, (_, s)| sum + s.abs())
    }

    /// The integral of the square, without impulses, in the signal's unit squared times s.
    #[must_use]
    pub fn square(&self, window: &[Interval]) -> f64 {
        self.sum(window, |c| c.product(c))
    }

    fn sum(&self, window: &[Interval], of: impl Fn(&Cubic) -> f64) -> f64 {
        let mut sum = 0.0;
        for interval in window {
            self.each(*interval, |piece| sum += of(&piece.part));
        }
        sum
    }
}

/// The integral of a piece's absolute value.
fn absolute(c: &Cubic) -> f64 {
    let (low, high) = c.hull();
    if low >= 0.0 || high <= 0.0 {
        return c.integral().abs();
    }
    let mut sum = 0.0;
    c.signs(0.0, |a, b, _| {
        if b > a {
            sum += c.between(a, b).integral().abs();
        }
    });
    sum
}

#[cfg(test)]
mod tests {
    use super::super::{Record, sample};
    use super::*;
    use pulsewright_circuit::{Formula, Probe};
    use std::f64::consts::PI;

    /// The cubics' integral errs by h⁴ (f'''(1) - f'''(0)) / 720.
    #[test]
    fn a_sine_is_integrated_over_a_window_that_cuts_steps() {
        let shot = sample::smooth(1.0, 100, |t| {
            ((2.0 * PI * t).sin(), 2.0 * PI * (2.0 * PI * t).cos())
        });
        let wave = Wave::of(
            &Formula::Probe(Probe::VoltageAcross(0)),
            &Record::new(&shot),
        );
        let window = [Interval {
            start: 0.25,
            end: 0.753,
        }];
        let exact = (0.0 - (2.0 * PI * 0.753).cos()) / (2.0 * PI);
        assert!((wave.area(&window) - exact).abs() < 1e-9);
        let all = [Interval {
            start: 0.0,
            end: 1.0,
        }];
        assert!((wave.gross(&all) - 2.0 / PI).abs() < 2e-8);
        assert!((wave.square(&all) - 0.5).abs() < 8e-8);
    }

    #[test]
    fn an_impulse_counts_where_its_window_holds_it() {
        let forms: [sample::Form<'_>; 2] = [&|_| vec![(0.0, 0.0)], &|_| vec![(0.0, 0.0)]];
        let mut shot = sample::pieces(&[Probe::CurrentThrough(0)], &[0.0, 0.5, 1.0], 4, &forms);
        shot.jumps[1].impulses = vec![-7.0];
        let wave = Wave::of(
            &Formula::Probe(Probe::CurrentThrough(0)),
            &Record::new(&shot),
        );
        assert_eq!(
            wave.area(&[Interval {
                start: 0.5,
                end: 1.0
            }]),
            -7.0
        );
        assert_eq!(
            wave.gross(&[Interval {
                start: 0.5,
                end: 1.0
            }]),
            7.0
        );
        assert_eq!(
            wave.area(&[Interval {
                start: 0.0,
                end: 0.5
            }]),
            0.0
        );
    }
}

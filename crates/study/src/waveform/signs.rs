//! Where a signal is above and below a level: its runs of one sign.
//!
//! ```text
//!            ____
//!   level --/----\------.....---     runs:  - | + | - | 0 (at the level for a while)
//!        __/      \____/
//! ```
//!
//! A run ends where the signal crosses the level or jumps across it. A touch ends no run. What
//! stays within rounding of the level for a while is a run of sign 0.

use super::{Interval, Wave, noise};

/// A run of one sign.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Run {
    /// Start, s.
    pub start: f64,
    /// End, s.
    pub end: f64,
    /// 1 above the level, -1 below, 0 at it.
    pub sign: i8,
}

/// Adds a run, or lengthens the last one where it has the same sign and they meet.
fn add(runs: &mut Vec<Run>, start: f64, end: f64, sign: i8) {
    if end <= start {
        return;
    }
    match runs.last_mut() {
        Some(last) if last.sign == sign && last.end == start => last.end = end,
        _ => runs.push(Run { start, end, sign }),
    }
}

impl Wave<'_> {
    /// The runs of `k` times the signal against `level`, in order of time. A window from 0 s
    /// begins with the stated start, a run of no length.
    #[must_use]
    pub fn runs(&self, window: &[Interval], k: f64, level: f64) -> Vec<Run> {
        let noise = noise(self.largest());
        let mut runs = Vec::new();
        for interval in window {
            if interval.holds_stated() {
                let x = k * self.stated - level;
                let sign = if x > noise {
                    1
                } else if x < -noise {
                    -1
                } else {
                    0
                };
                runs.push(Run {
                    start: 0.0,
                    end: 0.0,
                    sign,
                });
            }
            self.each(*interval, |piece| {
                piece
                    .part
                    .scaled(k, level)
                    .signs(noise, |a, b, sign| add(&mut runs, a, b, sign));
            });
        }
        runs
    }
}

/// The instants of the crossings upwards in a row of runs. Where the first run that is not at
/// the level lies above it, its start is one; the flag tells whether it was above from the
/// very start (so that nothing crossed there).
pub fn rises(runs: &[Run]) -> Vec<(f64, bool)> {
    let mut found = Vec::new();
    let mut above = false;
    for (k, run) in runs.iter().enumerate() {
        if run.sign > 0 && !above {
            found.push((run.start, k == 0));
        }
        if run.sign != 0 {
            above = run.sign > 0;
        }
    }
    found
}

/// The instants of the crossings downwards. Already below at the start is none.
pub fn falls(runs: &[Run]) -> Vec<f64> {
    let mut found = Vec::new();
    let mut above = false;
    for run in runs {
        if run.sign < 0 && above {
            found.push(run.start);
        }
        if run.sign != 0 {
            above = run.sign > 0;
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::super::{Record, sample};
    use super::*;
    use pulsewright_circuit::{Formula, Probe};

    const ALL: [Interval; 1] = [Interval {
        start: 0.0,
        end: 1.0,
    }];

    fn check(form: &dyn Fn(f64) -> (f64, f64), level: f64, up: &[f64], down: &[f64]) {
        let shot = sample::smooth(1.0, 50, form);
        let wave = Wave::of(
            &Formula::Probe(Probe::VoltageAcross(0)),
            &Record::new(&shot),
        );
        let runs = wave.runs(&ALL, 1.0, level);
        let rises: Vec<f64> = rises(&runs).iter().map(|r| r.0).collect();
        let falls = falls(&runs);
        for (got, want) in [(&rises, up), (&falls, down)] {
            assert_eq!(got.len(), want.len(), "{got:?} for {want:?}");
            for (g, w) in got.iter().zip(want) {
                assert!((g - w).abs() < 1e-6, "{got:?} for {want:?}");
            }
        }
    }

    #[test]
    fn a_hump_crosses_twice() {
        let third = 1.0 / 6.0;
        let hump = |t: f64| {
            let w = std::f64::consts::PI;
            ((w * t).sin(), w * (w * t).cos())
        };
        check(&hump, 0.5, &[third], &[1.0 - third]);
    }

    #[test]
    fn a_touch_is_no_crossing() {
        check(&|t| ((t - 0.5).powi(2), 2.0 * (t - 0.5)), 0.0, &[0.0], &[]);
    }

    #[test]
    fn above_from_the_start_counts_as_rising_there() {
        check(&|t| (1.0 - t, -1.0), 0.25, &[0.0], &[0.75]);
    }

    #[test]
    fn below_from_the_start_does_not_count_as_falling() {
        check(&|t| (t, 1.0), 0.25, &[0.25], &[]);
    }

    #[test]
    fn a_jump_across_is_a_crossing() {
        let forms: [sample::Form<'_>; 2] = [&|_| vec![(0.0, 0.0)], &|_| vec![(2.0, 0.0)]];
        let shot = sample::pieces(&[Probe::VoltageAcross(0)], &[0.0, 0.5, 1.0], 4, &forms);
        let wave = Wave::of(
            &Formula::Probe(Probe::VoltageAcross(0)),
            &Record::new(&shot),
        );
        assert_eq!(rises(&wave.runs(&ALL, 1.0, 1.0)), vec![(0.5, false)]);
    }

    #[test]
    fn at_the_level_for_a_while_is_a_run_of_its_own() {
        let forms: [sample::Form<'_>; 2] = [&|_| vec![(0.0, 0.0)], &|t| vec![(t - 0.5, 1.0)]];
        let shot = sample::pieces(&[Probe::VoltageAcross(0)], &[0.0, 0.5, 1.0], 4, &forms);
        let wave = Wave::of(
            &Formula::Probe(Probe::VoltageAcross(0)),
            &Record::new(&shot),
        );
        let runs = wave.runs(&ALL, 1.0, 0.0);
        assert!(
            runs.iter()
                .filter(|r| r.end > r.start)
                .map(|r| r.sign)
                .eq([0, 1])
        );
        assert!((rises(&runs)[0].0 - 0.5).abs() < 1e-9);
    }
}

//! Highest, lowest, largest and steepest: extremes of the cubics, both sides of every jump.
//!
//! Where several instants come within a part in a million of the extreme, the first of them is its
//! instant: equal crests of an undamped ring differ by what the mesh errs, and which of them a mesh
//! finds highest means nothing. Only turns, jumps and the ends of intervals count as such
//! instants, so that a smooth crest is never taken early.
//!
//! Rates of change are read off the cubics through the recorded slopes, not off the derivative
//! of the signal's cubics, which is an order less accurate: so is the instant of a crest, where
//! the slope is zero.

use super::{Interval, Wave};

/// Extremes count as equal that differ by less than this share of the signal's largest value; on
/// the coarsest mesh the cubic's error at a crest, (ω h)⁴ / 384, is a tenth of it.
const EQUAL: f64 = 1e-6;

/// An extreme value and where it is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extremum {
    /// The value, with its sign.
    pub value: f64,
    /// The instant, s.
    pub time: f64,
    /// How far the instant moves for each unit per second that the slope is off, s² per unit;
    /// 0 at jumps and ends.
    pub shift: f64,
}

/// A candidate at an end of a piece that the next piece may still take over from.
struct Pending {
    time: f64,
    value: f64,
}

/// Collects the local maxima that come near the largest so far.
struct Search {
    tolerance: f64,
    best: f64,
    found: Vec<Extremum>,
    pending: Option<Pending>,
}

impl Search {
    fn offer(&mut self, value: f64, time: f64, shift: f64) {
        if value.is_nan() || value < self.best - self.tolerance {
            return;
        }
        self.best = self.best.max(value);
        let floor = self.best - self.tolerance;
        self.found.retain(|e| e.value >= floor);
        if self.found.len() < 2 {
            self.found.push(Extremum { value, time, shift });
        } else if let Some(last) = self.found.last_mut().filter(|last| value > last.value) {
            *last = Extremum { value, time, shift };
        }
    }

    fn flush(&mut self) {
        if let Some(p) = self.pending.take() {
            self.offer(p.value, p.time, 0.0);
        }
    }

    fn finish(mut self) -> Option<Extremum> {
        self.flush();
        let first = self.found.first().copied()?;
        Some(Extremum {
            value: self.best,
            ..first
        })
    }
}

impl Wave<'_> {
    /// The supremum over intervals; `None` where there is nothing in them.
    #[must_use]
    pub fn highest(&self, window: &[Interval]) -> Option<Extremum> {
        self.extreme(window, 1.0)
    }

    /// The infimum.
    #[must_use]
    pub fn lowest(&self, window: &[Interval]) -> Option<Extremum> {
        self.extreme(window, -1.0).map(|e| Extremum {
            value: -e.value,
            ..e
        })
    }

    /// The supremum of the absolute value; its `value` keeps the sign that the signal has there.
    #[must_use]
    pub fn largest_in(&self, window: &[Interval]) -> Option<Extremum> {
        let (high, low) = (self.highest(window)?, self.lowest(window)?);
        let margin = EQUAL * self.largest();
        let level = (high.value + low.value).abs() <= margin && low.value < 0.0 && high.value > 0.0;
        let take_low = if level {
            low.time < high.time
        } else {
            -low.value > high.value
        };
        Some(if take_low { low } else { high })
    }

    fn extreme(&self, window: &[Interval], k: f64) -> Option<Extremum> {
        let tolerance = EQUAL * self.largest();
        let mut search = Search {
            tolerance,
            best: f64::NEG_INFINITY,
            found: Vec::new(),
            pending: None,
        };
        for interval in window {
            if interval.holds_stated() {
                search.offer(k * self.stated, interval.start.max(0.0), 0.0);
            }
            self.each(*interval, |piece| {
                let c = piece.part.scaled(k, 0.0);
                let goes_on = search
                    .pending
                    .as_ref()
                    .is_some_and(|p| p.time == c.t0 && p.value == c.v0);
                if goes_on && c.s0 > 0.0 {
                    search.pending = None;
                }
                let starts_high = !goes_on || c.s0 <= 0.0;
                search.flush();
                if starts_high && !goes_on {
                    search.offer(c.v0, c.t0, 0.0);
                }
                if c.hull().1 >= search.best - tolerance {
                    for (time, value) in c.turns().filter(|(t, _)| c.bend(*t) < 0.0) {
                        let better = self.slope_over(piece.place).and_then(|s| s.zero_near(time));
                        let time = better.map_or(time, |t| t.clamp(interval.start, interval.end));
                        search.offer(value, time, 1.0 / c.bend(time).abs());
                    }
                    if c.s1 >= 0.0 {
                        search.pending = Some(Pending {
                            time: c.t1,
                            value: c.v1,
                        });
                    }
                }
            });
            search.flush();
        }
        search.finish()
    }

    /// The supremum of the absolute rate of change, with its instant.
    #[must_use]
    pub fn steepest(&self, window: &[Interval]) -> Option<Extremum> {
        let mut best: Option<Extremum> = None;
        for interval in window {
            self.each(*interval, |piece| {
                let rough = piece.part.steepest();
                if best.is_some_and(|b| 1.5 * rough.0 < b.value) {
                    return;
                }
                let slope = self
                    .slope_over(piece.place)
                    .map(|s| s.between(piece.part.t0, piece.part.t1));
                let (value, time) = slope.map_or(rough, |s| s.largest());
                if best.is_none_or(|b| value > b.value) {
                    best = Some(Extremum {
                        value,
                        time,
                        shift: 0.0,
                    });
                }
            });
        }
        best
    }

    /// The first jump of the signal inside the intervals, s.
    #[must_use]
    pub fn first_jump(&self, window: &[Interval]) -> Option<f64> {
        let least = 1e-9 * self.largest();
        window.iter().find_map(|interval| {
            let mut last = interval.holds_stated().then_some((0.0, self.stated));
            let mut found = None;
            self.each(*interval, |piece| {
                let jumps = last
                    .is_some_and(|(t, v)| t == piece.part.t0 && (piece.part.v0 - v).abs() > least);
                if jumps && found.is_none() {
                    found = Some(piece.part.t0);
                }
                last = Some((piece.part.t1, piece.part.v1));
            });
            found
        })
    }
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

    fn wave(shot: &pulsewright_engine::Shot) -> Wave<'_> {
        Wave::of(&Formula::Probe(Probe::VoltageAcross(0)), &Record::new(shot))
    }

    /// The cubic errs by h⁴ f''''/384 between points: 4e-9 here.
    #[test]
    fn a_crest_between_mesh_points_is_found() {
        let shot = sample::smooth(1.0, 23, |t| ((3.0 * t).sin(), 3.0 * (3.0 * t).cos()));
        let top = wave(&shot).highest(&ALL).unwrap();
        assert!((top.value - 1.0).abs() < 1e-6);
        assert!((top.time - std::f64::consts::PI / 6.0).abs() < 1e-4);
    }

    #[test]
    fn both_sides_of_a_jump_count() {
        let forms: [sample::Form<'_>; 2] = [&|t| vec![(t, 1.0)], &|t| vec![(-t, -1.0)]];
        let shot = sample::pieces(&[Probe::VoltageAcross(0)], &[0.0, 0.5, 1.0], 4, &forms);
        let w = wave(&shot);
        assert_eq!(w.highest(&ALL).unwrap().value, 0.5);
        assert_eq!(w.lowest(&ALL).unwrap().value, -1.0);
        let after = [Interval {
            start: 0.5,
            end: 1.0,
        }];
        assert_eq!(w.highest(&after).unwrap().value, -0.5);
        assert_eq!(w.first_jump(&ALL), Some(0.5));
        assert_eq!(w.first_jump(&after), None);
    }

    #[test]
    fn the_first_of_equal_crests_is_the_instant() {
        let w = 10.0 * std::f64::consts::PI;
        let shot = sample::smooth(1.0, 400, |t| ((w * t).sin(), w * (w * t).cos()));
        let top = wave(&shot).highest(&ALL).unwrap();
        assert!((top.time - 0.05).abs() < 1e-6, "{}", top.time);
    }

    #[test]
    fn the_instant_of_a_plateau_is_its_start() {
        let forms: [sample::Form<'_>; 2] = [&|t| vec![(t, 1.0)], &|_| vec![(0.5, 0.0)]];
        let shot = sample::pieces(&[Probe::VoltageAcross(0)], &[0.0, 0.5, 1.0], 4, &forms);
        assert_eq!(wave(&shot).highest(&ALL).unwrap().time, 0.5);
    }

    #[test]
    fn a_window_may_cut_a_step() {
        let shot = sample::smooth(1.0, 3, |t| (t * t, 2.0 * t));
        let cut = [Interval {
            start: 0.1,
            end: 0.45,
        }];
        let w = wave(&shot);
        assert!((w.highest(&cut).unwrap().value - 0.2025).abs() < 1e-15);
        assert!((w.lowest(&cut).unwrap().value - 0.01).abs() < 1e-15);
        assert!((w.steepest(&cut).unwrap().value - 0.9).abs() < 1e-14);
    }
}

//! A signal along a shot: one track of cubic pieces a stretch.
//!
//! A probe is read where it lies. A formula is evaluated, with its slope, at every mesh point;
//! where one of its corners (the zero of an argument of `abs`, `step`, `max`, …) lies inside a
//! step, the step is split there: the instant then stands twice, once with what holds before
//! and once with what holds after, so that no piece straddles a kink.
//!
//! ```text
//!   times   t0      t1   t*  t* t2        a piece between every two neighbours;
//!   values  v0      v1   w-  w+ v2        one of no length is a kink or a jump
//! ```

use std::borrow::Cow;
use std::cell::OnceCell;

use pulsewright_circuit::Formula;
use pulsewright_circuit::formula::Side;

use super::build::{impulses, track};
use super::record::{Record, Stated};
use super::{Cubic, Interval};

/// A signal over one stretch.
#[derive(Clone, Debug)]
pub struct Track<'a> {
    /// Instants, s, ascending; a kink stands twice.
    pub times: Cow<'a, [f64]>,
    /// Values there.
    pub values: Cow<'a, [f64]>,
    /// Slopes there, per s.
    pub slopes: Cow<'a, [f64]>,
    /// Whether it depends on the potential at which an island was held.
    pub floating: bool,
}

/// A signal along a shot.
#[derive(Clone, Debug)]
pub struct Wave<'a> {
    /// One track a stretch.
    pub tracks: Vec<Track<'a>>,
    /// Its value as stated, just before 0 s.
    pub stated: f64,
    /// Its impulse at the start of each track, in its unit times s.
    pub impulses: Vec<f64>,
    strongest: f64,
    largest: OnceCell<f64>,
}

/// A piece, as far as it lies in an interval, and where it is.
#[derive(Clone, Copy, Debug)]
pub struct Piece {
    /// The part inside.
    pub part: Cubic,
    /// Its track, and its place in it.
    pub place: (usize, usize),
}

impl Track<'_> {
    fn piece(&self, n: usize) -> Option<Cubic> {
        Some(Cubic {
            t0: *self.times.get(n)?,
            t1: *self.times.get(n + 1)?,
            v0: *self.values.get(n)?,
            v1: *self.values.get(n + 1)?,
            s0: *self.slopes.get(n)?,
            s1: *self.slopes.get(n + 1)?,
        })
    }

    /// The slope over the piece from point `n` as a cubic of its own: through the slopes at four
    /// neighbouring points, which errs by `h⁴` where the derivative of the piece errs by `h³`.
    fn slope_piece(&self, n: usize) -> Option<Cubic> {
        let piece = self.piece(n)?;
        let smooth = |k: usize| self.piece(k).is_some_and(|p| p.t1 > p.t0);
        let mut first = n;
        let mut last = n + 1;
        while last - first < 3 {
            let (left, right) = (first > 0 && smooth(first - 1), smooth(last));
            match (left, right) {
                (true, true) if n - first > last - n - 1 => last += 1,
                (true, _) => first -= 1,
                (false, true) => last += 1,
                (false, false) => return None,
            }
        }
        let (t, s) = (
            self.times.get(first..=last)?,
            self.slopes.get(first..=last)?,
        );
        let (d0, d1) = (derivative(t, s, piece.t0), derivative(t, s, piece.t1));
        Some(Cubic {
            t0: piece.t0,
            t1: piece.t1,
            v0: piece.s0,
            v1: piece.s1,
            s0: d0,
            s1: d1,
        })
    }

    fn start(&self) -> f64 {
        self.times.first().copied().unwrap_or(0.0)
    }

    fn end(&self) -> f64 {
        self.times.last().copied().unwrap_or(0.0)
    }
}

impl<'a> Wave<'a> {
    /// The signal that a formula makes of what was recorded.
    #[must_use]
    pub fn of(formula: &Formula, record: &Record<'a>) -> Self {
        let shot = record.shot;
        let stated = formula.jet(0.0, Side::Before, &Stated(record)).value;
        let corners = formula.corners();
        let tracks = shot
            .stretches
            .iter()
            .map(|s| track(formula, &corners, record, s))
            .collect();
        let impulses = impulses(formula, record);
        let strongest = impulses.iter().fold(0.0_f64, |m, s| m.max(s.abs()));
        Wave {
            tracks,
            stated,
            impulses,
            strongest,
            largest: OnceCell::new(),
        }
    }

    /// Calls `visit` on every piece in an interval, in order of time.
    pub fn each(&self, interval: Interval, mut visit: impl FnMut(Piece)) {
        let Interval { start, end } = interval;
        let first = self.tracks.partition_point(|t| t.end() <= start);
        for (k, track) in self
            .tracks
            .iter()
            .enumerate()
            .skip(first)
            .take_while(|(_, t)| t.start() < end)
        {
            let mut n = track
                .times
                .partition_point(|t| *t <= start)
                .saturating_sub(1);
            while let Some(whole) = track.piece(n) {
                if whole.t0 >= end {
                    break;
                }
                if whole.t1 > whole.t0 {
                    visit(Piece {
                        part: whole.between(start, end),
                        place: (k, n),
                    });
                }
                n += 1;
            }
        }
    }

    fn track_at(&self, t: f64, side: Side) -> Option<&Track<'a>> {
        let n = match side {
            Side::After => self
                .tracks
                .partition_point(|k| k.start() <= t)
                .saturating_sub(1),
            Side::Before => self.tracks.partition_point(|k| k.end() < t),
        };
        self.tracks.get(n).or(self.tracks.last())
    }

    /// The slope over a piece as a cubic of its own; `None` where too few neighbours make one.
    pub(super) fn slope_over(&self, (track, n): (usize, usize)) -> Option<Cubic> {
        self.tracks.get(track)?.slope_piece(n)
    }

    /// The piece that holds the instants just after `t`, or just before it; at the span's ends
    /// the outermost one.
    fn piece_at(&self, t: f64, side: Side) -> Option<Cubic> {
        let track = self.track_at(t, side)?;
        let last = track.times.len().checked_sub(2)?;
        let n = match side {
            Side::After => track.times.partition_point(|x| *x <= t),
            Side::Before => track.times.partition_point(|x| *x < t),
        };
        track.piece(n.saturating_sub(1).min(last))
    }

    /// The value just after `t`, s; at the span's end that just before it.
    #[must_use]
    pub fn after(&self, t: f64) -> f64 {
        self.piece_at(t, Side::After)
            .map_or(f64::NAN, |c| c.value(t))
    }

    /// The value just before `t`, s; at 0 s the stated one.
    #[must_use]
    pub fn before(&self, t: f64) -> f64 {
        if t <= 0.0 {
            return self.stated;
        }
        self.piece_at(t, Side::Before)
            .map_or(f64::NAN, |c| c.value(t))
    }

    /// The slope just before `t`, s, per s.
    #[must_use]
    pub fn slope_before(&self, t: f64) -> f64 {
        self.piece_at(t, Side::Before).map_or(0.0, |c| c.slope(t))
    }

    /// How far an instant at which the signal passes a level moves for each unit that the signal
    /// is off, in s: the inverse of its slope, and 0 where it jumps.
    #[must_use]
    pub fn shift(&self, t: f64) -> f64 {
        let (before, after) = (self.before(t), self.after(t));
        if (after - before).abs() > super::noise(self.largest()) {
            return 0.0;
        }
        let slope = |side| self.piece_at(t, side).map_or(0.0, |c| c.slope(t).abs());
        let slope = slope(Side::Before).max(slope(Side::After));
        if slope > 0.0 { 1.0 / slope } else { 0.0 }
    }

    /// Its largest absolute value over the whole span, the stated start included.
    #[must_use]
    pub fn largest(&self) -> f64 {
        *self.largest.get_or_init(|| {
            let mut best = if self.stated.is_nan() {
                0.0
            } else {
                self.stated.abs()
            };
            for track in &self.tracks {
                for n in 0..track.times.len() {
                    let Some(piece) = track.piece(n) else { break };
                    best = best.max(piece.v0.abs()).max(piece.v1.abs());
                    let (low, high) = piece.hull();
                    if low.abs().max(high.abs()) > best && piece.t1 > piece.t0 {
                        best = piece.turns().fold(best, |b, (_, v)| b.max(v.abs()));
                    }
                }
            }
            best
        })
    }

    /// Whether it depends, somewhere in an interval, on the potential at which an island was held.
    #[must_use]
    pub fn is_floating(&self, interval: Interval) -> bool {
        let first = self.tracks.partition_point(|t| t.end() <= interval.start);
        let inside = self
            .tracks
            .iter()
            .skip(first)
            .take_while(|t| t.start() < interval.end);
        inside.into_iter().any(|t| t.floating)
    }

    /// Whether it depends on such a potential just after `t`, or just before it.
    #[must_use]
    pub fn is_floating_at(&self, t: f64, side: Side) -> bool {
        self.track_at(t, side).is_some_and(|k| k.floating)
    }

    /// Instants and strengths of the impulses in an interval; what is rounding beside the
    /// strongest one does not count.
    #[must_use]
    pub fn impulses_in(&self, interval: Interval) -> Vec<(f64, f64)> {
        if self.strongest == 0.0 {
            return Vec::new();
        }
        let first = self.tracks.partition_point(|t| t.start() < interval.start);
        let starts = self
            .tracks
            .iter()
            .map(Track::start)
            .zip(self.impulses.iter().copied());
        let inside = starts.skip(first).take_while(|(t, _)| *t < interval.end);
        inside
            .filter(|(_, s)| s.abs() > 1e-12 * self.strongest)
            .collect()
    }
}

/// The derivative at `x` of the polynomial through points `(t, s)`, by Newton's divided
/// differences.
fn derivative(t: &[f64], s: &[f64], x: f64) -> f64 {
    let mut c = s.to_vec();
    let n = t.len();
    for k in 1..n {
        for i in (k..n).rev() {
            if let (Some(a), Some(b), Some(u), Some(v)) =
                (c.get(i), c.get(i - 1), t.get(i), t.get(i - k))
            {
                let quotient = (a - b) / (u - v);
                if let Some(slot) = c.get_mut(i) {
                    *slot = quotient;
                }
            }
        }
    }
    let (mut value, mut slope) = (0.0, 0.0);
    for (c, t) in c.iter().zip(t).rev() {
        slope = slope * (x - t) + value;
        value = value * (x - t) + c;
    }
    slope
}

#[cfg(test)]
mod tests {
    use super::super::sample;
    use super::*;
    use pulsewright_circuit::Probe;
    use pulsewright_circuit::expr::Function;

    fn v() -> Box<Formula> {
        Box::new(Formula::Probe(Probe::VoltageAcross(0)))
    }

    #[test]
    fn a_probe_is_read_where_it_lies() {
        let shot = sample::smooth(1.0, 10, |t| (t.sin(), t.cos()));
        let wave = Wave::of(&v(), &Record::new(&shot));
        assert!(matches!(wave.tracks[0].values, Cow::Borrowed(_)));
        assert!((wave.after(0.55) - 0.55_f64.sin()).abs() < 1e-6);
    }

    #[test]
    fn no_piece_straddles_the_kink_of_an_absolute_value() {
        let shot = sample::smooth(1.0, 7, |t| (t - 0.4, 1.0));
        let wave = Wave::of(
            &Formula::Call(Function::Abs, vec![*v()]),
            &Record::new(&shot),
        );
        for t in [0.0_f64, 0.35, 0.4, 0.41, 1.0] {
            assert!((wave.after(t) - (t - 0.4).abs()).abs() < 1e-15, "at {t}");
        }
    }

    #[test]
    fn a_step_in_a_signal_lands_on_its_instant() {
        let late = Formula::Subtract(Box::new(Formula::Time), Box::new(Formula::Number(0.33)));
        let f = Formula::Multiply(v(), Box::new(Formula::Call(Function::Step, vec![late])));
        let shot = sample::smooth(1.0, 10, |_| (2.0, 0.0));
        let wave = Wave::of(&f, &Record::new(&shot));
        assert_eq!(wave.before(0.33), 0.0);
        assert_eq!(wave.after(0.33), 2.0);
    }

    #[test]
    fn the_impulse_of_a_sum_is_the_sum_of_the_impulses() {
        let mut shot = sample::smooth(1.0, 10, |_| (0.0, 0.0));
        shot.jumps[0].impulses = vec![3.0];
        let f = Formula::Add(
            Box::new(Formula::Multiply(Box::new(Formula::Number(-2.0)), v())),
            Box::new(Formula::Time),
        );
        let wave = Wave::of(&f, &Record::new(&shot));
        assert_eq!(wave.impulses, vec![-6.0]);
    }
}

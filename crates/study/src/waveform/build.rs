//! Makes a signal of a formula over what was recorded: values and slopes at the mesh points, steps
//! split at the formula's corners, impulses at the jumps.
//!
//! A corner's zero inside a step is bracketed between neighbouring numbers on the corner's own
//! formula (over the cubics of its probes), so that what holds before is evaluated strictly
//! before it and what holds after strictly after. Two zeros within a step are told apart by the
//! turns of the corner's cubic; more than three within one are missed.

use std::borrow::Cow;

use pulsewright_circuit::formula::{Jet, Side};
use pulsewright_circuit::{Formula, Probe};
use pulsewright_engine::{Jump, Stretch};

use super::record::{AtPoint, Impulses, Inside, Record};
use super::{Cubic, Track};

/// The impulse of a formula at each jump.
pub(super) fn impulses(formula: &Formula, record: &Record<'_>) -> Vec<f64> {
    let probes = formula.probes();
    let rows: Vec<usize> = probes.iter().filter_map(|p| record.row(*p)).collect();
    let of_power = probes.iter().any(|p| matches!(p, Probe::PowerInto(_)));
    let rests = |j: &Jump| {
        let charged = |row: &usize| j.impulses.get(*row).is_some_and(|x| *x != 0.0);
        !(rows.iter().any(charged) || of_power && !j.energies.is_empty())
    };
    let strength = |(jump, j): (usize, &Jump)| {
        if rests(j) {
            return 0.0;
        }
        let rate = |counted| {
            formula
                .jet(
                    j.time,
                    Side::After,
                    &Impulses {
                        record,
                        jump,
                        counted,
                    },
                )
                .rate
        };
        let strength = rate(true) - rate(false);
        if strength.is_finite() { strength } else { 0.0 }
    };
    record.shot.jumps.iter().enumerate().map(strength).collect()
}

/// The track of a formula over a stretch; that of a probe is read where it lies.
pub(super) fn track<'a>(
    formula: &Formula,
    corners: &[Formula],
    record: &Record<'a>,
    stretch: &'a Stretch,
) -> Track<'a> {
    if let Formula::Probe(probe) = formula
        && let Some(p) = record.row(*probe)
        && let (Some(values), Some(slopes)) = (stretch.values.get(p), stretch.slopes.get(p))
    {
        return Track {
            times: Cow::Borrowed(&stretch.times),
            values: Cow::Borrowed(values),
            slopes: Cow::Borrowed(slopes),
            floating: stretch.floating.get(p).copied().unwrap_or(false),
        };
    }
    let rows = formula.probes().into_iter().filter_map(|p| record.row(p));
    let floating = rows
        .into_iter()
        .any(|p| stretch.floating.get(p).copied().unwrap_or(false));
    let mut builder = Builder {
        formula,
        corners,
        record,
        stretch,
        points: Vec::new(),
    };
    builder.build();
    let points = builder.points;
    Track {
        times: points.iter().map(|p| p.0).collect(),
        values: points.iter().map(|p| p.1).collect(),
        slopes: points.iter().map(|p| p.2).collect(),
        floating,
    }
}

/// Evaluates a formula along a stretch.
struct Builder<'r, 'a> {
    formula: &'r Formula,
    corners: &'r [Formula],
    record: &'r Record<'a>,
    stretch: &'a Stretch,
    points: Vec<(f64, f64, f64)>,
}

impl Builder<'_, '_> {
    fn build(&mut self) {
        let times = &self.stretch.times;
        let last = times.len().saturating_sub(1);
        self.points.reserve(times.len());
        for (n, t) in times.iter().enumerate() {
            if n > 0 {
                let before = self.at_point(self.formula, n, Side::Before);
                self.push(*t, before);
            }
            if n < last && (n == 0 || !self.corners.is_empty()) {
                let after = self.at_point(self.formula, n, Side::After);
                self.push(*t, after);
            }
            if n < last {
                self.split(n);
            }
        }
    }

    /// Adds a point; one that repeats the last is left out.
    fn push(&mut self, t: f64, jet: Jet) {
        let point = (t, jet.value, jet.rate);
        if self.points.last() != Some(&point) {
            self.points.push(point);
        }
    }

    fn at_point(&self, formula: &Formula, point: usize, side: Side) -> Jet {
        let t = self.stretch.times.get(point).copied().unwrap_or(f64::NAN);
        formula.jet(
            t,
            side,
            &AtPoint {
                record: self.record,
                stretch: self.stretch,
                point,
            },
        )
    }

    fn inside(&self, formula: &Formula, step: usize, time: f64, side: Side) -> Jet {
        formula.jet(
            time,
            side,
            &Inside {
                record: self.record,
                stretch: self.stretch,
                step,
                time,
            },
        )
    }

    /// Adds both sides of every corner inside the step from point `n`.
    fn split(&mut self, n: usize) {
        let mut found: Vec<[f64; 3]> = self.corners.iter().flat_map(|c| self.zeros(c, n)).collect();
        found.sort_by(|a, b| a[0].total_cmp(&b[0]));
        found.dedup();
        for [time, low, high] in found {
            let before = self.inside(self.formula, n, low, Side::Before);
            let after = self.inside(self.formula, n, high, Side::After);
            self.push(time, before);
            self.push(time, after);
        }
    }

    /// The zeros of `corner` inside the step from point `n`, each with the neighbouring instants
    /// between which its sign changes.
    fn zeros(&self, corner: &Formula, n: usize) -> Vec<[f64; 3]> {
        let (Some(t0), Some(t1)) = (self.stretch.times.get(n), self.stretch.times.get(n + 1))
        else {
            return Vec::new();
        };
        let (a, b) = (
            self.at_point(corner, n, Side::After),
            self.at_point(corner, n + 1, Side::Before),
        );
        let curve = Cubic {
            t0: *t0,
            t1: *t1,
            v0: a.value,
            v1: b.value,
            s0: a.rate,
            s1: b.rate,
        };
        let value = |t: f64| self.inside(corner, n, t, Side::After).value;
        let positive = |t: f64| value(t) > 0.0;
        let mut found = Vec::new();
        let mut low = *t0;
        for high in curve.turns().map(|(t, _)| t).chain([*t1]) {
            if positive(low) != positive(high) {
                let (a, b) = bisect(low, high, &positive);
                if a > *t0 && b < *t1 {
                    found.push([if value(a) == 0.0 { a } else { b }, a, b]);
                }
            }
            low = high;
        }
        found
    }
}

/// The two neighbouring numbers between which `side` changes.
fn bisect(mut low: f64, mut high: f64, side: &impl Fn(f64) -> bool) -> (f64, f64) {
    let at_low = side(low);
    loop {
        let middle = low + 0.5 * (high - low);
        if middle <= low || middle >= high {
            return (low, high);
        }
        if side(middle) == at_low {
            low = middle;
        } else {
            high = middle;
        }
    }
}

//! The worst corner of the tolerances for each claim of a case.
//!
//! The box is every value within its spread, a normal's ending at three deviations. A claim has
//! one or two sides, `value - least` and `most - value`, and each is smooth where the margin,
//! their lesser, is not; so each is searched by itself:
//!
//! 1. One value at a time goes to -1, -1/2, 1/2 and 1 with the others nominal. The signs of the
//!    differences are the signs of the sensitivities; where they change the value is *turning*.
//! 2. The start is the corner that the signs point to, a turning value at its worst of these.
//! 3. From there one value at a time is tried at its other end, a turning one inside as well and
//!    then at the crest of the parabola through the three points about it, until a whole round
//!    makes nothing worse.
//! 4. What is found is confirmed by a shot with the accuracy of any judged one, and held against
//!    the nominal shot.
//!
//! A worst point that no change of one value leads to is missed.

use std::collections::BTreeMap;
use std::rc::Rc;

use pulsewright_circuit::{Circuit, LetValue, Positions};

use crate::error::StudyError;
use crate::fire::{Care, Measured, measure};
use crate::ladder::Turn;
use crate::options::Options;
use crate::outcome::{ClaimResult, Found, Verdict, Worst};

/// Where a value is tried, beside its nominal place.
const TRIED: [f64; 4] = [-1.0, -0.5, 0.5, 1.0];
/// How often every value is tried at most.
const ROUNDS: usize = 6;

/// Which limit a value comes near.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Side {
    Least,
    Most,
}

/// One case, and the shots fired in it so far.
pub(crate) struct Search<'a> {
    circuit: &'a Circuit,
    set: &'a [(String, LetValue)],
    options: &'a Options<'a>,
    turn: Turn,
    n_varying: usize,
    shots: BTreeMap<(bool, Vec<Option<u64>>), Rc<Measured>>,
}

type Point = Vec<Option<f64>>;

impl<'a> Search<'a> {
    pub fn new(
        circuit: &'a Circuit,
        set: &'a [(String, LetValue)],
        options: &'a Options<'a>,
        turn: Turn,
    ) -> Self {
        Search {
            circuit,
            set,
            options,
            turn,
            n_varying: circuit.varying().len(),
            shots: BTreeMap::new(),
        }
    }

    /// The worst corner of every claim; none for a claim that does not apply, and for all where
    /// nothing varies.
    pub fn all(&mut self, nominal: &[ClaimResult]) -> Result<Vec<Option<Worst>>, StudyError> {
        let claims = nominal.iter().enumerate();
        claims.map(|(k, claim)| self.of(k, claim)).collect()
    }

    /// The worst corner of the claim at an index, which is so at nominal values.
    pub fn of(&mut self, k: usize, nominal: &ClaimResult) -> Result<Option<Worst>, StudyError> {
        if self.n_varying == 0 || nominal.verdict == Verdict::DoesNotApply {
            return Ok(None);
        }
        let mut worst = (vec![None; self.n_varying], nominal.clone());
        for side in [Side::Least, Side::Most] {
            let point = self.descend(k, side)?;
            let shot = self.shot(&point, Care::Whole)?;
            let Some(claim) = shot.claims.get(k) else {
                continue;
            };
            if margin(claim) < margin(&worst.1) {
                worst = (point, claim.clone());
            }
        }
        let positions = Positions::new(worst.0);
        let lets = self.circuit.lets_at(self.set, &positions)?;
        Ok(Some(Worst {
            claim: self.on_a_share(k, worst.1),
            corner: self.circuit.stands(&lets, &positions),
            positions,
        }))
    }

    /// A claim on a share of shots holds where it holds in all; else a corner decides nothing.
    fn on_a_share(&self, k: usize, mut claim: ClaimResult) -> ClaimResult {
        let stated = self.circuit.draft().claims.get(k);
        if let Some(share) = stated.and_then(|c| c.in_shots.as_ref())
            && claim.verdict == Verdict::Fails
        {
            claim.verdict = Verdict::Undecided;
            claim.reason = Some(format!(
                "it fails at its worst corner and is asked for in at least {share} of shots, which `spread` judges"
            ));
        }
        claim
    }

    fn shot(&mut self, point: &Point, care: Care) -> Result<Rc<Measured>, StudyError> {
        let bits = point.iter().map(|p| p.map(f64::to_bits)).collect();
        let key = (care == Care::Whole, bits);
        if let Some(known) = self.shots.get(&key) {
            return Ok(Rc::clone(known));
        }
        let at = Positions::new(point.clone());
        let shot = measure(self.circuit, self.set, &at, self.options, self.turn, care)?;
        let shot = Rc::new(shot);
        self.shots.insert(key, Rc::clone(&shot));
        Ok(shot)
    }

    /// How far inside a claim's limit its value is at a point, with the bound on it.
    fn inside(&mut self, k: usize, side: Side, point: &Point) -> Result<(f64, f64), StudyError> {
        let shot = self.shot(point, Care::Drawn)?;
        Ok(shot
            .claims
            .get(k)
            .map_or((f64::INFINITY, 0.0), |c| inside(c, side)))
    }

    fn descend(&mut self, k: usize, side: Side) -> Result<Point, StudyError> {
        let nominal: Point = vec![None; self.n_varying];
        let (mut point, mut turning) = (nominal.clone(), Vec::new());
        for i in 0..self.n_varying {
            let mut along = Vec::new();
            for p in TRIED {
                along.push(self.inside(k, side, &moved(&nominal, i, Some(p)))?);
            }
            along.insert(2, self.inside(k, side, &nominal)?);
            turning.push(is_turning(&along));
            let worst = least(&along);
            if let Some(place) = point.get_mut(i) {
                *place = worst.and_then(|j| {
                    [Some(-1.0), Some(-0.5), None, Some(0.5), Some(1.0)]
                        .get(j)
                        .copied()
                        .flatten()
                });
            }
        }
        let mut best = self.inside(k, side, &point)?;
        for _ in 0..ROUNDS {
            let before = point.clone();
            for (i, turning) in turning.iter().enumerate() {
                self.line(k, side, (&mut point, &mut best), i, *turning)?;
            }
            if point == before {
                break;
            }
        }
        Ok(point)
    }

    /// Tries one value elsewhere, and keeps what is worse.
    fn line(
        &mut self,
        k: usize,
        side: Side,
        (point, best): (&mut Point, &mut (f64, f64)),
        i: usize,
        turning: bool,
    ) -> Result<(), StudyError> {
        let mut tried: Vec<Option<f64>> = vec![Some(-1.0), Some(1.0)];
        if turning {
            tried.extend([Some(-0.5), None, Some(0.5)]);
        }
        for p in tried {
            self.step(k, side, (point, best), i, p)?;
        }
        let mut width = 0.5;
        while turning && width > 0.005 {
            let Some(at) = point.get(i).copied().flatten() else {
                break;
            };
            let (a, b) = (f64::max(at - width, -1.0), f64::min(at + width, 1.0));
            let low = self.inside(k, side, &moved(point, i, Some(a)))?.0;
            let high = self.inside(k, side, &moved(point, i, Some(b)))?.0;
            let Some(crest) = vertex([a, at, b], [low, best.0, high]) else {
                break;
            };
            for p in [a, b, crest.clamp(-1.0, 1.0)] {
                self.step(k, side, (point, best), i, Some(p))?;
            }
            width *= 0.3;
        }
        Ok(())
    }

    fn step(
        &mut self,
        k: usize,
        side: Side,
        (point, best): (&mut Point, &mut (f64, f64)),
        i: usize,
        p: Option<f64>,
    ) -> Result<(), StudyError> {
        let other = moved(point, i, p);
        let found = self.inside(k, side, &other)?;
        if found.0 < best.0 - (found.1 + best.1)
            || (found.0 == f64::NEG_INFINITY && best.0 > found.0)
        {
            (*point, *best) = (other, found);
        }
        Ok(())
    }
}

fn moved(point: &Point, i: usize, p: Option<f64>) -> Point {
    let mut other = point.clone();
    if let Some(place) = other.get_mut(i) {
        *place = p;
    }
    other
}

/// How far inside one limit a value is, and the bound on it; without a value it fails.
fn inside(claim: &ClaimResult, side: Side) -> (f64, f64) {
    let limit = match side {
        Side::Least => claim.least,
        Side::Most => claim.most,
    };
    match (&claim.answer.found, limit) {
        _ if claim.verdict == Verdict::DoesNotApply => (f64::INFINITY, 0.0),
        (Found::Value { value, bound }, Some(limit)) => {
            let inside = if side == Side::Least {
                value - limit
            } else {
                limit - value
            };
            (inside, *bound)
        }
        (Found::Value { .. }, None) if claim.margin.is_some() => (f64::INFINITY, 0.0),
        _ => (f64::NEG_INFINITY, 0.0),
    }
}

/// How far inside its limits a claim is; without a number, as far outside as can be.
fn margin(claim: &ClaimResult) -> f64 {
    match claim.verdict {
        Verdict::DoesNotApply => f64::INFINITY,
        _ => claim.margin.unwrap_or(f64::NEG_INFINITY),
    }
}

/// Whether neighbours rise in one place and fall in another, beyond their bounds.
fn is_turning(along: &[(f64, f64)]) -> bool {
    let (mut rises, mut falls) = (false, false);
    for pair in along.windows(2) {
        if let [a, b] = pair {
            rises |= b.0 - a.0 > a.1 + b.1;
            falls |= a.0 - b.0 > a.1 + b.1;
        }
    }
    rises && falls
}

/// The place of the least; none where nothing differs beyond the bounds.
fn least(along: &[(f64, f64)]) -> Option<usize> {
    let by_value = |a: &(usize, &(f64, f64)), b: &(usize, &(f64, f64))| a.1.0.total_cmp(&b.1.0);
    let (place, low) = along.iter().enumerate().min_by(by_value)?;
    let (_, high) = along.iter().enumerate().max_by(by_value)?;
    (high.0 > low.0 + low.1 + high.1).then_some(place)
}

/// Where the parabola through three points has its least value.
fn vertex([a, b, c]: [f64; 3], [x, y, z]: [f64; 3]) -> Option<f64> {
    let (left, right) = ((y - x) / (b - a), (z - y) / (c - b));
    let bend = (right - left) / (c - a);
    let at = f64::midpoint(a, b) - left / (2.0 * bend);
    (bend > 0.0 && at.is_finite()).then_some(at)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_vertex_of_a_parabola() {
        let f = |x: f64| 3.0 * (x - 0.2).powi(2) + 1.0;
        let found = vertex([-1.0, 0.5, 1.0], [f(-1.0), f(0.5), f(1.0)]).unwrap();
        assert!((found - 0.2).abs() < 1e-14);
        assert_eq!(vertex([0.0, 1.0, 2.0], [0.0, 1.0, 2.0]), None);
    }

    #[test]
    fn differences_within_the_bounds_turn_nothing() {
        assert!(is_turning(&[(0.0, 0.1), (1.0, 0.1), (0.0, 0.1)]));
        assert!(!is_turning(&[(0.0, 0.6), (1.0, 0.6), (0.0, 0.6)]));
    }
}

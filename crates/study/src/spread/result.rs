//! From a tally to what a study says: shares with their intervals, verdicts, quantiles, and
//! what matters.
//!
//! `matters` is the squared correlation r² of a reading with the position of a value within its
//! spread: the share of the reading's variance that a straight line through that value explains.
//! Values are drawn independently, so the shares of a reading that is near enough linear add up
//! to 1; what is missing from 1 is curvature and interplay. Of no connection at all it is about
//! one over the number of shots.

use super::interval::interval;
use super::tally::{CaseTally, ClaimTally, Extreme, ReadingTally, Tally};
use crate::outcome::{Hazard, Set, Verdict};

/// The shares that quantiles are given for.
pub const QUANTILES: [f64; 7] = [0.001, 0.01, 0.05, 0.5, 0.95, 0.99, 0.999];

/// What a study says.
#[derive(Clone, Debug, PartialEq)]
pub struct Spread {
    /// What it is made of.
    pub tally: Tally,
    /// The cases in order.
    pub cases: Vec<SpreadCase>,
    /// Each claim over all cases: `fails` where it fails in one, else `undecided` where it is
    /// in one, else `holds`; `undecided` where it applies in none.
    pub claims: Vec<(String, Verdict)>,
}

/// One case.
#[derive(Clone, Debug, PartialEq)]
pub struct SpreadCase {
    /// The let-values that were set or varied.
    pub set: Set,
    /// The claims, in the file's order.
    pub claims: Vec<ClaimShare>,
    /// The readings.
    pub readings: Vec<ReadingSpread>,
    /// Hazards at nominal values.
    pub hazards: Vec<Hazard>,
}

/// In what share of the shots a claim holds.
#[derive(Clone, Debug, PartialEq)]
pub struct ClaimShare {
    /// The counts.
    pub counts: ClaimTally,
    /// The share of the shots that it applies in; none where it applies in none.
    pub share: Option<f64>,
    /// The lower end of the interval: undecided shots counted as failing.
    pub low: Option<f64>,
    /// The upper end: undecided shots counted as holding.
    pub high: Option<f64>,
    /// The verdict on the share asked for; where none is stated, on every shot.
    pub verdict: Verdict,
}

/// A reading over the shots, in coherent SI units.
#[derive(Clone, Debug, PartialEq)]
pub struct ReadingSpread {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub text: String,
    /// Its unit.
    pub unit: String,
    /// The nominal value.
    pub nominal: Option<f64>,
    /// Shots in which it has a value.
    pub of: u64,
    /// Shots in which it has none.
    pub missing: u64,
    /// The largest bound on its error in one shot.
    pub bound: Option<f64>,
    /// The mean.
    pub mean: Option<f64>,
    /// The standard deviation of the sample (n - 1); none of fewer than two values.
    pub deviation: Option<f64>,
    /// The values at [`QUANTILES`], each to 1/4096 of its distance from nominal.
    pub quantiles: Vec<(f64, f64)>,
    /// The least value, and its draw.
    pub least: Option<Extreme>,
    /// The greatest value, and its draw.
    pub most: Option<Extreme>,
    /// The share of the variance that each value explains.
    pub matters: Vec<(String, f64)>,
}

impl From<Tally> for Spread {
    fn from(tally: Tally) -> Self {
        let cases: Vec<SpreadCase> = tally
            .cases
            .iter()
            .map(|c| case(c, &tally.varying))
            .collect();
        let names = tally.cases.first().map_or(&[][..], |c| &c.claims);
        let over = |k: usize| {
            let of = cases
                .iter()
                .filter_map(|c| c.claims.get(k))
                .map(|c| c.verdict);
            let worst = |v: &Verdict| match v {
                Verdict::Fails => 3,
                Verdict::Undecided => 2,
                Verdict::Holds => 1,
                Verdict::DoesNotApply => 0,
            };
            match of.max_by_key(worst) {
                None | Some(Verdict::DoesNotApply) => Verdict::Undecided,
                Some(verdict) => verdict,
            }
        };
        let claims = names
            .iter()
            .enumerate()
            .map(|(k, c)| (c.name.clone(), over(k)))
            .collect();
        Spread {
            cases,
            claims,
            tally,
        }
    }
}

fn case(tally: &CaseTally, varying: &[String]) -> SpreadCase {
    SpreadCase {
        set: tally.set.clone(),
        claims: tally.claims.iter().map(share).collect(),
        readings: tally.readings.iter().map(|r| reading(r, varying)).collect(),
        hazards: tally.hazards.clone(),
    }
}

#[allow(clippy::cast_precision_loss, reason = "counts of shots")]
fn share(counts: &ClaimTally) -> ClaimShare {
    let of = counts.of();
    let (low, high) = (
        interval(counts.holds, of).0,
        interval(counts.holds.saturating_add(counts.undecided), of).1,
    );
    let verdict = match counts.asked {
        _ if of == 0 => Verdict::DoesNotApply,
        None if counts.fails > 0 => Verdict::Fails,
        None if counts.undecided > 0 => Verdict::Undecided,
        None => Verdict::Holds,
        Some(asked) if low >= asked => Verdict::Holds,
        Some(asked) if high < asked => Verdict::Fails,
        Some(_) => Verdict::Undecided,
    };
    let some = |x: f64| (of > 0).then_some(x);
    ClaimShare {
        share: some(counts.holds as f64 / of as f64),
        low: some(low),
        high: some(high),
        verdict,
        counts: counts.clone(),
    }
}

#[allow(clippy::cast_precision_loss, reason = "counts of shots")]
fn reading(tally: &ReadingTally, varying: &[String]) -> ReadingSpread {
    let (n, nominal) = (tally.of as f64, tally.nominal.unwrap_or(0.0));
    let (sum, squares) = (tally.sum.value(), tally.squares.value());
    // Rounding may leave a little below zero of what does not vary.
    let about = |sum: f64, squares: f64| (squares - sum * sum / n).max(0.0);
    let ends = tally.least.zip(tally.most);
    let quantile = |q: &f64| {
        let (least, most) = ends?;
        let value = nominal + tally.bins.quantile(*q)?;
        Some((*q, value.max(least.value).min(most.value)))
    };
    let all = about(sum, squares);
    let matter = |[p, pp, py]: &[super::sum::Sum; 3]| {
        let (p, along) = (p.value(), py.value());
        let both = about(p, pp.value()) * all;
        if both > 0.0 {
            ((along - p * sum / n).powi(2) / both).min(1.0)
        } else {
            0.0
        }
    };
    ReadingSpread {
        name: tally.name.clone(),
        text: tally.text.clone(),
        unit: tally.unit.clone(),
        nominal: tally.nominal,
        of: tally.of,
        missing: tally.missing,
        bound: tally.bound.filter(|_| tally.of > 0),
        mean: (tally.of > 0).then(|| nominal + sum / n),
        deviation: (tally.of > 1).then(|| (all / (n - 1.0)).sqrt()),
        quantiles: QUANTILES.iter().filter_map(quantile).collect(),
        least: tally.least,
        most: tally.most,
        matters: varying
            .iter()
            .cloned()
            .zip(tally.against.iter().map(matter))
            .collect(),
    }
}

//! What a study keeps of its shots: counts, exact sums, bins, extremes; never the shots.
//!
//! Every entry is the same whatever the order of the shots and however they are cut, so that
//! tallies of slices join to the tally of the whole, bit for bit. Its size does not grow with
//! the number of shots.

#[cfg(feature = "serde")]
use serde::{Deserialize, Serialize};

use super::bins::Bins;
use super::sum::Sum;
use crate::outcome::{Found, Hazard, SetValue, Verdict};

/// What a study keeps of its shots, or of those of one slice.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(Serialize, Deserialize))]
pub struct Tally {
    /// How many shots the whole study has in each case.
    pub shots: u64,
    /// The seed.
    pub seed: u64,
    /// Which of how many slices this is, from 1; `[1, 1]` for the whole.
    pub slice: [u64; 2],
    /// The integrator in words.
    pub method: String,
    /// How long the shots were followed, s.
    pub span: f64,
    /// Defaults that were taken, in words.
    pub defaults: Vec<String>,
    /// Steps of the finest meshes, over all shots.
    pub steps: u64,
    /// The smallest of these, s; none without shots.
    pub smallest_step: Option<f64>,
    /// The largest of these, s.
    pub largest_step: Option<f64>,
    /// The values that vary, by name.
    pub varying: Vec<String>,
    /// The cases in order.
    pub cases: Vec<CaseTally>,
}

/// One case.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(Serialize, Deserialize))]
pub struct CaseTally {
    /// The let-values that were set or varied.
    pub set: Vec<(String, SetValue)>,
    /// The claims in the file's order.
    pub claims: Vec<ClaimTally>,
    /// The named readings in the file's order, then those of claims that have no name.
    pub readings: Vec<ReadingTally>,
    /// Hazards at nominal values.
    pub hazards: Vec<Hazard>,
}

/// How often a claim was answered how.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(Serialize, Deserialize))]
pub struct ClaimTally {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub text: String,
    /// The relation as the language writes it.
    pub relation: String,
    /// The requirements it answers.
    pub answers: Vec<String>,
    /// The least share of shots that it is to hold in; every shot where none is stated.
    pub asked: Option<f64>,
    /// Shots in which it holds.
    pub holds: u64,
    /// Shots in which it fails.
    pub fails: u64,
    /// Shots in which the bound decides neither.
    pub undecided: u64,
}

/// A value and the draw it came in, from 1.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(Serialize, Deserialize))]
pub struct Extreme {
    /// The value.
    pub value: f64,
    /// The draw; of several the first.
    pub draw: u64,
}

/// One reading over the shots. `y` is its distance from the nominal value, `p` the position of a
/// value within its spread.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(Serialize, Deserialize))]
pub struct ReadingTally {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub text: String,
    /// Its unit in coherent SI.
    pub unit: String,
    /// The nominal value, where there is one.
    pub nominal: Option<f64>,
    /// Shots in which it has a value.
    pub of: u64,
    /// Shots in which it has none.
    pub missing: u64,
    /// The largest bound on its error in one shot; none where that is infinite.
    pub bound: Option<f64>,
    /// The least value.
    pub least: Option<Extreme>,
    /// The greatest value.
    pub most: Option<Extreme>,
    /// Σ y
    pub sum: Sum,
    /// Σ y²
    pub squares: Sum,
    /// How often each y came.
    pub bins: Bins,
    /// Σ p, Σ p², Σ p y for each value that varies.
    pub against: Vec<[Sum; 3]>,
}

impl Tally {
    /// Adds the tally of other shots of the same study.
    pub fn join(&mut self, other: &Tally) {
        let first = |a: Option<f64>, b: Option<f64>, pick: fn(f64, f64) -> f64| match (a, b) {
            (Some(a), Some(b)) => Some(pick(a, b)),
            (a, b) => a.or(b),
        };
        self.steps = self.steps.saturating_add(other.steps);
        self.smallest_step = first(self.smallest_step, other.smallest_step, f64::min);
        self.largest_step = first(self.largest_step, other.largest_step, f64::max);
        for (mine, other) in self.cases.iter_mut().zip(&other.cases) {
            mine.join(other);
        }
    }
}

impl CaseTally {
    fn join(&mut self, other: &CaseTally) {
        for (mine, other) in self.claims.iter_mut().zip(&other.claims) {
            mine.holds = mine.holds.saturating_add(other.holds);
            mine.fails = mine.fails.saturating_add(other.fails);
            mine.undecided = mine.undecided.saturating_add(other.undecided);
        }
        for (mine, other) in self.readings.iter_mut().zip(&other.readings) {
            mine.join(other);
        }
    }
}

impl ClaimTally {
    /// Counts a shot.
    pub fn add(&mut self, verdict: Verdict) {
        match verdict {
            Verdict::Holds => self.holds += 1,
            Verdict::Fails => self.fails += 1,
            Verdict::Undecided => self.undecided += 1,
            Verdict::DoesNotApply => {}
        }
    }

    /// Shots in which it applies.
    #[must_use]
    pub fn of(&self) -> u64 {
        let settled = self.holds.saturating_add(self.fails);
        settled.saturating_add(self.undecided)
    }
}

impl ReadingTally {
    /// Adds the reading of draw `draw`, made at these positions.
    pub fn add(&mut self, found: &Found, draw: u64, positions: &[Option<f64>]) {
        let Found::Value { value, bound } = found else {
            self.missing += 1;
            return;
        };
        let y = value - self.nominal.unwrap_or(0.0);
        self.of += 1;
        let finite = bound.is_finite();
        self.bound = self.bound.filter(|_| finite).map(|b| b.max(*bound));
        let at = Extreme {
            value: *value,
            draw,
        };
        lower(&mut self.least, Some(at), 1.0);
        lower(&mut self.most, Some(at), -1.0);
        self.sum.add(y);
        self.squares.add_product(y, y);
        self.bins.add(y);
        for (sums, p) in self.against.iter_mut().zip(positions) {
            let ([ps, squares, products], p) = (sums, p.unwrap_or(0.0));
            ps.add(p);
            squares.add_product(p, p);
            products.add_product(p, y);
        }
    }

    fn join(&mut self, other: &ReadingTally) {
        self.of = self.of.saturating_add(other.of);
        self.missing = self.missing.saturating_add(other.missing);
        self.bound = self.bound.zip(other.bound).map(|(a, b)| a.max(b));
        lower(&mut self.least, other.least, 1.0);
        lower(&mut self.most, other.most, -1.0);
        self.sum.join(&other.sum);
        self.squares.join(&other.squares);
        self.bins.join(&other.bins);
        for (mine, other) in self.against.iter_mut().zip(&other.against) {
            for (mine, other) in mine.iter_mut().zip(other) {
                mine.join(other);
            }
        }
    }
}

/// Keeps the lower of two (with `sign` -1 the higher), of equal ones the earlier draw.
fn lower(kept: &mut Option<Extreme>, other: Option<Extreme>, sign: f64) {
    let Some(other) = other else { return };
    let order = |e: &Extreme| sign * e.value;
    let better = kept.is_none_or(|kept| match order(&other).total_cmp(&order(&kept)) {
        std::cmp::Ordering::Less => true,
        std::cmp::Ordering::Equal => other.draw < kept.draw,
        std::cmp::Ordering::Greater => false,
    });
    if better {
        *kept = Some(other);
    }
}

//! A study over spreads: many draws in every case, tallied.
//!
//! ```text
//! draw(seed, k) -> positions -> one shot, read and judged -> Tally ┐
//!                                            other threads, slices ┴ join -> Spread
//! ```
//!
//! [`spread`] fires the draws of a slice and hands over a [`Tally`]; [`merge`] joins those of
//! slices; [`Spread::from`] makes shares, intervals, quantiles and verdicts of one. Shots are
//! independent and a tally does not depend on their order, so neither threads nor slices change
//! a bit of it. Draw k is the same in every case.

mod bins;
mod draw;
mod interval;
mod merge;
mod normal;
mod result;
mod sum;
mod tally;

pub use bins::Bins;
pub use draw::draw;
pub use interval::CONFIDENCE;
pub use merge::{MergeError, merge};
pub use result::{ClaimShare, QUANTILES, ReadingSpread, Spread, SpreadCase};
pub use sum::Sum;
pub use tally::{CaseTally, ClaimTally, Extreme, ReadingTally, Tally};

use std::sync::Mutex;
use std::sync::atomic::{AtomicU64, Ordering};

use pulsewright_circuit::vary::Law;
use pulsewright_circuit::{Circuit, Dimension, LetValue, Positions};

use crate::adjust::{Settled, settle};
use crate::error::StudyError;
use crate::fire::{Care, Measured, measure, run};
use crate::ladder::Turn;
use crate::options::Options;
use crate::outcome::{Answer, Fired, Found};

/// Which draws a study fires.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Draws {
    /// How many in each case, over all slices.
    pub shots: u64,
    /// What they are drawn from.
    pub seed: u64,
    /// Which of how many slices, from 1; `[1, 1]` is the whole.
    pub slice: [u64; 2],
    /// On how many threads; `None` as many as the machine has. The outcome does not depend on it.
    pub threads: Option<usize>,
}

impl Draws {
    /// The draws of the slice, from 1: the first, and the one after the last.
    fn range(&self) -> [u64; 2] {
        let [at, of] = self.slice.map(|n| u128::from(n.max(1)));
        let upto = |k: u128| u64::try_from(u128::from(self.shots) * k / of).unwrap_or(self.shots);
        [1 + upto(at.min(of) - 1), 1 + upto(at.min(of))]
    }
}

type Set = Vec<(String, LetValue)>;

struct Study<'a> {
    circuit: &'a Circuit,
    options: &'a Options<'a>,
    draws: Draws,
    sets: Vec<Set>,
    laws: Vec<Law>,
    /// Without a single shot.
    blank: Tally,
    next: AtomicU64,
    /// The earliest draw that failed.
    stop: AtomicU64,
}

/// Fires the draws of a slice in every case.
///
/// # Errors
///
/// As for [`fire`](crate::fire), at nominal values or in the first draw that fails.
pub fn spread(circuit: &Circuit, options: &Options<'_>, draws: Draws) -> Result<Tally, StudyError> {
    let sets = circuit.case_sets(&options.held)?;
    let turn = Turn::ONLY;
    let settled: Vec<Settled> = sets
        .iter()
        .map(|set| settle(circuit, set, options, turn))
        .collect::<Result<_, _>>()?;
    let blank = blank(circuit, options, draws, &settled)?;
    let sets = settled.into_iter().map(|s| s.set).collect();
    let [first, _] = draws.range();
    let study = Study {
        circuit,
        options,
        draws,
        sets,
        laws: circuit.varying().iter().map(|v| v.law).collect(),
        blank,
        next: AtomicU64::new(first),
        stop: AtomicU64::new(u64::MAX),
    };
    study.whole()
}

impl Study<'_> {
    fn whole(&self) -> Result<Tally, StudyError> {
        let machine = || std::thread::available_parallelism().map_or(1, usize::from);
        let threads = self.draws.threads.unwrap_or_else(machine).max(1);
        let tally = Mutex::new(self.blank.clone());
        let failed: Mutex<Option<(u64, StudyError)>> = Mutex::new(None);
        std::thread::scope(|scope| {
            for _ in 0..threads {
                scope.spawn(|| match self.share() {
                    Ok(mine) => {
                        if let Ok(mut tally) = tally.lock() {
                            tally.join(&mine);
                        }
                    }
                    Err(mine) => {
                        if let Ok(mut failed) = failed.lock()
                            && failed.as_ref().is_none_or(|f| mine.0 < f.0)
                        {
                            *failed = Some(mine);
                        }
                    }
                });
            }
        });
        match (failed.into_inner(), tally.into_inner()) {
            (Ok(Some((_, error))), _) => Err(error),
            (_, Ok(tally)) => Ok(tally),
            (_, Err(poisoned)) => Ok(poisoned.into_inner()),
        }
    }

    /// One thread's share: draws in turn until none is left, or an earlier one has failed.
    fn share(&self) -> Result<Tally, (u64, StudyError)> {
        let mut tally = self.blank.clone();
        let [_, end] = self.draws.range();
        loop {
            let draw = self.next.fetch_add(1, Ordering::Relaxed);
            if draw >= end || draw > self.stop.load(Ordering::Relaxed) {
                return Ok(tally);
            }
            if let Err(error) = self.shots(draw, &mut tally) {
                self.stop.fetch_min(draw, Ordering::Relaxed);
                return Err((draw, error));
            }
        }
    }

    /// One draw in every case.
    fn shots(&self, draw: u64, tally: &mut Tally) -> Result<(), StudyError> {
        let at = draw::at(&self.laws, self.draws.seed, draw);
        let [first, end] = self.draws.range();
        let place = |k: u64| usize::try_from(k).unwrap_or(usize::MAX);
        let of = place(end - first).saturating_mul(self.sets.len());
        let before = place(draw - first).saturating_mul(self.sets.len());
        for (k, (set, case)) in self.sets.iter().zip(&mut tally.cases).enumerate() {
            let turn = Turn {
                case: before + k + 1,
                of,
            };
            let shot = measure(self.circuit, set, &at, self.options, turn, Care::Drawn)
                .map_err(|e| e.in_draw(draw, self.draws.seed))?;
            case.add(&shot, draw, at.as_slice());
            tally.steps = tally.steps.saturating_add(shot.steps);
            let (least, most) = (&mut tally.smallest_step, &mut tally.largest_step);
            *least = Some(least.map_or(shot.smallest_step, |h| h.min(shot.smallest_step)));
            *most = Some(most.map_or(shot.largest_step, |h| h.max(shot.largest_step)));
        }
        Ok(())
    }
}

impl CaseTally {
    fn add(&mut self, shot: &Measured, draw: u64, positions: &[Option<f64>]) {
        for (tally, claim) in self.claims.iter_mut().zip(&shot.claims) {
            tally.add(claim.verdict);
        }
        for (tally, answer) in self.readings.iter_mut().zip(shot.answers()) {
            tally.add(&answer.found, draw, positions);
        }
    }
}

/// A tally without shots, with what the nominal shots tell.
fn blank(
    circuit: &Circuit,
    options: &Options<'_>,
    draws: Draws,
    settled: &[Settled],
) -> Result<Tally, StudyError> {
    let options = Options {
        stress: false,
        at: Positions::nominal(),
        channels: Some(Vec::new()),
        ..options.clone()
    };
    let nominal: Vec<Fired> = settled
        .iter()
        .map(|case| run(circuit, case, &options, Turn::ONLY))
        .collect::<Result<_, _>>()?;
    let varying: Vec<String> = circuit.varying().into_iter().map(|v| v.name).collect();
    let cases = nominal
        .iter()
        .zip(settled)
        .map(|(fired, case)| blank_case(circuit, fired, &case.set, varying.len()))
        .collect::<Result<_, _>>()?;
    let first = nominal.first();
    Ok(Tally {
        shots: draws.shots,
        seed: draws.seed,
        slice: draws.slice,
        method: first.map_or_else(String::new, |f| f.method.clone()),
        span: first.map_or(0.0, |f| f.span),
        defaults: first.map_or_else(Vec::new, |f| f.defaults.clone()),
        steps: 0,
        smallest_step: None,
        largest_step: None,
        varying,
        cases,
    })
}

fn blank_case(
    circuit: &Circuit,
    fired: &Fired,
    set: &Set,
    n_varying: usize,
) -> Result<CaseTally, StudyError> {
    let lets = circuit.lets(set)?;
    let mut claims = Vec::new();
    for (stated, claim) in circuit.draft().claims.iter().zip(&fired.claims) {
        let asked = stated.in_shots.as_ref();
        claims.push(ClaimTally {
            name: claim.name.clone(),
            text: claim.text.clone(),
            relation: claim.relation.clone(),
            answers: claim.answers.clone(),
            asked: asked.map(|e| circuit.value(&lets, e)).transpose()?,
            holds: 0,
            fails: 0,
            undecided: 0,
        });
    }
    let reading = |(name, text, answer): (&str, &str, &Answer)| ReadingTally {
        name: name.to_owned(),
        text: text.to_owned(),
        unit: unit(answer, text),
        nominal: match answer.found {
            Found::Value { value, .. } => Some(value),
            _ => None,
        },
        of: 0,
        missing: 0,
        bound: Some(0.0),
        least: None,
        most: None,
        sum: Sum::default(),
        squares: Sum::default(),
        bins: Bins::default(),
        against: vec![<[Sum; 3]>::default(); n_varying],
    };
    Ok(CaseTally {
        set: fired.set.clone(),
        claims,
        readings: fired.answers().map(reading).collect(),
        hazards: fired.hazards.clone(),
    })
}

/// A flux that an inductor holds is in weber, not in volt seconds.
fn unit(answer: &Answer, text: &str) -> String {
    if answer.dimension == Dimension::WEBER && text.contains("flux held by") {
        "Wb".to_owned()
    } else {
        answer.unit.clone()
    }
}

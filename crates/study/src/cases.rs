//! Judges every case of a circuit.
//!
//! Cases do not depend on each other and are fired side by side on the machine's threads; the
//! outcome does not depend on how many there are.

use std::sync::Mutex;
use std::sync::atomic::{AtomicUsize, Ordering};

use pulsewright_circuit::{Circuit, LetValue};

use crate::error::StudyError;
use crate::fire::run;
use crate::ladder::Turn;
use crate::options::Options;
use crate::outcome::{ClaimSummary, Fired, Judged, Verdict};

type CaseSet = Vec<(String, LetValue)>;

/// The let-values of the case with number `n`, counted from 1.
pub(crate) fn case_set(
    circuit: &Circuit,
    options: &Options<'_>,
    n: usize,
) -> Result<CaseSet, StudyError> {
    let sets = circuit.case_sets(&options.held)?;
    let of = sets.len();
    let found = n.checked_sub(1).and_then(|k| sets.into_iter().nth(k));
    found.ok_or(StudyError::NoCase { case: n, of })
}

/// Fires and judges every case.
///
/// # Errors
///
/// As for [`fire`](crate::fire); of several cases the first one's.
pub fn judge(circuit: &Circuit, options: &Options<'_>) -> Result<Judged, StudyError> {
    let sets = circuit.case_sets(&options.held)?;
    let cases = fired(circuit, &sets, options)?;
    let claims = summaries(circuit, &cases);
    Ok(Judged { cases, claims })
}

fn fired(
    circuit: &Circuit,
    sets: &[CaseSet],
    options: &Options<'_>,
) -> Result<Vec<Fired>, StudyError> {
    let of = sets.len();
    let one = |k: usize, set: &CaseSet| run(circuit, set, options, Turn { case: k + 1, of });
    let threads = std::thread::available_parallelism()
        .map_or(1, usize::from)
        .min(of);
    if threads < 2 {
        return sets
            .iter()
            .enumerate()
            .map(|(k, set)| one(k, set))
            .collect();
    }
    let (next, stop) = (AtomicUsize::new(0), AtomicUsize::new(usize::MAX));
    let done: Vec<Mutex<Option<Result<Fired, StudyError>>>> =
        sets.iter().map(|_| Mutex::new(None)).collect();
    std::thread::scope(|scope| {
        for _ in 0..threads {
            scope.spawn(|| {
                loop {
                    let k = next.fetch_add(1, Ordering::Relaxed);
                    let (Some(set), Some(slot)) = (sets.get(k), done.get(k)) else {
                        return;
                    };
                    if k > stop.load(Ordering::Relaxed) {
                        return;
                    }
                    let outcome = one(k, set);
                    if outcome.is_err() {
                        stop.fetch_min(k, Ordering::Relaxed);
                    }
                    if let Ok(mut slot) = slot.lock() {
                        *slot = Some(outcome);
                    }
                }
            });
        }
    });
    done.into_iter()
        .filter_map(|slot| slot.into_inner().ok().flatten())
        .collect()
}

fn summaries(circuit: &Circuit, cases: &[Fired]) -> Vec<ClaimSummary> {
    let claims = circuit.draft().claims.iter().enumerate();
    claims
        .map(|(k, claim)| summary(&claim.name.text, k, cases))
        .collect()
}

fn summary(name: &str, k: usize, cases: &[Fired]) -> ClaimSummary {
    let all: Vec<_> = cases.iter().map(|c| c.claims.get(k)).collect();
    let of = |verdict: Verdict| {
        let with = all
            .iter()
            .enumerate()
            .filter_map(|(i, c)| c.filter(|c| c.verdict == verdict).map(|c| (i, c)));
        let margin = |m: Option<f64>| m.unwrap_or(f64::NEG_INFINITY);
        with.min_by(|a, b| margin(a.1.margin).total_cmp(&margin(b.1.margin)))
            .map(|(i, _)| i)
    };
    for verdict in [Verdict::Fails, Verdict::Undecided, Verdict::Holds] {
        if let Some(worst) = of(verdict) {
            return ClaimSummary {
                name: name.to_owned(),
                verdict,
                worst: Some(worst),
            };
        }
    }
    ClaimSummary {
        name: name.to_owned(),
        verdict: Verdict::Undecided,
        worst: None,
    }
}

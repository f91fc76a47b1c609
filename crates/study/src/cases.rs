//! Judges every case of a circuit.
//!
//! Cases do not depend on each other and are fired side by side on the machine's threads; the
//! outcome does not depend on how many there are.

use std::sync::Mutex;
use std::sync::atomic::{AtomicUsize, Ordering};

use pulsewright_circuit::{Circuit, LetValue, Positions};

use crate::adjust::settle;
use crate::error::StudyError;
use crate::fire::{Care, measure, run};
use crate::ladder::Turn;
use crate::options::Options;
use crate::outcome::{ClaimResult, ClaimSummary, Fired, Judged, Verdict, Worst};
use crate::worst::Search;

type CaseSet = Vec<(String, LetValue)>;
/// A case at nominal values, and each claim at its worst corner.
type OneCase = (Fired, Vec<Option<Worst>>);

/// The let-values of the one case that is asked for: `options.case`, counted from 1, else the
/// nominal one.
pub(crate) fn case_set(circuit: &Circuit, options: &Options<'_>) -> Result<CaseSet, StudyError> {
    let Some(n) = options.case else {
        return Ok(options.held.clone());
    };
    let sets = circuit.case_sets(&options.held)?;
    let of = sets.len();
    let found = n.checked_sub(1).and_then(|k| sets.into_iter().nth(k));
    found.ok_or(StudyError::NoCase { case: n, of })
}

/// Fires and judges every case, at nominal values and at each claim's worst corner over the
/// tolerances.
///
/// # Errors
///
/// As for [`fire`](crate::fire); of several cases the first one's.
pub fn judge(circuit: &Circuit, options: &Options<'_>) -> Result<Judged, StudyError> {
    let sets = circuit.case_sets(&options.held)?;
    let options = &Options {
        at: Positions::nominal(),
        ..options.clone()
    };
    let one = |set: &CaseSet, turn: Turn| {
        let settled = settle(circuit, set, options, turn)?;
        let nominal = run(circuit, &settled, options, turn)?;
        let worst = Search::new(circuit, &settled.set, options, turn).all(&nominal.claims)?;
        Ok((nominal, worst))
    };
    let judged: Vec<OneCase> = side_by_side(&sets, &one)?;
    let (cases, mut worst): (Vec<Fired>, Vec<_>) = judged.into_iter().unzip();
    if worst.iter().flatten().all(Option::is_none) {
        worst.clear();
    }
    let claims = summaries(circuit, &cases, &worst);
    Ok(Judged {
        cases,
        worst,
        claims,
    })
}

/// Fires every case at nominal values.
///
/// # Errors
///
/// As for [`fire`](crate::fire); of several cases the first one's.
pub fn fire_cases(circuit: &Circuit, options: &Options<'_>) -> Result<Vec<Fired>, StudyError> {
    let sets = circuit.case_sets(&options.held)?;
    let options = &Options {
        at: Positions::nominal(),
        ..options.clone()
    };
    side_by_side(&sets, &|set, turn| {
        run(
            circuit,
            &settle(circuit, set, options, turn)?,
            options,
            turn,
        )
    })
}

/// Does something in every case, on the machine's threads; the outcomes in order, or the first
/// error.
fn side_by_side<T: Send>(
    sets: &[CaseSet],
    does: &(dyn Fn(&CaseSet, Turn) -> Result<T, StudyError> + Sync),
) -> Result<Vec<T>, StudyError> {
    let of = sets.len();
    let one = |k: usize, set: &CaseSet| does(set, Turn { case: k + 1, of });
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
    let done: Vec<Mutex<Option<Result<T, StudyError>>>> =
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

/// The worst corner of a claim with the let-values that are held; none where the claim does not
/// apply there, or nothing varies.
///
/// # Errors
///
/// As for [`fire`](crate::fire); [`StudyError::NoClaim`].
pub fn corner(
    circuit: &Circuit,
    options: &Options<'_>,
    claim: &str,
) -> Result<Option<Worst>, StudyError> {
    let claims = &circuit.draft().claims;
    let Some(k) = claims.iter().position(|c| c.name.text == claim) else {
        return Err(StudyError::NoClaim {
            claim: claim.to_owned(),
        });
    };
    let turn = Turn::ONLY;
    let at = Positions::nominal();
    let set = settle(circuit, &options.held, options, turn)?.set;
    let nominal = measure(circuit, &set, &at, options, turn, Care::Whole)?;
    let mut search = Search::new(circuit, &set, options, turn);
    match nominal.claims.get(k) {
        Some(claim) => search.of(k, claim),
        None => Ok(None),
    }
}

fn summaries(
    circuit: &Circuit,
    cases: &[Fired],
    worst: &[Vec<Option<Worst>>],
) -> Vec<ClaimSummary> {
    let claims = circuit.draft().claims.iter().enumerate();
    let nominal = |k: usize| -> Vec<_> { cases.iter().map(|c| c.claims.get(k)).collect() };
    let cornered = |k: usize| -> Vec<_> {
        let at = |(nominal, n)| {
            let worst = worst.get(n).and_then(|all: &Vec<Option<Worst>>| all.get(k));
            worst
                .and_then(Option::as_ref)
                .map_or(nominal, |w| Some(&w.claim))
        };
        nominal(k).into_iter().zip(0..).map(at).collect()
    };
    claims
        .map(|(k, claim)| {
            let (verdict, worst) = over(&cornered(k));
            ClaimSummary {
                name: claim.name.text.clone(),
                verdict,
                nominal: over(&nominal(k)).0,
                worst,
            }
        })
        .collect()
}

/// The verdict over all cases, and the case of the least margin among those with it.
fn over(all: &[Option<&ClaimResult>]) -> (Verdict, Option<usize>) {
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
            return (verdict, Some(worst));
        }
    }
    (Verdict::Undecided, None)
}

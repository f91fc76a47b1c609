//! Studies over spreads against closed forms, and that cuts and threads change nothing.
#![allow(clippy::unwrap_used, clippy::panic, reason = "a test may end by panic")]

use pulsewright_circuit::Circuit;
use pulsewright_study::spread::{Draws, MergeError, Spread, Tally, draw, merge};
use pulsewright_study::{Options, StudyError, Verdict, spread};

fn circuit(text: &str) -> Circuit {
    pulsewright_netlist::read(text.as_bytes(), "netlist")
        .unwrap()
        .circuit
}

fn draws(shots: u64) -> Draws {
    Draws {
        shots,
        seed: 1,
        slice: [1, 1],
        threads: Some(2),
    }
}

fn tally(text: &str, draws: Draws) -> Tally {
    spread(&circuit(text), &Options::default(), draws).unwrap()
}

/// The position of the value at an index in each draw.
fn positions(text: &str, shots: u64, index: usize) -> Vec<f64> {
    let circuit = circuit(text);
    (1..=shots)
        .filter_map(|k| draw(&circuit, 1, k).as_slice()[index])
        .collect()
}

const SUPPLY: &str = "
    voltage feed from top to ground = 10 V, tolerance 10 %
    resistor load from top to ground = 5 ohm, tolerance 1 %
    span 1 ms
    claim low: highest voltage across load is at most 10.5 V
    claim mostly: highest voltage across load is at most 10.5 V, in at least 60 % of shots
    claim nearly: highest voltage across load is at most 10.5 V, in at least 90 % of shots
    claim about: highest voltage across load is at most 10.5 V, in at least 75 % of shots
";

/// 10.5 V is at three quarters of the way from 9 V to 11 V.
#[test]
fn the_yield_of_a_linear_claim_is_exact() {
    let shots = 400;
    let met = positions(SUPPLY, shots, 0)
        .iter()
        .filter(|p| **p <= 0.5)
        .count() as u64;
    let spread = Spread::from(tally(SUPPLY, draws(shots)));
    let case = &spread.cases[0];
    let low = &case.claims[0];
    assert_eq!((low.counts.holds, low.counts.of()), (met, shots));
    assert!((low.share.unwrap() - 0.75).abs() < 4.0 * (0.75 * 0.25 / 400.0_f64).sqrt());
    assert!(low.low.unwrap() < 0.75 && low.high.unwrap() > 0.75);
    let verdicts: Vec<Verdict> = case.claims.iter().map(|c| c.verdict).collect();
    assert_eq!(
        verdicts,
        [
            Verdict::Fails,
            Verdict::Holds,
            Verdict::Fails,
            Verdict::Undecided
        ]
    );
    let voltage = &case.readings[0];
    assert!(voltage.matters[0].1 > 0.999_999 && voltage.matters[1].1 < 0.02);
    let median = voltage.quantiles.iter().find(|(q, _)| *q == 0.5).unwrap().1;
    assert!((median - 10.0).abs() < 0.2, "{median}");
}

#[test]
fn the_extreme_draws_are_the_extreme_positions() {
    let all = positions(SUPPLY, 60, 0);
    let reading = tally(SUPPLY, draws(60)).cases[0].readings[0].clone();
    let least = 1 + (0..60).min_by(|a, b| all[*a].total_cmp(&all[*b])).unwrap() as u64;
    let most = 1 + (0..60).max_by(|a, b| all[*a].total_cmp(&all[*b])).unwrap() as u64;
    assert_eq!(
        (reading.least.unwrap().draw, reading.most.unwrap().draw),
        (least, most)
    );
}

const TRUNCATED: &str = "
    let bank_v = 1 kV, tolerance 10 %
    capacitor bank from top to ground = 100 uF, charged to bank_v
    switch    fire from top to pad    : open, closes at 0 s, opens at 5 ms
    resistor  chest from pad to ground = 50 ohm
    span 6 ms
    claim dose: energy into chest is at least 1 J
";

/// E = C V² / 2 (1 - exp(-2 T / (R C))) with V = V0 (1 + a p), p even in -1 to 1:
/// var E = E0² (4 a² / 3 + 4 a⁴ / 45).
#[test]
fn the_variance_of_a_truncated_exponentials_energy() {
    let (shots, a) = (300, 0.1_f64);
    let nominal = 0.5 * 100e-6 * 1e6 * (1.0 - (-2.0_f64).exp());
    let spread = Spread::from(tally(TRUNCATED, draws(shots)));
    let dose = &spread.cases[0].readings[0];
    assert!((dose.nominal.unwrap() - nominal).abs() < 1e-6 * nominal);
    let energies: Vec<f64> = positions(TRUNCATED, shots, 0)
        .iter()
        .map(|p| nominal * (1.0 + a * p).powi(2))
        .collect();
    let n = energies.len() as f64;
    let mean = energies.iter().sum::<f64>() / n;
    let variance = energies.iter().map(|e| (e - mean).powi(2)).sum::<f64>() / (n - 1.0);
    assert!((dose.mean.unwrap() - mean).abs() < 1e-5 * nominal);
    assert!((dose.deviation.unwrap().powi(2) / variance - 1.0).abs() < 1e-4);
    let exact = nominal.powi(2) * (4.0 * a * a / 3.0 + 4.0 * a.powi(4) / 45.0);
    assert!((variance / exact - 1.0).abs() < 4.0 * (0.8 / n).sqrt());
    assert!(dose.bound.unwrap() < 1e-4 * nominal);
}

const CASES: &str = "
    let load = 50 ohm
    capacitor bank from top to ground = 100 uF, standard deviation 3 %, charged to 1 kV
    resistor  chest from top to ground = load, standard deviation 10 % lognormal
    resistor  bleed from top to ground = 1 kohm, tolerance -20 % to 50 %
    span 6 ms
    cases load = 25 ohm, 50 ohm
    reading left = final voltage across bank
    claim dose: energy into chest is at least 40 J
";

#[test]
fn threads_and_slices_change_nothing() {
    let whole = |threads| {
        tally(
            CASES,
            Draws {
                threads: Some(threads),
                ..draws(23)
            },
        )
    };
    let uncut = whole(1);
    assert_eq!(uncut, whole(2));
    let slices = (1..=7)
        .rev()
        .map(|k| {
            tally(
                CASES,
                Draws {
                    slice: [k, 7],
                    ..draws(23)
                },
            )
        })
        .collect();
    let merged = merge(slices).unwrap();
    assert_eq!(merged, uncut);
    assert_eq!(Spread::from(merged), Spread::from(uncut));
}

#[test]
fn only_each_slice_of_one_study_once_makes_a_whole() {
    let slice = |k, shots| {
        tally(
            SUPPLY,
            Draws {
                slice: [k, 3],
                ..draws(shots)
            },
        )
    };
    assert_eq!(merge(Vec::new()), Err(MergeError::Nothing));
    assert_eq!(
        merge(vec![slice(1, 6), slice(3, 6)]),
        Err(MergeError::Missing { slice: 2, of: 3 })
    );
    assert_eq!(
        merge(vec![slice(1, 6), slice(2, 6), slice(2, 6), slice(3, 6)]),
        Err(MergeError::Twice { slice: 2, of: 3 })
    );
    assert!(matches!(
        merge(vec![slice(1, 6), slice(2, 7), slice(3, 6)]),
        Err(MergeError::Another {
            slice: 2,
            first: 1,
            ..
        })
    ));
}

/// A record may have been written by anyone: whatever it holds, it is no panic.
#[test]
fn an_absurd_tally_is_no_panic() {
    let mut absurd = tally(SUPPLY, draws(3));
    absurd.slice = [1, u64::MAX];
    assert!(merge(vec![absurd.clone()]).is_err());
    absurd.slice = [1, 1];
    for claim in &mut absurd.cases[0].claims {
        (claim.holds, claim.undecided) = (u64::MAX, u64::MAX);
    }
    let reading = &mut absurd.cases[0].readings[0];
    std::mem::swap(&mut reading.least, &mut reading.most);
    reading.of = u64::MAX;
    let other = absurd.clone();
    absurd.join(&other);
    assert_eq!(Spread::from(absurd).cases.len(), 1);
}

#[test]
fn a_draw_out_of_range_says_which() {
    let text = "
        let a = 10 ohm, tolerance 50 %
        resistor r from top to ground = a - 6 ohm
        voltage feed from top to ground = 1 V
        span 1 ms
    ";
    let error = spread(&circuit(text), &Options::default(), draws(50)).unwrap_err();
    let all = positions(text, 50, 0);
    let first = 1 + all.iter().position(|p| *p < -0.8).unwrap() as u64;
    assert!(
        matches!(error, StudyError::InDraw { draw, seed: 1, .. } if draw == first),
        "{error}"
    );
}

#[test]
fn a_hook_stops_a_study() {
    let options = Options {
        hook: Some(&|_| false),
        ..Options::default()
    };
    let stopped = spread(&circuit(CASES), &options, draws(5)).unwrap_err();
    assert!(matches!(stopped, StudyError::Cancelled { .. }));
}

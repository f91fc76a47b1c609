//! Worst corners against exhaustive search and closed forms.
#![allow(clippy::unwrap_used, clippy::panic, reason = "a test may end by panic")]

use pulsewright_circuit::{Circuit, Positions};
use pulsewright_study::{Found, Judged, Options, Verdict, Worst, corner, fire, judge};

fn circuit(text: &str) -> Circuit {
    pulsewright_netlist::read(text.as_bytes(), "netlist")
        .unwrap()
        .circuit
}

fn judged(text: &str) -> Judged {
    judge(&circuit(text), &Options::default()).unwrap()
}

fn margin_at(circuit: &Circuit, claim: usize, at: Vec<f64>) -> f64 {
    let options = Options {
        at: at.into_iter().collect(),
        ..Options::default()
    };
    let fired = fire(circuit, &options).unwrap();
    fired.claims[claim].margin.unwrap_or(f64::NEG_INFINITY)
}

/// Every corner, and a grid of inner points, is no worse than the one found.
fn check(text: &str, grid: &[f64]) {
    let circuit = circuit(text);
    let judged = judge(&circuit, &Options::default()).unwrap();
    let n = circuit.varying().len();
    let all = grid.len().pow(u32::try_from(n).unwrap());
    for (k, worst) in judged.worst[0].iter().enumerate() {
        let worst = worst.as_ref().unwrap();
        let least = (0..all)
            .map(|point| {
                let at = (0..n).map(|i| grid[point / grid.len().pow(i as u32) % grid.len()]);
                margin_at(&circuit, k, at.collect())
            })
            .fold(f64::INFINITY, f64::min);
        let (found, scale) = (worst.claim.margin.unwrap(), value(worst).abs());
        assert!(
            found <= least + 1e-6 * scale,
            "{}: {found} {least}",
            worst.claim.name
        );
    }
}

fn value(worst: &Worst) -> f64 {
    match worst.claim.answer.found {
        Found::Value { value, .. } => value,
        _ => panic!("a value"),
    }
}

#[test]
fn a_damped_sine_over_all_its_corners() {
    check(
        "
        capacitor bank  from top to ground = 36 uF, tolerance 5 %, charged to 4.4 kV
        switch    fire  from top to mid    : open, closes at 1 us
        inductor  choke from mid to pad    = 28 mH, tolerance 10 %, winding 9 ohm, tolerance 5 %
        resistor  chest from pad to ground = 25 ohm
        span 50 ms
        claim dose:  energy into chest is within 15 % or 3 J of 300 J
        claim crest: largest current through chest is at most 85 A
        claim slow:  time of largest current through chest is at least 1 ms
        ",
        &[-1.0, 1.0],
    );
}

#[test]
fn a_truncated_exponential_over_corners_and_inside() {
    check(
        "
        let load = 50 ohm, tolerance -20 % to 40 %
        capacitor bank from top to ground = 100 uF, standard deviation 2 %, charged to 1 kV
        switch    fire from top to pad    : open, closes at 0 s, opens at 5 ms, tolerance 0.5 ms
        resistor  chest from pad to ground = load
        span 6 ms
        claim dose: energy into chest is between 40 J and 50 J
        claim left: final voltage across bank is at most 400 V
        ",
        &[-1.0, 0.0, 1.0],
    );
}

/// Into its own resistance a source delivers most: V² / (4 R), inside the box at
/// R = 50 ohm, which is a third of the way from 60 ohm to 30 ohm.
const MATCHED: &str = "
    voltage  feed from top to ground = 10 V
    resistor own  from top to mid    = 50 ohm
    resistor load from mid to ground = 60 ohm, tolerance 50 %
    span 1 s
    claim cool: energy into load is at most 498 mJ
    claim mild: energy into load is at most 498 mJ, in at least 90 % of shots
    claim warm: energy into load is at least 0.4 J, in at least 90 % of shots
";

#[test]
fn a_worst_place_inside_the_box_is_found() {
    let judged = judged(MATCHED);
    let worst = judged.worst[0][0].as_ref().unwrap();
    assert!((value(worst) - 0.5).abs() < 1e-6, "{}", value(worst));
    assert!(
        (worst.corner[0].value - 50.0).abs() < 0.5,
        "{:?}",
        worst.corner
    );
    assert_eq!(
        (judged.claims[0].verdict, judged.claims[0].nominal),
        (Verdict::Fails, Verdict::Holds)
    );
}

#[test]
fn a_corner_decides_on_a_share_only_where_all_holds() {
    let judged = judged(MATCHED);
    assert_eq!(judged.claims[1].verdict, Verdict::Undecided);
    assert_eq!(judged.claims[2].verdict, Verdict::Holds);
    let reason = judged.worst[0][1].as_ref().unwrap().claim.reason.clone();
    assert!(reason.unwrap().contains("which `spread` judges"));
}

/// A divider of six above and six below: least where all above are at their upper end and all
/// below at their lower.
#[test]
fn twelve_tolerances() {
    let mut text = String::from("voltage feed from n[0] to ground = 12 V\nspan 1 ms\n");
    for k in 0..12 {
        let to = if k == 11 {
            "ground".into()
        } else {
            format!("n[{}]", k + 1)
        };
        text.push_str(&format!(
            "resistor r[{k}] from n[{k}] to {to} = 1 kohm, tolerance {} %\n",
            k + 1
        ));
    }
    text.push_str("claim half: highest voltage at n[6] is within 0.1 V of 6 V\n");
    let judged = judged(&text);
    let worst = judged.worst[0][0].as_ref().unwrap();
    let (above, below): (f64, f64) = (6.21, 5.43);
    let low = 12.0 * below / (above + below);
    let (above, below): (f64, f64) = (5.79, 6.57);
    let high = 12.0 * below / (above + below);
    let expected = if 6.0 - low > high - 6.0 { low } else { high };
    assert!(
        (value(worst) - expected).abs() < 1e-9,
        "{} {expected}",
        value(worst)
    );
    let ends = worst
        .positions
        .as_slice()
        .iter()
        .all(|p| p.unwrap().abs() == 1.0);
    assert!(ends, "{:?}", worst.positions);
}

#[test]
fn without_a_spread_there_is_no_corner() {
    let judged = judged(&MATCHED.replace(", tolerance 50 %", ""));
    assert!(judged.worst.is_empty());
    assert!(judged.claims.iter().all(|c| c.verdict == c.nominal));
}

#[test]
fn one_corner_is_that_of_all_and_fires_again() {
    let circuit = circuit(MATCHED);
    let one = corner(&circuit, &Options::default(), "cool")
        .unwrap()
        .unwrap();
    let all = judge(&circuit, &Options::default()).unwrap();
    assert_eq!(Some(&one), all.worst[0][0].as_ref());
    let options = Options {
        at: one.positions.clone(),
        ..Options::default()
    };
    let fired = fire(&circuit, &options).unwrap();
    assert_eq!(fired.claims[0].verdict, Verdict::Fails);
    assert_eq!(fired.stands, one.corner);
    assert!(corner(&circuit, &Options::default(), "cold").is_err());
    let nominal = fire(
        &circuit,
        &Options {
            at: Positions::nominal(),
            ..Options::default()
        },
    );
    assert!(nominal.unwrap().stands.is_empty());
}

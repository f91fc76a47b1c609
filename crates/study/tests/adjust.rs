//! Adjusted let-values against closed forms.

#![allow(clippy::unwrap_used, clippy::panic, reason = "helpers of tests")]

use pulsewright_circuit::{Circuit, Dimension, LetValue};
use pulsewright_study::outcome::Set;
use pulsewright_study::spread::Draws;
use pulsewright_study::{
    Fired, Found, Options, StudyError, corner, fire, fire_cases, judge, methods, modes, spread,
};

/// 32 uF through 10 ohm into a load: after 30 ms, some 15 time constants, all is spent but for
/// a share that the closed form knows.
const STAGE: &str = "\
let load = 50 ohm
let rated_j = 150 J
let bank_v = 3 kV
capacitor bank  from top to ground = 32 uF, charged to bank_v
switch    fire  from top to mid    : open, closes at 0 s
resistor  lead  from mid to pad    = 10 ohm
resistor  chest from pad to ground = load
reading dose = energy into chest
span 30 ms
";
const ADJUST: &str = "adjust bank_v from 1 kV to 6 kV so that energy into chest is rated_j\n";

fn circuit(text: &str) -> Circuit {
    pulsewright_netlist::read(text.as_bytes(), "test")
        .unwrap_or_else(|m| panic!("{m}"))
        .circuit
}

fn staged(more: &str) -> Circuit {
    circuit(&format!("{STAGE}{more}"))
}

/// The charge for an energy into a load behind 10 ohm.
fn closed_form(joules: f64, load: f64) -> f64 {
    let (c, whole) = (32e-6, load + 10.0);
    let spent = -(-2.0 * 30e-3 / (whole * c)).exp_m1();
    (2.0 * joules * whole / (load * c * spent)).sqrt()
}

fn near(fired: &Fired, value: f64, error: f64) {
    let [found] = fired.adjusted.as_slice() else {
        panic!("{:?}", fired.adjusted)
    };
    let off = (found.value - value).abs();
    assert!(off <= error * value, "{found:?} for {value}");
    assert!(off <= found.bound, "{found:?} for {value}, off {off}");
    assert_eq!((found.name.as_str(), found.unit.as_str()), ("bank_v", "V"));
}

fn dose(fired: &Fired) -> f64 {
    match fired.readings[0].answer.found {
        Found::Value { value, .. } => value,
        ref other => panic!("{other:?}"),
    }
}

#[test]
fn the_charge_for_a_rated_energy_has_its_closed_form() {
    let cases = "cases load = 25 ohm, 50 ohm, 175 ohm\n";
    for (method, error) in [
        ("integrate by exact propagation\n", 1e-12),
        ("error at most 0.001 ppm\n", 1e-9),
    ] {
        let circuit = staged(&format!("{ADJUST}{cases}{method}"));
        let fired = fire_cases(&circuit, &Options::default()).unwrap();
        for (case, load) in fired.iter().zip([25.0, 50.0, 175.0]) {
            near(case, closed_form(150.0, load), error);
            assert!((dose(case) - 150.0).abs() < 10.0 * error * 150.0);
            assert_eq!(case.set.len(), 1, "{:?}", case.set);
        }
    }
}

#[test]
fn what_is_to_be_reached_may_be_a_case() {
    let circuit = staged(&format!("{ADJUST}cases rated_j = 100 J, 200 J\n"));
    let judged = judge(&circuit, &Options::default()).unwrap();
    for (case, joules) in judged.cases.iter().zip([100.0, 200.0]) {
        near(case, closed_form(joules, 50.0), 1e-6);
        assert!(case.remarks.iter().all(|r| r.code != "R0808"));
    }
}

#[test]
fn it_is_held_at_worst_corners_and_in_draws() {
    let text = format!("{STAGE}{ADJUST}claim enough: dose is at least 140 J\n").replace(
        "resistor  chest from pad to ground = load",
        "resistor chest from pad to ground = load, tolerance 10 %",
    );
    let circuit = circuit(&text);
    let options = Options::default();
    let judged = judge(&circuit, &options).unwrap();
    let worst = judged.worst[0][0].clone().unwrap();
    let Found::Value { value, .. } = worst.claim.answer.found else {
        panic!()
    };
    let v = closed_form(150.0, 50.0);
    let truth = 0.5 * 32e-6 * v * v * 45.0 / 55.0;
    assert!((value / truth - 1.0).abs() < 1e-5, "{value} for {truth}");
    let cornered = corner(&circuit, &options, "enough").unwrap().unwrap();
    assert_eq!(cornered.claim.answer, worst.claim.answer);
    let draws = Draws {
        shots: 20,
        seed: 1,
        slice: [1, 1],
        threads: None,
    };
    let tally = spread(&circuit, &options, draws).unwrap();
    assert_eq!(tally.cases[0].set, Set::new());
}

#[test]
fn no_root_says_what_is_reached() {
    let circuit = staged(&format!("{ADJUST}cases rated_j = 100 J, 600 J\n"));
    let Err(error) = judge(&circuit, &Options::default()) else {
        panic!()
    };
    assert!(matches!(error, StudyError::NotAdjusted { .. }));
    assert_eq!(
        error.to_string(),
        "`bank_v` cannot be adjusted with rated_j = 600 J: from 1 kV to 6 kV energy into chest is found from 13.3333 J \
         to 480 J, and nowhere is it 600 J",
    );
}

#[test]
fn of_two_roots_the_lowest_is_taken_with_a_remark() {
    // A matched load of 10 ohm takes the most power; any less it takes at two values.
    let more = "adjust load from 1 ohm to 90 ohm so that highest power into chest is 150 kW\n";
    let circuit = staged(more);
    let fired = fire(&circuit, &Options::default()).unwrap();
    // V² r / (r + 10)² = P, so r² + (20 - V²/P) r + 100 = 0.
    let b = 20.0 - 3e3 * 3e3 / 150e3;
    let low = 0.5 * (-b - (b * b - 400.0_f64).sqrt());
    let found = &fired.adjusted[0];
    assert!(
        (found.value - low).abs() <= found.bound.max(1e-6 * low),
        "{found:?} {low}"
    );
    let remark = fired.remarks.iter().find(|r| r.code == "R0808").unwrap();
    assert_eq!(
        remark.text,
        "highest power into chest reaches 150 kW in 2 places between 1 ohm and 90 ohm; `load` is the lowest, 2.67949 \
         ohm"
    );
}

#[test]
fn a_jump_past_the_value_is_no_root() {
    let circuit = staged(
        "adjust bank_v from 1 kV to 6 kV so that energy into chest * step(highest voltage across chest - 3 kV) + 0 J is \
         60 J\n",
    );
    let Err(error) = fire(&circuit, &Options::default()) else {
        panic!()
    };
    assert!(error.to_string().contains(" jumps past 60 J"), "{error}");
}

#[test]
fn a_reading_that_never_exists_says_so() {
    let circuit = staged(
        "adjust bank_v from 1 kV to 6 kV so that time voltage across chest first rises through 9 kV is 1 ms\n",
    );
    let Err(error) = fire(&circuit, &Options::default()) else {
        panic!()
    };
    assert!(error.to_string().contains(" has no number ("), "{error}");
}

#[test]
fn a_held_value_is_not_adjusted() {
    let circuit = staged(ADJUST);
    let value = LetValue::Number {
        value: 2e3,
        dimension: Dimension::VOLT,
    };
    let held = Options {
        held: vec![("bank_v".to_owned(), value)],
        ..Options::default()
    };
    assert!(matches!(
        fire(&circuit, &held),
        Err(StudyError::Faults(faults)) if faults[0].code == "P0563"
    ));
}

#[test]
fn modes_and_methods_are_those_of_the_adjusted_circuit() {
    let circuit = staged(ADJUST);
    let options = Options::default();
    assert_eq!(modes(&circuit, &options).unwrap().set[0].0, "bank_v");
    let rungs = pulsewright_study::Rungs::default();
    assert_eq!(
        methods(&circuit, &options, &rungs).unwrap().set[0].0,
        "bank_v"
    );
}

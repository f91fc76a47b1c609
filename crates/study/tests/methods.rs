//! The integrators compared, on circuits with closed forms.

#![allow(clippy::unwrap_used, clippy::panic, reason = "helpers of tests")]

use pulsewright_circuit::Circuit;
use pulsewright_study::{Compared, Found, Methods, Options, Rungs, StudyError, methods};

/// A bank of 36 uF at 4.4 kV through 28 mH, 9 ohm and 50 ohm: overdamped.
const STAGE: &str = "\
capacitor bank  from top to ground = 36 uF, charged to 4.4 kV
switch    fire  from top to mid    : open, closes at 1 us
inductor  choke from mid to pad    = 28 mH, winding 9 ohm
resistor  chest from pad to ground = 50 ohm
span 20 ms
reading crest = largest current through chest
reading front = time of largest current through chest
claim dose: energy into chest is at least 1 J
claim again: crest is at most 1 kA
";

fn circuit(text: &str) -> Circuit {
    pulsewright_netlist::read(text.as_bytes(), "test")
        .unwrap_or_else(|m| panic!("{m}"))
        .circuit
}

fn compared(text: &str, rungs: &Rungs<'_>) -> Methods {
    methods(&circuit(text), &Options::default(), rungs).unwrap_or_else(|e| panic!("{e}"))
}

fn reading<'m>(methods: &'m Methods, name: &str) -> &'m Compared {
    methods.readings.iter().find(|r| r.name == name).unwrap()
}

fn order(methods: &Methods, name: &str, method: usize) -> f64 {
    reading(methods, name).methods[method].order.unwrap()
}

#[test]
fn orders_are_one_and_two() {
    let found = compared(STAGE, &Rungs::default());
    for name in ["crest", "front"] {
        for (method, want) in [(0, 1.0), (1, 2.0)] {
            let got = order(&found, name, method);
            assert!((got - want).abs() < 0.1, "{name}: order {got}");
        }
    }
    assert!((order(&found, "dose", 0) - 1.0).abs() < 0.1);
}

/// The trapezoidal rule keeps the balance of every step, and a chain of resistances its shares: what
/// goes into one of them has no error in the step, so no order is taken from what is rounding.
#[test]
fn an_error_that_is_rounding_has_no_order() {
    let found = compared(STAGE, &Rungs::default());
    let trapezoidal = &reading(&found, "dose").methods[1];
    assert_eq!(trapezoidal.order, None);
    assert!(trapezoidal.runs.iter().all(|r| !r.resolved));
}

/// A bank into a resistor, 2 us: the two coarsest runs begin with damped steps, the others have no
/// error in the energy at all.
#[test]
fn two_errors_of_many_give_no_order() {
    let text = "\
capacitor bank from top to ground = 2 uF, charged to 1 V
resistor chest from top to ground = 1 ohm
span 1 ms
reading all = energy into chest
";
    let found = compared(text, &Rungs::default());
    let trapezoidal = &reading(&found, "all").methods[1];
    let resolved: Vec<bool> = trapezoidal.runs.iter().map(|r| r.resolved).collect();
    assert_eq!(resolved.iter().filter(|r| **r).count(), 2, "{resolved:?}");
    assert_eq!(trapezoidal.order, None);
}

/// A capacitor into a resistor: one step of h multiplies the voltage by 1 / (1 + h/RC) or by
/// (1 - h/2RC) / (1 + h/2RC), so that the error after n steps is known to the last digits.
#[test]
fn errors_are_those_of_the_step_formulas() {
    let text = "\
capacitor bank from top to ground = 32 uF, charged to 1 kV
resistor chest from top to ground = 50 ohm
span 1.6 ms
reading left = final voltage across bank
";
    let rungs = Rungs {
        largest: Some(0.4e-3),
        halvings: Some(4),
        clock: None,
    };
    let found = compared(text, &rungs);
    let left = reading(&found, "left");
    let exact = 1e3 * (-1.0_f64).exp();
    for k in 0..5 {
        let n = 4 * 2_i32.pow(k);
        let h = 1.0 / f64::from(n);
        let factors = [1.0 / (1.0 + h), (1.0 - 0.5 * h) / (1.0 + 0.5 * h)];
        for (method, factor) in left.methods.iter().zip(factors) {
            let want = 1e3 * factor.powi(n) - exact;
            let got = method.runs[k as usize].error.unwrap();
            // the bound that the reference may have: 1e-10 of its scale
            assert!((got - want).abs() < 1e-7, "{got} V for {want} V, {n} steps");
        }
        assert_eq!(
            found.work[0].runs[k as usize].steps,
            u64::from(n.unsigned_abs())
        );
    }
}

#[test]
fn a_claim_on_a_named_reading_is_not_compared_twice() {
    let found = compared(STAGE, &Rungs::default());
    let names: Vec<&str> = found.readings.iter().map(|r| r.name.as_str()).collect();
    assert_eq!(names, ["crest", "front", "dose"]);
}

/// Counts, so that a change of cost shows: two topologies, of which the second has one step size,
/// one for the last step, and the matrix of the slopes.
#[test]
fn a_run_of_equal_steps_costs_few_factorisations() {
    let found = compared(STAGE, &Rungs::default());
    for work in &found.work {
        assert_eq!(work.runs.len(), 7);
        assert!(work.runs.iter().all(|r| r.factorisations <= 6), "{work:?}");
        assert!(work.runs.iter().all(|r| r.seconds.is_none()));
    }
}

#[test]
fn the_largest_step_is_a_round_share_of_the_span() {
    for (span, want) in [
        ("20 ms", 200e-6),
        ("50 ms", 500e-6),
        ("1 ms", 10e-6),
        ("30 us", 200e-9),
    ] {
        let text = STAGE.replace("span 20 ms", &format!("span {span}"));
        let found = compared(
            &text,
            &Rungs {
                halvings: Some(0),
                ..Rungs::default()
            },
        );
        assert_eq!(found.work[0].runs[0].step, want, "{span}");
    }
}

#[test]
fn a_stated_step_is_among_the_rungs() {
    let found = compared(&format!("{STAGE}time step 25 us\n"), &Rungs::default());
    assert!(
        found.work[1]
            .runs
            .iter()
            .any(|r| (r.step - 25e-6).abs() < 1e-15)
    );
}

#[test]
fn a_reading_that_does_not_exist_says_why() {
    let text = format!("{STAGE}reading late = time voltage across bank first rises through 9 kV\n");
    let found = compared(&text, &Rungs::default());
    let late = reading(&found, "late");
    assert!(matches!(&late.reference.found, Found::Absent(why) if !why.is_empty()));
    assert!(late.methods.iter().all(|m| m.order.is_none()));
}

#[test]
fn steps_beyond_the_limit_end_a_ladder_and_say_so() {
    let text = format!("{STAGE}limit steps 4000\n");
    let found = compared(&text, &Rungs::default());
    for work in &found.work {
        assert_eq!(work.runs.len(), 6, "{work:?}");
        assert!(
            work.ended
                .as_deref()
                .unwrap()
                .contains("limit of 4000 steps")
        );
    }
}

#[test]
fn a_hook_stops_the_comparison() {
    let stop = |p: pulsewright_study::Progress| p.time < 10e-3;
    let options = Options {
        hook: Some(&stop),
        ..Options::default()
    };
    let ended = methods(&circuit(STAGE), &options, &Rungs::default());
    assert!(matches!(ended, Err(StudyError::Cancelled { .. })));
}

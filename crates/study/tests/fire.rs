//! From a netlist to verdicts, against closed forms: every true value must lie inside its bound.

#![allow(clippy::unwrap_used, clippy::panic, reason = "helpers of tests")]

use pulsewright_circuit::{Circuit, Dimension, LetValue};
use pulsewright_study::outcome::{ClaimResult, SetValue};
use pulsewright_study::{Fired, Found, Options, Progress, StudyError, Verdict, fire, judge};

/// A damped-sine stage: 32 uF at 4.8 kV, 25 mH with 10 ohm, into 50 ohm.
const STAGE: &str = "\
let load = 50 ohm
capacitor bank  from top to ground = 32 uF, charged to 4.8 kV
switch    fire  from top to mid    : open, closes at 1 us
inductor  choke from mid to pad    = 25 mH, winding 10 ohm
resistor  chest from pad to ground = load
span 30 ms
";

fn circuit(text: &str) -> Circuit {
    pulsewright_netlist::read(text.as_bytes(), "test")
        .unwrap_or_else(|m| panic!("{m}"))
        .circuit
}

fn fired(text: &str) -> Fired {
    fire(&circuit(text), &Options::default()).unwrap_or_else(|e| panic!("{e}"))
}

fn stage(more: &str) -> Fired {
    fired(&format!("{STAGE}{more}"))
}

fn value(found: &Found) -> (f64, f64) {
    match found {
        Found::Value { value, bound } => (*value, *bound),
        other => panic!("{other:?}"),
    }
}

fn reading(f: &Fired, name: &str) -> (f64, f64) {
    value(
        &f.readings
            .iter()
            .find(|r| r.name == name)
            .unwrap()
            .answer
            .found,
    )
}

/// The true value must lie inside the bound, and the bound within `share` of it.
fn check(f: &Fired, name: &str, exact: f64, share: f64) {
    let (got, bound) = reading(f, name);
    let slack = 1e-13 * exact.abs();
    assert!(
        (got - exact).abs() <= bound + slack,
        "{name}: {got} ± {bound:e}, should be {exact}"
    );
    assert!(
        bound <= share * exact.abs(),
        "{name}: the bound {bound:e} is too wide for {exact}"
    );
}

fn claim<'f>(f: &'f Fired, name: &str) -> &'f ClaimResult {
    f.claims.iter().find(|c| c.name == name).unwrap()
}

/// Current of the stage a time `t` after the switch closes, A, and its damping and frequency.
fn current(t: f64) -> (f64, f64, f64) {
    let (c, l, r, v) = (32e-6_f64, 25e-3_f64, 60.0_f64, 4800.0_f64);
    let damping = r / (2.0 * l);
    let w = (1.0 / (l * c) - damping * damping).abs().sqrt();
    let i = if 1.0 / (l * c) > damping * damping {
        v / (w * l) * (-damping * t).exp() * (w * t).sin()
    } else {
        v / (w * l) * (-damping * t).exp() * (w * t).sinh()
    };
    (i, damping, w)
}

fn crest() -> (f64, f64) {
    let (_, damping, w) = current(0.0);
    let underdamped = 1.0 / (25e-3 * 32e-6) > damping * damping;
    let t = if underdamped {
        (w / damping).atan() / w
    } else {
        (w / damping).atanh() / w
    };
    (current(t).0, t)
}

#[test]
fn the_stage_agrees_with_its_closed_form() {
    let f = stage(
        "reading crest = largest current through chest\n\
         reading instant = time of largest current through chest\n\
         reading yield = energy into chest / energy held by bank just before 0 s\n\
         reading held  = energy held by bank just before 0 s\n",
    );
    let (i, t) = crest();
    check(&f, "crest", i, 1e-6);
    check(&f, "instant", t + 1e-6, 1e-6);
    check(&f, "held", 0.5 * 32e-6 * 4800.0 * 4800.0, 1e-9);
    check(&f, "yield", 50.0 / 60.0, 1e-6);
}

#[test]
fn backward_euler_is_bounded_honestly_too() {
    let f = stage(
        "integrate by backward Euler\nerror at most 0.1 %\nreading crest = largest current through chest\n",
    );
    check(&f, "crest", crest().0, 1e-3);
    assert_eq!(f.method, "backward Euler");
}

#[test]
fn a_fixed_step_reports_its_own_value_with_a_bound_that_covers_it() {
    let f = stage("time step 50 us\nreading crest = largest current through chest\n");
    let (got, bound) = reading(&f, "crest");
    let error = (got - crest().0).abs();
    assert!(error > 1e-5 * got, "{got}");
    assert!(error <= bound && bound < 1.5 * error, "{error:e} {bound:e}");
}

#[test]
fn the_joules_add_up() {
    let f = stage("");
    let b = &f.balance;
    assert!((b.stored_start - 368.64).abs() < 1e-9);
    let heat: f64 = b.dissipated.iter().map(|d| d.1).sum();
    assert!((b.stored_start - heat - b.stored_end - b.lost_at_events - b.residual).abs() < 1e-9);
    assert!(b.residual.abs() <= b.bound && b.bound < 1e-4);
    assert!(
        b.dissipated
            .iter()
            .map(|d| d.0.as_str())
            .eq(["choke", "chest"])
    );
}

#[test]
fn verdicts_with_margins() {
    let f = stage(
        "claim dose: energy into chest is within 15 % or 3 J of 300 J, answers \"REQ-12\"\n\
         claim low: largest current through chest is at most 50 A\n",
    );
    let dose = claim(&f, "dose");
    assert_eq!(
        (dose.verdict, dose.least, dose.most),
        (Verdict::Holds, Some(255.0), Some(345.0))
    );
    assert!((dose.margin.unwrap() - 37.8).abs() < 1e-3);
    assert_eq!(dose.answers, ["REQ-12"]);
    assert_eq!(
        (dose.relation.as_str(), dose.text.as_str()),
        ("is within 15 % or 3 J of 300 J", "energy into chest")
    );
    let low = claim(&f, "low");
    assert_eq!(low.verdict, Verdict::Fails);
    assert!(low.margin.unwrap() < -10.0);
}

#[test]
fn a_value_on_its_limit_is_undecided_until_it_is_allowed() {
    let claim_of = |more: &str| {
        stage(&format!(
            "claim top: largest voltage across bank is at most 4.8 kV{more}\n"
        ))
    };
    let open = claim_of("");
    let top = claim(&open, "top");
    assert_eq!(top.verdict, Verdict::Undecided);
    assert!(
        top.reason.as_ref().unwrap().contains("write `allowing "),
        "{:?}",
        top.reason
    );
    assert_eq!(
        claim(&claim_of(", allowing 1 mV"), "top").verdict,
        Verdict::Holds
    );
}

#[test]
fn a_claim_near_its_limit_is_decided_by_refinement() {
    let exact = crest().0;
    let near = |x: f64| {
        let f = stage(&format!(
            "error at most 1 %\nclaim top: largest current through chest is at most {x:.12} A\n"
        ));
        claim(&f, "top").verdict
    };
    assert_eq!(near(exact * (1.0 + 1e-8)), Verdict::Holds);
    assert_eq!(near(exact * (1.0 - 1e-8)), Verdict::Fails);
}

#[test]
fn a_limit_may_be_a_reading() {
    let f = stage("claim most: energy into chest is at most energy held by bank just before 0 s\n");
    let most = claim(&f, "most");
    assert_eq!(most.verdict, Verdict::Holds);
    assert!((most.most.unwrap() - 368.64).abs() < 1e-6);
}

#[test]
fn a_claim_on_what_is_absent_fails_and_says_why() {
    let f = fired(
        "capacitor bank from a to ground = 1 mF, charged to 100 V\n\
         resistor chest from a to ground = 1 kohm\n\
         span 1 ms\n\
         claim brief: width of voltage across chest at 10 % is at most 15 ms\n",
    );
    let brief = claim(&f, "brief");
    assert_eq!(brief.verdict, Verdict::Fails);
    assert_eq!(
        brief.reason.as_deref(),
        Some("voltage across chest is still above 10 V at the end of the span")
    );
}

const FLOATS: &str = "\
capacitor bank from p to n = 40 uF, charged to 1200 V
switch hot  from p to pad    : open, closes at 1 ms
switch cold from n to ground : open, closes at 1 ms
resistor chest from pad to ground = 60 ohm
span 5 ms
";

#[test]
fn a_claim_on_a_floating_reading_is_an_error_that_says_what_to_write() {
    let text = format!("{FLOATS}claim top: highest voltage at p is at most 2 kV\n");
    let error = fire(&circuit(&text), &Options::default()).unwrap_err();
    assert!(
        matches!(&error, StudyError::Floating { claim, .. } if claim == "top"),
        "{error}"
    );
    assert!(
        error.to_string().contains("write `voltage from A to B`"),
        "{error}"
    );
}

#[test]
fn a_floating_reading_is_marked_and_stops_nothing() {
    let f = fired(&format!(
        "{FLOATS}reading p_top = highest voltage at p\nreading v = highest voltage from p to n\n"
    ));
    assert!(matches!(f.readings[0].answer.found, Found::Floating(_)));
    check(&f, "v", 1200.0, 1e-9);
}

#[test]
fn an_impulse_is_unbounded_and_its_loss_is_remarked() {
    let f = fired(
        "capacitor left  from a to ground = 10 uF, charged to 100 V\n\
         capacitor right from b to ground = 22 uF, charged to 0 V\n\
         switch bridge from a to b : open, closes at 1 ms\n\
         span 2 ms\n\
         reading surge = largest current through bridge\n\
         reading moved = charge through bridge\n\
         claim calm: largest current through bridge is at most 1 kA\n",
    );
    assert!(matches!(f.readings[0].answer.found, Found::Unbounded(_)));
    check(&f, "moved", 687.5e-6, 1e-9);
    assert_eq!(claim(&f, "calm").verdict, Verdict::Fails);
    assert!((f.balance.lost_at_events - 0.034375).abs() < 1e-12);
    let remark = f.remarks.iter().find(|r| r.code == "R0805").unwrap();
    assert!(
        remark.text.starts_with("`bridge` lost 34.375 mJ at 1 ms"),
        "{}",
        remark.text
    );
}

#[test]
fn an_instant_that_was_found_has_a_bound_and_a_stated_one_has_none() {
    let f = fired(
        "capacitor bank from top to ground = 150 uF, charged to 1800 V\n\
         switch gate from top to pad : open, closes at 1 ms, opens when voltage across bank falls below 630 V\n\
         resistor chest from pad to ground = 75 ohm\n\
         span 30 ms\n\
         reading lasted = opening of gate - closing of gate\n\
         reading sag = tilt of voltage across chest while gate is closed\n",
    );
    let exact = 150e-6 * 75.0 * (1800.0_f64 / 630.0).ln();
    check(&f, "lasted", exact, 1e-6);
    check(&f, "sag", 0.65, 1e-6);
    assert_eq!(f.changes, ["closes", "opens"]);
    assert_eq!((f.events[0].0.time, f.events[0].1), (1e-3, 0.0));
    let (opened, bound) = &f.events[1];
    assert!((opened.time - 1e-3 - exact).abs() <= *bound + 1e-17 && *bound < 1e-8);
}

#[test]
fn stress_has_values_bounds_and_instants() {
    let options = Options {
        stress: true,
        ..Options::default()
    };
    let f = fire(&circuit(STAGE), &options).unwrap();
    let chest = f.stress.iter().find(|s| s.part == "chest").unwrap();
    let (i, t) = crest();
    let current = chest.current.unwrap();
    assert!((current.value - i).abs() <= current.bound);
    assert!((current.time - t - 1e-6).abs() < 1e-7);
    let power = chest.power.unwrap();
    assert!((power.value - 50.0 * i * i).abs() <= power.bound + 1e-9);
    let (energy, bound) = chest.energy.unwrap();
    let (action, _) = chest.action.unwrap();
    assert!((energy - 50.0 * action).abs() < 1e-3 && bound < 1e-2);
}

#[test]
fn hazards_say_from_when_on_a_part_is_safe() {
    let decay = |span: &str| {
        fired(&format!(
            "capacitor bank from a to ground = 100 uF, charged to 600 V\n\
             resistor bleed from a to ground = 10 kohm\n\
             span {span}\n"
        ))
    };
    let exact = 10.0_f64.ln();
    let seen = decay("5 s");
    assert_eq!(seen.hazards.len(), 2);
    let bank = &seen.hazards[0];
    assert_eq!(
        (bank.part.as_str(), bank.voltage, bank.estimated),
        ("bank", 600.0, false)
    );
    assert!((bank.energy - 18.0).abs() < 1e-9);
    assert!((bank.at_most_60_v_from.unwrap() - exact).abs() < 1e-3);
    assert_eq!(seen.hazards[1].part, "the circuit");
    let later = &decay("1 s").hazards[0];
    assert!(later.estimated && (later.at_most_60_v_from.unwrap() - exact).abs() < 1e-3);
}

#[test]
fn a_bank_that_never_decays_is_never_safe() {
    let f = fired(
        "capacitor bank from a to ground = 100 uF, charged to 600 V\nresistor far from a to ground = open circuit\nspan 1 s\n",
    );
    assert_eq!(
        (f.hazards[0].at_most_60_v_from, f.hazards[0].estimated),
        (None, false)
    );
}

#[test]
fn channels_are_what_is_stated_else_what_is_read() {
    let f = stage("reading crest = largest current through chest\n");
    assert_eq!(f.channels.len(), 1);
    assert_eq!(
        (f.channels[0].text.as_str(), f.channels[0].unit.as_str()),
        ("current through chest", "A")
    );
    let channel = &f.channels[0];
    assert!(
        channel.times.len() == channel.values.len()
            && channel.times.windows(2).all(|w| w[0] <= w[1])
    );
    let stated = stage("channels voltage across bank, current through choke\n");
    assert_eq!(stated.channels.len(), 2);
}

#[test]
fn every_case_is_judged_and_the_worst_is_named() {
    let text = format!(
        "{STAGE}cases load = 25 ohm, 50 ohm, 175 ohm\n\
         claim dose: energy into chest is within 15 % of 300 J\n\
         claim low: energy into chest is at most 1 kJ, when load <= 50 ohm\n\
         claim idle: energy into chest is at most 1 kJ, when load > 1 kohm\n"
    );
    let j = judge(&circuit(&text), &Options::default()).unwrap();
    assert_eq!(j.cases.len(), 3);
    let loads: Vec<_> = j.cases.iter().map(|c| c.set[0].1.clone()).collect();
    let ohms = |value| SetValue::Number {
        value,
        unit: "ohm".into(),
    };
    assert_eq!(loads, [ohms(25.0), ohms(50.0), ohms(175.0)]);
    let verdict = |case: usize, name: &str| claim(&j.cases[case], name).verdict;
    assert_eq!(
        (verdict(0, "dose"), verdict(1, "dose"), verdict(2, "dose")),
        (Verdict::Holds, Verdict::Holds, Verdict::Fails)
    );
    assert_eq!(verdict(2, "low"), Verdict::DoesNotApply);
    assert!(claim(&j.cases[2], "low").answer.found != Found::Absent(String::new()));
    let summary = |k: usize| (j.claims[k].verdict, j.claims[k].worst);
    assert_eq!(summary(0), (Verdict::Fails, Some(2)));
    assert_eq!(summary(1).0, Verdict::Holds);
    assert_eq!(summary(2), (Verdict::Undecided, None));
}

#[test]
fn one_case_can_be_fired_by_its_number() {
    let text = format!(
        "{STAGE}cases load = 25 ohm, 50 ohm\nreading r = largest voltage across chest / largest current through chest\n"
    );
    let c = circuit(&text);
    let f = fire(
        &c,
        &Options {
            case: Some(1),
            ..Options::default()
        },
    )
    .unwrap();
    check(&f, "r", 25.0, 1e-6);
    let missing = fire(
        &c,
        &Options {
            case: Some(3),
            ..Options::default()
        },
    )
    .unwrap_err();
    assert_eq!(missing, StudyError::NoCase { case: 3, of: 2 });
}

#[test]
fn a_let_value_can_be_held() {
    let c = circuit(&format!(
        "{STAGE}reading r = largest voltage across chest / largest current through chest\n"
    ));
    let held = vec![(
        "load".to_owned(),
        LetValue::Number {
            value: 75.0,
            dimension: Dimension::OHM,
        },
    )];
    let f = fire(
        &c,
        &Options {
            held,
            ..Options::default()
        },
    )
    .unwrap();
    check(&f, "r", 75.0, 1e-6);
    let unknown = vec![("lod".to_owned(), LetValue::Open)];
    assert!(matches!(
        fire(
            &c,
            &Options {
                held: unknown,
                ..Options::default()
            }
        ),
        Err(StudyError::Faults(_))
    ));
}

#[test]
fn the_hook_stops_the_run() {
    let stop = |p: Progress| p.halvings < 2;
    let options = Options {
        hook: Some(&stop),
        ..Options::default()
    };
    assert!(matches!(
        fire(&circuit(STAGE), &options),
        Err(StudyError::Cancelled { .. })
    ));
}

#[test]
fn a_limit_of_steps_is_an_error_that_names_it() {
    let error = fire(
        &circuit(&format!("{STAGE}limit steps 50\n")),
        &Options::default(),
    )
    .unwrap_err();
    assert!(error.to_string().contains("steps"), "{error}");
}

#[test]
fn the_same_input_gives_the_same_outcome() {
    let text = format!(
        "{STAGE}cases load = 25 ohm to 175 ohm, 4 values\nclaim dose: energy into chest is at least 1 J\n"
    );
    let one = judge(&circuit(&text), &Options::default()).unwrap();
    let two = judge(&circuit(&text), &Options::default()).unwrap();
    for (a, b) in one.cases.iter().zip(&two.cases) {
        assert_eq!(a.claims, b.claims);
        assert_eq!(a.balance, b.balance);
    }
}

/// Before both poles close the bank floats at 900 V: `cold` has no voltage that means anything.
#[test]
fn a_voltage_that_hangs_on_an_island_is_no_stress() {
    let text = "\
capacitor bank from p to n = 20 uF, charged to 900 V
switch hot  from p to pad    : open, closes at 1 ms
switch cold from n to ground : open, closes at 1 ms
resistor chest from pad to ground = 50 ohm
span 5 ms
";
    let options = Options {
        stress: true,
        ..Options::default()
    };
    let f = fire(&circuit(text), &options).unwrap();
    let voltage = |part: &str| {
        let stress = f.stress.iter().find(|s| s.part == part).unwrap();
        stress.voltage.unwrap().value
    };
    assert_eq!(voltage("cold"), 0.0);
    assert!((voltage("bank") - 900.0).abs() < 1e-9);
}

/// Every crest of an undamped ring is as high as the first, which is the one meant: i = V sqrt(C/L)
/// sin(t / sqrt(LC)), first highest after a quarter of a period.
#[test]
fn the_first_of_equal_crests_is_the_instant_on_any_mesh() {
    let f = fired(
        "capacitor c from a to ground = 1 uF, charged to 100 V\n\
         inductor l from a to ground = 1 mH\n\
         span 20 ms\n\
         reading crest = time of largest current through l\n\
         reading trough = time of lowest current through l\n",
    );
    let quarter = std::f64::consts::FRAC_PI_2 * f64::sqrt(1e-9);
    check(&f, "crest", quarter, 1e-6);
    check(&f, "trough", 3.0 * quarter, 1e-6);
}

/// At 20 ms the ring of 0.2 ms is below 60 V, as it has been for a while in every period.
#[test]
fn a_ring_that_may_come_back_is_not_called_safe() {
    let f = fired(
        "capacitor c from a to ground = 1 uF, charged to 100 V\n\
         inductor l from a to ground = 1 mH\n\
         span 20 ms\n",
    );
    assert_eq!(f.hazards[0].at_most_60_v_from, None);
}

/// Instants at which a part's events are, s.
fn instants(f: &Fired, part: &str) -> Vec<f64> {
    let at = f.parts.iter().position(|p| p == part).unwrap();
    f.events
        .iter()
        .filter(|(e, _)| e.part == at)
        .map(|(e, _)| e.time)
        .collect()
}

fn check_instants(f: &Fired, part: &str, want: &[f64]) {
    let got = instants(f, part);
    assert_eq!(got.len(), want.len(), "{part}: {got:?} for {want:?}");
    for (a, b) in got.iter().zip(want) {
        assert!((a - b).abs() < 1e-9, "{part}: {got:?} for {want:?}");
    }
}

#[test]
fn a_diode_begins_to_conduct_where_nothing_has_flowed_before() {
    let f = fired(
        "voltage feed from a to ground = 100 V * sin(2 * pi * 50 Hz * t)\n\
         diode d from x to a\n\
         resistor r from x to ground = 10 ohm\n\
         span 25 ms\n\
         reading e = energy into r\n",
    );
    check_instants(&f, "d", &[10e-3, 20e-3]);
    check(&f, "e", 100.0 * 100.0 / 10.0 / 2.0 * 10e-3, 1e-6);
}

/// A triangle of 100 V into 10 uF and 30 uF: the pump's node swings between 75 V and 0 V, then
/// between the store's voltage and 0 V, 20 V a millisecond.
#[test]
fn a_voltage_doubler_turns_its_diodes_where_the_charge_says() {
    let f = fired(
        "voltage feed from p to ground = points(t; 0 s: 0 V; 5 ms: 100 V; 15 ms: -100 V; 25 ms: 100 V; 35 ms: -100 V)\n\
         capacitor c1 from p to a = 10 uF\n\
         diode d1 from ground to a\n\
         diode d2 from a to b\n\
         capacitor c2 from b to ground = 30 uF\n\
         span 28 ms\n",
    );
    check_instants(&f, "d1", &[6.25e-3, 15e-3]);
    check_instants(&f, "d2", &[0.0, 5e-3, 16.25e-3, 25e-3]);
}

/// 25 V in the pump's capacitor pass through the diode at once; the rising source then asks for
/// a current backwards, so that it blocks at the same instant.
#[test]
fn a_diode_blocks_again_at_the_instant_of_its_impulse() {
    let f = fired(
        "voltage feed from p to ground = points(t; 0 s: 0 V; 5 ms: 100 V; 15 ms: -100 V)\n\
         capacitor c1 from p to a = 10 uF, charged to 25 V\n\
         diode d1 from ground to a\n\
         span 12 ms\n",
    );
    check_instants(&f, "d1", &[0.0, 0.0, 10e-3]);
}

/// Nothing is stored here, so every stretch ends where the source says; charge 2 V / (ω R).
#[test]
fn a_diode_across_a_source_needs_no_more_steps_than_others() {
    let f = fired(
        "voltage feed from a to ground = 100 V * sin(2 * pi * 50 Hz * t)\n\
         diode d from ground to a : slope 10 mohm\n\
         span 30 ms\n\
         reading q = charge through d\n",
    );
    check_instants(&f, "d", &[10e-3, 20e-3]);
    check(&f, "q", 200.0 / (std::f64::consts::TAU * 50.0 * 0.01), 1e-6);
    assert!(f.shot.steps < 100_000, "{}", f.shot.steps);
}

/// Both carry the charging current until the crest, 5 ms, and stop together.
#[test]
fn diodes_in_parallel_turn_over_together() {
    let f = fired(
        "voltage feed from a to ground = 100 V * sin(2 * pi * 50 Hz * t)\n\
         capacitor c from a to x = 1 uF\n\
         diode d from x to ground\n\
         diode d2 from x to ground\n\
         span 30 ms\n",
    );
    check_instants(&f, "d", &[0.0, 5e-3]);
    check_instants(&f, "d2", &[0.0, 5e-3]);
}

/// Beside the charging current of 20 A the 1 mA of the third diode is nearly rounding; it goes on
/// until the source's zero while the first blocks where the charging current does.
#[test]
fn a_small_current_beside_a_large_one_keeps_its_diode_conducting() {
    let f = fired(
        "voltage feed from n0 to ground = 100 V * cos(2 * pi * 1000 Hz * t)\n\
         diode d0 from s to ground : slope 10 mohm\n\
         diode d1 from n0 to s\n\
         diode d3 from n0 to n1 : slope 10 mohm\n\
         capacitor c1 from s to ground = 33 uF\n\
         resistor r0 from n1 to ground = 100000 ohm\n\
         span 2.5 ms\n",
    );
    let tau = 33e-6 * 0.01;
    let w = std::f64::consts::TAU * 1000.0;
    // i = cos/R - ωC sin = 0 where tan(ωt) = 1/(ωRC).
    let off = (1.0 / (w * tau)).atan() / w;
    check_instants(
        &f,
        "d1",
        &[0.0, off, 0.75e-3, off + 1e-3, 1.75e-3, off + 2e-3],
    );
    check_instants(
        &f,
        "d3",
        &[0.0, 0.25e-3, 0.75e-3, 1.25e-3, 1.75e-3, 2.25e-3],
    );
}

/// At 0 s the source's 100 V go into three capacitors; through the diode nothing passes but
/// rounding, and then a current.
#[test]
fn a_diode_across_a_capacitor_at_an_impulse() {
    let f = fired(
        "voltage feed from n0 to ground = 100 V * cos(2 * pi * 100 Hz * t)\n\
         diode d0 from n1 to s\n\
         capacitor c0 from ground to n1 = 1 uF\n\
         capacitor c1 from n0 to n1 = 33 uF\n\
         capacitor c2 from s to n1 = 10 uF\n\
         resistor r1 from ground to s = 10 ohm\n\
         span 3 ms\n\
         reading v0 = voltage across r1 at 0 s\n",
    );
    // 33 uF against 1 uF; R (C0 + C1) = 340 us is the time constant of what follows.
    check(&f, "v0", -100.0 * 33.0 / 34.0, 1e-6);
    let (w, tau) = (std::f64::consts::TAU * 100.0, 10.0 * 34e-6);
    // v' = -v/τ - ω A sin(ωt), v(0) = A = 100 V 33/34: the diode blocks where v is 0.
    let of = |t: f64| {
        let k = w * tau / (1.0 + (w * tau).powi(2));
        let forced = |t: f64| -k * ((w * t).sin() - w * tau * (w * t).cos());
        forced(t) + (1.0 - forced(0.0)) * (-t / tau).exp()
    };
    let (mut low, mut high) = (0.0, 2e-3);
    for _ in 0..60 {
        let m = 0.5 * (low + high);
        if of(m) > 0.0 { low = m } else { high = m }
    }
    check_instants(&f, "d0", &[0.0, low]);
}

/// Where a node floats between blocking diodes, and 1 uF with 10 mohm are passed over in steps a
/// thousand times as long, no current rings and nothing chatters.
#[test]
fn a_node_between_blocking_diodes_asks_for_no_steps() {
    let f = fired(
        "voltage feed from a to ground = 100 V * sin(2 * pi * 50 Hz * t)\n\
         resistor rs from a to s = 5 ohm\n\
         diode d from n1 to s\n\
         diode d2 from ground to n1 : slope 10 mohm\n\
         diode d3 from a to s\n\
         capacitor c1 from ground to s = 1 uF\n\
         span 38 ms\n\
         reading low = lowest current through d\n\
         reading passed = charge through d\n",
    );
    assert!(f.shot.steps < 300_000, "{}", f.shot.steps);
    assert!(f.shot.events.len() < 12, "{:?}", f.shot.events);
    // 100 V / 5.01 ohm for a half wave and 8 ms of the next; the capacitor delays it by 5 us.
    let (passed, bound) = reading(&f, "passed");
    let w = std::f64::consts::TAU * 50.0;
    let near = 100.0 / 5.01 / w * (3.0 - (w * 8e-3).cos());
    assert!(
        (passed / near - 1.0).abs() < 1e-3 && bound < 1e-6,
        "{passed} ± {bound:e}"
    );
}

/// Coils in parallel at a node that nothing else touches carry nothing but rounding.
#[test]
fn a_current_that_is_rounding_asks_for_no_steps() {
    let f = fired(
        "voltage feed from a to ground = 100 V * sin(2 * pi * 50 Hz * t)\n\
         inductor l from a to x = 10 mH\n\
         inductor l1 from a to x = 1 mH\n\
         span 50 ms\n\
         reading most = largest current through l\n",
    );
    let (most, bound) = reading(&f, "most");
    assert!(most + bound < 1e-12, "{most} ± {bound:e}");
    assert!(f.shot.steps < 100_000, "{}", f.shot.steps);
}

/// A part whose ends meet does nothing, and is no mistake.
#[test]
fn a_capacitor_across_itself_is_left_alone() {
    let f = fired(
        "voltage feed from a to ground = 100 V\n\
         capacitor c from a to a = 1 uF, charged to 5 V\n\
         resistor r from a to ground = 10 ohm\n\
         span 1 ms\n\
         reading e = energy into r\n",
    );
    check(&f, "e", 1.0, 1e-6);
}

/// Source and switch lie in loops that nothing drives: 1e-17 A of rounding in the coil, which its
/// diode would stop within 1e-19 s, is no current.
#[test]
fn rounding_turns_no_diode() {
    let f = fired(
        "voltage feed from n0 to ground = 100 V * sin(2 * pi * 1000 Hz * t)\n\
         resistor rs from n0 to s = 5 ohm\n\
         diode d1 from n0 to n1 : slope 0.1 ohm\n\
         inductor l0 from n1 to n0 = 10 mH\n\
         switch sw from n1 to s : open, closes at 0.3 ms, opens at 1.6 ms\n\
         span 1.9 ms\n",
    );
    check_instants(&f, "d1", &[]);
    assert!(f.shot.steps < 100_000, "{}", f.shot.steps);
}

/// Two methods that round a current of nothing differently do not disagree.
#[test]
fn rounding_is_no_disagreement() {
    let f = fired(
        "voltage feed from n0 to ground = 80 V * sin(2 * pi * 50 Hz * t) + 20 V * step(t - 8 ms)\n\
         resistor rs from n0 to s = 50 ohm\n\
         diode d0 from s to ground : slope 10 mohm\n\
         diode d1 from n1 to s : threshold 0.7 V\n\
         diode d2 from n0 to s\n\
         diode d3 from s to n1\n\
         capacitor c0 from ground to s = 33 uF\n\
         capacitor c1 from n0 to ground = 33 uF\n\
         capacitor c2 from ground to n0 = 4.7 uF\n\
         span 50 ms\n\
         reading low = lowest current through d3\n",
    );
    let opinion = f.second_opinion.unwrap();
    assert_eq!(opinion.missing, None);
}

#[test]
fn a_claim_on_the_extreme_of_a_channel_is_a_gate_on_it() {
    let f = stage(
        "channels current through chest, voltage across bank\n\
         reading top = highest current through chest after 1 ms\n\
         claim most: largest current through chest is at most 90 A\n\
         claim least: top is at least 50 A\n\
         claim other: largest voltage across chest is at most 90 kV\n",
    );
    let gates: Vec<_> = f.channels[0]
        .gates
        .iter()
        .map(|g| (g.claim.as_str(), g.level, g.above, g.every))
        .collect();
    assert_eq!(
        gates,
        [
            ("most", 90.0, true, true),
            ("most", -90.0, false, true),
            ("least", 50.0, false, false),
        ]
    );
    assert!(f.channels[1].gates.is_empty());
    let crest = f.channels[0].crest.unwrap();
    assert_eq!(crest, f.channels[0].gates[0].extreme);
    assert_eq!(f.channels[0].gates[2].intervals, [(1e-3, f.span)]);
    assert_eq!(f.windows.len(), 1);
    assert_eq!(f.windows[0].name, "top");
}

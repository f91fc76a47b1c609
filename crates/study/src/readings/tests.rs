//! Every family of readings against closed forms, on shots made by hand.
//!
//! The circuit only gives names; the shot is whatever the form says: `chest` is 2 ohm, so its
//! current is half its voltage.

use std::f64::consts::{E, LN_2, PI};

use pulsewright_circuit::{Circuit, Probe};
use pulsewright_engine::{Event, Shot};

use super::*;
use crate::waveform::sample;

const PARTS: &str = "\
resistor chest from a to ground = 2 ohm
switch fire from a to b : open, closes at 0.25 s, opens at 0.75 s
resistor drain from b to ground = 1 ohm
span 1 s
";

fn circuit(reading: &str) -> Circuit {
    let text = format!("{PARTS}reading x = {reading}\n");
    pulsewright_netlist::read(text.as_bytes(), "test")
        .unwrap_or_else(|m| panic!("{m}"))
        .circuit
}

/// A voltage and its slope.
type Voltage<'f> = &'f dyn Fn(f64) -> (f64, f64);

/// Reads `reading` off a shot whose voltage across `chest` is `forms` between `edges`.
fn read(reading: &str, edges: &[f64], forms: &[Voltage<'_>], change: impl Fn(&mut Shot)) -> Sample {
    let circuit = circuit(reading);
    let lets = circuit.lets(&[]).unwrap();
    let setup = circuit.setup(&lets).unwrap();
    let case = Case {
        circuit: &circuit,
        setup: &setup,
        lets: &lets,
    };
    let expr = &circuit.find_reading("x").unwrap().value;
    let probes = needs(case, [expr]).probes;
    let rows: Vec<_> = forms
        .iter()
        .map(|form| {
            |t| {
                probes
                    .iter()
                    .map(|p| of_probe(*p, form(t)))
                    .collect::<Vec<_>>()
            }
        })
        .collect();
    let rows: Vec<sample::Form<'_>> = rows.iter().map(|row| row as sample::Form<'_>).collect();
    let mut shot = sample::pieces(&probes, edges, 200, &rows);
    for stretch in &mut shot.stretches {
        let closed = (0.25..0.75).contains(&stretch.times[0]);
        stretch.states = vec![0, u8::from(closed), 0];
    }
    let event = |time, state| Event {
        time,
        part: 1,
        state,
        charge: 0.0,
        flux: 0.0,
        loss: 0.0,
        found: false,
    };
    shot.events = vec![event(0.25, 1), event(0.75, 0)];
    change(&mut shot);
    Reader::new(case, &shot).value(expr)
}

fn of_probe(probe: Probe, (v, s): (f64, f64)) -> (f64, f64) {
    match probe {
        Probe::CurrentThrough(_) | Probe::BranchCurrent(..) => (0.5 * v, 0.5 * s),
        Probe::PowerInto(_) => (0.5 * v * v, v * s),
        _ => (v, s),
    }
}

fn check(reading: &str, form: Voltage<'_>, want: f64, tolerance: f64) {
    let got = read(
        reading,
        &[0.0, 0.25, 0.75, 1.0],
        &[form, form, form],
        |_| (),
    )
    .unwrap()
    .value;
    assert!(
        (got - want).abs() <= tolerance,
        "{reading}: {got}, should be {want}"
    );
}

fn check_ramp(reading: &str, want: f64, tolerance: f64) {
    let got = read(
        reading,
        &[0.0, 0.25, 0.75, 1.0],
        &[&|_| (0.0, 0.0), &ramp, &ramp],
        |_| (),
    )
    .unwrap()
    .value;
    assert!(
        (got - want).abs() <= tolerance,
        "{reading}: {got}, should be {want}"
    );
}

fn check_absent(reading: &str, form: Voltage<'_>, why: &str) {
    match read(
        reading,
        &[0.0, 0.25, 0.75, 1.0],
        &[form, form, form],
        |_| (),
    ) {
        Err(Lack::Absent(got)) => assert_eq!(got, why),
        other => panic!("{reading}: {other:?}"),
    }
}

/// A Gaussian of deviation 50 ms about 0.5 s.
fn gauss(t: f64) -> (f64, f64) {
    let x = (t - 0.5) / 0.05;
    let v = (-0.5 * x * x).exp();
    (v, -x / 0.05 * v)
}

fn decay(t: f64) -> (f64, f64) {
    (10.0 * (-5.0 * t).exp(), -50.0 * (-5.0 * t).exp())
}

/// Three periods of a sine.
fn wave(t: f64) -> (f64, f64) {
    let w = 6.0 * PI;
    (4.0 * (w * t).sin(), 4.0 * w * (w * t).cos())
}

/// 0 until 0.25 s, then a falling line from 8 V, which ends at -4 V.
fn ramp(t: f64) -> (f64, f64) {
    if t < 0.25 {
        (0.0, 0.0)
    } else {
        (8.0 - 16.0 * (t - 0.25), -16.0)
    }
}

#[test]
fn the_width_of_a_gaussian_at_half_its_crest() {
    check(
        "width of voltage across chest at 50 %",
        &gauss,
        0.1 * (2.0 * LN_2).sqrt(),
        1e-8,
    );
}

#[test]
fn the_rise_of_a_gaussian() {
    let x = |share: f64| 0.05 * (-2.0 * share.ln()).sqrt();
    check(
        "rise of voltage across chest from 10 % to 90 %",
        &gauss,
        x(0.1) - x(0.9),
        1e-8,
    );
    check(
        "fall of voltage across chest from 90 % to 10 %",
        &gauss,
        x(0.1) - x(0.9),
        1e-8,
    );
    check(
        "front time of voltage across chest from 10 % to 90 %",
        &gauss,
        (x(0.1) - x(0.9)) / 0.8,
        1e-8,
    );
    let origin = 0.5 - x(0.1) - 0.1 * (x(0.1) - x(0.9)) / 0.8;
    check(
        "virtual origin of voltage across chest from 10 % to 90 %",
        &gauss,
        origin,
        1e-8,
    );
    let half = 0.5 + x(0.5) - origin;
    check(
        "time to half value of voltage across chest with front from 10 % to 90 %",
        &gauss,
        half,
        1e-8,
    );
}

#[test]
fn a_pulse_that_is_negative_has_the_same_width() {
    let down = |t: f64| (-gauss(t).0, -gauss(t).1);
    check(
        "width of voltage across chest at 50 %",
        &down,
        0.1 * (2.0 * LN_2).sqrt(),
        1e-8,
    );
    check(
        "time voltage across chest first rises through 50 % of largest",
        &down,
        0.5 - 0.05 * (2.0 * LN_2).sqrt(),
        1e-8,
    );
}

#[test]
fn a_pulse_cut_off_by_the_span_has_no_width() {
    check_absent(
        "width of voltage across chest at 10 %",
        &|t| (1.0 + t, 1.0),
        "voltage across chest is still above 200 mV at the end of the span",
    );
}

#[test]
fn a_signal_that_is_nothing_has_no_crest() {
    check_absent(
        "width of voltage across chest at 10 %",
        &|_| (0.0, 0.0),
        "voltage across chest has no crest: it is 0 throughout",
    );
}

#[test]
fn energy_charge_and_action_of_a_decay() {
    check(
        "energy into chest",
        &decay,
        50.0 * (1.0 - (-10.0_f64).exp()) / 10.0,
        1e-4,
    );
    check(
        "energy out of chest",
        &decay,
        -50.0 * (1.0 - (-10.0_f64).exp()) / 10.0,
        1e-4,
    );
    check("charge through chest", &decay, 1.0 - (-5.0_f64).exp(), 1e-4);
    check(
        "action of chest",
        &decay,
        25.0 * (1.0 - (-10.0_f64).exp()) / 10.0,
        1e-8,
    );
    check(
        "heat in chest",
        &decay,
        50.0 * (1.0 - (-10.0_f64).exp()) / 10.0,
        1e-4,
    );
}

#[test]
fn gross_charge_counts_both_signs() {
    check("gross charge through chest", &wave, 4.0 / PI, 2e-4);
    check("charge through chest", &wave, 0.0, 1e-12);
}

#[test]
fn area_mean_and_rms_of_a_sine() {
    let window = "between 0 s and 0.25 s";
    check(
        &format!("area of voltage across chest {window}"),
        &wave,
        4.0 / (6.0 * PI),
        1e-7,
    );
    check(
        &format!("mean voltage across chest {window}"),
        &wave,
        16.0 / (6.0 * PI),
        1e-7,
    );
    check(
        "rms voltage across chest",
        &wave,
        4.0 / 2.0_f64.sqrt(),
        1e-7,
    );
}

#[test]
fn extremes_of_a_sine() {
    check("highest voltage across chest", &wave, 4.0, 1e-7);
    check("lowest voltage across chest", &wave, -4.0, 1e-7);
    check("largest voltage across chest after 0.5 s", &wave, 4.0, 1e-7);
    check("peak to peak voltage across chest", &wave, 8.0, 1e-7);
    check("steepest voltage across chest", &wave, 24.0 * PI, 1e-5);
    check("time of lowest voltage across chest", &wave, 0.25, 1e-8);
}

#[test]
fn the_period_of_a_sine() {
    check("period of voltage across chest", &wave, 1.0 / 3.0, 1e-9);
    check_absent(
        "period of voltage across chest",
        &decay,
        "voltage across chest does not cross zero twice in one direction",
    );
}

#[test]
fn time_above_and_below_a_level() {
    check(
        "time voltage across chest is above 2 V",
        &wave,
        1.0 / 3.0,
        1e-8,
    );
    check(
        "time voltage across chest is below 2 V",
        &wave,
        2.0 / 3.0,
        1e-8,
    );
    // The troughs come first after 0.5 s and are as large as the crest: above means below -2 V.
    check(
        "time voltage across chest is above 50 % of largest after 0.5 s",
        &wave,
        2.0 / 9.0,
        1e-8,
    );
}

#[test]
fn crossings_are_told_apart() {
    let phrase = |which: &str| format!("time voltage across chest {which} through 2 V");
    check(&phrase("first rises"), &wave, 1.0 / 36.0, 1e-8);
    check(&phrase("first falls"), &wave, 5.0 / 36.0, 1e-8);
    check(&phrase("last rises"), &wave, 2.0 / 3.0 + 1.0 / 36.0, 1e-8);
    check(&phrase("last falls"), &wave, 2.0 / 3.0 + 5.0 / 36.0, 1e-8);
}

#[test]
fn what_is_never_reached_is_absent() {
    check_absent(
        "time voltage across chest first rises through 5 V",
        &|t| (4.0 * t, 4.0),
        "voltage across chest never rises through 5 V; its highest value is 4 V",
    );
    check_absent(
        "time voltage across chest first falls through 1 V",
        &|t| (4.0 * t, 4.0),
        "voltage across chest is still above 1 V at the end of the span",
    );
}

#[test]
fn a_jump_across_a_level_is_a_crossing() {
    check_ramp(
        "time voltage across chest first rises through 5 V",
        0.25,
        1e-15,
    );
    check_ramp("rise of voltage across chest from 10 % to 90 %", 0.0, 1e-15);
}

#[test]
fn a_jump_makes_the_slope_unbounded_unless_it_is_left_out() {
    let forms: [Voltage<'_>; 3] = [&|_| (0.0, 0.0), &ramp, &ramp];
    let edges = [0.0, 0.25, 0.75, 1.0];
    let jumps = read("steepest voltage across chest", &edges, &forms, |_| ());
    assert_eq!(
        jumps,
        Err(Lack::Unbounded(
            "voltage across chest jumps at 250 ms".into()
        ))
    );
    let between = read(
        "steepest voltage across chest between jumps",
        &edges,
        &forms,
        |_| (),
    );
    assert_eq!(between.unwrap().value, 16.0);
}

#[test]
fn tilt_is_taken_just_inside_the_window() {
    check_ramp(
        "tilt of voltage across chest between 0.25 s and 0.5 s",
        0.5,
        1e-12,
    );
    check_absent(
        "tilt of voltage across chest",
        &|t| (t, 1.0),
        "voltage across chest is 0 at the start of its window",
    );
}

#[test]
fn undershoot_and_overshoot_are_fractions() {
    check_ramp("undershoot of voltage across chest", 0.5, 1e-12);
    check("undershoot of voltage across chest", &decay, 0.0, 0.0);
    check_ramp("overshoot of voltage across chest over 5 V", 0.6, 1e-12);
    check_ramp("overshoot of voltage across chest over 9 V", 0.0, 0.0);
}

#[test]
fn settling_counts_from_the_start_of_the_window() {
    check(
        "settling time of voltage across chest to 1 V",
        &decay,
        10.0_f64.ln() / 5.0,
        1e-8,
    );
    check(
        "settling time of voltage across chest to 1 V after closing of fire",
        &decay,
        10.0_f64.ln() / 5.0 - 0.25,
        1e-8,
    );
    check(
        "settling time of voltage across chest to 20 V",
        &decay,
        0.0,
        0.0,
    );
    check_absent(
        "settling time of voltage across chest to 3 V",
        &ramp,
        "voltage across chest is still at 4 V, above 3 V, at the end of the span",
    );
}

#[test]
fn a_signal_at_an_instant_is_taken_just_after_it() {
    check_ramp("voltage across chest at 0.25 s", 8.0, 1e-12);
    check_ramp("voltage across chest at closing of fire", 8.0, 1e-12);
    check_ramp("final voltage across chest", -4.0, 1e-12);
    let forms: [Voltage<'_>; 3] = [&|_| (0.0, 0.0), &ramp, &ramp];
    let before = read(
        "voltage across chest just before 0.25 s",
        &[0.0, 0.25, 0.75, 1.0],
        &forms,
        |_| (),
    );
    assert_eq!(before.unwrap().value, 0.0);
}

#[test]
fn just_before_0_s_is_the_stated_start() {
    let forms: [Voltage<'_>; 1] = [&|_| (1.0, 0.0)];
    let stated = read(
        "voltage across chest just before 0 s",
        &[0.0, 1.0],
        &forms,
        |s| s.stated = vec![7.0],
    );
    assert_eq!(stated.unwrap().value, 7.0);
}

#[test]
fn a_window_from_0_s_holds_the_stated_start() {
    let forms: [Voltage<'_>; 1] = [&|_| (1.0, 0.0)];
    let highest = |window: &str| {
        let phrase = format!("highest voltage across chest {window}");
        read(&phrase, &[0.0, 1.0], &forms, |s| s.stated = vec![7.0])
            .unwrap()
            .value
    };
    assert_eq!(
        (
            highest("before 0.5 s"),
            highest("after 0 s"),
            highest("after 0.1 s")
        ),
        (7.0, 7.0, 1.0)
    );
}

#[test]
fn windows_by_state() {
    check("duration while fire is closed", &decay, 0.5, 1e-15);
    check("duration while fire is open", &decay, 0.5, 1e-15);
    let exact = (100.0 / 2.0 / 10.0) * ((-2.5_f64).exp() - (-7.5_f64).exp());
    check(
        "energy into chest while fire is closed",
        &decay,
        exact,
        1e-4,
    );
}

#[test]
fn windows_by_phase() {
    check(
        "duration during phase 2 of voltage across chest",
        &wave,
        1.0 / 6.0,
        1e-9,
    );
    check(
        "lowest voltage across chest during phase 3 of voltage across chest",
        &wave,
        0.0,
        1e-9,
    );
    check(
        "energy into chest during phase 9 of voltage across chest",
        &wave,
        0.0,
        0.0,
    );
    check_absent(
        "highest voltage across chest during phase 9 of voltage across chest",
        &wave,
        "its window is empty in this shot",
    );
}

#[test]
fn a_broken_window_has_no_rise() {
    check_absent(
        "rise of voltage across chest from 10 % to 90 % while fire is open",
        &wave,
        "its window is broken into 2 stretches",
    );
}

#[test]
fn an_edge_as_a_window_end_is_the_next_one() {
    check(
        "duration between closing of fire and opening of fire",
        &decay,
        0.5,
        1e-15,
    );
    check_absent(
        "duration between opening of fire and closing of fire",
        &decay,
        "there is no closing of fire after 750 ms",
    );
    check_absent(
        "second closing of fire",
        &decay,
        "there is only one closing of fire in this shot",
    );
}

#[test]
fn a_computed_time_outside_the_span_is_absent() {
    check_absent(
        "voltage across chest at (opening of fire + 1 s)",
        &decay,
        "1.75 s lies past the span of 1 s",
    );
    check_absent(
        "duration between opening of fire and first closing of fire",
        &decay,
        "its window would end at 250 ms, not after its start at 750 ms",
    );
}

#[test]
fn an_impulse_makes_extremes_and_action_unbounded_and_counts_in_charge() {
    let forms: [Voltage<'_>; 3] = [&decay, &decay, &decay];
    let impulse = |reading: &str| {
        read(reading, &[0.0, 0.25, 0.75, 1.0], &forms, |s| {
            for (row, probe) in s.probes.clone().iter().enumerate() {
                if matches!(probe, Probe::CurrentThrough(0)) {
                    s.jumps[1].impulses[row] = 3.0;
                }
            }
        })
    };
    let at = Lack::Unbounded("current through chest has an impulse at 250 ms".into());
    assert_eq!(impulse("largest current through chest"), Err(at.clone()));
    assert_eq!(impulse("action of chest"), Err(at));
    assert!(impulse("action of chest after 0.5 s").is_ok());
    let charge = impulse("charge through chest").unwrap().value;
    assert!((charge - (4.0 - (-5.0_f64).exp())).abs() < 1e-4);
}

#[test]
fn energy_at_a_jump_counts_in_the_window_that_starts_there() {
    let forms: [Voltage<'_>; 3] = [&|_| (0.0, 0.0); 3];
    let energy = |window: &str| {
        let phrase = format!("energy into chest {window}");
        read(&phrase, &[0.0, 0.25, 0.75, 1.0], &forms, |s| {
            s.jumps[1].energies = vec![(0, 5.0)]
        })
        .unwrap()
        .value
    };
    assert_eq!(
        (energy(""), energy("after 0.25 s"), energy("before 0.25 s")),
        (5.0, 5.0, 0.0)
    );
}

#[test]
fn what_floats_says_what_to_write() {
    let forms: [Voltage<'_>; 3] = [&decay, &decay, &decay];
    let floating = |reading: &str| {
        read(reading, &[0.0, 0.25, 0.75, 1.0], &forms, |s| {
            s.stretches[0].floating = vec![true]
        })
    };
    match floating("highest voltage at a") {
        Err(Lack::Floating(why)) => assert!(why.contains("write `voltage from A to B`"), "{why}"),
        other => panic!("{other:?}"),
    }
    assert!(floating("highest voltage at a after 0.25 s").is_ok());
}

#[test]
fn readings_combine_in_expressions() {
    let (energy, charge) = (5.0 * (1.0 - (-10.0_f64).exp()), 1.0 - (-5.0_f64).exp());
    check(
        "(energy into chest) / (charge through chest)^2",
        &decay,
        energy / (charge * charge),
        1e-4,
    );
    let root = "sqrt((voltage across chest at 0 s) / 1 V) * opening of fire / closing of fire";
    check(root, &decay, 10.0_f64.sqrt() * 3.0, 1e-12);
    check(
        "max(opening of fire, closing of fire) - 0.5 s",
        &decay,
        0.25,
        1e-15,
    );
}

#[test]
fn an_absent_reading_makes_its_expression_absent() {
    check_absent(
        "2 * second opening of fire",
        &decay,
        "there is only one opening of fire in this shot",
    );
    check_absent(
        "opening of fire / (duration while fire is closed - 0.5 s)",
        &decay,
        "opening of fire / (duration while fire is closed - 500 ms) divides by zero",
    );
}

#[test]
fn a_stated_instant_is_exact() {
    let n = read("opening of fire", &[0.0, 1.0], &[&decay], |_| ()).unwrap();
    assert_eq!((n.value, n.size), (0.75, 0.0));
}

#[test]
fn the_scale_of_an_instant_is_the_time_since_the_event_before_it() {
    let n = read(
        "time voltage across chest first falls through 3 V",
        &[0.0, 0.1, 1.0],
        &[&decay, &decay],
        |_| (),
    );
    let n = n.unwrap();
    assert!((n.value - (10.0_f64 / 3.0).ln() / 5.0).abs() < 1e-9);
    assert!((n.scale - (n.value - 0.1)).abs() < 1e-15);
}

#[test]
fn an_expression_of_signals_is_read_with_its_kinks() {
    let area = "area of (abs(voltage across chest))";
    check(area, &wave, 8.0 / PI, 1e-7);
    check(
        "highest (voltage across chest * step(t - 0.5 s))",
        &decay,
        10.0 * E.powf(-2.5),
        1e-9,
    );
}

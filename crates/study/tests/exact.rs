//! Exact propagation against closed forms, and what it says of circuits it cannot take.
//!
//! All true values are to be met to 1e-11 (energies) and 1e-10 (crests, instants), whatever the
//! allowed error.

#![allow(clippy::unwrap_used, clippy::panic, reason = "helpers of tests")]

use pulsewright_study::{Fired, Found, Options, StudyError, fire};

fn tried(text: &str) -> Result<Fired, StudyError> {
    let text = format!("{text}integrate by exact propagation\n");
    let read = pulsewright_netlist::read(text.as_bytes(), "test").unwrap_or_else(|m| panic!("{m}"));
    fire(&read.circuit, &Options::default())
}

fn fired(text: &str) -> Fired {
    tried(text).unwrap_or_else(|e| panic!("{e}"))
}

/// Within its bound and within `share`; the second opinion, by the trapezoidal rule, agrees.
fn check(f: &Fired, name: &str, exact: f64, share: f64) {
    let answer = &f.readings.iter().find(|r| r.name == name).unwrap().answer;
    let Found::Value { value, bound } = answer.found else {
        panic!("{name}: {:?}", answer.found)
    };
    let off = (value - exact).abs();
    assert!(
        off <= bound + 1e-15 * exact.abs(),
        "{name}: {value} ± {bound:e}, not {exact}"
    );
    assert!(off <= share * exact.abs(), "{name}: {value}, not {exact}");
    let opinion = f.second_opinion.as_ref().unwrap();
    assert_eq!(opinion.missing, None);
    assert_eq!(opinion.method, "trapezoidal rule");
}

const STAGE: &str = "capacitor bank from top to ground = 32 uF, charged to 5 kV\n\
     switch fire from top to a : open, closes at 1 us\n\
     inductor choke from a to b = 25 mH, winding 10 ohm\n\
     resistor chest from b to ground = 50 ohm\n";

/// 32 uF at 5 kV, 25 mH with 10 ohm, 50 ohm: figures in 50 digits from the closed form of the
/// overdamped loop, computed outside the project.
#[test]
fn the_damped_sine_stage_to_the_last_digits() {
    let f = fired(&format!(
        "{STAGE}span 20.001 ms\n\
         reading dose = energy into chest\n\
         reading crest = largest current through chest\n\
         reading peaks = time of largest current through chest\n"
    ));
    check(&f, "dose", 333.333_333_333_241_55, 1e-12);
    check(&f, "crest", 62.734_800_146_210_34, 1e-12);
    check(&f, "peaks", 874.191_059_139_009_7e-6, 1e-10);
    let f = fired(&format!(
        "{STAGE}span 2.001 ms\nreading dose = energy into chest\n"
    ));
    check(&f, "dose", 269.195_287_065_011_15, 1e-12);
}

/// 100 uF at 2 kV through 60 ohm for 6 ms, nothing for 0.5 ms, 4 ms reversed.
#[test]
fn a_truncated_exponential_of_two_phases() {
    let f = fired(
        "capacitor bank from plus to minus = 100 uF, charged to 2 kV\n\
         switch p from plus to a : open, closes at 0 s, opens at 6 ms\n\
         switch q from minus to ground : open, closes at 0 s, opens at 6 ms\n\
         switch r from plus to ground : open, closes at 6.5 ms, opens at 10.5 ms\n\
         switch s from minus to a : open, closes at 6.5 ms, opens at 10.5 ms\n\
         resistor lead from a to b = 10 ohm\n\
         resistor chest from b to ground = 50 ohm\n\
         span 11 ms\n\
         reading dose = energy into chest\n\
         reading held = final voltage across bank\n",
    );
    check(&f, "dose", 160.721_001_108_791_27, 1e-12);
    check(&f, "held", 377.751_205_675_123_7, 1e-12);
}

/// `V exp(-a t) sin(w t)` into R and C, by partial fractions: as states of their own the source's
/// exponentials are exact, however fast.
#[test]
fn a_damped_sine_as_a_source() {
    let f = fired(
        "voltage feed from a to ground = 1 kV * exp(-t / 10 us) * sin(2 * pi * 100 kHz * t)\n\
         resistor r from a to b = 50 ohm\n\
         capacitor c from b to ground = 1 uF\n\
         span 30 us\n\
         reading end = final voltage across c\n",
    );
    let (tau, a, w, t) = (50e-6_f64, 1e5_f64, std::f64::consts::TAU * 1e5, 30e-6);
    // v = Im ∫ exp((-a + iw) s) exp(-(t - s)/τ) ds / τ = Im (exp(λt) - exp(-t/τ)) / (τ (λ + 1/τ))
    let (re, im) = (-a + 1.0 / tau, w);
    let top = (
        (-a * t).exp() * (w * t).cos() - (-t / tau).exp(),
        (-a * t).exp() * (w * t).sin(),
    );
    let exact = 1000.0 * (top.1 * re - top.0 * im) / ((re * re + im * im) * tau);
    check(&f, "end", exact, 1e-11);
}

/// A diode and a level: their instants are roots of the exact solution.
#[test]
fn instants_of_a_diode_and_of_a_level() {
    let f = fired(
        "capacitor bank from top to ground = 10 uF, charged to 1 kV\n\
         switch fire from top to a : open, closes at 0 s, opens when voltage across bank falls below 400 V\n\
         inductor choke from a to b = 1 mH\n\
         diode free from ground to a\n\
         resistor load from b to ground = 1 ohm\n\
         span 2 ms\n\
         reading off = opening of fire\n\
         reading dose = energy into load\n",
    );
    let (l, c, r) = (1e-3_f64, 10e-6_f64, 1.0_f64);
    let (alpha, w0) = (r / (2.0 * l), 1.0 / (l * c).sqrt());
    let wd = (w0 * w0 - alpha * alpha).sqrt();
    let v = |t: f64| 1000.0 * (-alpha * t).exp() * ((wd * t).cos() + alpha / wd * (wd * t).sin());
    let i = |t: f64| 1000.0 / (wd * l) * (-alpha * t).exp() * (wd * t).sin();
    let (mut low, mut high) = (0.0, 200e-6);
    for _ in 0..80 {
        let m = 0.5 * (low + high);
        if v(m) > 400.0 { low = m } else { high = m }
    }
    check(&f, "off", low, 1e-10);
    let held = 0.5 * l * i(low).powi(2) * (1.0 - (-2.0 * r / l * (2e-3 - low)).exp());
    let before = 0.5 * c * (1e6 - 160e3) - 0.5 * l * i(low).powi(2);
    check(&f, "dose", before + held, 1e-11);
}

/// Six decades: 1 ns beside 1 ms, and nothing of the slow part is lost.
#[test]
fn a_fast_corner_costs_the_slow_part_no_digits() {
    let f = fired(
        "capacitor fast from a to ground = 1 nF, charged to 100 V\n\
         resistor r from a to b = 1 ohm\n\
         capacitor slow from b to ground = 1 uF, charged to 50 V\n\
         resistor load from b to ground = 1 kohm\n\
         span 3 ms\n\
         reading dose = energy into load\n",
    );
    // The two exponentials in 40 digits, computed outside the project.
    check(&f, "dose", 1.250_624_822_601_788_3e-3, 1e-12);
}

#[test]
fn a_source_of_another_form_is_named() {
    let text = "voltage feed from a to ground = 1 kV / (1 + (t / 1 us)^2)\n\
         resistor r from a to ground = 50 ohm\n\
         span 10 us\n";
    let e = tried(text).unwrap_err().to_string();
    assert!(
        e.contains("`feed`") && e.contains("trapezoidal rule"),
        "{e}"
    );
}

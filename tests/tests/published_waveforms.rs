//! Published values of waveforms that standards give as formulas: a current source with the
//! formula, and the readings that the standards define on it.
//!
//! The tight test holds each reading to the exact value of the formula, within the bound that
//! the program states and 1e-9; the loose one to the nominal value of the standard. All
//! formulas here are *from memory*: that they give the nominal values they must give is the
//! evidence for their constants. Levels that were read say so.

use pulsewright_tests::{fire, reading};

struct Check {
    /// A reading of `wave`, the current, written out.
    reading: &'static str,
    /// Nominal, in SI units, with the digits given there.
    nominal: f64,
    /// Relative: how closely the formula meets it.
    tolerance: f64,
    /// Exact for the formula.
    exact: f64,
}

const fn row(reading: &'static str, nominal: f64, tolerance: f64, exact: f64) -> Check {
    Check {
        reading,
        nominal,
        tolerance,
        exact,
    }
}

/// Fires `formula` (a current in amperes) into 1 ohm over `span`.
fn check(source: &str, formula: &str, span: &str, checks: &[Check]) {
    let mut text = format!(
        "current gun from ground to a = {formula}
         resistor shunt from a to ground = 1 ohm
         signal wave = current through shunt
         span {span}\n"
    );
    for (k, c) in checks.iter().enumerate() {
        text += &format!("reading r{k} = {}\n", c.reading);
    }
    let fired = fire(&text);
    for (k, c) in checks.iter().enumerate() {
        let got = reading(&fired, &format!("r{k}"));
        let loose = c.tolerance * c.nominal.abs() + got.bound;
        assert!(
            (got.value - c.nominal).abs() <= loose,
            "{}: {} for a nominal {} ({source})",
            c.reading,
            got.value,
            c.nominal
        );
        let off = (got.value - c.exact).abs();
        let tight = got.bound + 1e-9 * c.exact.abs();
        assert!(
            off <= tight,
            "{}: {} for an exact {}: off by {off:.2e}, stated {:.2e}",
            c.reading,
            got.value,
            c.exact,
            got.bound
        );
    }
}

const FRONT_30: &str = "front time of wave from 30 % to 90 %";
const HALF_30: &str = "time to half value of wave with front from 30 % to 90 %";
const FRONT_10: &str = "front time of wave from 10 % to 90 %";
const HALF_10: &str = "time to half value of wave with front from 10 % to 90 %";
const CREST: &str = "highest wave";
const ACTION: &str = "action of shunt";

/// Components of the lightning threat to aircraft, two exponentials each.
const COMPONENTS: &str = "MIL-STD-464 and SAE ARP5412 (from memory)";

#[test]
fn lightning_component_a() {
    check(
        COMPONENTS,
        "218810 A * (exp(-t * 11354 Hz) - exp(-t * 647265 Hz))",
        "2 ms",
        &[
            row(CREST, 200e3, 1e-4, 199999.872645),
            row(ACTION, 2e6, 1e-4, 2000008.04558),
            row("steepest wave", 1.4e11, 0.007, 139143685910.0),
        ],
    );
}

#[test]
fn lightning_component_b() {
    check(
        COMPONENTS,
        "11300 A * (exp(-t * 700 Hz) - exp(-t * 2000 Hz))",
        "5 ms",
        &[row("charge through shunt", 10.0, 0.001, 10.0056416058)],
    );
}

#[test]
fn lightning_component_d() {
    check(
        COMPONENTS,
        "109405 A * (exp(-t * 22708 Hz) - exp(-t * 1.29453e6 Hz))",
        "1 ms",
        &[
            row(CREST, 100e3, 1e-4, 99999.9363225),
            row(ACTION, 0.25e6, 1e-4, 250001.005698),
        ],
    );
}

#[test]
fn lightning_component_h() {
    check(
        COMPONENTS,
        "10572 A * (exp(-t * 187191 Hz) - exp(-t * 19.1051e6 Hz))",
        "20 us",
        &[
            row(CREST, 10e3, 1e-4, 10000.0792114),
            row("steepest wave", 2e11, 1e-4, 200000133948.0),
        ],
    );
}

/// The first positive stroke: 10/350 us, 100 C, 10 MJ/ohm.
#[test]
fn lightning_first_positive_stroke() {
    check(
        "IEC 62305-1:2010 annex B, formula from memory; 200 kA, 100 C, 10 MJ/ohm in a protection guide of 2014, sec. 2.6 (source read)",
        "200 kA / 0.93 * (t / 19 us)^10 / (1 + (t / 19 us)^10) * exp(-t / 485 us)",
        "12 ms",
        &[
            row(CREST, 200e3, 0.002, 200254.171678),
            row("charge through shunt", 100.0, 0.005, 100.231409864),
            row(ACTION, 10e6, 0.03, 10275326.5737),
            row(FRONT_10, 10e-6, 0.005, 9.98017125441e-06),
            row(HALF_10, 350e-6, 0.02, 0.000356570596973),
        ],
    );
}

#[test]
fn lightning_subsequent_stroke() {
    check(
        "IEC 62305-1:2010 annex B (from memory)",
        "50 kA / 0.993 * (t / 0.454 us)^10 / (1 + (t / 0.454 us)^10) * exp(-t / 143 us)",
        "1 ms",
        &[
            row(CREST, 50e3, 0.001, 49988.074735),
            row(FRONT_10, 0.25e-6, 0.005, 2.49325349167e-07),
            row(HALF_10, 100e-6, 0.003, 9.98193558136e-05),
        ],
    );
}

const IEEE: &str = "IEEE C62.41.2-2002, waveform equations (from memory)";

#[test]
fn a_1_2_50_voltage() {
    check(
        IEEE,
        "1.037 A * (1 - exp(-t / 0.4074 us)) * exp(-t / 68.22 us)",
        "300 us",
        &[
            row(CREST, 1.0, 0.001, 0.99976223844),
            row(FRONT_30, 1.2e-6, 0.005, 1.19985720559e-06),
            row(HALF_30, 50e-6, 0.001, 5.00018173572e-05),
        ],
    );
}

#[test]
fn an_8_20_current() {
    check(
        IEEE,
        "0.01243 A * (t / 1 us)^3 * exp(-t / 3.911 us)",
        "150 us",
        &[
            row(CREST, 1.0, 0.001, 0.999573870684),
            row(FRONT_10, 8e-6, 0.005, 8.02269632166e-06),
            row(HALF_10, 20e-6, 0.005, 1.99382308894e-05),
        ],
    );
}

#[test]
fn a_10_1000_wave() {
    check(
        IEEE,
        "1.019 A * (1 - exp(-t / 3.827 us)) * exp(-t / 1404 us)",
        "6 ms",
        &[
            row(FRONT_10, 10e-6, 0.001, 1.00005617538e-05),
            row(HALF_10, 1e-3, 0.001, 0.0010002139312),
        ],
    );
}

#[test]
fn a_ring_wave() {
    check(
        IEEE,
        "1.590 A * (1 - exp(-t / 0.533 us)) * exp(-t / 9.788 us) * cos(2 * pi * 100 kHz * t)",
        "60 us",
        &[
            row(CREST, 1.0, 0.001, 1.0000870604),
            row(
                "rise of wave from 10 % to 90 %",
                0.5e-6,
                0.001,
                4.99904718479e-07,
            ),
            row(
                "highest wave between 7 us and 13 us / abs(lowest wave between 2 us and 8 us)",
                0.6,
                0.001,
                0.600079448208,
            ),
        ],
    );
}

#[test]
fn a_fast_transient() {
    check(
        IEEE,
        "1.270 A * (1 - exp(-t / 3.5 ns)) * exp(-t / 55.6 ns)",
        "500 ns",
        &[
            row(
                "rise of wave from 10 % to 90 %",
                5e-9,
                0.001,
                5.00193199164e-09,
            ),
            row("width of wave at 50 %", 50e-9, 0.001, 4.99976009535e-08),
        ],
    );
}

/// The third edition's formula with a power that is no whole number.
#[test]
fn the_surge_formula_of_the_third_edition() {
    check(
        "IEC 61000-4-5:2014, informative annex (from memory)",
        "0.94 A * exp(0.356 / 65.845 * (1.852 * 65.845 / 0.356)^(1 / 1.852)) \
         * (t / 0.356 us)^1.852 / (1 + (t / 0.356 us)^1.852) * exp(-t / 65.845 us)",
        "300 us",
        &[
            row(CREST, 1.0, 0.001, 1.00028189046),
            row(FRONT_30, 1.2e-6, 0.01, 1.19549152646e-06),
            row(HALF_30, 50e-6, 0.01, 5.00034050832e-05),
        ],
    );
}

const KUFFEL: &str = "E. Kuffel, W. S. Zaengl, J. Kuffel, High Voltage Engineering, 2nd ed., table of time constants (from memory)";

/// Two exponentials whose measures a handbook states: front by 1.67 times 30 % to 90 %.
#[test]
fn double_exponentials_of_a_handbook() {
    let rows = [
        (
            "68.2 us",
            "0.405 us",
            "400 us",
            1.2e-6,
            50e-6,
            1.20228531754e-06,
            4.9987938377e-05,
            0.003,
        ),
        (
            "3.48 us",
            "0.80 us",
            "40 us",
            1.2e-6,
            5e-6,
            1.2020944572e-06,
            4.99726475852e-06,
            0.003,
        ),
        (
            "284 us",
            "0.381 us",
            "1.5 ms",
            1.2e-6,
            200e-6,
            1.20247027546e-06,
            0.000199983876651,
            0.003,
        ),
        (
            "2877 us",
            "104 us",
            "15 ms",
            250e-6,
            2500e-6,
            0.000251347538642,
            0.00250138228735,
            0.006,
        ),
    ];
    for (tail, front, span, t1, t2, exact1, exact2, tolerance) in rows {
        let formula = format!("1 A * (exp(-t / {tail}) - exp(-t / {front}))");
        let rise = "1.67 * rise of wave from 30 % to 90 %";
        check(
            KUFFEL,
            &formula,
            span,
            &[
                row(rise, t1, tolerance, exact1),
                row(HALF_30, t2, tolerance, exact2),
            ],
        );
    }
}

/// The switching impulse is defined by its time to crest.
#[test]
fn a_switching_impulse() {
    check(
        "IEC 60060-1 by handbooks (from memory)",
        "1 A * (exp(-t / 3155 us) - exp(-t / 62.48 us))",
        "15 ms",
        &[
            row("time of highest wave", 250e-6, 1e-4, 0.000249990831458),
            row(
                "time wave last falls through 50 % of largest",
                2500e-6,
                1e-4,
                0.00249997713807,
            ),
        ],
    );
}

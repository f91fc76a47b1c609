//! Published values of whole circuits: a netlist, a reading, the value with the digits given
//! there, its tolerance and why, the source with its provenance mark.
//!
//! Two tests in one: the *loose* one holds the reading to the published value with its
//! tolerance; the *tight* one to the exact value for the circuit as given, within the bound that
//! the program states itself and 1e-9, since the exact values are known to twelve digits.
//!
//! | mark | meaning |
//! |---|---|
//! | source read | the text that states it was read |
//! | from memory | known, the text was not at hand; the exact value confirms it as far as it goes |
//! | common practice | no single source |
//! | computed here | exact for the circuit, from a closed form; no published number |

use pulsewright_tests::{fire, reading};

/// How the published value is meant.
#[derive(Clone, Copy)]
enum Allowed {
    /// Relative to it.
    Share(f64),
    /// It is a limit from above.
    AtMost,
}
use Allowed::{AtMost, Share};

struct Check {
    /// The reading in the netlist.
    reading: &'static str,
    /// The published value in SI units, with the digits given there.
    published: f64,
    allowed: Allowed,
    /// Exact for the circuit as given.
    exact: f64,
    /// Where it stands, and why the tolerance.
    source: &'static str,
}

fn check(circuit: &str, checks: &[Check]) {
    let fired = fire(circuit);
    for c in checks {
        let got = reading(&fired, c.reading);
        let close = match c.allowed {
            Share(share) => {
                (got.value - c.published).abs() <= share * c.published.abs() + got.bound
            }
            AtMost => got.value <= c.published,
        };
        assert!(
            close,
            "{}: {} for a published {} ({})",
            c.reading, got.value, c.published, c.source
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

/// Shared by the rows of one circuit.
const HERE: &str = "computed here: closed form";

/// 32 uF at 5 kV through 25 mH and 11 ohm into 100 ohm, run until nothing is left.
#[test]
fn the_defibrillator_overload_circuit() {
    check(
        "capacitor store from hv to ground = 32 uF, charged to 5 kV
         inductor coil from hv to pad = 25 mH, winding 11 ohm
         resistor load from pad to ground = 100 ohm
         span 120 ms
         reading stored = energy held by store just before 0 s
         reading dose = energy into load
         reading swept = charge through load",
        &[
            Check {
                reading: "dose",
                published: 360.0,
                allowed: Share(0.0015),
                exact: 360.360_360_36,
                source: "AAMI EC11 overload table, 5000 V and 360 J (source read); 25 mH and 11 ohm from memory; \
                         360 is 400 x 100/111 in three digits",
            },
            Check {
                reading: "stored",
                published: 400.0,
                allowed: Share(1e-9),
                exact: 400.0,
                source: "biomedical electronics notes: 160 mC at 5000 V stores 400 J (source read)",
            },
            Check {
                reading: "swept",
                published: 0.160,
                allowed: Share(1e-6),
                exact: 0.16,
                source: "the same notes (source read); the default allowed error",
            },
        ],
    );
}

/// The same stage over the loads of a defibrillator tester. Energy, crest, its instant, width at
/// half the crest, rise: exact values of the closed form (computed here).
#[test]
fn the_overload_circuit_over_seven_loads() {
    let rows = [
        (
            25.0,
            277.777777778,
            85.9253093665,
            0.00101842662186,
            0.00199845521079,
            0.00060661143221,
        ),
        (
            50.0,
            327.868852459,
            62.0259381886,
            0.000868190930698,
            0.00225165632045,
            0.000489742382103,
        ),
        (
            75.0,
            348.837209302,
            48.2333753287,
            0.000762031613518,
            0.00263731465975,
            0.000409422630677,
        ),
        (
            100.0,
            360.36036036,
            39.3308333923,
            0.000682313880602,
            0.0030979636843,
            0.000350968796363,
        ),
        (
            125.0,
            367.647058824,
            33.1392805852,
            0.000619862605692,
            0.00358953061467,
            0.000306619003698,
        ),
        (
            150.0,
            372.670807453,
            28.5976522826,
            0.000569385392688,
            0.00409623040822,
            0.000271883128916,
        ),
        (
            175.0,
            376.344086022,
            25.1308279036,
            0.000527594165335,
            0.00461221997804,
            0.00024398431511,
        ),
    ];
    for (load, dose, crest, at, width, rise) in rows {
        let text = format!(
            "capacitor store from hv to ground = 32 uF, charged to 5 kV
             inductor coil from hv to pad = 25 mH, winding 11 ohm
             resistor load from pad to ground = {load} ohm
             span 150 ms
             reading dose = energy into load
             reading crest = highest current through load
             reading at_t = time of highest current through load
             reading half_w = width of current through load at 50 %
             reading edge_t = rise of current through load from 10 % to 90 %"
        );
        let rows = [
            ("dose", dose),
            ("crest", crest),
            ("at_t", at),
            ("half_w", width),
            ("edge_t", rise),
        ];
        let own = |(reading, exact)| Check {
            reading,
            published: exact,
            allowed: Share(2e-6),
            exact,
            source: HERE,
        };
        check(&text, &rows.map(own));
    }
}

/// Into 25 ohm the stage rings: how far the current swings back, and when it first turns.
#[test]
fn the_overload_circuit_swings_back_into_a_low_load() {
    check(
        "capacitor store from hv to ground = 32 uF, charged to 5 kV
         inductor coil from hv to pad = 25 mH, winding 11 ohm
         resistor load from pad to ground = 25 ohm
         span 60 ms
         reading back = undershoot of current through load
         reading turn_t = time current through load first falls through 0 A",
        &[
            Check {
                reading: "back",
                published: 0.071040022037,
                allowed: Share(2e-6),
                exact: 0.071040022037,
                source: HERE,
            },
            Check {
                reading: "turn_t",
                published: 0.00367293315291,
                allowed: Share(2e-6),
                exact: 0.00367293315291,
                source: "computed here; with the crest's instant it returns damping 720 1/s and 1.152 ms, the identities of \
                         Babbs and Whistler, Medical Instrumentation 12(1):34, 1978 (source read)",
            },
        ],
    );
}

/// 500 uH in place of 25 mH: the crest on the load, with and without a winding of 5 ohm.
#[test]
fn the_fast_overload_circuit() {
    for (winding, exact) in [
        ("", 4957.320572411209),
        (", winding 5 ohm", 4724.381406844143),
    ] {
        let text = format!(
            "capacitor store from hv to ground = 32 uF, charged to 5 kV
             inductor coil from hv to pad = 500 uH{winding}
             resistor load from pad to ground = 100 ohm
             span 2 ms
             reading crest = highest voltage across load"
        );
        let source =
            "computed here; 32 uF, 500 uH, 100 ohm, 5 kV from memory of IEC 60601-1 cl. 8.5.5.1";
        check(
            &text,
            &[Check {
                reading: "crest",
                published: exact,
                allowed: Share(2e-6),
                exact,
                source,
            }],
        );
    }
}

/// A bleeder across the bank takes its share of the shot.
#[test]
fn a_bleeder_across_the_bank() {
    let own = |reading, exact| Check {
        reading,
        published: exact,
        allowed: Share(2e-6),
        exact,
        source: HERE,
    };
    check(
        "capacitor store from hv to ground = 32 uF, charged to 5 kV
         resistor bleed from hv to ground = 1 kohm
         inductor coil from hv to pad = 25 mH, winding 11 ohm
         resistor load from pad to ground = 50 ohm
         span 100 ms
         reading dose = energy into load
         reading swept = charge through load
         reading heat_i = action of load",
        &[
            own("dose", 305.111038965),
            own("swept", 0.150801131008),
            own("heat_i", 6.1022207793),
        ],
    );
}

/// An impulse generator of one stage: Wadhwa, High Voltage Engineering, example 3.1.
#[test]
fn a_single_stage_impulse_generator() {
    check(
        "capacitor c1 from a to ground = 25 nF, charged to 1 V
         resistor r2 from a to ground = 2600 ohm
         resistor r1 from a to b = 75 ohm
         capacitor c2 from b to ground = 2.5 nF
         span 400 us
         reading peak_t = time of highest voltage across c2
         reading half_t = time voltage across c2 last falls through 50 % of largest",
        &[
            Check {
                reading: "peak_t",
                published: 1.03e-6,
                allowed: Share(0.005),
                exact: 1.03166608863e-6,
                source: "C. L. Wadhwa, example 3.1, p. 104, read in a public worked copy (source read); printed to three digits",
            },
            Check {
                reading: "half_t",
                published: 51.09e-6,
                allowed: Share(0.01),
                exact: 5.07741499144e-5,
                source: "the same (source read); the book's tail is an approximate formula, 0.6 % off",
            },
        ],
    );
}

/// An impulse current of 10.13 kA: Wadhwa, example 3.3.
#[test]
fn an_impulse_current_generator() {
    check(
        "capacitor store from hv to x = 15 uF, charged to 125 kV
         inductor coil from hv to y = 2 mH
         resistor path from y to x = 1 ohm
         wire earth from x to ground
         span 2 ms
         reading peak_i = largest current through coil
         reading peak_t = time of largest current through coil",
        &[
            Check {
                reading: "peak_i",
                published: 10.13e3,
                allowed: Share(0.0005),
                exact: 10131.8469153,
                source: "C. L. Wadhwa, example 3.3, p. 107 (source read); printed to four digits",
            },
            Check {
                reading: "peak_t",
                published: 260e-6,
                allowed: Share(0.025),
                exact: 0.000264815940333,
                source: "the same (source read); printed hard-rounded, the exact instant is 264.8 us",
            },
        ],
    );
}

/// 8/20 us out of 8 uF, 8.125 uH and 0.87 ohm, and the charging voltage that it takes for 10 kA.
#[test]
fn an_8_20_current_out_of_a_series_circuit() {
    check(
        "capacitor store from hv to ground = 8 uF, charged to 17.5 kV
         inductor coil from hv to y = 8.125 uH
         resistor path from y to ground = 0.87 ohm
         span 200 us
         reading front_t = 1.25 * rise of current through path from 10 % to 90 %
         reading half_t = time to half value of current through path with front from 10 % to 90 %
         reading for_10_ka = 17.5 kV * 10 kA / highest current through path",
        &[
            Check {
                reading: "front_t",
                published: 8e-6,
                allowed: Share(0.1),
                exact: 7.693617745e-06,
                source: "textbook exercise, 8/20 us from these parts (source read); 10 % is the wave's own tolerance",
            },
            Check {
                reading: "half_t",
                published: 20e-6,
                allowed: Share(0.1),
                exact: 2.04426108369e-05,
                source: "the same (source read)",
            },
            Check {
                reading: "for_10_ka",
                published: 17.5e3,
                allowed: Share(0.015),
                exact: 17260.462104,
                source: "handbook rule 14 kV per kA and uF (from memory); a rule of thumb, 1.4 % off",
            },
        ],
    );
}

/// Two more series discharges whose parts were published and whose crests follow from them.
#[test]
fn series_discharges_with_published_parts() {
    let own = |reading, exact| Check {
        reading,
        published: exact,
        allowed: Share(2e-6),
        exact,
        source: HERE,
    };
    check(
        "capacitor store from hv to ground = 0.6 uF, charged to 30 kV
         inductor coil from hv to y = 108 uH, winding 11.56 ohm
         wire earth from y to ground
         span 100 us
         reading peak_i = highest current through coil",
        &[own("peak_i", 1306.64708179)],
    );
    check(
        "capacitor store from hv to ground = 2 uF, charged to 10 V
         inductor coil from hv to y = 5 mH
         resistor path from y to ground = 200 ohm
         span 3 ms
         reading peak_i = highest current through coil
         reading peak_t = time of highest current through coil",
        &[
            own("peak_i", 0.0437121184596),
            own("peak_t", 7.60345996301e-05),
        ],
    );
}

/// 4 uF at 100 V onto 6 uF: 40 V, and 12 mJ are gone.
#[test]
fn a_charge_shared() {
    check(
        "capacitor c1 from a to ground = 4 uF, charged to 100 V
         capacitor c2 from b to ground = 6 uF
         switch join from a to b : open, closes at 1 ms
         span 2 ms
         reading common = final voltage across c2
         reading lost = heat in join",
        &[
            Check {
                reading: "common",
                published: 40.0,
                allowed: Share(1e-12),
                exact: 40.0,
                source: "worked problem, capacitors set 6 (source read); exact there",
            },
            Check {
                reading: "lost",
                published: 0.012,
                allowed: Share(1e-12),
                exact: 0.012,
                source: "the same (source read)",
            },
        ],
    );
}

const TELEPHONE: &str = "capacitor c1 from a to ground = 20 uF, charged to 1 V
    resistor r1 from a to ground = 50 ohm
    resistor r2 from a to b = 15 ohm
    capacitor c2 from b to ground = 0.2 uF
    resistor r3 from b to out = 25 ohm
    span 6 ms\n";

/// The 10/700 generator, open: the circuit is the standard's, the wave follows.
#[test]
fn the_10_700_network_open() {
    let source = "IEC 61000-4-5 and ITU-T K.44 (from memory); the standard's own tolerance";
    check(
        &format!(
            "{TELEPHONE}resistor probe from out to ground = open circuit
             reading front_t = 1.67 * rise of voltage across c2 from 30 % to 90 %
             reading lasts = width of voltage across probe at 50 %
             reading crest = highest voltage across probe"
        ),
        &[
            Check {
                reading: "front_t",
                published: 10e-6,
                allowed: Share(0.3),
                exact: 9.14668355e-06,
                source,
            },
            Check {
                reading: "lasts",
                published: 700e-6,
                allowed: Share(0.2),
                exact: 0.000718426834307,
                source,
            },
            Check {
                reading: "crest",
                published: 0.973193729476,
                allowed: Share(2e-6),
                exact: 0.973193729476,
                source: HERE,
            },
        ],
    );
}

/// The same, shorted: 5/320 us, and 40 ohm between the two crests.
#[test]
fn the_10_700_network_shorted() {
    let source = "IEC 61000-4-5 and ITU-T K.44 (from memory); the standard's own tolerance";
    check(
        &format!(
            "{TELEPHONE}resistor probe from out to ground = short circuit
             reading front_t = 1.25 * rise of current through probe from 10 % to 90 %
             reading lasts = width of current through probe at 50 %
             reading crest = highest current through probe
             reading between_crests = 0.9731937294764262 V / highest current through probe"
        ),
        &[
            Check {
                reading: "front_t",
                published: 5e-6,
                allowed: Share(0.2),
                exact: 4.80604089482e-06,
                source,
            },
            Check {
                reading: "lasts",
                published: 320e-6,
                allowed: Share(0.2),
                exact: 0.000320160581231,
                source,
            },
            Check {
                reading: "crest",
                published: 0.0243356542472,
                allowed: Share(2e-6),
                exact: 0.0243356542472,
                source: HERE,
            },
            Check {
                reading: "between_crests",
                published: 40.0,
                allowed: Share(0.1),
                exact: 39.9904485654,
                source,
            },
        ],
    );
}

/// The combination-wave generator: capacitor, tail, head, coil, cross resistor.
struct Combination {
    store: &'static str,
    tail: &'static str,
    head: &'static str,
    coil: &'static str,
    cross: &'static str,
}

impl Combination {
    fn text(&self, load: &str, readings: &str) -> String {
        let Combination {
            store,
            tail,
            head,
            coil,
            cross,
        } = self;
        format!(
            "capacitor store from hv to ground = {store}
             resistor tail from hv to ground = {tail}
             resistor head from hv to b = {head}
             inductor coil from b to out = {coil}
             resistor cross from out to ground = {cross}
             resistor probe from out to ground = {load}
             span 500 us\n{readings}"
        )
    }
}

const SET_A: Combination = Combination {
    store: "6.038 uF, charged to 1082 V",
    tail: "25.105 ohm",
    head: "0.941 ohm",
    coil: "10.37 uH",
    cross: "19.80 ohm",
};
const SET_B: Combination = Combination {
    store: "5.93 uF, charged to 1060.6 V",
    tail: "20.2 ohm",
    head: "0.814 ohm",
    coil: "10.9 uH",
    cross: "26.1 ohm",
};
const SET_C: Combination = Combination {
    store: "6.09492528 uF, charged to 1061.5379 V",
    tail: "19.6387187 ohm",
    head: "0.842178471 ohm",
    coil: "10.8044790 uH",
    cross: "25.9759716 ohm",
};
const OPEN: &str = "reading crest = highest voltage across probe
    reading front_t = 1.67 * rise of voltage across probe from 30 % to 90 %
    reading lasts = width of voltage across probe at 50 %
    reading half_t = time to half value of voltage across probe with front from 30 % to 90 %";
const SHORT: &str = "reading crest = highest current through probe
    reading front_t = 1.25 * rise of current through probe from 10 % to 90 %
    reading lasts = 1.18 * width of current through probe at 50 %
    reading half_t = time to half value of current through probe with front from 10 % to 90 %
    reading dip = undershoot of current through probe";

#[test]
fn the_combination_wave_of_application_notes() {
    let notes = "application notes on surge testing; limits of IEC 61000-4-5:2014 (from memory)";
    check(
        &SET_A.text("open circuit", OPEN),
        &[
            Check {
                reading: "crest",
                published: 1000.0,
                allowed: Share(0.001),
                exact: 1000.0335595,
                source: notes,
            },
            Check {
                reading: "front_t",
                published: 1.2e-6,
                allowed: Share(0.3),
                exact: 1.46827803101e-06,
                source: notes,
            },
            Check {
                reading: "lasts",
                published: 50e-6,
                allowed: Share(0.2),
                exact: 4.99999836446e-05,
                source: notes,
            },
        ],
    );
    check(
        &SET_A.text("short circuit", SHORT),
        &[
            Check {
                reading: "crest",
                published: 500.0,
                allowed: Share(0.001),
                exact: 499.978943927,
                source: notes,
            },
            Check {
                reading: "front_t",
                published: 8e-6,
                allowed: Share(0.2),
                exact: 7.65434390203e-06,
                source: notes,
            },
            Check {
                reading: "lasts",
                published: 20e-6,
                allowed: Share(0.2),
                exact: 1.9630151086e-05,
                source: notes,
            },
            Check {
                reading: "dip",
                published: 0.30,
                allowed: AtMost,
                exact: 0.277182305433,
                source: notes,
            },
        ],
    );
}

#[test]
fn the_combination_wave_of_the_second_edition() {
    let paper = "R. Hesterman and D. Powell, Introduction to Voltage Surge Immunity Testing, 2007 (from memory); \
                 charging voltage chosen here; three digits printed";
    check(
        &SET_B.text("open circuit", OPEN),
        &[
            Check {
                reading: "crest",
                published: 1000.0,
                allowed: Share(0.001),
                exact: 1000.01175099,
                source: paper,
            },
            Check {
                reading: "front_t",
                published: 1.2e-6,
                allowed: Share(0.01),
                exact: 1.20520558152e-06,
                source: paper,
            },
            Check {
                reading: "half_t",
                published: 50e-6,
                allowed: Share(0.002),
                exact: 5.00311311445e-05,
                source: paper,
            },
        ],
    );
    check(
        &SET_B.text("short circuit", SHORT),
        &[
            Check {
                reading: "front_t",
                published: 8e-6,
                allowed: Share(0.005),
                exact: 8.01323294125e-06,
                source: paper,
            },
            Check {
                reading: "half_t",
                published: 20e-6,
                allowed: Share(0.002),
                exact: 2.00277626051e-05,
                source: paper,
            },
        ],
    );
}

/// Solved so that every measure of the third edition is exact; the ideal circuit then swings back
/// more than the 30 % allowed, which is a fact about the circuit and no error.
#[test]
fn the_combination_wave_of_the_third_edition() {
    let own = |reading, published, exact| Check {
        reading,
        published,
        allowed: Share(2e-6),
        exact,
        source: HERE,
    };
    check(
        &SET_C.text("open circuit", OPEN),
        &[
            own("crest", 1000.0, 999.999995234),
            own("front_t", 1.2e-6, 1.2000000059e-06),
            own("lasts", 50e-6, 4.99999999493e-05),
        ],
    );
    check(
        &SET_C.text("short circuit", SHORT),
        &[
            own("crest", 500.0, 499.99999697),
            own("front_t", 8e-6, 8.00000001518e-06),
            own("lasts", 20e-6, 2.00000000302e-05),
            own("dip", 0.317668066236, 0.317668066236),
        ],
    );
}

/// A parallel discharge: capacitor, coil and resistor side by side.
#[test]
fn a_parallel_discharge() {
    let own = |reading, exact| Check {
        reading,
        published: exact,
        allowed: Share(2e-6),
        exact,
        source: HERE,
    };
    check(
        "capacitor store from a to ground = 10 uF, charged to 1 kV
         inductor coil from a to ground = 10 mH
         resistor damp from a to ground = 50 ohm
         span 30 ms
         reading dip = lowest voltage across store
         reading dip_t = time of lowest voltage across store
         reading coil_i = highest current through coil
         reading heat_j = energy into damp",
        &[
            own("dip", -434.874766868),
            own("dip_t", 0.000832697181599),
            own("coil_i", 20.853651164),
            Check {
                reading: "heat_j",
                published: 5.0,
                allowed: Share(2e-6),
                exact: 5.0,
                source: "what was stored is what the resistor takes (common practice)",
            },
        ],
    );
}

/// The time to a tilt of one half and of 65 %, 110 uF into 50 ohm.
#[test]
fn the_time_to_a_tilt() {
    let own = |reading, exact| Check {
        reading,
        published: exact,
        allowed: Share(2e-6),
        exact,
        source: HERE,
    };
    check(
        "capacitor store from a to ground = 110 uF, charged to 1 kV
         resistor chest from a to ground = 50 ohm
         span 10 ms
         reading to_half = time voltage across chest first falls through 500 V
         reading to_65 = time voltage across chest first falls through 35 % of largest",
        &[
            own("to_half", 0.00381230949308),
            own("to_65", 0.00577402168474),
        ],
    );
}

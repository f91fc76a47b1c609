//! Circuits with a closed form: the order of both integrators in energy, crest and final value,
//! through switch events; truncated exponentials; charge and flux at an event.
//!
//! The two-state circuits switch twice, at instants that are no multiple of any step: `fire`
//! lets the bank go, `bypass` changes the resistance while the pulse runs.

use pulsewright_engine::{Mesh, Shot};
use pulsewright_tests::closed::{Joined, Rlc, State};
use pulsewright_tests::{Stage, fire, reading};

const C: f64 = 10e-6;
const L: f64 = 25e-3; // so that sqrt(L/C) is 50 ohm and sqrt(LC) half a millisecond
const V0: f64 = 1000.0;
const FIRES: f64 = 123.4567e-6;
const BYPASSES: f64 = 1.937_123e-3;
const SPAN: f64 = 4.5e-3;

/// The damping of a circuit, by its resistances in ohm: (load, ballast) in series before the
/// ballast is bypassed; (load, helper) in parallel once the helper is switched in.
struct Regime {
    name: &'static str,
    joined: Joined,
    load: f64,
    other: f64,
}

const REGIMES: [Regime; 6] = [
    Regime {
        name: "series, underdamped",
        joined: Joined::Series,
        load: 20.0,
        other: 10.0,
    },
    Regime {
        name: "series, critical",
        joined: Joined::Series,
        load: 60.0,
        other: 40.0,
    },
    Regime {
        name: "series, overdamped",
        joined: Joined::Series,
        load: 200.0,
        other: 100.0,
    },
    Regime {
        name: "parallel, underdamped",
        joined: Joined::Parallel,
        load: 60.0,
        other: 90.0,
    },
    Regime {
        name: "parallel, critical",
        joined: Joined::Parallel,
        load: 25.0,
        other: 40.0,
    },
    Regime {
        name: "parallel, overdamped",
        joined: Joined::Parallel,
        load: 10.0,
        other: 15.0,
    },
];

/// The readings of a regime: energy in the load, J; crest of the coil's current, A; its instant
/// after firing, s; final voltage of the bank, V, and current of the coil, A.
struct Exact {
    energy: f64,
    crest: f64,
    crest_time: f64,
    bank: f64,
    coil: f64,
}

impl Regime {
    fn text(&self) -> String {
        let Regime { load, other, .. } = self;
        let parts = match self.joined {
            Joined::Series => format!(
                "inductor choke from mid to x = 25 mH
                 resistor ballast from x to pad = {other} ohm
                 switch bypass from x to pad : open, closes at 1.937123 ms
                 resistor load from pad to ground = {load} ohm"
            ),
            Joined::Parallel => format!(
                "inductor choke from mid to ground = 25 mH
                 resistor load from mid to ground = {load} ohm
                 switch bypass from mid to x : open, closes at 1.937123 ms
                 resistor helper from x to ground = {other} ohm"
            ),
        };
        format!(
            "capacitor bank from top to ground = 10 uF, charged to 1 kV
             switch fire from top to mid : open, closes at 123.4567 us
             {parts}
             span 4.5 ms
             reading energy = energy into load
             reading crest = highest current through choke
             reading crest_time = time of highest current through choke - closing of fire
             reading bank_v = final voltage across bank
             reading coil_i = final current through choke\n"
        )
    }

    fn exact(&self) -> Exact {
        let (before, after) = match self.joined {
            Joined::Series => (self.load + self.other, self.load),
            Joined::Parallel => (self.load, self.load * self.other / (self.load + self.other)),
        };
        let first = Rlc {
            joined: self.joined,
            c: C,
            l: L,
            r: before,
        };
        let second = Rlc { r: after, ..first };
        let start = State { v: V0, i: 0.0 };
        let middle = first.after(start, BYPASSES - FIRES);
        let end = second.after(middle, SPAN - BYPASSES);
        let share = |r: f64| match self.joined {
            Joined::Series => self.load / r,
            Joined::Parallel => r / self.load,
        };
        let energy = (first.stored(start) - first.stored(middle)) * share(before)
            + (second.stored(middle) - second.stored(end)) * share(after);
        let (crest_time, crest) = first.crest(V0);
        Exact {
            energy,
            crest,
            crest_time,
            bank: end.v,
            coil: end.i,
        }
    }
}

fn orders(errors: &[f64]) -> Vec<f64> {
    errors
        .windows(2)
        .map(|e| (e[0] / e[1]).abs().log2())
        .collect()
}

/// Fixed steps, halved again and again: the error must shrink by two to the order.
fn check_order(method: &str, order: f64, steps: &[f64]) {
    for regime in &REGIMES {
        let exact = regime.exact();
        let stage = Stage::new(&format!("{}integrate by {method}\n", regime.text()));
        let shots: Vec<Shot> = steps.iter().map(|h| stage.shot(Mesh::Fixed(*h))).collect();
        let wanted = [
            ("energy", exact.energy),
            ("crest", exact.crest),
            ("bank_v", exact.bank),
            ("coil_i", exact.coil),
        ];
        for (name, value) in wanted {
            let errors: Vec<f64> = shots
                .iter()
                .map(|s| stage.number(s, name) - value)
                .collect();
            let seen = orders(&errors);
            let last = seen.last().copied().unwrap_or(f64::NAN);
            assert!(
                (last - order).abs() <= 0.05,
                "{method}, {}, {name}: orders {seen:.3?}, errors {errors:?} of {value}",
                regime.name
            );
        }
    }
}

#[test]
fn the_trapezoidal_rule_is_of_order_two() {
    check_order("trapezoidal rule", 2.0, &[16e-6, 8e-6, 4e-6, 2e-6]);
}

#[test]
fn backward_euler_is_of_order_one() {
    check_order("backward Euler", 1.0, &[8e-6, 4e-6, 2e-6, 1e-6]);
}

/// What the tool itself promises, in every regime and by either integrator: the error is inside
/// the stated bound, and the bound within the allowed error of 1 ppm. Backward Euler is given
/// 100 ppm, which it reaches in reasonable time.
#[test]
fn every_regime_is_right_within_its_bound() {
    for (method, allowed) in [("trapezoidal rule", 1e-6), ("backward Euler", 1e-4)] {
        for regime in &REGIMES {
            let exact = regime.exact();
            let text = format!(
                "{}integrate by {method}\nerror at most {} ppm\n",
                regime.text(),
                allowed * 1e6
            );
            let fired = fire(&text);
            let wanted = [
                ("energy", exact.energy, exact.energy),
                ("crest", exact.crest, exact.crest),
                ("crest_time", exact.crest_time, exact.crest_time),
                ("bank_v", exact.bank, V0),
                ("coil_i", exact.coil, exact.crest),
            ];
            for (name, value, scale) in wanted {
                let got = reading(&fired, name);
                let error = (got.value - value).abs();
                assert!(
                    error <= got.bound + 1e-13 * scale && got.bound <= 1.000_001 * allowed * scale,
                    "{method}, {}, {name}: off by {error:.2e}, bound {:.2e}, of {value}",
                    regime.name,
                    got.bound
                );
            }
        }
    }
}

/// `time step` in the text does the same as a fixed mesh in code.
#[test]
fn a_stated_time_step_is_kept() {
    let text = format!("{}time step 10 us\n", REGIMES[0].text());
    let fired = fire(&text);
    let largest = fired.shot.largest_step;
    assert!(largest <= 10e-6 * (1.0 + 1e-12), "{largest}");
    let exact = REGIMES[0].exact();
    let got = reading(&fired, "energy");
    assert!(
        (got.value - exact.energy).abs() <= got.bound,
        "{got:?} for {}",
        exact.energy
    );
}

/// F9: a bank cut off after a time T has delivered D (2 - D) of its energy, D = 1 - exp(-T/RC);
/// a second phase as long delivers the same share of the rest.
#[test]
fn truncated_exponentials() {
    let (c, r, v, t) = (110e-6, 50.0, 1800.0_f64, 5.774_021_684_74e-3_f64);
    let fired = fire(
        "capacitor bank from top to ground = 110 uF, charged to 1.8 kV
         switch ne from top to east : open, closes at 1 ms, opens 5.77402168474 ms after closing of ne
         switch sw from west to ground : ganged with ne
         switch nw from top to west : open, closes 0.7 ms after opening of ne,
             opens 5.77402168474 ms after closing of nw
         switch se from east to ground : ganged with nw
         resistor chest from east to west = 50 ohm
         span 15 ms
         reading first_j = energy into chest while ne is closed
         reading second_j = energy into chest while nw is closed
         reading swept = charge through chest
         reading gross = gross charge through chest
         reading droop = tilt of voltage across chest between closing of ne and opening of ne
         reading left_v = final voltage across bank
         reading mean_v = mean voltage across bank while ne is closed",
    );
    let (d, e0) = (-(-t / (r * c)).exp_m1(), 0.5 * c * v * v);
    let kept = 1.0 - d;
    let wanted = [
        ("first_j", e0 * d * (2.0 - d)),
        ("second_j", e0 * kept * kept * d * (2.0 - d)),
        ("swept", c * v * d - c * v * kept * d),
        ("gross", c * v * d + c * v * kept * d),
        ("droop", d),
        ("left_v", v * kept * kept),
        ("mean_v", v * d * r * c / t),
    ];
    for (name, value) in wanted {
        let got = reading(&fired, name);
        let error = (got.value - value).abs();
        assert!(
            error <= got.bound + 1e-12 * value,
            "{name}: {got:?}, exact {value}"
        );
    }
}

/// F9 again, but the switch opens at a level: the tilt is stated and the time follows.
#[test]
fn a_level_cuts_the_exponential_where_it_should() {
    let fired = fire(
        "capacitor bank from top to ground = 110 uF, charged to 1.8 kV
         switch gate from top to pad : open, closes at 1 ms, opens when voltage across bank falls below 630 V
         resistor chest from pad to ground = 50 ohm
         span 12 ms
         reading lasts = opening of gate - closing of gate
         reading dose = energy into chest",
    );
    let rc = 110e-6 * 50.0_f64;
    let e0 = 0.5 * 110e-6 * 1800.0_f64.powi(2);
    for (name, value) in [
        ("lasts", rc * (1800.0_f64 / 630.0).ln()),
        ("dose", e0 * (1.0 - 0.35_f64.powi(2))),
    ] {
        let got = reading(&fired, name);
        assert!(
            (got.value - value).abs() <= got.bound + 1e-12 * value,
            "{name}: {got:?}, exact {value}"
        );
    }
}

/// F10: two capacitors joined by an ideal switch keep their charge and lose
/// C1 C2 (V1 - V2)² / 2 (C1 + C2) in it.
#[test]
fn charge_is_shared_to_rounding() {
    for (c1, v1, c2, v2) in [
        (4e-6_f64, 100.0_f64, 6e-6_f64, 0.0_f64),
        (47e-6, 450.0, 0.1e-6, -200.0),
        (1e-9, 5000.0, 33e-6, 3.0),
    ] {
        let text = format!(
            "capacitor a from x to ground = {c1:e} F, charged to {v1} V
             capacitor b from y to ground = {c2:e} F, charged to {v2} V
             switch join from x to y : open, closes at 1 ms
             span 2 ms
             reading common = final voltage across b
             reading passed = charge through join
             reading burnt = heat in join"
        );
        let fired = fire(&text);
        let sum = c1 + c2;
        let wanted = [
            ("common", (c1 * v1 + c2 * v2) / sum, v1),
            ("passed", c1 * c2 * (v1 - v2) / sum, 0.0),
            ("burnt", c1 * c2 * (v1 - v2) * (v1 - v2) / (2.0 * sum), 0.0),
        ];
        for (name, value, scale) in wanted {
            let got = reading(&fired, name);
            let allowed = 1e-12 * f64::max(value.abs(), scale);
            assert!(
                (got.value - value).abs() <= allowed,
                "{name}: {got:?}, exact {value}"
            );
        }
        let event = &fired.events[0].0;
        assert!(
            (event.charge - wanted[1].1).abs() <= 1e-12 * wanted[1].1.abs(),
            "{event:?}"
        );
        assert!(
            (event.loss - wanted[2].1).abs() <= 1e-12 * wanted[2].1,
            "{event:?}"
        );
    }
}

/// F11: two coils forced in series keep their flux: i = (L1 i1 + L2 i2) / (L1 + L2), and
/// L1 L2 (i1 - i2)² / 2 (L1 + L2) is lost in the switch that opens.
#[test]
fn flux_is_shared_to_rounding() {
    let (l1, i1, l2, i2) = (30e-3, 4.0, 50e-3, 0.5);
    let fired = fire(
        "inductor one from ground to x = 30 mH, carrying 4 A
         inductor two from x to ground = 50 mH, carrying 0.5 A
         switch part from x to ground : closed, opens at 1 ms
         span 2 ms
         reading common = final current through two
         reading flux_ = area of voltage across part
         reading burnt = heat in part",
    );
    let sum = l1 + l2;
    let wanted = [
        ("common", (l1 * i1 + l2 * i2) / sum),
        ("burnt", l1 * l2 * (i1 - i2) * (i1 - i2) / (2.0 * sum)),
        ("flux_", l1 * l2 * (i1 - i2) / sum),
    ];
    for (name, value) in wanted {
        let got = reading(&fired, name);
        assert!(
            (got.value - value).abs() <= 1e-12 * value.abs(),
            "{name}: {got:?}, exact {value}"
        );
    }
}

/// A coil cut off loses all it held, L i² / 2, in the switch, and its flux is the impulse.
#[test]
fn a_coil_cut_off_loses_what_it_held() {
    let fired = fire(
        "inductor coil from x to ground = 30 mH, carrying 4 A
         switch cut from ground to x : closed, opens at 1 ms
         span 2 ms
         reading burnt = heat in cut
         reading rest_i = final current through coil",
    );
    let event = &fired.events[0].0;
    assert!((event.flux.abs() - 0.12).abs() <= 1e-12 * 0.12, "{event:?}");
    assert!((reading(&fired, "burnt").value - 0.24).abs() <= 1e-12 * 0.24);
    assert_eq!(reading(&fired, "rest_i").value, 0.0);
}

//! Circuits of more than 20 states against a general-purpose solver of `M y' = f(t, y)` with
//! singular M: Radau IIA of order 5 from the crate differential-equations, whose equations are
//! written here by hand from Kirchhoff's laws and share nothing with the program.
//!
//! With its steps kept to a four-thousandth of the span and its Newton iteration to 1e-10 that solver
//! is good for 1e-12 here (by default it was off by 1e-4, unnoticed); 1e-11 of each scale is asked
//! beside the stated bound.

use std::fmt::Write;

use differential_equations::prelude::*;
use pulsewright_study::{Fired, Found};
use pulsewright_tests::fire;

const CELLS: usize = 12;
const STATES: usize = 2 * CELLS;
/// The states, one algebraic unknown, one energy.
const N: usize = STATES + 2;
type Vector = [f64; N];

fn solve(problem: &impl DAE<f64, Vector>, span: f64, start: Vector) -> Vector {
    let method = ImplicitRungeKutta::radau5()
        .rtol(1e-10)
        .atol(1e-9)
        .h0(1e-9 * span)
        .h_max(span / 4000.0)
        .newton_tol(1e-10)
        .max_newton_iter(10)
        .max_steps(1_000_000);
    let solution = IVP::dae(problem, 0.0, span, start).method(method).solve();
    match solution {
        Ok(s) => *s.last().unwrap().1,
        Err(e) => panic!("the reference gave no solution: {e:?}"),
    }
}

fn value(fired: &Fired, name: &str) -> (f64, f64) {
    let reading = fired.readings.iter().find(|r| r.name == name).unwrap();
    match reading.answer.found {
        Found::Value { value, bound } => (value, bound),
        ref other => panic!("{name}: {other:?}"),
    }
}

fn compare(text: &str, expected: &[(&str, f64, f64)]) {
    for method in ["trapezoidal rule", "exact propagation"] {
        let fired = fire(&format!("{text}integrate by {method}\n"));
        for (name, exact, scale) in expected {
            let (found, bound) = value(&fired, name);
            assert!(
                (found - exact).abs() <= bound + 1e-11 * scale,
                "{name} by {method}: {found} ± {bound:e}, by the other solver {exact}"
            );
        }
    }
}

/// A charged pulse-forming network of twelve sections with winding and leakage into 5 ohm.
struct Line;

impl Line {
    const C: f64 = 80e-9;
    const L: f64 = 2e-6;
    const WINDING: f64 = 0.1;
    const LEAK: f64 = 10e3;
    const LOAD: f64 = 5.0;
    const SPAN: f64 = 12e-6;
}

/// `v_k` of section k, `i_k` from its node to the one before, then the load's voltage, its energy.
impl DAE<f64, Vector> for Line {
    fn diff(&self, _: f64, y: &Vector, f: &mut Vector) {
        for k in 0..CELLS {
            let before = if k == 0 { y[STATES] } else { y[k - 1] };
            let from_next = if k + 1 < CELLS { y[CELLS + k + 1] } else { 0.0 };
            f[k] = (from_next - y[CELLS + k] - y[k] / Line::LEAK) / Line::C;
            f[CELLS + k] = (y[k] - before - Line::WINDING * y[CELLS + k]) / Line::L;
        }
        f[STATES] = y[CELLS] - y[STATES] / Line::LOAD;
        f[STATES + 1] = y[STATES] * y[STATES] / Line::LOAD;
    }

    fn mass(&self, m: &mut Matrix<f64>) {
        for k in (0..N).filter(|k| *k != STATES) {
            m[(k, k)] = 1.0;
        }
    }
}

#[test]
fn a_line_of_twelve_sections() {
    let mut text = String::new();
    for k in 1..=CELLS {
        let before = if k == 1 {
            "out".to_owned()
        } else {
            format!("n{}", k - 1)
        };
        writeln!(
            text,
            "capacitor c{k} from n{k} to ground = 80 nF, charged to 1 kV, leakage 10 kohm\n\
             inductor l{k} from n{k} to {before} = 2 uH, winding 0.1 ohm"
        )
        .unwrap();
    }
    text.push_str(
        "resistor load from out to ground = 5 ohm\n\
         span 12 us\n\
         reading dose = energy into load\n\
         reading ends = final voltage across load\n\
         reading far = final voltage at n12\n\
         reading mid = final current through l6\n",
    );
    let mut start = [0.0; N];
    start[..CELLS].fill(1e3);
    let end = solve(&Line, Line::SPAN, start);
    compare(
        &text,
        &[
            ("dose", end[STATES + 1], end[STATES + 1]),
            ("ends", end[STATES], 500.0),
            ("far", end[CELLS - 1], 1e3),
            ("mid", end[CELLS + 5], 100.0),
        ],
    );
}

/// Twelve resonant cells on one source, their coils coupled in pairs.
struct Cells;

impl Cells {
    const SPAN: f64 = 400e-6;
    const COUPLING: f64 = 0.4;

    fn farads(k: usize) -> f64 {
        (1.0 + 0.25 * k as f64) * 1e-6
    }

    fn henrys(k: usize) -> f64 {
        (0.5 + 0.1 * k as f64) * 1e-3
    }

    fn ohms(k: usize) -> f64 {
        20.0 + 5.0 * k as f64
    }

    fn feed(t: f64) -> f64 {
        100.0 * (-t / 300e-6).exp() * (std::f64::consts::TAU * 7e3 * t).sin()
    }
}

/// `v_k` and `i_k` of each cell, then the source's current and what it gave.
impl DAE<f64, Vector> for Cells {
    fn diff(&self, t: f64, y: &Vector, f: &mut Vector) {
        let feed = Cells::feed(t);
        let mut drawn = 0.0;
        for k in 0..CELLS {
            let i = (feed - y[k]) / Cells::ohms(k);
            drawn += i;
            f[k] = i - y[CELLS + k];
            f[CELLS + k] = y[k] - 2.0 * y[CELLS + k];
        }
        f[STATES] = drawn - y[STATES];
        f[STATES + 1] = feed * y[STATES];
    }

    fn mass(&self, m: &mut Matrix<f64>) {
        for k in 0..CELLS {
            m[(k, k)] = Cells::farads(k);
            m[(CELLS + k, CELLS + k)] = Cells::henrys(k);
            let other = k ^ 1;
            let mutual = Cells::COUPLING * (Cells::henrys(k) * Cells::henrys(other)).sqrt();
            m[(CELLS + k, CELLS + other)] = mutual;
        }
        m[(STATES + 1, STATES + 1)] = 1.0;
    }
}

#[test]
fn twelve_resonant_cells_coupled_in_pairs() {
    let mut text = String::from(
        "voltage feed from s to ground = 100 V * exp(-t / 300 us) * sin(2 * pi * 7 kHz * t)\n",
    );
    for k in 0..CELLS {
        writeln!(
            text,
            "resistor r{k} from s to n{k} = {:e} ohm\n\
             capacitor c{k} from n{k} to ground = {:e} F\n\
             inductor l{k} from n{k} to ground = {:e} H, winding 2 ohm",
            Cells::ohms(k),
            Cells::farads(k),
            Cells::henrys(k)
        )
        .unwrap();
    }
    for k in (0..CELLS).step_by(2) {
        writeln!(text, "coupling m{k} between l{k} and l{} = 0.4", k + 1).unwrap();
    }
    text.push_str(
        "span 400 us\n\
         reading given = -energy into feed\n\
         reading v0 = final voltage at n0\n\
         reading v11 = final voltage at n11\n\
         reading i5 = final current through l5\n",
    );
    let end = solve(&Cells, Cells::SPAN, [0.0; N]);
    compare(
        &text,
        &[
            ("given", end[STATES + 1], end[STATES + 1].abs()),
            ("v0", end[0], 10.0),
            ("v11", end[CELLS - 1], 10.0),
            ("i5", end[CELLS + 5], 1.0),
        ],
    );
}

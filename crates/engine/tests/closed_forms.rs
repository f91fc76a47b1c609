//! Shots of small circuits, built by hand, against closed forms.

#![allow(clippy::unwrap_used, reason = "a test may end by panic")]

use pulsewright_circuit::draft::Method;
use pulsewright_circuit::formula::{Formula, Probe};
use pulsewright_circuit::schedule::Passing;
use pulsewright_circuit::setup::{
    Element, Limits, Ohms, SetAction, SetControl, SetPart, SetTrigger, Setup,
};
use pulsewright_engine::shot::Shot;
use pulsewright_engine::{Mesh, Request, fire};

fn setup(nodes: &[&str], span: f64, parts: Vec<(&str, Element)>) -> Setup {
    Setup {
        nodes: std::iter::once("ground")
            .chain(nodes.iter().copied())
            .map(String::from)
            .collect(),
        parts: parts
            .into_iter()
            .map(|(n, element)| SetPart {
                name: n.into(),
                element,
            })
            .collect(),
        span,
        steady: false,
        method: Method::Trapezoidal,
        error: 1e-6,
        step: None,
        limits: Limits::default(),
    }
}

fn resistor(a: usize, b: usize, ohms: f64) -> Element {
    Element::Resistor {
        a,
        b,
        ohms: Ohms::Finite(ohms),
    }
}

fn capacitor(a: usize, b: usize, farads: f64, volts: f64) -> Element {
    Element::Capacitor {
        a,
        b,
        farads,
        charged: Some(volts),
        series: 0.0,
        leakage: None,
    }
}

fn inductor(a: usize, b: usize, henrys: f64, winding: f64) -> Element {
    Element::Inductor {
        a,
        b,
        henrys,
        carrying: None,
        winding,
    }
}

fn switch(a: usize, b: usize, closed: bool, actions: &[(usize, f64)]) -> Element {
    let actions = actions
        .iter()
        .map(|&(state, t)| SetAction {
            state,
            triggers: vec![SetTrigger::At(t)],
        })
        .collect();
    Element::Switch {
        a,
        b,
        control: SetControl::Schedule { closed, actions },
        contact: None,
        insulation: None,
    }
}

/// Value of probe `p` at the end.
fn end(shot: &Shot, p: usize) -> f64 {
    *shot.stretches.last().unwrap().values[p].last().unwrap()
}

fn levels(setup: &Setup, probes: &[Probe], n: u32) -> Vec<Shot> {
    let first = fire(
        setup,
        &Request::new(probes.to_vec(), Mesh::Chosen { tolerance: 1e-3 }),
    )
    .unwrap();
    let mut all = vec![];
    for k in 1..n {
        all.push(
            fire(
                setup,
                &Request::new(
                    probes.to_vec(),
                    Mesh::Halved {
                        of: &first,
                        times: k,
                    },
                ),
            )
            .unwrap(),
        );
    }
    all.insert(0, first);
    all
}

fn stage() -> Setup {
    setup(
        &["top", "mid", "pad"],
        5e-3,
        vec![
            ("bank", capacitor(1, 0, 32e-6, 4500.0)),
            ("fire", switch(1, 2, false, &[(1, 1e-6)])),
            ("choke", inductor(2, 3, 90e-3, 6.0)),
            ("load", resistor(3, 0, 40.0)),
        ],
    )
}

#[test]
fn a_series_discharge_converges_at_order_two() {
    let s = stage();
    let shots = levels(&s, &[Probe::CurrentThrough(3), Probe::VoltageAcross(0)], 5);
    let (r, l, c, v): (f64, f64, f64, f64) = (46.0, 90e-3, 32e-6, 4500.0);
    let (a, t) = (r / (2.0 * l), 5e-3 - 1e-6);
    let w = (1.0 / (l * c) - a * a).sqrt();
    let i = v / (w * l) * (-a * t).exp() * (w * t).sin();
    let e: Vec<f64> = shots.iter().map(|x| end(x, 0) - i).collect();
    for p in e.windows(2) {
        let ratio = p[0] / p[1];
        assert!(
            (3.7..4.3).contains(&ratio),
            "errors {e:?}, steps {}",
            shots[0].steps
        );
    }
    let richardson = (4.0 * e[4] - e[3]) / 3.0;
    assert!(richardson.abs() < 1e-6 * i.abs(), "{richardson:e}");
}

#[test]
fn the_balance_closes_to_rounding() {
    let s = stage();
    for shot in levels(&s, &[], 3) {
        let b = &shot.balance;
        let residual = b.stored_start - b.stored_end - b.dissipated.iter().sum::<f64>() - b.lost;
        assert!(
            residual.abs() < 1e-11 * b.stored_start,
            "{residual:e} of {b:?}"
        );
    }
}

#[test]
fn two_capacitors_share_their_charge() {
    let s = setup(
        &["a", "b"],
        2e-3,
        vec![
            ("left", capacitor(1, 0, 10e-6, 100.0)),
            ("right", capacitor(2, 0, 22e-6, 0.0)),
            ("bridge", switch(1, 2, false, &[(1, 1e-3)])),
        ],
    );
    let shot = fire(
        &s,
        &Request::new(
            vec![Probe::VoltageAcross(0), Probe::CurrentThrough(2)],
            Mesh::Chosen { tolerance: 1e-3 },
        ),
    )
    .unwrap();
    let e = &shot.events[0];
    assert!((e.charge - 0.0006875).abs() < 1e-12 * 0.0006875, "{e:?}");
    assert!((e.loss - 0.034375).abs() < 1e-12 * 0.034375, "{e:?}");
    assert!((end(&shot, 0) - 31.25).abs() < 31.25e-12);
    assert_eq!(shot.jumps[1].impulses[1], e.charge);
}

#[test]
fn an_inductor_cut_off_loses_its_energy_in_the_switch() {
    let s = setup(
        &["rail", "x", "y"],
        10e-3,
        vec![
            (
                "feed",
                Element::Voltage {
                    a: 1,
                    b: 0,
                    source: Formula::Number(12.0),
                },
            ),
            ("coilr", resistor(1, 2, 6.0)),
            ("coil", inductor(2, 3, 10e-3, 0.0)),
            ("cut", switch(3, 0, true, &[(0, 5e-3)])),
        ],
    );
    let shots = levels(&s, &[Probe::VoltageAcross(3), Probe::CurrentThrough(2)], 4);
    let i = 2.0 * (1.0 - (-5e-3_f64 * 600.0).exp());
    let shot = &shots[3];
    assert!((shot.events[0].loss - 0.5 * 10e-3 * i * i).abs() < 1e-5 * 0.018);
    assert_eq!(end(shot, 1), 0.0);
    assert!((end(shot, 0) - 12.0).abs() < 1e-9);
    let b = &shot.balance;
    let residual = b.stored_start + b.supplied.iter().sum::<f64>()
        - b.stored_end
        - b.dissipated.iter().sum::<f64>()
        - b.lost;
    assert!(residual.abs() < 1e-11, "{residual:e}");
}

#[test]
fn a_diode_blocks_at_the_zero_of_its_current() {
    let s = setup(
        &["top", "x", "y", "z"],
        7.441e-3,
        vec![
            ("bank", capacitor(1, 0, 30e-6, 800.0)),
            ("fire", switch(1, 2, false, &[(1, 1e-6)])),
            (
                "valve",
                Element::Diode {
                    a: 2,
                    b: 3,
                    threshold: 0.0,
                    slope: 0.0,
                },
            ),
            ("coil", inductor(3, 4, 20e-3, 0.0)),
            ("load", resistor(4, 0, 10.0)),
        ],
    );
    let shots = levels(&s, &[Probe::VoltageAcross(0), Probe::VoltageAcross(2)], 5);
    let blocks: Vec<f64> = shots
        .iter()
        .map(|x| {
            x.events
                .iter()
                .find(|e| e.part == 2 && e.state == 0 && e.time > 1e-5)
                .unwrap()
                .time
                - 0.0024814194535630755
        })
        .collect();
    for p in blocks.windows(2) {
        assert!((3.5..4.5).contains(&(p[0] / p[1])), "{blocks:?}");
    }
    for probe in [0, 1] {
        let v: Vec<f64> = shots
            .iter()
            .map(|x| end(x, probe) + 430.3104238996057)
            .collect();
        assert!(
            ((4.0 * v[4] - v[3]) / 3.0).abs() < 1e-6 * 430.0,
            "{v:?}, steps {}",
            shots[0].steps
        );
    }
}

#[test]
fn a_free_wheeling_diode_takes_the_current_over_without_loss() {
    let s = setup(
        &["rail", "x", "y"],
        20e-3,
        vec![
            (
                "feed",
                Element::Voltage {
                    a: 1,
                    b: 0,
                    source: Formula::Number(24.0),
                },
            ),
            ("chop", switch(1, 2, true, &[(0, 10e-3)])),
            (
                "wheel",
                Element::Diode {
                    a: 0,
                    b: 2,
                    threshold: 0.0,
                    slope: 0.0,
                },
            ),
            ("coil", inductor(2, 3, 40e-3, 0.0)),
            ("load", resistor(3, 0, 8.0)),
        ],
    );
    let shots = levels(&s, &[Probe::CurrentThrough(3), Probe::Voltage(2, 0)], 4);
    let x = &shots[3];
    assert_eq!(x.balance.lost, 0.0);
    assert!((end(x, 0) - 0.35105893304363556).abs() < 1e-5);
    assert_eq!(end(x, 1), 0.0);
}

#[test]
fn a_level_ends_a_discharge_where_it_should() {
    let mut gate = switch(1, 2, false, &[(1, 1e-3)]);
    if let Element::Switch {
        control: SetControl::Schedule { actions, .. },
        ..
    } = &mut gate
    {
        actions.push(SetAction {
            state: 0,
            triggers: vec![SetTrigger::When {
                signal: Formula::Probe(Probe::VoltageAcross(0)),
                passing: Passing::FallsBelow,
                level: 630.0,
            }],
        });
    }
    let s = setup(
        &["top", "pad"],
        36.4e-3,
        vec![
            ("bank", capacitor(1, 0, 150e-6, 1800.0)),
            ("gate", gate),
            ("chest", resistor(2, 0, 75.0)),
        ],
    );
    let shots = levels(&s, &[Probe::VoltageAcross(0)], 5);
    let t: Vec<f64> = shots
        .iter()
        .map(|x| x.events[1].time - 0.012810498900610125)
        .collect();
    for p in t.windows(2) {
        assert!((3.5..4.5).contains(&(p[0] / p[1])), "{t:?}");
    }
    assert!((end(&shots[0], 0) - 630.0).abs() < 1e-10);
}

#[test]
fn nine_decades_take_few_steps_and_do_not_ring() {
    let s = setup(
        &["a", "b"],
        1.0,
        vec![
            ("big", capacitor(1, 0, 1e-3, 1000.0)),
            ("fire", switch(1, 2, false, &[(1, 1e-3)])),
            ("small", capacitor(2, 0, 1e-12, 0.0)),
            ("head", resistor(1, 2, 1e3)),
            ("load", resistor(2, 0, 1e3)),
        ],
    );
    let mut t = s.clone();
    t.parts[1].element = Element::Wire { a: 2, b: 2 };
    let shots = levels(&t, &[Probe::VoltageAcross(2)], 4);
    let want = 500.0 * (-0.5_f64).exp();
    for x in &shots {
        assert!(
            (end(x, 0) - want).abs() < 1e-3 * want,
            "{} for {want}",
            end(x, 0)
        );
    }
    assert!(shots[3].steps < 10_000, "{}", shots[3].steps);
    let e: Vec<f64> = shots.iter().map(|x| end(x, 0) - want).collect();
    assert!((3.0..5.0).contains(&(e[2] / e[3])), "{e:?}");
}

//! Impulses at events against conservation of charge and flux, and the two solvers against each
//! other.
#![allow(clippy::unwrap_used, reason = "a test may end by panic")]

use pulsewright_circuit::draft::Method;
use pulsewright_circuit::formula::{Formula, Probe};
use pulsewright_circuit::setup::{
    Element, Limits, Ohms, SetAction, SetControl, SetPart, SetTrigger, Setup,
};
use pulsewright_engine::linear::DENSE_AT_MOST;
use pulsewright_engine::{Failure, Mesh, Request, Shot, fire, survey};

fn setup(nodes: usize, span: f64, parts: Vec<Element>) -> Setup {
    Setup {
        nodes: (0..=nodes)
            .map(|k| {
                if k == 0 {
                    "ground".into()
                } else {
                    format!("n{k}")
                }
            })
            .collect(),
        parts: parts
            .into_iter()
            .enumerate()
            .map(|(k, element)| SetPart {
                name: format!("p{k}"),
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

fn inductor(a: usize, b: usize, henrys: f64, amperes: f64) -> Element {
    Element::Inductor {
        a,
        b,
        henrys,
        carrying: Some(amperes),
        winding: 0.0,
    }
}

fn source(a: usize, b: usize, volts: f64) -> Element {
    Element::Voltage {
        a,
        b,
        source: Formula::Number(volts),
    }
}

fn switch(a: usize, b: usize, closed: bool, then: Option<(usize, f64)>) -> Element {
    let actions = then.into_iter().map(|(state, t)| SetAction {
        state,
        triggers: vec![SetTrigger::At(t)],
    });
    let control = SetControl::Schedule {
        closed,
        actions: actions.collect(),
    };
    Element::Switch {
        a,
        b,
        control,
        contact: None,
        insulation: None,
    }
}

fn shoot(setup: &Setup, probes: &[Probe]) -> Shot {
    fire(
        setup,
        &Request::new(probes.to_vec(), Mesh::Chosen { tolerance: 1e-3 }),
    )
    .unwrap()
}

fn last(shot: &Shot, probe: usize) -> f64 {
    *shot.stretches.last().unwrap().values[probe].last().unwrap()
}

fn close(got: f64, want: f64) {
    assert!((got - want).abs() <= 1e-12 * want.abs(), "{got} for {want}");
}

/// i = (L1 i1 + L2 i2) / (L1 + L2), lost L1 L2 (i1 - i2)² / (2 (L1 + L2)), flux across the
/// opened switch L1 L2 (i1 - i2) / (L1 + L2); a closed form of textbooks (common practice).
#[test]
fn two_inductors_forced_in_series_keep_their_flux() {
    let (l1, i1, l2, i2) = (20e-3, 60.0, 5e-3, 10.0);
    let s = setup(
        1,
        2e-3,
        vec![
            inductor(0, 1, l1, i1),
            inductor(1, 0, l2, i2),
            switch(1, 0, true, Some((0, 1e-3))),
        ],
    );
    let shot = shoot(&s, &[Probe::CurrentThrough(0), Probe::CurrentThrough(1)]);
    let e = &shot.events[0];
    close(last(&shot, 0), (l1 * i1 + l2 * i2) / (l1 + l2));
    close(last(&shot, 1), (l1 * i1 + l2 * i2) / (l1 + l2));
    close(e.loss, l1 * l2 * (i1 - i2).powi(2) / (2.0 * (l1 + l2)));
    close(e.flux.abs(), l1 * l2 * (i1 - i2) / (l1 + l2));
    close(
        shot.balance.stored_start - shot.balance.lost,
        shot.balance.stored_end,
    );
}

#[test]
fn three_capacitors_closed_onto_each_other_keep_their_charge() {
    let (c, v) = ([3e-6, 5e-6, 7e-6], [100.0, -40.0, 12.0]);
    let s = setup(
        3,
        2e-3,
        vec![
            capacitor(1, 0, c[0], v[0]),
            capacitor(2, 0, c[1], v[1]),
            capacitor(3, 0, c[2], v[2]),
            switch(1, 2, false, Some((1, 1e-3))),
            switch(2, 3, false, Some((1, 1e-3))),
        ],
    );
    let shot = shoot(&s, &[Probe::VoltageAcross(0), Probe::VoltageAcross(2)]);
    let charge: f64 = c.iter().zip(v).map(|(c, v)| c * v).sum();
    let total: f64 = c.iter().sum();
    close(last(&shot, 0), charge / total);
    close(last(&shot, 1), charge / total);
    close(shot.events[0].charge, c[0] * (v[0] - charge / total));
    let before: f64 = c.iter().zip(v).map(|(c, v)| 0.5 * c * v * v).sum();
    close(shot.balance.lost, before - 0.5 * charge * charge / total);
}

#[test]
fn stated_voltages_that_contradict_each_other_are_equalised_at_the_start() {
    let s = setup(
        1,
        1e-3,
        vec![capacitor(1, 0, 1e-6, 100.0), capacitor(1, 0, 3e-6, 20.0)],
    );
    let shot = shoot(&s, &[Probe::VoltageAcross(0)]);
    close(last(&shot, 0), 40.0);
    close(shot.stated[0], 100.0);
    close(shot.balance.lost, 0.5 * 0.75e-6 * 80.0 * 80.0);
}

#[test]
fn a_loop_of_sources_that_a_switch_closes_is_named_before_firing_and_when_fired() {
    let s = setup(
        2,
        2e-3,
        vec![
            source(1, 0, 5.0),
            source(2, 0, 6.0),
            switch(1, 2, false, Some((1, 1e-3))),
            resistor(1, 0, 1.0),
        ],
    );
    let found = survey(&s);
    assert!(
        matches!(found.as_slice(), [Failure::SourceLoop { parts, time, .. }] if parts == &[0, 1, 2] && *time == 1e-3)
    );
    let failure = fire(&s, &Request::new(vec![], Mesh::Chosen { tolerance: 1e-3 })).unwrap_err();
    assert!(matches!(failure, Failure::SourceLoop { .. }));
}

#[test]
fn equal_sources_in_parallel_share_their_current_evenly() {
    let s = setup(
        1,
        1e-3,
        vec![source(1, 0, 6.0), source(1, 0, 6.0), resistor(1, 0, 3.0)],
    );
    let shot = shoot(&s, &[Probe::CurrentThrough(0), Probe::CurrentThrough(1)]);
    close(last(&shot, 0), -1.0);
    close(last(&shot, 1), -1.0);
}

/// The same ladder with few and with many idle parts beside it takes the dense and the sparse
/// solver; rounding alone may tell them apart.
#[test]
fn dense_and_sparse_solvers_fire_the_same_shot() {
    let ladder = |idle: usize| {
        let mut parts = vec![source(1, 0, 1.0), resistor(1, 2, 50.0)];
        let n = 8;
        for k in 0..n {
            parts.push(inductor(2 + k, 3 + k, 1e-6, 0.0));
            parts.push(capacitor(3 + k, 0, 0.4e-9, 0.0));
        }
        parts.push(resistor(2 + n, 0, 75.0));
        parts.extend((0..idle).map(|k| resistor(3 + n + k, 0, 1e3)));
        setup(2 + n + idle, 1e-6, parts)
    };
    let probes = [Probe::Voltage(10, 0), Probe::CurrentThrough(1)];
    let (small, large) = (
        shoot(&ladder(0), &probes),
        shoot(&ladder(DENSE_AT_MOST), &probes),
    );
    assert!(small.unknowns <= DENSE_AT_MOST && large.unknowns > DENSE_AT_MOST);
    assert_eq!(small.stretches[0].times, large.stretches[0].times);
    for p in 0..2 {
        for (a, b) in small.stretches[0].values[p]
            .iter()
            .zip(&large.stretches[0].values[p])
        {
            assert!((a - b).abs() < 1e-12, "{a} and {b}");
        }
    }
}

#[test]
fn coupled_inductors_keep_each_loops_flux_when_one_is_cut_off() {
    // The secondary is shorted: its flux stays, so cutting the primary's current off makes the
    // secondary's jump by M i / L2.
    let (l1, l2, k, i1) = (4e-3, 9e-3, 0.8, 5.0);
    let m = k * f64::sqrt(l1 * l2);
    let s = setup(
        2,
        2e-3,
        vec![
            inductor(0, 1, l1, i1),
            inductor(2, 0, l2, 0.0),
            Element::Coupling {
                first: 0,
                second: 1,
                factor: k,
            },
            switch(1, 0, true, Some((0, 1e-3))),
            Element::Wire { a: 2, b: 0 },
        ],
    );
    let shot = shoot(
        &s,
        &[
            Probe::CurrentThrough(0),
            Probe::CurrentThrough(1),
            Probe::FluxHeld(1),
        ],
    );
    assert_eq!(last(&shot, 0), 0.0);
    close(last(&shot, 1), m * i1 / l2);
    close(last(&shot, 2), m * i1);
    close(shot.events[0].loss, 0.5 * (l1 - m * m / l2) * i1 * i1);
}

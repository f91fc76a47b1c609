//! Topologies without an answer at the start and along the stated instants, without firing.

use pulsewright_circuit::setup::{Element, SetControl, SetTrigger, Setup};

use crate::failure::Failure;
use crate::network::Network;
use crate::topology::Topology;

/// Topologies without an answer at the start and along the stated instants of the schedules,
/// found from the graph alone. Each is listed once, with the instant at which it first forms.
/// Diodes are taken as blocking; what a level or a diode brings about shows when fired.
#[must_use]
pub fn survey(setup: &Setup) -> Vec<Failure> {
    let net = match Network::new(setup) {
        Ok(net) => net,
        Err(f) => return vec![f],
    };
    let mut found: Vec<Failure> = Vec::new();
    let mut states = net.start.clone();
    let has_valves = setup
        .parts
        .iter()
        .any(|p| matches!(p.element, Element::Diode { .. }));
    let mut look = |states: &[u8], time: f64| {
        if let Err(f) = Topology::new(&net, setup, states, time) {
            // A diode may yet give a cut current its way.
            let excused = has_valves && matches!(f, Failure::CurrentCut { .. });
            if !excused && !found.iter().any(|g| same_kind(g, &f)) {
                found.push(f);
            }
        }
    };
    look(&states, 0.0);
    for (time, part, state) in stated(setup) {
        for (p, one) in setup.parts.iter().enumerate() {
            let follows = matches!(one.element, Element::Switch { control: SetControl::Ganged(leader), .. } if leads(setup, leader) == part);
            if (p == part || follows) && time < setup.span {
                states[p] = state;
            }
        }
        if time < setup.span {
            look(&states, time);
        }
    }
    found
}

fn leads(setup: &Setup, mut part: usize) -> usize {
    for _ in 0..setup.parts.len() {
        match setup.parts.get(part).map(|p| &p.element) {
            Some(Element::Switch {
                control: SetControl::Ganged(other),
                ..
            }) => part = *other,
            _ => break,
        }
    }
    part
}

fn same_kind(a: &Failure, b: &Failure) -> bool {
    match (a, b) {
        (Failure::SourceLoop { parts: p, .. }, Failure::SourceLoop { parts: q, .. }) => p == q,
        (Failure::CurrentCut { parts: p, .. }, Failure::CurrentCut { parts: q, .. }) => p == q,
        _ => a == b,
    }
}

/// Every change at a stated instant, in order of time: (s, part, state).
fn stated(setup: &Setup) -> Vec<(f64, usize, u8)> {
    let mut all = Vec::new();
    for (part, p) in setup.parts.iter().enumerate() {
        let actions = match &p.element {
            Element::Switch {
                control: SetControl::Schedule { actions, .. },
                ..
            }
            | Element::Changeover { actions, .. } => actions,
            _ => continue,
        };
        for a in actions {
            // What follows an action that waits for something found is not known beforehand.
            let [SetTrigger::At(t)] = a.triggers.as_slice() else {
                break;
            };
            all.push((*t, part, u8::try_from(a.state).unwrap_or(0)));
        }
    }
    all.sort_by(|a, b| a.0.total_cmp(&b.0));
    all
}

//! Reads the recorded quantities off a point of the run.

use pulsewright_circuit::formula::{Jet, Leaves, Probe};
use pulsewright_circuit::setup::{Element, Ohms, SetEdge, Setup};

use crate::equations::Point;
use crate::forms::{Form, probe_form};
use crate::network::{Law, Network};
use crate::restart::Impulses;
use crate::shot::Event;
use crate::topology::{Mode, Topology};

/// How a probe is read in one topology.
#[derive(Clone, Debug)]
pub enum Reader {
    /// A linear form.
    Linear(Form),
    /// A sum of products of a voltage and a current.
    Power(Vec<(Form, Form)>),
    /// Energy of capacitances (branch index) and of pairs of inductances with their (mutual)
    /// inductance counted in full.
    Energy(Vec<(usize, f64)>, Vec<(usize, usize, f64)>),
}

impl Reader {
    /// How `probe` is read in a topology.
    #[must_use]
    pub fn new(net: &Network, setup: &Setup, modes: &[Mode], probe: Probe) -> Reader {
        if let Some(form) = probe_form(net, modes, probe) {
            return Reader::Linear(form);
        }
        match probe {
            Probe::PowerInto(part) => Reader::Power(
                ports(setup, part)
                    .into_iter()
                    .filter_map(|(v, i)| {
                        Some((probe_form(net, modes, v)?, probe_form(net, modes, i)?))
                    })
                    .collect(),
            ),
            Probe::EnergyHeld(part) => held(net, part),
            Probe::EnergyStored => Reader::Energy(
                net.capacitances
                    .iter()
                    .enumerate()
                    .map(|(c, x)| (c, x.farads))
                    .collect(),
                net.inductances
                    .iter()
                    .enumerate()
                    .flat_map(|(j, l)| l.henrys.iter().map(move |&(k, h)| (j, k, h)))
                    .collect(),
            ),
            _ => Reader::Linear(Form::default()),
        }
    }

    /// Value and rate at a point.
    #[must_use]
    pub fn read(&self, p: &Point) -> (f64, f64) {
        match self {
            Reader::Linear(f) => (f.value(p), f.rate(p)),
            Reader::Power(pairs) => pairs.iter().fold((0.0, 0.0), |(x, d), (v, i)| {
                let (v0, v1, i0, i1) = (v.value(p), v.rate(p), i.value(p), i.rate(p));
                (x + v0 * i0, d + v1 * i0 + v0 * i1)
            }),
            Reader::Energy(caps, coils) => {
                let (mut x, mut d) = (0.0, 0.0);
                for &(c, farads) in caps {
                    x += 0.5 * farads * p.vc[c] * p.vc[c];
                    d += farads * p.vc[c] * p.dvc[c];
                }
                for &(j, k, h) in coils {
                    x += 0.5 * h * p.il[j] * p.il[k];
                    d += 0.5 * h * (p.dil[j] * p.il[k] + p.il[j] * p.dil[k]);
                }
                (x, d)
            }
        }
    }
}

fn held(net: &Network, part: usize) -> Reader {
    if let Some(Some((j, k, m))) = net.mutual.get(part) {
        return Reader::Energy(Vec::new(), vec![(*j, *k, 2.0 * m)]);
    }
    let first = net
        .of_part
        .get(part)
        .filter(|r| !r.is_empty())
        .map(|r| r.start);
    match first.map(|b| &net.branches[b].law) {
        Some(Law::Capacitance(c)) => {
            Reader::Energy(vec![(*c, net.capacitances[*c].farads)], Vec::new())
        }
        Some(Law::Inductance(j)) => {
            Reader::Energy(Vec::new(), vec![(*j, *j, net.inductances[*j].henrys[0].1)])
        }
        _ => Reader::Energy(Vec::new(), Vec::new()),
    }
}

/// The (voltage, current) pairs at a part's terminals whose products add up to the power into
/// it: one pair, two for a changeover, none for a coupling.
#[must_use]
pub fn ports(setup: &Setup, part: usize) -> Vec<(Probe, Probe)> {
    match setup.parts.get(part).map(|p| &p.element) {
        None | Some(Element::Coupling { .. }) => Vec::new(),
        Some(Element::Changeover { .. }) => (0..2)
            .map(|k| (Probe::BranchVoltage(part, k), Probe::BranchCurrent(part, k)))
            .collect(),
        Some(_) => vec![(Probe::VoltageAcross(part), Probe::CurrentThrough(part))],
    }
}

/// The (voltage, current) pairs of what turns energy to heat in a part: itself for a resistor, a
/// switch or a diode; its series, leakage or winding resistance for the others.
#[must_use]
pub fn heat_ports(setup: &Setup, part: usize) -> Vec<(Probe, Probe)> {
    let branch = |k| (Probe::BranchVoltage(part, k), Probe::BranchCurrent(part, k));
    match setup.parts.get(part).map(|p| &p.element) {
        Some(
            Element::Resistor {
                ohms: Ohms::Finite(_),
                ..
            }
            | Element::Switch { .. }
            | Element::Diode { .. },
        ) => {
            vec![branch(0)]
        }
        Some(Element::Capacitor {
            series, leakage, ..
        }) => {
            let inner = usize::from(leakage.is_some()) + usize::from(*series > 0.0);
            (1..=inner).map(branch).collect()
        }
        Some(Element::Inductor { winding, .. }) if *winding > 0.0 => vec![branch(1)],
        Some(Element::Changeover { .. }) => (0..2).map(branch).collect(),
        _ => Vec::new(),
    }
}

/// Whether a probe depends on the potential at which an island is held.
#[must_use]
pub fn floats(net: &Network, topology: &Topology, probe: Probe) -> bool {
    let across = |part: usize| {
        net.ends
            .get(part)
            .is_some_and(|&(a, b)| topology.floats(a, b))
    };
    match probe {
        Probe::Voltage(a, b) => topology.floats(a, b),
        Probe::VoltageAcross(part) => across(part),
        Probe::BranchVoltage(part, k) => net
            .of_part
            .get(part)
            .and_then(|r| net.branches.get(r.start + k))
            .is_some_and(|b| topology.floats(b.a, b.b)),
        _ => false,
    }
}

/// The impulse of a probe: flux for a voltage, charge for a current, 0 for anything else.
#[must_use]
pub fn impulse(net: &Network, probe: Probe, impulses: &Impulses) -> f64 {
    let branch = |part: usize, k: usize| {
        net.of_part
            .get(part)
            .map(|r| r.start + k)
            .filter(|&b| b < net.branches.len())
    };
    match probe {
        Probe::Voltage(a, b) => impulses.flux_across(a, b),
        Probe::VoltageAcross(part) => net
            .ends
            .get(part)
            .map_or(0.0, |&(a, b)| impulses.flux_across(a, b)),
        Probe::CurrentThrough(part) => net
            .terminal(part)
            .into_iter()
            .map(|(k, sign)| sign * impulses.charge[k])
            .sum(),
        Probe::BranchVoltage(part, k) => branch(part, k).map_or(0.0, |b| {
            impulses.flux_across(net.branches[b].a, net.branches[b].b)
        }),
        Probe::BranchCurrent(part, k) => branch(part, k).map_or(0.0, |b| impulses.charge[b]),
        _ => 0.0,
    }
}

/// Leaves of a formula: quantities at a point, and edges from the event log.
pub struct AtPoint<'a> {
    /// The circuit's branches.
    pub net: &'a Network,
    /// The setup.
    pub setup: &'a Setup,
    /// What the branches are.
    pub modes: &'a [Mode],
    /// The point.
    pub point: &'a Point,
    /// The log so far.
    pub events: &'a [Event],
}

impl Leaves for AtPoint<'_> {
    fn probe(&self, probe: Probe) -> Jet {
        let (value, rate) = Reader::new(self.net, self.setup, self.modes, probe).read(self.point);
        Jet {
            value,
            rate,
            second: 0.0,
        }
    }

    fn edge(&self, edge: SetEdge) -> f64 {
        crate::schedule::edge(self.events, edge, f64::NEG_INFINITY).unwrap_or(f64::NAN)
    }
}

/// Stored energy at a point, J.
#[must_use]
pub fn stored(net: &Network, vc: &[f64], il: &[f64]) -> f64 {
    let caps: f64 = net
        .capacitances
        .iter()
        .zip(vc)
        .map(|(c, v)| 0.5 * c.farads * v * v)
        .sum();
    let coils: f64 = net
        .inductances
        .iter()
        .zip(il)
        .map(|(l, i)| 0.5 * i * l.henrys.iter().map(|&(k, h)| h * il[k]).sum::<f64>())
        .sum();
    caps + coils
}

//! Writes down what a jump did: energies, losses, the log's charges and fluxes, notices.
//!
//! Across a jump the energy into a branch is the mean of its voltages before and after times the
//! charge that passed, and the mean of its currents times the flux across it: by Tellegen's
//! theorem these add up to zero over the circuit, so that a capacitor's is the change of what it
//! holds, a source's what it supplied, and a switch's what is lost in it.

use crate::equations::{Equations, Point};
use crate::failure::Failure;
use crate::jump::event;
use crate::network::Law;
use crate::record::{impulse, stored};
use crate::restart::Impulses;
use crate::run::Run;
use crate::settle::Restart;
use crate::shot::{Jump, Notice};

/// Events within a millionth of the span before it is an error.
const CHATTER: usize = 1000;

impl Run<'_> {
    /// The values just before 0 s: what is stated, and the consistent solution for the rest.
    pub(crate) fn write_stated(&mut self, before: &Point, settled: &Restart) {
        let mut p = settled.point.clone();
        p.vc.clone_from(&before.vc);
        p.il.clone_from(&before.il);
        let mut values: Vec<f64> = self.readers.iter().map(|r| r.read(&p).0).collect();
        for (value, probe) in values.iter_mut().zip(&self.request.probes) {
            use pulsewright_circuit::Probe;
            let (part, held) = match probe {
                Probe::VoltageAcross(part) => (*part, false),
                Probe::ChargeHeld(part) => (*part, true),
                _ => continue,
            };
            let Some(range) = self.net.of_part.get(part) else {
                continue;
            };
            let whole = held || range.len() == 1;
            if let (true, Some(Law::Capacitance(c))) =
                (whole, self.net.branches.get(range.start).map(|b| &b.law))
            {
                *value = before.vc[*c]
                    * if held {
                        self.net.capacitances[*c].farads
                    } else {
                        1.0
                    };
            }
        }
        self.shot.stated = values;
    }

    /// The impulse of every probe.
    fn impulses(&self, settled: &Restart) -> Vec<f64> {
        let probes = self.request.probes.iter();
        probes
            .map(|p| impulse(&self.net, *p, &settled.impulses))
            .collect()
    }

    /// The equalising at 0 s: its loss has no part, since what is stated obeys no circuit.
    pub(crate) fn book_start(&mut self, before: &Point, settled: &Restart, initial: &[u8]) {
        let quiet = is_quiet(&settled.impulses);
        let mut jump = Jump {
            time: 0.0,
            abrupt: !quiet,
            ..Jump::default()
        };
        jump.impulses = self.impulses(settled);
        let mut given = 0.0;
        for (k, b) in self.net.branches.iter().enumerate() {
            let energy = match b.law {
                Law::Capacitance(c) => {
                    0.5 * self.net.capacitances[c].farads
                        * (settled.point.vc[c].powi(2) - before.vc[c].powi(2))
                }
                Law::Inductance(j) => {
                    let flux = settled.impulses.flux_across(b.a, b.b);
                    0.5 * (settled.point.il[j] + before.il[j]) * flux
                }
                Law::Voltage(s) => settled.point.sources.jets[s][0] * settled.impulses.charge[k],
                Law::Current(s) => {
                    settled.point.sources.jets[s][0] * settled.impulses.flux_across(b.a, b.b)
                }
                _ => 0.0,
            };
            if quiet || energy == 0.0 {
                continue;
            }
            jump.energies.push((b.part, energy));
            if matches!(b.law, Law::Voltage(_) | Law::Current(_)) {
                given -= energy;
                self.shot.balance.supplied[b.part] -= energy;
            }
        }
        if !quiet {
            let after = stored(&self.net, &settled.point.vc, &settled.point.il);
            let loss = self.shot.balance.stored_start + given - after;
            self.shot.balance.lost += loss;
            self.shot.notices.push(Notice::Equalised { loss });
        }
        for (part, (was, is)) in initial.iter().zip(&self.states).enumerate() {
            if was != is {
                jump.events.push(self.shot.events.len());
                self.shot.events.push(event(0.0, part, *is, false));
            }
        }
        self.push_jump(jump);
    }

    /// Adds a jump; a further round at the same instant is part of the jump before it.
    pub(crate) fn push_jump(&mut self, jump: Jump) {
        let open = self.shot.jumps.len() > self.shot.stretches.len();
        match self.shot.jumps.last_mut().filter(|_| open) {
            Some(last) => {
                last.impulses
                    .iter_mut()
                    .zip(&jump.impulses)
                    .for_each(|(a, b)| *a += b);
                last.energies.extend(jump.energies);
                last.losses.extend(jump.losses);
                last.events.extend(jump.events);
                last.abrupt |= jump.abrupt;
            }
            None => self.shot.jumps.push(jump),
        }
    }

    pub(crate) fn note_topology(&mut self, equations: &Equations) {
        let time = self.point.time;
        let parts = equations.topology.undetermined.clone();
        let told = |n: &Notice| matches!(n, Notice::Undetermined { parts: p, .. } if *p == parts);
        if !parts.is_empty() && !self.shot.notices.iter().any(told) {
            self.shot.notices.push(Notice::Undetermined { parts, time });
        }
        let islands: Vec<usize> = equations.topology.held.clone();
        for node in islands {
            let nodes: Vec<String> = (0..self.setup.nodes.len())
                .filter(|&n| equations.topology.component[n] == node)
                .map(|n| self.setup.nodes[n].clone())
                .collect();
            let told = |n: &Notice| matches!(n, Notice::Island { nodes: m, .. } if *m == nodes);
            if !nodes.is_empty()
                && self.shot.notices.len() < 10_000
                && !self.shot.notices.iter().any(told)
            {
                self.shot.notices.push(Notice::Island { nodes, time });
            }
        }
    }

    /// Voltage and current of every branch at a point of the present states.
    pub(crate) fn branch_states(&self, p: &Point) -> Vec<(f64, f64)> {
        match self.shelf.get(&self.states) {
            Some(e) => (0..self.net.branches.len())
                .map(|b| self.branch_state(e, b, p))
                .collect(),
            None => vec![(0.0, 0.0); self.net.branches.len()],
        }
    }

    /// Books a jump's impulses: energies, losses, the log's charges and fluxes.
    pub(crate) fn book(
        &mut self,
        jump: &mut Jump,
        before: &[(f64, f64)],
        settled: &Restart,
        first_event: usize,
    ) {
        jump.impulses = self.impulses(settled);
        if is_quiet(&settled.impulses) {
            return;
        }
        let stored_before = stored(&self.net, &self.point.vc, &self.point.il);
        for (k, b) in self.net.branches.iter().enumerate() {
            let (v, i) = self.branch_state(&settled.equations, k, &settled.point);
            let flux = settled.impulses.flux_across(b.a, b.b);
            let energy = 0.5 * (before[k].0 + v) * settled.impulses.charge[k]
                + 0.5 * (before[k].1 + i) * flux;
            if energy == 0.0 {
                continue;
            }
            jump.energies.push((b.part, energy));
            match b.law {
                Law::Voltage(_) | Law::Current(_) => self.shot.balance.supplied[b.part] -= energy,
                Law::Contact { .. } | Law::Valve { .. } | Law::Short | Law::Resistance(_) => {
                    jump.losses.push((b.part, energy));
                    self.shot.balance.lost += energy;
                }
                _ => {}
            }
        }
        let losses = jump.losses.clone();
        for e in self.shot.events.iter_mut().skip(first_event) {
            e.charge = self
                .net
                .terminal(e.part)
                .into_iter()
                .map(|(k, s)| s * settled.impulses.charge[k])
                .sum();
            e.flux = self.net.of_part[e.part]
                .clone()
                .map(|k| {
                    settled
                        .impulses
                        .flux_across(self.net.branches[k].a, self.net.branches[k].b)
                })
                .fold(0.0, |a: f64, b| if b.abs() > a.abs() { b } else { a });
            e.loss = losses
                .iter()
                .filter(|(p, _)| *p == e.part)
                .map(|l| l.1)
                .sum();
        }
        for &(part, loss) in &losses {
            if loss > 1e-6 * stored_before {
                self.shot.notices.push(Notice::LossAtEvent {
                    part,
                    time: jump.time,
                    loss,
                });
            }
        }
    }

    pub(crate) fn limit_events(&mut self, first: usize, time: f64) -> Result<(), Failure> {
        let new = self.shot.events.len() - first;
        self.recent.extend(std::iter::repeat_n(time, new));
        let within = 1e-6 * self.setup.span;
        while self.recent.front().is_some_and(|t| *t < time - within) {
            self.recent.pop_front();
        }
        if self.recent.len() > CHATTER {
            return Err(Failure::Chatter {
                names: self.latest(),
                time,
                count: self.recent.len() as u64,
                within,
            });
        }
        if self.shot.events.len() as u64 > self.setup.limits.events {
            return Err(Failure::Limit {
                limit: "events",
                allowed: self.setup.limits.events,
                time,
            });
        }
        self.ask(time)
    }
}

/// Whether no impulse flowed.
pub(crate) fn is_quiet(i: &Impulses) -> bool {
    i.flux.is_empty() && i.charge.iter().all(|q| *q == 0.0)
}

//! An instant of abrupt change: the start, actions, corners of sources, diodes, restarts.
//!
//! Actions that are due at one instant, and what follows them at once (ganged switches, delays of
//! 0 s), are one event: all change together, then the circuit restarts consistently, diodes
//! included. Levels that the restart itself passes act in a further round at the same instant.
//!
//! A diode is looked at in three respects, the first that is not zero deciding: the impulse
//! (a conducting one must not carry charge backwards, a blocking one must not stand a forward
//! flux), the value, the rate of change. Diodes that fail are turned over and the restart is done
//! again from the values before the event; where that does not settle, all combinations are tried
//! in the order of how little they change.

use pulsewright_circuit::formula::Side;
use pulsewright_circuit::schedule::Passing;

use crate::equations::{Drive, Equations, Point};
use crate::failure::Failure;
use crate::network::{Law, name};
use crate::record::{AtPoint, Reader, impulse, stored};
use crate::restart::{Impulses, Scene, restart};
use crate::run::{Run, same};
use crate::schedule::Watch;
use crate::shot::{Cause, Event, Jump, Notice};
use crate::topology::Mode;

/// Rounds of change at one instant before it is an error.
const ROUNDS: usize = 100;
/// Diodes of which all combinations are tried.
const TRY_ALL: usize = 12;
/// Events within a millionth of the span before it is an error.
const CHATTER: usize = 1000;

/// What a restart came to.
struct Restart {
    equations: Equations,
    point: Point,
    impulses: Impulses,
}

impl Run<'_> {
    /// Equalises the stated values and begins the schedules.
    pub(crate) fn start(&mut self) -> Result<(), Failure> {
        let (vc, il) = if self.setup.steady {
            crate::steady::steady(&self.net, self.setup, &self.states)?
        } else {
            let vc: Vec<f64> = self
                .net
                .capacitances
                .iter()
                .map(|c| c.charged.unwrap_or(0.0))
                .collect();
            let il: Vec<f64> = self
                .net
                .inductances
                .iter()
                .map(|l| l.carrying.unwrap_or(0.0))
                .collect();
            (vc, il)
        };
        let before = Point {
            dvc: vec![0.0; vc.len()],
            dil: vec![0.0; il.len()],
            vc,
            il,
            ..Point::default()
        };
        let mut drive = Drive::default();
        drive.at(&self.net, 0.0, Side::After);
        for (k, jet) in drive.jets.iter().enumerate() {
            if matches!(
                self.net.branches[self.net.sources[k].branch].law,
                Law::Voltage(_)
            ) {
                self.volts = self.volts.max(jet[0].abs());
            } else {
                self.amperes = self.amperes.max(jet[0].abs());
            }
        }
        self.volts = before.vc.iter().fold(self.volts, |a, v| a.max(v.abs()));
        self.amperes = before.il.iter().fold(self.amperes, |a, v| a.max(v.abs()));
        self.shot.balance.stored_start = stored(&self.net, &before.vc, &before.il);
        let initial = self.states.clone();
        let settled = self.settle(&before, &drive, 0.0, &[])?;
        self.renew_readers(&settled.equations);
        self.write_stated(&before, &settled);
        self.book_start(&before, &settled, &initial);
        self.enter(settled);
        for p in 0..self.schedules.programs.len() {
            let mut notices = std::mem::take(&mut self.shot.notices);
            self.schedules.programs[p].begin(&mut notices);
            self.shot.notices = notices;
        }
        self.jump_rounds(None, true)
    }

    /// The values just before 0 s: what is stated, and the consistent solution for the rest.
    fn write_stated(&mut self, before: &Point, settled: &Restart) {
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

    /// The equalising at 0 s: its loss has no part, since what is stated obeys no circuit.
    fn book_start(&mut self, before: &Point, settled: &Restart, initial: &[u8]) {
        let quiet = is_quiet(&settled.impulses);
        let mut jump = Jump {
            time: 0.0,
            abrupt: !quiet,
            ..Jump::default()
        };
        jump.impulses = self
            .request
            .probes
            .iter()
            .map(|p| impulse(&self.net, *p, &settled.impulses))
            .collect();
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
    fn push_jump(&mut self, jump: Jump) {
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

    /// Makes a restart's outcome the present state of the run.
    fn enter(&mut self, settled: Restart) {
        let Restart {
            mut equations,
            point,
            ..
        } = settled;
        self.keep_largest(&point);
        let states = self.states.clone();
        self.point = point;
        if !equations.noted {
            self.note_topology(&equations);
        }
        self.renew_readers(&equations);
        equations.noted = true;
        self.shelf.insert(states, equations);
    }

    fn note_topology(&mut self, equations: &Equations) {
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

    /// The jump at the present instant.
    pub(crate) fn jump(&mut self, cause: Option<Cause>) -> Result<(), Failure> {
        self.jump_rounds(cause, false)
    }

    fn jump_rounds(&mut self, cause: Option<Cause>, start: bool) -> Result<(), Failure> {
        let time = self.point.time;
        let near = self
            .corners
            .partition_point(|c| *c < time && !same(*c, time));
        let corner = !start && self.corners.get(near).is_some_and(|c| same(*c, time));
        let mut cause = cause;
        let mut written = start;
        for round in 0..ROUNDS {
            let (changed, found) = self.due(cause.take(), time);
            let restart_needed = !changed.is_empty() || (corner && round == 0);
            if !restart_needed {
                if !written {
                    self.shot.jumps.push(Jump {
                        time,
                        impulses: vec![0.0; self.request.probes.len()],
                        ..Jump::default()
                    });
                }
                self.watch_afresh(None);
                // Levels passed at the very start of a watch act at once.
                if !self.any_due(time) {
                    return Ok(());
                }
                written = true;
                continue;
            }
            self.change(&changed, &found, time)?;
            written = true;
        }
        Err(Failure::Chatter {
            names: self.latest(),
            time,
            count: ROUNDS as u64,
            within: 0.0,
        })
    }

    fn any_due(&self, time: f64) -> bool {
        self.schedules.programs.iter().any(|p| {
            p.is_due(time)
                || p.watches
                    .iter()
                    .any(|w| matches!(w, Watch::At(x, _) if same(*x, time)))
        })
    }

    /// Which parts change at `time`, all that follows at once included, and which of them at a
    /// found instant.
    fn due(&mut self, cause: Option<Cause>, time: f64) -> (Vec<(usize, u8)>, Vec<usize>) {
        let mut changed: Vec<(usize, u8)> = Vec::new();
        let mut found = Vec::new();
        if let Some(Cause::Valve { branch }) = cause {
            let part = self.net.branches[branch].part;
            changed.push((part, 1 - self.states[part].min(1)));
            found.push(part);
        }
        let mut triggered = match cause {
            Some(Cause::Trigger { part, .. }) => Some(part),
            _ => None,
        };
        for _ in 0..ROUNDS {
            self.resolve(&changed, time);
            let mut any = false;
            for k in 0..self.schedules.programs.len() {
                let p = &self.schedules.programs[k];
                let by_cause = triggered == Some(p.part);
                // A stated instant is exact where it coincides with others.
                let at = p.watches.iter().filter_map(|w| match w {
                    Watch::At(x, hangs) if *x <= time || same(*x, time) => Some(*hangs),
                    _ => None,
                });
                let at = at.min();
                let Some(state) = p.state().filter(|_| by_cause || at.is_some()) else {
                    continue;
                };
                let part = p.part;
                if by_cause {
                    triggered = None;
                }
                let by_cause = at.unwrap_or(true);
                if by_cause {
                    found.push(part);
                }
                any = true;
                let mut notices = std::mem::take(&mut self.shot.notices);
                if self.state_of(part, &changed) == state {
                    notices.push(Notice::AlreadySo { part, time });
                } else {
                    changed.push((part, state));
                    for &ganged in self.schedules.gangs.get(&part).into_iter().flatten() {
                        changed.push((ganged, state));
                        if by_cause {
                            found.push(ganged);
                        }
                    }
                }
                self.schedules.programs[k].advance(time, &mut notices);
                self.shot.notices = notices;
            }
            if !any {
                break;
            }
        }
        (changed, found)
    }

    fn state_of(&self, part: usize, changed: &[(usize, u8)]) -> u8 {
        changed
            .iter()
            .rev()
            .find(|(p, _)| *p == part)
            .map_or(self.states[part], |(_, s)| *s)
    }

    /// Turns edges that have been, those of this very instant included, into instants.
    fn resolve(&mut self, changed: &[(usize, u8)], time: f64) {
        if !self.schedules.wait_for_edges() {
            return;
        }
        let logged = self.shot.events.len();
        self.shot.events.extend(
            changed
                .iter()
                .map(|&(part, state)| event(time, part, state, false)),
        );
        if let Some(equations) = self.shelf.get(&self.states) {
            let leaves = AtPoint {
                net: &self.net,
                setup: self.setup,
                modes: &equations.topology.modes,
                point: &self.point,
                events: &self.shot.events,
            };
            self.schedules.resolve(&self.shot.events, &leaves);
        }
        self.shot.events.truncate(logged);
        let mut notices = std::mem::take(&mut self.shot.notices);
        for p in &mut self.schedules.programs {
            p.pass_over_if_gone(time, &mut notices);
        }
        self.shot.notices = notices;
    }

    /// Changes parts at an instant and restarts.
    fn change(
        &mut self,
        changed: &[(usize, u8)],
        found: &[usize],
        time: f64,
    ) -> Result<(), Failure> {
        let before = self.point.clone();
        let states_before = self.states.clone();
        let branches = self.branch_states(&before);
        for &(part, state) in changed {
            self.states[part] = state;
        }
        let forced: Vec<usize> = changed
            .iter()
            .map(|c| c.0)
            .filter(|&p| self.is_valve(p))
            .collect();
        let mut drive = before.sources.clone();
        drive.at(&self.net, time, Side::After);
        let settled = self.settle(&before, &drive, time, &forced)?;
        let first_event = self.shot.events.len();
        let mut jump = Jump {
            time,
            abrupt: true,
            ..Jump::default()
        };
        let mut log: Vec<(usize, u8)> = Vec::new();
        for &(part, state) in changed {
            if !self.is_valve(part) {
                log.push((part, state));
            }
        }
        for part in 0..self.states.len() {
            if self.is_valve(part) && self.states[part] != states_before[part] {
                log.push((part, self.states[part]));
            }
        }
        for (part, state) in log {
            let is_found = found.contains(&part) || self.is_valve(part);
            self.shot.events.push(event(time, part, state, is_found));
        }
        jump.events = (first_event..self.shot.events.len()).collect();
        self.book(&mut jump, &branches, &settled, first_event);
        self.push_jump(jump);
        let watched = self.levels_before(&before, &states_before);
        self.enter(settled);
        self.limit_events(first_event, time)?;
        self.resolve(&[], time);
        self.watch_afresh(Some(&watched));
        Ok(())
    }

    fn is_valve(&self, part: usize) -> bool {
        self.net.of_part[part]
            .clone()
            .any(|b| matches!(self.net.branches[b].law, Law::Valve { .. }))
    }

    /// Voltage and current of every branch at a point of the present states.
    fn branch_states(&self, p: &Point) -> Vec<(f64, f64)> {
        match self.shelf.get(&self.states) {
            Some(e) => (0..self.net.branches.len())
                .map(|b| self.branch_state(e, b, p))
                .collect(),
            None => vec![(0.0, 0.0); self.net.branches.len()],
        }
    }

    /// Books a jump's impulses: energies, losses, the log's charges and fluxes.
    fn book(
        &mut self,
        jump: &mut Jump,
        before: &[(f64, f64)],
        settled: &Restart,
        first_event: usize,
    ) {
        jump.impulses = self
            .request
            .probes
            .iter()
            .map(|p| impulse(&self.net, *p, &settled.impulses))
            .collect();
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

    fn limit_events(&mut self, first: usize, time: f64) -> Result<(), Failure> {
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

    /// For each level watch, whether its level was past at a point of earlier states.
    fn levels_before(&self, p: &Point, states: &[u8]) -> Vec<Vec<bool>> {
        let Some(e) = self.shelf.get(states) else {
            return Vec::new();
        };
        self.past(e, p)
    }

    /// For each watch, whether a level is past.
    fn past(&self, equations: &Equations, p: &Point) -> Vec<Vec<bool>> {
        let leaves = AtPoint {
            net: &self.net,
            setup: self.setup,
            modes: &equations.topology.modes,
            point: p,
            events: &self.shot.events,
        };
        let one = |w: &Watch| match w {
            Watch::Level {
                signal,
                passing,
                level,
                ..
            } => {
                let j = signal.jet(p.time, Side::After, &leaves);
                let down = matches!(passing, Passing::FallsBelow | Passing::IsBelow);
                let (g, d) = if down {
                    (level - j.value, -j.rate)
                } else {
                    (j.value - level, j.rate)
                };
                g > 1e-12 * level.abs() || (g > -1e-12 * level.abs() && d > 0.0)
            }
            _ => false,
        };
        self.schedules
            .programs
            .iter()
            .map(|prog| prog.watches.iter().map(one).collect())
            .collect()
    }

    /// First look of level watches after a jump: a state acts at once, a level already past waits
    /// and is noted, a level passed by the jump acts.
    fn watch_afresh(&mut self, before: Option<&[Vec<bool>]>) {
        let Some(equations) = self.shelf.get(&self.states) else {
            return;
        };
        let past = self.past(equations, &self.point);
        let time = self.point.time;
        let small = self.small().amperes;
        let dead: Vec<bool> = self
            .schedules
            .programs
            .iter()
            .map(|p| {
                let probe = pulsewright_circuit::Probe::CurrentThrough(p.part);
                let (v, d) = Reader::new(&self.net, self.setup, &equations.topology.modes, probe)
                    .read(&self.point);
                v.abs() <= small && d.abs() * self.setup.span <= small
            })
            .collect();
        for (k, p) in self.schedules.programs.iter_mut().enumerate() {
            for (i, w) in p.watches.iter_mut().enumerate() {
                let now = past.get(k).and_then(|v| v.get(i)).copied().unwrap_or(false);
                let was = before
                    .and_then(|b| b.get(k))
                    .and_then(|v| v.get(i))
                    .copied();
                match w {
                    Watch::Level {
                        passing: Passing::IsBelow | Passing::IsAbove,
                        ..
                    } if now => *w = Watch::At(time, true),
                    Watch::Level { fresh, .. } if *fresh => {
                        *fresh = false;
                        if now {
                            self.shot
                                .notices
                                .push(Notice::AlreadyPast { part: p.part, time });
                        }
                    }
                    Watch::Level { .. } if now && was == Some(false) => *w = Watch::At(time, true),
                    Watch::Zero {
                        from: Some(from), ..
                    } if *from <= time && dead[k] => *w = Watch::At(time, true),
                    _ => {}
                }
            }
        }
    }

    /// Restarts from `before` in the present states of switches, finding those of the diodes.
    fn settle(
        &mut self,
        before: &Point,
        drive: &Drive,
        time: f64,
        forced: &[usize],
    ) -> Result<Restart, Failure> {
        let valves: Vec<usize> = (0..self.states.len())
            .filter(|&p| self.is_valve(p))
            .collect();
        let mut tried: Vec<Vec<u8>> = Vec::new();
        let mut trouble = None;
        for round in 0..ROUNDS {
            let states = self.states.clone();
            match self.attempt(&states, before, drive, time) {
                Ok(settled) => {
                    let fresh = if round == 0 { forced } else { &[] };
                    let wrong = self.wrong(&settled, &valves, fresh);
                    if wrong.is_empty() {
                        return Ok(settled);
                    }
                    self.shelf.insert(states.clone(), settled.equations);
                    let seen = tried.contains(&states);
                    tried.push(states);
                    if seen && round > 8 {
                        break;
                    }
                    // All that fail at first, then the first alone (least index), which settles
                    // where turning all over would circle.
                    let turn = if round < 4 {
                        wrong.as_slice()
                    } else {
                        &wrong[..1]
                    };
                    for &p in turn {
                        self.states[p] = 1 - self.states[p].min(1);
                    }
                }
                Err(f) => {
                    trouble = Some(f);
                    break;
                }
            }
        }
        self.settle_by_trying(before, drive, time, &valves, trouble)
    }

    fn settle_by_trying(
        &mut self,
        before: &Point,
        drive: &Drive,
        time: f64,
        valves: &[usize],
        trouble: Option<Failure>,
    ) -> Result<Restart, Failure> {
        let names = || {
            valves
                .iter()
                .take(8)
                .map(|&p| name(self.setup, p))
                .collect()
        };
        let none = trouble.unwrap_or_else(|| Failure::NoState {
            names: names(),
            time,
        });
        if valves.is_empty() || valves.len() > TRY_ALL {
            return Err(none);
        }
        let start = self.states.clone();
        let mut masks: Vec<u32> = (0..1_u32 << valves.len()).collect();
        masks.sort_by_key(|m| m.count_ones());
        for mask in masks {
            let mut states = start.clone();
            for (i, &p) in valves.iter().enumerate() {
                if mask >> i & 1 == 1 {
                    states[p] = 1 - states[p].min(1);
                }
            }
            self.states.clone_from(&states);
            let Ok(settled) = self.attempt(&states, before, drive, time) else {
                continue;
            };
            if self.wrong(&settled, valves, &[]).is_empty() {
                return Ok(settled);
            }
            self.shelf.insert(states, settled.equations);
        }
        self.states = start;
        Err(none)
    }

    /// One restart in given states.
    fn attempt(
        &mut self,
        states: &[u8],
        before: &Point,
        drive: &Drive,
        time: f64,
    ) -> Result<Restart, Failure> {
        let mut equations = self.take_equations(states, time)?;
        for (i, node) in equations.topology.held.clone().into_iter().enumerate() {
            equations.held[i] = crate::equations::potential(node)
                .and_then(|k| before.y.get(k))
                .copied()
                .unwrap_or(0.0);
        }
        let mut point = before.clone();
        point.time = time;
        point.sources = drive.clone();
        let scene = Scene {
            net: &self.net,
            setup: self.setup,
            equations: &equations,
            drive,
            small: self.small(),
            time,
        };
        let outcome = restart(scene, &mut point.vc, &mut point.il);
        let solved = outcome.and_then(|impulses| {
            equations.solve(&self.net, self.setup, 0.0, &mut point)?;
            equations.slopes(&self.net, self.setup, &mut point)?;
            if point.y.iter().chain(&point.dy).all(|v| v.is_finite()) {
                Ok(impulses)
            } else {
                let bad = drive
                    .jets
                    .iter()
                    .position(|j| !j.iter().all(|x| x.is_finite()));
                let what = bad.map_or_else(
                    || "a voltage or a current".to_owned(),
                    |s| {
                        format!(
                            "the value of `{}`",
                            name(
                                self.setup,
                                self.net.branches[self.net.sources[s].branch].part
                            )
                        )
                    },
                );
                Err(Failure::NotFinite { what, time })
            }
        });
        match solved {
            Ok(impulses) => Ok(Restart {
                equations,
                point,
                impulses,
            }),
            Err(f) => {
                self.shelf.insert(states.to_vec(), equations);
                Err(f)
            }
        }
    }

    /// The diodes whose state contradicts a restart; those in `fresh` were just turned over by
    /// their own condition and stay unless a value says otherwise beyond rounding.
    fn wrong(&self, settled: &Restart, valves: &[usize], fresh: &[usize]) -> Vec<usize> {
        let p = &settled.point;
        let (volts, amperes) = (1e-9 * self.volts, 1e-9 * self.amperes);
        let n = self.net.nodes - 1;
        let most = |v: &[f64]| v.iter().fold(0.0_f64, |a, x| a.max(x.abs()));
        let (fast_volts, fast_amperes) = (
            1e-9 * most(&p.dy[..n]),
            1e-9 * most(&p.dy[n..]).max(most(&p.dil)),
        );
        let mut wrong = Vec::new();
        for &part in valves {
            for k in self.net.of_part[part].clone() {
                let b = &self.net.branches[k];
                let Law::Valve { threshold, .. } = b.law else {
                    continue;
                };
                let conducts = matches!(
                    settled.equations.topology.modes[k],
                    Mode::Tie { .. } | Mode::Resistive { .. }
                );
                let (v, i) = self.branch_state(&settled.equations, k, p);
                let rate = crate::equations::volts(&p.dy, b.a, b.b);
                let bad = if conducts {
                    let form = crate::equations::current_form(
                        &self.net,
                        &settled.equations.topology.modes,
                        k,
                    );
                    let slope = form.rate(p);
                    let charge = settled.impulses.charge[k];
                    charge < 0.0
                        || (charge == 0.0
                            && (i < -amperes
                                || (i <= amperes
                                    && slope < -fast_amperes
                                    && !fresh.contains(&part))))
                } else {
                    let flux = settled.impulses.flux_across(b.a, b.b);
                    let over = v - threshold;
                    flux > 0.0
                        || (flux == 0.0
                            && (over > volts
                                || (over >= -volts && rate > fast_volts && !fresh.contains(&part))))
                };
                if bad {
                    wrong.push(part);
                }
            }
        }
        wrong
    }
}

fn is_quiet(i: &Impulses) -> bool {
    i.flux.is_empty() && i.charge.iter().all(|q| *q == 0.0)
}

fn event(time: f64, part: usize, state: u8, found: bool) -> Event {
    Event {
        time,
        part,
        state,
        charge: 0.0,
        flux: 0.0,
        loss: 0.0,
        found,
    }
}

//! An instant of abrupt change: the start, actions, corners of sources, diodes, restarts.
//!
//! Actions that are due at one instant, and what follows them at once (ganged switches, delays of
//! 0 s), are one event: all change together, then the circuit restarts consistently, diodes
//! included. Levels that the restart itself passes act in a further round at the same instant.
//! The restart itself, diodes found with it, is in `settle.rs`; what is written down of it in
//! `book.rs`.

use pulsewright_circuit::formula::Side;
use pulsewright_circuit::schedule::Passing;

use crate::book::is_quiet;
use crate::equations::{Drive, Equations, Point};
use crate::failure::Failure;
use crate::network::Law;
use crate::record::{AtPoint, Reader, stored};
use crate::run::{Run, same};
use crate::schedule::Watch;
use crate::settle::Restart;
use crate::shot::{Cause, Event, Jump, Notice};

/// Rounds of change at one instant before it is an error.
pub(crate) const ROUNDS: usize = 100;
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
        if start && self.shot.jumps.last().is_some_and(|j| j.abrupt) {
            self.turn_over(time)?;
        }
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
            if self.change(&changed, &found, time)? {
                self.turn_over(time)?;
            }
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

    /// Changes parts at an instant and restarts; returns whether impulses flowed.
    fn change(
        &mut self,
        changed: &[(usize, u8)],
        found: &[usize],
        time: f64,
    ) -> Result<bool, Failure> {
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
        let impulsive = !is_quiet(&settled.impulses);
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
        Ok(impulsive)
    }

    /// Turns diodes over, at the same instant, that what an impulse left behind contradicts.
    fn turn_over(&mut self, time: f64) -> Result<(), Failure> {
        for _ in 0..ROUNDS {
            let parts = self.contradicted_now();
            if parts.is_empty() {
                return Ok(());
            }
            let turned: Vec<(usize, u8)> = parts
                .iter()
                .map(|&p| (p, 1 - self.states[p].min(1)))
                .collect();
            self.change(&turned, &parts, time)?;
        }
        Err(Failure::Chatter {
            names: self.latest(),
            time,
            count: ROUNDS as u64,
            within: 0.0,
        })
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
}

/// A line of the event log, without an impulse yet.
pub(crate) fn event(time: f64, part: usize, state: u8, found: bool) -> Event {
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

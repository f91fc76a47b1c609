//! The restart after an event, and the states of the diodes, which are found together with it.
//!
//! A diode is looked at in three respects, the first that is not zero deciding: the impulse
//! (a conducting one must not carry charge backwards, a blocking one must not stand a forward
//! flux), the value, the rate of change. Diodes that fail are turned over and the restart is done
//! again from the values before the event; where that does not settle, all combinations are tried
//! in the order of how little they change.

use crate::equations::{Drive, Equations, Point};
use crate::failure::Failure;
use crate::forms::current_form;
use crate::jump::ROUNDS;
use crate::network::{Law, name};
use crate::restart::{Impulses, Scene, restart};
use crate::run::Run;
use crate::topology::Mode;

/// Diodes of which all combinations are tried.
const TRY_ALL: usize = 12;

/// What a restart came to.
pub(crate) struct Restart {
    pub(crate) equations: Equations,
    pub(crate) point: Point,
    pub(crate) impulses: Impulses,
}

impl Run<'_> {
    pub(crate) fn is_valve(&self, part: usize) -> bool {
        self.net.of_part[part]
            .clone()
            .any(|b| matches!(self.net.branches[b].law, Law::Valve { .. }))
    }

    /// Restarts from `before` in the present states of switches, finding those of the diodes.
    pub(crate) fn settle(
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
                    let wrong = self.wrong(&settled, &valves, fresh, 1.0);
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

    pub(crate) fn settle_by_trying(
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
        // Where one diode's current is another's rounding, a narrower deadband tells them apart.
        let bands = [1.0, 1e-3, 1e-6];
        for (band, mask) in bands
            .iter()
            .flat_map(|b| masks.iter().map(move |m| (*b, *m)))
        {
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
            if self.wrong(&settled, valves, &[], band).is_empty() {
                return Ok(settled);
            }
            self.shelf.insert(states, settled.equations);
        }
        self.states = start;
        Err(none)
    }

    /// One restart in given states.
    pub(crate) fn attempt(
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
    fn wrong(&self, settled: &Restart, valves: &[usize], fresh: &[usize], band: f64) -> Vec<usize> {
        self.contradicted(
            &settled.equations,
            &settled.point,
            Some(&settled.impulses),
            (valves, fresh),
            band,
        )
    }

    /// The diodes whose state contradicts the present point, what an impulse left behind: one that
    /// carried its charge forwards may have to block the current that follows.
    pub(crate) fn contradicted_now(&self) -> Vec<usize> {
        let valves: Vec<usize> = (0..self.states.len())
            .filter(|&p| self.is_valve(p))
            .collect();
        match self.shelf.get(&self.states) {
            Some(e) if !valves.is_empty() => {
                self.contradicted(e, &self.point, None, (&valves, &valves), 1.0)
            }
            _ => Vec::new(),
        }
    }

    fn contradicted(
        &self,
        equations: &Equations,
        p: &Point,
        impulses: Option<&Impulses>,
        (valves, fresh): (&[usize], &[usize]),
        band: f64,
    ) -> Vec<usize> {
        let n = self.net.nodes - 1;
        let most = |v: &[f64]| v.iter().fold(0.0_f64, |a, x| a.max(x.abs()));
        let (fast_volts, fast_amperes) = (
            1e-9 * band * most(&p.dy[..n]),
            1e-9 * band * most(&p.dy[n..]).max(most(&p.dil)),
        );
        // An impulse that is rounding beside the others is none.
        let (coulombs, webers) = impulses.map_or((0.0, 0.0), |i| {
            (1e-12 * most(&i.charge), 1e-12 * most(&i.flux))
        });
        let above = |x: f64, rounding: f64| if x.abs() <= rounding { 0.0 } else { x };
        // Where nothing has flowed yet, what would within a thousandth of the span is the scale.
        let soon = 1e-3 * self.setup.span;
        let volts = 1e-9 * band * self.volts.max(1e9 / band * fast_volts * soon);
        let amperes = 1e-9 * band * self.amperes.max(1e9 / band * fast_amperes * soon);
        let volts = volts.max(self.rounding.volts(self.amperes));
        let amperes = amperes.max(self.rounding.amperes(self.volts));
        // A rate that moves nothing over the span is rounding; what it brings is watched for.
        let fast_volts = fast_volts.max(volts / self.setup.span);
        let fast_amperes = fast_amperes.max(amperes / self.setup.span);
        let mut wrong = Vec::new();
        for &part in valves {
            for k in self.net.of_part[part].clone() {
                let b = &self.net.branches[k];
                let Law::Valve { threshold, .. } = b.law else {
                    continue;
                };
                let conducts = matches!(
                    equations.topology.modes[k],
                    Mode::Tie { .. } | Mode::Resistive { .. }
                );
                let (v, i) = self.branch_state(equations, k, p);
                let rate = crate::equations::volts(&p.dy, b.a, b.b);
                let bad = if conducts {
                    let form = current_form(&self.net, &equations.topology.modes, k);
                    let slope = form.rate(p);
                    let charge = impulses.map_or(0.0, |i| above(i.charge[k], coulombs));
                    charge < 0.0
                        || (charge == 0.0
                            && (i < -amperes
                                || (i <= amperes
                                    && slope < -fast_amperes
                                    && !fresh.contains(&part))))
                } else {
                    let flux = impulses.map_or(0.0, |i| above(i.flux_across(b.a, b.b), webers));
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

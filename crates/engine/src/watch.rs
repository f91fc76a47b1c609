//! Conditions that are watched along a march, and the landing on the instant at which one is met.
//!
//! Every condition is a function that falls through zero when it is met. A fall is looked for on
//! the cubic interpolant of each step, dips between the step's ends included; its instant is then
//! refined by the step itself, whose length is the unknown: Newton on the function at the step's
//! end, held in a bracket.

use pulsewright_circuit::Probe;
use pulsewright_circuit::formula::{Formula, Side};
use pulsewright_circuit::schedule::Passing;

use crate::equations::{Equations, Point};
use crate::failure::Failure;
use crate::march::Way;
use crate::network::Law;
use crate::record::{AtPoint, Reader};
use crate::run::Run;
use crate::schedule::Watch;
use crate::shot::Cause;
use crate::step::{Cubic, Rule};

/// Deadbands beyond which a diode's state is contradicted for certain.
const UNSEEN: f64 = 1e4;

/// What a condition watches; its function falls through zero when it is met.
#[derive(Clone, Debug)]
pub(crate) struct Condition {
    pub(crate) cause: Cause,
    pub(crate) kind: ConditionKind,
    /// Deadband below zero that a passage must leave.
    pub(crate) dead: Dead,
}

/// A deadband against rounding, as a share of what it lies in.
#[derive(Clone, Copy, Debug)]
pub(crate) enum Dead {
    /// Of the largest voltage so far.
    OfVolts(f64),
    /// Of the largest current so far.
    OfAmperes(f64),
    /// So much.
    Fixed(f64),
}

/// The functions of conditions.
#[derive(Clone, Debug)]
pub(crate) enum ConditionKind {
    /// sign · (signal - level).
    Level {
        signal: LevelSignal,
        level: f64,
        sign: f64,
    },
    /// A current's zero, from either side.
    Zero { reader: Reader },
    /// sign · reader + offset, of a diode.
    Valve {
        reader: Reader,
        sign: f64,
        offset: f64,
    },
}

/// A level's signal: read directly where it is one probe.
#[derive(Clone, Debug)]
pub(crate) enum LevelSignal {
    /// One probe.
    Reader(Reader),
    /// Any formula.
    Formula(Formula),
}

impl Run<'_> {
    /// The conditions to watch in the present topology.
    pub(crate) fn conditions(&self, equations: &Equations) -> Vec<Condition> {
        let modes = &equations.topology.modes;
        let reader = |probe| Reader::new(&self.net, self.setup, modes, probe);
        let mut found = Vec::new();
        for (branch, b) in self.net.branches.iter().enumerate() {
            let Law::Valve { threshold, .. } = b.law else {
                continue;
            };
            let k = branch - self.net.of_part[b.part].start;
            let conducts = self.states[b.part] == 1;
            let probe = if conducts {
                Probe::BranchCurrent(b.part, k)
            } else {
                Probe::BranchVoltage(b.part, k)
            };
            let (sign, offset, dead) = if conducts {
                (1.0, 0.0, Dead::OfAmperes(1e-12))
            } else {
                (-1.0, threshold, Dead::OfVolts(1e-12))
            };
            found.push(Condition {
                cause: Cause::Valve { branch },
                kind: ConditionKind::Valve {
                    reader: reader(probe),
                    sign,
                    offset,
                },
                dead,
            });
        }
        for p in &self.schedules.programs {
            for (trigger, w) in p.watches.iter().enumerate() {
                let cause = Cause::Trigger {
                    part: p.part,
                    trigger,
                };
                match w {
                    Watch::Level {
                        signal,
                        passing,
                        level,
                        ..
                    } => {
                        let sign = if matches!(passing, Passing::FallsBelow | Passing::IsBelow) {
                            1.0
                        } else {
                            -1.0
                        };
                        let signal = match signal {
                            Formula::Probe(p) => LevelSignal::Reader(reader(*p)),
                            other => LevelSignal::Formula(other.clone()),
                        };
                        let dead = Dead::Fixed(1e-14 * level.abs());
                        found.push(Condition {
                            cause,
                            kind: ConditionKind::Level {
                                signal,
                                level: *level,
                                sign,
                            },
                            dead,
                        });
                    }
                    Watch::Zero {
                        from: Some(from), ..
                    } if *from <= self.point.time => {
                        let probe = Probe::CurrentThrough(p.part);
                        let kind = ConditionKind::Zero {
                            reader: reader(probe),
                        };
                        found.push(Condition {
                            cause,
                            kind,
                            dead: Dead::OfAmperes(1e-12),
                        });
                    }
                    _ => {}
                }
            }
        }
        found
    }

    /// A condition's deadband on the way to a point.
    pub(crate) fn dead(&self, c: &Condition, to: &Point) -> f64 {
        let most = |v: &[f64], least: f64| v.iter().fold(least, |a, x| a.max(x.abs()));
        let (volts, amperes) = to.y.split_at((self.net.nodes - 1).min(to.y.len()));
        let volts = most(volts, self.volts);
        let amperes = most(&to.il, most(amperes, self.amperes));
        match c.dead {
            Dead::OfVolts(share) => (share * volts).max(self.rounding.volts(amperes)),
            Dead::OfAmperes(share) => (share * amperes).max(self.rounding.amperes(volts)),
            Dead::Fixed(x) => x,
        }
    }

    /// Value and rate of a condition's function; `side` is the sign that a current's zero is
    /// approached with.
    pub(crate) fn condition(
        &self,
        equations: &Equations,
        c: &Condition,
        p: &Point,
        side: f64,
    ) -> (f64, f64) {
        match &c.kind {
            ConditionKind::Level {
                signal,
                level,
                sign,
            } => {
                let (v, d) = match signal {
                    LevelSignal::Reader(r) => r.read(p),
                    LevelSignal::Formula(f) => {
                        let leaves = AtPoint {
                            net: &self.net,
                            setup: self.setup,
                            modes: &equations.topology.modes,
                            point: p,
                            events: &self.shot.events,
                        };
                        let j = f.jet(p.time, Side::After, &leaves);
                        (j.value, j.rate)
                    }
                };
                (sign * (v - level), sign * d)
            }
            ConditionKind::Zero { reader } => {
                let (v, d) = reader.read(p);
                (side * v, side * d)
            }
            ConditionKind::Valve {
                reader,
                sign,
                offset,
            } => {
                let (v, d) = reader.read(p);
                (sign * v + offset, sign * d)
            }
        }
    }

    /// Looks for conditions met on the way to a point; lands on the first and accepts it.
    pub(crate) fn watch(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        rule: Rule,
        to: &Point,
    ) -> Result<Option<Cause>, Failure> {
        let Some((p, k)) = self.first_met(equations, &way.conditions, rule, to)? else {
            return Ok(None);
        };
        if p.time > self.point.time {
            let share = (p.time - way.start) / way.stretch.plan;
            self.accept(equations, way, p, share.min(1.0));
        }
        Ok(way.conditions.get(k).map(|c| c.cause))
    }

    /// The first condition met on the way to a point, with the point at which it is.
    fn first_met(
        &self,
        equations: &mut Equations,
        conditions: &[Condition],
        rule: Rule,
        to: &Point,
    ) -> Result<Option<(Point, usize)>, Failure> {
        let from = &self.point;
        let mut h = to.time - from.time;
        let mut landed: Option<(Point, usize)> = None;
        // Each landing may uncover a condition that is met earlier still.
        for _ in 0..8 {
            let end = landed.as_ref().map_or(to, |(p, _)| p);
            let mut first: Option<(f64, usize)> = None;
            for (k, c) in conditions.iter().enumerate() {
                if landed.as_ref().is_some_and(|(_, j)| *j == k) {
                    continue;
                }
                let side = self.side(equations, c, from);
                let (p0, d0) = self.condition(equations, c, from, side);
                let (p1, d1) = self.condition(equations, c, end, side);
                let cubic = Cubic {
                    p0,
                    m0: h * d0,
                    p1,
                    m1: h * d1,
                };
                let dead = self.dead(c, end);
                // A diode that is past its condition already and goes on has turned over unseen.
                let unseen = matches!(c.kind, ConditionKind::Valve { .. })
                    && p0 < -dead
                    && p1 < 2.0 * p0
                    && p1 < -UNSEEN * dead;
                let fall = if unseen {
                    Some(0.0)
                } else {
                    cubic.first_fall(dead)
                };
                if let Some(s) = fall
                    && first.is_none_or(|(best, _)| s < best)
                {
                    first = Some((s, k));
                }
            }
            let Some((s, k)) = first else { break };
            if landed.is_some() && s > 1.0 - 1e-9 {
                break;
            }
            let Some(c) = conditions.get(k) else { break };
            let (p, size) = self.land(equations, rule, c, from, s, h)?;
            h = size;
            landed = Some((p, k));
        }
        Ok(landed)
    }

    /// Finds the step, near share `s` of `h`, at whose end a condition's function is zero.
    fn land(
        &self,
        equations: &mut Equations,
        rule: Rule,
        c: &Condition,
        from: &Point,
        s: f64,
        h: f64,
    ) -> Result<(Point, f64), Failure> {
        let rule = if rule == Rule::Exact {
            Rule::ExactOnce
        } else {
            rule
        };
        let side = self.side(equations, c, from);
        let (mut low, mut high) = (0.0_f64, h);
        let mut x = s * h;
        let mut to = Point::default();
        for round in 0..60 {
            if from.time + x <= from.time {
                return Ok((from.clone(), 0.0));
            }
            let mut stepper = self.stepper(equations);
            stepper.step(rule, from, x, from.time + x, &mut to)?;
            stepper.slopes(&mut to)?;
            let (g, d) = self.condition(equations, c, &to, side);
            if g >= 0.0 {
                low = x;
            } else {
                high = x;
            }
            let newton = x - g / d;
            let next = if newton > low && newton < high && round < 20 {
                newton
            } else {
                0.5 * (low + high)
            };
            let least = 2.0 * f64::EPSILON * (from.time + x);
            if g == 0.0 || (next - x).abs() <= least.max(1e-16 * h) || high - low <= least {
                break;
            }
            x = next;
        }
        Ok((to, x))
    }

    /// The sign that a current has on its way to a zero; 1 for other conditions.
    pub(crate) fn side(&self, equations: &Equations, c: &Condition, from: &Point) -> f64 {
        if !matches!(c.kind, ConditionKind::Zero { .. }) {
            return 1.0;
        }
        let (v, d) = self.condition(equations, c, from, 1.0);
        if v.abs() > self.dead(c, from) {
            v.signum()
        } else {
            d.signum()
        }
    }
}

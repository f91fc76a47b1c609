//! Marches from a jump to the next: chooses steps, watches conditions, lands on them.
//!
//! The mesh of a stretch is a set of shares of its planned length. Chosen steps are the plan's
//! length over powers of two, aligned to their own size, so that few sizes occur, sizes grow and
//! shrink by twos, and the last step lands on the plan's end. Each trial compares a step with its
//! two halves; the halves are kept where the difference is within the tolerance.
//!
//! A halved mesh cuts every step of an earlier shot's mesh into equal parts. Where that stretch
//! was ended by a condition, the last part is made as long as the condition needs, so that the
//! error stays a smooth function of the step.

use crate::equations::{Equations, Point};
use crate::failure::Failure;
use crate::rates::rates;
use crate::run::Run;
use crate::shot::{Cause, Mesh, Stretch};
use crate::step::{Rule, Stepper};
use crate::watch::Condition;

/// Coarsest and finest steps of a chosen mesh, as powers of two of the plan's length.
const COARSEST: u32 = 5;
const FINEST: u32 = 60;
/// Coarsest while a source varies, whose features a longer step could pass over.
const COARSEST_DRIVEN: u32 = 9;
/// Where a chosen mesh begins.
const FIRST: u32 = 10;
/// Relative rounding of a voltage or a current out of a solution.
const ROUNDING: f64 = 2e-14;
/// A mode counts as fast against a step when rate times step is above this.
const FAST: f64 = 2.0;

/// The stretch under way.
pub(crate) struct Way {
    pub(crate) start: f64,
    end: f64,
    /// Where the last point stands, as a share of the plan.
    share: f64,
    pub(crate) stretch: Stretch,
    pub(crate) conditions: Vec<Condition>,
    /// Steps since the hook was asked.
    unasked: u32,
}

impl Way {
    /// Index of the step about to be taken.
    fn step(&self) -> u32 {
        u32::try_from(self.stretch.times.len() - 1).unwrap_or(u32::MAX)
    }

    /// Where the last point stands, as a share of the plan.
    pub(crate) fn share(&self) -> f64 {
        self.share
    }

    pub(crate) fn time(&self, share: f64) -> f64 {
        if share >= 1.0 {
            self.end
        } else {
            self.start + (self.end - self.start) * share
        }
    }
}

impl Run<'_> {
    /// Marches to `end`, or until a condition is met; returns which.
    pub(crate) fn march(&mut self, end: f64) -> Result<Option<Cause>, Failure> {
        let states = self.states.clone();
        let mut equations = self.take_equations(&states, self.point.time)?;
        let mut way = Way {
            start: self.point.time,
            end,
            share: 0.0,
            stretch: self.stretch(&equations),
            conditions: self.conditions(&equations),
            unasked: 0,
        };
        way.stretch.plan = end - way.start;
        if self.rule() == Rule::Exact {
            self.prepare(&mut equations, end)?;
        }
        let first = self.point.clone();
        self.write(&mut way.stretch, &first, 0.0);
        self.meter_start(&equations, &first);
        let index = self.shot.stretches.len();
        let cause = match self.request.mesh {
            Mesh::Chosen { tolerance } if self.rule() == Rule::Exact => {
                self.march_exact(&mut equations, &mut way, tolerance)?
            }
            Mesh::Chosen { tolerance } => self.march_chosen(&mut equations, &mut way, tolerance)?,
            Mesh::Fixed(h) => self.march_fixed(&mut equations, &mut way, h)?,
            Mesh::Halved { of, times } => match of.stretches.get(index) {
                Some(base) if base.shares.len() > 1 => {
                    self.march_halved(&mut equations, &mut way, base, times)?
                }
                _ => {
                    let n = 2_f64.powi(8 + i32::try_from(times.min(30)).unwrap_or(30));
                    let h = way.stretch.plan / n;
                    self.march_fixed(&mut equations, &mut way, h)?
                }
            },
        };
        way.stretch.cause = cause;
        self.shot.stretches.push(way.stretch);
        self.shelf.insert(states, equations);
        Ok(cause)
    }

    fn march_chosen(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        tolerance: f64,
    ) -> Result<Option<Cause>, Failure> {
        let rule = self.rule();
        let order: i32 = if rule == Rule::BackwardEuler { 1 } else { 2 };
        let plan = way.stretch.plan;
        let driven = self.net.sources.iter().any(|s| !s.constant);
        let coarsest = if driven { COARSEST_DRIVEN } else { COARSEST };
        let mut power = FIRST;
        let mut damp = false;
        let (mut whole, mut half, mut full) =
            (Point::default(), Point::default(), Point::default());
        while way.share < 1.0 {
            self.count(way, 2)?;
            let size = step_share(power);
            let h = plan * size;
            let (mid, next) = (way.share + 0.5 * size, way.share + size);
            let (t_mid, t_next) = (way.time(mid), way.time(next));
            let mut first_rule = if damp { Rule::Damped } else { rule };
            let mut stepper = self.stepper(equations);
            stepper.step(first_rule, &self.point, h, t_next, &mut whole)?;
            stepper.step(first_rule, &self.point, 0.5 * h, t_mid, &mut half)?;
            stepper.step(rule, &half, 0.5 * h, t_next, &mut full)?;
            let error = self.distance(&whole, &full, h) / (2_f64.powi(order) - 1.0);
            if !error.is_finite() {
                return Err(Failure::NotFinite {
                    what: "a voltage or a current".to_owned(),
                    time: t_next,
                });
            }
            if error > tolerance && power < FINEST && t_mid > self.point.time {
                power = (power + excess(error / tolerance, order)).min(FINEST);
                continue;
            }
            // A mode that an event set off too faintly for the tolerance would still ring on in
            // what hangs on its rate: it is damped once it is passed over.
            if way.share == 0.0 && !damp && self.is_fast(equations, h)? {
                first_rule = Rule::Damped;
                let mut stepper = self.stepper(equations);
                stepper.step(first_rule, &self.point, 0.5 * h, t_mid, &mut half)?;
                stepper.step(rule, &half, 0.5 * h, t_next, &mut full)?;
            }
            if first_rule == Rule::Damped {
                way.stretch.damped.push(way.step());
                damp = false;
            }
            for (to, step_rule, share) in [(&mut half, first_rule, mid), (&mut full, rule, next)] {
                let to = std::mem::take(to);
                if let Some(cause) = self.finish(equations, way, step_rule, to, share)? {
                    return Ok(Some(cause));
                }
            }
            let aligned = (way.share / (2.0 * size)).fract() == 0.0;
            if power > coarsest && aligned && error < tolerance / 2_f64.powi(order + 2) {
                if rule == Rule::Trapezoidal {
                    let passed = rates(equations, &self.net, self.setup)?
                        .iter()
                        .any(|r| r * h > FAST && r * 0.5 * h <= FAST);
                    damp |= passed;
                }
                power -= 1;
            }
        }
        Ok(None)
    }

    /// Whether a trapezoidal step of `h` passes over a mode and would ring.
    fn is_fast(&self, equations: &mut Equations, h: f64) -> Result<bool, Failure> {
        Ok(self.rule() == Rule::Trapezoidal
            && rates(equations, &self.net, self.setup)?
                .iter()
                .any(|r| r * h > FAST))
    }

    fn march_fixed(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        h: f64,
    ) -> Result<Option<Cause>, Failure> {
        let rule = self.rule();
        let plan = way.stretch.plan;
        let n = (plan / h * (1.0 - 1e-12)).ceil().max(1.0);
        if n > 2.0 * self.setup.limits.steps as f64 {
            return Err(Failure::Limit {
                limit: "steps",
                allowed: self.setup.limits.steps,
                time: way.start,
            });
        }
        let fast = self.is_fast(equations, h.min(plan))?;
        let mut k = 0.0;
        while k < n {
            k += 1.0;
            let share = if k >= n { 1.0 } else { k * h / plan };
            let step_rule = if fast && k == 1.0 { Rule::Damped } else { rule };
            if step_rule == Rule::Damped {
                way.stretch.damped.push(0);
            }
            let size = if k >= n && n > 1.0 {
                way.end - self.point.time
            } else {
                h.min(plan)
            };
            if let Some(cause) = self.one(equations, way, step_rule, size, share)? {
                return Ok(Some(cause));
            }
        }
        Ok(None)
    }

    fn march_halved(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        base: &Stretch,
        times: u32,
    ) -> Result<Option<Cause>, Failure> {
        let rule = self.rule();
        let parts = 2_f64.powi(i32::try_from(times.min(40)).unwrap_or(40));
        // A stretch that ends at a found instant keeps its steps in seconds, the others in shares.
        let scale = if base.cause.is_some() {
            base.plan
        } else {
            way.stretch.plan
        };
        let to_share = scale / way.stretch.plan;
        let last = base.shares.len() - 1;
        // What follows a stretch cut short at once must not be crossed in steps of its size.
        let least = way.stretch.plan * step_share(FIRST) / parts;
        let mut h = 0.0;
        for (i, pair) in base.shares.windows(2).enumerate() {
            let [a, b] = pair else { continue };
            let damped = u32::try_from(i).is_ok_and(|i| base.damped.contains(&i));
            h = scale * ((b - a) / parts);
            let mut j = 0.0;
            while j < parts {
                j += 1.0;
                let share = if j >= parts {
                    *b
                } else {
                    a + (b - a) * (j / parts)
                };
                let step_rule = if damped && j == 1.0 {
                    Rule::Damped
                } else {
                    rule
                };
                if step_rule == Rule::Damped {
                    way.stretch.damped.push(way.step());
                }
                let is_last = i + 1 == last && j >= parts;
                let share = if is_last && base.cause.is_none() {
                    1.0
                } else {
                    share * to_share
                };
                if share >= 1.0 {
                    // The planned end comes first in this run.
                    let rest = way.end - self.point.time;
                    return self.one(equations, way, step_rule, rest, 1.0);
                }
                if let (true, Some(cause)) = (is_last, base.cause) {
                    if let Some(found) = self.stretch_to(equations, way, step_rule, h, cause)? {
                        return Ok(Some(found));
                    }
                    return self.march_on(equations, way, h.max(least));
                }
                if let Some(cause) = self.one(equations, way, step_rule, h, share)? {
                    return Ok(Some(cause));
                }
            }
        }
        self.march_on(equations, way, h.max(least))
    }

    /// Goes on with steps of `h` until the plan's end or a condition.
    fn march_on(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        h: f64,
    ) -> Result<Option<Cause>, Failure> {
        let rule = self.rule();
        while way.share < 1.0 {
            let rest = way.end - self.point.time;
            let (size, share) = if rest <= h * 1.001 || h <= 0.0 {
                (rest, 1.0)
            } else {
                (h, way.share + h / way.stretch.plan)
            };
            if let Some(cause) = self.one(equations, way, rule, size, share)? {
                return Ok(Some(cause));
            }
        }
        Ok(None)
    }

    /// One step of known size, watched and accepted.
    fn one(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        rule: Rule,
        h: f64,
        share: f64,
    ) -> Result<Option<Cause>, Failure> {
        self.count(way, 1)?;
        let mut to = std::mem::take(&mut self.spare);
        self.stepper(equations)
            .step(rule, &self.point, h, way.time(share), &mut to)?;
        self.finish(equations, way, rule, to, share)
    }

    /// Takes a solved point as a step's end, or lands on the first condition met before it.
    fn finish(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        rule: Rule,
        mut to: Point,
        share: f64,
    ) -> Result<Option<Cause>, Failure> {
        self.stepper(equations).slopes(&mut to)?;
        self.finish_sloped(equations, way, rule, to, share)
    }

    /// The same for a point whose slopes are there.
    pub(crate) fn finish_sloped(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        rule: Rule,
        to: Point,
        share: f64,
    ) -> Result<Option<Cause>, Failure> {
        if !way.conditions.is_empty()
            && let Some(cause) = self.watch(equations, way, rule, &to)?
        {
            return Ok(Some(cause));
        }
        self.accept(equations, way, to, share);
        Ok(None)
    }

    /// Tries steps from `h` up to four times `h` until the condition of `cause` is met in one,
    /// and lands on it.
    fn stretch_to(
        &mut self,
        equations: &mut Equations,
        way: &mut Way,
        rule: Rule,
        h: f64,
        cause: Cause,
    ) -> Result<Option<Cause>, Failure> {
        let start = self.point.time;
        for factor in [1.0, 1.5, 2.5, 4.0] {
            self.count(way, 1)?;
            let size = h * factor;
            if start + size > way.end {
                break;
            }
            let mut to = Point::default();
            let mut stepper = self.stepper(equations);
            stepper.step(rule, &self.point, size, start + size, &mut to)?;
            stepper.slopes(&mut to)?;
            if let Some(found) = self.watch(equations, way, rule, &to)? {
                return Ok(Some(found));
            }
            let Some(c) = way.conditions.iter().find(|c| c.cause == cause) else {
                break;
            };
            // A passage within the deadband at the step's end is the landing itself.
            let side = self.side(equations, c, &self.point);
            let (g0, _) = self.condition(equations, c, &self.point, side);
            let (g, _) = self.condition(equations, c, &to, side);
            let dead = self.dead(c, &to);
            if g0 > dead && g.abs() <= dead {
                let share = (to.time - way.start) / way.stretch.plan;
                self.accept(equations, way, to, share);
                return Ok(Some(cause));
            }
        }
        Ok(None)
    }

    /// The equations as a step needs them.
    pub(crate) fn stepper<'e>(&'e self, equations: &'e mut Equations) -> Stepper<'e> {
        Stepper {
            net: &self.net,
            setup: self.setup,
            equations,
        }
    }

    pub(crate) fn count(&mut self, way: &mut Way, steps: u64) -> Result<(), Failure> {
        self.shot.steps += steps;
        if self.shot.steps > self.setup.limits.steps {
            return Err(Failure::Limit {
                limit: "steps",
                allowed: self.setup.limits.steps,
                time: self.point.time,
            });
        }
        way.unasked += 1;
        if way.unasked >= 64 {
            way.unasked = 0;
            self.ask(self.point.time)?;
        }
        Ok(())
    }

    /// Makes a solved point with slopes the present one.
    pub(crate) fn accept(
        &mut self,
        equations: &Equations,
        way: &mut Way,
        mut to: Point,
        share: f64,
    ) {
        let h = to.time - self.point.time;
        self.shot.smallest_step = self.shot.smallest_step.min(h);
        self.shot.largest_step = self.shot.largest_step.max(h);
        self.meter(equations, &to, h);
        self.write(&mut way.stretch, &to, share);
        self.keep_largest(&to);
        std::mem::swap(&mut self.point, &mut to);
        self.spare = to;
        way.share = share;
    }

    /// Largest difference of two points' states a step of `h` on, over the largest value of each
    /// state so far.
    fn distance(&self, a: &Point, b: &Point, h: f64) -> f64 {
        let n = self.net.capacitances.len();
        // Neither a state that has not moved yet nor a wave's far forerunner asks for steps.
        let volts = (1e-3 * self.volts).max(1e5 * self.rounding.volts(self.amperes));
        let amperes = (1e-3 * self.amperes).max(1e5 * self.rounding.amperes(self.volts));
        // What rounding of all other voltages and currents moves a state by in a step is no error.
        let (flux, charge) = (ROUNDING * self.volts * h, ROUNDING * self.amperes * h);
        let one = |x: f64, y: f64, k: usize, floor: f64, rounding: f64| {
            let scale = self.largest[k].max(x.abs()).max(floor);
            let d = (x - y).abs();
            if d <= rounding || scale <= 0.0 {
                0.0
            } else {
                d / scale
            }
        };
        let v = a.vc.iter().zip(&b.vc).enumerate().map(|(k, (x, y))| {
            let rounding = charge / self.net.capacitances[k].farads;
            one(*x, *y, k, volts, rounding)
        });
        let i = a.il.iter().zip(&b.il).enumerate().map(|(k, (x, y))| {
            let own = self.net.inductances[k].inverse.iter();
            let inverse = own.fold(0.0_f64, |m, w| m.max(w.1.abs()));
            one(*x, *y, n + k, amperes, flux * inverse)
        });
        v.chain(i)
            .fold(0.0, |m, d| if d > m || d.is_nan() { d } else { m })
    }
}

fn step_share(power: u32) -> f64 {
    (-f64::from(power)).exp2()
}

/// How many powers of two a step must shrink by for an error so many times the tolerance.
fn excess(ratio: f64, order: i32) -> u32 {
    let powers = (ratio.log2() / f64::from(order + 1))
        .ceil()
        .clamp(1.0, 12.0);
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "between 1 and 12"
    )]
    let powers = powers as u32;
    powers
}

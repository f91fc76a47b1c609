//! Formulas with numbers in: sources and signals as functions of time and of the circuit.
//!
//! A formula is evaluated as a *jet*: its value with its first and second derivative in time,
//! propagated by the rules of calculus (forward differentiation), so that sources bring their
//! exact slopes to the equations and to the interpolant.

use crate::expr::Function;
use crate::setup::{NodeIndex, PartIndex, SetEdge};

/// A quantity that can be read off the circuit at an instant.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
#[non_exhaustive]
pub enum Probe {
    /// First node less second node of a part, V.
    VoltageAcross(PartIndex),
    /// Voltage from one node to another, V.
    Voltage(NodeIndex, NodeIndex),
    /// Current through a part, A; a changeover's is the common contact's.
    CurrentThrough(PartIndex),
    /// Power into a part, W.
    PowerInto(PartIndex),
    /// Charge held by a capacitor's ideal element, C.
    ChargeHeld(PartIndex),
    /// Flux linked with an inductor, Wb.
    FluxHeld(PartIndex),
    /// Energy held by a part, or by a coupling (its mutual share), J.
    EnergyHeld(PartIndex),
    /// Energy held by the whole circuit, J.
    EnergyStored,
    /// Voltage of a branch within a part (a contact, the ideal element, a winding), V.
    BranchVoltage(PartIndex, usize),
    /// Current of a branch within a part, A.
    BranchCurrent(PartIndex, usize),
}

/// A formula with numbers in.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Formula {
    /// A number.
    Number(f64),
    /// The time since the start, s.
    Time,
    /// A quantity of the circuit.
    Probe(Probe),
    /// The instant of an edge, s.
    Edge(SetEdge),
    /// The negative.
    Negative(Box<Formula>),
    /// A sum.
    Add(Box<Formula>, Box<Formula>),
    /// A difference.
    Subtract(Box<Formula>, Box<Formula>),
    /// A product.
    Multiply(Box<Formula>, Box<Formula>),
    /// A quotient.
    Divide(Box<Formula>, Box<Formula>),
    /// A power.
    Power(Box<Formula>, Box<Formula>),
    /// A function of one argument, or `min`, `max` of two or more.
    Call(Function, Vec<Formula>),
    /// Piecewise linear in its argument; abscissas ascend, a repeated one is a jump.
    Points(Box<Formula>, Vec<(f64, f64)>),
}

/// A value with its first and second derivative in time.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Jet {
    /// The value.
    pub value: f64,
    /// Its rate of change, 1/s.
    pub rate: f64,
    /// Its second derivative, 1/s².
    pub second: f64,
}

/// Which side of a corner a formula is taken at.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// Just before.
    Before,
    /// Just after.
    After,
}

/// What a formula's leaves stand for.
pub trait Leaves {
    /// A quantity of the circuit.
    fn probe(&self, probe: Probe) -> Jet;
    /// The instant of an edge, s; NaN where it has not been.
    fn edge(&self, edge: SetEdge) -> f64;
}

/// Leaves of a formula of time alone.
#[derive(Clone, Copy, Debug, Default)]
pub struct NoLeaves;

impl Leaves for NoLeaves {
    fn probe(&self, _: Probe) -> Jet {
        Jet::constant(f64::NAN)
    }
    fn edge(&self, _: SetEdge) -> f64 {
        f64::NAN
    }
}

impl Jet {
    /// A constant.
    #[must_use]
    pub const fn constant(value: f64) -> Self {
        Jet {
            value,
            rate: 0.0,
            second: 0.0,
        }
    }

    /// `f(self)` by the chain rule, given f, f' and f'' at the value.
    #[must_use]
    pub fn chain(self, f: f64, d1: f64, d2: f64) -> Jet {
        Jet {
            value: f,
            rate: d1 * self.rate,
            second: d2 * self.rate * self.rate + d1 * self.second,
        }
    }

    fn add(self, b: Jet) -> Jet {
        Jet {
            value: self.value + b.value,
            rate: self.rate + b.rate,
            second: self.second + b.second,
        }
    }

    fn scale(self, k: f64) -> Jet {
        Jet {
            value: k * self.value,
            rate: k * self.rate,
            second: k * self.second,
        }
    }

    fn times(self, b: Jet) -> Jet {
        Jet {
            value: self.value * b.value,
            rate: self.rate * b.value + self.value * b.rate,
            second: self.second * b.value + 2.0 * self.rate * b.rate + self.value * b.second,
        }
    }

    fn inverse(self) -> Jet {
        let r = 1.0 / self.value;
        self.chain(r, -r * r, 2.0 * r * r * r)
    }

    fn is_constant(self) -> bool {
        self.rate == 0.0 && self.second == 0.0
    }

    fn power(self, b: Jet) -> Jet {
        if b.is_constant() {
            let p = b.value;
            let f = power(self.value, p);
            let d1 = if p == 0.0 {
                0.0
            } else {
                p * power(self.value, p - 1.0)
            };
            let d2 = if p == 0.0 || p == 1.0 {
                0.0
            } else {
                p * (p - 1.0) * power(self.value, p - 2.0)
            };
            return self.chain(f, finite(d1, self), finite(d2, self));
        }
        let l = self.chain(
            self.value.ln(),
            1.0 / self.value,
            -1.0 / (self.value * self.value),
        );
        let e = l.times(b);
        let f = e.value.exp();
        e.chain(f, f, f)
    }
}

/// A derivative that blows up at a point where the argument rests counts as 0.
fn finite(d: f64, argument: Jet) -> f64 {
    if d.is_finite() || !argument.is_constant() {
        d
    } else {
        0.0
    }
}

/// `x^p`, by repeated multiplication where `p` is a small whole number.
#[must_use]
pub fn power(x: f64, p: f64) -> f64 {
    #[allow(clippy::cast_possible_truncation, reason = "within ±64")]
    if p.fract() == 0.0 && p.abs() <= 64.0 {
        x.powi(p as i32)
    } else {
        x.powf(p)
    }
}

impl Formula {
    /// The value at `t`, with both derivatives, taken at `side` of any corner there.
    #[must_use]
    pub fn jet(&self, t: f64, side: Side, leaves: &dyn Leaves) -> Jet {
        match self {
            Formula::Number(x) => Jet::constant(*x),
            Formula::Time => Jet {
                value: t,
                rate: 1.0,
                second: 0.0,
            },
            Formula::Probe(p) => leaves.probe(*p),
            Formula::Edge(e) => Jet::constant(leaves.edge(*e)),
            Formula::Negative(a) => a.jet(t, side, leaves).scale(-1.0),
            Formula::Add(a, b) => a.jet(t, side, leaves).add(b.jet(t, side, leaves)),
            Formula::Subtract(a, b) => a
                .jet(t, side, leaves)
                .add(b.jet(t, side, leaves).scale(-1.0)),
            Formula::Multiply(a, b) => a.jet(t, side, leaves).times(b.jet(t, side, leaves)),
            Formula::Divide(a, b) => a
                .jet(t, side, leaves)
                .times(b.jet(t, side, leaves).inverse()),
            Formula::Power(a, b) => a.jet(t, side, leaves).power(b.jet(t, side, leaves)),
            Formula::Call(f, arguments) => call(*f, arguments, t, side, leaves),
            Formula::Points(argument, knots) => {
                points(argument.jet(t, side, leaves), knots, t, side)
            }
        }
    }

    /// The value at `t` of a formula of numbers and time.
    #[must_use]
    pub fn at(&self, t: f64) -> f64 {
        self.jet(t, Side::After, &NoLeaves).value
    }

    /// Calls `visit` on this formula and all within it.
    pub fn walk<'a>(&'a self, visit: &mut dyn FnMut(&'a Formula)) {
        visit(self);
        match self {
            Formula::Number(_) | Formula::Time | Formula::Probe(_) | Formula::Edge(_) => {}
            Formula::Negative(a) | Formula::Points(a, _) => a.walk(visit),
            Formula::Add(a, b)
            | Formula::Subtract(a, b)
            | Formula::Multiply(a, b)
            | Formula::Divide(a, b)
            | Formula::Power(a, b) => {
                a.walk(visit);
                b.walk(visit);
            }
            Formula::Call(_, arguments) => arguments.iter().for_each(|a| a.walk(visit)),
        }
    }

    /// Every quantity of the circuit that it uses, each once, in ascending order.
    #[must_use]
    pub fn probes(&self) -> Vec<Probe> {
        let mut found = Vec::new();
        self.walk(&mut |f| {
            if let Formula::Probe(p) = f {
                found.push(*p);
            }
        });
        found.sort_unstable();
        found.dedup();
        found
    }

    /// Whether it changes with time, directly or through the circuit.
    #[must_use]
    pub fn is_constant(&self) -> bool {
        let mut constant = true;
        self.walk(&mut |f| {
            constant &= !matches!(f, Formula::Time | Formula::Probe(_) | Formula::Edge(_))
        });
        constant
    }

    /// The formulas whose zeros are corners of this one: arguments of `step`, `ramp`, `abs`,
    /// `sign`, differences of the arguments of `min` and `max`, and distances from knots.
    #[must_use]
    pub fn corners(&self) -> Vec<Formula> {
        let mut found = Vec::new();
        self.walk(&mut |f| match f {
            Formula::Call(Function::Step | Function::Ramp | Function::Abs | Function::Sign, a) => {
                found.extend(a.first().cloned());
            }
            Formula::Call(Function::Min | Function::Max, a) => {
                for (i, x) in a.iter().enumerate() {
                    for y in a.iter().skip(i + 1) {
                        found.push(Formula::Subtract(Box::new(x.clone()), Box::new(y.clone())));
                    }
                }
            }
            Formula::Points(a, knots) => {
                for (x, _) in knots {
                    found.push(Formula::Subtract(a.clone(), Box::new(Formula::Number(*x))));
                }
            }
            _ => {}
        });
        found.retain(|f| !f.is_constant());
        found
    }
}

/// Whether the argument counts as having reached zero: beyond it, or on it and moving up (just
/// after) or down (just before). An argument within rounding of its zero counts as on it.
fn reached(x: Jet, t: f64, side: Side) -> bool {
    let near = 4.0 * f64::EPSILON * (t * x.rate).abs();
    if x.value.abs() > near {
        return x.value > 0.0;
    }
    match side {
        Side::After => x.rate >= 0.0,
        Side::Before => x.rate < 0.0 || (x.rate == 0.0 && x.value >= 0.0),
    }
}

fn call(f: Function, arguments: &[Formula], t: f64, side: Side, leaves: &dyn Leaves) -> Jet {
    let mut all = arguments.iter().map(|a| a.jet(t, side, leaves));
    let Some(x) = all.next() else {
        return Jet::constant(f64::NAN);
    };
    let v = x.value;
    match f {
        Function::Sqrt => {
            let r = v.sqrt();
            x.chain(r, finite(0.5 / r, x), finite(-0.25 / (r * r * r), x))
        }
        Function::Exp => x.chain(v.exp(), v.exp(), v.exp()),
        Function::Ln => x.chain(v.ln(), 1.0 / v, -1.0 / (v * v)),
        Function::Log10 => {
            let k = std::f64::consts::LOG10_E;
            x.chain(v.log10(), k / v, -k / (v * v))
        }
        Function::Sin => x.chain(v.sin(), v.cos(), -v.sin()),
        Function::Cos => x.chain(v.cos(), -v.sin(), -v.cos()),
        Function::Tan => {
            let y = v.tan();
            x.chain(y, 1.0 + y * y, 2.0 * y * (1.0 + y * y))
        }
        Function::Atan => {
            let d = 1.0 / (1.0 + v * v);
            x.chain(v.atan(), d, -2.0 * v * d * d)
        }
        Function::Sinh => x.chain(v.sinh(), v.cosh(), v.sinh()),
        Function::Tanh => {
            let y = v.tanh();
            x.chain(y, 1.0 - y * y, -2.0 * y * (1.0 - y * y))
        }
        Function::Abs => x.scale(if reached(x, t, side) { 1.0 } else { -1.0 }),
        Function::Sign => Jet::constant(if v == 0.0 && x.is_constant() {
            0.0
        } else if reached(x, t, side) {
            1.0
        } else {
            -1.0
        }),
        Function::Step => Jet::constant(if reached(x, t, side) { 1.0 } else { 0.0 }),
        Function::Ramp => {
            if reached(x, t, side) {
                x
            } else {
                Jet::default()
            }
        }
        Function::Min => all.fold(x, |best, y| {
            if reached(best.add(y.scale(-1.0)), t, side) {
                y
            } else {
                best
            }
        }),
        Function::Max => all.fold(x, |best, y| {
            if reached(y.add(best.scale(-1.0)), t, side) {
                y
            } else {
                best
            }
        }),
    }
}

fn points(x: Jet, knots: &[(f64, f64)], t: f64, side: Side) -> Jet {
    let passed = |knot: f64| {
        reached(
            Jet {
                value: x.value - knot,
                ..x
            },
            t,
            side,
        )
    };
    let n = knots.partition_point(|k| passed(k.0));
    let (before, after) = (n.checked_sub(1).and_then(|i| knots.get(i)), knots.get(n));
    match (before, after) {
        (Some(&(x0, y0)), Some(&(x1, y1))) => {
            let slope = (y1 - y0) / (x1 - x0);
            x.chain(y0 + slope * (x.value - x0), slope, 0.0)
        }
        (Some(&(_, y)), None) | (None, Some(&(_, y))) => Jet::constant(y),
        (None, None) => Jet::constant(f64::NAN),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn n(x: f64) -> Box<Formula> {
        Box::new(Formula::Number(x))
    }

    #[test]
    fn a_jet_of_a_product_of_power_and_exponential_follows_calculus() {
        let f = Formula::Multiply(
            Box::new(Formula::Power(Box::new(Formula::Time), n(3.0))),
            Box::new(Formula::Call(
                Function::Exp,
                vec![Formula::Negative(Box::new(Formula::Time))],
            )),
        );
        let (t, e) = (2.0_f64, (-2.0_f64).exp());
        let j = f.jet(t, Side::After, &NoLeaves);
        assert!((j.value - 8.0 * e).abs() < 1e-14);
        assert!((j.rate - (12.0 - 8.0) * e).abs() < 1e-14);
        assert!((j.second - (12.0 - 24.0 + 8.0) * e).abs() < 1e-13);
    }

    #[test]
    fn a_step_has_two_sides() {
        let f = Formula::Call(
            Function::Step,
            vec![Formula::Subtract(Box::new(Formula::Time), n(1e-3))],
        );
        assert_eq!(f.jet(1e-3, Side::Before, &NoLeaves).value, 0.0);
        assert_eq!(f.jet(1e-3, Side::After, &NoLeaves).value, 1.0);
    }

    #[test]
    fn a_repeated_abscissa_is_a_jump() {
        let f = Formula::Points(
            Box::new(Formula::Time),
            vec![(0.0, 0.0), (1.0, 5.0), (1.0, 2.0), (3.0, 0.0)],
        );
        assert_eq!(f.jet(1.0, Side::Before, &NoLeaves).value, 5.0);
        assert_eq!(f.jet(1.0, Side::After, &NoLeaves).value, 2.0);
        assert_eq!(f.at(9.0), 0.0);
        assert_eq!(f.at(2.0), 1.0);
    }
}

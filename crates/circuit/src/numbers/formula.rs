//! Expressions to formulas and numbers: names resolved, signals put in place, constants folded.

use crate::circuit::LetValue;
use crate::draft::Draft;
use crate::expr::{Expr, ExprKind, Operator};
use crate::formula::{Formula, Probe};
use crate::index::{Index, Item};
use crate::parts::PartKind;
use crate::phrase::{Edge, EdgeKind, Signal};
use crate::setup::SetEdge;

/// Why an expression has no formula.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) enum Blocked {
    /// A name, a part or a node that is not known.
    Unknown(String),
    /// A let-value that is an open or a short circuit.
    Circuit(String),
    /// A reading, or a circuit word.
    Reading(String),
}

/// What names stand for.
#[derive(Clone, Copy)]
pub(crate) struct Numbers<'a> {
    pub draft: &'a Draft,
    pub index: &'a Index,
    pub lookup: &'a dyn Fn(&str) -> Option<LetValue>,
}

impl Numbers<'_> {
    /// The number of an expression of let-values; not a number where it changes with time.
    pub fn number(&self, e: &Expr) -> Result<f64, Blocked> {
        match self.formula(e)? {
            Formula::Number(x) => Ok(x),
            _ => Err(Blocked::Reading(e.to_string())),
        }
    }

    /// The formula of an expression of let-values, `t`, signals and edges.
    ///
    /// Recursion is as deep as the expression with its signals in place, which the check limits.
    pub fn formula(&self, e: &Expr) -> Result<Formula, Blocked> {
        Ok(match &e.kind {
            ExprKind::Number { value, .. } => Formula::Number(*value),
            ExprKind::Pi => Formula::Number(std::f64::consts::PI),
            ExprKind::Time => Formula::Time,
            ExprKind::Name(name) => self.name(name)?,
            ExprKind::Negative(a) => folded(Formula::Negative(Box::new(self.formula(a)?))),
            ExprKind::Binary {
                operator,
                left,
                right,
                ..
            } => self.binary(*operator, left, right)?,
            ExprKind::Call {
                function,
                arguments,
            } => {
                let arguments = arguments
                    .iter()
                    .map(|a| self.formula(a))
                    .collect::<Result<_, _>>()?;
                folded(Formula::Call(*function, arguments))
            }
            ExprKind::Points { argument, knots } => self.points(argument, knots)?,
            ExprKind::Signal(s) => Formula::Probe(self.probe(s)?),
            ExprKind::Edge(edge) => Formula::Edge(self.edge(edge)?),
            ExprKind::Reading(_) | ExprKind::OpenCircuit | ExprKind::ShortCircuit => {
                return Err(Blocked::Reading(e.to_string()));
            }
        })
    }

    fn name(&self, name: &str) -> Result<Formula, Blocked> {
        match self.index.names.get(name) {
            Some(Item::Let(_)) => match (self.lookup)(name) {
                Some(LetValue::Number { value, .. }) => Ok(Formula::Number(value)),
                Some(_) => Err(Blocked::Circuit(name.to_owned())),
                None => Err(Blocked::Unknown(name.to_owned())),
            },
            Some(Item::Signal(i)) => match self.draft.signals.get(*i) {
                Some(signal) => self.formula(&signal.value),
                None => Err(Blocked::Unknown(name.to_owned())),
            },
            Some(Item::Reading(_)) => Err(Blocked::Reading(name.to_owned())),
            None => Err(Blocked::Unknown(name.to_owned())),
        }
    }

    fn binary(&self, operator: Operator, left: &Expr, right: &Expr) -> Result<Formula, Blocked> {
        let (a, b) = (
            Box::new(self.formula(left)?),
            Box::new(self.formula(right)?),
        );
        Ok(folded(match operator {
            Operator::Add => Formula::Add(a, b),
            Operator::Subtract => Formula::Subtract(a, b),
            Operator::Multiply => Formula::Multiply(a, b),
            Operator::Divide => Formula::Divide(a, b),
            Operator::Power => Formula::Power(a, b),
        }))
    }

    fn points(&self, argument: &Expr, knots: &[(Expr, Expr)]) -> Result<Formula, Blocked> {
        let argument = Box::new(self.formula(argument)?);
        let pair = |(x, y): &(Expr, Expr)| Ok((self.number(x)?, self.number(y)?));
        Ok(folded(Formula::Points(
            argument,
            knots.iter().map(pair).collect::<Result<_, _>>()?,
        )))
    }

    /// The quantity that a signal's phrase names.
    pub fn probe(&self, signal: &Signal) -> Result<Probe, Blocked> {
        let part = |name: &str| {
            self.index
                .parts
                .get(name)
                .copied()
                .ok_or_else(|| Blocked::Unknown(name.to_owned()))
        };
        let node = |name: &str| {
            self.index
                .nodes
                .get(name)
                .copied()
                .ok_or_else(|| Blocked::Unknown(name.to_owned()))
        };
        Ok(match signal {
            Signal::VoltageAcross(p) => Probe::VoltageAcross(part(&p.text)?),
            Signal::VoltageAt(n) => Probe::Voltage(node(&n.text)?, 0),
            Signal::VoltageFrom(a, b) => Probe::Voltage(node(&a.text)?, node(&b.text)?),
            Signal::CurrentThrough(p) => Probe::CurrentThrough(part(&p.text)?),
            Signal::PowerInto(p) => Probe::PowerInto(part(&p.text)?),
            Signal::ChargeHeld(p) => Probe::ChargeHeld(part(&p.text)?),
            Signal::FluxHeld(p) => Probe::FluxHeld(part(&p.text)?),
            Signal::EnergyHeld(p) => Probe::EnergyHeld(part(&p.text)?),
        })
    }

    /// An edge with its indices.
    pub fn edge(&self, edge: &Edge) -> Result<SetEdge, Blocked> {
        let name = &edge.part.text;
        let part = self
            .index
            .parts
            .get(name)
            .copied()
            .ok_or_else(|| Blocked::Unknown(name.clone()))?;
        let state = match &edge.kind {
            EdgeKind::Opening | EdgeKind::Blocking => 0,
            EdgeKind::Closing | EdgeKind::Conducting => 1,
            EdgeKind::Moving(node) => match self.draft.parts.get(part).map(|p| &p.kind) {
                Some(PartKind::Changeover(c)) => usize::from(c.second == *node),
                _ => return Err(Blocked::Unknown(name.clone())),
            },
        };
        Ok(SetEdge {
            part,
            state,
            ordinal: edge.ordinal,
        })
    }
}

/// A formula of numbers alone as its number.
fn folded(f: Formula) -> Formula {
    let is = |f: &Formula| matches!(f, Formula::Number(_));
    let constant = match &f {
        Formula::Negative(a) | Formula::Points(a, _) => is(a),
        Formula::Add(a, b)
        | Formula::Subtract(a, b)
        | Formula::Multiply(a, b)
        | Formula::Divide(a, b)
        | Formula::Power(a, b) => is(a) && is(b),
        Formula::Call(_, arguments) => arguments.iter().all(is),
        _ => false,
    };
    if constant {
        Formula::Number(f.at(0.0))
    } else {
        f
    }
}

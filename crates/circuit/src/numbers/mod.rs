//! Numbers put in for one set of let-values: a draft becomes a [`Setup`].
//!
//! The same pass serves the check (at the values as written and at each case's) and
//! [`Circuit::setup`](crate::Circuit::setup): every value is evaluated, held against its range
//! at the value itself and at the ends of its own spread, and handed on. What a draft's check
//! has found wrong already evaluates to nothing and is passed over in silence.

mod claim;
mod coupling;
mod formula;
mod part;
mod reading;
mod schedule;

pub(crate) use formula::{Blocked, Numbers};

use crate::check::{Checker, Place, Type, Types};
use crate::circuit::LetValue;
use crate::dimension::Dimension;
use crate::draft::{Draft, Limit, Method};
use crate::expr::{Expr, ExprKind};
use crate::fault::{Bound, Fault, FaultKind, Given};
use crate::formula::Formula;
use crate::index::Index;
use crate::setup::{Limits, Setup};
use crate::slots::Slot;
use crate::spread::{SpreadKind, Value};
use crate::vary::{Moves, Shift};

/// The pass that puts numbers in.
pub(crate) struct Setter<'a> {
    pub draft: &'a Draft,
    pub index: &'a Index,
    pub types: &'a Types,
    pub numbers: Numbers<'a>,
    /// The case in words, where it is not that written.
    pub case: Vec<String>,
    pub span: Option<f64>,
    /// Where the values stand that a study moves.
    pub moves: Moves,
    pub faults: Vec<Fault>,
    pub remarks: Vec<Fault>,
}

impl<'a> Setter<'a> {
    pub fn new(
        draft: &'a Draft,
        index: &'a Index,
        types: &'a Types,
        lookup: &'a dyn Fn(&str) -> Option<LetValue>,
        case: Vec<String>,
    ) -> Self {
        let numbers = Numbers {
            draft,
            index,
            lookup,
        };
        let mut setter = Setter {
            draft,
            index,
            types,
            numbers,
            case,
            span: None,
            moves: Moves::default(),
            faults: Vec::new(),
            remarks: Vec::new(),
        };
        let span = draft.run.span.as_ref();
        setter.span =
            span.and_then(|e| setter.number(e, "the span", Dimension::SECOND, Bound::Above(0.0)));
        setter
    }

    /// The whole setup.
    pub fn setup(mut self) -> Result<Setup, Vec<Fault>> {
        let parts: Vec<_> = (0..self.draft.parts.len())
            .filter_map(|i| self.part(i))
            .collect();
        self.couplings(&|_| false);
        let (error, step) = self.run();
        if !self.faults.is_empty() {
            return Err(self.faults);
        }
        let run = &self.draft.run;
        Ok(Setup {
            nodes: self.index.node_names.clone(),
            parts,
            span: self.span.unwrap_or(0.0),
            steady: run.steady.unwrap_or(false),
            method: run.method.map_or(Method::Trapezoidal, |(m, _)| m),
            error: error.unwrap_or(1e-6),
            step,
            limits: limits(self.draft),
        })
    }

    /// The allowed error and the fixed step, as far as they are written.
    pub fn run(&mut self) -> (Option<f64>, Option<f64>) {
        let run = &self.draft.run;
        let error = run
            .error
            .as_ref()
            .and_then(|e| self.share(e, "the allowed error", Bound::Above(0.0)));
        let step = run.step.as_ref();
        let step = step
            .and_then(|e| self.number(e, "the time step", Dimension::SECOND, Bound::Above(0.0)));
        (error, step)
    }

    /// The number of an expression that must meet a bound.
    pub fn number(
        &mut self,
        e: &Expr,
        what: &str,
        dimension: Dimension,
        bound: Bound,
    ) -> Option<f64> {
        let x = self.finite(e, what)?;
        self.held(e, x, what, (dimension, false), bound, false)
            .then_some(x)
    }

    /// The number of a share that must meet a bound.
    pub fn share(&mut self, e: &Expr, what: &str, bound: Bound) -> Option<f64> {
        let x = self.finite(e, what)?;
        self.held(e, x, what, (Dimension::NONE, true), bound, false)
            .then_some(x)
    }

    /// The number of an expression of let-values; not finite is a mistake.
    pub fn finite(&mut self, e: &Expr, what: &str) -> Option<f64> {
        let x = self.numbers.number(e).ok()?;
        if !x.is_finite() {
            self.fault(
                FaultKind::NotFinite {
                    what: what.to_owned(),
                    given: self.given(false),
                }
                .at(e.span),
            );
            return None;
        }
        Some(x)
    }

    /// A part's value or qualifier: in its range, and at the ends of its spread too.
    pub fn slot(&mut self, part: &str, slot: &Slot<'_>) -> Option<f64> {
        if let ExprKind::Number { value, .. } = slot.value.nominal.kind
            && slot.value.spread.is_none()
            && value.is_finite()
            && slot.bound.admits(value)
        {
            return Some(value);
        }
        self.value(slot.value, &slot.what(part), slot.dimension, slot.bound)
    }

    /// A value with its spread.
    pub fn value(
        &mut self,
        value: &Value,
        what: &str,
        dimension: Dimension,
        bound: Bound,
    ) -> Option<f64> {
        let x = self.number(&value.nominal, what, dimension, bound)?;
        let kind = value.spread.as_ref().map(|s| &s.kind);
        for end in kind
            .and_then(|k| self.ends(k, x, what, dimension))
            .into_iter()
            .flatten()
        {
            if !self.held(&value.nominal, end, what, (dimension, false), bound, true) {
                break;
            }
        }
        let moved = self.shift_of(value).map_or(x, |shift| shift.of(x));
        (moved == x || self.held(&value.nominal, moved, what, (dimension, false), bound, true))
            .then_some(moved)
    }

    /// What a study moves a value by; `None` where it stays nominal.
    pub fn shift_of(&self, value: &Value) -> Option<Shift> {
        let (p, spread) = (self.moves.of(value)?, value.spread.as_ref()?);
        Some(self.shift(&spread.kind, p))
    }

    /// The shift of a spread at a position.
    pub fn shift(&self, kind: &SpreadKind, p: f64) -> Shift {
        let amount = |e: &Expr| Some((self.numbers.number(e).ok()?, self.is_share(e)));
        Shift::at(kind, p, &amount)
    }

    /// The least and the greatest value that a spread allows.
    fn ends(
        &mut self,
        kind: &SpreadKind,
        x: f64,
        what: &str,
        dimension: Dimension,
    ) -> Option<[f64; 2]> {
        let what = format!("the spread of {what}");
        let not_below = Bound::AtLeast(0.0);
        match kind {
            SpreadKind::Limits(low, high) => {
                let a = self.spread_amount(low, &what, dimension, Bound::Any)?;
                let b = self.spread_amount(high, &what, dimension, Bound::Any)?;
                let order = FaultKind::SpreadOrder {
                    low: low.to_string(),
                    high: high.to_string(),
                };
                if a >= b {
                    self.fault(order.at(low.span));
                }
                Some([self.moved(x, low, a), self.moved(x, high, b)])
            }
            SpreadKind::Tolerance(e) => {
                let a = self.spread_amount(e, &what, dimension, not_below)?;
                Some([self.moved(x, e, -a), self.moved(x, e, a)])
            }
            SpreadKind::Deviation(e) => {
                let a = 3.0 * self.spread_amount(e, &what, dimension, not_below)?;
                Some([self.moved(x, e, -a), self.moved(x, e, a)])
            }
            SpreadKind::Lognormal(e) => {
                let a = 3.0 * self.share(e, &what, not_below)?;
                Some([x * (-a).exp(), x * a.exp()])
            }
        }
    }

    fn spread_amount(
        &mut self,
        e: &Expr,
        what: &str,
        dimension: Dimension,
        bound: Bound,
    ) -> Option<f64> {
        if self.is_share(e) {
            self.share(e, what, bound)
        } else {
            self.number(e, what, dimension, bound)
        }
    }

    /// A value moved by a share of itself, or by an amount.
    fn moved(&self, x: f64, e: &Expr, by: f64) -> f64 {
        if self.is_share(e) {
            x * (1.0 + by)
        } else {
            x + by
        }
    }

    fn is_share(&self, e: &Expr) -> bool {
        self.type_of(e).is_some_and(|t| t.share)
    }

    /// The type of an expression of let-values that is checked already.
    fn type_of(&self, e: &Expr) -> Option<Type> {
        Checker::quiet(self.draft, self.index, self.types).type_of(e, Place::Constant("a number"))
    }

    /// Whether a value meets its bound; a fault where not.
    fn held(
        &mut self,
        e: &Expr,
        x: f64,
        what: &str,
        unit: (Dimension, bool),
        bound: Bound,
        spread: bool,
    ) -> bool {
        if bound.admits(x) {
            return true;
        }
        let given = self.given(spread);
        let (dimension, share) = unit;
        let kind = FaultKind::OutOfRange {
            what: what.to_owned(),
            bound,
            value: x,
            dimension,
            share,
            given,
        };
        self.fault(kind.at(e.span));
        false
    }

    pub fn given(&self, spread: bool) -> Given {
        Given {
            case: self.case.clone(),
            spread,
        }
    }

    pub fn fault(&mut self, fault: Fault) {
        self.faults.push(fault);
    }

    /// The formula of a source or a signal; `None` where something in it is reported, a constant
    /// that is no finite number among it.
    pub fn formula(&mut self, e: &Expr, what: &str) -> Option<Formula> {
        self.knots(e);
        let formula = self.numbers.formula(e).ok()?;
        let mut finite = true;
        formula.walk(&mut |f| finite &= !matches!(f, Formula::Number(x) if !x.is_finite()));
        if !finite {
            let given = self.given(false);
            self.fault(
                FaultKind::NotFinite {
                    what: what.to_owned(),
                    given,
                }
                .at(e.span),
            );
        }
        finite.then_some(formula)
    }

    /// Knots of `points` ascend, each abscissa at most twice in a row.
    pub fn knots(&mut self, e: &Expr) {
        let mut found = Vec::new();
        crate::walk::each(e, &mut |e, _| {
            if let ExprKind::Points { knots, .. } = &e.kind {
                found.push(knots);
            }
        });
        for knots in found {
            self.ascending(knots);
        }
    }

    fn ascending(&mut self, knots: &[(Expr, Expr)]) {
        let mut before: Vec<f64> = Vec::new();
        for (x, _) in knots {
            let Some(at) = self.finite(x, "a knot of `points`") else {
                return;
            };
            let last = before.last().copied();
            let again = before.len() >= 2 && before.get(before.len() - 2) == Some(&at);
            if let Some(last) = last
                && (at < last || (at == last && again))
            {
                let dimension = self.type_of(x).map_or(Dimension::NONE, |t| t.dimension);
                self.fault(
                    FaultKind::KnotOrder {
                        before: last,
                        after: at,
                        dimension,
                    }
                    .at(x.span),
                );
                return;
            }
            before.push(at);
        }
    }
}

fn limits(draft: &Draft) -> Limits {
    let mut limits = Limits::default();
    for (limit, n, _) in &draft.run.limits {
        match limit {
            Limit::Steps => limits.steps = *n,
            Limit::Events => limits.events = *n,
            Limit::Unknowns => limits.unknowns = *n,
            Limit::Parts => limits.parts = *n,
            Limit::Nesting => limits.nesting = *n,
        }
    }
    limits
}

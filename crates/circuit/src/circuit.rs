//! A checked circuit: a draft without mistakes, its names indexed and its types known.
//!
//! [`Circuit::lets`] evaluates the let-values of one case, [`Circuit::setup`] puts them in.
//! Whatever a circuit is asked about expressions of its own (formulas, values, dimensions)
//! cannot fail where those have been checked; expressions from outside are checked first with
//! [`Circuit::check_signal`] or [`Circuit::check_reading`].

use std::collections::HashMap;
use std::sync::Arc;

use crate::check::{Checker, Nominal, Place, Types, shallow};
use crate::dimension::Dimension;
use crate::draft::{Applies, Comparison, Draft, Let, Named};
use crate::expr::{Expr, ExprKind};
use crate::fault::{Fault, FaultKind, Given, NameSpace};
use crate::formula::Formula;
use crate::index::{Index, Item};
use crate::lets;
use crate::numbers::{Blocked, Numbers, Setter};
use crate::setup::{NodeIndex, PartIndex, Setup};
use crate::span::Span;
use crate::vary::{self, Moves, Positions, Stand, Varying};

/// What a let-value stands for in one case.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum LetValue {
    /// A number in coherent SI units.
    Number {
        /// The value.
        value: f64,
        /// Its dimension.
        dimension: Dimension,
    },
    /// `open circuit`
    Open,
    /// `short circuit`
    Short,
}

/// The numbers of all let-values in one case, in the draft's order.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Lets {
    values: Vec<(String, LetValue)>,
    index: Arc<HashMap<String, usize>>,
}

impl Lets {
    /// A let-value by name.
    #[must_use]
    pub fn get(&self, name: &str) -> Option<&LetValue> {
        self.index
            .get(name)
            .and_then(|i| self.values.get(*i))
            .map(|(_, v)| v)
    }

    /// All of them, in the draft's order.
    pub fn iter(&self) -> impl Iterator<Item = (&str, &LetValue)> {
        self.values.iter().map(|(n, v)| (n.as_str(), v))
    }
}

/// A draft that has been checked; made by [`Draft::check`].
#[derive(Clone, Debug)]
pub struct Circuit {
    draft: Draft,
    index: Index,
    types: Types,
    /// The let-values that stand elsewhere than as a resistor's whole value.
    number_use: Vec<bool>,
    nominal: Nominal,
    remarks: Vec<Fault>,
}

impl Circuit {
    pub(crate) fn new(
        draft: Draft,
        index: Index,
        types: Types,
        number_use: Vec<bool>,
        nominal: Nominal,
        remarks: Vec<Fault>,
    ) -> Self {
        Circuit {
            draft,
            index,
            types,
            number_use,
            nominal,
            remarks,
        }
    }

    /// The data as written.
    #[must_use]
    pub fn draft(&self) -> &Draft {
        &self.draft
    }

    /// What was seen while checking that stops nothing, in the order of the text.
    #[must_use]
    pub fn remarks(&self) -> &[Fault] {
        &self.remarks
    }

    /// Puts numbers in for one case.
    ///
    /// # Errors
    ///
    /// Every value that is out of its range in this case.
    pub fn setup(&self, set: &Lets) -> Result<Setup, Vec<Fault>> {
        self.setup_at(set, &Positions::nominal())
    }

    /// The same with values at positions within their spreads; the let-values are those of
    /// [`Circuit::lets_at`].
    ///
    /// # Errors
    ///
    /// Every value that is out of its range there.
    pub fn setup_at(&self, set: &Lets, at: &Positions) -> Result<Setup, Vec<Fault>> {
        let lookup = |name: &str| set.get(name).copied();
        let case = self.case_words(set);
        let mut setter = Setter::new(&self.draft, &self.index, &self.types, &lookup, case);
        setter.moves = Moves::new(&self.draft, at);
        setter.setup()
    }

    /// The values that vary in a study, in the order of the text: let-values, then parts.
    #[must_use]
    pub fn varying(&self) -> Vec<Varying> {
        let sites = vary::sites(&self.draft).into_iter();
        sites
            .filter_map(|site| {
                let law = vary::law(&site.value.spread.as_ref()?.kind);
                Some(Varying {
                    name: site.name,
                    law,
                })
            })
            .collect()
    }

    /// What the values that vary come to at positions within their spreads, in the order of
    /// [`Circuit::varying`]; the let-values are those of [`Circuit::lets_at`].
    #[must_use]
    pub fn stands(&self, set: &Lets, at: &Positions) -> Vec<Stand> {
        let lookup = |name: &str| set.get(name).copied();
        let mut setter = Setter::new(&self.draft, &self.index, &self.types, &lookup, Vec::new());
        setter.moves = Moves::new(&self.draft, at);
        let stand = |site: vary::Site<'_>| {
            let nominal = &site.value.nominal;
            let dimension = site.dimension.unwrap_or_else(|| self.dimension(nominal));
            let shift = setter.shift_of(site.value);
            let (value, dimension) = match (site.is_let, setter.numbers.number(nominal)) {
                (true, _) => match set.get(&site.name) {
                    Some(LetValue::Number { value, dimension }) => (*value, *dimension),
                    _ => return None,
                },
                (false, Ok(x)) => (shift.map_or(x, |s| s.of(x)), dimension),
                (false, Err(Blocked::Circuit(_))) => return None,
                (false, Err(_)) => (shift.map_or(1.0, |s| s.scale), Dimension::NONE),
            };
            Some(Stand {
                name: site.name,
                value,
                dimension,
            })
        };
        vary::sites(&self.draft)
            .into_iter()
            .filter_map(stand)
            .collect()
    }

    /// The let-values of a case that differ from those written, in words.
    fn case_words(&self, set: &Lets) -> Vec<String> {
        let differs = |name: &str, value: &LetValue| {
            let i = self.index.lets.get(name);
            i.and_then(|i| self.nominal.get(*i)).copied().flatten() != Some(*value)
        };
        set.iter()
            .filter(|(n, v)| differs(n, v))
            .map(|(n, v)| lets::words(n, v))
            .collect()
    }

    /// The numbers of all let-values, with `overrides` in place of what is written; what uses an
    /// overridden let-value follows it.
    ///
    /// # Errors
    ///
    /// An override that fits no let-value, a value that is no finite number.
    pub fn lets(&self, overrides: &[(String, LetValue)]) -> Result<Lets, Vec<Fault>> {
        self.lets_at(overrides, &Positions::nominal())
    }

    /// The same with let-values at positions within their spreads: what a case gives one is
    /// moved by its spread too.
    ///
    /// # Errors
    ///
    /// As for [`Circuit::lets`].
    pub fn lets_at(
        &self,
        overrides: &[(String, LetValue)],
        at: &Positions,
    ) -> Result<Lets, Vec<Fault>> {
        let misfits: Vec<Fault> = overrides
            .iter()
            .filter_map(|(name, value)| self.check_override(name, value).err())
            .collect();
        if !misfits.is_empty() {
            return Err(misfits);
        }
        let case = overrides.iter().map(|(n, v)| lets::words(n, v)).collect();
        let given = Given {
            case,
            spread: false,
        };
        let (draft, index, types) = (&self.draft, &self.index, &self.types);
        let moves = Moves::new(draft, at);
        let (values, faults) = lets::evaluate(draft, index, types, overrides, &moves, &given);
        if !faults.is_empty() {
            return Err(faults);
        }
        let names = self.draft.lets.iter().map(|l| l.name.text.clone());
        let values = names
            .zip(values)
            .filter_map(|(n, v)| Some((n, v?)))
            .collect();
        Ok(Lets {
            values,
            index: Arc::clone(&self.index.lets),
        })
    }

    /// The cases in order, the last stated running fastest; one case where nothing is varied.
    ///
    /// Each holds the `held` let-values and the varied ones, in the draft's order, ready for
    /// [`Circuit::lets`]. A let-value that is held is not varied: where several move together
    /// the others still do, each combination once.
    ///
    /// # Errors
    ///
    /// As for [`Circuit::lets`].
    pub fn case_sets(
        &self,
        held: &[(String, LetValue)],
    ) -> Result<Vec<Vec<(String, LetValue)>>, Vec<Fault>> {
        let stated = self.lets(held)?;
        let values: Nominal = self
            .draft
            .lets
            .iter()
            .map(|l| stated.get(&l.name.text).copied())
            .collect();
        let mut sets: Vec<lets::Set> = vec![held.to_vec()];
        for cases in &self.draft.cases {
            let rows = lets::rows(&self.draft, &self.index, &values, &self.types, cases);
            let Some(rows) = rows else {
                let what = cases
                    .names
                    .first()
                    .map_or_else(String::new, |n| format!("a case of `{n}`"));
                return Err(vec![
                    FaultKind::NotFinite {
                        what,
                        given: Given::default(),
                    }
                    .at(cases.span),
                ]);
            };
            let rows = lets::without(rows, held);
            sets = sets
                .iter()
                .flat_map(|set| rows.iter().map(|row| [set.as_slice(), row].concat()))
                .collect();
        }
        let place = |name: &str| self.index.lets.get(name).copied().unwrap_or(usize::MAX);
        sets.iter_mut()
            .for_each(|set| set.sort_by_key(|(name, _)| place(name)));
        Ok(sets)
    }

    /// A signal (or any expression of let-values, `t`, signals and edges) with numbers in.
    ///
    /// # Errors
    ///
    /// A reading in it, or a name that the circuit does not know.
    pub fn formula(&self, setup: &Setup, lets: &Lets, expr: &Expr) -> Result<Formula, Vec<Fault>> {
        debug_assert_eq!(
            setup.nodes.len(),
            self.index.node_names.len(),
            "a setup of this circuit"
        );
        shallow(expr)?;
        self.numbers(lets, &|numbers| numbers.formula(expr))
            .map_err(|why| vec![blocked(why, expr, "a signal")])
    }

    /// The number of an expression of let-values, in coherent SI units.
    ///
    /// # Errors
    ///
    /// Where it uses more than let-values, or is no finite number.
    pub fn value(&self, lets: &Lets, expr: &Expr) -> Result<f64, Vec<Fault>> {
        shallow(expr)?;
        match self.numbers(lets, &|numbers| numbers.number(expr)) {
            Ok(x) if x.is_finite() => Ok(x),
            Ok(_) => {
                let given = Given {
                    case: self.case_words(lets),
                    spread: false,
                };
                Err(vec![
                    FaultKind::NotFinite {
                        what: format!("`{expr}`"),
                        given,
                    }
                    .at(expr.span),
                ])
            }
            Err(why) => Err(vec![blocked(why, expr, "a value")]),
        }
    }

    fn numbers<T>(&self, lets: &Lets, take: &dyn Fn(&Numbers<'_>) -> T) -> T {
        let lookup = |name: &str| lets.get(name).copied();
        take(&Numbers {
            draft: &self.draft,
            index: &self.index,
            lookup: &lookup,
        })
    }

    /// Whether a claim's `when` condition holds in a case. A comparison of a circuit word does
    /// not.
    ///
    /// # Errors
    ///
    /// As for [`Circuit::value`].
    pub fn applies(&self, lets: &Lets, condition: &Applies) -> Result<bool, Vec<Fault>> {
        match condition {
            Applies::Circuit { name, open } => {
                let word = if *open {
                    LetValue::Open
                } else {
                    LetValue::Short
                };
                Ok(lets.get(&name.text) == Some(&word))
            }
            Applies::Compare {
                left,
                comparison,
                right,
            } => {
                let is_circuit = |e: &Expr| {
                    crate::walk::any(e, &|e| match &e.kind {
                        ExprKind::Name(name) => {
                            matches!(lets.get(name), Some(LetValue::Open | LetValue::Short))
                        }
                        _ => false,
                    })
                };
                if is_circuit(left) || is_circuit(right) {
                    return Ok(false);
                }
                let (x, y) = (self.value(lets, left)?, self.value(lets, right)?);
                Ok(match comparison {
                    Comparison::Less => x < y,
                    Comparison::LessOrEqual => x <= y,
                    Comparison::Greater => x > y,
                    Comparison::GreaterOrEqual => x >= y,
                    Comparison::Equal => x == y,
                })
            }
        }
    }

    /// The dimension of a checked expression: of let-values, a signal, a reading. That of a
    /// plain number where it was not checked and has a mistake.
    #[must_use]
    pub fn dimension(&self, expr: &Expr) -> Dimension {
        if shallow(expr).is_err() {
            return Dimension::NONE;
        }
        self.checker()
            .any_type(expr)
            .map_or(Dimension::NONE, |t| t.dimension)
    }

    fn checker(&self) -> Checker<'_> {
        Checker::quiet(&self.draft, &self.index, &self.types)
    }

    /// Checks a signal that is not the draft's own (a channel asked for by a command), and
    /// gives its dimension.
    ///
    /// # Errors
    ///
    /// Every mistake in it.
    pub fn check_signal(&self, expr: &Expr) -> Result<Dimension, Vec<Fault>> {
        shallow(expr)?;
        let mut checker = self.checker();
        checker.measured(expr).ok_or(checker.faults)
    }

    /// Checks a reading that is not the draft's own, and gives its dimension.
    ///
    /// # Errors
    ///
    /// Every mistake in it.
    pub fn check_reading(&self, expr: &Expr) -> Result<Dimension, Vec<Fault>> {
        shallow(expr)?;
        let mut checker = self.checker();
        let Some(found) = checker.type_of(expr, Place::Reading) else {
            return Err(checker.faults);
        };
        let lookup = lets::lookup(&self.index, &self.nominal);
        let mut setter = Setter::new(&self.draft, &self.index, &self.types, &lookup, Vec::new());
        setter.reading(expr);
        if setter.faults.is_empty() {
            Ok(found.dimension)
        } else {
            Err(setter.faults)
        }
    }

    /// Checks that a let-value may be given `value` from outside.
    ///
    /// # Errors
    ///
    /// An unknown name (with the near one), another dimension, a circuit word where a number is
    /// needed.
    pub fn check_override(&self, name: &str, value: &LetValue) -> Result<(), Fault> {
        let Some(i) = self.index.lets.get(name).copied() else {
            let mut checker = self.checker();
            checker.unknown(name, NameSpace::Let, Span::NONE);
            let kind = FaultKind::Unknown {
                name: name.to_owned(),
                space: NameSpace::Let,
                near: None,
                also: None,
            };
            return Err(checker.faults.pop().unwrap_or_else(|| kind.at(Span::NONE)));
        };
        let wants = self
            .types
            .lets
            .get(i)
            .copied()
            .flatten()
            .map_or(Dimension::NONE, |t| t.dimension);
        match value {
            LetValue::Number { value, dimension } => {
                let e = Expr::number(*value, *dimension);
                let mut checker = self.checker();
                let found = crate::check::Type::of(*dimension);
                checker.wants(&e, found, &format!("`{name}`"), wants);
                match checker.faults.pop() {
                    Some(fault) => Err(fault),
                    None if value.is_finite() => Ok(()),
                    None => {
                        let kind = FaultKind::NotFinite {
                            what: format!("`{name}`"),
                            given: Given::default(),
                        };
                        Err(kind.at(Span::NONE))
                    }
                }
            }
            LetValue::Open | LetValue::Short => {
                if wants != Dimension::OHM {
                    return Err(FaultKind::NeverCircuit {
                        name: name.to_owned(),
                        is: wants,
                    }
                    .at(Span::NONE));
                }
                if self.number_use.get(i).copied().unwrap_or(false) {
                    return Err(FaultKind::NotOverridable {
                        name: name.to_owned(),
                    }
                    .at(Span::NONE));
                }
                Ok(())
            }
        }
    }

    /// The index of a part by name.
    #[must_use]
    pub fn part_index(&self, name: &str) -> Option<PartIndex> {
        self.index.parts.get(name).copied()
    }

    /// The index of a node by name; `ground` is 0.
    #[must_use]
    pub fn node_index(&self, name: &str) -> Option<NodeIndex> {
        self.index.nodes.get(name).copied()
    }

    /// A named reading.
    #[must_use]
    pub fn find_reading(&self, name: &str) -> Option<&Named> {
        match self.index.names.get(name) {
            Some(Item::Reading(i)) => self.draft.readings.get(*i),
            _ => None,
        }
    }

    /// A named signal.
    #[must_use]
    pub fn find_signal(&self, name: &str) -> Option<&Named> {
        match self.index.names.get(name) {
            Some(Item::Signal(i)) => self.draft.signals.get(*i),
            _ => None,
        }
    }

    /// A let-value as written.
    #[must_use]
    pub fn find_let(&self, name: &str) -> Option<&Let> {
        self.index
            .lets
            .get(name)
            .and_then(|i| self.draft.lets.get(*i))
    }

    /// The channels: those written, else the signals that readings and claims use, each once.
    #[must_use]
    pub fn channels(&self) -> Vec<Expr> {
        crate::defaults::channels(&self.draft)
    }

    /// The defaults that are taken, in words.
    #[must_use]
    pub fn defaults(&self) -> Vec<String> {
        crate::defaults::words(&self.draft)
    }
}

/// Why an expression has no number, as a fault.
fn blocked(why: Blocked, e: &Expr, place: &'static str) -> Fault {
    match why {
        Blocked::Unknown(name) => FaultKind::Unknown {
            name,
            space: NameSpace::LetOrSignal,
            near: None,
            also: None,
        }
        .at(e.span),
        Blocked::Circuit(name) => FaultKind::CircuitLet { name }.at(e.span),
        Blocked::Reading(reading) => FaultKind::ReadingHere { reading, place }.at(e.span),
    }
}

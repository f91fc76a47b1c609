//! The check: every mistake of a draft at once, and remarks.
//!
//! ```text
//! depth -> names -> circles -> types -> numbers -> topology
//! ```
//!
//! Each stage speaks only of what the stages before it found sound: an expression with an
//! unknown name has no type, and what has no type has no number, so that one cause gives one
//! mistake. Faults are handed over in the order of the text.

mod adjust;
mod cases;
mod circles;
mod claims;
mod definitions;
mod linear;
mod names;
mod numeric;
mod parts;
mod phrases;
mod run;
mod sums;
#[cfg(test)]
mod tests;
mod topology;
mod typing;

pub use names::{is_name, reserved};
pub(crate) use typing::{Place, Type};

use std::borrow::Cow;

use crate::circuit::{Circuit, LetValue};
use crate::draft::{Claim, Draft, Relation};
use crate::expr::{Expr, ExprKind};
use crate::fault::{Fault, FaultKind, NameSpace};
use crate::index::{Index, Item};
use crate::near::nearest;
use crate::span::Span;
use linear::Class;

/// How deep an expression may be nested, each operator of a chain counted: recursion over it
/// stays within a small stack.
const DEEPEST: usize = 400;

/// How many names are compared in all to find near ones.
const COMPARED: usize = 3_000_000;

/// The types of everything named.
#[derive(Clone, Debug, Default)]
pub(crate) struct Types {
    pub lets: Vec<Option<Type>>,
    pub signals: Vec<Option<Type>>,
    pub readings: Vec<Option<Type>>,
    /// The let-values that can be an open or a short circuit.
    pub circuit: Vec<bool>,
}

/// What a check keeps while it goes through a draft.
pub(crate) struct Checker<'a> {
    pub draft: &'a Draft,
    pub index: &'a Index,
    pub types: Cow<'a, Types>,
    pub classes: Vec<Class>,
    /// The let-values that stand elsewhere than as a resistor's whole value.
    pub number_use: Vec<bool>,
    pub faults: Vec<Fault>,
    pub remarks: Vec<Fault>,
    /// Whether a definition without a type was used since this was last cleared.
    blocked: bool,
    comparisons: usize,
}

impl Draft {
    /// Checks everything, and hands over the circuit or every mistake, in the order of the text.
    ///
    /// # Errors
    ///
    /// Every mistake in the draft.
    ///
    /// # Example
    ///
    /// ```
    /// use pulsewright_circuit::Draft;
    /// let faults = Draft::default().check().unwrap_err();
    /// assert_eq!(faults.len(), 2); // no span, and nothing touches ground
    /// ```
    pub fn check(mut self) -> Result<Circuit, Vec<Fault>> {
        let deep = too_deep(&self);
        if !deep.is_empty() {
            return Err(deep);
        }
        let mut index = Index::new(&self);
        let (mut found, types, number_use, nominal, remarks, swaps) = {
            let mut names = Vec::new();
            names::check(&self, &mut names);
            let order = definitions::order(&self, &index, &mut names);
            index.let_order = order.lets.clone();
            let mut checker = Checker::new(&self, &index, Cow::Owned(Types::default()));
            checker.faults = names;
            checker.definitions(&order);
            let bad = numeric::Bad {
                parts: checker.parts(),
                readings: checker.readings_bad(),
                claims: checker.claims(),
                cases: checker.cases(),
                adjust: checker.adjust(),
            };
            checker.run();
            checker.sums();
            topology::check(&mut checker);
            let nominal = checker.numeric(&bad);
            let swaps = checker.swapped_claims();
            let Checker {
                faults,
                types,
                number_use,
                remarks,
                ..
            } = checker;
            (
                faults,
                types.into_owned(),
                number_use,
                nominal,
                remarks,
                swaps,
            )
        };
        if !found.is_empty() {
            found.sort_by_key(|f| f.span.start);
            return Err(found);
        }
        swap(&mut self, &swaps);
        Ok(Circuit::new(
            self,
            index,
            types,
            number_use,
            nominal,
            sorted(remarks),
        ))
    }
}

fn sorted(mut remarks: Vec<Fault>) -> Vec<Fault> {
    remarks.sort_by_key(|f| f.span.start);
    remarks
}

/// Shares and amounts of `within` change places where a let-value decided which is which.
fn swap(draft: &mut Draft, claims: &[usize]) {
    for i in claims {
        if let Some(Claim {
            relation: Relation::Within { share, amount, .. },
            ..
        }) = draft.claims.get_mut(*i)
        {
            std::mem::swap(share, amount);
        }
    }
}

impl<'a> Checker<'a> {
    fn new(draft: &'a Draft, index: &'a Index, types: Cow<'a, Types>) -> Self {
        let number_use = vec![false; draft.lets.len()];
        let mut checker = Checker::with(draft, index, types);
        checker.number_use = number_use;
        checker
    }

    /// A checker of more expressions for a draft whose types are known.
    pub fn quiet(draft: &'a Draft, index: &'a Index, types: &'a Types) -> Self {
        Checker::with(draft, index, Cow::Borrowed(types))
    }

    fn with(draft: &'a Draft, index: &'a Index, types: Cow<'a, Types>) -> Self {
        let (classes, number_use, faults, remarks) =
            (Vec::new(), Vec::new(), Vec::new(), Vec::new());
        Checker {
            draft,
            index,
            types,
            classes,
            number_use,
            faults,
            remarks,
            blocked: false,
            comparisons: COMPARED,
        }
    }

    pub fn fault(&mut self, fault: Fault) {
        self.faults.push(fault);
    }

    /// Reports a fault; for where a type or a part would stand.
    fn report<T>(&mut self, kind: FaultKind, span: Span) -> Option<T> {
        self.faults.push(kind.at(span));
        None
    }

    fn used_as_number(&mut self, i: usize) {
        if let Some(used) = self.number_use.get_mut(i) {
            *used = true;
        }
    }

    /// Reports a name that nothing has, with the near one.
    pub fn unknown(&mut self, name: &str, space: NameSpace, span: Span) {
        let also = self.elsewhere(name, space);
        let near = if also.is_some() {
            None
        } else {
            self.near(name, space)
        };
        self.fault(
            FaultKind::Unknown {
                name: name.to_owned(),
                space,
                near,
                also,
            }
            .at(span),
        );
    }

    /// What has this name in another name space.
    fn elsewhere(&self, name: &str, space: NameSpace) -> Option<String> {
        if space != NameSpace::Part && self.index.parts.contains_key(name) {
            return Some("part".to_owned());
        }
        if space == NameSpace::Part && self.index.nodes.contains_key(name) {
            return Some("node".to_owned());
        }
        let word = match self.index.names.get(name)? {
            Item::Let(_) => "let-value",
            Item::Signal(_) => "signal",
            Item::Reading(_) => "reading",
        };
        Some(word.to_owned())
    }

    /// The near name of a space, as long as comparing stays cheap.
    fn near(&mut self, name: &str, space: NameSpace) -> Option<String> {
        let draft = self.draft;
        let lets = draft.lets.iter().map(|l| l.name.text.as_str());
        let signals = draft.signals.iter().map(|s| s.name.text.as_str());
        let readings = draft.readings.iter().map(|r| r.name.text.as_str());
        let count = match space {
            NameSpace::Part => draft.parts.len(),
            NameSpace::Node => self.index.node_names.len(),
            _ => draft.lets.len() + draft.signals.len() + draft.readings.len(),
        };
        self.comparisons = self.comparisons.checked_sub(count)?;
        let found = match space {
            NameSpace::Part => nearest(name, draft.parts.iter().map(|p| p.name.text.as_str())),
            NameSpace::Node => nearest(name, self.index.node_names.iter().map(String::as_str)),
            NameSpace::LetOrSignal => nearest(name, lets.chain(signals)),
            NameSpace::LetOrReading => nearest(name, lets.chain(readings)),
            _ => nearest(name, lets),
        };
        found.map(str::to_owned)
    }

    /// The dimension of any checked expression: of let-values, a signal, a reading.
    pub fn any_type(&mut self, e: &Expr) -> Option<Type> {
        if matches!(e.kind, ExprKind::OpenCircuit | ExprKind::ShortCircuit) {
            return Some(Type::of(crate::Dimension::OHM));
        }
        for place in [Place::Reading, Place::Signal, Place::When] {
            let before = self.faults.len();
            if let Some(found) = self.type_of(e, place)
                && self.faults.len() == before
            {
                return Some(found);
            }
        }
        None
    }
}

/// Every expression that is nested too deep; nothing else is looked at then.
fn too_deep(draft: &Draft) -> Vec<Fault> {
    let mut found = Vec::new();
    crate::walk::all(draft, &mut |e| {
        let mut deepest = 0;
        crate::walk::each(e, &mut |_, depth| deepest = deepest.max(depth));
        if deepest > DEEPEST {
            found.push(FaultKind::TooDeep { deepest: DEEPEST }.at(e.span));
        }
    });
    found
}

/// Whether an expression is nested no deeper than is kept.
pub(crate) fn shallow(e: &Expr) -> Result<(), Vec<Fault>> {
    let mut deepest = 0;
    crate::walk::each(e, &mut |_, depth| deepest = deepest.max(depth));
    if deepest > DEEPEST {
        Err(vec![FaultKind::TooDeep { deepest: DEEPEST }.at(e.span)])
    } else {
        Ok(())
    }
}

/// The let-values as far as they have numbers, by place in the draft.
pub(crate) type Nominal = Vec<Option<LetValue>>;

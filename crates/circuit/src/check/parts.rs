//! Parts: the dimensions of their values, couplings' inductors, gangs, changeovers' nodes.

use std::collections::HashMap;

use super::Checker;
use super::linear::Class;
use super::typing::{Place, Type};
use crate::dimension::Dimension;
use crate::expr::{Expr, ExprKind};
use crate::fault::FaultKind;
use crate::index::Item;
use crate::parts::{Control, Coupling, Part, PartKind};
use crate::schedule::{Action, Change, TriggerKind};
use crate::slots::{Asks, Slot, slots};
use crate::spread::{Spread, SpreadKind};

impl<'a> Checker<'a> {
    /// Every part; says which are at fault.
    pub fn parts(&mut self) -> Vec<bool> {
        let (mut pairs, mut bad) = (HashMap::new(), Vec::with_capacity(self.draft.parts.len()));
        for part in &self.draft.parts {
            let before = self.faults.len();
            self.blocked = false;
            for slot in slots(&part.kind) {
                self.slot(part, &slot);
            }
            match &part.kind {
                PartKind::Coupling(c) => self.coupling(part, c, &mut pairs),
                PartKind::Switch(s) => match &s.control {
                    Control::Ganged(other) => {
                        let fits = |k: &PartKind| matches!(k, PartKind::Switch(_));
                        self.of_kind(other, "ganged with", "a switch", &fits);
                    }
                    Control::Schedule { actions, .. } => self.actions(part, actions),
                },
                PartKind::Changeover(c) => {
                    if c.first == c.second {
                        let kind = FaultKind::SameContacts {
                            part: part.name.text.clone(),
                            node: c.first.text.clone(),
                        };
                        self.fault(kind.at(c.second.span));
                    }
                    self.its_node(&part.name, c, &c.start);
                    self.actions(part, &c.actions);
                }
                _ => {}
            }
            bad.push(self.blocked || self.faults.len() > before);
        }
        self.gangs(&mut bad);
        bad
    }

    fn slot(&mut self, part: &Part, slot: &Slot<'_>) {
        if is_plain_number(slot) {
            return;
        }
        let what = slot.what(&part.name.text);
        let e = &slot.value.nominal;
        let found = match slot.asks {
            Asks::Number => self.of(e, Place::Constant("a part's value"), &what, slot.dimension),
            Asks::Resistance => self.resistance(e, &what),
            Asks::Formula => self.source(e, &what, slot.dimension),
        };
        if let Some(spread) = &slot.value.spread {
            self.spread(spread, &what, found.map(|t| t.dimension));
        }
    }

    /// A resistor's value: a number, a circuit word, or a let-value that may be either.
    fn resistance(&mut self, e: &Expr, what: &str) -> Option<Type> {
        match &e.kind {
            ExprKind::OpenCircuit | ExprKind::ShortCircuit => Some(Type::of(Dimension::OHM)),
            ExprKind::Name(name) => match self.index.names.get(name) {
                Some(Item::Let(i)) => {
                    let found = self.defined(self.types.lets.get(*i).copied().flatten())?;
                    self.wants(e, found, what, Dimension::OHM).then_some(found)
                }
                _ => self.of(e, Place::Constant("a part's value"), what, Dimension::OHM),
            },
            _ => self.of(e, Place::Constant("a part's value"), what, Dimension::OHM),
        }
    }

    fn source(&mut self, e: &Expr, what: &str, dimension: Dimension) -> Option<Type> {
        let found = self.of(e, Place::Source, what, dimension)?;
        match self.class(e) {
            Class::NotLinear {
                span,
                text,
                changes,
            } => {
                let what = what.to_owned();
                self.report(
                    FaultKind::NotLinear {
                        what,
                        found: text,
                        changes,
                    },
                    span,
                )
            }
            _ => Some(found),
        }
    }

    /// A spread: shares, or amounts of the value's dimension (`None` where that is unknown).
    pub fn spread(&mut self, spread: &Spread, what: &str, dimension: Option<Dimension>) {
        let what = format!("the spread of {what}");
        match &spread.kind {
            SpreadKind::Tolerance(e) | SpreadKind::Deviation(e) => self.amount(e, &what, dimension),
            SpreadKind::Limits(a, b) => {
                self.amount(a, &what, dimension);
                self.amount(b, &what, dimension);
            }
            SpreadKind::Lognormal(e) => {
                self.share(e, &what);
            }
        }
    }

    fn amount(&mut self, e: &Expr, what: &str, dimension: Option<Dimension>) {
        let place = Place::Constant("a spread");
        match dimension {
            Some(d) if !d.is_none() => {
                if let Some(found) = self.type_of(e, place)
                    && !found.share
                {
                    if found.dimension.is_none() {
                        self.share(e, what);
                    } else {
                        self.wants(e, found, what, d);
                    }
                }
            }
            Some(_) => {
                self.share(e, what);
            }
            None => {
                self.type_of(e, place);
            }
        }
    }

    fn coupling(
        &mut self,
        part: &Part,
        c: &Coupling,
        pairs: &mut HashMap<(usize, usize), &'a str>,
    ) {
        let fits = |k: &PartKind| matches!(k, PartKind::Inductor(_));
        let first = self.of_kind(&c.first, "coupling between", "inductors", &fits);
        let second = self.of_kind(&c.second, "coupling between", "inductors", &fits);
        if first.is_none() || second.is_none() {
            return;
        }
        if c.first == c.second {
            self.fault(
                FaultKind::CoupledToItself {
                    part: c.first.text.clone(),
                }
                .at(c.second.span),
            );
            return;
        }
        let place = |name: &str| self.index.parts.get(name).copied().unwrap_or(0);
        let (a, b) = (place(&c.first.text), place(&c.second.text));
        let own = self
            .index
            .parts
            .get_key_value(&part.name.text)
            .map_or("", |(name, _)| name.as_str());
        if let Some(earlier) = pairs.insert((a.min(b), a.max(b)), own) {
            let (first, second) = (c.first.text.clone(), c.second.text.clone());
            let kind = FaultKind::CoupledTwice {
                first,
                second,
                earlier: earlier.to_owned(),
            };
            self.fault(kind.at(part.name.span));
        }
    }

    /// Gangs that follow each other in a circle.
    fn gangs(&mut self, bad: &mut [bool]) {
        let mut follows: Vec<Vec<usize>> = vec![Vec::new(); self.draft.parts.len()];
        for (i, part) in self.draft.parts.iter().enumerate() {
            if let PartKind::Switch(s) = &part.kind
                && let Control::Ganged(other) = &s.control
                && let Some(j) = self.index.parts.get(&other.text)
                && let Some(list) = follows.get_mut(i)
            {
                list.push(*j);
            }
        }
        if follows.iter().all(Vec::is_empty) {
            return;
        }
        let name = |i: usize| self.draft.parts.get(i).map(|p| p.name.clone());
        for path in super::circles::Circles::find(&follows).paths {
            let named: Vec<_> = path.iter().filter_map(|i| name(*i)).collect();
            super::circles::report(&mut self.faults, named, "is ganged with");
            for i in path {
                if let Some(bad) = bad.get_mut(i) {
                    *bad = true;
                }
            }
        }
    }

    fn actions(&mut self, part: &Part, actions: &[Action]) {
        for action in actions {
            self.change(part, action);
            if action.triggers.is_empty() {
                self.fault(
                    FaultKind::NoTrigger {
                        part: part.name.text.clone(),
                    }
                    .at(action.span),
                );
            }
            let mut instants = 0;
            for trigger in &action.triggers {
                if matches!(trigger.kind, TriggerKind::At(_)) {
                    instants += 1;
                    if instants > 1 {
                        self.fault(FaultKind::TwoInstants.at(trigger.span));
                    }
                }
                self.trigger(part, &trigger.kind);
            }
        }
    }

    fn change(&mut self, part: &Part, action: &Action) {
        let words = match (&action.change, &part.kind) {
            (Change::MovesTo(node), PartKind::Changeover(c)) => {
                self.its_node(&part.name, c, node);
                return;
            }
            (Change::Closes | Change::Opens, PartKind::Switch(_)) => return,
            (Change::Closes, _) => "closes".to_owned(),
            (Change::Opens, _) => "opens".to_owned(),
            (Change::MovesTo(node), _) => format!("moves to `{node}`"),
        };
        let kind = FaultKind::WrongAction {
            part: part.name.text.clone(),
            is: part.kind.word(),
            action: words,
        };
        self.fault(kind.at(action.span));
    }

    fn trigger(&mut self, part: &Part, trigger: &TriggerKind) {
        let name = &part.name.text;
        match trigger {
            TriggerKind::At(value) => {
                let what = format!("an instant of `{name}`");
                self.of(
                    &value.nominal,
                    Place::Constant("an instant"),
                    &what,
                    Dimension::SECOND,
                );
                self.spread_of(value.spread.as_ref(), &what, Some(Dimension::SECOND));
            }
            TriggerKind::When { signal, level, .. } => {
                let d = self.measured(signal);
                let what = format!("a level of `{name}`");
                let found = self.type_of(&level.nominal, Place::Constant("a level"));
                if let (Some(d), Some(found)) = (d, found) {
                    self.wants(&level.nominal, found, &what, d);
                }
                self.spread_of(level.spread.as_ref(), &what, d);
            }
            TriggerKind::Delay { delay, edge } => {
                let what = format!("a delay of `{name}`");
                self.of(&delay.nominal, Place::Delay, &what, Dimension::SECOND);
                self.edge(edge);
                self.spread_of(delay.spread.as_ref(), &what, Some(Dimension::SECOND));
            }
            TriggerKind::ZeroCurrent { after } => {
                if let Some(e) = after {
                    self.of(
                        e,
                        Place::Delay,
                        &format!("an instant of `{name}`"),
                        Dimension::SECOND,
                    );
                }
            }
        }
    }

    fn spread_of(&mut self, spread: Option<&Spread>, what: &str, dimension: Option<Dimension>) {
        if let Some(spread) = spread {
            self.spread(spread, what, dimension);
        }
    }
}

/// Whether a value is a number of the wanted dimension as it stands: nearly all are.
fn is_plain_number(slot: &Slot<'_>) -> bool {
    let fits = matches!(slot.value.nominal.kind, ExprKind::Number { dimension, .. } if dimension == slot.dimension);
    fits && slot.value.spread.is_none()
}

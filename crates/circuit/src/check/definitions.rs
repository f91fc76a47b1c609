//! Let-values, signals and readings: their order of use, their circles, their types.

use super::circles::{self, Circles};
use super::linear::Class;
use super::typing::{Place, Type};
use super::{Checker, DEEPEST};
use crate::dimension::Dimension;
use crate::draft::{CaseValues, Draft};
use crate::expr::{Expr, ExprKind};
use crate::fault::{Fault, FaultKind};
use crate::index::{Index, Item};
use crate::span::Name;

/// How many nodes a signal may have with the signals that it uses in place.
const LARGEST: u64 = 100_000;

/// In which order definitions are taken: each after those that it uses, those in circles left
/// out.
pub(super) struct Order {
    pub lets: Vec<usize>,
    pub all: Vec<Item>,
}

/// Finds the order, and reports circles.
pub(super) fn order(draft: &Draft, index: &Index, faults: &mut Vec<Fault>) -> Order {
    let items = items(draft);
    let (n_lets, n_signals) = (draft.lets.len(), draft.signals.len());
    let place = |item: Item| match item {
        Item::Let(i) => i,
        Item::Signal(i) => n_lets + i,
        Item::Reading(i) => n_lets + n_signals + i,
    };
    let mut uses: Vec<Vec<usize>> = items
        .iter()
        .map(|(_, _, e)| {
            let mut found = Vec::new();
            crate::walk::names(e, &mut |name, _| {
                found.extend(index.names.get(name).map(|i| place(*i)))
            });
            found
        })
        .collect();
    for (l, found) in draft.lets.iter().zip(&mut uses) {
        let spread = l.value.spread.as_ref();
        for e in spread.into_iter().flat_map(|s| s.kind.amounts()) {
            crate::walk::names(e, &mut |name, _| {
                found.extend(index.names.get(name).map(|i| place(*i)))
            });
        }
    }
    for found in &mut uses {
        found.sort_unstable();
        found.dedup();
    }
    let circles = Circles::find(&uses);
    for path in circles.paths {
        let named = path
            .iter()
            .filter_map(|i| items.get(*i).map(|(_, name, _)| (*name).clone()))
            .collect();
        circles::report(faults, named, "uses");
    }
    let all: Vec<Item> = circles
        .order
        .iter()
        .filter_map(|i| items.get(*i).map(|(item, ..)| *item))
        .collect();
    let lets = all
        .iter()
        .filter_map(|item| {
            if let Item::Let(i) = item {
                Some(*i)
            } else {
                None
            }
        })
        .collect();
    Order { lets, all }
}

fn items(draft: &Draft) -> Vec<(Item, &Name, &Expr)> {
    let mut all: Vec<(Item, &Name, &Expr)> = Vec::new();
    all.extend(
        draft
            .lets
            .iter()
            .enumerate()
            .map(|(i, l)| (Item::Let(i), &l.name, &l.value.nominal)),
    );
    all.extend(
        draft
            .signals
            .iter()
            .enumerate()
            .map(|(i, s)| (Item::Signal(i), &s.name, &s.value)),
    );
    all.extend(
        draft
            .readings
            .iter()
            .enumerate()
            .map(|(i, r)| (Item::Reading(i), &r.name, &r.value)),
    );
    all
}

/// How large a definition is with those that it uses in place.
#[derive(Clone, Copy, Default)]
struct Size {
    nodes: u64,
    depth: usize,
}

impl Checker<'_> {
    /// Types every definition, in order of use.
    pub(super) fn definitions(&mut self, order: &Order) {
        let draft = self.draft;
        let types = self.types.to_mut();
        types.lets = vec![None; draft.lets.len()];
        types.signals = vec![None; draft.signals.len()];
        types.readings = vec![None; draft.readings.len()];
        types.circuit = circuit_lets(draft, self.index);
        self.classes = vec![Class::Constant; draft.signals.len()];
        let mut signals = vec![Size::default(); draft.signals.len()];
        let mut readings = vec![Size::default(); draft.readings.len()];
        for item in &order.all {
            match *item {
                Item::Let(i) => self.define_let(i),
                Item::Signal(i) => self.define_signal(i, &mut signals),
                Item::Reading(i) => self.define_reading(i, &mut readings),
            }
        }
    }

    fn define_let(&mut self, i: usize) {
        let Some(l) = self.draft.lets.get(i) else {
            return;
        };
        let found = match &l.value.nominal.kind {
            ExprKind::OpenCircuit | ExprKind::ShortCircuit => Some(Type::of(Dimension::OHM)),
            _ => self.type_of(&l.value.nominal, Place::Constant("a let-value")),
        };
        if let Some(spread) = &l.value.spread {
            self.spread(spread, &format!("`{}`", l.name), found.map(|t| t.dimension));
        }
        if let Some(place) = self.types.to_mut().lets.get_mut(i) {
            *place = found;
        }
    }

    fn define_signal(&mut self, i: usize, sizes: &mut [Size]) {
        let Some(s) = self.draft.signals.get(i) else {
            return;
        };
        let index = self.index;
        let size = size(&s.value, &|name| match index.names.get(name) {
            Some(Item::Signal(j)) => sizes.get(*j).copied().unwrap_or_default(),
            _ => Size::default(),
        });
        let found = self.type_of(&s.value, Place::Signal);
        if found.is_none() || !self.fits(size, &s.name) {
            return;
        }
        let class = self.class(&s.value);
        if let Some(place) = sizes.get_mut(i) {
            *place = size;
        }
        if let Some(place) = self.types.to_mut().signals.get_mut(i) {
            *place = found;
        }
        if let Some(place) = self.classes.get_mut(i) {
            *place = class;
        }
    }

    fn define_reading(&mut self, i: usize, sizes: &mut [Size]) {
        let Some(r) = self.draft.readings.get(i) else {
            return;
        };
        let index = self.index;
        let mut size = size(&r.value, &|name| match index.names.get(name) {
            Some(Item::Reading(j)) => sizes.get(*j).copied().unwrap_or_default(),
            _ => Size::default(),
        });
        // A reading is measured once however often it is used, so that only its depth counts.
        size.nodes = 0;
        let found = self.type_of(&r.value, Place::Reading);
        if found.is_none() || !self.fits(size, &r.name) {
            return;
        }
        if let Some(place) = sizes.get_mut(i) {
            *place = size;
        }
        if let Some(place) = self.types.to_mut().readings.get_mut(i) {
            *place = found;
        }
    }

    fn fits(&mut self, size: Size, name: &Name) -> bool {
        let fits = size.nodes <= LARGEST && size.depth <= DEEPEST;
        if !fits {
            self.fault(
                FaultKind::TooLarge {
                    name: name.text.clone(),
                }
                .at(name.span),
            );
        }
        fits
    }

    /// For each reading whether something in it is at fault.
    pub(super) fn readings_bad(&self) -> Vec<bool> {
        self.types.readings.iter().map(Option::is_none).collect()
    }
}

fn size(e: &Expr, of: &dyn Fn(&str) -> Size) -> Size {
    let mut size = Size::default();
    crate::walk::each(e, &mut |e, depth| {
        let inner = if let ExprKind::Name(name) = &e.kind {
            of(name)
        } else {
            Size::default()
        };
        size.nodes = size.nodes.saturating_add(1).saturating_add(inner.nodes);
        size.depth = size.depth.max(depth.saturating_add(inner.depth));
    });
    size
}

/// The let-values that are a circuit word, as written or in a case.
fn circuit_lets(draft: &Draft, index: &Index) -> Vec<bool> {
    let word = |e: &Expr| matches!(e.kind, ExprKind::OpenCircuit | ExprKind::ShortCircuit);
    let mut found: Vec<bool> = draft.lets.iter().map(|l| word(&l.value.nominal)).collect();
    for cases in &draft.cases {
        let CaseValues::Rows(rows) = &cases.values else {
            continue;
        };
        for row in rows {
            for (name, e) in cases.names.iter().zip(row) {
                if word(e)
                    && let Some(Item::Let(i)) = index.names.get(&name.text)
                    && let Some(place) = found.get_mut(*i)
                {
                    *place = true;
                }
            }
        }
    }
    found
}

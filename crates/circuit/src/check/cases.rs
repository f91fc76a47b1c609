//! Cases: names that exist, values that fit them, counts, and nothing varied twice.

use std::collections::{HashMap, HashSet};

use super::Checker;
use super::typing::{Place, Type};
use crate::dimension::Dimension;
use crate::draft::{CaseValues, Cases};
use crate::expr::{Expr, ExprKind};
use crate::fault::{FaultKind, NameSpace};
use crate::index::Item;
use crate::span::Name;

/// The most cases that a draft may have.
const MOST: u64 = 1_000_000;

impl Checker<'_> {
    /// Every `cases` statement; says which are at fault.
    pub(super) fn cases(&mut self) -> Vec<bool> {
        let draft = self.draft;
        let (mut seen, mut bad) = (HashSet::new(), Vec::new());
        for cases in &draft.cases {
            let before = self.faults.len();
            let types: Vec<Option<Type>> = cases
                .names
                .iter()
                .map(|n| self.varied(n, &mut seen))
                .collect();
            match &cases.values {
                CaseValues::Rows(rows) => self.rows(cases, rows, &types),
                CaseValues::Range {
                    from,
                    to,
                    count,
                    count_span,
                    ..
                } => {
                    if cases.names.len() != 1 {
                        let kind = FaultKind::CaseWidth {
                            names: cases.names.len(),
                            values: 1,
                        };
                        self.fault(kind.at(cases.span));
                    }
                    let (name, found) = (cases.names.first(), types.first().copied().flatten());
                    for e in [from, to] {
                        self.case_value(e, name, found, false);
                    }
                    if *count == 0 {
                        self.fault(FaultKind::CaseCount { count: 0 }.at(*count_span));
                    }
                }
            }
            bad.push(self.faults.len() > before);
        }
        self.uses_of_varied();
        if self.too_many() {
            bad.fill(true);
        }
        bad
    }

    fn varied<'n>(&mut self, name: &'n Name, seen: &mut HashSet<&'n str>) -> Option<Type> {
        let Some(Item::Let(i)) = self.index.names.get(&name.text).copied() else {
            self.unknown(&name.text, NameSpace::Let, name.span);
            return None;
        };
        if !seen.insert(&name.text) {
            self.fault(
                FaultKind::CasesTwice {
                    name: name.text.clone(),
                }
                .at(name.span),
            );
        }
        self.types.lets.get(i).copied().flatten()
    }

    fn rows(&mut self, cases: &Cases, rows: &[Vec<Expr>], types: &[Option<Type>]) {
        if rows.is_empty() {
            self.fault(FaultKind::CaseCount { count: 0 }.at(cases.span));
        }
        for row in rows {
            if row.len() != cases.names.len() {
                let span = row.first().map_or(cases.span, |e| e.span);
                self.fault(
                    FaultKind::CaseWidth {
                        names: cases.names.len(),
                        values: row.len(),
                    }
                    .at(span),
                );
            }
            for ((e, name), found) in row.iter().zip(&cases.names).zip(types) {
                self.case_value(e, Some(name), *found, true);
            }
        }
    }

    fn case_value(&mut self, e: &Expr, name: Option<&Name>, wants: Option<Type>, word: bool) {
        let what = name.map_or_else(String::new, |n| format!("`{n}`"));
        if word && matches!(e.kind, ExprKind::OpenCircuit | ExprKind::ShortCircuit) {
            if let (Some(name), Some(is)) = (
                name,
                wants.map(|t| t.dimension).filter(|d| *d != Dimension::OHM),
            ) {
                self.fault(
                    FaultKind::NeverCircuit {
                        name: name.text.clone(),
                        is,
                    }
                    .at(e.span),
                );
            }
            return;
        }
        let circuit = self.is_circuit_let(e);
        let place = if circuit {
            Place::When
        } else {
            Place::Constant("a case")
        };
        let Some(found) = self.type_of(e, place) else {
            return;
        };
        let Some(wants) = wants else { return };
        if wants.share && !found.share && found.dimension.is_none() {
            self.share(e, &what);
        } else {
            self.wants(e, found, &what, wants.dimension);
        }
    }

    fn is_circuit_let(&self, e: &Expr) -> bool {
        match &e.kind {
            ExprKind::Name(name) => match self.index.names.get(name) {
                Some(Item::Let(i)) => self.types.circuit.get(*i).copied().unwrap_or(false),
                _ => false,
            },
            _ => false,
        }
    }

    /// A case's value may use its own let-value as written, and none that is varied elsewhere.
    fn uses_of_varied(&mut self) {
        let draft = self.draft;
        let varied: HashSet<&str> = draft
            .cases
            .iter()
            .flat_map(|c| &c.names)
            .map(|n| n.text.as_str())
            .collect();
        let (mut reach, mut found) = (HashMap::<String, HashSet<String>>::new(), Vec::new());
        for cases in &draft.cases {
            let mut check = |name: &Name, e: &Expr| {
                let mut used = HashSet::new();
                crate::walk::names(e, &mut |n, _| {
                    used.insert(n.to_owned());
                    let deeper = reach.entry(n.to_owned()).or_insert_with(|| self.reach(n));
                    used.extend(deeper.iter().cloned());
                });
                let mut others: Vec<&String> = used
                    .iter()
                    .filter(|n| **n != name.text && varied.contains(n.as_str()))
                    .collect();
                others.sort_unstable();
                if let Some(other) = others.first() {
                    let kind = FaultKind::CaseUsesVaried {
                        name: name.text.clone(),
                        varied: (*other).clone(),
                    };
                    found.push(kind.at(e.span));
                }
            };
            match &cases.values {
                CaseValues::Rows(rows) => {
                    for row in rows {
                        cases.names.iter().zip(row).for_each(|(n, e)| check(n, e));
                    }
                }
                CaseValues::Range { from, to, .. } => {
                    if let Some(name) = cases.names.first() {
                        check(name, from);
                        check(name, to);
                    }
                }
            }
        }
        self.faults.extend(found);
    }

    /// The let-values that one uses, directly or by way of others.
    fn reach(&self, name: &str) -> HashSet<String> {
        let (mut found, mut stack) = (HashSet::new(), vec![name.to_owned()]);
        while let Some(name) = stack.pop() {
            let Some(l) = self
                .index
                .lets
                .get(&name)
                .and_then(|i| self.draft.lets.get(*i))
            else {
                continue;
            };
            crate::walk::names(&l.value.nominal, &mut |n, _| {
                if found.insert(n.to_owned()) {
                    stack.push(n.to_owned());
                }
            });
        }
        found
    }

    fn too_many(&mut self) -> bool {
        let counts = self.draft.cases.iter().map(|c| match &c.values {
            CaseValues::Rows(rows) => rows.len() as u64,
            CaseValues::Range { count, .. } => u64::from(*count),
        });
        let count = counts.fold(1_u64, u64::saturating_mul);
        if count > MOST
            && let Some(last) = self.draft.cases.last()
        {
            self.fault(FaultKind::TooManyCases { count, most: MOST }.at(last.span));
        }
        count > MOST
    }
}

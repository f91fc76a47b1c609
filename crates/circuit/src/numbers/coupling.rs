//! Coupled windings: the matrix of their coupling factors must be positive definite.
//!
//! ```text
//!      | 1    k12  k13 |
//!  K = | k12  1    k23 |     K = L D Lᵀ,  every pivot of D above 0
//!      | k13  k23  1   |
//! ```
//!
//! Scaling by the square roots of the inductances takes K to the inductance matrix, so that it
//! decides for both. Windings that no coupling joins, even by way of others, are apart; one
//! pair is decided by |k| < 1. Windings are eliminated in the order of fewest neighbours, which
//! keeps ladders of thousands cheap. A pivot below `LEAST` counts as 0: there a stored energy
//! would be rounding alone.

use std::collections::{BTreeMap, BTreeSet};

use super::Setter;
use crate::fault::FaultKind;
use crate::parts::{Coupling, PartKind};

/// The least pivot, of a diagonal of ones.
const LEAST: f64 = 1e-12;

/// The couplings' rows: for each winding its neighbours with their factors.
type Rows = BTreeMap<usize, BTreeMap<usize, f64>>;

impl Setter<'_> {
    /// Checks all groups of three or more windings; couplings for which `skip` says so are at
    /// fault already.
    pub fn couplings(&mut self, skip: &dyn Fn(usize) -> bool) {
        let (mut rows, mut last) = (Rows::new(), BTreeMap::new());
        for (i, part) in self.draft.parts.iter().enumerate() {
            if let PartKind::Coupling(c) = &part.kind
                && !skip(i)
                && let Some((a, b, k)) = self.pair(c)
            {
                rows.entry(a).or_default().insert(b, k);
                rows.entry(b).or_default().insert(a, k);
                last.insert(a, i);
                last.insert(b, i);
            }
        }
        for group in groups(&rows) {
            if group.len() > 2 && !positive_definite(&rows, &group) {
                let at = group.iter().filter_map(|w| last.get(w)).max();
                let span = at
                    .and_then(|i| self.draft.parts.get(*i))
                    .map_or(crate::Span::NONE, |p| p.name.span);
                let name = |i: &usize| self.draft.parts.get(*i).map(|p| p.name.text.clone());
                let windings = group.iter().filter_map(name).collect();
                self.fault(FaultKind::NotPositiveDefinite { windings }.at(span));
            }
        }
    }

    fn pair(&self, c: &Coupling) -> Option<(usize, usize, f64)> {
        let part = |name: &str| self.index.parts.get(name).copied();
        let k = self
            .numbers
            .number(&c.factor.nominal)
            .ok()
            .filter(|k| k.abs() < 1.0)?;
        Some((part(&c.first.text)?, part(&c.second.text)?, k)).filter(|(a, b, _)| a != b)
    }
}

/// The windings that couplings join, group by group.
fn groups(rows: &Rows) -> Vec<Vec<usize>> {
    let (mut seen, mut found) = (BTreeSet::new(), Vec::new());
    for start in rows.keys() {
        let (mut group, mut stack) = (Vec::new(), vec![*start]);
        while let Some(w) = stack.pop() {
            if seen.insert(w) {
                group.push(w);
                stack.extend(rows.get(&w).into_iter().flatten().map(|(n, _)| *n));
            }
        }
        if !group.is_empty() {
            group.sort_unstable();
            found.push(group);
        }
    }
    found
}

fn positive_definite(rows: &Rows, group: &[usize]) -> bool {
    let dominant = |w: &usize| {
        rows.get(w)
            .is_none_or(|r| r.values().map(|k| k.abs()).sum::<f64>() < 1.0)
    };
    group.iter().all(dominant) || eliminates(rows, group)
}

/// Eliminates every winding; false as soon as a pivot is too small.
fn eliminates(rows: &Rows, group: &[usize]) -> bool {
    let mut rest: Rows = group
        .iter()
        .filter_map(|w| Some((*w, rows.get(w)?.clone())))
        .collect();
    let mut diagonal: BTreeMap<usize, f64> = group.iter().map(|w| (*w, 1.0)).collect();
    let mut queue: BTreeSet<(usize, usize)> = rest.iter().map(|(w, r)| (r.len(), *w)).collect();
    while let Some((_, w)) = queue.pop_first() {
        let pivot = diagonal.get(&w).copied().unwrap_or(0.0);
        if pivot < LEAST {
            return false;
        }
        let row: Vec<(usize, f64)> = rest.remove(&w).unwrap_or_default().into_iter().collect();
        for (i, k) in &row {
            let neighbours = rest.entry(*i).or_default();
            queue.remove(&(neighbours.len(), *i));
            neighbours.remove(&w);
            for (j, m) in &row {
                let change = -k * m / pivot;
                if i == j {
                    *diagonal.entry(*i).or_insert(1.0) += change;
                } else {
                    *neighbours.entry(*j).or_insert(0.0) += change;
                }
            }
            queue.insert((neighbours.len(), *i));
        }
    }
    true
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(pairs: &[(usize, usize, f64)], expected: bool) {
        let mut rows = Rows::new();
        for (a, b, k) in pairs {
            rows.entry(*a).or_default().insert(*b, *k);
            rows.entry(*b).or_default().insert(*a, *k);
        }
        let all = groups(&rows).iter().all(|g| positive_definite(&rows, g));
        assert_eq!(all, expected);
    }

    /// det K = 1 + 2 k12 k13 k23 - k12² - k13² - k23²: 0.9, 0.9, -0.9 give -2.9.
    #[test]
    fn three_windings_that_contradict_each_other_are_found() {
        check(&[(0, 1, 0.9), (1, 2, 0.9), (0, 2, -0.9)], false);
        check(&[(0, 1, 0.9), (1, 2, 0.9), (0, 2, 0.9)], true);
    }

    /// A chain of equal k has eigenvalues 1 + 2 k cos(…), positive up to k = 1/2 at any length.
    #[test]
    fn a_long_chain_is_decided_at_once() {
        let chain = |k: f64| (0..20_000).map(|i| (i, i + 1, k)).collect::<Vec<_>>();
        check(&chain(0.5), true);
        check(&chain(0.51), false);
    }

    #[test]
    fn groups_are_apart() {
        check(&[(0, 1, 0.99), (2, 3, 0.99)], true);
    }
}

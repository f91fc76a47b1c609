//! Circles of definitions, and the order in which to take what is in none.
//!
//! Strongly connected groups are found in one pass (Tarjan 1972), with a stack of our own so
//! that a chain of any length needs no deep recursion. The groups come out with what they use
//! before them, which is the order of evaluation.

use std::collections::VecDeque;

use crate::fault::{Fault, FaultKind};
use crate::span::Name;

/// The circles of a graph, and its other members in order of use.
pub(crate) struct Circles {
    /// One way round for each circle, from its first member.
    pub paths: Vec<Vec<usize>>,
    /// The members of no circle, each after all that it uses.
    pub order: Vec<usize>,
}

const NEW: usize = usize::MAX;

/// What the search keeps.
struct Search<'a> {
    uses: &'a [Vec<usize>],
    number: Vec<usize>,
    low: Vec<usize>,
    on_stack: Vec<bool>,
    stack: Vec<usize>,
    count: usize,
    groups: Vec<Vec<usize>>,
}

impl Circles {
    /// `uses[i]` are the members that `i` uses.
    pub fn find(uses: &[Vec<usize>]) -> Self {
        let n = uses.len();
        let mut search = Search {
            uses,
            number: vec![NEW; n],
            low: vec![0; n],
            on_stack: vec![false; n],
            stack: Vec::new(),
            count: 0,
            groups: Vec::new(),
        };
        for start in 0..n {
            search.from(start);
        }
        let (mut paths, mut order) = (Vec::new(), Vec::new());
        for group in search.groups {
            let alone = match group.as_slice() {
                [one] => !of(uses, *one).contains(one),
                _ => false,
            };
            if alone {
                order.extend(group);
                continue;
            }
            paths.push(round(uses, &group));
        }
        paths.sort_unstable_by_key(|p| p.first().copied());
        Circles { paths, order }
    }
}

impl Search<'_> {
    fn from(&mut self, start: usize) {
        if get(&self.number, start) != NEW {
            return;
        }
        let mut calls = vec![(start, 0)];
        self.enter(start);
        while let Some((i, next)) = calls.pop() {
            match of(self.uses, i).get(next) {
                Some(&j) => {
                    calls.push((i, next + 1));
                    if get(&self.number, j) == NEW {
                        self.enter(j);
                        calls.push((j, 0));
                    } else if self.on_stack.get(j) == Some(&true) {
                        let low = get(&self.low, i).min(get(&self.number, j));
                        set(&mut self.low, i, low);
                    }
                }
                None => {
                    self.leave(i);
                    if let Some((parent, _)) = calls.last() {
                        let low = get(&self.low, *parent).min(get(&self.low, i));
                        set(&mut self.low, *parent, low);
                    }
                }
            }
        }
    }

    fn enter(&mut self, i: usize) {
        set(&mut self.number, i, self.count);
        set(&mut self.low, i, self.count);
        set(&mut self.on_stack, i, true);
        self.stack.push(i);
        self.count += 1;
    }

    fn leave(&mut self, i: usize) {
        if get(&self.low, i) != get(&self.number, i) {
            return;
        }
        let mut group = Vec::new();
        while let Some(j) = self.stack.pop() {
            set(&mut self.on_stack, j, false);
            group.push(j);
            if j == i {
                break;
            }
        }
        self.groups.push(group);
    }
}

/// A shortest way round from the first member of a circle.
fn round(uses: &[Vec<usize>], group: &[usize]) -> Vec<usize> {
    let Some(first) = group.iter().copied().min() else {
        return Vec::new();
    };
    let mut members: Vec<usize> = group.to_vec();
    members.sort_unstable();
    let mut came: Vec<Option<usize>> = vec![None; members.len()];
    let mut queue = VecDeque::from([first]);
    while let Some(i) = queue.pop_front() {
        for j in of(uses, i) {
            if *j == first {
                let mut path = vec![i];
                while let Some(Some(before)) = path
                    .last()
                    .and_then(|i| members.binary_search(i).ok())
                    .and_then(|k| came.get(k))
                {
                    path.push(*before);
                }
                path.reverse();
                return path;
            }
            if let Ok(k) = members.binary_search(j)
                && came.get(k) == Some(&None)
            {
                set(&mut came, k, Some(i));
                queue.push_back(*j);
            }
        }
    }
    vec![first]
}

fn of(uses: &[Vec<usize>], i: usize) -> &[usize] {
    uses.get(i).map_or(&[], Vec::as_slice)
}

fn get(list: &[usize], i: usize) -> usize {
    list.get(i).copied().unwrap_or(NEW)
}

fn set<T>(list: &mut [T], i: usize, value: T) {
    if let Some(place) = list.get_mut(i) {
        *place = value;
    }
}

/// Reports a circle at its first member in the text.
pub(crate) fn report(faults: &mut Vec<Fault>, mut path: Vec<Name>, verb: &'static str) {
    let first = path
        .iter()
        .enumerate()
        .min_by_key(|(_, n)| n.span.start)
        .map_or(0, |(i, _)| i);
    path.rotate_left(first);
    if let Some(name) = path.first() {
        let span = name.span;
        faults.push(
            FaultKind::Circle {
                path: path.into_iter().map(|n| n.text).collect(),
                verb,
            }
            .at(span),
        );
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_used_comes_first() {
        let circles = Circles::find(&[vec![1], vec![2], vec![]]);
        assert_eq!(circles.order, [2, 1, 0]);
        assert!(circles.paths.is_empty());
    }

    #[test]
    fn a_circle_is_shown_from_its_first_member() {
        let circles = Circles::find(&[vec![1], vec![3], vec![1], vec![2], vec![4]]);
        assert_eq!(circles.paths, [vec![1, 3, 2], vec![4]]);
        assert_eq!(circles.order, [0]);
    }

    #[test]
    fn a_long_chain_needs_no_deep_stack() {
        let chain: Vec<Vec<usize>> = (0..200_000_usize)
            .map(|i| i.checked_sub(1).into_iter().collect())
            .rev()
            .collect();
        let chain: Vec<Vec<usize>> = chain
            .iter()
            .map(|uses| uses.iter().map(|j| 199_999 - j).collect())
            .collect();
        assert_eq!(Circles::find(&chain).order.len(), 200_000);
    }
}

//! Where every name is found: parts, nodes, and the shared space of let-values, signals and
//! readings.
//!
//! Where a name is given twice the first one counts, so that one mistake stays one.

use std::collections::HashMap;
use std::sync::Arc;

use crate::draft::Draft;

/// The reference node's name.
pub(crate) const GROUND: &str = "ground";

/// What a name of the shared space stands for, by its place in the draft.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) enum Item {
    Let(usize),
    Signal(usize),
    Reading(usize),
}

/// Every name of a draft.
#[derive(Clone, Debug, Default)]
pub(crate) struct Index {
    pub parts: HashMap<String, usize>,
    pub nodes: HashMap<String, usize>,
    /// By index; the first is `ground`.
    pub node_names: Vec<String>,
    /// For each part the nodes that it touches, in the order written; ground beyond them.
    pub ends: Vec<[usize; 3]>,
    pub names: HashMap<String, Item>,
    pub lets: Arc<HashMap<String, usize>>,
    /// Let-values, each after those that it uses; those in a circle are left out.
    pub let_order: Vec<usize>,
}

impl Index {
    pub fn new(draft: &Draft) -> Self {
        let mut index = Index {
            node_names: vec![GROUND.to_owned()],
            ..Index::default()
        };
        index.nodes.insert(GROUND.to_owned(), 0);
        for (i, part) in draft.parts.iter().enumerate() {
            index.parts.entry(part.name.text.clone()).or_insert(i);
            let mut ends = [0; 3];
            for (end, node) in ends.iter_mut().zip(part.kind.nodes()) {
                *end = index.number_of(&node.text);
            }
            index.ends.push(ends);
        }
        let mut lets = HashMap::new();
        for (i, l) in draft.lets.iter().enumerate() {
            lets.entry(l.name.text.clone()).or_insert(i);
            index
                .names
                .entry(l.name.text.clone())
                .or_insert(Item::Let(i));
        }
        for (i, s) in draft.signals.iter().enumerate() {
            index
                .names
                .entry(s.name.text.clone())
                .or_insert(Item::Signal(i));
        }
        for (i, r) in draft.readings.iter().enumerate() {
            index
                .names
                .entry(r.name.text.clone())
                .or_insert(Item::Reading(i));
        }
        index.lets = Arc::new(lets);
        index
    }

    /// The index of a node, a new one where the name is new.
    fn number_of(&mut self, node: &str) -> usize {
        if let Some(i) = self.nodes.get(node) {
            return *i;
        }
        let i = self.node_names.len();
        self.nodes.insert(node.to_owned(), i);
        self.node_names.push(node.to_owned());
        i
    }
}

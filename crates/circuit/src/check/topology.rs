//! Which nodes the parts join: ground, parts with both ends on one node, nodes left alone.
//!
//! Loops of voltage sources and cuts of current sources need numbers and states, and are the
//! engine's.

use super::Checker;
use crate::fault::{FaultKind, NameSpace};
use crate::index::GROUND;
use crate::near::nearest;
use crate::parts::PartKind;
use crate::span::{Name, Span};

/// What usually names a reference node that is not called `ground`.
const LIKE_GROUND: &[&str] = &[
    "gnd", "GND", "Ground", "GROUND", "earth", "Earth", "mass", "ref", "common",
];

pub(super) fn check(checker: &mut Checker<'_>) {
    let (draft, index) = (checker.draft, checker.index);
    // For each node the first part that touches it, and whether another one does.
    let mut touched: Vec<Option<(&Name, &Name, bool)>> = vec![None; index.node_names.len()];
    for (part, ends) in draft.parts.iter().zip(&index.ends) {
        let nodes = part.kind.nodes();
        for (k, (node, end)) in nodes.iter().zip(ends).enumerate() {
            let again = ends.iter().take(k).any(|other| other == end);
            let Some(place) = touched.get_mut(*end).filter(|_| !again) else {
                continue;
            };
            match place {
                None => *place = Some((node, &part.name, false)),
                Some((_, _, shared)) => *shared = true,
            }
        }
        if let [first, second, ..] = nodes.as_slice()
            && first == second
            && !matches!(part.kind, PartKind::Changeover(_))
        {
            let kind = FaultKind::OneNode {
                part: part.name.text.clone(),
                node: first.text.clone(),
            };
            checker.remarks.push(kind.at(part.span));
        }
    }
    if touched.first().copied().flatten().is_none() {
        let near = index
            .node_names
            .iter()
            .skip(1)
            .find(|n| LIKE_GROUND.contains(&n.as_str()))
            .cloned();
        let near = near.or_else(|| {
            nearest(GROUND, index.node_names.iter().skip(1).map(String::as_str)).map(str::to_owned)
        });
        checker.fault(FaultKind::NoGround { near }.at(Span::new(0, 0)));
    }
    for (node, part, shared) in touched.into_iter().flatten() {
        if !shared && draft.parts.len() > 1 {
            let near = checker.near(&node.text, NameSpace::Node);
            let kind = FaultKind::LonelyNode {
                node: node.text.clone(),
                part: part.text.clone(),
                near,
            };
            checker.remarks.push(kind.at(node.span));
        }
    }
}

//! Edges: `opening of fire`, `second closing of fire`, `moving of relay to pad`.

use pulsewright_circuit::phrase::{Edge, EdgeKind, Ordinal};

use super::{Parser, Read};
use crate::words::ORDINALS;

/// The changes that edges name; `moving` has a node besides.
const CHANGES: &[&str] = &["closing", "opening", "moving", "conducting", "blocking"];

/// What belongs before the change that an edge names.
pub(super) const ORDINAL: &str = "`first`, `second` or another ordinal, or nothing,";

impl Parser<'_> {
    /// The edge that begins here, if one does.
    pub(super) fn edge_phrase(&mut self) -> Read<Option<Edge>> {
        let from = self.at;
        let ordinal = self.ordinal();
        let ahead = usize::from(ordinal.is_some());
        let begins = self.is_change(ahead);
        if !begins && ordinal.is_none() {
            return Ok(None);
        }
        self.at += ahead;
        if !begins {
            return self.expected("`closing of`, `opening of` or another edge", CHANGES);
        }
        let change = self.word(0).unwrap_or_default();
        let part = self.of_part(2)?;
        let kind = match change {
            "closing" => EdgeKind::Closing,
            "opening" => EdgeKind::Opening,
            "conducting" => EdgeKind::Conducting,
            "blocking" => EdgeKind::Blocking,
            _ => {
                self.expect_word("to")?;
                EdgeKind::Moving(self.thing("a node")?)
            }
        };
        Ok(Some(Edge {
            part,
            kind,
            ordinal,
            span: self.since(from),
        }))
    }

    /// Whether `closing of` or its like stands `ahead` tokens from here.
    pub(super) fn is_change(&self, ahead: usize) -> bool {
        self.word(ahead).is_some_and(|w| CHANGES.contains(&w)) && self.is_word(ahead + 1, "of")
    }

    fn ordinal(&self) -> Option<Ordinal> {
        let position = ORDINALS.iter().position(|o| self.is_word(0, o))?;
        let nth = u8::try_from(position + 1).ok()?;
        Some(if nth <= 10 {
            Ordinal::Nth(nth)
        } else {
            Ordinal::Last
        })
    }

    /// An edge, where nothing else may stand.
    pub(super) fn edge(&mut self) -> Read<Edge> {
        match self.edge_phrase()? {
            Some(edge) => Ok(edge),
            None if self.is_change(1) => self.expected(ORDINAL, ORDINALS),
            None => self.expected("an edge, as `opening of` a switch,", CHANGES),
        }
    }
}

//! `wire tap from a to b`.

use pulsewright_circuit::parts::{PartKind, Wire};

use crate::grammar::Parser;

impl Parser<'_> {
    pub(super) fn wire(&mut self) -> PartKind {
        let (from, to) = self.ends();
        let read = self.finish();
        self.or_give_up(read);
        PartKind::Wire(Wire { from, to })
    }
}

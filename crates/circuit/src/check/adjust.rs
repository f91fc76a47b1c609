//! The adjusted let-value: one that exists, that nothing else gives a value, with ends and a
//! value to reach that fit.

use super::Checker;
use super::typing::{Place, Type};
use crate::dimension::Dimension;
use crate::expr::Expr;
use crate::fault::{FaultKind, NameSpace};
use crate::index::Item;

impl Checker<'_> {
    /// The `adjust` statement; says whether it is at fault.
    pub(super) fn adjust(&mut self) -> bool {
        let draft = self.draft;
        let Some(adjust) = &draft.adjust else {
            return false;
        };
        let before = self.faults.len();
        let name = &adjust.name;
        let found = match self.index.names.get(&name.text).copied() {
            Some(Item::Let(i)) => self.types.lets.get(i).copied().flatten(),
            _ => {
                self.unknown(&name.text, NameSpace::Let, name.span);
                None
            }
        };
        let mut varied = draft.cases.iter().flat_map(|c| &c.names);
        if varied.any(|n| n.text == name.text) {
            let kind = FaultKind::AdjustVaried {
                name: name.text.clone(),
                by: "`cases`",
            };
            self.fault(kind.at(name.span));
        }
        for e in [&adjust.from, &adjust.to] {
            self.adjust_end(e, &format!("`{name}`"), found);
        }
        let reading = self.type_of(&adjust.reading, Place::Reading);
        let value = self.type_of(&adjust.value, Place::Constant("what a reading is to reach"));
        if let (Some(reading), Some(value)) = (reading, value) {
            self.reached(&adjust.value, value, reading.dimension);
        }
        self.faults.len() > before
    }

    fn adjust_end(&mut self, e: &Expr, what: &str, wants: Option<Type>) {
        let found = self.type_of(e, Place::Constant("an end of `adjust`"));
        let (Some(found), Some(wants)) = (found, wants) else {
            return;
        };
        if wants.share && !found.share && found.dimension.is_none() {
            self.share(e, what);
        } else {
            self.wants(e, found, what, wants.dimension);
        }
    }

    fn reached(&mut self, e: &Expr, found: Type, wants: Dimension) {
        self.wants(e, found, "what the reading of `adjust` is to reach", wants);
    }
}

//! `coupling core between primary and secondary = 0.98`.

use pulsewright_circuit::Name;
use pulsewright_circuit::parts::{Coupling, PartKind};

use super::Form;
use crate::grammar::{Parser, Read};

const FORM: Form = Form {
    kind: "coupling",
    values: &[],
    actions: &[],
    known: "`tolerance` and `standard deviation`",
};

impl Parser<'_> {
    pub(super) fn coupling(&mut self) -> PartKind {
        let read = self.windings();
        let unread = Name::new("", self.whole_span());
        let (first, second) = self
            .or_give_up(read)
            .unwrap_or_else(|| (unread.clone(), unread));
        let mut factor = self.main_value();
        self.qualifiers(&FORM, &mut factor);
        PartKind::Coupling(Coupling {
            first,
            second,
            factor,
        })
    }

    fn windings(&mut self) -> Read<(Name, Name)> {
        self.expect_word("between")?;
        let first = self.thing("an inductor")?;
        self.expect_word("and")?;
        Ok((first, self.thing("an inductor")?))
    }
}

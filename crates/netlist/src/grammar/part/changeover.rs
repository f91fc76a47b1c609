//! `changeover relay from top to charger or pad : at charger, moves to pad at 1 us`.

use pulsewright_circuit::Name;
use pulsewright_circuit::parts::{Changeover, PartKind};

use super::{Form, Last, Qualifiers};
use crate::grammar::{Parser, Read};
use crate::token::Kind;

const FORM: Form = Form {
    kind: "changeover",
    values: &[("contact", &[]), ("insulation", &[])],
    actions: &["moves"],
    known: "`moves to`, `contact`, `insulation` and `rated`",
};

impl Parser<'_> {
    pub(super) fn changeover(&mut self) -> PartKind {
        let read = self.three_ends();
        let ends = self.or_give_up(read);
        let unread = Name::new("ground", self.whole_span());
        let (common, first, second) =
            ends.unwrap_or_else(|| (unread.clone(), unread.clone(), unread));
        let mut q = Qualifiers::default();
        let mut start = first.clone();
        if !self.is_end() || self.slips.is_empty() {
            let read = self.resting();
            start = self.recover(read).unwrap_or(start);
            self.rest_of_qualifiers(&FORM, None, &mut q, Last::Nothing);
        }
        let (contact, insulation) = (q.take("contact"), q.take("insulation"));
        PartKind::Changeover(Changeover {
            common,
            first,
            second,
            start,
            actions: q.actions,
            contact,
            insulation,
        })
    }

    fn three_ends(&mut self) -> Read<(Name, Name, Name)> {
        let (common, first) = self.try_ends()?;
        self.expect_word("or")?;
        Ok((common, first, self.thing("a node")?))
    }

    fn resting(&mut self) -> Read<Name> {
        self.expect(Kind::Colon, ":")?;
        if !self.take_words(&["at"]) {
            return self.expected(
                "where it rests at the start, `at` one of its nodes,",
                &["at"],
            );
        }
        let node = self.thing("a node")?;
        self.over()?;
        Ok(node)
    }
}

//! `inductor choke from a to b = 25 mH, carrying 2 A, winding 10 ohm`.

use pulsewright_circuit::parts::{Inductor, PartKind};

use super::Form;
use crate::grammar::Parser;

const FORM: Form = Form {
    kind: "inductor",
    values: &[("carrying", &[]), ("winding", &[])],
    actions: &[],
    known: "`carrying`, `winding`, `tolerance`, `standard deviation` and `rated`",
};

impl Parser<'_> {
    pub(super) fn inductor(&mut self) -> PartKind {
        let (from, to) = self.ends();
        let mut value = self.main_value();
        let mut q = self.qualifiers(&FORM, &mut value);
        let (carrying, winding) = (q.take("carrying"), q.take("winding"));
        PartKind::Inductor(Inductor {
            from,
            to,
            value,
            carrying,
            winding,
        })
    }
}

//! `resistor path from a to b = 50 ohm`, `= open circuit`, `= short circuit`.

use pulsewright_circuit::parts::{PartKind, Resistor};

use super::Form;
use crate::grammar::Parser;

const FORM: Form = Form {
    kind: "resistor",
    values: &[],
    actions: &[],
    known: "`tolerance`, `standard deviation` and `rated`",
};

impl Parser<'_> {
    pub(super) fn resistor(&mut self) -> PartKind {
        let (from, to) = self.ends();
        let mut value = self.main_value();
        self.qualifiers(&FORM, &mut value);
        PartKind::Resistor(Resistor { from, to, value })
    }
}

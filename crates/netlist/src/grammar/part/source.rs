//! `voltage feed from a to b = EXPR`, `current gun from a to b = EXPR`.

use pulsewright_circuit::parts::Source;

use super::Form;
use crate::grammar::Parser;

impl Parser<'_> {
    pub(super) fn source_of(&mut self, kind: &'static str) -> Source {
        let form = Form {
            kind,
            values: &[],
            actions: &[],
            known: "`tolerance`, `standard deviation` and `rated`",
        };
        let (from, to) = self.ends();
        let mut value = self.main_value();
        self.qualifiers(&form, &mut value);
        Source { from, to, value }
    }
}

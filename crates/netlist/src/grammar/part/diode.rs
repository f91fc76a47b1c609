//! `diode steer from a to b : threshold 0.7 V, slope 10 mohm`.

use pulsewright_circuit::parts::{Diode, PartKind};

use super::Form;
use crate::grammar::Parser;

const FORM: Form = Form {
    kind: "diode",
    values: &[("threshold", &[]), ("slope", &[])],
    actions: &[],
    known: "`threshold`, `slope`, `tolerance`, `standard deviation` and `rated`",
};

impl Parser<'_> {
    pub(super) fn diode(&mut self) -> PartKind {
        let (from, to) = self.ends();
        let mut q = self.qualifiers_after_colon(&FORM);
        let (threshold, slope) = (q.take("threshold"), q.take("slope"));
        PartKind::Diode(Diode {
            from,
            to,
            threshold,
            slope,
        })
    }
}

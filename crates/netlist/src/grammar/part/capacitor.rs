//! `capacitor bank from a to b = 32 uF, charged to 5 kV, series 80 mohm, leakage 20 Mohm`.

use pulsewright_circuit::parts::{Capacitor, PartKind};

use super::Form;
use crate::grammar::Parser;

const FORM: Form = Form {
    kind: "capacitor",
    values: &[("charged", &["to"]), ("series", &[]), ("leakage", &[])],
    actions: &[],
    known: "`charged to`, `series`, `leakage`, `tolerance`, `standard deviation` and `rated`",
};

impl Parser<'_> {
    pub(super) fn capacitor(&mut self) -> PartKind {
        let (from, to) = self.ends();
        let mut value = self.main_value();
        let mut q = self.qualifiers(&FORM, &mut value);
        let (charged, series, leakage) = (q.take("charged"), q.take("series"), q.take("leakage"));
        PartKind::Capacitor(Capacitor {
            from,
            to,
            value,
            charged,
            series,
            leakage,
        })
    }
}

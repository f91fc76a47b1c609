//! The values that each kind of part takes: dimension, range, and what they are called.
//!
//! One table serves the check of units, the ranges, and the numbers of a setup.

use crate::dimension::Dimension;
use crate::fault::Bound;
use crate::parts::PartKind;
use crate::spread::Value;

/// How a value is taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Asks {
    /// A number of let-values.
    Number,
    /// A number, or an open or a short circuit.
    Resistance,
    /// A function of time and signals.
    Formula,
}

/// One value of a part.
pub(crate) struct Slot<'a> {
    pub value: &'a Value,
    pub asks: Asks,
    pub dimension: Dimension,
    pub bound: Bound,
    /// What it is called; empty for the part's own value.
    pub word: &'static str,
}

impl Slot<'_> {
    /// What asks for the value, in words: `` `chest` ``, `` the winding resistance of `choke` ``.
    pub fn what(&self, part: &str) -> String {
        if self.word.is_empty() {
            format!("`{part}`")
        } else {
            format!("the {} of `{part}`", self.word)
        }
    }
}

/// The values of a part in the order main value, qualifiers.
pub(crate) fn slots(kind: &PartKind) -> Vec<Slot<'_>> {
    let mut found = Vec::new();
    let mut add = |value, word, dimension, bound| {
        found.extend(Option::map(value, |value| Slot {
            value,
            asks: Asks::Number,
            dimension,
            bound,
            word,
        }));
    };
    let (positive, not_negative) = (Bound::Above(0.0), Bound::AtLeast(0.0));
    match kind {
        PartKind::Resistor(p) => {
            let (asks, dimension) = (Asks::Resistance, Dimension::OHM);
            return vec![Slot {
                value: &p.value,
                asks,
                dimension,
                bound: positive,
                word: "",
            }];
        }
        PartKind::Voltage(p) => return vec![source(&p.value, Dimension::VOLT)],
        PartKind::Current(p) => return vec![source(&p.value, Dimension::AMPERE)],
        PartKind::Capacitor(p) => {
            add(Some(&p.value), "", Dimension::FARAD, positive);
            add(
                p.charged.as_ref(),
                "starting voltage",
                Dimension::VOLT,
                Bound::Any,
            );
            add(
                p.series.as_ref(),
                "series resistance",
                Dimension::OHM,
                not_negative,
            );
            add(p.leakage.as_ref(), "leakage", Dimension::OHM, positive);
        }
        PartKind::Inductor(p) => {
            add(Some(&p.value), "", Dimension::HENRY, positive);
            add(
                p.carrying.as_ref(),
                "starting current",
                Dimension::AMPERE,
                Bound::Any,
            );
            add(
                p.winding.as_ref(),
                "winding resistance",
                Dimension::OHM,
                not_negative,
            );
        }
        PartKind::Coupling(p) => add(
            Some(&p.factor),
            "",
            Dimension::NONE,
            Bound::Inside(-1.0, 1.0),
        ),
        PartKind::Switch(p) => {
            add(
                p.contact.as_ref(),
                "contact resistance",
                Dimension::OHM,
                not_negative,
            );
            add(
                p.insulation.as_ref(),
                "insulation",
                Dimension::OHM,
                positive,
            );
        }
        PartKind::Changeover(p) => {
            add(
                p.contact.as_ref(),
                "contact resistance",
                Dimension::OHM,
                not_negative,
            );
            add(
                p.insulation.as_ref(),
                "insulation",
                Dimension::OHM,
                positive,
            );
        }
        PartKind::Diode(p) => {
            add(
                p.threshold.as_ref(),
                "threshold",
                Dimension::VOLT,
                not_negative,
            );
            add(p.slope.as_ref(), "slope", Dimension::OHM, not_negative);
        }
        PartKind::Wire(_) => {}
    }
    found
}

fn source(value: &Value, dimension: Dimension) -> Slot<'_> {
    Slot {
        value,
        asks: Asks::Formula,
        dimension,
        bound: Bound::Any,
        word: "",
    }
}

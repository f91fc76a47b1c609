//! Parts with numbers in.

use super::{Blocked, Setter};
use crate::circuit::LetValue;
use crate::dimension::Dimension;
use crate::expr::{Expr, ExprKind};
use crate::fault::Bound;
use crate::formula::Formula;
use crate::index::Item;
use crate::parts::{Changeover, Control, Part, PartKind, Resistor, Switch};
use crate::setup::{Element, Ohms, SetControl, SetPart};
use crate::slots::slots;
use crate::spread::Value;

impl Setter<'_> {
    /// The part at an index of the draft; `None` where one of its values is at fault.
    pub fn part(&mut self, i: usize) -> Option<SetPart> {
        let part = self.draft.parts.get(i)?;
        Some(SetPart {
            name: part.name.text.clone(),
            element: self.element(i, part)?,
        })
    }

    /// Looks at the values of the part at an index, and reports what is at fault.
    pub fn look_at(&mut self, i: usize) {
        if let Some(part) = self.draft.parts.get(i) {
            self.element(i, part);
        }
    }

    fn element(&mut self, i: usize, part: &Part) -> Option<Element> {
        let [a, b, c] = self.index.ends.get(i).copied().unwrap_or_default();
        Some(match &part.kind {
            PartKind::Resistor(p) => Element::Resistor {
                a,
                b,
                ohms: self.ohms(part, p)?,
            },
            PartKind::Capacitor(_) => {
                let [farads, charged, series, leakage] = self.numbers_of(part);
                Element::Capacitor {
                    a,
                    b,
                    farads: farads?,
                    charged,
                    series: series.unwrap_or(0.0),
                    leakage,
                }
            }
            PartKind::Inductor(_) => {
                let [henrys, carrying, winding, _] = self.numbers_of(part);
                Element::Inductor {
                    a,
                    b,
                    henrys: henrys?,
                    carrying,
                    winding: winding.unwrap_or(0.0),
                }
            }
            PartKind::Coupling(p) => {
                let factor = self.numbers_of(part)[0]?;
                let (first, second) = (
                    self.index_of(&p.first.text)?,
                    self.index_of(&p.second.text)?,
                );
                Element::Coupling {
                    first,
                    second,
                    factor,
                }
            }
            PartKind::Wire(_) => Element::Wire { a, b },
            PartKind::Voltage(p) => Element::Voltage {
                a,
                b,
                source: self.source(part, &p.value)?,
            },
            PartKind::Current(p) => Element::Current {
                a,
                b,
                source: self.source(part, &p.value)?,
            },
            PartKind::Switch(p) => self.switch(part, p, (a, b))?,
            PartKind::Changeover(p) => self.changeover(part, p, [a, b, c])?,
            PartKind::Diode(_) => {
                let [threshold, slope, ..] = self.numbers_of(part);
                Element::Diode {
                    a,
                    b,
                    threshold: threshold.unwrap_or(0.0),
                    slope: slope.unwrap_or(0.0),
                }
            }
        })
    }

    fn source(&mut self, part: &Part, value: &Value) -> Option<Formula> {
        let source = self.formula(&value.nominal, &format!("`{}`", part.name))?;
        Some(match self.shift_of(value) {
            Some(shift) => shift.of_formula(source),
            None => source,
        })
    }

    fn index_of(&self, part: &str) -> Option<usize> {
        self.index.parts.get(part).copied()
    }

    /// The part's values in the order of the table of slots, absent qualifiers as `None`.
    fn numbers_of(&mut self, part: &Part) -> [Option<f64>; 4] {
        let words: &[&str] = match &part.kind {
            PartKind::Capacitor(_) => &["", "starting voltage", "series resistance", "leakage"],
            PartKind::Inductor(_) => &["", "starting current", "winding resistance"],
            PartKind::Diode(_) => &["threshold", "slope"],
            PartKind::Switch(_) | PartKind::Changeover(_) => &["contact resistance", "insulation"],
            _ => &[""],
        };
        let mut found = [None; 4];
        for slot in slots(&part.kind) {
            let at = words.iter().position(|w| *w == slot.word);
            let x = self.slot(&part.name.text, &slot);
            if let Some(place) = at.and_then(|at| found.get_mut(at)) {
                *place = x;
            }
        }
        found
    }

    fn ohms(&mut self, part: &Part, resistor: &Resistor) -> Option<Ohms> {
        match self.circuit_word(&resistor.value.nominal) {
            Some(LetValue::Open) => return Some(Ohms::Open),
            Some(LetValue::Short) => return Some(Ohms::Short),
            _ => {}
        }
        let what = format!("`{}`", part.name);
        self.value(&resistor.value, &what, Dimension::OHM, Bound::Above(0.0))
            .map(Ohms::Finite)
    }

    /// The circuit word that an expression is, or stands for.
    pub fn circuit_word(&self, e: &Expr) -> Option<LetValue> {
        match &e.kind {
            ExprKind::OpenCircuit => Some(LetValue::Open),
            ExprKind::ShortCircuit => Some(LetValue::Short),
            ExprKind::Name(name) if matches!(self.index.names.get(name), Some(Item::Let(_))) => {
                matches!(self.numbers.formula(e), Err(Blocked::Circuit(_)))
                    .then(|| (self.numbers.lookup)(name))?
            }
            _ => None,
        }
    }

    fn switch(&mut self, part: &Part, p: &Switch, (a, b): (usize, usize)) -> Option<Element> {
        let [contact, insulation, ..] = self.numbers_of(part);
        let control = match &p.control {
            Control::Ganged(other) => SetControl::Ganged(self.index_of(&other.text)?),
            Control::Schedule { closed, actions } => SetControl::Schedule {
                closed: *closed,
                actions: self.actions(part, actions)?,
            },
        };
        Some(Element::Switch {
            a,
            b,
            control,
            contact,
            insulation,
        })
    }

    fn changeover(
        &mut self,
        part: &Part,
        p: &Changeover,
        [common, one, other]: [usize; 3],
    ) -> Option<Element> {
        let [contact, insulation, ..] = self.numbers_of(part);
        let at = usize::from(p.start == p.second);
        let actions = self.actions(part, &p.actions)?;
        Some(Element::Changeover {
            common,
            contacts: [one, other],
            at,
            actions,
            contact,
            insulation,
        })
    }
}

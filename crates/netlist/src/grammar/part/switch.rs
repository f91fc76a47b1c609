//! `switch fire from a to b : open, closes at 1 us, opens at 25 ms, contact 5 mohm`.

use pulsewright_circuit::parts::{Control, PartKind, Switch};

use super::{Form, Last, Qualifiers};
use crate::grammar::{Parser, Read};
use crate::token::Kind;

const FORM: Form = Form {
    kind: "switch",
    values: &[("contact", &[]), ("insulation", &[])],
    actions: &["closes", "opens"],
    known: "`closes`, `opens`, `contact`, `insulation` and `rated`",
};

const GANGED: Form = Form {
    kind: "ganged switch",
    actions: &[],
    known: "`contact`, `insulation` and `rated`",
    ..FORM
};

impl Parser<'_> {
    pub(super) fn switch(&mut self) -> PartKind {
        let (from, to) = self.ends();
        let mut q = Qualifiers::default();
        let mut control = Control::Schedule {
            closed: false,
            actions: Vec::new(),
        };
        if !self.is_end() || self.slips.is_empty() {
            let read = self.switch_state();
            control = self.recover(read).unwrap_or(control);
            let form = if matches!(control, Control::Ganged(_)) {
                &GANGED
            } else {
                &FORM
            };
            self.rest_of_qualifiers(form, None, &mut q, Last::Nothing);
        }
        if let Control::Schedule { actions, .. } = &mut control {
            *actions = std::mem::take(&mut q.actions);
        }
        let (contact, insulation) = (q.take("contact"), q.take("insulation"));
        PartKind::Switch(Switch {
            from,
            to,
            control,
            contact,
            insulation,
        })
    }

    fn switch_state(&mut self) -> Read<Control> {
        self.expect(Kind::Colon, ":")?;
        let control = match self.word(0) {
            Some("open") => Control::Schedule {
                closed: false,
                actions: Vec::new(),
            },
            Some("closed") => Control::Schedule {
                closed: true,
                actions: Vec::new(),
            },
            Some("ganged") => {
                self.at += 1;
                self.expect_word("with")?;
                let other = self.thing("a switch")?;
                self.over()?;
                return Ok(Control::Ganged(other));
            }
            _ => {
                let words = &["open", "closed", "ganged"];
                return self.expected("its state at the start, `open` or `closed`,", words);
            }
        };
        self.at += 1;
        self.over()?;
        Ok(control)
    }
}

//! The kinds of part, as written: one file a kind.

pub mod capacitor;
pub mod changeover;
pub mod coupling;
pub mod diode;
pub mod inductor;
pub mod resistor;
pub mod source;
pub mod switch;
pub mod wire;

pub use capacitor::Capacitor;
pub use changeover::Changeover;
pub use coupling::Coupling;
pub use diode::Diode;
pub use inductor::Inductor;
pub use resistor::Resistor;
pub use source::Source;
pub use switch::{Control, Switch};
pub use wire::Wire;

use crate::span::{Name, Span};

/// A part: its name and what it is.
#[derive(Clone, Debug, PartialEq)]
pub struct Part {
    /// Its name.
    pub name: Name,
    /// Its kind and data.
    pub kind: PartKind,
    /// The whole statement's place.
    pub span: Span,
}

/// The list of kinds.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
#[allow(
    missing_docs,
    reason = "each variant holds the type of its name, documented there"
)]
pub enum PartKind {
    Resistor(Resistor),
    Capacitor(Capacitor),
    Inductor(Inductor),
    Coupling(Coupling),
    Wire(Wire),
    /// `voltage NAME from A to B = EXPR`
    Voltage(Source),
    /// `current NAME from A to B = EXPR`
    Current(Source),
    Switch(Switch),
    Changeover(Changeover),
    Diode(Diode),
}

impl PartKind {
    /// The statement's first word.
    #[must_use]
    pub const fn word(&self) -> &'static str {
        match self {
            PartKind::Resistor(_) => "resistor",
            PartKind::Capacitor(_) => "capacitor",
            PartKind::Inductor(_) => "inductor",
            PartKind::Coupling(_) => "coupling",
            PartKind::Wire(_) => "wire",
            PartKind::Voltage(_) => "voltage",
            PartKind::Current(_) => "current",
            PartKind::Switch(_) => "switch",
            PartKind::Changeover(_) => "changeover",
            PartKind::Diode(_) => "diode",
        }
    }

    /// The nodes it touches, in the order written; none for a coupling.
    #[must_use]
    pub fn nodes(&self) -> Vec<&Name> {
        match self {
            PartKind::Resistor(p) => vec![&p.from, &p.to],
            PartKind::Capacitor(p) => vec![&p.from, &p.to],
            PartKind::Inductor(p) => vec![&p.from, &p.to],
            PartKind::Coupling(_) => Vec::new(),
            PartKind::Wire(p) => vec![&p.from, &p.to],
            PartKind::Voltage(p) | PartKind::Current(p) => vec![&p.from, &p.to],
            PartKind::Switch(p) => vec![&p.from, &p.to],
            PartKind::Changeover(p) => vec![&p.common, &p.first, &p.second],
            PartKind::Diode(p) => vec![&p.from, &p.to],
        }
    }
}

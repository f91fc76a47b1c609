//! Phrases: parts and nodes by name, kinds that fit, and the dimension of what is measured.

use super::Checker;
use super::typing::{Place, shown};
use crate::dimension::Dimension;
use crate::expr::{Expr, ExprKind};
use crate::fault::{FaultKind, NameSpace};
use crate::index::Item;
use crate::parts::{Changeover, Part, PartKind};
use crate::phrase::{Condition, Edge, EdgeKind, Level, Measure, Phrase, Signal, StateWord, Window};
use crate::span::Name;

impl<'a> Checker<'a> {
    /// The part of a name; a fault where there is none.
    pub fn part(&mut self, name: &Name) -> Option<&'a Part> {
        let found = self
            .index
            .parts
            .get(&name.text)
            .and_then(|i| self.draft.parts.get(*i));
        if found.is_none() {
            self.unknown(&name.text, NameSpace::Part, name.span);
        }
        found
    }

    /// Whether a node exists; a fault where not.
    pub fn node(&mut self, name: &Name) -> bool {
        let known = self.index.nodes.contains_key(&name.text);
        if !known {
            self.unknown(&name.text, NameSpace::Node, name.span);
        }
        known
    }

    /// The part of a name, which must be of a kind.
    pub fn of_kind(
        &mut self,
        name: &Name,
        phrase: impl Into<String>,
        wants: &'static str,
        fits: &dyn Fn(&PartKind) -> bool,
    ) -> Option<&'a Part> {
        let part = self.part(name)?;
        if fits(&part.kind) {
            return Some(part);
        }
        let (part, is) = (name.text.clone(), part.kind.word());
        self.report(
            FaultKind::PartKind {
                phrase: phrase.into(),
                wants,
                part,
                is,
            },
            name.span,
        )
    }

    fn with_ends(&mut self, name: &Name, phrase: &str) -> Option<&'a Part> {
        self.of_kind(name, phrase, "a part with ends", &|k| {
            !matches!(k, PartKind::Coupling(_))
        })
    }

    /// The dimension of a signal's phrase.
    pub fn signal(&mut self, signal: &Signal) -> Option<Dimension> {
        match signal {
            Signal::VoltageAcross(p) => {
                let part = self.with_ends(p, "voltage across")?;
                if let PartKind::Changeover(c) = &part.kind {
                    let kind = FaultKind::AcrossChangeover {
                        part: p.text.clone(),
                        common: c.common.text.clone(),
                    };
                    return self.report(kind, p.span);
                }
                Some(Dimension::VOLT)
            }
            Signal::VoltageAt(n) => self.node(n).then_some(Dimension::VOLT),
            Signal::VoltageFrom(a, b) => {
                let (a, b) = (self.node(a), self.node(b));
                (a && b).then_some(Dimension::VOLT)
            }
            Signal::CurrentThrough(p) => self
                .with_ends(p, "current through")
                .map(|_| Dimension::AMPERE),
            Signal::PowerInto(p) => self.with_ends(p, "power into").map(|_| Dimension::WATT),
            Signal::ChargeHeld(p) => {
                let fits = |k: &PartKind| matches!(k, PartKind::Capacitor(_));
                self.of_kind(p, "charge held by", "a capacitor", &fits)
                    .map(|_| Dimension::COULOMB)
            }
            Signal::FluxHeld(p) => {
                let fits = |k: &PartKind| matches!(k, PartKind::Inductor(_));
                self.of_kind(p, "flux held by", "an inductor", &fits)
                    .map(|_| Dimension::WEBER)
            }
            Signal::EnergyHeld(p) => self.part(p).map(|_| Dimension::JOULE),
        }
    }

    /// Whether an edge is one that its part has.
    pub fn edge(&mut self, edge: &Edge) -> bool {
        let is_switch = |k: &PartKind| matches!(k, PartKind::Switch(_));
        let is_diode = |k: &PartKind| matches!(k, PartKind::Diode(_));
        let part = &edge.part;
        match &edge.kind {
            EdgeKind::Closing => self
                .of_kind(part, "closing of", "a switch", &is_switch)
                .is_some(),
            EdgeKind::Opening => self
                .of_kind(part, "opening of", "a switch", &is_switch)
                .is_some(),
            EdgeKind::Conducting => self
                .of_kind(part, "conducting of", "a diode", &is_diode)
                .is_some(),
            EdgeKind::Blocking => self
                .of_kind(part, "blocking of", "a diode", &is_diode)
                .is_some(),
            EdgeKind::Moving(node) => self
                .changeover(part, "moving of")
                .is_some_and(|c| self.its_node(part, c, node)),
        }
    }

    fn changeover(&mut self, name: &Name, phrase: &str) -> Option<&'a Changeover> {
        let fits = |k: &PartKind| matches!(k, PartKind::Changeover(_));
        match &self.of_kind(name, phrase, "a changeover", &fits)?.kind {
            PartKind::Changeover(c) => Some(c),
            _ => None,
        }
    }

    /// Whether a node is one of the two that a changeover rests at.
    pub fn its_node(&mut self, part: &Name, c: &Changeover, node: &Name) -> bool {
        if *node == c.first || *node == c.second {
            return true;
        }
        let (part, node_text) = (part.text.clone(), node.text.clone());
        let (first, second) = (c.first.text.clone(), c.second.text.clone());
        self.fault(
            FaultKind::NotItsNode {
                part,
                node: node_text,
                first,
                second,
            }
            .at(node.span),
        );
        false
    }

    /// The dimension of a phrase's reading.
    pub fn phrase(&mut self, phrase: &Phrase) -> Option<Dimension> {
        let measured = self.measure(phrase);
        let windowed = self.window(phrase);
        measured.filter(|_| windowed)
    }

    fn measure(&mut self, phrase: &Phrase) -> Option<Dimension> {
        use Measure as M;
        let signal_over_time = |d: Dimension| d.over(Dimension::SECOND);
        match &phrase.measure {
            M::EnergyInto(p) => self.with_ends(p, "energy into").map(|_| Dimension::JOULE),
            M::EnergyOutOf(p) => self.with_ends(p, "energy out of").map(|_| Dimension::JOULE),
            M::Charge(p) => self
                .with_ends(p, "charge through")
                .map(|_| Dimension::COULOMB),
            M::GrossCharge(p) => self
                .with_ends(p, "gross charge through")
                .map(|_| Dimension::COULOMB),
            M::Action(p) => self.with_ends(p, "action of").map(|_| Dimension::ACTION),
            M::Heat(p) => self.with_ends(p, "heat in").map(|_| Dimension::JOULE),
            M::Area(s) => self.measured(s)?.times(Dimension::SECOND),
            M::Highest(s)
            | M::Lowest(s)
            | M::Largest(s)
            | M::PeakToPeak(s)
            | M::Mean(s)
            | M::Rms(s)
            | M::Final(s) => self.measured(s),
            M::Steepest { signal, .. } => signal_over_time(self.measured(signal)?),
            M::At { signal, time } | M::JustBefore { signal, time } => {
                let (d, t) = (self.measured(signal), self.time(time));
                d.filter(|_| t)
            }
            M::TimeOf { signal, .. } | M::Period(signal) => {
                self.measured(signal).map(|_| Dimension::SECOND)
            }
            M::Crossing { signal, level, .. } | M::TimeSpent { signal, level, .. } => {
                self.level(signal, level)
            }
            M::Rise { signal, from, to }
            | M::Fall { signal, from, to }
            | M::FrontTime { signal, from, to }
            | M::VirtualOrigin { signal, from, to }
            | M::TimeToHalf { signal, from, to } => {
                let (d, a, b) = (
                    self.measured(signal),
                    self.fraction(from),
                    self.fraction(to),
                );
                d.filter(|_| a && b).map(|_| Dimension::SECOND)
            }
            M::Width { signal, fraction } => {
                let (d, a) = (self.measured(signal), self.fraction(fraction));
                d.filter(|_| a).map(|_| Dimension::SECOND)
            }
            M::Undershoot(s) | M::Tilt(s) => self.measured(s).map(|_| Dimension::NONE),
            M::Overshoot { signal, over } => self
                .value_of(signal, over, "the value overshot")
                .map(|()| Dimension::NONE),
            M::Settling { signal, to } => self
                .value_of(signal, to, "the value settled to")
                .map(|()| Dimension::SECOND),
            M::StoredAt(t) | M::StoredJustBefore(t) => self.time(t).then_some(Dimension::JOULE),
            M::Duration => Some(Dimension::SECOND),
        }
    }

    /// A signal in a phrase's slot: it must use a signal or `t`, or be a constant by name.
    pub fn measured(&mut self, e: &Expr) -> Option<Dimension> {
        let found = self.type_of(e, Place::Signal)?;
        let moves = matches!(e.kind, ExprKind::Name(_))
            || crate::walk::any(e, &|e| match &e.kind {
                ExprKind::Time | ExprKind::Signal(_) => true,
                ExprKind::Name(name) => matches!(self.index.names.get(name), Some(Item::Signal(_))),
                _ => false,
            });
        if !moves {
            return self.report(FaultKind::ConstantSignal { found: shown(e) }, e.span);
        }
        Some(found.dimension)
    }

    fn time(&mut self, e: &Expr) -> bool {
        self.of(e, Place::Reading, "the time", Dimension::SECOND)
            .is_some()
    }

    fn fraction(&mut self, e: &Expr) -> bool {
        self.share(e, "a fraction of the largest value")
    }

    fn level(&mut self, signal: &Expr, level: &Level) -> Option<Dimension> {
        match level {
            Level::Value(e) => self.value_of(signal, e, "the level")?,
            Level::OfLargest(e) => {
                let (d, share) = (self.measured(signal), self.fraction(e));
                d.filter(|_| share)?;
            }
        }
        Some(Dimension::SECOND)
    }

    /// A value that the signal is held against: of its dimension.
    fn value_of(&mut self, signal: &Expr, value: &Expr, what: &str) -> Option<()> {
        let (d, found) = (
            self.measured(signal),
            self.type_of(value, Place::Constant("a level")),
        );
        self.wants(value, found?, what, d?).then_some(())
    }

    fn window(&mut self, phrase: &Phrase) -> bool {
        use Measure as M;
        let none = matches!(
            phrase.measure,
            M::At { .. }
                | M::JustBefore { .. }
                | M::Final(_)
                | M::StoredAt(_)
                | M::StoredJustBefore(_)
        );
        let Some(window) = &phrase.window else {
            if phrase.measure == M::Duration {
                self.fault(
                    FaultKind::NeedsWindow {
                        phrase: phrase.to_string(),
                    }
                    .at(phrase.span),
                );
                return false;
            }
            return true;
        };
        if none {
            let kind = FaultKind::NoWindow {
                phrase: phrase.measure.to_string(),
            };
            self.fault(kind.at(phrase.span));
            return false;
        }
        match window {
            Window::Between(a, b) => {
                let (a, b) = (self.time(a), self.time(b));
                a && b
            }
            Window::After(a) | Window::Before(a) => self.time(a),
            Window::While(conditions) => {
                let fits: Vec<bool> = conditions.iter().map(|c| self.condition(c)).collect();
                fits.into_iter().all(|fits| fits)
            }
            Window::Phase { number, signal } => {
                if *number == 0 {
                    self.fault(FaultKind::PhaseNumber.at(phrase.span));
                }
                self.measured(signal).is_some() && *number > 0
            }
        }
    }

    fn condition(&mut self, c: &Condition) -> bool {
        let is_switch = |k: &PartKind| matches!(k, PartKind::Switch(_));
        match &c.state {
            StateWord::Closed => self
                .of_kind(&c.part, "is closed", "a switch", &is_switch)
                .is_some(),
            StateWord::Open => self
                .of_kind(&c.part, "is open", "a switch", &is_switch)
                .is_some(),
            StateWord::At(node) => {
                let found = self.changeover(&c.part, "is at");
                found.is_some_and(|found| self.its_node(&c.part, found, node))
            }
        }
    }
}

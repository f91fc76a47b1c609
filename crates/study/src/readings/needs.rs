//! What readings need of a shot: the quantities to record and the instants to land on.

use std::collections::HashSet;

use pulsewright_circuit::expr::ExprKind;
use pulsewright_circuit::phrase::{Level, Measure, Window};
use pulsewright_circuit::{Expr, Name, Phrase, Probe};
use pulsewright_engine::{heat_ports, ports};

use super::Case;

/// What to ask of a shot.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Needs {
    /// The quantities to record, each once.
    pub probes: Vec<Probe>,
    /// Instants of written window edges, s.
    pub landings: Vec<f64>,
}

/// What the expressions of readings need.
#[must_use]
pub fn needs<'e>(case: Case<'_>, readings: impl IntoIterator<Item = &'e Expr>) -> Needs {
    let mut collector = Collector {
        case,
        needs: Needs::default(),
        known: HashSet::new(),
        seen: HashSet::new(),
    };
    for reading in readings {
        collector.reading(reading);
    }
    collector.needs
}

struct Collector<'a> {
    case: Case<'a>,
    needs: Needs,
    known: HashSet<Probe>,
    seen: HashSet<String>,
}

impl Collector<'_> {
    fn probe(&mut self, probe: Probe) {
        if self.known.insert(probe) {
            self.needs.probes.push(probe);
        }
    }

    fn reading(&mut self, expr: &Expr) {
        match &expr.kind {
            ExprKind::Negative(a) => self.reading(a),
            ExprKind::Binary { left, right, .. } => {
                self.reading(left);
                self.reading(right);
            }
            ExprKind::Call { arguments, .. } => arguments.iter().for_each(|a| self.reading(a)),
            ExprKind::Reading(phrase) => self.phrase(phrase),
            ExprKind::Name(name) if self.seen.insert(name.clone()) => {
                if let Some(named) = self.case.circuit.find_reading(name) {
                    self.reading(&named.value);
                }
            }
            _ => {}
        }
    }

    /// A signal; an instant at which it is read is no landing, since the cubic serves there.
    fn signal(&mut self, expr: &Expr) {
        if let Ok(formula) = self
            .case
            .circuit
            .formula(self.case.setup, self.case.lets, expr)
        {
            formula.probes().into_iter().for_each(|p| self.probe(p));
        }
    }

    /// A time: a landing where it is written.
    fn time(&mut self, expr: &Expr) {
        match self.case.circuit.value(self.case.lets, expr) {
            Ok(t) => self.needs.landings.push(t),
            Err(_) => self.reading(expr),
        }
    }

    fn part(&self, name: &Name) -> Option<usize> {
        self.case.circuit.part_index(&name.text)
    }

    fn pairs(&mut self, pairs: Vec<(Probe, Probe)>) {
        for (v, i) in pairs {
            self.probe(v);
            self.probe(i);
        }
    }

    fn phrase(&mut self, phrase: &Phrase) {
        self.measure(&phrase.measure);
        match &phrase.window {
            Some(Window::Between(from, to)) => {
                self.time(from);
                self.time(to);
            }
            Some(Window::After(t) | Window::Before(t)) => self.time(t),
            Some(Window::Phase { signal, .. }) => self.signal(signal),
            _ => {}
        }
    }

    fn measure(&mut self, measure: &Measure) {
        use Measure as M;
        match measure {
            M::EnergyInto(part) | M::EnergyOutOf(part) | M::Action(part) => {
                let pairs = self.part(part).map(|p| ports(self.case.setup, p));
                self.pairs(pairs.unwrap_or_default());
            }
            M::Heat(part) => {
                let pairs = self.part(part).map(|p| heat_ports(self.case.setup, p));
                self.pairs(pairs.unwrap_or_default());
            }
            M::Charge(part) | M::GrossCharge(part) => {
                if let Some(p) = self.part(part) {
                    self.probe(Probe::CurrentThrough(p));
                }
            }
            M::StoredAt(t) | M::StoredJustBefore(t) => {
                self.probe(Probe::EnergyStored);
                self.time(t);
            }
            M::At { signal, time } | M::JustBefore { signal, time } => {
                self.signal(signal);
                self.time(time);
            }
            _ => self.of_signal(measure),
        }
    }

    fn of_signal(&mut self, measure: &Measure) {
        use Measure as M;
        match measure {
            M::Area(s)
            | M::Highest(s)
            | M::Lowest(s)
            | M::Largest(s)
            | M::PeakToPeak(s)
            | M::Mean(s)
            | M::Rms(s)
            | M::Final(s)
            | M::Undershoot(s)
            | M::Tilt(s)
            | M::Period(s)
            | M::Steepest { signal: s, .. }
            | M::TimeOf { signal: s, .. }
            | M::Rise { signal: s, .. }
            | M::Fall { signal: s, .. }
            | M::FrontTime { signal: s, .. }
            | M::VirtualOrigin { signal: s, .. }
            | M::TimeToHalf { signal: s, .. }
            | M::Width { signal: s, .. } => self.signal(s),
            M::Overshoot {
                signal,
                over: other,
            }
            | M::Settling { signal, to: other }
            | M::Crossing {
                signal,
                level: Level::Value(other) | Level::OfLargest(other),
                ..
            }
            | M::TimeSpent {
                signal,
                level: Level::Value(other) | Level::OfLargest(other),
                ..
            } => {
                self.signal(signal);
                self.reading(other);
            }
            _ => {}
        }
    }
}

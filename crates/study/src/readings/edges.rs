//! Edges: instants at which a switch, a changeover or a diode changes, out of the event log.

use pulsewright_circuit::expr::ExprKind;
use pulsewright_circuit::phrase::{Edge, Ordinal};
use pulsewright_circuit::setup::SetEdge;
use pulsewright_circuit::{Expr, Formula};
use pulsewright_engine::Event;

use super::{Lack, Number, Reader, Sample, absent, said_time};

impl Reader<'_> {
    /// The instant of an edge, s; without an ordinal the first.
    pub(super) fn edge(&self, edge: &Edge) -> Sample {
        let set = self.set_edge(edge)?;
        let mut all = self.events(set);
        let found = match set.ordinal {
            Some(Ordinal::Last) => all.last(),
            Some(Ordinal::Nth(n)) => all.nth(usize::from(n).saturating_sub(1)),
            None => all.next(),
        };
        match found {
            Some(event) => Ok(self.event_time(event)),
            None => absent(match self.events(set).count() {
                0 => format!("there is no {} in this shot", bare(edge)),
                1 => format!("there is only one {} in this shot", bare(edge)),
                n => format!("{} comes only {n} times in this shot", bare(edge)),
            }),
        }
    }

    /// The instant of the edge as a window's end: without an ordinal the next after `start`, s.
    pub(super) fn edge_after(&self, edge: &Edge, start: f64) -> Sample {
        if edge.ordinal.is_some() {
            return self.edge(edge);
        }
        let set = self.set_edge(edge)?;
        match self.events(set).find(|e| e.time > start) {
            Some(event) => Ok(self.event_time(event)),
            None => absent(format!("there is no {edge} after {}", said_time(start))),
        }
    }

    fn set_edge(&self, edge: &Edge) -> Result<SetEdge, Lack> {
        let case = &self.case;
        let expr = Expr::new(ExprKind::Edge(Box::new(edge.clone())), edge.span);
        match case.circuit.formula(case.setup, case.lets, &expr) {
            Ok(Formula::Edge(set)) => Ok(set),
            _ => absent(format!("{edge} is no edge in this case")),
        }
    }

    fn events(&self, set: SetEdge) -> impl Iterator<Item = &Event> {
        let fits = move |e: &&Event| e.part == set.part && usize::from(e.state) == set.state;
        self.shot().events.iter().filter(fits)
    }

    /// A stated instant is exact; one that was found, or that may follow such a one, is only as
    /// good as the shot.
    fn event_time(&self, event: &Event) -> Number {
        let scale = self.since_event(event.time);
        let found = self
            .shot()
            .events
            .iter()
            .any(|e| e.found && e.time <= event.time);
        Number {
            value: event.time,
            scale,
            size: if found { event.time } else { 0.0 },
        }
    }

    /// The time since the event before `t`, s: the last abrupt instant before it, or 0 s.
    pub(super) fn since_event(&self, t: f64) -> f64 {
        let jumps = &self.shot().jumps;
        let before = jumps.partition_point(|j| j.time < t);
        let last = jumps.iter().take(before).rev().find(|j| j.abrupt);
        t - last.map_or(0.0, |j| j.time)
    }

    /// An instant of a signal that moves by `shift` s where the signal is off by its size.
    pub(super) fn instant(&self, t: f64, shift: f64) -> Number {
        Number {
            value: t,
            scale: self.since_event(t),
            size: t.abs() + shift,
        }
    }
}

fn bare(edge: &Edge) -> String {
    Edge {
        ordinal: None,
        ..edge.clone()
    }
    .to_string()
}

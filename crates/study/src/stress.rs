//! What each part had to stand: largest voltage, current and power, energy, action.
//!
//! Voltage and power are at the terminals. An impulse makes what it is of unbounded: the largest
//! value beside it is reported with an infinite bound, at the impulse's instant. A voltage that
//! hangs on where an island was held is left out.

use pulsewright_circuit::setup::Element;
use pulsewright_circuit::{Formula, Probe, Setup};
use pulsewright_engine::ports;

use crate::outcome::{Extreme, Found, Stress};
use crate::readings::{Number, Reader};
use crate::series::{Rules, Series};
use crate::waveform::{Interval, Wave};

/// A largest value on each mesh, and its instant on the last one.
#[derive(Clone, Debug, Default)]
struct Largest {
    series: Series,
    time: f64,
    unbounded: bool,
}

/// What one part had to stand on each mesh.
#[derive(Clone, Debug, Default)]
struct Load {
    voltage: Option<Largest>,
    current: Option<Largest>,
    power: Option<Largest>,
    energy: Option<Series>,
    action: Option<Series>,
    endless: bool,
}

/// What all parts had to stand on each mesh.
#[derive(Clone, Debug, Default)]
pub struct Loads {
    parts: Vec<Load>,
}

impl Loads {
    /// Adds what was seen on the next mesh.
    pub(crate) fn push(&mut self, reader: &Reader<'_>, setup: &Setup) {
        self.parts.resize_with(setup.parts.len(), Load::default);
        for (part, load) in self.parts.iter_mut().enumerate() {
            load.push(reader, setup, part);
        }
    }

    /// The stress on every part that can have one.
    #[must_use]
    pub fn result(&self, setup: &Setup, rules: Rules) -> Vec<Stress> {
        let rows = self
            .parts
            .iter()
            .zip(&setup.parts)
            .filter(|(load, _)| load.energy.is_some());
        rows.map(|(load, part)| load.result(&part.name, rules))
            .collect()
    }
}

impl Load {
    fn push(&mut self, reader: &Reader<'_>, setup: &Setup, part: usize) {
        let pairs = ports(setup, part);
        if pairs.is_empty() {
            return;
        }
        let all = [Interval {
            start: 0.0,
            end: reader.record().end(),
        }];
        let probe = |p| Formula::Probe(p);
        let changeover = matches!(
            setup.parts.get(part).map(|p| &p.element),
            Some(Element::Changeover { .. })
        );
        if !changeover {
            let across = Probe::VoltageAcross(part);
            let known = grounded(reader, across);
            let voltage = self.voltage.get_or_insert_default();
            voltage.push(reader, &probe(across), &known, None);
        }
        let current = self.current.get_or_insert_default();
        current.push(reader, &probe(Probe::CurrentThrough(part)), &all, None);
        let products = pairs
            .iter()
            .map(|(v, i)| Formula::Multiply(Box::new(probe(*v)), Box::new(probe(*i))));
        let sum = products.reduce(|a, b| Formula::Add(Box::new(a), Box::new(b)));
        if let Some(sum) = sum {
            self.power
                .get_or_insert_default()
                .push(reader, &sum, &all, Some(part));
        }
        let energy = reader.energy_of(part, &all);
        self.energy
            .get_or_insert_default()
            .push(Ok(Number::new(energy.net, energy.gross)));
        match reader.action_of(part, &all) {
            Ok(action) => self
                .action
                .get_or_insert_default()
                .push(Ok(Number::new(action, action))),
            Err(_) => self.endless = true,
        }
    }

    fn result(&self, name: &str, rules: Rules) -> Stress {
        let pair = |series: &Series| match series.found(rules) {
            Found::Value { value, bound } => Some((value, bound)),
            _ => None,
        };
        let extreme = |largest: &Option<Largest>| largest.as_ref().and_then(|l| l.result(rules));
        Stress {
            part: name.to_owned(),
            voltage: extreme(&self.voltage),
            current: extreme(&self.current),
            power: extreme(&self.power),
            energy: self.energy.as_ref().and_then(pair),
            action: self
                .action
                .as_ref()
                .filter(|_| !self.endless)
                .and_then(pair),
        }
    }
}

/// The stretches in which a voltage does not hang on the potential at which an island is held;
/// neighbours are joined, so that jumps between them count on both sides.
fn grounded(reader: &Reader<'_>, probe: Probe) -> Vec<Interval> {
    let shot = reader.record().shot;
    let index = shot.probes.iter().position(|p| *p == probe);
    let mut found: Vec<Interval> = Vec::new();
    for stretch in &shot.stretches {
        let floats = index
            .and_then(|k| stretch.floating.get(k))
            .is_some_and(|f| *f);
        let (Some(&start), Some(&end)) = (stretch.times.first(), stretch.times.last()) else {
            continue;
        };
        match found.last_mut().filter(|last| last.end == start) {
            _ if floats => {}
            Some(last) => last.end = end,
            None => found.push(Interval { start, end }),
        }
    }
    found
}

impl Largest {
    /// Adds the largest absolute value of a formula; for the power of a part, what flows into it at
    /// a jump is an impulse.
    fn push(
        &mut self,
        reader: &Reader<'_>,
        formula: &Formula,
        all: &[Interval],
        power_of: Option<usize>,
    ) {
        let record = reader.record();
        let wave = Wave::of(formula, record);
        let Some(top) = wave.largest_in(all) else {
            return;
        };
        let value = top.value.abs();
        self.series.push(Ok(Number::new(value, value)));
        self.time = top.time;
        let impulse = match power_of {
            None => all
                .iter()
                .find_map(|i| wave.impulses_in(*i).first().map(|x| x.0)),
            Some(part) => {
                let mut jumps = record.shot.jumps.iter();
                jumps
                    .find(|j| j.energies.iter().any(|e| e.0 == part && e.1 != 0.0))
                    .map(|j| j.time)
            }
        };
        self.unbounded = impulse.is_some();
        self.time = impulse.unwrap_or(self.time);
    }

    fn result(&self, rules: Rules) -> Option<Extreme> {
        match self.series.found(rules) {
            Found::Value { value, bound } => Some(Extreme {
                value,
                bound: if self.unbounded { f64::INFINITY } else { bound },
                time: self.time,
            }),
            _ => None,
        }
    }
}

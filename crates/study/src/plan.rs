//! What a case is fired for: the readings to take, what to record, where to land.
//!
//! Every expression that has to be read is listed once: named readings, what claims judge, and
//! those limits of claims that are not numbers. What is recorded starts with the channels.

use std::collections::HashSet;

use pulsewright_circuit::draft::{Claim, Method};
use pulsewright_circuit::setup::Element;
use pulsewright_circuit::{Expr, Probe};
use pulsewright_engine::ports;

use crate::claims::expressions;
use crate::options::Options;
use crate::readings::{Case, needs};

/// Error of a step of the first mesh, over the scale of the states: coarse, but so that three
/// halvings are mostly enough for a part in a million.
const TOLERANCE: f64 = 5e-5;
/// The same for the shots of a study, where a part in ten thousand is asked for.
const DRAWN: f64 = 1e-3;
/// Error of the cubics of the first mesh by exact propagation, and in the shots of a study.
const EXACT: f64 = 2e-12;
const DRAWN_EXACT: f64 = 1e-7;

/// How many channels are taken where none is stated.
const CHANNELS: usize = 8;
/// Up to how many parts stress is read, and hazards along with the readings.
const STRESS_PARTS: usize = 200;
/// Up to how many capacitors hazards are read at all; charged ones come first.
const STORES: usize = 2000;

/// What a case is fired for.
#[derive(Clone)]
pub struct Plan<'a> {
    /// The circuit with its numbers.
    pub case: Case<'a>,
    /// The expressions to read, each once.
    pub readings: Vec<Expr>,
    /// The channels.
    pub channels: Vec<Expr>,
    /// What to record.
    pub probes: Vec<Probe>,
    /// Where to land, s.
    pub landings: Vec<f64>,
    /// Whether stress is read.
    pub stress: bool,
    /// Capacitors whose stored energy is watched, by index, with their capacitance, F.
    pub stores: Vec<(usize, f64)>,
    /// Whether they are watched in a shot of their own, there being many parts.
    pub stores_apart: bool,
    /// Error of a step of the first mesh, over the scale of the states.
    pub tolerance: f64,
}

impl<'a> Plan<'a> {
    /// What `case` is fired for.
    #[must_use]
    pub fn new(case: Case<'a>, options: &Options<'_>) -> Self {
        let readings = readings(case);
        let stated = case.circuit.draft().run.channels.is_some() || options.channels.is_some();
        let mut channels = options
            .channels
            .clone()
            .unwrap_or_else(|| case.circuit.channels());
        channels.dedup();
        if !stated {
            channels.truncate(CHANNELS);
        }
        let few = case.setup.parts.len() <= STRESS_PARTS;
        let mut plan = Plan {
            case,
            readings,
            channels,
            probes: Vec::new(),
            landings: Vec::new(),
            stress: options.stress && few,
            stores: stores(case),
            stores_apart: !few,
            tolerance: tolerance(case, false),
        };
        plan.record();
        plan
    }

    /// What a shot of a study is fired for: its readings alone, as one of many from a coarser
    /// first mesh.
    #[must_use]
    pub fn of_readings(case: Case<'a>, is_one_of_many: bool) -> Self {
        let mut plan = Plan {
            case,
            readings: readings(case),
            channels: Vec::new(),
            probes: Vec::new(),
            landings: Vec::new(),
            stress: false,
            stores: Vec::new(),
            stores_apart: false,
            tolerance: tolerance(case, is_one_of_many),
        };
        plan.record();
        plan
    }

    /// What a shot is fired for that is to tell one reading.
    #[must_use]
    pub fn of_one(case: Case<'a>, reading: &Expr) -> Self {
        let mut plan = Plan::of_readings(case, false);
        plan.readings = vec![reading.clone()];
        plan.record();
        plan
    }

    fn record(&mut self) {
        let case = self.case;
        let formulas = self
            .channels
            .iter()
            .filter_map(|c| case.circuit.formula(case.setup, case.lets, c).ok());
        let mut all: Vec<Probe> = formulas.flat_map(|f| f.probes()).collect();
        let needed = needs(case, &self.readings);
        all.extend(needed.probes);
        all.push(Probe::EnergyStored);
        if !self.stores_apart {
            all.extend(self.store_probes());
        }
        if self.stress {
            for part in 0..case.setup.parts.len() {
                all.extend(
                    ports(case.setup, part)
                        .into_iter()
                        .flat_map(|(v, i)| [v, i]),
                );
                if matches!(
                    case.setup.parts.get(part).map(|p| &p.element),
                    Some(Element::Changeover { .. })
                ) {
                    all.push(Probe::CurrentThrough(part));
                }
            }
        }
        let mut known = HashSet::new();
        all.retain(|p| known.insert(*p));
        self.probes = all;
        self.landings = needed.landings;
    }

    /// What hazards are read off.
    pub fn store_probes(&self) -> impl Iterator<Item = Probe> + use<'_> {
        self.stores.iter().map(|(part, _)| Probe::ChargeHeld(*part))
    }

    /// Where an expression stands among those read.
    #[must_use]
    pub fn place(&self, expr: &Expr) -> Option<usize> {
        self.readings.iter().position(|e| e == expr)
    }

    /// Records for the readings alone.
    pub fn read_only(&mut self) {
        let needed = needs(self.case, &self.readings);
        let mut known = HashSet::new();
        self.probes = needed.probes;
        self.probes.retain(|p| known.insert(*p));
        self.channels.clear();
        self.stores.clear();
        self.stores_apart = false;
        self.stress = false;
    }

    /// What a reading is called: its name, else its text.
    #[must_use]
    pub fn name(&self, expr: &Expr) -> String {
        let draft = self.case.circuit.draft();
        let named = draft.readings.iter().find(|r| r.value == *expr);
        named.map_or_else(|| expr.to_string(), |r| r.name.text.clone())
    }

    /// The claims of the netlist.
    #[must_use]
    pub fn claims(&self) -> &'a [Claim] {
        &self.case.circuit.draft().claims
    }
}

fn tolerance(case: Case<'_>, is_one_of_many: bool) -> f64 {
    match (case.setup.method == Method::Exact, is_one_of_many) {
        (false, false) => TOLERANCE,
        (false, true) => DRAWN,
        (true, false) => EXACT,
        (true, true) => DRAWN_EXACT,
    }
}

fn readings(case: Case<'_>) -> Vec<Expr> {
    let draft = case.circuit.draft();
    let mut all: Vec<Expr> = Vec::new();
    let mut take = |e: &Expr| {
        if !all.contains(e) {
            all.push(e.clone());
        }
    };
    draft.readings.iter().for_each(|r| take(&r.value));
    for claim in &draft.claims {
        take(&claim.reading);
        let limits = expressions(&claim.relation, claim.allowing.as_ref());
        limits
            .into_iter()
            .filter(|e| case.circuit.value(case.lets, e).is_err())
            .for_each(&mut take);
    }
    all
}

fn stores(case: Case<'_>) -> Vec<(usize, f64)> {
    let mut found: Vec<(bool, usize, f64)> = Vec::new();
    for (i, part) in case.setup.parts.iter().enumerate() {
        if let Element::Capacitor {
            farads, charged, ..
        } = part.element
        {
            found.push((charged.is_none_or(|v| v == 0.0), i, farads));
        }
    }
    if found.len() > STORES {
        found.sort_by_key(|(idle, i, _)| (*idle, *i));
        found.truncate(STORES);
        found.sort_by_key(|(_, i, _)| *i);
    }
    found
        .into_iter()
        .map(|(_, i, farads)| (i, farads))
        .collect()
}

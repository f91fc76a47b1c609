//! `pulsewright.modes/1`: the natural frequencies in each topology that a shot passes through.

use super::{Finite, Input, Ordered, Origin, Program, Run, StepRecord};
use pulsewright_engine::modes::NaturalMode;
use pulsewright_study::{Modes, TopologyModes};
use serde::{Deserialize, Serialize};

/// The record of the modes of one shot.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ModesRecord {
    /// `pulsewright.modes/1`.
    pub record: String,
    /// The program that wrote it.
    pub program: Program,
    /// What was fired.
    pub input: Input,
    /// How it was run.
    pub run: Run,
    /// The topologies in order of time.
    pub topologies: Vec<TopologyRecord>,
}

/// A topology and its modes.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct TopologyRecord {
    /// When it began, s.
    pub from: Option<Finite>,
    /// When it ended, s.
    pub to: Option<Finite>,
    /// The state of each part that has states: `open`, `closed`, `at NODE`, `blocking`,
    /// `conducting`.
    pub states: Ordered<String>,
    /// Its modes, slowest first.
    pub modes: Vec<ModeRecord>,
}

/// A natural frequency, or a pair.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ModeRecord {
    /// Real part of the natural frequency, 1/s.
    pub real: Option<Finite>,
    /// Its imaginary part, rad/s, 0 or more.
    pub imaginary: Option<Finite>,
    /// How many natural frequencies are meant: 2 for a complex pair and a critically damped one.
    pub count: u32,
    /// The time in which it changes by a factor of e, s; `null` where it does not.
    pub time_constant: Option<Finite>,
    /// The frequency at which it rings, Hz; `null` where it does not.
    pub frequency: Option<Finite>,
    /// The damping ratio of its pair; `null` where it belongs to none.
    pub damping_ratio: Option<Finite>,
    /// `undamped`, `underdamped`, `critically damped`, `overdamped`, `decays`, `holds`, `grows`.
    pub kind: String,
    /// The share of its energy in each part.
    pub energy: Ordered<Option<Finite>>,
}

/// The record of the modes of one shot.
#[must_use]
pub fn modes(modes: &Modes, origin: &Origin<'_>) -> ModesRecord {
    let size = |step: f64| Finite::new(step).filter(|_| modes.steps > 0);
    ModesRecord {
        record: "pulsewright.modes/1".to_owned(),
        program: Program::this(),
        input: Input::new(origin, &modes.set),
        run: Run {
            method: modes.method.clone(),
            span: Finite::new(modes.span),
            steps: modes.steps,
            step: StepRecord {
                smallest: size(modes.smallest_step),
                largest: size(modes.largest_step),
            },
            defaults: modes.defaults.clone(),
        },
        topologies: modes
            .topologies
            .iter()
            .map(|t| topology(t, &modes.parts))
            .collect(),
    }
}

fn topology(topology: &TopologyModes, parts: &[String]) -> TopologyRecord {
    TopologyRecord {
        from: Finite::new(topology.from),
        to: Finite::new(topology.to),
        states: Ordered(topology.states.clone()),
        modes: topology.modes.iter().map(|m| mode(m, parts)).collect(),
    }
}

fn mode(mode: &NaturalMode, parts: &[String]) -> ModeRecord {
    let number = |x: Option<f64>| x.and_then(Finite::new);
    let named = |&(part, share): &(usize, f64)| {
        let name = parts.get(part).cloned().unwrap_or_default();
        (name, Finite::new(share))
    };
    ModeRecord {
        real: Finite::new(mode.real),
        imaginary: Finite::new(mode.imaginary),
        count: mode.count,
        time_constant: number(mode.time_constant()),
        frequency: number(mode.frequency()),
        damping_ratio: number(mode.damping_ratio),
        kind: mode.kind.words().to_owned(),
        energy: Ordered(mode.energy.iter().map(named).collect()),
    }
}

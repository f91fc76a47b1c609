//! The natural frequencies of the topologies that a case passes through.
//!
//! ```text
//! let-values -> setup -> plan -> ladder of shots -> topologies of the finest -> modes
//! ```
//!
//! The case is fired as [`fire`](crate::fire) does, so that both name the same instants; what its
//! claims would be answered is not asked.

use pulsewright_circuit::setup::Element;
use pulsewright_circuit::{Circuit, Setup};
use pulsewright_engine::modes::NaturalMode;

use crate::adjust::settle;
use crate::cases::case_set;
use crate::error::StudyError;
use crate::fire::settings;
use crate::ladder::{Ladder, Turn};
use crate::options::Options;
use crate::outcome::Set;
use crate::plan::Plan;
use crate::readings::Case;

/// The modes of one case.
#[derive(Clone, Debug)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Modes {
    /// The let-values that were set or varied.
    pub set: Set,
    /// The topologies in order of time.
    pub topologies: Vec<TopologyModes>,
    /// The names of the parts, for [`NaturalMode::energy`].
    pub parts: Vec<String>,
    /// Defaults that were taken, in words.
    pub defaults: Vec<String>,
    /// The integrator in words.
    pub method: String,
    /// How long the shot was followed, s.
    pub span: f64,
    /// Accepted steps of the finest shot.
    pub steps: u64,
    /// Its smallest step, s.
    pub smallest_step: f64,
    /// Its largest step, s.
    pub largest_step: f64,
}

/// A topology and its modes.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct TopologyModes {
    /// When it began, s.
    pub from: f64,
    /// When it ended, s.
    pub to: f64,
    /// Each part that has states, with the one it was in: `open`, `closed`, `at NODE`, `blocking`,
    /// `conducting`.
    pub states: Vec<(String, String)>,
    /// Its modes, slowest first.
    pub modes: Vec<NaturalMode>,
}

/// Finds the natural frequencies in every topology that one case passes through: that of the
/// nominal let-values, or `options.case`.
///
/// # Errors
///
/// [`StudyError`] where the circuit has no answer, a let-value does not fit, there are too many
/// states, or the hook stops the run.
pub fn modes(circuit: &Circuit, options: &Options<'_>) -> Result<Modes, StudyError> {
    let set = case_set(circuit, options)?;
    let set = settle(circuit, &set, options, Turn::ONLY)?.set;
    let lets = circuit.lets_at(&set, &options.at)?;
    let setup = circuit.setup_at(&lets, &options.at)?;
    let case = Case {
        circuit,
        setup: &setup,
        lets: &lets,
    };
    let options = Options {
        stress: false,
        channels: Some(Vec::new()),
        ..options.clone()
    };
    let plan = Plan::new(case, &options);
    let shot = Ladder::climb(&plan, &options, Turn::ONLY, &|_, _| true)?.shot;
    let topologies = pulsewright_engine::modes(&setup, &shot)?
        .into_iter()
        .map(|passage| TopologyModes {
            from: passage.from,
            to: passage.to,
            states: states(&setup, &passage.states),
            modes: passage.modes,
        })
        .collect();
    Ok(Modes {
        set: settings(&set),
        topologies,
        parts: setup.parts.iter().map(|p| p.name.clone()).collect(),
        defaults: circuit.defaults(),
        method: setup.method.words().to_owned(),
        span: setup.span,
        steps: shot.steps,
        smallest_step: shot.smallest_step,
        largest_step: shot.largest_step,
    })
}

/// The parts that have states, each with its own in words.
fn states(setup: &Setup, states: &[u8]) -> Vec<(String, String)> {
    let parts = setup.parts.iter().zip(states);
    parts
        .filter_map(|(part, &state)| Some((part.name.clone(), state_words(setup, part, state)?)))
        .collect()
}

fn state_words(
    setup: &Setup,
    part: &pulsewright_circuit::setup::SetPart,
    state: u8,
) -> Option<String> {
    let words = |on: &str, off: &str| Some(if state == 1 { on } else { off }.to_owned());
    match &part.element {
        Element::Switch { .. } => words("closed", "open"),
        Element::Diode { .. } => words("conducting", "blocking"),
        Element::Changeover { contacts, .. } => {
            let node = contacts.get(usize::from(state))?;
            Some(format!("at {}", setup.nodes.get(*node)?))
        }
        _ => None,
    }
}

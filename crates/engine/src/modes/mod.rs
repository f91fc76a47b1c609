//! Natural frequencies: how each topology of a shot moves when it is left to itself.
//!
//! ```text
//!   w' = A w       w: energy coordinates, |w|²/2 = stored energy, J       (matrix.rs)
//!   A u = λ u      a mode moves as u e^(λt)                               (kinds.rs)
//! ```
//!
//! A capacitance in a loop of capacitances and voltage sources, and an inductance in a cut of
//! inductances and current sources, are no states of their own: they follow the others and bring
//! no mode. What is left may still have λ = 0: a charge that nothing lets flow, a current that
//! nothing brakes. How many of these there are is counted in the graph, so that a slow leak is
//! never taken for none.
//!
//! The share of a mode's energy in a part is the mean over a cycle of the part's square in `w`.
//! Coupled windings share what is common to them: their coordinates are the symmetric square
//! root of the inductance matrix (scaled to ones on its diagonal) times the currents, which
//! favours no winding and makes no share negative.

mod kinds;
mod matrix;

use pulsewright_circuit::setup::Setup;

use crate::equations::Equations;
use crate::failure::Failure;
use crate::network::Network;
use crate::shot::Shot;

/// One natural frequency of a topology, or a pair of them, and where its energy is.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct NaturalMode {
    /// Real part of the natural frequency, 1/s; negative where the mode dies away.
    pub real: f64,
    /// Its imaginary part, rad/s, 0 or more: of a complex pair the upper one is named.
    pub imaginary: f64,
    /// How many natural frequencies are meant: 2 for a complex pair and for a critically damped
    /// one, else 1.
    pub count: u32,
    /// The damping ratio of its pair: below 1 it rings, 1 is critical, above 1 it creeps; none for
    /// a mode that belongs to no pair.
    pub damping_ratio: Option<f64>,
    /// How it moves.
    pub kind: Kind,
    /// Share of its energy in each part, by the part's index, in the order of the parts; adds up
    /// to 1, shares below 1e-9 left out.
    pub energy: Vec<(usize, f64)>,
    /// Share of its energy in capacitances.
    pub electric: f64,
}

/// How a mode moves.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
#[non_exhaustive]
pub enum Kind {
    /// Rings for ever.
    Undamped,
    /// Rings and dies away.
    Underdamped,
    /// Two equal decays that share one form: on the edge of ringing.
    CriticallyDamped,
    /// One of the two decays of a pair that more damping than critical keeps from ringing.
    Overdamped,
    /// Dies away by itself, belonging to no pair.
    Decays,
    /// Stays as it is: a charge or a current that is held.
    Holds,
    /// Grows, which takes a controlled source.
    Grows,
}

impl Kind {
    /// The kind in words: `undamped`, `underdamped`, `critically damped`, `overdamped`, `decays`,
    /// `holds`, `grows`.
    #[must_use]
    pub const fn words(self) -> &'static str {
        match self {
            Kind::Undamped => "undamped",
            Kind::Underdamped => "underdamped",
            Kind::CriticallyDamped => "critically damped",
            Kind::Overdamped => "overdamped",
            Kind::Decays => "decays",
            Kind::Holds => "holds",
            Kind::Grows => "grows",
        }
    }
}

impl NaturalMode {
    /// The time in which it changes by a factor of e, s; none where it does not.
    #[must_use]
    pub fn time_constant(&self) -> Option<f64> {
        let tau = 1.0 / self.real.abs();
        tau.is_finite().then_some(tau)
    }

    /// The frequency at which it rings, Hz; none where it does not.
    #[must_use]
    pub fn frequency(&self) -> Option<f64> {
        (self.imaginary > 0.0).then_some(self.imaginary / std::f64::consts::TAU)
    }
}

/// A time during which the topology stayed the same, and its modes.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Passage {
    /// When it began, s.
    pub from: f64,
    /// When it ended, s.
    pub to: f64,
    /// The state of each part, as in [`Stretch::states`](crate::Stretch::states).
    pub states: Vec<u8>,
    /// Its modes, slowest first.
    pub modes: Vec<NaturalMode>,
}

/// The topologies that a shot passed through, in order of time, each with its modes. Stretches
/// that follow each other in the same topology are one passage.
///
/// # Errors
///
/// [`Failure::NotYet`] for more states than are solved densely, [`Failure::Singular`] where the
/// equations have no single solution, [`Failure::NotFinite`] where values are too far apart.
pub fn modes(setup: &Setup, shot: &Shot) -> Result<Vec<Passage>, Failure> {
    let net = Network::new(setup)?;
    let mut all: Vec<Passage> = Vec::new();
    for stretch in &shot.stretches {
        let (Some(&from), Some(&to)) = (stretch.times.first(), stretch.times.last()) else {
            continue;
        };
        if let Some(last) = all.last_mut().filter(|p| p.states == stretch.states) {
            last.to = to;
            continue;
        }
        let known = all.iter().find(|p| p.states == stretch.states);
        let modes = match known {
            Some(passage) => passage.modes.clone(),
            None => of_topology(&net, setup, &stretch.states, from)?,
        };
        all.push(Passage {
            from,
            to,
            states: stretch.states.clone(),
            modes,
        });
    }
    Ok(all)
}

/// The modes in one state of the parts; `time` is for messages.
fn of_topology(
    net: &Network,
    setup: &Setup,
    states: &[u8],
    time: f64,
) -> Result<Vec<NaturalMode>, Failure> {
    let mut equations = Equations::new(net, setup, states, time)?;
    let reduced = matrix::reduced(&mut equations, net, setup)?;
    if !reduced.is_finite() {
        return Err(Failure::NotFinite {
            what: "a natural frequency".to_owned(),
            time,
        });
    }
    kinds::modes(&reduced, net).ok_or_else(|| Failure::Singular {
        names: Vec::new(),
        time,
    })
}

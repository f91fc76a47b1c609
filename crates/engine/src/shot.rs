//! A shot: what is asked of it and what comes back.
//!
//! ```text
//! just before 0 s | jump | stretch | jump | stretch | … | stretch | span
//! ```
//!
//! A *jump* is an instant at which anything changes abruptly: the start, a switch, a diode, a
//! corner of a source, a landing. Between two jumps the record is smooth: a *stretch* holds the
//! value and the slope of every recorded quantity at its mesh points, and is read as a cubic
//! Hermite interpolant.

use pulsewright_circuit::Probe;

/// What a shot is to do.
#[non_exhaustive]
pub struct Request<'a> {
    /// What to record.
    pub probes: Vec<Probe>,
    /// Instants that a step must end on, s (window edges); any order.
    pub landings: Vec<f64>,
    /// Which mesh to run on.
    pub mesh: Mesh<'a>,
    /// Called now and then with the instant reached, s; `false` stops the run.
    pub hook: Option<&'a (dyn Fn(f64) -> bool + Sync)>,
}

impl<'a> Request<'a> {
    /// A request to record `probes` on a mesh.
    #[must_use]
    pub fn new(probes: Vec<Probe>, mesh: Mesh<'a>) -> Self {
        Request {
            probes,
            landings: Vec::new(),
            mesh,
            hook: None,
        }
    }
}

/// Which mesh to run on.
#[derive(Clone, Copy, Debug)]
pub enum Mesh<'a> {
    /// Steps chosen so that each step's own error stays below `tolerance` of the scale of the
    /// states.
    Chosen {
        /// Error of a step over the largest stored state; 1e-3 is coarse.
        tolerance: f64,
    },
    /// The mesh of an earlier shot with every step halved `times` times.
    Halved {
        /// The earlier shot, itself run on a chosen or fixed mesh.
        of: &'a Shot,
        /// How many times each step is halved.
        times: u32,
    },
    /// Steps of one size, s, cut short only at jumps.
    Fixed(f64),
}

/// What a shot brought.
#[derive(Clone, Debug, Default)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Shot {
    /// What was recorded, in the order of the vectors in [`Stretch`] and [`Jump`].
    pub probes: Vec<Probe>,
    /// Values of the probes as stated, just before 0 s.
    pub stated: Vec<f64>,
    /// The stretches in order of time; stretch `k` follows `jumps[k]`.
    pub stretches: Vec<Stretch>,
    /// The jumps; the first is the start at 0 s, there is none at the span's end.
    pub jumps: Vec<Jump>,
    /// The event log.
    pub events: Vec<Event>,
    /// Where the joules went, on this mesh.
    pub balance: Balance,
    /// Accepted steps.
    pub steps: u64,
    /// Factorisations of the equations of all topologies.
    pub factorisations: u64,
    /// Smallest accepted step, s.
    pub smallest_step: f64,
    /// Largest accepted step, s.
    pub largest_step: f64,
    /// Whether its points are exact but for rounding.
    pub exact: bool,
    /// Relative rounding of exact propagation, some `2 eps sqrt(|A| t)`; 0 for methods that step.
    pub rounding: f64,
    /// Largest voltage and current there was, V and A.
    pub largest: [f64; 2],
    /// What of these is rounding, V and A.
    pub noise: [f64; 2],
    /// What was noticed.
    pub notices: Vec<Notice>,
    /// Unknowns of the equations.
    pub unknowns: usize,
}

/// A smooth piece of a shot.
#[derive(Clone, Debug, Default)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Stretch {
    /// Mesh points, s, ascending; at least two, the first and last are the stretch's ends.
    pub times: Vec<f64>,
    /// `values[p][k]`: probe `p` at `times[k]` (one-sided at the ends).
    pub values: Vec<Vec<f64>>,
    /// `slopes[p][k]`: its rate of change there.
    pub slopes: Vec<Vec<f64>>,
    /// Whether probe `p` depends on the potential at which an island was held.
    pub floating: Vec<bool>,
    /// The state of each part: for a switch 0 open and 1 closed, for a changeover the contact's
    /// index, for a diode 0 blocking and 1 conducting; 0 for all others.
    pub states: Vec<u8>,
    /// Steps over which the method was backward Euler in half steps (by index of the step).
    pub damped: Vec<u32>,
    /// The planned length, s: up to the next instant known beforehand.
    pub(crate) plan: f64,
    /// Mesh points as shares of the planned length.
    pub(crate) shares: Vec<f64>,
    /// What ended it before its plan.
    pub(crate) cause: Option<Cause>,
}

/// What ends a stretch at an instant that had to be found.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub enum Cause {
    /// A trigger of a switch's action.
    Trigger {
        /// The switch or changeover.
        part: usize,
        /// Which of the action's triggers.
        trigger: usize,
    },
    /// A diode's current or voltage.
    Valve {
        /// The branch.
        branch: usize,
    },
}

/// An instant of abrupt change.
#[derive(Clone, Debug, Default)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Jump {
    /// The instant, s.
    pub time: f64,
    /// The impulse of each probe: flux (V s) for a voltage, charge (C) for a current, 0 else.
    pub impulses: Vec<f64>,
    /// Energy into a part through its terminals during the jump, J, of the parts where it is not 0.
    pub energies: Vec<(usize, f64)>,
    /// Energy lost in a part during the jump, J, of the parts where it is not 0.
    pub losses: Vec<(usize, f64)>,
    /// Indices of the events in [`Shot::events`] that happened here.
    pub events: Vec<usize>,
    /// Whether anything recorded can differ between the two sides.
    pub abrupt: bool,
}

/// A line of the event log.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Event {
    /// The instant, s.
    pub time: f64,
    /// The part.
    pub part: usize,
    /// The state it entered, as in [`Stretch::states`].
    pub state: u8,
    /// Charge through it in the impulse, C.
    pub charge: f64,
    /// Flux across it in the impulse, V s.
    pub flux: f64,
    /// Energy lost in it, J.
    pub loss: f64,
    /// Whether the instant was found (level, zero, diode) rather than stated.
    pub found: bool,
}

/// Where the joules went. Vectors are by part.
#[derive(Clone, Debug, Default)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Balance {
    /// Stored as stated, before anything is equalised, J.
    pub stored_start: f64,
    /// Stored just before the end, J.
    pub stored_end: f64,
    /// Energy out of each source, J; 0 for other parts.
    pub supplied: Vec<f64>,
    /// Heat in each part's resistances, J, without what jumps lose.
    pub dissipated: Vec<f64>,
    /// Lost at jumps, J.
    pub lost: f64,
}

/// Something noticed during a shot that its reader should know.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
#[non_exhaustive]
#[allow(missing_docs, reason = "named as the words of the message")]
pub enum Notice {
    /// An action whose instants had all gone when its turn came.
    ActionPassedOver { part: usize, time: f64 },
    /// A change to the state it is in already.
    AlreadySo { part: usize, time: f64 },
    /// A level that was already past when its watch began.
    AlreadyPast { part: usize, time: f64 },
    /// Stated voltages or currents contradicted each other and were equalised at 0 s.
    Equalised { loss: f64 },
    /// More than a millionth of the stored energy was lost at an event.
    LossAtEvent { part: usize, time: f64, loss: f64 },
    /// The split of a current between ideal connections in parallel is not determined; the least
    /// sum of squares is shown.
    Undetermined { parts: Vec<usize>, time: f64 },
    /// A part of the circuit that no path joins to ground.
    Island { nodes: Vec<String>, time: f64 },
}

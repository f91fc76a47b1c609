//! Readings out of shots with their bounds, claims to verdicts, cases.
//!
//! ```text
//! Circuit -> plan -> ladder of meshes -> readings -> bounds -> claims -> Fired, Judged
//! ```
//!
//! [`fire`] fires one case and reads it; [`judge`] does so for every case; [`modes()`] tells how
//! fast the topologies of a case move; [`methods()`] compares the integrators. All return values that hold all a report shows. This crate knows no text format and no equations: it reads
//! waveforms ([`waveform`]), measures ([`readings`]), compares meshes ([`bounds`]) and judges
//! ([`claims`]).

mod adjust;
pub mod balance;
pub mod bounds;
mod cases;
mod channels;
pub mod claims;
mod error;
mod events;
mod fire;
mod hazards;
mod ladder;
mod marks;
mod methods;
mod modes;
mod opinion;
mod options;
pub mod outcome;
mod plan;
pub mod readings;
mod remarks;
pub mod series;
pub mod spread;
mod stress;
pub mod waveform;
mod worst;

pub use cases::{corner, fire_cases, judge};
pub use error::StudyError;
pub use fire::fire;
pub use methods::{Compared, MethodErrors, MethodWork, Methods, RunError, Rungs, Work, methods};
pub use modes::{Modes, TopologyModes, modes};
pub use options::{Hook, Options, Progress};
pub use outcome::{Adjusted, Answer, ClaimResult, Fired, Found, Judged, Verdict, Worst};
pub use remarks::CODES;
pub use spread::spread;

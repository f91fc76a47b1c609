//! Fires a circuit: equations, topologies, events and restarts, time stepping.
//!
//! [`fire`] takes a [`Setup`] and what is to be recorded, and
//! returns a [`Shot`]. This crate knows no text, no readings, no claims: it is given instants
//! to land on and quantities to record.

mod book;
pub mod equations;
mod exact;
pub mod failure;
pub mod forms;
mod jump;
pub mod linear;
mod march;
mod meter;
pub mod modes;
pub mod network;
pub mod rates;
pub mod record;
pub mod restart;
mod rounding;
pub mod run;
pub mod schedule;
mod settle;
pub mod shot;
mod steady;
pub mod step;
mod survey;
pub mod topology;
mod watch;

pub use failure::Failure;
pub use modes::modes;
pub use record::{heat_ports, ports};
pub use shot::{Event, Jump, Mesh, Request, Shot, Stretch};
pub use survey::survey;

use pulsewright_circuit::Setup;

/// Fires one shot.
///
/// # Errors
///
/// [`Failure`] where the circuit has no answer, a limit is reached, or `request.hook` cancels.
pub fn fire(setup: &Setup, request: &Request<'_>) -> Result<Shot, Failure> {
    run::Run::new(setup, request)?.fire()
}

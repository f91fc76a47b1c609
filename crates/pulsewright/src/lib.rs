#![doc = include_str!("../README.md")]

mod error;
pub mod fault;
mod netlist;

pub use error::Error;
pub use netlist::{Netlist, Settings, sha256};

pub use pulsewright_circuit as circuit;
pub use pulsewright_engine as engine;
pub use pulsewright_netlist as language;
pub use pulsewright_report as report;
pub use pulsewright_study as study;

pub use pulsewright_circuit::{Circuit, Draft, LetValue};
pub use pulsewright_netlist::Mistakes;
pub use pulsewright_study::outcome::{Fired, Found, Judged, Verdict};
pub use pulsewright_study::{
    Methods, Modes, Options, Rungs, StudyError, corner, fire, fire_cases, judge, methods, modes,
    spread,
};

/// Reads a netlist into a circuit.
///
/// [`Netlist::read`] does the same and keeps the text, which records and messages refer to.
///
/// # Errors
///
/// Every mistake in the text, each with its place.
///
/// # Example
///
/// ```
/// let circuit = pulsewright::read(
///     "capacitor bank from top to ground = 32 uF, charged to 5 kV
///      resistor chest from top to ground = 50 ohm
///      span 10 ms",
/// )?;
/// assert_eq!(circuit.draft().parts.len(), 2);
/// # Ok::<(), pulsewright::Mistakes>(())
/// ```
pub fn read(text: &str) -> Result<Circuit, Mistakes> {
    pulsewright_netlist::read(text.as_bytes(), "netlist").map(|netlist| netlist.circuit)
}

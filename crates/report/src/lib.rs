//! What people and programs read of a result: records, tables, waveforms, plots.
//!
//! ```text
//! Fired, Judged, ──> record          JSON, one schema a kind and number
//! Modes, Methods ──> table           text that fits the terminal
//!                ──> plot            SVG, or characters
//!                ──> work_precision  SVG
//!                ──> waveform, cases CSV
//!                ──> page            one HTML file (feature `html`)
//! ```
//!
//! Only this crate knows what a record or a table looks like, and it computes nothing: every
//! number it prints was found earlier. It touches no files, no terminal and no clock; the same
//! input gives the same bytes.

pub mod cases;
pub mod look;
pub mod number;
#[cfg(feature = "html")]
pub mod page;
pub mod plot;
pub mod record;
pub mod table;
pub mod waveform;
pub mod work_precision;

pub use look::Look;
pub use record::Origin;

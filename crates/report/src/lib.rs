//! What people and programs read of a result: records, tables, waveforms.
//!
//! ```text
//! Fired, Judged ──> record    JSON, one schema a kind and number
//!               ──> table     text that fits the terminal
//!               ──> waveform, cases  CSV
//! ```
//!
//! Only this crate knows what a record or a table looks like, and it computes nothing: every
//! number it prints was found earlier. It touches no files, no terminal and no clock; the same
//! input gives the same bytes.

pub mod cases;
pub mod look;
pub mod number;
pub mod record;
pub mod table;
pub mod waveform;

pub use look::Look;
pub use record::Origin;

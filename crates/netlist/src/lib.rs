//! Reads the netlist language, and prints it in its canonical layout.
//!
//! ```text
//! bytes -> tokens -> statements and blocks -> draft -> (circuit's own checks) -> circuit
//!           lex           tree               grammar, lower       read
//! ```
//!
//! [`read`] is the whole of it: a [`Netlist`] with its circuit and remarks, or all
//! [`Mistakes`] at once, those of the text and those of the circuit. [`parse`] stops before
//! the circuit's checks, [`neaten`] prints a text anew, [`explain`] describes a word or a code.
//! The language itself is described in `LANGUAGE.md` beside this crate's sources.
//!
//! Reading is a pure function of the text: no file, no environment, no clock. Any bytes give a
//! circuit or mistakes; time and memory are linear in the text and in what it repeats.
//!
//! ```
//! let netlist = pulsewright_netlist::read(
//!     b"capacitor bank from top to ground = 32 uF, charged to 5 kV
//!       resistor chest from top to ground = 50 ohm
//!       span 10 ms
//!       reading dose = energy into chest",
//!     "stage.shot",
//! )?;
//! assert_eq!(netlist.circuit.draft().parts.len(), 2);
//! # Ok::<(), pulsewright_netlist::Mistakes>(())
//! ```

mod codes;
mod consequence;
mod document;
mod grammar;
mod lex;
mod lower;
mod manual;
mod mistake;
mod neaten;
mod read;
mod scope;
mod slip;
mod source;
mod token;
mod tree;
mod unit;
mod words;

pub use codes::CODES;
pub use manual::{LANGUAGE, explain, topics};
pub use mistake::{Drawn, Mistake, Mistakes};
pub use neaten::neaten;
pub use read::{Netlist, Parsed, parse, parse_value, read, read_set};
pub use source::Source;

pub(crate) use document::MOST_NESTING;

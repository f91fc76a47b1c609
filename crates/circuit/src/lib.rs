//! The data of a discharge circuit: parts, schedules, signals, readings, claims and cases.
//!
//! ```text
//! Draft  --check-->  Circuit  --setup(set)-->  Setup
//! names, expressions  the same,   numbers and indices for one set of let-values:
//! as written          checked     what the engine fires
//! ```
//!
//! A [`Draft`] is what a reader of text or a program writes: names and expressions, nothing
//! resolved. [`Draft::check`] finds every fault in it at once and hands over a [`Circuit`];
//! [`Circuit::setup`] puts numbers in for one case. This crate knows no text format, no
//! equations and no files.

mod adjust;
pub mod builder;
pub mod check;
pub mod circuit;
mod defaults;
pub mod dimension;
pub mod draft;
pub mod expr;
pub mod fault;
pub mod formula;
mod index;
mod lets;
pub mod near;
mod numbers;
pub mod parts;
pub mod phrase;
pub mod schedule;
pub mod setup;
mod slots;
pub mod span;
pub mod spread;
pub mod vary;
mod walk;
pub mod words;

pub use adjust::Adjusting;
pub use circuit::{Circuit, LetValue, Lets};
pub use dimension::Dimension;
pub use draft::Draft;
pub use expr::{Expr, ExprKind};
pub use fault::{CODES, Fault, FaultKind};
pub use formula::{Formula, Probe};
pub use phrase::Phrase;
pub use setup::Setup;
pub use span::{Name, Span};
pub use vary::{Positions, Stand, Varying};

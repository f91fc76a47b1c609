//! Signals along a shot, and what is read off them.
//!
//! A signal is a row of cubic pieces ([`Cubic`]), interrupted where it jumps. Nothing is ever
//! read off samples: extremes, crossings and integrals are those of the cubics, so that they
//! converge at the order of the stepping method.
//!
//! `cubic` holds one piece, `wave` a whole signal, `build` makes it of what was `record`ed,
//! `extremes`, `signs`, `sums` what is read off it, `product` the energy of a part.

mod build;
mod cubic;
mod extremes;
mod product;
mod record;
#[cfg(test)]
pub(crate) mod sample;
mod signs;
mod sums;
mod wave;

pub use cubic::Cubic;
pub use extremes::Extremum;
pub use product::{Sum, charge, energy};
pub use record::Record;
pub use signs::{Run, falls, rises};
pub use wave::{Track, Wave};

/// A stretch of time, s: the start belongs to it, the end does not. One that starts at 0 s also
/// holds the stated start and the equalising there.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// Start, s.
    pub start: f64,
    /// End, s.
    pub end: f64,
}

impl Interval {
    /// Its length, s.
    #[must_use]
    pub fn length(&self) -> f64 {
        self.end - self.start
    }

    /// Whether it also holds the stated start.
    #[must_use]
    pub fn holds_stated(&self) -> bool {
        self.start <= 0.0
    }

    /// Whether an instant lies in it.
    #[must_use]
    pub fn holds(&self, t: f64) -> bool {
        t >= self.start && t < self.end
    }
}

/// What is called zero: rounding of a signal whose largest absolute value is `largest`.
#[must_use]
pub fn noise(largest: f64) -> f64 {
    64.0 * f64::EPSILON * largest
}

//! Readings: numbers out of one shot.
//!
//! [`Reader`] holds a shot with the circuit that was fired and evaluates expressions of readings
//! over it. A phrase is measured by one function of its family:
//!
//! ```text
//! energy charge action area mean rms   integrals      rise fall front half  fronts
//! highest lowest largest steepest …    extremes       width                 widths
//! at, just before, final, time of      instants       undershoot … period   tails
//! first rises through, is above        crossings      heat, energy stored   heat, stored
//! ```
//!
//! with its window resolved by `window`, its edges by `edges`. What does not exist in the shot
//! goes through expressions as a [`Lack`]: the first one met wins.

mod crossings;
mod duration;
mod edges;
mod expression;
mod extremes;
mod fronts;
mod heat;
mod instants;
mod integrals;
mod needs;
mod number;
mod signal;
mod stored;
mod tails;
mod widths;
mod window;

pub use needs::{Needs, needs};
pub use number::{Lack, Number, Sample, absent};
pub use signal::Signal;
pub use window::Extent;

use std::cell::RefCell;
use std::collections::HashMap;
use std::rc::Rc;

use pulsewright_circuit::phrase::Measure;
use pulsewright_circuit::{Circuit, Dimension, Expr, Lets, Phrase, Setup};
use pulsewright_engine::Shot;

use crate::waveform::Record;

/// What was fired: the circuit, its numbers in this case, and its let-values.
#[derive(Clone, Copy)]
pub struct Case<'a> {
    /// The circuit as checked.
    pub circuit: &'a Circuit,
    /// With numbers in.
    pub setup: &'a Setup,
    /// The let-values of the case.
    pub lets: &'a Lets,
}

/// A shot to be read.
pub struct Reader<'a> {
    case: Case<'a>,
    record: Record<'a>,
    signals: RefCell<Vec<(Expr, Rc<Signal<'a>>)>>,
    named: RefCell<HashMap<String, Sample>>,
}

impl<'a> Reader<'a> {
    /// A reader of `shot`, which was fired from `case`.
    #[must_use]
    pub fn new(case: Case<'a>, shot: &'a Shot) -> Self {
        Reader {
            case,
            record: Record::new(shot),
            signals: RefCell::new(Vec::new()),
            named: RefCell::new(HashMap::new()),
        }
    }

    /// The shot.
    #[must_use]
    pub fn record(&self) -> &Record<'a> {
        &self.record
    }

    fn shot(&self) -> &'a Shot {
        self.record.shot
    }

    /// Measures a phrase.
    ///
    /// # Errors
    ///
    /// [`Lack`] where it does not exist in this shot, is without bound, or floats.
    pub fn measure(&self, phrase: &Phrase) -> Sample {
        let number = self.family(phrase)?;
        if number.value.is_finite() {
            return Ok(number);
        }
        absent(format!("{phrase} is no finite number"))
    }

    fn family(&self, phrase: &Phrase) -> Sample {
        use Measure as M;
        let w = phrase.window.as_ref();
        match &phrase.measure {
            M::EnergyInto(part) => self.energy_into(part, w),
            M::EnergyOutOf(part) => self.energy_into(part, w).map(Number::negative),
            M::Charge(part) => self.charge(part, w),
            M::GrossCharge(part) => self.gross_charge(part, w),
            M::Action(part) => self.action(part, w),
            M::Heat(part) => self.heat(part, w),
            M::Area(s) => self.area(s, w),
            M::Mean(s) => self.mean(s, w),
            M::Rms(s) => self.rms(s, w),
            M::Highest(s) => self.highest(s, w),
            M::Lowest(s) => self.lowest(s, w),
            M::Largest(s) => self.largest(s, w),
            M::PeakToPeak(s) => self.peak_to_peak(s, w),
            M::Steepest {
                signal,
                between_jumps,
            } => self.steepest(signal, *between_jumps, w),
            M::At { signal, time } => self.at(signal, time),
            M::JustBefore { signal, time } => self.just_before(signal, time),
            M::Final(s) => self.last(s, w),
            M::TimeOf { extreme, signal } => self.time_of(*extreme, signal, w),
            M::Crossing {
                signal,
                which,
                direction,
                level,
            } => self.crossing(signal, *which, *direction, level, w),
            M::TimeSpent {
                signal,
                above,
                level,
            } => self.time_spent(signal, *above, level, w),
            M::Rise { signal, from, to } => self.rise(signal, from, to, w),
            M::Fall { signal, from, to } => self.fall(signal, from, to, w),
            M::FrontTime { signal, from, to } => self.front_time(signal, from, to, w),
            M::VirtualOrigin { signal, from, to } => self.virtual_origin(signal, from, to, w),
            M::TimeToHalf { signal, from, to } => self.time_to_half(signal, from, to, w),
            M::Width { signal, fraction } => self.width(signal, fraction, w),
            M::Undershoot(s) => self.undershoot(s, w),
            M::Overshoot { signal, over } => self.overshoot(signal, over, w),
            M::Tilt(s) => self.tilt(s, w),
            M::Settling { signal, to } => self.settling(signal, to, w),
            M::Period(s) => self.period(s, w),
            M::StoredAt(time) => self.stored_at(time),
            M::StoredJustBefore(time) => self.stored_just_before(time),
            M::Duration => self.duration(w),
            _ => absent(format!("{phrase} is not measured by this version")),
        }
    }
}

/// A value with its unit, to six digits: `4.80002 kV`.
pub(crate) fn said(value: f64, dimension: Dimension) -> String {
    let rounded = format!("{value:.5e}").parse().unwrap_or(value);
    pulsewright_circuit::words::quantity(rounded, dimension)
}

/// An instant or a duration, to six digits: `1.00001 ms`.
pub(crate) fn said_time(t: f64) -> String {
    said(t, Dimension::SECOND)
}

#[cfg(test)]
mod tests;

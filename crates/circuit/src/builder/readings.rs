//! Readings: phrases with their windows, as the language writes them.

use super::named;
use crate::expr::Expr;
use crate::phrase::{
    Condition, Direction, Extreme, Level, Measure, Phrase, StateWord, Which, Window,
};
use crate::span::Span;

pub use super::parts::{after, at, at_zero_current, at_zero_current_after, when};

fn phrase(measure: Measure) -> Phrase {
    Phrase {
        measure,
        window: None,
        span: Span::NONE,
    }
}

impl Phrase {
    /// `… between T1 and T2`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let early = energy_into("chest").between(seconds(1e-3), opening_of("fire"));
    /// assert_eq!(early.to_string(), "energy into chest between 1 ms and opening of fire");
    /// ```
    #[must_use]
    pub fn between(self, from: impl Into<Expr>, to: impl Into<Expr>) -> Self {
        self.within(Window::Between(from.into(), to.into()))
    }

    /// `… after T`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(energy_into("chest").after(seconds(1e-3)).to_string(), "energy into chest after 1 ms");
    /// ```
    #[must_use]
    pub fn after(self, from: impl Into<Expr>) -> Self {
        self.within(Window::After(from.into()))
    }

    /// `… before T`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// assert_eq!(energy_into("chest").before(seconds(1e-3)).to_string(), "energy into chest before 1 ms");
    /// ```
    #[must_use]
    pub fn before(self, to: impl Into<Expr>) -> Self {
        self.within(Window::Before(to.into()))
    }

    /// `… while fire is closed and relay is at pad`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let both = duration().during([closed("ne"), closed("se")]);
    /// assert_eq!(both.to_string(), "duration while ne is closed and se is closed");
    /// ```
    #[must_use]
    pub fn during(self, conditions: impl Into<Vec<Condition>>) -> Self {
        self.within(Window::While(conditions.into()))
    }

    /// `… during phase 2 of SIGNAL`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let second = energy_into("chest").during_phase(2, voltage_across("chest"));
    /// assert_eq!(second.to_string(), "energy into chest during phase 2 of voltage across chest");
    /// ```
    #[must_use]
    pub fn during_phase(self, number: u32, signal: impl Into<Expr>) -> Self {
        self.within(Window::Phase {
            number,
            signal: signal.into(),
        })
    }

    fn within(mut self, window: Window) -> Self {
        self.window = Some(window);
        self
    }
}

/// `energy into PART`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(energy_into("chest").to_string(), "energy into chest");
/// ```
#[must_use]
pub fn energy_into(part: &str) -> Phrase {
    phrase(Measure::EnergyInto(named(part)))
}

/// `energy out of PART`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(energy_out_of("chest").to_string(), "energy out of chest");
/// ```
#[must_use]
pub fn energy_out_of(part: &str) -> Phrase {
    phrase(Measure::EnergyOutOf(named(part)))
}

/// `charge through PART`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(charge_through("chest").to_string(), "charge through chest");
/// ```
#[must_use]
pub fn charge_through(part: &str) -> Phrase {
    phrase(Measure::Charge(named(part)))
}

/// `gross charge through PART`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(gross_charge_through("chest").to_string(), "gross charge through chest");
/// ```
#[must_use]
pub fn gross_charge_through(part: &str) -> Phrase {
    phrase(Measure::GrossCharge(named(part)))
}

/// `action of PART`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(action_of("chest").to_string(), "action of chest");
/// ```
#[must_use]
pub fn action_of(part: &str) -> Phrase {
    phrase(Measure::Action(named(part)))
}

/// `heat in PART`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(heat_in("chest").to_string(), "heat in chest");
/// ```
#[must_use]
pub fn heat_in(part: &str) -> Phrase {
    phrase(Measure::Heat(named(part)))
}

/// `area of SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(area_of(name("v")).to_string(), "area of v");
/// ```
#[must_use]
pub fn area_of(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Area(signal.into()))
}

/// `highest SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(highest(name("v")).to_string(), "highest v");
/// ```
#[must_use]
pub fn highest(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Highest(signal.into()))
}

/// `lowest SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(lowest(name("v")).to_string(), "lowest v");
/// ```
#[must_use]
pub fn lowest(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Lowest(signal.into()))
}

/// `largest SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(largest(name("v")).to_string(), "largest v");
/// ```
#[must_use]
pub fn largest(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Largest(signal.into()))
}

/// `peak to peak SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(peak_to_peak(name("v")).to_string(), "peak to peak v");
/// ```
#[must_use]
pub fn peak_to_peak(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::PeakToPeak(signal.into()))
}

/// `mean SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(mean(name("v")).to_string(), "mean v");
/// ```
#[must_use]
pub fn mean(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Mean(signal.into()))
}

/// `rms SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(rms(name("v")).to_string(), "rms v");
/// ```
#[must_use]
pub fn rms(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Rms(signal.into()))
}

/// `final SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(final_value(name("v")).to_string(), "final v");
/// ```
#[must_use]
pub fn final_value(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Final(signal.into()))
}

/// `undershoot of SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(undershoot(name("v")).to_string(), "undershoot of v");
/// ```
#[must_use]
pub fn undershoot(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Undershoot(signal.into()))
}

/// `tilt of SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(tilt(name("v")).to_string(), "tilt of v");
/// ```
#[must_use]
pub fn tilt(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Tilt(signal.into()))
}

/// `period of SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(period(name("v")).to_string(), "period of v");
/// ```
#[must_use]
pub fn period(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Period(signal.into()))
}

/// `steepest SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(steepest(name("v")).to_string(), "steepest v");
/// ```
#[must_use]
pub fn steepest(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Steepest {
        signal: signal.into(),
        between_jumps: false,
    })
}

/// `steepest SIGNAL between jumps`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(steepest_between_jumps(name("v")).to_string(), "steepest v between jumps");
/// ```
#[must_use]
pub fn steepest_between_jumps(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::Steepest {
        signal: signal.into(),
        between_jumps: true,
    })
}

/// `SIGNAL at T`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(value_at(name("v"), seconds(1e-3)).to_string(), "v at 1 ms");
/// ```
#[must_use]
pub fn value_at(signal: impl Into<Expr>, time: impl Into<Expr>) -> Phrase {
    phrase(Measure::At {
        signal: signal.into(),
        time: time.into(),
    })
}

/// `SIGNAL just before T`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(value_just_before(name("v"), seconds(0.0)).to_string(), "v just before 0 s");
/// ```
#[must_use]
pub fn value_just_before(signal: impl Into<Expr>, time: impl Into<Expr>) -> Phrase {
    phrase(Measure::JustBefore {
        signal: signal.into(),
        time: time.into(),
    })
}

/// `time of highest SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(time_of_highest(name("v")).to_string(), "time of highest v");
/// ```
#[must_use]
pub fn time_of_highest(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::TimeOf {
        extreme: Extreme::Highest,
        signal: signal.into(),
    })
}

/// `time of lowest SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(time_of_lowest(name("v")).to_string(), "time of lowest v");
/// ```
#[must_use]
pub fn time_of_lowest(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::TimeOf {
        extreme: Extreme::Lowest,
        signal: signal.into(),
    })
}

/// `time of largest SIGNAL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(time_of_largest(name("v")).to_string(), "time of largest v");
/// ```
#[must_use]
pub fn time_of_largest(signal: impl Into<Expr>) -> Phrase {
    phrase(Measure::TimeOf {
        extreme: Extreme::Largest,
        signal: signal.into(),
    })
}

/// `time SIGNAL first rises through LEVEL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(first_rise_through(name("v"), level(volts(5.0))).to_string(), "time v first rises through 5 V");
/// ```
#[must_use]
pub fn first_rise_through(signal: impl Into<Expr>, level: Level) -> Phrase {
    phrase(Measure::Crossing {
        signal: signal.into(),
        which: Which::First,
        direction: Direction::Rises,
        level,
    })
}

/// `time SIGNAL first falls through LEVEL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(first_fall_through(name("v"), level(volts(5.0))).to_string(), "time v first falls through 5 V");
/// ```
#[must_use]
pub fn first_fall_through(signal: impl Into<Expr>, level: Level) -> Phrase {
    phrase(Measure::Crossing {
        signal: signal.into(),
        which: Which::First,
        direction: Direction::Falls,
        level,
    })
}

/// `time SIGNAL last rises through LEVEL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(last_rise_through(name("v"), level(volts(5.0))).to_string(), "time v last rises through 5 V");
/// ```
#[must_use]
pub fn last_rise_through(signal: impl Into<Expr>, level: Level) -> Phrase {
    phrase(Measure::Crossing {
        signal: signal.into(),
        which: Which::Last,
        direction: Direction::Rises,
        level,
    })
}

/// `time SIGNAL last falls through LEVEL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(last_fall_through(name("v"), level(volts(5.0))).to_string(), "time v last falls through 5 V");
/// ```
#[must_use]
pub fn last_fall_through(signal: impl Into<Expr>, level: Level) -> Phrase {
    phrase(Measure::Crossing {
        signal: signal.into(),
        which: Which::Last,
        direction: Direction::Falls,
        level,
    })
}

/// `time SIGNAL is above LEVEL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(time_above(name("v"), of_largest(percent(50.0))).to_string(), "time v is above 50 % of largest");
/// ```
#[must_use]
pub fn time_above(signal: impl Into<Expr>, level: Level) -> Phrase {
    phrase(Measure::TimeSpent {
        signal: signal.into(),
        above: true,
        level,
    })
}

/// `time SIGNAL is below LEVEL`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(time_below(name("v"), level(volts(5.0))).to_string(), "time v is below 5 V");
/// ```
#[must_use]
pub fn time_below(signal: impl Into<Expr>, level: Level) -> Phrase {
    phrase(Measure::TimeSpent {
        signal: signal.into(),
        above: false,
        level,
    })
}

/// `rise of SIGNAL from A % to B %`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(rise(name("v"), percent(10.0), percent(90.0)).to_string(), "rise of v from 10 % to 90 %");
/// ```
#[must_use]
pub fn rise(signal: impl Into<Expr>, from: impl Into<Expr>, to: impl Into<Expr>) -> Phrase {
    phrase(Measure::Rise {
        signal: signal.into(),
        from: from.into(),
        to: to.into(),
    })
}

/// `fall of SIGNAL from A % to B %`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(fall(name("v"), percent(10.0), percent(90.0)).to_string(), "fall of v from 10 % to 90 %");
/// ```
#[must_use]
pub fn fall(signal: impl Into<Expr>, from: impl Into<Expr>, to: impl Into<Expr>) -> Phrase {
    phrase(Measure::Fall {
        signal: signal.into(),
        from: from.into(),
        to: to.into(),
    })
}

/// `front time of SIGNAL from A % to B %`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(front_time(name("v"), percent(10.0), percent(90.0)).to_string(), "front time of v from 10 % to 90 %");
/// ```
#[must_use]
pub fn front_time(signal: impl Into<Expr>, from: impl Into<Expr>, to: impl Into<Expr>) -> Phrase {
    phrase(Measure::FrontTime {
        signal: signal.into(),
        from: from.into(),
        to: to.into(),
    })
}

/// `virtual origin of SIGNAL from A % to B %`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(virtual_origin(name("v"), percent(10.0), percent(90.0)).to_string(), "virtual origin of v from 10 % to 90 %");
/// ```
#[must_use]
pub fn virtual_origin(
    signal: impl Into<Expr>,
    from: impl Into<Expr>,
    to: impl Into<Expr>,
) -> Phrase {
    phrase(Measure::VirtualOrigin {
        signal: signal.into(),
        from: from.into(),
        to: to.into(),
    })
}

/// `time to half value of SIGNAL with front from A % to B %`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(time_to_half(name("v"), percent(10.0), percent(90.0)).to_string(), "time to half value of v with front from 10 % to 90 %");
/// ```
#[must_use]
pub fn time_to_half(signal: impl Into<Expr>, from: impl Into<Expr>, to: impl Into<Expr>) -> Phrase {
    phrase(Measure::TimeToHalf {
        signal: signal.into(),
        from: from.into(),
        to: to.into(),
    })
}

/// `width of SIGNAL at P %`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(width(name("v"), percent(50.0)).to_string(), "width of v at 50 %");
/// ```
#[must_use]
pub fn width(signal: impl Into<Expr>, fraction: impl Into<Expr>) -> Phrase {
    phrase(Measure::Width {
        signal: signal.into(),
        fraction: fraction.into(),
    })
}

/// `overshoot of SIGNAL over VALUE`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(overshoot(name("v"), volts(10.0)).to_string(), "overshoot of v over 10 V");
/// ```
#[must_use]
pub fn overshoot(signal: impl Into<Expr>, over: impl Into<Expr>) -> Phrase {
    phrase(Measure::Overshoot {
        signal: signal.into(),
        over: over.into(),
    })
}

/// `settling time of SIGNAL to VALUE`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(settling_time(name("v"), volts(60.0)).to_string(), "settling time of v to 60 V");
/// ```
#[must_use]
pub fn settling_time(signal: impl Into<Expr>, to: impl Into<Expr>) -> Phrase {
    phrase(Measure::Settling {
        signal: signal.into(),
        to: to.into(),
    })
}

/// `energy stored at T`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(energy_stored_at(seconds(1e-3)).to_string(), "energy stored at 1 ms");
/// ```
#[must_use]
pub fn energy_stored_at(time: impl Into<Expr>) -> Phrase {
    phrase(Measure::StoredAt(time.into()))
}

/// `energy stored just before T`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(energy_stored_just_before(seconds(1e-3)).to_string(), "energy stored just before 1 ms");
/// ```
#[must_use]
pub fn energy_stored_just_before(time: impl Into<Expr>) -> Phrase {
    phrase(Measure::StoredJustBefore(time.into()))
}

/// `duration WINDOW`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(duration().after(seconds(1e-3)).to_string(), "duration after 1 ms");
/// ```
#[must_use]
pub fn duration() -> Phrase {
    phrase(Measure::Duration)
}

/// A level that is a value.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(level(volts(5.0)).to_string(), "5 V");
/// ```
#[must_use]
pub fn level(value: impl Into<Expr>) -> Level {
    Level::Value(value.into())
}

/// A level that is a share of the largest value: `50 % of largest`.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(of_largest(percent(50.0)).to_string(), "50 % of largest");
/// ```
#[must_use]
pub fn of_largest(share: impl Into<Expr>) -> Level {
    Level::OfLargest(share.into())
}

/// `SWITCH is closed`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(closed("fire").to_string(), "fire is closed");
/// ```
#[must_use]
pub fn closed(switch: &str) -> Condition {
    Condition {
        part: named(switch),
        state: StateWord::Closed,
    }
}

/// `SWITCH is open`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(open("fire").to_string(), "fire is open");
/// ```
#[must_use]
pub fn open(switch: &str) -> Condition {
    Condition {
        part: named(switch),
        state: StateWord::Open,
    }
}

/// `CHANGEOVER is at NODE`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(resting_at("relay", "pad").to_string(), "relay is at pad");
/// ```
#[must_use]
pub fn resting_at(changeover: &str, node: &str) -> Condition {
    Condition {
        part: named(changeover),
        state: StateWord::At(named(node)),
    }
}

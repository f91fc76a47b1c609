//! What the tests that cross the crates share.
//!
//! | module | holds |
//! |---|---|
//! | here | netlists as text to shots, answers and verdicts |
//! | [`closed`] | closed forms of two-state circuits |
//! | [`exact`] | linear equations in 128 bits, the reference for circuits without a closed form |
//! | [`random`] | the same random numbers on every machine |
//!
//! Everything goes through the few functions here, so that an interface may change in one place.

pub mod closed;
pub mod exact;
pub mod random;

use pulsewright_circuit::Lets;
use pulsewright_circuit::setup::Setup;
use pulsewright_engine::{Mesh, Request, Shot};
use pulsewright_netlist::Netlist;
use pulsewright_study::readings::{Case, Reader, needs};
use pulsewright_study::{Fired, Found, Judged, Options};

/// Reads a netlist.
///
/// # Panics
///
/// Where it has mistakes: with all of them.
#[must_use]
pub fn read(text: &str) -> Netlist {
    pulsewright_netlist::read(text.as_bytes(), "netlist")
        .unwrap_or_else(|mistakes| panic!("{mistakes}\n{text}"))
}

/// Fires a netlist at its nominal let-values, with bounds.
///
/// # Panics
///
/// Where it has mistakes or cannot be fired.
#[must_use]
pub fn fire(text: &str) -> Fired {
    let fired = pulsewright_study::fire(&read(text).circuit, &Options::default());
    fired.unwrap_or_else(|why| panic!("{why}\n{text}"))
}

/// Judges every case of a netlist.
///
/// # Panics
///
/// Where it has mistakes or cannot be fired.
#[must_use]
pub fn judge(text: &str) -> Judged {
    let judged = pulsewright_study::judge(&read(text).circuit, &Options::default());
    judged.unwrap_or_else(|why| panic!("{why}\n{text}"))
}

/// A value with the bound stated on its error.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bounded {
    /// The value, in coherent SI units.
    pub value: f64,
    /// The bound.
    pub bound: f64,
}

/// A named reading of a shot.
///
/// # Panics
///
/// Where there is none of that name, or it has no value.
#[must_use]
pub fn reading(fired: &Fired, name: &str) -> Bounded {
    let result = fired.readings.iter().find(|r| r.name == name);
    let result = result.unwrap_or_else(|| panic!("no reading `{name}`"));
    match &result.answer.found {
        Found::Value { value, bound } => Bounded {
            value: *value,
            bound: *bound,
        },
        other => panic!("`{name}` has no value: {other:?}"),
    }
}

/// A netlist with its numbers in, for shots on meshes of the caller's choice.
#[derive(Debug)]
pub struct Stage {
    netlist: Netlist,
    lets: Lets,
    setup: Setup,
}

impl Stage {
    /// Reads a netlist and puts its nominal let-values in.
    ///
    /// # Panics
    ///
    /// Where it has mistakes.
    #[must_use]
    pub fn new(text: &str) -> Self {
        let netlist = read(text);
        let lets = netlist
            .circuit
            .lets(&[])
            .unwrap_or_else(|faults| panic!("{faults:?}"));
        let setup = netlist
            .circuit
            .setup(&lets)
            .unwrap_or_else(|faults| panic!("{faults:?}"));
        Stage {
            netlist,
            lets,
            setup,
        }
    }

    fn case(&self) -> Case<'_> {
        Case {
            circuit: &self.netlist.circuit,
            setup: &self.setup,
            lets: &self.lets,
        }
    }

    /// Fires one shot that records what the named readings need.
    ///
    /// # Panics
    ///
    /// Where it cannot be fired.
    #[must_use]
    pub fn shot(&self, mesh: Mesh<'_>) -> Shot {
        let readings = &self.netlist.circuit.draft().readings;
        let needed = needs(self.case(), readings.iter().map(|r| &r.value));
        let mut request = Request::new(needed.probes, mesh);
        request.landings = needed.landings;
        pulsewright_engine::fire(&self.setup, &request).unwrap_or_else(|why| panic!("{why}"))
    }

    /// A named reading of one shot, without a bound.
    ///
    /// # Panics
    ///
    /// Where there is none of that name, or it has no value in this shot.
    #[must_use]
    pub fn number(&self, shot: &Shot, name: &str) -> f64 {
        let named = self
            .netlist
            .circuit
            .find_reading(name)
            .unwrap_or_else(|| panic!("no reading `{name}`"));
        match Reader::new(self.case(), shot).value(&named.value) {
            Ok(number) => number.value,
            Err(lack) => panic!("`{name}` has no value: {lack:?}"),
        }
    }
}

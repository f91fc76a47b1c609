//! A firmware's timing code run against the circuit on the host: it measures, decides, and its
//! decision is fired and judged, load by load.
//!
//! The unit delivers 150 J out of a bank of 200 J and cuts the pulse off when that is done. It
//! measures the bank 200 µs after firing, knows from the fall how fast the bank empties into this
//! patient, and sets a timer. Two releases of its code are tested; one keeps the timer's ticks in 16
//! bits, which no test on the bench with a 50 Ω load would ever show.
#![allow(clippy::print_stdout, reason = "an example shows what it found")]

use pulsewright::circuit::Dimension;
use pulsewright::study::outcome::Verdict;
use pulsewright::{Found, LetValue, Netlist, Options, Settings};

const STAGE: &str = r#"
title "Field unit, truncated pulse"
let load  = 50 ohm
let pulse = 20 ms

capacitor bank  from top to ground = 100 uF, charged to 2 kV
switch    fire  from top to pad    : open, closes at 1 ms, opens at 1 ms + pulse
resistor  chest from pad to ground = load

span 30 ms
reading ready  = voltage across bank just before 1 ms
reading early  = voltage across bank at 1.2 ms
claim dose: energy into chest is within 2 % of 150 J
"#;

/// The loads that the unit has to work into, ohm.
const LOADS: [f64; 7] = [25.0, 50.0, 75.0, 100.0, 125.0, 150.0, 175.0];

/// The code under test, as it would stand in the firmware: two voltages in, timer ticks out.
mod timing {
    /// Ticks a second of the timer.
    pub const TICKS: f64 = 1e7;
    const PROBE_S: f64 = 200e-6;
    const SHARE: f64 = 150.0 / 200.0;

    /// How long the pulse has to last, in ticks.
    pub fn ticks(before: f64, early: f64) -> u32 {
        let tau = PROBE_S / (before / early).ln();
        (-0.5 * tau * (1.0 - SHARE).ln() * TICKS) as u32
    }

    /// The release before it: the same, in the width of the timer's old register.
    pub fn ticks_in_16_bits(before: f64, early: f64) -> u16 {
        ticks(before, early) as u16
    }
}

/// Fires what each release decides for each load, and shows which loads it fails.
///
/// # Errors
///
/// Mistakes in the netlist, what keeps a shot from being fired, a release that is not as expected.
pub fn main() -> Result<(), Box<dyn std::error::Error>> {
    let netlist = Netlist::read(STAGE)?;
    let fixed = failing(&netlist, |before, early| {
        timing::ticks(before, early).into()
    })?;
    let old = failing(&netlist, |before, early| {
        timing::ticks_in_16_bits(before, early).into()
    })?;
    println!("loads on which this release fails: {fixed:?}");
    println!("loads on which the one before fails: {old:?}");
    if !fixed.is_empty() {
        return Err("the release under test fails".into());
    }
    // 65,536 ticks are 6.55 ms, which loads from 94.6 ohm on need: 0.693 R C.
    if old != [100.0, 125.0, 150.0, 175.0] {
        return Err("the known fault was not found".into());
    }
    Ok(())
}

/// The loads on which a claim does not hold, ohm.
fn failing(
    netlist: &Netlist,
    decide: impl Fn(f64, f64) -> f64,
) -> Result<Vec<f64>, Box<dyn std::error::Error>> {
    let mut failing = Vec::new();
    for load in LOADS {
        let held = vec![number("load", load, Dimension::OHM)];
        let measured = fire(netlist, held.clone())?;
        let [before, early] = [0, 1].map(|k| match measured.readings.get(k) {
            Some(reading) => match reading.answer.found {
                Found::Value { value, .. } => value,
                _ => f64::NAN,
            },
            None => f64::NAN,
        });
        let seconds = decide(before, early) / timing::TICKS;
        let mut held = held;
        held.push(number("pulse", seconds, Dimension::SECOND));
        let shot = fire(netlist, held)?;
        if shot.claims.iter().any(|c| c.verdict != Verdict::Holds) {
            failing.push(load);
        }
    }
    Ok(failing)
}

fn fire(netlist: &Netlist, held: Settings) -> Result<pulsewright::Fired, pulsewright::Error> {
    netlist.fire(&Options {
        held,
        ..Options::default()
    })
}

fn number(name: &str, value: f64, dimension: Dimension) -> (String, LetValue) {
    (name.to_owned(), LetValue::Number { value, dimension })
}

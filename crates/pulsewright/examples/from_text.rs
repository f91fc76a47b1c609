//! Reads a netlist from text, fires it and judges its claims.
#![allow(clippy::print_stdout, reason = "an example shows what it found")]

use pulsewright::report::number::with_bound;
use pulsewright::{Found, Netlist, Options};

const STAGE: &str = r#"
title "Field unit, damped-sine output stage"

capacitor bank  from top to ground = 32 uF, charged to 4.8 kV
switch    fire  from top to mid    : open, closes at 1 us
inductor  choke from mid to pad    = 25 mH, winding 10 ohm
resistor  chest from pad to ground = 50 ohm

span 30 ms

reading yield = energy into chest / energy held by bank just before 0 s

claim dose:  energy into chest is within 15 % or 3 J of 300 J
claim crest: largest current through chest is at most 90 A
"#;

/// Fires the stage and shows what it answers.
///
/// # Errors
///
/// Mistakes in the netlist, and what keeps a shot from being fired.
pub fn main() -> Result<(), Box<dyn std::error::Error>> {
    let netlist = Netlist::read(STAGE)?;
    let fired = netlist.fire(&Options::default())?;

    for reading in &fired.readings {
        if let Found::Value { value, bound } = reading.answer.found {
            println!(
                "{} is {}",
                reading.name,
                with_bound(value, bound, &reading.answer.unit)
            );
        }
    }
    for claim in &fired.claims {
        println!(
            "{} {}: {}",
            claim.text,
            claim.relation,
            claim.verdict.words()
        );
    }
    Ok(())
}

//! Progress and cancelling: a hook is told how far a run is, from whichever thread runs it, and stops
//! it by saying no.
#![allow(clippy::print_stdout, reason = "an example shows what it found")]

use pulsewright::study::Progress;
use pulsewright::{Error, Netlist, Options};
use std::sync::atomic::{AtomicUsize, Ordering};

const STAGE: &str = r#"
let load = 50 ohm
capacitor bank  from top to ground = 32 uF, charged to 5 kV
switch    fire  from top to mid    : open, closes at 1 us
inductor  choke from mid to pad    = 25 mH, winding 10 ohm
resistor  chest from pad to ground = load
span 30 ms
cases load = 25 ohm to 175 ohm, 7 values
claim dose: energy into chest is at least 200 J
"#;

/// Judges all cases while it counts, then again and stops half way.
///
/// # Errors
///
/// Mistakes in the netlist, and what keeps a shot from being fired.
pub fn main() -> Result<(), Box<dyn std::error::Error>> {
    let netlist = Netlist::read(STAGE)?;
    let told = AtomicUsize::new(0);
    let count = |_: Progress| {
        told.fetch_add(1, Ordering::Relaxed);
        true
    };
    netlist.judge(&Options {
        hook: Some(&count),
        ..Options::default()
    })?;
    println!("told {} times how far it was", told.load(Ordering::Relaxed));

    let half = |far: Progress| far.case < 4;
    let stopped = netlist.judge(&Options {
        hook: Some(&half),
        ..Options::default()
    });
    match stopped {
        Err(Error::Stopped { time }) => println!("stopped at {time} s of a shot"),
        other => return Err(format!("it was to be stopped: {other:?}").into()),
    }
    Ok(())
}

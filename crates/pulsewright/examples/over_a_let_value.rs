//! A study of one's own: the dose over the load, with the numerical bound of each.
#![allow(clippy::print_stdout, reason = "an example shows what it found")]

use pulsewright::circuit::Dimension;
use pulsewright::report::number::{quantity, with_bound};
use pulsewright::{Found, LetValue, Netlist, Options};

const STAGE: &str = r#"
let load = 50 ohm

capacitor bank  from top to ground = 32 uF, charged to 4.8 kV
switch    fire  from top to mid    : open, closes at 1 us
inductor  choke from mid to pad    = 25 mH, winding 10 ohm
resistor  chest from pad to ground = load

span 30 ms
reading dose = energy into chest
"#;

/// Fires the stage once for each load.
///
/// # Errors
///
/// Mistakes in the netlist, and what keeps a shot from being fired.
pub fn main() -> Result<(), Box<dyn std::error::Error>> {
    let netlist = Netlist::read(STAGE)?;
    for value in [25.0, 50.0, 75.0, 100.0, 125.0, 150.0, 175.0] {
        let load = LetValue::Number {
            value,
            dimension: Dimension::OHM,
        };
        let options = Options {
            held: vec![("load".to_owned(), load)],
            ..Options::default()
        };
        let fired = netlist.fire(&options)?;
        for reading in &fired.readings {
            if let Found::Value {
                value: joules,
                bound,
            } = reading.answer.found
            {
                println!(
                    "{:>6}: {}",
                    quantity(value, "ohm"),
                    with_bound(joules, bound, "J")
                );
            }
        }
    }
    Ok(())
}

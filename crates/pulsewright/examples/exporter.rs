//! An exporter of one's own: the channels of a shot in a form that some other program wants, here a
//! header line with a name and a unit for each column and then even samples, separated by tabs.
#![allow(clippy::print_stdout, reason = "an example shows what it found")]

use pulsewright::report::plot::value_at;
use pulsewright::{Fired, Netlist, Options};

const STAGE: &str = r#"
capacitor bank  from top to ground = 32 uF, charged to 5 kV
switch    fire  from top to pad    : open, closes at 1 ms
resistor  chest from pad to ground = 50 ohm
span 10 ms
channels voltage across chest, current through chest
"#;

/// Fires a shot and exports it.
///
/// # Errors
///
/// Mistakes in the netlist, and what keeps a shot from being fired.
pub fn main() -> Result<(), Box<dyn std::error::Error>> {
    let fired = Netlist::read(STAGE)?.fire(&Options::default())?;
    let text = exported(&fired, 10);
    print!("{text}");
    // 2 ms: 1 ms after closing, 5 kV e^(-1 ms / 1.6 ms) across the chest.
    let row = text.lines().nth(3).unwrap_or_default();
    assert!(row.starts_with("2.000e-3\t2.676e3\t5.353e1"), "{row}");
    Ok(())
}

/// The channels at `steps + 1` even instants, seconds first; an event is read after it.
fn exported(fired: &Fired, steps: u32) -> String {
    let mut text = String::from("time/s");
    for channel in &fired.channels {
        text.push_str(&format!("\t{}/{}", channel.text, channel.unit));
    }
    text.push('\n');
    for k in 0..=steps {
        let time = fired.span * f64::from(k) / f64::from(steps);
        text.push_str(&format!("{time:.3e}"));
        for channel in &fired.channels {
            match value_at(channel, time) {
                Some(value) => text.push_str(&format!("\t{value:.3e}")),
                None => text.push('\t'),
            }
        }
        text.push('\n');
    }
    text
}

//! A design loop: which choke and which bank meet the claims with the least energy stored?
//!
//! Every pair out of two short lists is judged over all loads; of those on which every claim holds,
//! the one whose bank holds least is taken.
#![allow(clippy::print_stdout, reason = "an example shows what it found")]

use pulsewright::circuit::Dimension;
use pulsewright::report::number::quantity;
use pulsewright::{LetValue, Netlist, Options, Verdict};

const STAGE: &str = r#"
title "Field unit, to be dimensioned"
let load = 50 ohm
let c    = 32 uF
let l    = 28 mH

capacitor bank  from top to ground = c, charged to 4.4 kV
switch    fire  from top to mid    : open, closes at 1 us
inductor  choke from mid to pad    = l, winding 9 ohm
resistor  chest from pad to ground = load

span 50 ms
cases load = 25 ohm, 50 ohm, 100 ohm
claim dose:  energy into chest is at least 250 J
claim crest: largest current through chest is at most 80 A
"#;

/// Picks a choke and a bank.
///
/// # Errors
///
/// Mistakes in the netlist, what keeps a shot from being fired, no pair that will do.
pub fn main() -> Result<(), Box<dyn std::error::Error>> {
    let netlist = Netlist::read(STAGE)?;
    let mut best: Option<(f64, f64, f64)> = None;
    for farads in [32e-6, 36e-6, 40e-6] {
        for henries in [22e-3, 28e-3, 34e-3] {
            let judged = netlist.judge(&Options {
                held: vec![
                    number("c", farads, Dimension::FARAD),
                    number("l", henries, Dimension::HENRY),
                ],
                ..Options::default()
            })?;
            let verdicts: Vec<&str> = judged.claims.iter().map(|c| c.verdict.words()).collect();
            println!(
                "{:>6} {:>6}: {}",
                quantity(farads, "F"),
                quantity(henries, "H"),
                verdicts.join(", ")
            );
            let all = judged.claims.iter().all(|c| c.verdict == Verdict::Holds);
            let Some(stored) = judged.cases.first().map(|c| c.balance.stored_start) else {
                continue;
            };
            if all && best.is_none_or(|b| stored < b.0) {
                best = Some((stored, farads, henries));
            }
        }
    }
    let (stored, farads, henries) = best.ok_or("no pair meets the claims")?;
    println!(
        "taken: {} and {}, with {} stored",
        quantity(farads, "F"),
        quantity(henries, "H"),
        quantity(stored, "J")
    );
    Ok(())
}

fn number(name: &str, value: f64, dimension: Dimension) -> (String, LetValue) {
    (name.to_owned(), LetValue::Number { value, dimension })
}

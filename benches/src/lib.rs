//! What the benches share: netlists of a size asked for.
//!
//! Each bench answers the question in its header; a time is stated with the circuit, its size,
//! the method and the number of steps behind it.

use std::fmt::Write;

use pulsewright_circuit::setup::Setup;

/// A line of `sections` coils and capacitors, fired into its matched load.
///
/// ```text
/// bank ─/─ l[1] ─┬─ l[2] ─┬─ … ─┬─ load       10 uH and 100 nF a section: 10 ohm, 1 us
///               c[1]     c[2]  c[n]
/// ```
#[must_use]
pub fn ladder(sections: u32) -> String {
    format!(
        "capacitor bank from top to ground = 10 uF, charged to 1 kV
         switch fire from top to n[0] : open, closes at 1 us
         repeat k from 1 to {sections}
           inductor l[k] from n[k-1] to n[k] = 10 uH, winding 10 mohm
           capacitor c[k] from n[k] to ground = 100 nF
         end
         resistor load from n[{sections}] to ground = 10 ohm
         span 100 us
         limit steps 1_000_000_000\n"
    )
}

/// A damped-sine stage with the readings that a designer looks at.
pub const STAGE: &str = "let load = 50 ohm
    capacitor bank from top to ground = 36 uF, charged to 4.4 kV
    switch fire from top to mid : open, closes at 1 us
    inductor choke from mid to pad = 28 mH, winding 9 ohm
    resistor chest from pad to ground = load
    span 50 ms
    cases load = 25 ohm, 50 ohm, 75 ohm, 100 ohm, 125 ohm, 150 ohm, 175 ohm
    claim dose: energy into chest is within 15 % or 3 J of 300 J
    claim crest: largest current through chest is at most 85 A
    claim brief: width of voltage across chest at 10 % is at most 18 ms\n";

/// A chain of `parts` resistors and capacitors, each on a line of its own.
#[must_use]
pub fn long_file(parts: u32) -> String {
    let mut text = String::from("capacitor bank from n0 to ground = 32 uF, charged to 5 kV\n");
    for k in 0..parts / 2 {
        let _ = writeln!(
            text,
            "resistor  r{k} from n{k} to n{} = {}.5 ohm",
            k + 1,
            1 + k % 97
        );
        let _ = writeln!(
            text,
            "capacitor c{k} from n{} to ground = {} nF",
            k + 1,
            1 + k % 89
        );
    }
    text + "span 1 ms\n"
}

/// A netlist with its nominal numbers in.
///
/// # Panics
///
/// Where it has mistakes.
#[must_use]
pub fn setup(text: &str) -> Setup {
    let netlist =
        pulsewright_netlist::read(text.as_bytes(), "bench").unwrap_or_else(|m| panic!("{m}"));
    let lets = netlist
        .circuit
        .lets(&[])
        .unwrap_or_else(|f| panic!("{f:?}"));
    netlist
        .circuit
        .setup(&lets)
        .unwrap_or_else(|f| panic!("{f:?}"))
}

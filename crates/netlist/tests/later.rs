//! Words that are known and not there yet say so, at their place.
#![allow(clippy::unwrap_used, reason = "a test may end by panic")]

#[test]
fn exact_propagation_comes_later() {
    let text = "resistor r from a to ground = 1 ohm\nspan 1 ms\nintegrate by exact propagation\n";
    let mistakes = pulsewright_netlist::read(text.as_bytes(), "netlist").unwrap_err();
    let list = mistakes.list();
    let first = list.iter().find(|m| !m.is_remark).unwrap();
    assert_eq!((first.line, first.column, first.code), (3, 14, "P0305"));
    assert!(first.message.contains("later version"), "{}", first.message);
}

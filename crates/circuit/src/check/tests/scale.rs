//! Large drafts: time grows with their size, and stacks do not.

use std::time::{Duration, Instant};

use super::*;

/// A ladder of `n` sections, 2 n + 2 parts.
fn ladder(n: usize) -> Builder {
    let mut builder =
        Builder::new("")
            .let_value("l", henrys(1e-6))
            .voltage("feed", "n0", "ground", volts(1.0));
    for i in 0..n {
        let (from, to) = (format!("n{i}"), format!("n{}", i + 1));
        builder = builder.inductor(&format!("l{i}"), &from, &to, name("l"));
        builder = builder.capacitor(&format!("c{i}"), &to, "ground", farads(1e-9));
    }
    builder
        .resistor("end", &format!("n{n}"), "ground", ohms(1.0))
        .span(seconds(1e-3))
}

/// A hundred times what it takes on a free machine; a quadratic check would take minutes.
#[test]
fn a_hundred_thousand_parts_are_checked_at_once() {
    let builder = ladder(50_000);
    let start = Instant::now();
    let circuit = sound(builder);
    let setup = circuit.setup(&circuit.lets(&[]).unwrap()).unwrap();
    assert!(
        start.elapsed() < Duration::from_secs(30),
        "took {:?}",
        start.elapsed()
    );
    assert_eq!((setup.parts.len(), setup.nodes.len()), (100_002, 50_002));
}

#[test]
fn a_hundred_thousand_unknown_names_are_reported_at_once() {
    let mut builder = ladder(50_000);
    for i in 0..20_000 {
        builder = builder.reading(&format!("e{i}"), energy_into(&format!("x{i}")));
    }
    let start = Instant::now();
    assert_eq!(faults(builder).len(), 20_000);
    assert!(
        start.elapsed() < Duration::from_secs(30),
        "took {:?}",
        start.elapsed()
    );
}

#[test]
fn a_long_chain_of_let_values_is_evaluated() {
    let mut builder = stage().let_value("a0", 1.0);
    for i in 0..50_000 {
        builder = builder.let_value(&format!("a{}", i + 1), name(&format!("a{i}")) + 1.0);
    }
    let circuit = sound(builder);
    let lets = circuit.lets(&[]).unwrap();
    assert_eq!(circuit.value(&lets, &name("a50000")), Ok(50_001.0));
}

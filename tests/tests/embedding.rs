//! The example of README.md for other programs: it stands here word for word, and runs.

#[test]
fn the_example_runs() -> Result<(), pulsewright::Error> {
    // from here
    let netlist = pulsewright::Netlist::read(
        "capacitor bank from top to ground = 32 uF, charged to 5 kV
     resistor chest from top to ground = 50 ohm
     span 10 ms
     claim dose: energy into chest is at least 350 J",
    )?;
    let judged = netlist.judge(&pulsewright::Options::default())?;
    assert_eq!(judged.claims[0].verdict, pulsewright::Verdict::Holds);
    // to here
    Ok(())
}

#[test]
fn the_example_is_the_one_in_readme() {
    let lines = |text: &str| {
        text.lines()
            .map(|l| l.trim().to_owned())
            .filter(|l| !l.is_empty())
            .collect::<Vec<_>>()
    };
    let between = |text: &'static str, start: &str, end: &str| {
        text.split_once(start)
            .and_then(|(_, rest)| rest.split_once(end))
            .map(|(inside, _)| inside)
            .unwrap()
    };
    let here = between(
        include_str!("embedding.rs"),
        "// from here\n",
        "// to here\n",
    );
    let there = between(include_str!("../../README.md"), "```rust\n", "```\n");
    assert_eq!(lines(here), lines(there));
}

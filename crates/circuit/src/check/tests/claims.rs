//! Claims and the run.

use super::*;
use crate::draft::{Limit, Relation};
use crate::expr::Expr;

fn claim(reading: impl Into<Expr>, relation: Relation) -> Builder {
    stage().claim("c", reading, relation)
}

fn dose(relation: Relation) -> Builder {
    claim(energy_into("chest"), relation)
}

fn droop(relation: Relation) -> Builder {
    claim(tilt(voltage_at("pad")), relation)
}

#[test]
fn a_limit_has_the_unit_of_its_reading() {
    check(
        dose(at_most(volts(1.0))),
        "P0150",
        "a limit of `c` needs an energy, and 1 V is a voltage",
    );
    sound(dose(at_most(name("rated"))).let_value("rated", joules(1.0)));
    sound(dose(at_most(0.5 * name("all"))).reading("all", energy_out_of("bank")));
}

#[test]
fn the_share_of_shots_is_a_share_up_to_all() {
    let asked = |share: Expr| dose(at_most(joules(1.0))).in_at_least(share);
    sound(asked(percent(99.7)));
    check(
        asked(Expr::from(0.997)),
        "P0152",
        "the share of shots of `c` needs a share, and 0.997 is written without `%` or `ppm`",
    );
    assert_eq!(
        faults(asked(percent(101.0)))[0].to_string(),
        "P0158: the share of shots of `c` needs a share between 0 % and 100 %, and it is 101 %"
    );
}

#[test]
fn p0550_a_span_is_needed() {
    let builder = Builder::new("")
        .resistor("r", "a", "ground", ohms(1.0))
        .capacitor("c", "a", "ground", farads(1.0));
    let faults = faults(builder);
    assert_eq!(
        faults[0].to_string(),
        "P0550: the circuit states no `span`: how long the shot is followed"
    );
    assert_eq!((faults[0].span.start, faults[0].span.end), (0, 0));
}

#[test]
fn the_span_is_a_time_above_0() {
    check(
        stage().span(volts(1e3)),
        "P0150",
        "the span needs a time, and 1 kV is a voltage",
    );
    assert_eq!(
        faults(stage().span(seconds(0.0)))[0].to_string(),
        "P0158: the span needs a time above 0 s, and it is 0 s"
    );
}

#[test]
fn the_allowed_error_is_a_share_above_0() {
    check(
        stage().error_at_most(1e-6),
        "P0152",
        "the allowed error needs a share, and 1e-6 is written without `%` or `ppm`",
    );
    check(
        stage().error_at_most(ppm(0.0)),
        "P0158",
        "the allowed error needs a share above 0 %, and it is 0 %",
    );
}

#[test]
fn p0551_limits_ascend() {
    check(
        dose(between_limits(joules(2.0), joules(1.0))),
        "P0551",
        "`between` needs ascending limits, and 2 J is not below 1 J",
    );
}

#[test]
fn p0552_an_amount_of_a_reading_without_a_unit_is_in_points() {
    let faults = faults(droop(within(2.0, percent(5.0))));
    let message =
        "P0552: the reading has no unit, so that 2 could be a share of the target or an amount";
    assert_eq!(faults[0].to_string(), message);
    assert_eq!(faults[0].write.as_deref(), Some("2 percentage points"));
    sound(droop(within_points(2.0, percent(5.0))));
    sound(droop(within(percent(15.0), percent(5.0))));
}

#[test]
fn p0553_percentage_points_are_of_plain_readings() {
    check(
        dose(within_points(2.0, joules(5.0))),
        "P0553",
        "percentage points are of a reading without a unit, and `energy into chest` is an energy",
    );
}

#[test]
fn p0554_within_takes_a_share_and_an_amount() {
    check(
        dose(within_either(percent(1.0), percent(2.0), joules(1.0))),
        "P0554",
        "`within` takes one share and one amount",
    );
}

#[test]
fn a_let_value_finds_its_place_after_within() {
    let builder = dose(within_either(joules(3.0), name("tol"), joules(300.0)))
        .let_value("tol", percent(15.0));
    let circuit = sound(builder);
    assert_eq!(
        circuit.draft().claims[0].relation.to_string(),
        "is within tol or 3 J of 300 J"
    );
    let circuit = sound(dose(within(joules(3.0), joules(300.0))));
    assert!(matches!(
        &circuit.draft().claims[0].relation,
        Relation::Within {
            share: None,
            amount: Some(_),
            ..
        }
    ));
}

#[test]
fn an_allowance_has_the_unit_of_the_reading() {
    check(
        dose(at_most(joules(1.0))).allowing(volts(1.0)),
        "P0150",
        "what `c` allows needs an energy, and 1 V is a voltage",
    );
    check(
        dose(at_most(joules(1.0))).allowing(joules(-1.0)),
        "P0158",
        "what `c` allows needs an energy of 0 J or more, and it is -1 J",
    );
}

#[test]
fn a_condition_compares_like_things() {
    use crate::draft::Comparison;
    let compared = |right| {
        dose(at_most(joules(1.0))).applies_when(compare(name("load"), Comparison::Less, right))
    };
    sound(compared(ohms(1.0)));
    check(
        compared(volts(1.0)),
        "P0150",
        "`load` needs a resistance, and 1 V is a voltage",
    );
}

#[test]
fn a_condition_on_a_circuit_word_leaves_the_case_out() {
    use crate::circuit::LetValue;
    use crate::draft::Comparison;
    let circuit = sound(stage().cases("load", [ohms(5.0), open_circuit()]));
    let open = circuit
        .lets(&[("load".to_owned(), LetValue::Open)])
        .unwrap();
    let written = circuit.lets(&[]).unwrap();
    let above = compare(name("load"), Comparison::Greater, ohms(1.0));
    assert_eq!(circuit.applies(&open, &above), Ok(false));
    assert_eq!(circuit.applies(&written, &above), Ok(true));
    assert_eq!(circuit.applies(&open, &circuit_is("load", true)), Ok(true));
    assert_eq!(
        circuit.applies(&open, &circuit_is("load", false)),
        Ok(false)
    );
}

#[test]
fn p0561_a_limit_lets_something_run() {
    check(
        stage().limit(Limit::Steps, 0),
        "P0561",
        "a limit of 0 steps lets nothing run",
    );
}

#[test]
fn p0562_the_parts_are_within_their_limit() {
    let faults = faults(stage().limit(Limit::Parts, 3));
    assert_eq!(
        faults[0].to_string(),
        "P0562: there are 8 parts, more than the limit of 3"
    );
    assert_eq!(faults[0].write.as_deref(), Some("limit parts 8"));
}

#[test]
fn a_channel_is_a_signal() {
    check(
        stage().channel(volts(1.0)),
        "P0357",
        "a signal is needed, and 1 V is a constant",
    );
}

#[test]
fn channels_are_the_signals_that_readings_use_unless_written() {
    let circuit = sound(dose(at_most(joules(1.0))).reading("up", highest(voltage_at("pad"))));
    let texts: Vec<String> = circuit.channels().iter().map(ToString::to_string).collect();
    assert_eq!(texts, ["voltage at pad", "power into chest"]);
}

#[test]
fn defaults_are_told() {
    let defaults = sound(stage()).defaults();
    assert_eq!(defaults[0], "start at rest");
    assert!(defaults.contains(&"starting at 0 A: `choke`, `far`".to_owned()));
    assert!(!defaults.iter().any(|d| d.starts_with("starting at 0 V")));
}

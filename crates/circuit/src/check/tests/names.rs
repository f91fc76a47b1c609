//! Names: form, reserved words, twice, unknown, circles; and the topology they make.

use super::*;
use crate::Span;

#[test]
fn p0250_a_name_has_a_form() {
    check(
        stage().resistor("1st", "pad", "ground", ohms(1.0)),
        "P0250",
        "`1st` is no name: an ASCII letter, then letters, digits and `_`",
    );
}

#[test]
fn p0251_the_language_keeps_its_words() {
    let faults = faults(stage().let_value("mA", amps(1.0)));
    assert_eq!(
        faults[0].to_string(),
        "P0251: a let-value cannot be called `mA`, which the language needs for itself"
    );
    assert_eq!(faults[0].write.as_deref(), Some("mA_"));
}

#[test]
fn a_node_with_a_word_for_a_name_is_reported_once() {
    let message = "a node cannot be called `to`, which the language needs for itself";
    check(
        stage().wire("w1", "to", "pad").wire("w2", "to", "pad"),
        "P0251",
        message,
    );
}

#[test]
fn p0252_a_name_is_given_once() {
    check(
        stage().resistor("bank", "pad", "ground", ohms(1.0)),
        "P0252",
        "`bank` is the name of a capacitor and of a resistor",
    );
    check(
        stage().let_value("load", ohms(1.0)),
        "P0252",
        "there are two let-values called `load`",
    );
    check(
        stage().reading("load", energy_into("chest")),
        "P0252",
        "`load` is the name of a let-value and of a reading",
    );
}

#[test]
fn p0252_stands_at_the_later_in_the_text() {
    let mut draft = stage()
        .let_value("a", 1.0)
        .reading("a", energy_into("chest"))
        .draft()
        .clone();
    draft.lets[2].name.span = Span::new(90, 91);
    draft.readings[0].name.span = Span::new(10, 11);
    let fault = draft.check().unwrap_err().remove(0);
    assert_eq!(
        (fault.span.start, fault.message.as_str()),
        (90, "`a` is the name of a reading and of a let-value")
    );
}

#[test]
fn a_claim_may_share_the_name_of_the_reading_it_judges() {
    let dose = || stage().reading("dose", energy_into("chest"));
    sound(dose().claim("dose", name("dose"), at_most(joules(1.0))));
    check(
        dose().claim("dose", energy_into("chest"), at_most(joules(1.0))),
        "P0252",
        "`dose` is the name of a reading and of a claim",
    );
}

#[test]
fn p0253_an_unknown_part_has_a_near_one() {
    let faults = faults(stage().reading("e", energy_into("chset")));
    assert_eq!(
        faults[0].to_string(),
        "P0253: there is no part called `chset`"
    );
    assert_eq!(faults[0].write.as_deref(), Some("chest"));
}

#[test]
fn p0253_a_node_is_no_part() {
    check(
        stage().reading("e", energy_into("pad")),
        "P0253",
        "there is no part called `pad`; that is a node",
    );
}

#[test]
fn p0254_an_unknown_node() {
    check(
        stage().reading("e", final_value(voltage_at("pda"))),
        "P0254",
        "there is no node called `pda`",
    );
}

#[test]
fn p0255_an_unknown_let_value_gives_no_second_mistake() {
    check(
        stage().resistor("r", "pad", "ground", name("laod") + volts(1.0)),
        "P0255",
        "there is no let-value called `laod`",
    );
}

#[test]
fn p0256_a_source_uses_no_readings() {
    check(
        stage().reading("dose", energy_into("chest")).voltage(
            "feed",
            "pad",
            "ground",
            name("dose"),
        ),
        "P0256",
        "`dose` is a reading, and a source uses none",
    );
}

#[test]
fn p0257_a_circle_is_shown_once() {
    let circular = stage()
        .let_value("a", 2.0 * name("b"))
        .let_value("b", name("a") / 2.0);
    check(
        circular.resistor("r", "pad", "ground", name("a") * ohms(1.0)),
        "P0257",
        "`a` is in a circle: `a` uses `b`, `b` uses `a`",
    );
}

#[test]
fn p0257_signals_in_a_circle_are_not_followed() {
    check(
        stage()
            .signal("x", name("y") + volts(1.0))
            .signal("y", name("x"))
            .voltage("v", "pad", "ground", name("x")),
        "P0257",
        "`x` is in a circle: `x` uses `y`, `y` uses `x`",
    );
}

#[test]
fn p0257_switches_are_not_ganged_in_a_circle() {
    check(
        stage()
            .switch_ganged("a", "pad", "ground", "b")
            .switch_ganged("b", "pad", "ground", "a"),
        "P0257",
        "`a` is in a circle: `a` is ganged with `b`, `b` is ganged with `a`",
    );
}

#[test]
fn p0258_an_override_must_fit() {
    use crate::circuit::LetValue;
    let circuit = sound(stage());
    let check = |name: &str, value: LetValue| {
        circuit
            .check_override(name, &value)
            .map_err(|f| f.to_string())
    };
    let ohms = |value| LetValue::Number {
        value,
        dimension: crate::Dimension::OHM,
    };
    assert_eq!(check("load", ohms(25.0)), Ok(()));
    assert_eq!(check("load", LetValue::Open), Ok(()));
    assert_eq!(
        check("laod", ohms(25.0)).unwrap_err(),
        "P0255: there is no let-value called `laod`"
    );
    assert_eq!(
        check("bank_v", ohms(25.0)).unwrap_err(),
        "P0150: `bank_v` needs a voltage, and 25 ohm is a resistance"
    );
    let circuit = sound(stage().resistor("r", "pad", "ground", 2.0 * name("load")));
    assert_eq!(
        circuit
            .check_override("load", &LetValue::Short)
            .unwrap_err()
            .code,
        "P0258"
    );
}

#[test]
fn p0701_something_touches_ground() {
    let floating = Builder::new("")
        .resistor("r", "a", "gnd", ohms(1.0))
        .capacitor("c", "a", "gnd", farads(1.0));
    let faults = faults(floating.span(seconds(1.0)));
    assert_eq!(
        faults[0].to_string(),
        "P0701: the circuit never touches `ground`, the reference node"
    );
    assert_eq!(faults[0].span.start, 0);
    assert_eq!(
        faults[0].label.as_deref(),
        Some("if `gnd` is the reference, it is to be called `ground`")
    );
}

#[test]
fn r0701_both_ends_on_one_node() {
    check_remark(
        stage().resistor("r", "pad", "pad", ohms(1.0)),
        "R0701",
        "both ends of `r` are on `pad`",
    );
}

#[test]
fn r0702_a_node_left_alone_names_the_near_one() {
    let circuit = sound(stage().resistor("r", "pda", "ground", ohms(1.0)));
    assert_eq!(
        circuit.remarks()[0].to_string(),
        "R0702: only `r` touches `pda`"
    );
    assert_eq!(
        circuit.remarks()[0].label.as_deref(),
        Some("is `pad` meant?")
    );
}

//! Cases, and numbers put in.

use super::*;
use crate::circuit::LetValue;
use crate::setup::{Element, Ohms};
use crate::{Dimension, Formula, Probe};

fn ohm(value: f64) -> LetValue {
    LetValue::Number {
        value,
        dimension: Dimension::OHM,
    }
}

fn held(name: &str, value: LetValue) -> Vec<(String, LetValue)> {
    vec![(name.to_owned(), value)]
}

#[test]
fn a_case_has_the_unit_of_its_let_value() {
    check(
        stage().cases("load", [volts(1.0)]),
        "P0150",
        "`load` needs a resistance, and 1 V is a voltage",
    );
    check(
        stage().cases("laod", [ohms(1.0)]),
        "P0255",
        "there is no let-value called `laod`",
    );
    let message = "`bank_v` is a voltage, and never an open or a short circuit";
    assert_eq!(
        faults(stage().cases("bank_v", [open_circuit()]))[0].message,
        "`bank_v` can be an open or a short circuit, so that it stands only as a resistor's whole value"
    );
    assert_eq!(
        faults(stage().cases("bank_v", [open_circuit()]))[1].message,
        message
    );
}

#[test]
fn a_case_out_of_range_is_found_at_its_value() {
    check(
        stage().cases("load", [ohms(50.0), ohms(0.0)]),
        "P0158",
        "`chest` needs a resistance above 0 ohm, and it is 0 ohm with `load` = 0 ohm",
    );
}

#[test]
fn a_case_without_a_finite_number_is_found() {
    check(
        stage()
            .let_value("g", number(1.0) / (name("load") - ohms(10.0)))
            .cases("load", [ohms(10.0)]),
        "P0157",
        "`g` is no finite number with `load` = 10 ohm",
    );
}

#[test]
fn p0555_a_let_value_is_varied_once() {
    let twice = stage()
        .cases("load", [ohms(1.0)])
        .cases("load", [ohms(2.0)]);
    check(twice, "P0555", "`load` is varied by two `cases` statements");
}

#[test]
fn p0556_a_range_has_values() {
    check(
        stage().cases_from("load", ohms(1.0), ohms(2.0), 0),
        "P0556",
        "a range needs at least one value",
    );
    check(
        stage().cases_from("load", ohms(1.0), ohms(2.0), 1),
        "P0556",
        "a range with different ends needs more values than 1",
    );
    sound(stage().cases_from("load", ohms(1.0), ohms(1.0), 1));
}

#[test]
fn p0557_a_row_has_a_value_for_each_name() {
    check(
        stage().cases_together(&["load", "bank_v"], [vec![ohms(1.0)]]),
        "P0557",
        "each case needs 2 values, and this has 1",
    );
}

#[test]
fn p0558_a_ratio_needs_ends_of_one_sign() {
    check(
        stage().cases_by_ratio("bank_v", volts(-1.0), volts(1.0), 3),
        "P0558",
        "an equal ratio needs ends of one sign, not 0, and these are -1 V and 1 V",
    );
}

#[test]
fn p0559_cases_are_bounded() {
    check(
        stage().cases_from("load", ohms(1.0), ohms(2.0), u32::MAX),
        "P0559",
        "there are 4294967295 cases, more than 1000000",
    );
}

#[test]
fn p0560_a_case_uses_nothing_that_is_varied_elsewhere() {
    sound(stage().cases("bank_v", [0.5 * name("bank_v"), name("bank_v")]));
    check(
        stage()
            .let_value("half", 0.5 * name("load"))
            .cases("load", [ohms(1.0)])
            .cases("half", [name("load"), ohms(2.0)]),
        "P0560",
        "the cases of `half` use `load`, which is varied as well",
    );
}

#[test]
fn the_last_stated_cases_run_fastest() {
    let circuit = sound(
        stage()
            .cases("bank_v", [volts(1.0), volts(2.0)])
            .cases("load", [ohms(3.0), open_circuit()]),
    );
    let sets = circuit.case_sets(&[]).unwrap();
    let loads: Vec<LetValue> = sets.iter().map(|set| set[0].1).collect();
    assert_eq!(loads, [ohm(3.0), LetValue::Open, ohm(3.0), LetValue::Open]);
    assert!(
        sets.iter()
            .all(|set| set[0].0 == "load" && set[1].0 == "bank_v")
    );
}

#[test]
fn a_held_let_value_is_not_varied() {
    let circuit = sound(stage().cases("load", [ohms(1.0), ohms(2.0)]));
    assert_eq!(
        circuit.case_sets(&held("load", ohm(7.0))),
        Ok(vec![held("load", ohm(7.0))])
    );
}

#[test]
fn what_moves_with_a_held_let_value_still_moves() {
    let rows = [
        vec![ohms(1.0), volts(1.0)],
        vec![ohms(2.0), volts(1.0)],
        vec![ohms(3.0), volts(5.0)],
    ];
    let circuit = sound(stage().cases_together(&["load", "bank_v"], rows));
    assert_eq!(circuit.case_sets(&[]).unwrap().len(), 3);
    assert_eq!(circuit.case_sets(&held("load", ohm(7.0))).unwrap().len(), 2);
}

#[test]
fn without_cases_there_is_one() {
    assert_eq!(sound(stage()).case_sets(&[]), Ok(vec![Vec::new()]));
}

#[test]
fn let_values_follow_an_override() {
    let circuit = sound(stage().let_value("twice", 2.0 * name("load")));
    let lets = circuit.lets(&held("load", ohm(10.0))).unwrap();
    assert_eq!(lets.get("twice"), Some(&ohm(20.0)));
    assert_eq!(circuit.value(&lets, &(name("twice") + ohms(1.0))), Ok(21.0));
}

#[test]
fn a_setup_holds_the_numbers_of_its_case() {
    let circuit = sound(stage().cases("load", [ohms(1.0), short_circuit()]));
    let ohms_of = |overrides: &[(String, LetValue)]| {
        let setup = circuit.setup(&circuit.lets(overrides).unwrap()).unwrap();
        match setup.parts[circuit.part_index("chest").unwrap()].element {
            Element::Resistor { ohms, .. } => ohms,
            _ => Ohms::Open,
        }
    };
    assert_eq!(ohms_of(&[]), Ohms::Finite(50.0));
    assert_eq!(ohms_of(&held("load", LetValue::Short)), Ohms::Short);
}

#[test]
fn a_setup_out_of_range_is_refused() {
    let circuit = sound(stage());
    let lets = circuit.lets(&held("load", ohm(-1.0))).unwrap();
    assert_eq!(circuit.setup(&lets).unwrap_err()[0].code, "P0158");
}

#[test]
fn a_formula_has_signals_in_place() {
    let circuit = sound(stage().signal("drive", name("bank_v") - voltage_at("pad")));
    let lets = circuit.lets(&[]).unwrap();
    let setup = circuit.setup(&lets).unwrap();
    let formula = circuit.formula(&setup, &lets, &name("drive")).unwrap();
    let pad = circuit.node_index("pad").unwrap();
    let expected = Formula::Subtract(
        Box::new(Formula::Number(1000.0)),
        Box::new(Formula::Probe(Probe::Voltage(pad, 0))),
    );
    assert_eq!(formula, expected);
}

#[test]
fn a_reading_has_no_formula() {
    let circuit = sound(stage());
    let lets = circuit.lets(&[]).unwrap();
    let setup = circuit.setup(&lets).unwrap();
    assert!(
        circuit
            .formula(&setup, &lets, &energy_into("chest").into())
            .is_err()
    );
}

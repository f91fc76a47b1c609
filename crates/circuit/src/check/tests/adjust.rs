//! The adjusted let-value.

use super::*;
use crate::circuit::LetValue;
use crate::{Dimension, Expr};

fn adjusted(name: &str, from: Expr, to: Expr, value: Expr) -> Builder {
    stage().adjust(name, from, to, energy_into("chest"), value)
}

#[test]
fn an_adjusted_let_value_exists() {
    check(
        adjusted("bnk_v", volts(1e3), volts(2e3), joules(1.0)),
        "P0255",
        "there is no let-value called `bnk_v`",
    );
}

#[test]
fn ends_and_value_have_their_units() {
    check(
        adjusted("bank_v", volts(1e3), amps(2e3), joules(1.0)),
        "P0150",
        "`bank_v` needs a voltage, and 2 kA is a current",
    );
    check(
        adjusted("bank_v", volts(1e3), volts(2e3), volts(1.0)),
        "P0150",
        "what the reading of `adjust` is to reach needs an energy, and 1 V is a voltage",
    );
}

#[test]
fn p0563_nothing_else_sets_it() {
    check(
        adjusted("bank_v", volts(1e3), volts(2e3), joules(1.0)).cases("bank_v", [volts(1.0)]),
        "P0563",
        "`bank_v` is adjusted, and `cases` gives it a value as well",
    );
    let circuit = sound(adjusted("bank_v", volts(1e3), volts(2e3), joules(1.0)));
    let value = LetValue::Number {
        value: 5.0,
        dimension: Dimension::VOLT,
    };
    let faults = circuit.adjusting(&[("bank_v".to_owned(), value)]);
    assert_eq!(
        faults.unwrap_err()[0].message,
        "`bank_v` is adjusted, and `--set` or the caller gives it a value as well"
    );
}

#[test]
fn p0564_ends_ascend_in_every_case() {
    check(
        adjusted("bank_v", volts(2e3), volts(1e3), joules(1.0)),
        "P0564",
        "`adjust` needs ascending ends, and 2 kV is not below 1 kV",
    );
    let from = 50.0 * name("bank_v") * (name("load") / ohms(2500.0));
    let circuit = sound(adjusted("bank_v", from, volts(2e3), joules(1.0)));
    let value = LetValue::Number {
        value: 100.0,
        dimension: Dimension::OHM,
    };
    let faults = circuit.adjusting(&[("load".to_owned(), value)]);
    assert_eq!(
        faults.unwrap_err()[0].message,
        "`adjust` needs ascending ends, and 2 kV is not below 2 kV with `load` = 100 ohm"
    );
}

#[test]
fn an_end_is_fit_to_be_set_up() {
    check(
        adjusted("load", ohms(-1.0), ohms(9.0), joules(1.0)),
        "P0158",
        "`chest` needs a resistance above 0 ohm, and it is -1 ohm with `load` = -1 ohm",
    );
}

#[test]
fn a_case_has_its_numbers() {
    let circuit = sound(adjusted(
        "bank_v",
        volts(1e3),
        volts(2e3),
        joules(1.0) * (name("load") / ohms(5.0)),
    ));
    let found = circuit.adjusting(&[]).unwrap().unwrap();
    assert_eq!((found.from, found.to, found.value), (1e3, 2e3, 10.0));
    assert_eq!(found.dimension, Dimension::VOLT);
    assert_eq!(sound(stage()).adjusting(&[]), Ok(None));
}

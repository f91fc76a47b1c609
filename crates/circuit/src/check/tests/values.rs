//! Units, shares, ranges, functions.

use super::*;
use crate::Span;
use crate::dimension::Dimension;
use crate::expr::{Expr, Function};
use crate::spread::{Spread, SpreadKind};

fn resistor(value: impl Into<Expr>) -> Builder {
    stage().resistor("r", "pad", "ground", value)
}

fn voltage(value: impl Into<Expr>) -> Builder {
    stage().voltage("feed", "pad", "ground", value)
}

/// A resistor of 50 ohm with a spread.
fn spread(kind: SpreadKind) -> Builder {
    let mut draft = resistor(50.0 * name("one"))
        .let_value("one", ohms(1.0))
        .draft()
        .clone();
    if let Some(crate::parts::PartKind::Resistor(r)) = draft.parts.last_mut().map(|p| &mut p.kind) {
        r.value.spread = Some(Spread {
            kind,
            span: Span::NONE,
        });
    }
    Builder::from_draft(draft)
}

#[test]
fn p0107_a_value_needs_a_unit() {
    let faults = faults(resistor(50.0));
    assert_eq!(
        faults[0].to_string(),
        "P0107: `r` needs a resistance, and 50 has no unit"
    );
    assert_eq!(faults[0].write.as_deref(), Some("50 ohm"));
}

#[test]
fn p0150_a_value_of_another_unit_names_both() {
    check(
        stage().capacitor("c", "pad", "ground", henrys(32e-3)),
        "P0150",
        "`c` needs a capacitance, and 32 mH is an inductance",
    );
}

#[test]
fn p0150_a_quantity_without_a_word_is_named_by_its_unit() {
    check(
        resistor(volts(1.0) / seconds(1.0)),
        "P0150",
        "`r` needs a resistance, and `1 V / 1 s` is a value in V/s",
    );
}

#[test]
fn p0151_unlike_things_are_not_added() {
    check(
        resistor(ohms(1.0) + volts(2.0)),
        "P0151",
        "a sum needs like things, and 1 ohm is a resistance, 2 V is a voltage",
    );
}

#[test]
fn p0151_a_share_of_a_quantity_is_multiplied() {
    let faults = faults(resistor(ohms(100.0) + percent(5.0)));
    assert_eq!(faults[0].write.as_deref(), Some("100 ohm * (1 + 5 %)"));
}

#[test]
fn p0152_a_share_is_written_as_one() {
    let faults = faults(resistor(ohms(1.0)).tolerance(5.0));
    assert_eq!(
        faults[0].to_string(),
        "P0152: the spread of `r` needs a share, and 5 is written without `%` or `ppm`"
    );
    assert_eq!(faults[0].write.as_deref(), Some("500 %"));
}

#[test]
fn a_let_value_can_be_a_share() {
    sound(
        resistor(ohms(1.0))
            .tolerance(name("tol"))
            .let_value("tol", percent(5.0)),
    );
    sound(
        resistor(ohms(1.0))
            .tolerance(2.0 * name("tol"))
            .let_value("tol", percent(5.0)),
    );
    check(
        resistor(ohms(1.0))
            .tolerance(name("tol"))
            .let_value("tol", 0.05),
        "P0152",
        "the spread of `r` needs a share, and `tol` is written without `%` or `ppm`",
    );
}

#[test]
fn a_spread_can_be_an_amount() {
    sound(resistor(ohms(50.0)).tolerance(ohms(2.0)));
    check(
        resistor(ohms(50.0)).tolerance(volts(2.0)),
        "P0150",
        "the spread of `r` needs a resistance, and 2 V is a voltage",
    );
}

#[test]
fn p0153_least_and_greatest_are_of_like_things() {
    check(
        resistor(call(Function::Max, [ohms(1.0), volts(2.0)])),
        "P0153",
        "`max` needs like things, and 1 ohm is a resistance, 2 V is a voltage",
    );
}

#[test]
fn p0154_a_quantity_is_raised_to_written_numbers_only() {
    let square =
        |exponent: Expr| ohms(1.0) * (volts(2.0).to_the(exponent) / volts(2.0).to_the(2.0));
    sound(resistor(square(2.0.into())));
    sound(resistor(square(Expr::from(6.0) / Expr::from(3.0))));
    check(
        resistor(square(name("n"))).let_value("n", 2.0),
        "P0154",
        "a quantity with a unit is raised only to written numbers, and 2 V is a voltage, `n` no written number",
    );
}

#[test]
fn p0155_functions_take_plain_numbers() {
    check(
        voltage(volts(1.0) * call(Function::Exp, [-time()])),
        "P0155",
        "`exp` takes a number without a unit, and `-t` is a time",
    );
}

#[test]
fn functions_of_quantities_keep_track_of_units() {
    let root = call(Function::Sqrt, [henrys(1e-3) / farads(1e-6)]);
    sound(resistor(root));
    sound(voltage(volts(1.0) * step(time() - seconds(1e-3))));
    sound(voltage(
        volts(1.0) / seconds(1.0) * ramp(time() - seconds(1e-3)),
    ));
}

#[test]
fn p0156_some_units_are_not_kept() {
    check(
        resistor(ohms(1.0).to_the(1.0 / 7.0)),
        "P0156",
        "`(1 ohm)^0.14285714285714285` has a unit with exponents that are not kept",
    );
}

#[test]
fn p0157_a_value_is_finite() {
    check(
        resistor(ohms(1.0) / number(0.0)),
        "P0157",
        "`r` is no finite number",
    );
    check(
        resistor(name("x")).let_value("x", ohms(1.0) / number(0.0)),
        "P0157",
        "`x` is no finite number",
    );
}

#[test]
fn p0158_a_resistance_is_above_0() {
    check(
        resistor(ohms(0.0)),
        "P0158",
        "`r` needs a resistance above 0 ohm, and it is 0 ohm",
    );
}

#[test]
fn p0158_qualifiers_have_ranges_of_their_own() {
    check(
        stage()
            .inductor("l", "pad", "ground", henrys(1.0))
            .winding(ohms(-1.0)),
        "P0158",
        "the winding resistance of `l` needs a resistance of 0 ohm or more, and it is -1 ohm",
    );
    check(
        stage().coupling("k", "choke", "other", 1.0).inductor(
            "other",
            "pad",
            "ground",
            henrys(1.0),
        ),
        "P0158",
        "`k` needs a number between -1 and 1, both excluded, and it is 1",
    );
}

#[test]
fn p0158_ends_of_a_spread_are_held_too() {
    check(
        resistor(ohms(50.0)).tolerance(percent(100.0)),
        "P0158",
        "`r` needs a resistance above 0 ohm, and it is 0 ohm at an end of its spread",
    );
}

#[test]
fn p0158_a_tolerance_is_not_negative() {
    check(
        resistor(ohms(50.0)).tolerance(percent(-5.0)),
        "P0158",
        "the spread of `r` needs a share of 0 % or more, and it is -5 %",
    );
}

#[test]
fn p0159_a_circuit_word_is_a_whole_value() {
    sound(resistor(open_circuit()));
    check(
        stage().inductor("l", "pad", "ground", open_circuit()),
        "P0159",
        "`open circuit` is only a resistor's whole value, or a let-value's",
    );
}

#[test]
fn p0160_a_let_value_that_may_be_open_is_no_number() {
    sound(resistor(name("x")).let_value("x", open_circuit()));
    check(
        resistor(2.0 * name("x")).let_value("x", open_circuit()),
        "P0160",
        "`x` can be an open or a short circuit, so that it stands only as a resistor's whole value",
    );
}

#[test]
fn p0161_knots_ascend() {
    let knots = |times: [f64; 4]| voltage(points(time(), times.map(|t| (seconds(t), volts(1.0)))));
    sound(knots([0.0, 1.0, 1.0, 2.0]));
    let message =
        "the abscissas of `points` ascend, each at most twice, and 1 s is followed by 1 s";
    check(knots([0.0, 1.0, 1.0, 1.0]), "P0161", message);
    let message =
        "the abscissas of `points` ascend, each at most twice, and 2 s is followed by 1 s";
    check(knots([0.0, 2.0, 1.0, 3.0]), "P0161", message);
}

#[test]
fn abscissas_have_the_dimension_of_the_argument() {
    check(
        voltage(points(
            time(),
            [(0.0.into(), volts(1.0)), (seconds(1.0), volts(2.0))],
        )),
        "P0107",
        "an abscissa of `points` needs a time, and 0 has no unit",
    );
}

#[test]
fn p0162_nesting_is_bounded() {
    let mut deep = ohms(1.0);
    for _ in 0..500 {
        deep = deep + ohms(1.0);
    }
    check(
        resistor(deep),
        "P0162",
        "the expression is nested more than 400 deep",
    );
}

#[test]
fn an_expression_as_deep_as_is_kept_is_checked() {
    let mut deep = ohms(1.0);
    for _ in 0..398 {
        deep = deep + call(Function::Abs, [ohms(1.0)]);
    }
    sound(resistor(deep));
}

#[test]
fn p0163_points_of_a_signal_are_not_taken() {
    check(
        voltage(points(voltage_at("top"), [(volts(0.0), volts(1.0))])),
        "P0163",
        "`points` takes `t` or let-values, and `voltage at top` is a signal",
    );
}

#[test]
fn p0164_limits_of_a_tolerance_ascend() {
    check(
        spread(SpreadKind::Limits(percent(5.0), percent(-5.0))),
        "P0164",
        "a tolerance's limits ascend, and 5 % is not below -5 %",
    );
    sound(spread(SpreadKind::Limits(percent(-20.0), percent(50.0))));
}

#[test]
fn a_normal_is_cut_at_three_deviations() {
    sound(spread(SpreadKind::Deviation(percent(33.0))));
    let faults = faults(spread(SpreadKind::Deviation(percent(34.0))));
    assert_eq!(faults[0].code, "P0158");
    sound(spread(SpreadKind::Lognormal(percent(90.0))));
}

#[test]
fn p0165_functions_have_so_many_arguments() {
    check(
        resistor(call(Function::Max, [ohms(1.0)])),
        "P0165",
        "`max` takes two or more values, and this has 1",
    );
    check(
        resistor(call(Function::Abs, [])),
        "P0165",
        "`abs` takes one value, and this has 0",
    );
}

#[test]
fn points_has_a_knot() {
    check(
        voltage(points(time(), [])),
        "P0165",
        "`points` takes one knot or more, and this has none",
    );
}

#[test]
fn constants_within_a_source_are_finite() {
    let wild = volts(1.0) * (number(1.0) / number(0.0)) * step(time() - seconds(1e-3));
    check(voltage(wild), "P0157", "`feed` is no finite number");
}

#[test]
fn the_dimension_of_any_checked_expression_is_known() {
    let circuit = sound(
        stage()
            .signal("drop", voltage_across("chest") / 2.0)
            .reading("dose", energy_into("chest")),
    );
    assert_eq!(circuit.dimension(&name("load")), Dimension::OHM);
    assert_eq!(circuit.dimension(&name("drop")), Dimension::VOLT);
    assert_eq!(
        circuit.dimension(&(name("dose") / seconds(1.0))),
        Dimension::WATT
    );
    assert_eq!(circuit.dimension(&voltage_across("chest")), Dimension::VOLT);
    assert_eq!(
        circuit.dimension(&area_of(name("drop")).into()),
        Dimension::WEBER
    );
}

//! Phrases: kinds of part, what may stand where, windows, fractions, linear sources.

use super::*;
use crate::builder::edge;
use crate::expr::Expr;
use crate::phrase::EdgeKind;

fn reading(value: impl Into<Expr>) -> Builder {
    stage().reading("x", value)
}

fn voltage(value: impl Into<Expr>) -> Builder {
    stage().voltage("feed", "pad", "ground", value)
}

fn pad() -> Expr {
    voltage_at("pad")
}

#[test]
fn p0350_a_phrase_takes_parts_of_its_kind() {
    let message = "`charge held by` takes a capacitor, and `chest` is a resistor";
    check(reading(final_value(charge_held("chest"))), "P0350", message);
    let message = "`flux held by` takes an inductor, and `bank` is a capacitor";
    check(reading(final_value(flux_held("bank"))), "P0350", message);
    check(
        reading(closing_of("chest")),
        "P0350",
        "`closing of` takes a switch, and `chest` is a resistor",
    );
    check(
        reading(edge("fire", EdgeKind::Blocking, None)),
        "P0350",
        "`blocking of` takes a diode, and `fire` is a switch",
    );
    check(
        reading(energy_into("core")),
        "P0350",
        "`energy into` takes a part with ends, and `core` is a coupling",
    );
    check(
        stage().coupling("k", "choke", "bank", 0.5),
        "P0350",
        "`coupling between` takes inductors, and `bank` is a capacitor",
    );
    check(
        stage().switch_ganged("s2", "pad", "ground", "steer"),
        "P0350",
        "`ganged with` takes a switch, and `steer` is a diode",
    );
    check(
        reading(duration().during([closed("relay")])),
        "P0350",
        "`is closed` takes a switch, and `relay` is a changeover",
    );
    sound(reading(final_value(energy_held("core"))));
}

#[test]
fn p0351_a_changeover_has_no_one_voltage() {
    let faults = faults(reading(final_value(voltage_across("relay"))));
    assert_eq!(
        faults[0].to_string(),
        "P0351: `relay` is a changeover, which has no one voltage across it"
    );
    assert_eq!(faults[0].write.as_deref(), Some("voltage at mid"));
}

#[test]
fn p0352_time_stands_in_sources_and_signals() {
    sound(voltage(volts(1.0) * time() / seconds(1.0)));
    let message = "`t` stands in sources and signals, and a part's value does not change with time";
    check(
        stage().resistor("r", "pad", "ground", ohms(1.0) * time()),
        "P0352",
        message,
    );
}

#[test]
fn p0353_a_let_value_uses_no_signals() {
    check(
        stage().let_value("v", pad()),
        "P0353",
        "`voltage at pad` is a signal, and a let-value uses none",
    );
}

#[test]
fn p0354_a_source_takes_no_reading() {
    check(
        voltage(highest(pad())),
        "P0354",
        "`highest voltage at pad` is a reading, and a source uses none",
    );
}

#[test]
fn p0355_a_let_value_uses_no_edges() {
    check(
        stage().let_value("v", closing_of("fire")),
        "P0355",
        "`closing of fire` is an edge, and a let-value uses none",
    );
}

#[test]
fn p0356_a_bare_signal_is_no_reading() {
    let faults_of = |b| faults(b).remove(0);
    let fault = faults_of(reading(pad()));
    assert_eq!(
        fault.to_string(),
        "P0356: `voltage at pad` is a signal, and a reading is one number of it"
    );
    assert_eq!(fault.write.as_deref(), Some("final voltage at pad"));
    let fault = faults_of(reading(name("drive")).signal("drive", pad()));
    assert_eq!(fault.write.as_deref(), Some("final drive"));
}

#[test]
fn p0357_a_constant_is_a_signal_by_name_only() {
    sound(reading(highest(name("flat"))).signal("flat", volts(5.0)));
    check(
        reading(highest(volts(5.0))),
        "P0357",
        "a signal is needed, and 5 V is a constant",
    );
}

#[test]
fn p0358_an_inductor_is_not_coupled_to_itself() {
    check(
        stage().coupling("k", "choke", "choke", 0.5),
        "P0358",
        "`choke` is coupled to itself",
    );
}

#[test]
fn p0359_a_pair_is_coupled_once() {
    check(
        stage().coupling("k", "far", "choke", 0.5),
        "P0359",
        "`far` and `choke` are coupled already, by `core`",
    );
}

#[test]
fn p0360_three_windings_stay_positive_definite() {
    let third = stage()
        .inductor("l3", "pad", "ground", henrys(1.0))
        .coupling("a", "choke", "l3", 0.95);
    check(
        third.coupling("b", "far", "l3", -0.95),
        "P0360",
        "the couplings of `choke`, `far`, `l3` contradict each other: their inductances are not positive definite",
    );
}

#[test]
fn p0361_a_changeover_has_two_nodes() {
    check(
        stage()
            .changeover("turn", "mid", "pad", "s")
            .moves_to("top", at(seconds(1.0e-3))),
        "P0361",
        "`turn` rests at `pad` or `s`, and `top` is neither",
    );
    check(
        reading(duration().during([resting_at("relay", "top")])),
        "P0361",
        "`relay` rests at `pad` or `s`, and `top` is neither",
    );
    check(
        reading(moving_of("relay", "top")),
        "P0361",
        "`relay` rests at `pad` or `s`, and `top` is neither",
    );
}

#[test]
fn p0362_a_changeover_changes_something() {
    check(
        stage().changeover("turn", "mid", "pad", "pad"),
        "P0362",
        "both contacts of `turn` are on `pad`",
    );
}

#[test]
fn p0363_a_controlled_source_is_linear() {
    sound(voltage(10.0 * voltage_at("s") - volts(1.0) * step(time())));
    sound(
        voltage(name("gain") * name("drive"))
            .let_value("gain", 2.0)
            .signal("drive", voltage_at("s") / 3.0),
    );
    check(
        voltage(voltage_at("s") * voltage_at("s") / volts(1.0)),
        "P0363",
        "`feed` is to be linear in its signals, and `voltage at s * voltage at s` is not",
    );
    check(
        voltage(voltage_at("s") * step(time())),
        "P0363",
        "`feed` is to be linear in its signals, and the factor before `voltage at s` changes with time",
    );
    check(
        voltage(name("p") / amps(1.0)).signal("p", power_into("chest")),
        "P0363",
        "`feed` is to be linear in its signals, and `p` is not",
    );
}

#[test]
fn p0364_written_times_lie_in_the_span() {
    check(
        reading(value_at(pad(), seconds(0.1))),
        "P0364",
        "a time lies between 0 s and the span of 30 ms, and this is 100 ms",
    );
    check(
        reading(highest(pad()).after(seconds(-1.0))),
        "P0364",
        "a time lies between 0 s and the span of 30 ms, and this is -1 s",
    );
    check(
        reading(highest(pad()).after(name("late"))).let_value("late", seconds(1.0)),
        "P0364",
        "a time lies between 0 s and the span of 30 ms, and this is 1 s",
    );
    sound(reading(
        highest(pad()).after(closing_of("fire") + seconds(1.0)),
    ));
}

#[test]
fn p0365_a_window_ends_after_its_start() {
    check(
        reading(highest(pad()).between(seconds(2e-3), seconds(2e-3))),
        "P0365",
        "a window ends after its start, and 2 ms is not after 2 ms",
    );
}

#[test]
fn p0366_a_duration_is_of_a_window() {
    check(reading(duration()), "P0366", "`duration` needs a window");
}

#[test]
fn p0367_an_instant_takes_no_window() {
    check(
        reading(final_value(pad()).after(seconds(1e-3))),
        "P0367",
        "`final voltage at pad` takes no window",
    );
}

#[test]
fn p0368_phases_are_counted_from_1() {
    check(
        reading(highest(pad()).during_phase(0, pad())),
        "P0368",
        "phases are counted from 1",
    );
}

#[test]
fn p0369_fractions_stand_in_order() {
    check(
        reading(rise(pad(), percent(90.0), percent(10.0))),
        "P0369",
        "`rise` goes from a lower to a higher fraction, and this is from 90 % to 10 %",
    );
    sound(reading(fall(pad(), percent(90.0), percent(10.0))));
}

#[test]
fn a_fraction_is_a_share_up_to_the_largest() {
    let message =
        "a fraction of the largest value needs a share, and 0.5 is written without `%` or `ppm`";
    check(reading(width(pad(), 0.5)), "P0152", message);
    let message =
        "a fraction of the largest value needs a share between 0 % and 100 %, and it is 120 %";
    check(reading(width(pad(), percent(120.0))), "P0158", message);
}

#[test]
fn a_level_has_the_dimension_of_its_signal() {
    check(
        reading(first_rise_through(pad(), level(amps(1.0)))),
        "P0150",
        "the level needs a voltage, and 1 A is a current",
    );
}

#[test]
fn p0370_signals_in_place_stay_of_a_size() {
    let mut doubling = stage().signal("s0", pad());
    for i in 0..40 {
        let before = format!("s{i}");
        doubling = doubling.signal(&format!("s{}", i + 1), name(&before) + name(&before));
    }
    check(
        doubling,
        "P0370",
        "`s15` grows too large with all that it uses",
    );
}

#[test]
fn p0370_readings_stay_of_a_depth() {
    let mut chain = stage().reading("e0", energy_into("chest"));
    for i in 0..500 {
        chain = chain.reading(&format!("e{}", i + 1), 2.0 * name(&format!("e{i}")));
    }
    assert_eq!(faults(chain)[0].code, "P0370");
}

#[test]
fn p0371_only_a_resistance_can_be_open() {
    let claim = stage().claim("c", energy_into("chest"), at_most(joules(1.0)));
    check(
        claim.applies_when(circuit_is("bank_v", true)),
        "P0371",
        "`bank_v` is a voltage, and never an open or a short circuit",
    );
}

#[test]
fn p0372_a_qualifier_follows_what_it_qualifies() {
    check(
        stage()
            .resistor("r", "pad", "ground", ohms(1.0))
            .charged_to(volts(1.0)),
        "P0372",
        "`charged to` follows a capacitor, and this follows `r`",
    );
}

#[test]
fn r0350_a_window_on_one_term_of_a_sum() {
    let both = || energy_into("chest").after(seconds(1e-3));
    check_remark(
        reading(energy_into("choke") + both()),
        "R0350",
        "`energy into chest after 1 ms` has a window, and `energy into choke` in the same sum has none",
    );
    assert_eq!(sound(reading(energy_into("choke") / both())).remarks(), []);
    assert_eq!(sound(reading(both() + both())).remarks(), []);
}

#[test]
fn a_signal_from_outside_is_checked_like_one_within() {
    let circuit = sound(stage());
    assert_eq!(circuit.check_signal(&pad()), Ok(crate::Dimension::VOLT));
    assert_eq!(
        circuit.check_signal(&voltage_at("pda")).unwrap_err()[0].code,
        "P0254"
    );
    assert_eq!(circuit.check_reading(&pad()).unwrap_err()[0].code, "P0356");
    assert_eq!(
        circuit
            .check_reading(&value_at(pad(), seconds(1.0)).into())
            .unwrap_err()[0]
            .code,
        "P0364"
    );
}

//! Schedules.

use super::*;
use crate::schedule::Passing;

fn switch() -> Builder {
    stage().switch_open("s2", "pad", "ground")
}

#[test]
fn p0450_stated_instants_rise() {
    check(
        switch().closes(at(seconds(2e-3))).opens(at(seconds(1e-3))),
        "P0450",
        "the instants of a schedule rise, and 1 ms follows 2 ms",
    );
    let between = after(seconds(1e-3), closing_of("s2"));
    check(
        switch()
            .closes(at(seconds(2e-3)))
            .opens(between)
            .closes(at(seconds(2e-3))),
        "P0450",
        "the instants of a schedule rise, and 2 ms follows 2 ms",
    );
}

#[test]
fn an_instant_is_not_below_0() {
    check(
        switch().closes(at(seconds(-1.0))),
        "P0158",
        "an instant of `s2` needs a time of 0 s or more, and it is -1 s",
    );
}

#[test]
fn p0451_an_action_has_one_instant() {
    let twice = [at(seconds(1e-3)), at(seconds(2e-3))];
    check(
        switch().closes(twice),
        "P0451",
        "an action takes one `at` among its triggers, and this is the second",
    );
    let low = when(voltage_across("bank"), Passing::FallsBelow, volts(10.0));
    sound(switch().closes([low, at(seconds(2e-3)), at_zero_current()]));
}

#[test]
fn p0452_a_switch_closes_and_a_changeover_moves() {
    check(
        switch().moves_to("pad", at(seconds(1e-3))),
        "P0452",
        "`s2` is a switch, and never moves to `pad`",
    );
    check(
        stage()
            .changeover("turn", "mid", "pad", "s")
            .closes(at(seconds(1e-3))),
        "P0452",
        "`turn` is a changeover, and never closes",
    );
}

#[test]
fn p0453_an_action_is_set_off_by_something() {
    check(
        switch().closes([]),
        "P0453",
        "an action of `s2` has nothing that sets it off",
    );
}

#[test]
fn a_level_has_the_dimension_of_the_signal_watched() {
    check(
        switch().closes(when(voltage_across("bank"), Passing::FallsBelow, amps(1.0))),
        "P0150",
        "a level of `s2` needs a voltage, and 1 A is a current",
    );
}

#[test]
fn a_delay_may_use_edges_and_no_readings() {
    sound(switch().closes(after(
        2.0 * (closing_of("fire") - seconds(0.0)),
        closing_of("fire"),
    )));
    check(
        switch().closes(after(
            time_of_highest(voltage_at("pad")),
            closing_of("fire"),
        )),
        "P0354",
        "`time of highest voltage at pad` is a reading, and a delay uses none",
    );
}

#[test]
fn a_written_delay_is_not_negative() {
    check(
        switch().closes(after(seconds(-1.0), closing_of("fire"))),
        "P0158",
        "a delay of `s2` needs a time of 0 s or more, and it is -1 s",
    );
}

#[test]
fn r0450_an_instant_past_the_span() {
    check_remark(
        switch().closes(at(seconds(1.0))),
        "R0450",
        "`s2` would act at 1 s, after the span of 30 ms",
    );
}

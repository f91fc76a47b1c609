//! Remarks: what was noticed in the netlist and in the shot, in plain words.
//!
//! | code | what was noticed |
//! | --- | --- |
//! | R0801 | an action whose instants had all gone when its turn came |
//! | R0802 | a change to the state it is in already |
//! | R0803 | a level that was already past when its watch began |
//! | R0804 | stated values that were equalised at 0 s |
//! | R0805 | more than a millionth of the stored energy lost at an event |
//! | R0806 | a current whose split nothing determines |
//! | R0807 | a part of the circuit that no path joins to ground |
//! | R0808 | a reading that reaches its value in several places of an `adjust` |

use pulsewright_circuit::{Circuit, Dimension, Setup, Span};
use pulsewright_engine::Shot;
use pulsewright_engine::shot::Notice;

use crate::outcome::Remark;
use crate::readings::{said, said_time};

/// Every code of this crate: code, title, explanation with an example.
pub const CODES: &[(&str, &str, &str)] = &[
    (
        "R0801",
        "an action was passed over",
        "When the turn of a switch's action came, the instants that it was given had already gone, so it never \
         happened. Example: `closes at 1 ms, opens when voltage across bank falls below 1 V, closes at 2 ms`, where \
         the level is only met at 5 ms. Look at the order of the actions and at their instants.",
    ),
    (
        "R0802",
        "a change to the state it is in already",
        "A switch was told to close while closed, or to open while open: nothing happened. Example: `switch s from a \
         to b : open, opens at 1 ms`.",
    ),
    (
        "R0803",
        "a level was already past",
        "`falls below` and `rises above` wait for the level to be passed. When the watch began the signal was already \
         beyond it, so nothing happens until it is passed again. `is below` and `is above` act on the state itself.",
    ),
    (
        "R0804",
        "stated values were equalised at 0 s",
        "Stated voltages or currents contradict each other (two capacitors in parallel with different `charged to`), so \
         that they were equalised at 0 s as a closing switch would, with the loss given. State values that agree, or put \
         a switch or a resistance between the parts.",
    ),
    (
        "R0805",
        "energy was lost at an event",
        "An ideal switch closed a charged capacitor onto another or onto a source, or interrupted an inductor's \
         current. What was lost would arc or weld a real contact. A `contact` or `series` resistance, a diode or a \
         snubber shows where it goes.",
    ),
    (
        "R0806",
        "a current that nothing determines",
        "Ideal connections in parallel (two closed switches, a wire beside a closed switch) share a current in a way \
         that the circuit does not determine; the least sum of squares is shown. A `contact` resistance determines it.",
    ),
    (
        "R0807",
        "a part of the circuit floats",
        "No path joins these nodes to ground while the switches are in this state. Their potential is held where it \
         was; voltages between them are right, voltages against ground are not determined by the circuit.",
    ),
    (
        "R0808",
        "an adjustment with several answers",
        "The reading of `adjust` reaches its value at several values of the let-value, and the lowest was taken. Move \
         the ends of `adjust` so that only the one that is meant lies between them.",
    ),
];

/// The remarks on a circuit and on a shot of it.
#[must_use]
pub fn remarks(circuit: &Circuit, setup: &Setup, shot: &Shot) -> Vec<Remark> {
    let written = circuit.remarks().iter().map(|fault| Remark {
        code: fault.code.to_owned(),
        text: match &fault.write {
            Some(write) => format!("{}; write: {write}", fault.message),
            None => fault.message.clone(),
        },
        span: fault.span,
    });
    let mut all: Vec<Remark> = written.collect();
    for notice in &shot.notices {
        let remark = noticed(circuit, setup, notice);
        if !all.contains(&remark) {
            all.push(remark);
        }
    }
    all
}

fn noticed(circuit: &Circuit, setup: &Setup, notice: &Notice) -> Remark {
    let name = |part: &usize| {
        setup
            .parts
            .get(*part)
            .map_or_else(|| "a part".to_owned(), |p| format!("`{}`", p.name))
    };
    let span = |part: &usize| {
        circuit
            .draft()
            .parts
            .get(*part)
            .map_or(Span::NONE, |p| p.span)
    };
    let joules = |x: f64| said(x, Dimension::JOULE);
    let (code, text, span) = match notice {
        Notice::ActionPassedOver { part, time } => (
            "R0801",
            format!(
                "an action of {} was passed over at {}: its instants had all gone",
                name(part),
                said_time(*time)
            ),
            span(part),
        ),
        Notice::AlreadySo { part, time } => (
            "R0802",
            format!(
                "{} was told at {} to change to the state that it was in already",
                name(part),
                said_time(*time)
            ),
            span(part),
        ),
        Notice::AlreadyPast { part, time } => (
            "R0803",
            format!(
                "the level that {} waits for was already past at {}; it acts when the level is passed again, and \
                 `is below` or `is above` would act on the state itself",
                name(part),
                said_time(*time)
            ),
            span(part),
        ),
        Notice::Equalised { loss } => (
            "R0804",
            format!(
                "stated values contradict each other and were equalised at 0 s, which lost {}",
                joules(*loss)
            ),
            Span::NONE,
        ),
        Notice::LossAtEvent { part, time, loss } => (
            "R0805",
            format!(
                "{} lost {} at {}; a real contact would arc or weld: a resistance or a diode shows where it goes",
                name(part),
                joules(*loss),
                said_time(*time)
            ),
            span(part),
        ),
        Notice::Undetermined { parts, time } => (
            "R0806",
            format!(
                "from {} on nothing determines how {} share their current; the least sum of squares is shown, and a \
                 `contact` resistance would determine it",
                said_time(*time),
                listed(&parts.iter().map(name).collect::<Vec<_>>())
            ),
            parts.first().map_or(Span::NONE, span),
        ),
        Notice::Island { nodes, time } => (
            "R0807",
            format!(
                "from {} on no path joins {} to ground; held at the potential that they had",
                said_time(*time),
                listed(&nodes.iter().map(|n| format!("`{n}`")).collect::<Vec<_>>())
            ),
            Span::NONE,
        ),
        _ => (
            "R0800",
            "something was noticed that this version has no words for".to_owned(),
            Span::NONE,
        ),
    };
    Remark {
        code: code.to_owned(),
        text,
        span,
    }
}

/// Names in a row: `a`, `b` and `c`; only the first few of many.
fn listed(names: &[String]) -> String {
    match names {
        [] => "some parts".to_owned(),
        [one] => one.clone(),
        [init @ .., last] if names.len() <= 6 => format!("{} and {last}", init.join(", ")),
        many => format!(
            "{} and {} more",
            many.get(..5).unwrap_or_default().join(", "),
            many.len() - 5
        ),
    }
}

//! Circuits without an answer, as mistakes with a place in the text.
//!
//! The engine names parts; here each failure that is the circuit's own gets a code and stands
//! where its author can act on it: a loop at its last source, a cut at its first, others at the
//! first part they name. What is not the circuit's (a limit, an internal error) has no place.

use pulsewright_circuit::fault::Fault;
use pulsewright_circuit::parts::PartKind;
use pulsewright_circuit::{Circuit, Span};
use pulsewright_engine::Failure;

/// The codes: code, title, explanation with an example.
pub const CODES: &[(&str, &str, &str)] = &[
    (
        "P0751",
        "ideal sources in a loop that contradicts itself",
        "Voltage sources, wires, short circuits and closed ideal switches form a loop whose voltages do not add up \
to zero, so that its current has no limit.

    voltage one from a to ground = 5 V
    voltage two from a to ground = 6 V

Put into the loop what is there in reality: a resistor, the `contact` of a switch, an inductor.",
    ),
    (
        "P0752",
        "a current that has no way to flow",
        "Current sources push a current into nodes that nothing else reaches: only open circuits and open ideal \
switches.

    current gun from ground to a = 1 A
    switch  out from a to ground : open

Give the current a way: a resistor, a capacitor, the `insulation` of a switch.",
    ),
    (
        "P0753",
        "no consistent state of the switches and diodes",
        "At the instant named no state of the diodes named agrees with the voltages and currents that follow from \
it. A small `slope`, a resistor in series or a capacitor across the diode decides it.",
    ),
    (
        "P0754",
        "equations without a single solution",
        "The circuit's graph allows a solution but its values do not: a controlled source that cancels what it is \
connected to. Look at the gain of the sources named.",
    ),
    (
        "P0755",
        "no steady state to start in",
        "`start steady` asks for the state in which all sources have stood for ever. Here there is none: a current \
source into a capacitor, a voltage source across an inductor. State the start with `charged to` and `carrying`, or give \
the current a way.",
    ),
    (
        "P0756",
        "events that follow each other without end",
        "More than 1,000 events within a millionth of the span: a switch on a level whose own action takes the level \
back, or diodes that hand a current to each other. Give the level a distance to fall back, or the diodes a `slope`.",
    ),
    (
        "P0757",
        "a source that is no finite number",
        "The expression of a source has a pole or grows beyond what a number can hold at the instant named.

    voltage feed from a to ground = 1 V / (1 - t / 1 ms)",
    ),
    (
        "P0758",
        "nothing to judge",
        "`judge` answers claims, and the netlist makes none.

    claim dose: energy into chest is within 15 % of 300 J

`fire` fires a netlist without claims.",
    ),
    (
        "P0759",
        "a claim on what nothing determines",
        "The claim's reading is a voltage against ground in a part of the circuit that no path joins to ground at \
that time. Name what the voltage is to be measured against.

    claim peak: highest voltage from plus to minus is at most 2 kV",
    ),
    (
        "P0760",
        "exact propagation does not apply",
        "Exact propagation takes sources that are, between their corners, sums of whole powers of t times exponentials \
and sines of linear functions of t, and up to 400 states. `integrate by trapezoidal rule` takes any.

    voltage feed from a to ground = 1 kV / (1 + (t / 1 us)^2)
    integrate by exact propagation",
    ),
    (
        "P0761",
        "an adjustment without an answer",
        "In a case the reading of `adjust` reaches its value nowhere between the ends, or only jumps past it. Move \
the ends, or the value to what the circuit can give; the message says what the reading reaches.

    let bank_v = 3 kV
    adjust bank_v from 1 kV to 6 kV so that energy into chest is 150 J",
    ),
];

/// The mistake of a netlist that is to be judged and makes no claim.
#[must_use]
pub fn nothing_to_judge() -> Fault {
    Fault::new(
        "P0758",
        Span::NONE,
        "there is nothing to judge: the netlist makes no claim",
    )
    .write("claim dose: energy into chest is at least 300 J")
}

/// The mistake of a claim on a reading that nothing determines.
#[must_use]
pub fn floating(claim: &str, message: String, circuit: &Circuit) -> Fault {
    let found = circuit.draft().claims.iter().find(|c| c.name.text == claim);
    Fault::new("P0759", found.map_or(Span::NONE, |c| c.name.span), message)
}

/// The mistake of an `adjust` whose reading never reaches its value.
#[must_use]
pub fn not_adjusted(message: String, circuit: &Circuit) -> Fault {
    let found = circuit.draft().adjust.as_ref();
    Fault::new("P0761", found.map_or(Span::NONE, |a| a.name.span), message)
}

/// The mistake in a circuit that a failure stands for; `None` where the circuit is not at
/// fault.
#[must_use]
pub fn of(failure: &Failure, circuit: &Circuit) -> Option<Fault> {
    let message = failure.to_string();
    let at = |code, span, label: &str| Some(Fault::new(code, span, message.clone()).label(label));
    match failure {
        Failure::SourceLoop { parts, .. } => {
            let last = sources(circuit, parts, |k| matches!(k, PartKind::Voltage(_)))
                .last()
                .copied();
            at("P0751", span(circuit, last), "the last source of the loop")
        }
        Failure::CurrentCut { parts, .. } => {
            let first = sources(circuit, parts, |k| matches!(k, PartKind::Current(_)))
                .first()
                .copied();
            at("P0752", span(circuit, first), "the first source of the cut")
        }
        Failure::NoState { names, .. } => {
            at("P0753", named(circuit, names), "the first part of these")
        }
        Failure::Singular { names, .. } => {
            at("P0754", named(circuit, names), "the first part of these")
        }
        Failure::NoSteadyState { names } => {
            at("P0755", named(circuit, names), "the first part of these")
        }
        Failure::Chatter { names, .. } => {
            at("P0756", named(circuit, names), "the first part of these")
        }
        Failure::NotExact { .. } => {
            let stated = circuit.draft().run.method.map_or(Span::NONE, |m| m.1);
            at("P0760", stated, "asked for here")
        }
        Failure::NotFinite { what, .. } => {
            source(circuit, what).and_then(|s| at("P0757", s, "this source"))
        }
        _ => None,
    }
}

/// Those of the parts that are sources of a kind, in the order of the file; all where none is.
fn sources(
    circuit: &Circuit,
    parts: &[usize],
    is_source: impl Fn(&PartKind) -> bool,
) -> Vec<usize> {
    let mut all = parts.to_vec();
    all.sort_unstable();
    let known = |k: &usize| {
        circuit
            .draft()
            .parts
            .get(*k)
            .is_some_and(|p| is_source(&p.kind))
    };
    let only: Vec<usize> = all.iter().copied().filter(known).collect();
    if only.is_empty() { all } else { only }
}

fn span(circuit: &Circuit, part: Option<usize>) -> Span {
    part.and_then(|k| circuit.draft().parts.get(k))
        .map_or(Span::NONE, |p| p.name.span)
}

fn named(circuit: &Circuit, names: &[String]) -> Span {
    let of = |name: &String| circuit.draft().parts.iter().find(|p| p.name.text == *name);
    names
        .iter()
        .find_map(of)
        .map_or(Span::NONE, |p| p.name.span)
}

/// The place of a source that is called so.
fn source(circuit: &Circuit, name: &str) -> Option<Span> {
    let is_source = |kind: &PartKind| matches!(kind, PartKind::Voltage(_) | PartKind::Current(_));
    let found = circuit
        .draft()
        .parts
        .iter()
        .find(|p| p.name.text == name && is_source(&p.kind));
    found.map(|p| p.name.span)
}

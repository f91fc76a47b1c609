//! Parts, their schedules and the nodes they join, in words.

use super::Numbers;
use crate::look::{Look, Tone, heading, paragraph};
use pulsewright_circuit::expr::ExprKind;
use pulsewright_circuit::parts::{Changeover, Control, Part, PartKind, Switch};
use pulsewright_circuit::schedule::{Action, Change, Passing, TriggerKind};
use pulsewright_circuit::spread::Value;

/// Between which nodes a part is, and what it is: values, spreads, schedule.
pub(super) fn part(numbers: &Numbers<'_>, part: &Part) -> [String; 2] {
    [between(part), what(numbers, &part.kind)]
}

fn between(part: &Part) -> String {
    if let PartKind::Coupling(c) = &part.kind {
        return format!("{} and {}", c.first, c.second);
    }
    match part.kind.nodes().as_slice() {
        [from, to] => format!("{from} to {to}"),
        [common, first, second] => format!("{common} to {first} or {second}"),
        _ => String::new(),
    }
}

fn what(numbers: &Numbers<'_>, kind: &PartKind) -> String {
    let text = |value| valued(numbers, value);
    let said = |word: &str, value: &Option<Value>| {
        value
            .as_ref()
            .map(|v| format!("{word} {}", valued(numbers, v)))
    };
    let pieces: Vec<Option<String>> = match kind {
        PartKind::Resistor(p) => vec![Some(text(&p.value))],
        PartKind::Capacitor(p) => vec![
            Some(text(&p.value)),
            said("charged to", &p.charged),
            said("series", &p.series),
            said("leakage", &p.leakage),
        ],
        PartKind::Inductor(p) => {
            vec![
                Some(text(&p.value)),
                said("carrying", &p.carrying),
                said("winding", &p.winding),
            ]
        }
        PartKind::Coupling(p) => vec![Some(text(&p.factor))],
        PartKind::Wire(_) => Vec::new(),
        PartKind::Voltage(p) | PartKind::Current(p) => vec![Some(text(&p.value))],
        PartKind::Switch(p) => switch(
            numbers,
            p,
            said("contact", &p.contact),
            said("insulation", &p.insulation),
        ),
        PartKind::Changeover(p) => changeover(
            numbers,
            p,
            said("contact", &p.contact),
            said("insulation", &p.insulation),
        ),
        PartKind::Diode(p) => vec![
            Some(said("threshold", &p.threshold).unwrap_or_else(|| "threshold 0 V".to_owned())),
            Some(said("slope", &p.slope).unwrap_or_else(|| "slope 0 ohm".to_owned())),
        ],
        _ => Vec::new(),
    };
    pieces.into_iter().flatten().collect::<Vec<_>>().join(", ")
}

fn switch(
    numbers: &Numbers<'_>,
    switch: &Switch,
    contact: Option<String>,
    insulation: Option<String>,
) -> Vec<Option<String>> {
    match &switch.control {
        Control::Ganged(other) => vec![Some(format!("ganged with {other}")), contact, insulation],
        Control::Schedule { closed, actions } => {
            let start = if *closed { "closed" } else { "open" }.to_owned();
            vec![Some(start), schedule(numbers, actions), contact, insulation]
        }
    }
}

fn changeover(
    numbers: &Numbers<'_>,
    part: &Changeover,
    contact: Option<String>,
    insulation: Option<String>,
) -> Vec<Option<String>> {
    vec![
        Some(format!("at {}", part.start)),
        schedule(numbers, &part.actions),
        contact,
        insulation,
    ]
}

fn schedule(numbers: &Numbers<'_>, actions: &[Action]) -> Option<String> {
    let words: Vec<String> = actions.iter().map(|a| action(numbers, a)).collect();
    (!words.is_empty()).then(|| words.join(", then "))
}

fn action(numbers: &Numbers<'_>, action: &Action) -> String {
    let triggers: Vec<String> = action
        .triggers
        .iter()
        .map(|t| trigger(numbers, &t.kind))
        .collect();
    let change = match &action.change {
        Change::Closes => "closes".to_owned(),
        Change::Opens => "opens".to_owned(),
        Change::MovesTo(node) => format!("moves to {node}"),
    };
    format!("{change} {}", triggers.join(" or "))
}

fn trigger(numbers: &Numbers<'_>, kind: &TriggerKind) -> String {
    match kind {
        TriggerKind::At(time) => format!("at {}", valued(numbers, time)),
        TriggerKind::When {
            signal,
            passing,
            level,
        } => {
            format!(
                "when {signal} {} {}",
                passed(*passing),
                valued(numbers, level)
            )
        }
        TriggerKind::Delay { delay, edge } => {
            let spread = delay
                .spread
                .as_ref()
                .map(|s| format!(", {s}"))
                .unwrap_or_default();
            let compound = matches!(
                delay.nominal.kind,
                ExprKind::Binary { .. } | ExprKind::Negative(_)
            );
            let nominal = numbers.with_number(&delay.nominal);
            let nominal = if compound {
                format!("({nominal})")
            } else {
                nominal
            };
            format!("{nominal} after {edge}{spread}")
        }
        TriggerKind::ZeroCurrent { after: None } => "at zero current".to_owned(),
        TriggerKind::ZeroCurrent { after: Some(time) } => format!("at zero current after {time}"),
        _ => String::new(),
    }
}

const fn passed(passing: Passing) -> &'static str {
    match passing {
        Passing::FallsBelow => "falls below",
        Passing::RisesAbove => "rises above",
        Passing::IsBelow => "is below",
        Passing::IsAbove => "is above",
    }
}

/// A value with its number and its spread.
fn valued(numbers: &Numbers<'_>, value: &Value) -> String {
    let nominal = numbers.with_number(&value.nominal);
    value
        .spread
        .as_ref()
        .map_or_else(|| nominal.clone(), |spread| format!("{nominal}, {spread}"))
}

/// Adds the nodes, with how many parts touch each.
pub(super) fn nodes(out: &mut String, look: Look, parts: &[Part]) {
    let mut nodes: Vec<(&str, usize)> = Vec::new();
    let mut index = std::collections::HashMap::new();
    for name in parts.iter().flat_map(|p| p.kind.nodes()) {
        let k = *index.entry(name.text.as_str()).or_insert_with(|| {
            nodes.push((name.text.as_str(), 0));
            nodes.len() - 1
        });
        if let Some(node) = nodes.get_mut(k) {
            node.1 += 1;
        }
    }
    heading(
        out,
        look,
        "nodes, and how many ends of parts meet there",
        Tone::Heading,
    );
    let words: Vec<String> = nodes
        .iter()
        .map(|(name, ends)| format!("{name} ({ends})"))
        .collect();
    paragraph(out, look, 2, &words.join(", "), Tone::Plain);
}

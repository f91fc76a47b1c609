//! The defaults that a draft leaves to be taken, in words, and the channels among them.

use std::collections::HashSet;

use crate::draft::Draft;
use crate::expr::{Expr, ExprKind};
use crate::parts::{PartKind, Switch};
use crate::phrase::{Measure, Phrase, Signal};

/// How many names a line shows.
const SHOWN: usize = 8;

/// Every default that is taken.
pub(crate) fn words(draft: &Draft) -> Vec<String> {
    let run = &draft.run;
    let steady = run.steady.unwrap_or(false);
    let mut found = Vec::new();
    let mut say = |taken: bool, text: &str| {
        if taken {
            found.push(text.to_owned());
        }
    };
    say(run.steady.is_none(), "start at rest");
    say(run.method.is_none(), "integrate by trapezoidal rule");
    say(
        run.error.is_none() && run.step.is_none(),
        "error at most 1 ppm",
    );
    say(run.step.is_none(), "steps chosen by the tool");
    say(
        run.channels.is_none(),
        "channels: the signals that readings and claims use",
    );
    let uncharged = |k: &PartKind| matches!(k, PartKind::Capacitor(c) if c.charged.is_none());
    let still = |k: &PartKind| matches!(k, PartKind::Inductor(l) if l.carrying.is_none());
    let start = if steady {
        "in the steady state"
    } else {
        "at 0 V"
    };
    found.extend(parts(draft, &uncharged, &format!("starting {start}")));
    let start = if steady {
        "in the steady state"
    } else {
        "at 0 A"
    };
    found.extend(parts(draft, &still, &format!("starting {start}")));
    found.extend(ideal(draft));
    found
}

/// What is ideal because no resistance or threshold is stated.
fn ideal(draft: &Draft) -> Vec<String> {
    let closed = |k: &PartKind| {
        matches!(k, PartKind::Switch(Switch { contact: None, .. }))
            || matches!(k, PartKind::Changeover(c) if c.contact.is_none())
    };
    let open = |k: &PartKind| {
        matches!(
            k,
            PartKind::Switch(Switch {
                insulation: None,
                ..
            })
        ) || matches!(k, PartKind::Changeover(c) if c.insulation.is_none())
    };
    let threshold = |k: &PartKind| matches!(k, PartKind::Diode(d) if d.threshold.is_none());
    let slope = |k: &PartKind| matches!(k, PartKind::Diode(d) if d.slope.is_none());
    [
        parts(draft, &closed, "0 ohm where closed"),
        parts(draft, &open, "0 A where open"),
        parts(draft, &threshold, "threshold 0 V"),
        parts(draft, &slope, "slope 0 ohm"),
    ]
    .into_iter()
    .flatten()
    .collect()
}

/// `` starting at 0 V: `bank`, `store` and 12 more ``
fn parts(draft: &Draft, meets: &dyn Fn(&PartKind) -> bool, text: &str) -> Option<String> {
    let all: Vec<&str> = draft
        .parts
        .iter()
        .filter(|p| meets(&p.kind))
        .map(|p| p.name.text.as_str())
        .collect();
    let shown: Vec<String> = all.iter().take(SHOWN).map(|n| format!("`{n}`")).collect();
    let more = all.len() - shown.len();
    let rest = if more > 0 {
        format!(" and {more} more")
    } else {
        String::new()
    };
    (!shown.is_empty()).then(|| format!("{text}: {}{rest}", shown.join(", ")))
}

/// The channels written, else the signals that readings and claims use, each once.
pub(crate) fn channels(draft: &Draft) -> Vec<Expr> {
    if let Some(written) = &draft.run.channels {
        return written.clone();
    }
    let (mut found, mut seen) = (Vec::new(), HashSet::new());
    let readings = draft.readings.iter().map(|r| &r.value);
    for e in readings.chain(draft.claims.iter().map(|c| &c.reading)) {
        let mut phrases = Vec::new();
        crate::walk::each(e, &mut |e, _| {
            if let ExprKind::Reading(p) = &e.kind {
                phrases.push(&**p);
            }
        });
        for signal in phrases.iter().filter_map(|p| signal(p)) {
            if seen.insert(signal.to_string()) {
                found.push(signal);
            }
        }
    }
    found
}

/// The signal that a phrase measures.
fn signal(phrase: &Phrase) -> Option<Expr> {
    use Measure as M;
    Some(match &phrase.measure {
        M::EnergyInto(p) | M::EnergyOutOf(p) => Expr::signal(Signal::PowerInto(p.clone())),
        M::Charge(p) | M::GrossCharge(p) | M::Action(p) => {
            Expr::signal(Signal::CurrentThrough(p.clone()))
        }
        M::Heat(_) | M::StoredAt(_) | M::StoredJustBefore(_) | M::Duration => return None,
        _ => {
            let mut first = None;
            crate::walk::within(phrase, &mut |e| {
                first.get_or_insert(e);
            });
            first?.clone()
        }
    })
}

//! What a plot marks beside the channels: crests, limits of claims, windows of readings.
//!
//! A claim on the highest, lowest or largest value of a channel becomes a [`Gate`] on it: a level
//! that the channel must not pass (`highest … is at most X`: no point of it), or one that its
//! extreme has to reach (`highest … is at least X`: that one point).

use pulsewright_circuit::phrase::Measure;
use pulsewright_circuit::{Expr, ExprKind, Phrase};

use crate::outcome::{Channel, ClaimResult, Extreme, Gate, Verdict, WindowResult};
use crate::plan::Plan;
use crate::readings::Reader;
use crate::waveform::{Extremum, Interval};

/// Marks the crest of every channel, and the gates of the claims on it.
pub fn mark(
    plan: &Plan<'_>,
    reader: &Reader<'_>,
    claims: &[ClaimResult],
    channels: &mut [Channel],
) {
    let all = [Interval {
        start: 0.0,
        end: reader.record().end(),
    }];
    for expr in &plan.channels {
        let text = expr.to_string();
        let Some(channel) = channels.iter_mut().find(|c| c.text == text) else {
            continue;
        };
        let top = reader.signal(expr).ok();
        channel.crest = top.and_then(|s| s.wave.largest_in(&all)).map(extreme);
        for (claim, result) in plan.claims().iter().zip(claims) {
            if result.verdict == Verdict::DoesNotApply {
                continue;
            }
            let Some(phrase) = phrase(plan, &claim.reading) else {
                continue;
            };
            channel.gates.extend(gates(reader, phrase, expr, result));
        }
    }
}

/// The windows of named readings and of claims, in the file's order, as far as they exist.
pub fn windows(plan: &Plan<'_>, reader: &Reader<'_>) -> Vec<WindowResult> {
    let draft = plan.case.circuit.draft();
    let readings = draft.readings.iter().map(|r| (&r.name.text, &r.value));
    let claims = draft.claims.iter().map(|c| (&c.name.text, &c.reading));
    let found = |(name, expr): (&String, &Expr)| {
        let ExprKind::Reading(phrase) = &expr.kind else {
            return None;
        };
        let extent = reader.extent(Some(phrase.window.as_ref()?)).ok()?;
        let intervals = extent.intervals.iter().map(|i| (i.start, i.end)).collect();
        Some(WindowResult {
            name: name.clone(),
            intervals,
        })
    };
    readings.chain(claims).filter_map(found).collect()
}

/// The phrase of a reading, behind its name where it has one.
fn phrase<'a>(plan: &Plan<'a>, expr: &'a Expr) -> Option<&'a Phrase> {
    match &expr.kind {
        ExprKind::Reading(phrase) => Some(phrase),
        ExprKind::Name(name) => {
            let readings = &plan.case.circuit.draft().readings;
            match &readings.iter().find(|r| r.name.text == *name)?.value.kind {
                ExprKind::Reading(phrase) => Some(phrase),
                _ => None,
            }
        }
        _ => None,
    }
}

/// Which extreme a claim is on.
#[derive(Clone, Copy, PartialEq)]
enum Side {
    High,
    Low,
    Both,
}

fn gates(reader: &Reader<'_>, phrase: &Phrase, channel: &Expr, claim: &ClaimResult) -> Vec<Gate> {
    let (signal, side) = match &phrase.measure {
        Measure::Highest(s) => (s, Side::High),
        Measure::Lowest(s) => (s, Side::Low),
        Measure::Largest(s) => (s, Side::Both),
        _ => return Vec::new(),
    };
    let (Ok(extent), Ok(known)) = (reader.extent(phrase.window.as_ref()), reader.signal(signal))
    else {
        return Vec::new();
    };
    if signal != channel {
        return Vec::new();
    }
    let window = extent.intervals.as_slice();
    let found = match side {
        Side::High => known.wave.highest(window),
        Side::Low => known.wave.lowest(window),
        Side::Both => known.wave.largest_in(window),
    };
    let Some(at) = found else {
        return Vec::new();
    };
    let gate = |level, above, every| Gate {
        claim: claim.name.clone(),
        level,
        above,
        every,
        intervals: window.iter().map(|i| (i.start, i.end)).collect(),
        extreme: extreme(at),
    };
    let down = side == Side::Both && at.value < 0.0;
    let mut made = Vec::new();
    if let Some(most) = claim.most {
        made.push(gate(most, true, side != Side::Low));
        if side == Side::Both {
            made.push(gate(-most, false, true));
        }
    }
    if let Some(least) = claim.least {
        let level = if down { -least } else { least };
        made.push(gate(level, down, side == Side::Low));
    }
    made.retain(|g| g.level.is_finite());
    made
}

fn extreme(found: Extremum) -> Extreme {
    Extreme {
        value: found.value,
        bound: 0.0,
        time: found.time,
    }
}

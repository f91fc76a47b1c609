//! Expressions within expressions, phrases and windows included, without recursion.

use crate::draft::{Applies, CaseValues, Draft, Relation};
use crate::expr::{Expr, ExprKind};
use crate::parts::{Control, PartKind, Switch};
use crate::phrase::{Level, Measure, Phrase, Window};
use crate::schedule::{Action, TriggerKind};
use crate::slots;
use crate::spread::Value;

/// Calls `visit` on each expression that stands directly within this one.
pub(crate) fn children<'a>(e: &'a Expr, visit: &mut dyn FnMut(&'a Expr)) {
    match &e.kind {
        ExprKind::Negative(a) => visit(a),
        ExprKind::Binary { left, right, .. } => {
            visit(left);
            visit(right);
        }
        ExprKind::Call { arguments, .. } => arguments.iter().for_each(visit),
        ExprKind::Points { argument, knots } => {
            visit(argument);
            for (x, y) in knots {
                visit(x);
                visit(y);
            }
        }
        ExprKind::Reading(phrase) => within(phrase, visit),
        _ => {}
    }
}

/// Calls `visit` on each expression in a slot of the phrase.
pub(crate) fn within<'a>(phrase: &'a Phrase, visit: &mut dyn FnMut(&'a Expr)) {
    use Measure as M;
    match &phrase.measure {
        M::Area(s)
        | M::Highest(s)
        | M::Lowest(s)
        | M::Largest(s)
        | M::PeakToPeak(s)
        | M::Mean(s)
        | M::Rms(s)
        | M::Final(s)
        | M::Undershoot(s)
        | M::Tilt(s)
        | M::Period(s)
        | M::StoredAt(s)
        | M::StoredJustBefore(s)
        | M::Steepest { signal: s, .. }
        | M::TimeOf { signal: s, .. } => visit(s),
        M::At {
            signal,
            time: other,
        }
        | M::JustBefore {
            signal,
            time: other,
        }
        | M::Width {
            signal,
            fraction: other,
        }
        | M::Overshoot {
            signal,
            over: other,
        }
        | M::Settling { signal, to: other } => {
            visit(signal);
            visit(other);
        }
        M::Crossing { signal, level, .. } | M::TimeSpent { signal, level, .. } => {
            visit(signal);
            let (Level::Value(x) | Level::OfLargest(x)) = level;
            visit(x);
        }
        M::Rise { signal, from, to }
        | M::Fall { signal, from, to }
        | M::FrontTime { signal, from, to }
        | M::VirtualOrigin { signal, from, to }
        | M::TimeToHalf { signal, from, to } => {
            visit(signal);
            visit(from);
            visit(to);
        }
        M::EnergyInto(_)
        | M::EnergyOutOf(_)
        | M::Charge(_)
        | M::GrossCharge(_)
        | M::Action(_)
        | M::Heat(_)
        | M::Duration => {}
    }
    match &phrase.window {
        Some(Window::Between(a, b)) => {
            visit(a);
            visit(b);
        }
        Some(Window::After(a) | Window::Before(a) | Window::Phase { signal: a, .. }) => visit(a),
        Some(Window::While(_)) | None => {}
    }
}

/// Calls `visit` on this expression and all within it, with how deep each stands.
pub(crate) fn each<'a>(e: &'a Expr, visit: &mut dyn FnMut(&'a Expr, usize)) {
    let mut stack = vec![(e, 1)];
    while let Some((e, depth)) = stack.pop() {
        visit(e, depth);
        children(e, &mut |c| stack.push((c, depth + 1)));
    }
}

/// Calls `visit` with each name used, phrases included, and how deep it stands.
pub(crate) fn names<'a>(e: &'a Expr, visit: &mut dyn FnMut(&'a str, usize)) {
    each(e, &mut |e, depth| {
        if let ExprKind::Name(name) = &e.kind {
            visit(name, depth);
        }
    });
}

/// Whether anything in it meets the test.
pub(crate) fn any(e: &Expr, test: &dyn Fn(&Expr) -> bool) -> bool {
    let mut found = false;
    each(e, &mut |e, _| found |= test(e));
    found
}

/// Calls `visit` with each whole expression of a draft.
pub(crate) fn all<'a>(draft: &'a Draft, visit: &mut dyn FnMut(&'a Expr)) {
    for l in &draft.lets {
        value(&l.value, visit);
    }
    for part in &draft.parts {
        for slot in slots::slots(&part.kind) {
            value(slot.value, visit);
        }
        match &part.kind {
            PartKind::Switch(Switch {
                control: Control::Schedule { actions, .. },
                ..
            }) => schedule(actions, visit),
            PartKind::Changeover(c) => schedule(&c.actions, visit),
            _ => {}
        }
    }
    draft
        .signals
        .iter()
        .chain(&draft.readings)
        .for_each(|n| visit(&n.value));
    for claim in &draft.claims {
        visit(&claim.reading);
        claim.allowing.iter().for_each(&mut *visit);
        claim.in_shots.iter().for_each(&mut *visit);
        relation(&claim.relation, visit);
        for condition in &claim.when {
            if let Applies::Compare { left, right, .. } = condition {
                visit(left);
                visit(right);
            }
        }
    }
    for cases in &draft.cases {
        match &cases.values {
            CaseValues::Rows(rows) => rows.iter().flatten().for_each(&mut *visit),
            CaseValues::Range { from, to, .. } => {
                visit(from);
                visit(to);
            }
        }
    }
    if let Some(a) = &draft.adjust {
        [&a.from, &a.to, &a.reading, &a.value]
            .into_iter()
            .for_each(&mut *visit);
    }
    let run = &draft.run;
    run.span
        .iter()
        .chain(&run.error)
        .chain(&run.step)
        .chain(run.channels.iter().flatten())
        .for_each(visit);
}

fn relation<'a>(relation: &'a Relation, visit: &mut dyn FnMut(&'a Expr)) {
    match relation {
        Relation::AtMost(x) | Relation::AtLeast(x) => visit(x),
        Relation::Between(x, y) => {
            visit(x);
            visit(y);
        }
        Relation::Within {
            share,
            amount,
            points,
            of,
        } => {
            share
                .iter()
                .chain(amount)
                .chain(points)
                .for_each(&mut *visit);
            visit(of);
        }
    }
}

fn value<'a>(value: &'a Value, visit: &mut dyn FnMut(&'a Expr)) {
    visit(&value.nominal);
    let spread = value.spread.as_ref();
    spread
        .into_iter()
        .flat_map(|s| s.kind.amounts())
        .for_each(visit);
}

fn schedule<'a>(actions: &'a [Action], visit: &mut dyn FnMut(&'a Expr)) {
    for trigger in actions.iter().flat_map(|a| &a.triggers) {
        match &trigger.kind {
            TriggerKind::At(v) | TriggerKind::Delay { delay: v, .. } => value(v, visit),
            TriggerKind::When { signal, level, .. } => {
                visit(signal);
                value(level, visit);
            }
            TriggerKind::ZeroCurrent { after } => after.iter().for_each(&mut *visit),
        }
    }
}

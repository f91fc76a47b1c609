//! Schedules with numbers in: stated instants rise strictly, none is below 0 s.

use super::Setter;
use crate::dimension::Dimension;
use crate::expr::Expr;
use crate::fault::{Bound, FaultKind};
use crate::formula::Formula;
use crate::parts::{Part, PartKind};
use crate::schedule::{Action, Change, Trigger, TriggerKind};
use crate::setup::{SetAction, SetTrigger};

impl Setter<'_> {
    /// A part's actions; `None` where a value in them is at fault.
    pub fn actions(&mut self, part: &Part, actions: &[Action]) -> Option<Vec<SetAction>> {
        let (mut set, mut whole, mut before) = (Vec::with_capacity(actions.len()), true, None);
        for action in actions {
            let mut triggers = Vec::with_capacity(action.triggers.len());
            for trigger in &action.triggers {
                let found = self.trigger(part, trigger);
                if let Some(SetTrigger::At(time)) = found {
                    self.rising(trigger, &mut before, time);
                    self.within_span(part, trigger, time);
                }
                whole &= found.is_some();
                triggers.extend(found);
            }
            set.push(SetAction {
                state: state_after(part, &action.change),
                triggers,
            });
        }
        whole.then_some(set)
    }

    fn rising(&mut self, trigger: &Trigger, before: &mut Option<f64>, time: f64) {
        if let Some(earlier) = *before
            && time <= earlier
        {
            self.fault(
                FaultKind::InstantOrder {
                    earlier,
                    later: time,
                }
                .at(value_span(trigger)),
            );
        }
        *before = Some(time);
    }

    fn within_span(&mut self, part: &Part, trigger: &Trigger, time: f64) {
        if let Some(span) = self.span
            && time > span
        {
            let kind = FaultKind::PastSpan {
                part: part.name.text.clone(),
                time,
                span,
            };
            self.remarks.push(kind.at(value_span(trigger)));
        }
    }

    fn trigger(&mut self, part: &Part, trigger: &Trigger) -> Option<SetTrigger> {
        let name = &part.name.text;
        match &trigger.kind {
            TriggerKind::At(value) => {
                let what = format!("an instant of `{name}`");
                self.value(value, &what, Dimension::SECOND, Bound::AtLeast(0.0))
                    .map(SetTrigger::At)
            }
            TriggerKind::When {
                signal,
                passing,
                level,
            } => {
                let what = format!("a level of `{name}`");
                let dimension = self
                    .type_of(&level.nominal)
                    .map_or(Dimension::NONE, |t| t.dimension);
                let level = self.value(level, &what, dimension, Bound::Any);
                Some(SetTrigger::When {
                    signal: self.formula(signal, &format!("the signal that `{name}` watches"))?,
                    passing: *passing,
                    level: level?,
                })
            }
            TriggerKind::Delay { delay, edge } => {
                let mut formula = self.time(&delay.nominal, &format!("a delay of `{name}`"));
                if let Some(Formula::Number(_)) = formula {
                    self.value(
                        delay,
                        &format!("a delay of `{name}`"),
                        Dimension::SECOND,
                        Bound::AtLeast(0.0),
                    )?;
                }
                if let Some(shift) = self.shift_of(delay) {
                    formula = formula.map(|f| shift.of_formula(f));
                }
                Some(SetTrigger::Delay {
                    delay: formula?,
                    edge: self.numbers.edge(edge).ok()?,
                })
            }
            TriggerKind::ZeroCurrent { after: None } => {
                Some(SetTrigger::ZeroCurrent { after: None })
            }
            TriggerKind::ZeroCurrent { after: Some(e) } => {
                let after = self.time(e, &format!("an instant of `{name}`"))?;
                if let Formula::Number(_) = after {
                    self.number(
                        e,
                        &format!("an instant of `{name}`"),
                        Dimension::SECOND,
                        Bound::AtLeast(0.0),
                    )?;
                }
                Some(SetTrigger::ZeroCurrent { after: Some(after) })
            }
        }
    }

    /// A time of numbers and edges.
    fn time(&mut self, e: &Expr, what: &str) -> Option<Formula> {
        self.formula(e, what)
    }
}

fn value_span(trigger: &Trigger) -> crate::Span {
    match &trigger.kind {
        TriggerKind::At(value) => value.nominal.span,
        _ => trigger.span,
    }
}

/// The state that an action brings: 0 open, 1 closed; of a changeover the contact's index.
fn state_after(part: &Part, change: &Change) -> usize {
    match (change, &part.kind) {
        (Change::MovesTo(node), PartKind::Changeover(p)) => usize::from(p.second == *node),
        (Change::Closes, _) => 1,
        _ => 0,
    }
}

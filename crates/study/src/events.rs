//! The event log of a shot, with a bound on each instant.
//!
//! An event is the same on two meshes where the same part enters the same state for the same
//! time in order. A stated instant is exact: it is the same on every mesh. One that was found (a
//! level, a zero, a diode), or that follows such a one, is extrapolated like a reading, with what
//! flowed and what was lost in it.

use std::collections::HashMap;

use pulsewright_engine::Event;

use crate::bounds::{Estimate, estimate};
use crate::series::Rules;

/// The event log on each mesh, coarsest first.
#[derive(Clone, Debug, Default)]
pub struct Log {
    meshes: Vec<Vec<Event>>,
}

/// Part, state, and how many of these came before.
type Key = (usize, u8, usize);

fn keyed(events: &[Event]) -> Vec<Key> {
    let mut seen: HashMap<(usize, u8), usize> = HashMap::new();
    let mut key = |e: &Event| {
        let n = seen.entry((e.part, e.state)).or_default();
        *n += 1;
        (e.part, e.state, *n - 1)
    };
    events.iter().map(&mut key).collect()
}

impl Log {
    /// Adds the log of the next mesh.
    pub fn push(&mut self, events: &[Event]) {
        self.meshes.push(events.to_vec());
    }

    /// The events of the shot that is reported, each with the bound on its instant, s.
    #[must_use]
    pub fn result(&self, reported: &[Event], span: f64, rules: Rules) -> Vec<(Event, f64)> {
        let maps: Vec<HashMap<Key, &Event>> = self
            .meshes
            .iter()
            .map(|m| keyed(m).into_iter().zip(m).collect())
            .collect();
        let rows = keyed(reported).into_iter().zip(reported);
        rows.map(|(key, event)| {
            let mut row: Vec<&Event> = maps
                .iter()
                .rev()
                .map_while(|m| m.get(&key).copied())
                .collect();
            row.reverse();
            settled(event, &row, span, rules)
        })
        .collect()
    }
}

fn settled(event: &Event, row: &[&Event], span: f64, rules: Rules) -> (Event, f64) {
    let of = |read: &dyn Fn(&Event) -> f64| -> Estimate {
        let values: Vec<f64> = row.iter().map(|e| read(e)).collect();
        let last = values.last().copied().unwrap_or(0.0);
        estimate(
            &values,
            rules.order,
            rules.precision.rounding(last, last.abs()),
        )
    };
    let time = of(&|e| e.time);
    let stated = !event.found && row.iter().all(|e| e.time == event.time);
    let bound = if stated {
        0.0
    } else if rules.fixed {
        (event.time - time.value).abs() + time.bound
    } else {
        time.bound
    };
    if rules.fixed {
        return (event.clone(), bound.min(span));
    }
    let made = Event {
        time: if stated { event.time } else { time.value },
        charge: of(&|e| e.charge).value,
        flux: of(&|e| e.flux).value,
        loss: of(&|e| e.loss).value,
        ..event.clone()
    };
    (made, bound.min(span))
}

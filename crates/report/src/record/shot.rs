//! What happened in a shot, in a record: events, balance, stress, hazards, remarks.

use super::{Finite, Ordered, line_of};
use pulsewright_study::outcome::{BalanceResult, Extreme, Fired, Hazard, Remark, Stress};
use serde::{Deserialize, Serialize};

/// A line of the event log.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct EventRecord {
    /// The instant, s.
    pub time: Option<Finite>,
    /// The bound on the instant, s; 0 where it is stated.
    pub bound: Option<Finite>,
    /// The part.
    pub part: String,
    /// What it did: `closes`, `opens`, `moves to NODE`, `conducts`, `blocks`.
    pub change: String,
    /// Charge through it in the impulse, C.
    pub charge: Option<Finite>,
    /// Flux across it in the impulse, Wb.
    pub flux: Option<Finite>,
    /// Energy lost in it, J.
    pub loss: Option<Finite>,
}

/// The event log of a shot.
pub(crate) fn events(fired: &Fired) -> Vec<EventRecord> {
    let named = |index: usize| fired.parts.get(index).cloned().unwrap_or_default();
    let entry = |(k, (event, bound)): (usize, &(pulsewright_engine::Event, f64))| EventRecord {
        time: Finite::new(event.time),
        bound: Finite::bound(*bound),
        part: named(event.part),
        change: fired.changes.get(k).cloned().unwrap_or_default(),
        charge: Finite::new(event.charge),
        flux: Finite::new(event.flux),
        loss: Finite::new(event.loss),
    };
    fired.events.iter().enumerate().map(entry).collect()
}

/// Where the joules went; all in J.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct BalanceRecord {
    /// Stored at the start, as stated.
    pub stored_start: Option<Finite>,
    /// Stored at the end.
    pub stored_end: Option<Finite>,
    /// Out of each source.
    pub supplied: Ordered<Option<Finite>>,
    /// Heat in each part's resistances, without what events lose.
    pub dissipated: Ordered<Option<Finite>>,
    /// Lost at events.
    pub lost_at_events: Option<Finite>,
    /// What does not add up.
    pub residual: Option<Finite>,
    /// The bound on the residual.
    pub bound: Option<Finite>,
}

impl From<&BalanceResult> for BalanceRecord {
    fn from(balance: &BalanceResult) -> Self {
        let parts = |list: &[(String, f64)]| {
            Ordered(
                list.iter()
                    .map(|(n, j)| (n.clone(), Finite::new(*j)))
                    .collect(),
            )
        };
        BalanceRecord {
            stored_start: Finite::new(balance.stored_start),
            stored_end: Finite::new(balance.stored_end),
            supplied: parts(&balance.supplied),
            dissipated: parts(&balance.dissipated),
            lost_at_events: Finite::new(balance.lost_at_events),
            residual: Finite::new(balance.residual),
            bound: Finite::bound(balance.bound),
        }
    }
}

/// What a part had to stand.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct StressRecord {
    /// The part.
    pub part: String,
    /// Largest voltage across it, V.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub voltage: Option<ExtremeRecord>,
    /// Largest current through it, A.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub current: Option<ExtremeRecord>,
    /// Largest power into it, W.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub power: Option<ExtremeRecord>,
    /// Energy into it, J.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub energy: Option<TotalRecord>,
    /// Action, A²·s.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub action: Option<TotalRecord>,
}

/// A largest value and its instant.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ExtremeRecord {
    /// The value; `null` where it is without bound.
    pub value: Option<Finite>,
    /// The bound on its numerical error.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub bound: Option<Finite>,
    /// Why it is without bound.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub unbounded: Option<String>,
    /// The instant, s.
    pub time: Option<Finite>,
}

/// A total over the span.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct TotalRecord {
    /// The value; `null` where it is without bound.
    pub value: Option<Finite>,
    /// The bound on its numerical error.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub bound: Option<Finite>,
    /// Why it is without bound.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub unbounded: Option<String>,
}

const IMPULSE: &str = "an impulse";

impl From<&Extreme> for ExtremeRecord {
    fn from(extreme: &Extreme) -> Self {
        let total = TotalRecord::from(&(extreme.value, extreme.bound));
        ExtremeRecord {
            value: total.value,
            bound: total.bound,
            unbounded: total.unbounded,
            time: Finite::new(extreme.time),
        }
    }
}

impl From<&(f64, f64)> for TotalRecord {
    fn from((value, bound): &(f64, f64)) -> Self {
        let bound = Finite::bound(*bound);
        let value = bound.and_then(|_| Finite::new(*value));
        TotalRecord {
            value,
            bound: value.and(bound),
            unbounded: value.is_none().then(|| IMPULSE.to_owned()),
        }
    }
}

impl From<&Stress> for StressRecord {
    fn from(stress: &Stress) -> Self {
        StressRecord {
            part: stress.part.clone(),
            voltage: stress.voltage.as_ref().map(Into::into),
            current: stress.current.as_ref().map(Into::into),
            power: stress.power.as_ref().map(Into::into),
            energy: stress.energy.as_ref().map(Into::into),
            action: stress.action.as_ref().map(Into::into),
        }
    }
}

/// A stored-energy hazard.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct HazardRecord {
    /// The part, or `the circuit`.
    pub part: String,
    /// Its highest voltage, V.
    pub voltage: Option<Finite>,
    /// The most energy it held, J.
    pub energy: Option<Finite>,
    /// From when on its voltage stays at or below 60 V, s; `null`: never in sight.
    #[serde(rename = "at_most_60_V_from")]
    pub at_most_60_v_from: Option<Finite>,
    /// Whether that instant was estimated beyond the span.
    pub estimated: bool,
}

impl From<&Hazard> for HazardRecord {
    fn from(hazard: &Hazard) -> Self {
        HazardRecord {
            part: hazard.part.clone(),
            voltage: Finite::new(hazard.voltage),
            energy: Finite::new(hazard.energy),
            at_most_60_v_from: hazard.at_most_60_v_from.and_then(Finite::new),
            estimated: hazard.estimated,
        }
    }
}

/// A remark on the model or the run.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct RemarkRecord {
    /// Its code.
    pub code: String,
    /// Its text.
    pub text: String,
    /// The line of the netlist that it is about.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub line: Option<u64>,
}

impl RemarkRecord {
    /// A remark with its line in `text`.
    pub(crate) fn new(remark: &Remark, text: &str) -> Self {
        let placed = remark.span.is_some() && !text.is_empty();
        RemarkRecord {
            code: remark.code.clone(),
            text: remark.text.clone(),
            line: placed.then(|| line_of(text, remark.span.start)).flatten(),
        }
    }
}

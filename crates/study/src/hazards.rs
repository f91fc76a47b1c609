//! Stored-energy hazards: what holds more than 60 V, and a circuit that holds more than 10 J.
//!
//! A capacitor holds `v = q / C`, whatever its series resistance hides at the terminals. From when
//! on it stays at or below 60 V is read off the shot; where it is still above at the end it is
//! estimated from the decay there, `t + τ ln(|v| / 60 V)` with `τ = -v / v'`, and marked so; where
//! it does not decay, it is never in sight.

use pulsewright_circuit::{Formula, Probe};

use crate::outcome::Hazard;
use crate::plan::Plan;
use crate::waveform::{Interval, Record, Wave};

/// The voltage above which a part is a hazard, V.
const TOUCH: f64 = 60.0;
/// The energy above which a circuit is a hazard, J.
const ENERGY: f64 = 10.0;

/// The hazards of a shot: parts first, then the circuit.
#[must_use]
pub fn hazards(plan: &Plan<'_>, record: &Record<'_>) -> Vec<Hazard> {
    let mut found: Vec<Hazard> = plan
        .stores
        .iter()
        .filter_map(|(part, farads)| of_capacitor(plan, record, *part, *farads))
        .collect();
    let energy = Wave::of(&Formula::Probe(Probe::EnergyStored), record).largest();
    if energy > ENERGY {
        let latest = found
            .iter()
            .map(|h| h.at_most_60_v_from)
            .try_fold(0.0_f64, |a, b| Some(a.max(b?)));
        let voltage = found.iter().fold(0.0_f64, |a, h| a.max(h.voltage));
        found.push(Hazard {
            part: "the circuit".to_owned(),
            voltage,
            energy,
            at_most_60_v_from: latest,
            estimated: found.iter().any(|h| h.estimated),
        });
    }
    found
}

fn of_capacitor(plan: &Plan<'_>, record: &Record<'_>, part: usize, farads: f64) -> Option<Hazard> {
    let charge = Formula::Probe(Probe::ChargeHeld(part));
    let voltage = Formula::Divide(Box::new(charge), Box::new(Formula::Number(farads)));
    let wave = Wave::of(&voltage, record);
    let highest = wave.largest();
    if highest <= TOUCH {
        return None;
    }
    let name = plan.case.setup.parts.get(part)?.name.clone();
    let (at_most_60_v_from, estimated) = safe_from(&wave, record.end());
    let energy = 0.5 * farads * highest * highest;
    Some(Hazard {
        part: name,
        voltage: highest,
        energy,
        at_most_60_v_from,
        estimated,
    })
}

/// From when on the voltage stays at or below 60 V, s, and whether that was estimated.
fn safe_from(wave: &Wave<'_>, end: f64) -> (Option<f64>, bool) {
    let all = [Interval { start: 0.0, end }];
    let last = |k: f64| {
        wave.runs(&all, k, TOUCH)
            .into_iter()
            .rev()
            .find(|r| r.sign > 0)
            .map(|r| r.end)
    };
    let above = [last(1.0), last(-1.0)]
        .into_iter()
        .flatten()
        .fold(0.0, f64::max);
    let (v, slope) = (wave.before(end), wave.slope_before(end));
    if v.abs() <= TOUCH || above < end {
        return (Some(above), false);
    }
    let tau = -v / slope;
    if tau > 0.0 && tau.is_finite() && tau < 1e6 * end.max(1.0) {
        (Some(end + tau * (v.abs() / TOUCH).ln()), true)
    } else {
        (None, false)
    }
}

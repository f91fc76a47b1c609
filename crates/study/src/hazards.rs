//! Stored-energy hazards: what holds more than 60 V, and a circuit that holds more than 10 J.
//!
//! A capacitor holds `v = q / C`, whatever its series resistance hides at the terminals. From when
//! on it stays at or below 60 V is read off the shot; where it is still above at the end it is
//! estimated from the decay there, `t + τ ln(|v| / 60 V)` with `τ = -v / v'`, and marked so; where
//! it does not decay, or rings and may come back, it is never in sight.

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
    let mut runs: Vec<(f64, f64)> = [1.0, -1.0]
        .into_iter()
        .flat_map(|k| wave.runs(&all, k, TOUCH))
        .filter(|r| r.sign > 0)
        .map(|r| (r.start, r.end))
        .collect();
    runs.sort_by(|a, b| a.0.total_cmp(&b.0));
    let above = runs.last().map_or(0.0, |r| r.1);
    // A ring that has come back after pauses as long as the one at the end may come back again.
    let pause = runs
        .windows(2)
        .filter_map(|w| Some(w.get(1)?.0 - w.first()?.1))
        .fold(0.0, f64::max);
    if above < end && end - above <= 1.5 * pause {
        return (None, false);
    }
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

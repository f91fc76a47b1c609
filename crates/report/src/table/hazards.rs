//! Hazards: what holds more than 60 V or 10 J, and until when. Apart from remarks, so that
//! nobody learns to skip them.

use crate::look::{Look, Tone, heading, paragraph};
use crate::number::brief;
use pulsewright_study::outcome::Hazard;

/// What stands under hazards, in help and in reports: what a simulation is not.
pub const CAUTIONS: &str = "A simulation is no safety approval and no conformity assessment. Circuits that store energy are \
built and tested by qualified people under the standards and local rules that apply. This program is no medical device; \
its use in a device's file is the manufacturer's responsibility.";

/// Significant digits: a hazard is judged by its size.
const DIGITS: i32 = 4;

/// Adds the hazards of one or more shots; the worst of each part comes from the caller.
pub(super) fn hazards(out: &mut String, look: Look, hazards: &[Hazard]) {
    if hazards.is_empty() {
        return;
    }
    heading(out, look, "hazards", Tone::Bad);
    for hazard in hazards.iter().filter(|h| !is_said(h, hazards)) {
        paragraph(out, look, 2, &in_words(hazard), Tone::Plain);
    }
    paragraph(out, look, 2, CAUTIONS, Tone::Faint);
}

/// Whether a hazard of the whole circuit says no more than one of its parts'.
pub(crate) fn is_said(hazard: &Hazard, all: &[Hazard]) -> bool {
    let same = |other: &Hazard| {
        Hazard {
            part: hazard.part.clone(),
            ..other.clone()
        } == *hazard
    };
    hazard.part == "the circuit" && all.iter().any(|h| h.part != hazard.part && same(h))
}

/// `bank: up to 4.7 kV and 353.4 J; at most 60 V from 21.3 ms on`
pub(crate) fn in_words(hazard: &Hazard) -> String {
    let energy = brief(hazard.energy, "J", DIGITS);
    if hazard.voltage == 0.0 {
        return format!("{}: up to {energy}", hazard.part);
    }
    let size = format!(
        "{}: up to {} and {energy}",
        hazard.part,
        brief(hazard.voltage, "V", DIGITS)
    );
    match hazard.at_most_60_v_from {
        Some(time) if hazard.estimated => {
            format!(
                "{size}; at most 60 V from about {} on (estimated: past the span)",
                brief(time, "s", 3)
            )
        }
        Some(time) => format!("{size}; at most 60 V from {} on", brief(time, "s", DIGITS)),
        None => format!("{size}; never seen to fall to 60 V: it stays charged"),
    }
}

/// The worst of each part over several shots: highest voltage, most energy, latest instant.
pub(crate) fn worst<'a>(shots: impl IntoIterator<Item = &'a [Hazard]>) -> Vec<Hazard> {
    let mut worst: Vec<Hazard> = Vec::new();
    for hazard in shots.into_iter().flatten() {
        match worst.iter_mut().find(|w| w.part == hazard.part) {
            Some(known) => raise(known, hazard),
            None => worst.push(hazard.clone()),
        }
    }
    worst
}

fn raise(known: &mut Hazard, other: &Hazard) {
    known.voltage = known.voltage.max(other.voltage);
    known.energy = known.energy.max(other.energy);
    match (known.at_most_60_v_from, other.at_most_60_v_from) {
        (Some(a), Some(b)) if b > a => {
            (known.at_most_60_v_from, known.estimated) = (Some(b), other.estimated)
        }
        (Some(_), None) => (known.at_most_60_v_from, known.estimated) = (None, false),
        _ => {}
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn bank(at_most_60_v_from: Option<f64>, estimated: bool) -> Hazard {
        Hazard {
            part: "bank".to_owned(),
            voltage: 4700.0,
            energy: 353.44,
            at_most_60_v_from,
            estimated,
        }
    }

    #[test]
    fn a_hazard_says_until_when() {
        assert_eq!(
            in_words(&bank(Some(0.0213), false)),
            "bank: up to 4.7 kV and 353.4 J; at most 60 V from 21.3 ms on"
        );
        let estimated = in_words(&bank(Some(30.0), true));
        assert!(
            estimated.ends_with("from about 30 s on (estimated: past the span)"),
            "{estimated}"
        );
        assert!(
            in_words(&bank(None, false)).ends_with("never seen to fall to 60 V: it stays charged")
        );
    }

    #[test]
    fn the_worst_of_several_shots_is_the_latest() {
        let shots = [
            vec![bank(Some(0.1), false)],
            vec![bank(Some(0.3), true)],
            vec![bank(Some(0.2), false)],
        ];
        assert_eq!(
            worst(shots.iter().map(Vec::as_slice)),
            [bank(Some(0.3), true)]
        );
        let shots = [vec![bank(None, false)], vec![bank(Some(0.3), true)]];
        assert_eq!(worst(shots.iter().map(Vec::as_slice)), [bank(None, false)]);
    }
}

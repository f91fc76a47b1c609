//! Readings and claims of one shot.
//!
//! ```text
//! readings
//!   yield  0.882352900      ± 13 × 10⁻⁹  energy into chest / energy held by bank …
//!
//! claims
//!   dose   holds  311.860000 J  ± 12 µJ  margin 63.140000 J
//!     energy into chest is within 25 % or 3 J of 300 J; answers REQ-12
//! ```

use super::{Align, Cell, Grid, answer, tone, why};
use crate::look::{Look, Tone, heading, paragraph};
use crate::number::Scale;
use crate::record::unit_of;
use pulsewright_study::outcome::{ClaimResult, Found, ReadingResult, Verdict};

/// Adds the named readings.
pub(super) fn readings(out: &mut String, look: Look, readings: &[ReadingResult]) {
    if readings.is_empty() {
        return;
    }
    heading(out, look, "readings", Tone::Heading);
    let mut grid = Grid::new([Align::Left, Align::Point, Align::Left, Align::Text]);
    for reading in readings {
        let [value, bound] = answer(&reading.answer, &reading.text);
        let text = match why(&reading.answer) {
            Some(why) => format!("{}: {why}", reading.text),
            None => reading.text.clone(),
        };
        grid.row([reading.name.as_str().into(), value, bound, text.into()]);
    }
    grid.write(out, look);
}

/// Adds the claims, each with what it asks under it.
pub(super) fn claims(out: &mut String, look: Look, claims: &[ClaimResult]) {
    if claims.is_empty() {
        return;
    }
    heading(out, look, "claims", Tone::Heading);
    let mut grid = Grid::new([
        Align::Left,
        Align::Left,
        Align::Point,
        Align::Left,
        Align::Left,
    ]);
    for claim in claims {
        let [value, bound] = answer(&claim.answer, &claim.text);
        let verdict = Cell::toned(claim.verdict.words(), tone(claim.verdict));
        grid.row([
            claim.name.as_str().into(),
            verdict,
            value,
            bound,
            margin(claim),
        ]);
    }
    grid.write(out, look);
    out.push('\n');
    for claim in claims {
        paragraph(out, look, 2, &asked(claim), Tone::Plain);
        if let Some(reason) = reason(claim) {
            paragraph(out, look, 4, reason, Tone::Open);
        }
    }
}

/// `margin 63.140000 J`, to the place of the value.
pub(super) fn margin(claim: &ClaimResult) -> Cell {
    let bound = match claim.answer.found {
        Found::Value { bound, .. } => Some(bound),
        _ => None,
    };
    match claim
        .margin
        .filter(|_| claim.verdict != Verdict::DoesNotApply)
    {
        Some(margin) if margin.is_finite() => {
            let scale = Scale::of(&unit_of(&claim.answer, &claim.text), [margin]);
            format!("margin {}", scale.brief(margin, bound, 6)).into()
        }
        _ => Cell::default(),
    }
}

/// What a claim asks, and of which requirements.
pub(super) fn asked(claim: &ClaimResult) -> String {
    stated(&claim.name, &claim.text, &claim.relation, &claim.answers)
}

/// `dose: energy into chest is at least 5 J; answers REQ-1`
pub(super) fn stated(name: &str, text: &str, relation: &str, answers: &[String]) -> String {
    let stated = format!("{name}: {text} {relation}");
    if answers.is_empty() {
        stated
    } else {
        format!("{stated}; answers {}", answers.join(", "))
    }
}

/// Why, where the numbers do not say it.
pub(crate) fn reason(claim: &ClaimResult) -> Option<&str> {
    claim.reason.as_deref().or_else(|| why(&claim.answer))
}

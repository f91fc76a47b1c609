//! The page of one shot.

use super::balance::balance;
use super::claims::{claims, readings};
use super::events::events;
use super::hazards::hazards;
use super::opinion::opinion;
use super::stress::stress;
use super::{adjusted_in_words, remarks, set_in_words, stands_in_words};
use crate::look::{Look, Tone, heading, paragraph};
use crate::number::{brief, quantity};
use crate::record::Origin;
use pulsewright_study::outcome::Fired;

/// What `fire` prints: readings, claims, events, balance, stress, hazards, remarks, defaults.
#[must_use]
pub fn fire(fired: &Fired, origin: &Origin<'_>, look: Look) -> String {
    fire_with(fired, origin, look, "")
}

/// What `fire` prints on a terminal: the same, with a picture of the channels above the readings.
#[must_use]
pub fn fire_with(fired: &Fired, origin: &Origin<'_>, look: Look, picture: &str) -> String {
    let mut out = String::new();
    opening(&mut out, look, origin, &run(fired));
    if !fired.set.is_empty() {
        paragraph(
            &mut out,
            look,
            0,
            &format!("with {}", set_in_words(&fired.set)),
            Tone::Plain,
        );
    }
    if !fired.adjusted.is_empty() {
        let words = format!("adjusted: {}", adjusted_in_words(&fired.adjusted));
        paragraph(&mut out, look, 0, &words, Tone::Plain);
    }
    if !fired.stands.is_empty() {
        let at = format!("at {}", stands_in_words(&fired.stands));
        paragraph(&mut out, look, 0, &at, Tone::Plain);
    }
    hazards(&mut out, look, &fired.hazards);
    if !picture.is_empty() {
        out.push('\n');
        out.push_str(picture);
    }
    readings(&mut out, look, &fired.readings);
    claims(&mut out, look, &fired.claims);
    events(&mut out, look, fired);
    balance(&mut out, look, &fired.balance);
    opinion(&mut out, look, std::slice::from_ref(fired));
    stress(&mut out, look, &fired.stress);
    remarks(&mut out, look, &fired.remarks, origin.text);
    defaults(&mut out, look, &fired.defaults);
    out
}

/// Adds the title and how it was run.
pub(super) fn opening(out: &mut String, look: Look, origin: &Origin<'_>, run: &str) {
    if let Some(title) = origin.title {
        paragraph(out, look, 0, title, Tone::Heading);
    }
    paragraph(out, look, 0, run, Tone::Plain);
}

/// `30 ms by trapezoidal rule, 1234 steps of 12 ns to 34 µs`
fn run(fired: &Fired) -> String {
    let run = format!(
        "{} by {}, {} steps",
        quantity(fired.span, "s"),
        fired.method,
        fired.shot.steps
    );
    if fired.shot.steps == 0 {
        return run;
    }
    let [least, most] =
        [fired.shot.smallest_step, fired.shot.largest_step].map(|h| brief(h, "s", 3));
    format!("{run} of {least} to {most}")
}

/// Adds the defaults that were taken.
pub(super) fn defaults(out: &mut String, look: Look, defaults: &[String]) {
    if defaults.is_empty() {
        return;
    }
    heading(out, look, "defaults taken", Tone::Heading);
    for default in defaults {
        paragraph(out, look, 2, default, Tone::Plain);
    }
}

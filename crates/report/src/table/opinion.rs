//! What another method says of the readings: one sentence over all cases.

use crate::look::{Look, Tone, paragraph};
use pulsewright_study::outcome::{Fired, SecondOpinion};

/// Adds the second opinion on one shot or on every case.
pub(super) fn opinion(out: &mut String, look: Look, cases: &[Fired]) {
    for said in opinion_in_words(cases) {
        out.push('\n');
        paragraph(out, look, 0, &said, Tone::Plain);
    }
}

/// The sentences of it.
pub(crate) fn opinion_in_words(cases: &[Fired]) -> Vec<String> {
    let mut words = Vec::new();
    let asked: Vec<&SecondOpinion> = cases
        .iter()
        .filter_map(|c| c.second_opinion.as_ref())
        .collect();
    let missing: Vec<&String> = asked.iter().filter_map(|o| o.missing.as_ref()).collect();
    let of = if asked.len() == 1 {
        String::new()
    } else {
        format!(" on {} of {} cases", missing.len(), asked.len())
    };
    if let Some(why) = missing.first() {
        words.push(format!("no second opinion{of}: {why}"));
    }
    let most = asked
        .iter()
        .filter_map(|o| Some((o, o.largest.as_ref()?)))
        .max_by(|a, b| a.1.share.total_cmp(&b.1.share));
    if let Some((opinion, most)) = most {
        words.push(format!(
            "second opinion: {} agrees; {} differs most, by {} of both bounds",
            opinion.method,
            most.reading,
            percent(most.share),
        ));
    }
    words
}

/// A share in percent, one digit where it is small.
fn percent(share: f64) -> String {
    let percent = 100.0 * share;
    if percent == 0.0 {
        "nothing".to_owned()
    } else if percent < 0.1 {
        "less than 0.1 %".to_owned()
    } else if percent < 10.0 {
        format!("{percent:.1} %")
    } else {
        format!("{percent:.0} %")
    }
}

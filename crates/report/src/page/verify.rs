//! A page against a fresh one of the same netlist.
//!
//! Pages of one build are the same in every byte or they are not what the program wrote. Where they
//! differ, the records inside say whether the numbers do: of the input, the program, the verdicts,
//! or values further apart than their bounds allow.

use crate::record::{AnswerRecord, Finite, JudgeRecord};

/// What differs between a page and a fresh one.
#[derive(Clone, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Difference {
    /// The page holds no record of this kind.
    NoRecord,
    /// Something in the records, in words.
    Record(String),
    /// The records agree within their bounds; something else on the page is not as written.
    Page,
}

/// Compares a page with a fresh one; nothing where they are the same.
#[must_use]
pub fn verify(page: &str, fresh: &str) -> Vec<Difference> {
    if page == fresh {
        return Vec::new();
    }
    let (Some(page), Some(fresh)) = (embedded(page), embedded(fresh)) else {
        return vec![Difference::NoRecord];
    };
    let mut found: Vec<Difference> = Vec::new();
    let mut say = |text: String| found.push(Difference::Record(text));
    if page.input.sha256 != fresh.input.sha256 {
        say("the netlist's SHA-256 is another".to_owned());
    }
    if page.input != fresh.input {
        say("its title or the let-values set from outside differ".to_owned());
    }
    if page.program != fresh.program {
        say(format!(
            "it was written by {} {}",
            page.program.name, page.program.version
        ));
    }
    if page.cases.len() != fresh.cases.len() || page.claims.len() != fresh.claims.len() {
        say("it has another number of cases or claims".to_owned());
    }
    for (a, b) in page.claims.iter().zip(&fresh.claims) {
        if (&a.name, &a.verdict) != (&b.name, &b.verdict) {
            say(format!(
                "claim {}: {} on the page, {} now",
                b.name, a.verdict, b.verdict
            ));
        }
    }
    for (k, (a, b)) in page.cases.iter().zip(&fresh.cases).enumerate() {
        let claims = a.claims.iter().zip(&b.claims);
        for (a, b) in claims.filter(|(a, b)| apart(&a.answer, &b.answer) || a.verdict != b.verdict)
        {
            say(format!(
                "case {}, claim {}: {} and {}",
                k + 1,
                b.name,
                said(&a.answer),
                said(&b.answer)
            ));
        }
        let readings = a.readings.iter().zip(&b.readings);
        for (a, b) in readings.filter(|(a, b)| apart(&a.answer, &b.answer)) {
            say(format!(
                "case {}, reading {}: {} and {}",
                k + 1,
                b.name,
                said(&a.answer),
                said(&b.answer)
            ));
        }
    }
    if found.is_empty() {
        found.push(Difference::Page);
    }
    found
}

/// The record that a page holds.
fn embedded(page: &str) -> Option<JudgeRecord> {
    let (_, rest) = page.split_once("id=\"record-json\">")?;
    let (json, _) = rest.split_once("</script>")?;
    serde_json::from_str(json).ok()
}

/// Whether two answers are further apart than their bounds allow.
fn apart(a: &AnswerRecord, b: &AnswerRecord) -> bool {
    let (Some(x), Some(y)) = (a.value, b.value) else {
        return a.value.is_some() != b.value.is_some() || a.unit != b.unit;
    };
    let room = |r: &AnswerRecord| r.bound.map_or(0.0, Finite::value);
    a.unit != b.unit || (x.value() - y.value()).abs() > room(a) + room(b)
}

fn said(answer: &AnswerRecord) -> String {
    answer.value.map_or_else(
        || "no value".to_owned(),
        |v| crate::number::quantity(v.value(), &answer.unit),
    )
}

//! Readings and claims in a record.
//!
//! A reading without a value has `"value": null` and one word that says why: `absent` (it does
//! not exist in this shot), `unbounded` (an impulse), `floating` (it depends on a potential
//! that nothing determines).

use super::Finite;
use pulsewright_circuit::Dimension;
use pulsewright_study::outcome::{Answer, ClaimResult, Found, ReadingResult};
use serde::{Deserialize, Serialize};

/// A named reading.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ReadingRecord {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub reading: String,
    /// Its value and bound, or why there is none.
    #[serde(flatten)]
    pub answer: AnswerRecord,
}

/// A value with its bound, or why there is none.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct AnswerRecord {
    /// The value in coherent SI units; `null` where there is none.
    pub value: Option<Finite>,
    /// The unit; empty for a plain number.
    pub unit: String,
    /// The bound on the value's numerical error, rounded up to two digits.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub bound: Option<Finite>,
    /// Why it does not exist in this shot.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub absent: Option<String>,
    /// Why it is without bound.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub unbounded: Option<String>,
    /// Why it is not determined.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub floating: Option<String>,
}

/// A claim in one case.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ClaimRecord {
    /// Its name.
    pub name: String,
    /// The reading as the language writes it.
    pub reading: String,
    /// The reading's value and bound, or why there is none.
    #[serde(flatten)]
    pub answer: AnswerRecord,
    /// The relation as the language writes it.
    pub relation: String,
    /// The lower limit, `allowing` included.
    pub least: Option<Finite>,
    /// The upper limit, `allowing` included.
    pub most: Option<Finite>,
    /// How far the value is inside the limits (negative: outside).
    pub margin: Option<Finite>,
    /// The verdict.
    pub verdict: String,
    /// Why, where the numbers do not say it.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub reason: Option<String>,
    /// The requirements it answers.
    pub answers: Vec<String>,
}

impl AnswerRecord {
    pub(crate) fn new(answer: &Answer, text: &str) -> Self {
        let mut record = AnswerRecord {
            value: None,
            unit: unit(answer, text),
            bound: None,
            absent: None,
            unbounded: None,
            floating: None,
        };
        match &answer.found {
            Found::Value { value, bound } => match Finite::new(*value) {
                Some(value) => (record.value, record.bound) = (Some(value), Finite::bound(*bound)),
                None => record.unbounded = Some("its value is no finite number".to_owned()),
            },
            Found::Absent(why) => record.absent = Some(why.clone()),
            Found::Unbounded(why) => record.unbounded = Some(why.clone()),
            Found::Floating(why) => record.floating = Some(why.clone()),
        }
        record
    }
}

/// The unit in words of SI: a flux that an inductor holds is in weber, not in volt seconds.
pub(crate) fn unit(answer: &Answer, text: &str) -> String {
    let of_flux = answer.dimension == Dimension::WEBER && text.contains("flux held by");
    if of_flux {
        "Wb".to_owned()
    } else {
        answer.unit.clone()
    }
}

impl From<&ReadingResult> for ReadingRecord {
    fn from(result: &ReadingResult) -> Self {
        ReadingRecord {
            name: result.name.clone(),
            reading: result.text.clone(),
            answer: AnswerRecord::new(&result.answer, &result.text),
        }
    }
}

impl From<&ClaimResult> for ClaimRecord {
    fn from(claim: &ClaimResult) -> Self {
        let number = |x: Option<f64>| x.and_then(Finite::new);
        ClaimRecord {
            name: claim.name.clone(),
            reading: claim.text.clone(),
            answer: AnswerRecord::new(&claim.answer, &claim.text),
            relation: claim.relation.clone(),
            least: number(claim.least),
            most: number(claim.most),
            margin: number(claim.margin),
            verdict: claim.verdict.words().to_owned(),
            reason: claim.reason.clone(),
            answers: claim.answers.clone(),
        }
    }
}

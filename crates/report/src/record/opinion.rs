//! What another method says of the readings, in a record.

use super::Finite;
use pulsewright_study::outcome::{Difference, SecondOpinion};
use serde::{Deserialize, Serialize};

/// What another method says of the readings.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct OpinionRecord {
    /// The other method.
    pub method: String,
    /// Whether both agree within their bounds; `null` where the other method does not apply. A
    /// disagreement is no record but an error of the run.
    pub agrees: Option<bool>,
    /// The reading that differs most against the bounds.
    pub largest_difference: Option<DifferenceRecord>,
    /// Why there is no second opinion.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub missing: Option<String>,
}

/// How far two methods are apart in a reading.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct DifferenceRecord {
    /// The reading's name, or the reading as the language writes it.
    pub reading: String,
    /// The difference over the sum of the two bounds, rounded up to two digits.
    pub share_of_bounds: Option<Finite>,
}

impl From<&SecondOpinion> for OpinionRecord {
    fn from(opinion: &SecondOpinion) -> Self {
        OpinionRecord {
            method: opinion.method.clone(),
            agrees: opinion.missing.is_none().then_some(true),
            largest_difference: opinion.largest.as_ref().map(Into::into),
            missing: opinion.missing.clone(),
        }
    }
}

impl From<&Difference> for DifferenceRecord {
    fn from(difference: &Difference) -> Self {
        DifferenceRecord {
            reading: difference.reading.clone(),
            share_of_bounds: Finite::bound(difference.share),
        }
    }
}

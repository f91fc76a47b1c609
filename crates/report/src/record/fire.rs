//! `pulsewright.fire/1`: one shot.

use super::shot::events;
use super::{
    AdjustedRecord, BalanceRecord, ClaimRecord, EventRecord, Finite, HazardRecord, Input,
    OpinionRecord, Ordered, Origin, Program, ReadingRecord, RemarkRecord, Run, StressRecord,
    adjusted, stands,
};
use pulsewright_study::outcome::Fired;
use serde::{Deserialize, Serialize};

/// The record of one shot.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct FireRecord {
    /// `pulsewright.fire/1`.
    pub record: String,
    /// The program that wrote it.
    pub program: Program,
    /// What was fired.
    pub input: Input,
    /// The let-values that were solved for; absent where nothing is adjusted.
    #[serde(skip_serializing_if = "Ordered::is_empty", default = "Ordered::none")]
    pub adjusted: Ordered<AdjustedRecord>,
    /// What the values that vary came to, where the shot is a draw's or a corner's.
    #[serde(skip_serializing_if = "Ordered::is_empty", default = "Ordered::none")]
    pub values: Ordered<Finite>,
    /// How it was run.
    pub run: Run,
    /// The named readings, in the file's order.
    pub readings: Vec<ReadingRecord>,
    /// The claims, in the file's order.
    pub claims: Vec<ClaimRecord>,
    /// The event log.
    pub events: Vec<EventRecord>,
    /// Where the joules went.
    pub balance: BalanceRecord,
    /// What each part had to stand.
    pub stress: Vec<StressRecord>,
    /// What another method says of the readings; `null` where it was not asked.
    pub second_opinion: Option<OpinionRecord>,
    /// Hazards.
    pub hazards: Vec<HazardRecord>,
    /// Remarks.
    pub remarks: Vec<RemarkRecord>,
}

/// The record of one shot.
#[must_use]
pub fn fire(fired: &Fired, origin: &Origin<'_>) -> FireRecord {
    FireRecord {
        record: "pulsewright.fire/1".to_owned(),
        program: Program::this(),
        input: Input::new(origin, &fired.set),
        adjusted: adjusted(&fired.adjusted),
        values: stands(&fired.stands),
        run: Run::of([fired]),
        readings: fired.readings.iter().map(Into::into).collect(),
        claims: fired.claims.iter().map(Into::into).collect(),
        events: events(fired),
        balance: (&fired.balance).into(),
        stress: fired.stress.iter().map(Into::into).collect(),
        second_opinion: fired.second_opinion.as_ref().map(Into::into),
        hazards: fired.hazards.iter().map(Into::into).collect(),
        remarks: fired
            .remarks
            .iter()
            .map(|r| RemarkRecord::new(r, origin.text))
            .collect(),
    }
}

//! `pulsewright.judge/1`: every case, and each claim over all of them.

use super::{
    BalanceRecord, ClaimRecord, Finite, HazardRecord, Input, OpinionRecord, Ordered, Origin,
    Program, ReadingRecord, RemarkRecord, Run, SetRecord, set_record,
};
use pulsewright_study::outcome::{ClaimResult, ClaimSummary, Fired, Found, Judged};
use serde::{Deserialize, Serialize};

/// The record of every case.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct JudgeRecord {
    /// `pulsewright.judge/1`.
    pub record: String,
    /// The program that wrote it.
    pub program: Program,
    /// What was judged.
    pub input: Input,
    /// How it was run: steps of all cases together.
    pub run: Run,
    /// The cases in order.
    pub cases: Vec<CaseRecord>,
    /// Each claim over all cases.
    pub claims: Vec<SummaryRecord>,
    /// Remarks, each once.
    pub remarks: Vec<RemarkRecord>,
}

/// One case.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct CaseRecord {
    /// The let-values as the case sets them.
    pub set: Ordered<SetRecord>,
    /// The named readings, in the file's order.
    pub readings: Vec<ReadingRecord>,
    /// The claims, in the file's order.
    pub claims: Vec<ClaimRecord>,
    /// Where the joules went.
    pub balance: BalanceRecord,
    /// What another method says of the readings; `null` where it was not asked.
    pub second_opinion: Option<OpinionRecord>,
    /// Hazards.
    pub hazards: Vec<HazardRecord>,
}

/// A claim over all cases.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SummaryRecord {
    /// Its name.
    pub name: String,
    /// Its verdict over the cases.
    pub verdict: String,
    /// Its verdict at nominal values.
    pub nominal: String,
    /// The case that comes nearest to failing, or fails by most; `null` where it applies in none.
    pub worst: Option<WorstRecord>,
}

/// The worst case of a claim.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct WorstRecord {
    /// The let-values as the case sets them.
    pub set: Ordered<SetRecord>,
    /// The reading's value; `null` where there is none.
    pub value: Option<Finite>,
    /// How far it is inside the limits (negative: outside).
    pub margin: Option<Finite>,
}

/// The record of every case.
#[must_use]
pub fn judge(judged: &Judged, origin: &Origin<'_>) -> JudgeRecord {
    JudgeRecord {
        record: "pulsewright.judge/1".to_owned(),
        program: Program::this(),
        input: Input::new(origin, &origin.set),
        run: Run::of(&judged.cases),
        cases: judged.cases.iter().map(case).collect(),
        claims: judged
            .claims
            .iter()
            .enumerate()
            .map(|(k, s)| summary(s, k, &judged.cases))
            .collect(),
        remarks: remarks(judged, origin.text),
    }
}

fn case(fired: &Fired) -> CaseRecord {
    CaseRecord {
        set: set_record(&fired.set),
        readings: fired.readings.iter().map(Into::into).collect(),
        claims: fired.claims.iter().map(Into::into).collect(),
        balance: (&fired.balance).into(),
        second_opinion: fired.second_opinion.as_ref().map(Into::into),
        hazards: fired.hazards.iter().map(Into::into).collect(),
    }
}

fn summary(summary: &ClaimSummary, claim: usize, cases: &[Fired]) -> SummaryRecord {
    let worst = summary
        .worst
        .and_then(|k| cases.get(k))
        .map(|fired| worst(fired, fired.claims.get(claim)));
    let verdict = summary.verdict.words().to_owned();
    SummaryRecord {
        name: summary.name.clone(),
        nominal: verdict.clone(),
        verdict,
        worst,
    }
}

fn worst(fired: &Fired, claim: Option<&ClaimResult>) -> WorstRecord {
    let value = claim.and_then(|c| match c.answer.found {
        Found::Value { value, .. } => Finite::new(value),
        _ => None,
    });
    WorstRecord {
        set: set_record(&fired.set),
        value,
        margin: claim.and_then(|c| c.margin).and_then(Finite::new),
    }
}

/// The remarks of all cases in order, each once.
fn remarks(judged: &Judged, text: &str) -> Vec<RemarkRecord> {
    let mut seen: Vec<RemarkRecord> = Vec::new();
    for remark in judged.cases.iter().flat_map(|c| &c.remarks) {
        let record = RemarkRecord::new(remark, text);
        if !seen.contains(&record) {
            seen.push(record);
        }
    }
    seen
}

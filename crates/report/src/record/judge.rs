//! `pulsewright.judge/1`: every case, and each claim over all of them.

use super::{
    AdjustedRecord, AnswerRecord, BalanceRecord, ClaimRecord, Finite, HazardRecord, Input,
    OpinionRecord, Ordered, Origin, Program, ReadingRecord, RemarkRecord, Run, SetRecord, adjusted,
    set_record, stands,
};
use pulsewright_study::outcome::{ClaimResult, ClaimSummary, Fired, Found, Judged, Worst};
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
    /// The let-values that were solved for; absent where nothing is adjusted.
    #[serde(skip_serializing_if = "Ordered::is_empty", default = "Ordered::none")]
    pub adjusted: Ordered<AdjustedRecord>,
    /// The named readings, in the file's order.
    pub readings: Vec<ReadingRecord>,
    /// The claims, in the file's order.
    pub claims: Vec<ClaimRecord>,
    /// The claims at their worst corners over the tolerances; absent where nothing varies.
    #[serde(skip_serializing_if = "Vec::is_empty", default)]
    pub worst: Vec<CornerRecord>,
    /// Where the joules went.
    pub balance: BalanceRecord,
    /// What another method says of the readings; `null` where it was not asked.
    pub second_opinion: Option<OpinionRecord>,
    /// Hazards.
    pub hazards: Vec<HazardRecord>,
}

/// A claim at its worst corner.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct CornerRecord {
    /// The claim's name.
    pub name: String,
    /// The reading's value and bound there, or why there is none.
    #[serde(flatten)]
    pub answer: AnswerRecord,
    /// How far the value is inside the limits (negative: outside).
    pub margin: Option<Finite>,
    /// The verdict there.
    pub verdict: String,
    /// Why, where the numbers do not say it.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub reason: Option<String>,
    /// What the values that vary come to there, in coherent SI units.
    pub corner: Ordered<Finite>,
}

/// A claim over all cases.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct SummaryRecord {
    /// Its name.
    pub name: String,
    /// Its verdict over the cases, at the worst corner of each.
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
    /// The worst corner; absent where nothing varies.
    #[serde(skip_serializing_if = "Ordered::is_empty", default = "Ordered::none")]
    pub corner: Ordered<Finite>,
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
        cases: judged
            .cases
            .iter()
            .enumerate()
            .map(|(n, fired)| case(fired, judged.worst.get(n)))
            .collect(),
        claims: judged
            .claims
            .iter()
            .enumerate()
            .map(|(k, s)| summary(s, k, judged))
            .collect(),
        remarks: remarks(judged, origin.text),
    }
}

fn case(fired: &Fired, worst: Option<&Vec<Option<Worst>>>) -> CaseRecord {
    CaseRecord {
        set: set_record(&fired.set),
        adjusted: adjusted(&fired.adjusted),
        readings: fired.readings.iter().map(Into::into).collect(),
        claims: fired.claims.iter().map(Into::into).collect(),
        worst: worst.into_iter().flatten().flatten().map(corner).collect(),
        balance: (&fired.balance).into(),
        second_opinion: fired.second_opinion.as_ref().map(Into::into),
        hazards: fired.hazards.iter().map(Into::into).collect(),
    }
}

fn corner(worst: &Worst) -> CornerRecord {
    let claim = &worst.claim;
    CornerRecord {
        name: claim.name.clone(),
        answer: AnswerRecord::new(&claim.answer, &claim.text),
        margin: claim.margin.and_then(Finite::new),
        verdict: claim.verdict.words().to_owned(),
        reason: claim.reason.clone(),
        corner: stands(&worst.corner),
    }
}

fn summary(summary: &ClaimSummary, claim: usize, judged: &Judged) -> SummaryRecord {
    let at = |n: usize| {
        let fired = judged.cases.get(n)?;
        let cornered = judged.worst.get(n).and_then(|all| all.get(claim)?.as_ref());
        Some(worst(fired, fired.claims.get(claim), cornered))
    };
    SummaryRecord {
        name: summary.name.clone(),
        nominal: summary.nominal.words().to_owned(),
        verdict: summary.verdict.words().to_owned(),
        worst: summary.worst.and_then(at),
    }
}

fn worst(fired: &Fired, nominal: Option<&ClaimResult>, cornered: Option<&Worst>) -> WorstRecord {
    let claim = cornered.map(|w| &w.claim).or(nominal);
    let value = claim.and_then(|c| match c.answer.found {
        Found::Value { value, .. } => Finite::new(value),
        _ => None,
    });
    WorstRecord {
        set: set_record(&fired.set),
        corner: cornered.map_or_else(Ordered::none, |w| stands(&w.corner)),
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

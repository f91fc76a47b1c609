//! The page of every case: each claim over the cases, then the verdicts.

use super::claims::{asked, reason};
use super::fire::{defaults, opening};
use super::hazards::{hazards, worst};
use super::opinion::opinion;
use super::{
    Align, Cell, Grid, adjusted_in_words, bound_cell, counted, remarks, set_in_words,
    stands_in_words, tone,
};
use crate::look::{Look, Tone, heading, paragraph};
use crate::number::{Scale, quantity};
use crate::record::{Origin, unit_of};
use pulsewright_study::outcome::{ClaimResult, Fired, Found, Judged, Set, Verdict, Worst};

/// Most significant digits of a margin.
const MARGIN_DIGITS: i32 = 6;

/// What `judge` prints: hazards, each claim by cases, remarks, and the verdicts last.
#[must_use]
pub fn judge(judged: &Judged, origin: &Origin<'_>, look: Look) -> String {
    let mut out = String::new();
    opening(&mut out, look, origin, &run(judged));
    if !origin.set.is_empty() {
        paragraph(
            &mut out,
            look,
            0,
            &format!("with {}", set_in_words(&origin.set)),
            Tone::Plain,
        );
    }
    adjusted(&mut out, look, &judged.cases);
    hazards(
        &mut out,
        look,
        &worst(judged.cases.iter().map(|c| c.hazards.as_slice())),
    );
    for k in 0..judged.claims.len() {
        claim(&mut out, look, k, &judged.cases);
        corners(&mut out, look, k, &judged.worst);
    }
    opinion(&mut out, look, &judged.cases);
    remarks(
        &mut out,
        look,
        judged.cases.iter().flat_map(|c| &c.remarks),
        origin.text,
    );
    defaults(
        &mut out,
        look,
        judged.cases.first().map_or(&[], |c| c.defaults.as_slice()),
    );
    summary(&mut out, look, judged);
    out
}

fn run(judged: &Judged) -> String {
    let Some(first) = judged.cases.first() else {
        return "no cases".to_owned();
    };
    let cases = counted(judged.cases.len(), "case");
    format!(
        "{cases} of {} by {}",
        quantity(first.span, "s"),
        first.method
    )
}

/// Adds what was solved for, a line a case.
fn adjusted(out: &mut String, look: Look, cases: &[Fired]) {
    for fired in cases.iter().filter(|c| !c.adjusted.is_empty()) {
        let words = adjusted_in_words(&fired.adjusted);
        let with = if fired.set.is_empty() {
            String::new()
        } else {
            format!(" with {}", set_in_words(&fired.set))
        };
        let line = format!("adjusted: {words}{with}");
        paragraph(out, look, 0, &line, Tone::Plain);
    }
}

/// Adds the table of one claim: a row a case, one prefix for each column.
fn claim(out: &mut String, look: Look, k: usize, cases: &[Fired]) {
    let results: Vec<(&Fired, &ClaimResult)> = cases
        .iter()
        .filter_map(|c| Some((c, c.claims.get(k)?)))
        .collect();
    let Some((_, first)) = results.first() else {
        return;
    };
    out.push('\n');
    paragraph(out, look, 0, &asked(first), Tone::Heading);
    if let Some(condition) = results.iter().find_map(|(_, c)| condition(c)) {
        paragraph(out, look, 2, condition, Tone::Faint);
    }
    let columns = Columns::of(&results);
    let mut grid = Grid::new([
        Align::Right,
        Align::Point,
        Align::Left,
        Align::Point,
        Align::Left,
        Align::Text,
    ])
    .headed(["case", "value", "bound", "margin", "verdict", "with"]);
    for (n, (fired, result)) in results.iter().enumerate() {
        grid.row(columns.row(n, &fired.set, result));
    }
    grid.write(out, look);
}

/// Adds where the claim is worst over the tolerances, a row a case.
fn corners(out: &mut String, look: Look, k: usize, worst: &[Vec<Option<Worst>>]) {
    let all: Vec<(usize, &Worst)> = worst
        .iter()
        .enumerate()
        .filter_map(|(n, case)| Some((n, case.get(k)?.as_ref()?)))
        .collect();
    let Some((_, first)) = all.first() else {
        return;
    };
    let unit = unit_of(&first.claim.answer, &first.claim.text);
    let values = all
        .iter()
        .filter_map(|(_, w)| value(&w.claim))
        .map(|(v, _)| v);
    let margins = all.iter().filter_map(|(_, w)| margin(&w.claim));
    let (values, margins) = (Scale::of(&unit, values), Scale::of(&unit, margins));
    let mut grid = Grid::new([
        Align::Right,
        Align::Point,
        Align::Point,
        Align::Left,
        Align::Text,
    ])
    .headed(["case", "worst value", "margin", "verdict", "at"]);
    for (n, worst) in &all {
        let claim = &worst.claim;
        let bound = value(claim).map(|(_, bound)| bound);
        let shown = value(claim).map_or_else(
            || Cell::toned(missing(claim), Tone::Open),
            |(value, bound)| values.brief(value, Some(bound), MARGIN_DIGITS).into(),
        );
        let margin =
            margin(claim).map_or_else(String::new, |m| margins.brief(m, bound, MARGIN_DIGITS));
        let at = stands_in_words(&worst.corner);
        let text = claim
            .reason
            .as_ref()
            .map_or(at.clone(), |why| format!("{at}: {why}"));
        grid.row([
            (n + 1).to_string().into(),
            shown,
            margin.into(),
            Cell::toned(claim.verdict.words(), tone(claim.verdict)),
            text.into(),
        ]);
    }
    grid.write(out, look);
}

/// When a claim applies, from a case in which it does not.
fn condition(claim: &ClaimResult) -> Option<&str> {
    claim
        .reason
        .as_deref()
        .filter(|_| claim.verdict == Verdict::DoesNotApply)
}

/// The unit of a claim's table, and the prefixes of its two columns.
struct Columns {
    unit: String,
    values: Scale,
    margins: Scale,
}

impl Columns {
    fn of(results: &[(&Fired, &ClaimResult)]) -> Self {
        let unit = results
            .first()
            .map_or_else(String::new, |(_, c)| unit_of(&c.answer, &c.text));
        let values = results.iter().filter_map(|(_, c)| value(c)).map(|(v, _)| v);
        let margins = results.iter().filter_map(|(_, c)| margin(c));
        Columns {
            values: Scale::of(&unit, values),
            margins: Scale::of(&unit, margins),
            unit,
        }
    }

    fn row(&self, n: usize, set: &Set, claim: &ClaimResult) -> [Cell; 6] {
        let bound = value(claim).map(|(_, bound)| bound);
        let (shown, bounded) = match value(claim) {
            Some((value, bound)) => (
                self.values.show(value, Some(bound)).into(),
                bound_cell(bound, &self.unit),
            ),
            None => (Cell::toned(missing(claim), Tone::Open), Cell::default()),
        };
        let margin =
            margin(claim).map_or_else(String::new, |m| self.margins.brief(m, bound, MARGIN_DIGITS));
        let verdict = Cell::toned(claim.verdict.words(), tone(claim.verdict));
        [
            (n + 1).to_string().into(),
            shown,
            bounded,
            margin.into(),
            verdict,
            with(set, claim).into(),
        ]
    }
}

/// How far a value is inside its limits, where the claim applies.
fn margin(claim: &ClaimResult) -> Option<f64> {
    claim
        .margin
        .filter(|m| m.is_finite() && claim.verdict != Verdict::DoesNotApply)
}

/// The let-values of a case, and why, where the numbers do not say it.
fn with(set: &Set, claim: &ClaimResult) -> String {
    let reason = reason(claim).filter(|_| claim.verdict != Verdict::DoesNotApply);
    match (set_in_words(set), reason) {
        (set, None) => set,
        (set, Some(reason)) if set.is_empty() => reason.to_owned(),
        (set, Some(reason)) => format!("{set}: {reason}"),
    }
}

fn value(claim: &ClaimResult) -> Option<(f64, f64)> {
    match claim.answer.found {
        Found::Value { value, bound } => Some((value, bound)),
        _ => None,
    }
}

fn missing(claim: &ClaimResult) -> &'static str {
    match claim.answer.found {
        Found::Value { .. } => "",
        Found::Absent(_) => "absent",
        Found::Unbounded(_) => "unbounded",
        Found::Floating(_) => "floating",
    }
}

/// Adds each claim's verdict with its worst case, and the count of all.
fn summary(out: &mut String, look: Look, judged: &Judged) {
    heading(out, look, "verdicts", Tone::Heading);
    let mut grid = Grid::new([Align::Left, Align::Left, Align::Text]);
    for (k, summary) in judged.claims.iter().enumerate() {
        let at = summary.worst.and_then(|w| Some((w, judged.cases.get(w)?)));
        let text = at.map_or_else(
            || "applies in no case".to_owned(),
            |(w, fired)| {
                let worst = judged.worst.get(w).and_then(|all| all.get(k)?.as_ref());
                nearest(w, fired, k, worst, summary.nominal)
            },
        );
        let verdict = Cell::toned(summary.verdict.words(), tone(summary.verdict));
        grid.row([summary.name.as_str().into(), verdict, text.into()]);
    }
    grid.write(out, look);
    out.push('\n');
    let verdicts: Vec<Verdict> = judged.claims.iter().map(|c| c.verdict).collect();
    let (line, tone) = total(&verdicts, &counted(judged.cases.len(), "case"));
    paragraph(out, look, 0, &line, tone);
}

/// `margin 8.31 J in case 1, load = 25 Ω`
fn nearest(
    index: usize,
    fired: &Fired,
    k: usize,
    worst: Option<&Worst>,
    nominal: Verdict,
) -> String {
    let case = match set_in_words(&fired.set) {
        set if set.is_empty() => format!("case {}", index + 1),
        set => format!("case {}, {set}", index + 1),
    };
    let case = if worst.is_some() {
        format!(
            "{case}, at its worst corner; {} at nominal values",
            nominal.words()
        )
    } else {
        case
    };
    let Some(claim) = worst.map(|w| &w.claim).or_else(|| fired.claims.get(k)) else {
        return case;
    };
    match (claim.margin.filter(|m| m.is_finite()), reason(claim)) {
        (Some(margin), _) => {
            let scale = Scale::of(&unit_of(&claim.answer, &claim.text), [margin]);
            let place = value(claim).map(|(_, bound)| bound);
            format!(
                "margin {} in {case}",
                scale.brief(margin, place, MARGIN_DIGITS)
            )
        }
        (None, Some(reason)) => format!("{case}: {reason}"),
        (None, None) => case,
    }
}

/// The last line: `1 of 2 claims fails, over 7 cases`.
pub(super) fn total(verdicts: &[Verdict], over: &str) -> (String, Tone) {
    let count = |verdict| verdicts.iter().filter(|v| **v == verdict).count();
    let (all, cases) = (counted(verdicts.len(), "claim"), over);
    let (fails, undecided) = (count(Verdict::Fails), count(Verdict::Undecided));
    match (fails, undecided) {
        (0, 0) if verdicts.len() == 1 => (format!("the claim holds, over {cases}"), Tone::Good),
        (0, 0) => (format!("all {all} hold, over {cases}"), Tone::Good),
        (0, _) => (
            format!("{undecided} of {all} undecided and none fails, over {cases}"),
            Tone::Open,
        ),
        (1, 0) => (format!("1 of {all} fails, over {cases}"), Tone::Bad),
        (_, 0) => (format!("{fails} of {all} fail, over {cases}"), Tone::Bad),
        _ => (
            format!("of {all} {fails} failed and {undecided} undecided, over {cases}"),
            Tone::Bad,
        ),
    }
}

//! What the sections of the page show, as words and digits.

use super::shot::picked;
use crate::number::{Scale, bound, brief, quantity, with_bound};
use crate::record::{Origin, Program, RemarkRecord, unit_of};
use crate::table::{CAUTIONS, hazard_in_words, is_said, reason, set_in_words, worst};
use pulsewright_study::outcome::{Answer, ClaimResult, Fired, Found, Judged, Verdict};
use serde::Serialize;

/// Most significant digits of a margin.
const MARGIN_DIGITS: i32 = 6;

/// A section with a heading, paragraphs and perhaps a table.
#[derive(Clone, Debug, Default, Serialize)]
pub struct Section {
    /// Its heading.
    pub heading: String,
    /// Its paragraphs.
    pub paragraphs: Vec<String>,
    /// Its table.
    pub table: Option<Table>,
}

/// A table: what it shows, its columns, its rows; the first cell of a row names it.
#[derive(Clone, Debug, Default, Serialize)]
pub struct Table {
    /// What it shows, read out with it.
    pub caption: String,
    /// The heads of its columns.
    pub head: Vec<String>,
    /// Its rows, as long as the head.
    pub rows: Vec<Vec<Cell>>,
}

/// A cell of a table.
#[derive(Clone, Debug, Default, Serialize)]
pub struct Cell {
    /// Its text.
    pub text: String,
    /// `number`, or the word of a verdict: how it is set.
    pub class: &'static str,
}

impl Cell {
    /// A text.
    pub(super) fn text(text: impl Into<String>) -> Self {
        Cell {
            text: text.into(),
            class: "",
        }
    }

    /// A number with its unit.
    pub(super) fn number(text: impl Into<String>) -> Self {
        Cell {
            text: text.into(),
            class: "number",
        }
    }

    /// A verdict in its colour.
    pub(super) fn verdict(verdict: Verdict) -> Self {
        Cell {
            text: verdict.words().to_owned(),
            class: class(verdict),
        }
    }
}

/// A verdict as a class of the style sheet.
const fn class(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Holds => "holds",
        Verdict::Fails => "fails",
        Verdict::Undecided => "undecided",
        Verdict::DoesNotApply => "idle",
    }
}

/// All sections but the shots.
#[derive(Serialize)]
pub(super) struct View {
    title: String,
    outcome: String,
    outcome_class: &'static str,
    danger: Option<String>,
    claims: Table,
    inputs: Vec<(String, String)>,
    defaults: Vec<String>,
    method: Vec<(String, String)>,
    matrix: Option<Table>,
    cases: Vec<Table>,
    readings: Option<Table>,
    shown: String,
    hazards: Vec<String>,
    cautions: &'static str,
    remarks: Vec<RemarkRecord>,
    netlist: Vec<String>,
}

/// The sections of every case.
pub(super) fn view(judged: &Judged, origin: &Origin<'_>) -> View {
    let hazards = worst(judged.cases.iter().map(|c| c.hazards.as_slice()));
    let (outcome, outcome_class) = outcome(judged);
    View {
        title: origin.title.unwrap_or("Untitled circuit").to_owned(),
        outcome,
        outcome_class,
        danger: hazards.first().map(hazard_in_words),
        claims: claims(judged),
        inputs: inputs(judged, origin),
        defaults: judged
            .cases
            .first()
            .map_or_else(Vec::new, |c| c.defaults.clone()),
        method: method(judged),
        matrix: matrix(judged),
        cases: (0..judged.claims.len())
            .filter_map(|k| case_table(judged, k))
            .collect(),
        readings: readings(judged),
        shown: shown(judged),
        cautions: CAUTIONS,
        hazards: hazards
            .iter()
            .filter(|h| !is_said(h, &hazards))
            .map(hazard_in_words)
            .collect(),
        remarks: remarks(judged, origin.text),
        netlist: origin.text.lines().map(str::to_owned).collect(),
    }
}

/// The edges of printed pages: title and hash, and the number of the page.
pub(super) fn print_edges(origin: &Origin<'_>) -> String {
    let title = quoted(origin.title.unwrap_or("Untitled circuit"));
    let hash = quoted(&origin.sha256.chars().take(16).collect::<String>());
    format!(
        "@page{{margin:16mm 14mm;@bottom-left{{content:{title};font:9pt sans-serif}}\
         @bottom-center{{content:\"SHA-256 \" {hash};font:9pt sans-serif}}\
         @bottom-right{{content:counter(page) \" of \" counter(pages);font:9pt sans-serif}}}}"
    )
}

/// A text as a string of a style sheet: letters, digits and blanks, all else by its number, which a blank ends.
fn quoted(text: &str) -> String {
    let mut out = String::from("\"");
    for c in text.chars() {
        if c.is_ascii_alphanumeric() || c == ' ' {
            out.push(c);
        } else {
            out.push_str(&format!("\\{:06x} ", u32::from(c)));
        }
    }
    out.push('"');
    out
}

fn outcome(judged: &Judged) -> (String, &'static str) {
    let count = |v| judged.claims.iter().filter(|c| c.verdict == v).count();
    let (fails, undecided) = (count(Verdict::Fails), count(Verdict::Undecided));
    let (all, cases) = (judged.claims.len(), counted(judged.cases.len(), "case"));
    let claims = counted(all, "claim");
    match (fails, undecided) {
        (0, 0) if all == 1 => (format!("The claim holds, over {cases}."), "holds"),
        (0, 0) => (format!("All {claims} hold, over {cases}."), "holds"),
        (0, n) => (
            format!("{n} of {claims} undecided, none fails, over {cases}."),
            "undecided",
        ),
        (n, 0) => (format!("{n} of {claims} failed, over {cases}."), "fails"),
        (n, m) => (
            format!("{n} of {claims} failed and {m} undecided, over {cases}."),
            "fails",
        ),
    }
}

fn counted(n: usize, word: &str) -> String {
    if n == 1 {
        format!("1 {word}")
    } else {
        format!("{n} {word}s")
    }
}

/// `1: load = 25 Ω`
pub(super) fn case_name(index: usize, fired: &Fired) -> String {
    match set_in_words(&fired.set) {
        set if set.is_empty() => format!("{}", index + 1),
        set => format!("{}: {set}", index + 1),
    }
}

/// A value with its bound, or why there is none.
pub(super) fn answered(answer: &Answer, text: &str) -> Cell {
    match &answer.found {
        Found::Value { value, bound } => {
            Cell::number(with_bound(*value, *bound, &unit_of(answer, text)))
        }
        Found::Absent(why) => Cell::text(format!("absent: {why}")),
        Found::Unbounded(why) => Cell::text(format!("unbounded: {why}")),
        Found::Floating(why) => Cell::text(format!("floating: {why}")),
    }
}

fn margin(claim: &ClaimResult) -> Cell {
    let shown = claim
        .margin
        .filter(|m| m.is_finite() && claim.verdict != Verdict::DoesNotApply);
    let unit = unit_of(&claim.answer, &claim.text);
    Cell::number(shown.map_or_else(String::new, |m| brief(m, &unit, MARGIN_DIGITS)))
}

fn head(words: &[&str]) -> Vec<String> {
    words.iter().map(|w| (*w).to_owned()).collect()
}

/// Every claim with its verdict and its worst case.
fn claims(judged: &Judged) -> Table {
    let row = |(k, summary): (usize, &pulsewright_study::outcome::ClaimSummary)| {
        let any = judged.cases.first().and_then(|c| c.claims.get(k));
        let worst = summary.worst.and_then(|w| Some((w, judged.cases.get(w)?)));
        let at = worst.and_then(|(_, fired)| fired.claims.get(k));
        vec![
            Cell::text(&summary.name),
            Cell::verdict(summary.verdict),
            Cell::text(any.map_or_else(String::new, |c| {
                glued(&format!("{} {}", c.text, c.relation))
            })),
            Cell::text(any.map_or_else(String::new, |c| c.answers.join(", "))),
            at.map_or_else(Cell::default, |c| answered(&c.answer, &c.text)),
            at.map_or_else(Cell::default, margin),
            Cell::number(worst.map_or_else(String::new, |(w, fired)| case_name(w, fired))),
        ]
    };
    Table {
        caption: "Each claim, its verdict over all cases, and the case nearest to failing"
            .to_owned(),
        head: head(&[
            "claim",
            "verdict",
            "asks",
            "answers",
            "worst value",
            "margin",
            "in case",
        ]),
        rows: judged.claims.iter().enumerate().map(row).collect(),
    }
}

fn inputs(judged: &Judged, origin: &Origin<'_>) -> Vec<(String, String)> {
    let mut list = vec![(
        "title".to_owned(),
        origin.title.unwrap_or("none").to_owned(),
    )];
    if !origin.sha256.is_empty() {
        list.push((
            "SHA-256 of the netlist".to_owned(),
            origin.sha256.to_owned(),
        ));
    }
    let set = set_in_words(&origin.set);
    let changed = if set.is_empty() {
        "none".to_owned()
    } else {
        set
    };
    list.push(("let-values set from outside".to_owned(), changed));
    let cases = judged.cases.len();
    list.push(("cases".to_owned(), cases.to_string()));
    list
}

fn method(judged: &Judged) -> Vec<(String, String)> {
    let program = Program::this();
    let mut list = vec![(
        "program".to_owned(),
        format!("{} {}", program.name, program.version),
    )];
    let Some(first) = judged.cases.first() else {
        return list;
    };
    let steps: u64 = judged
        .cases
        .iter()
        .map(|c| c.shot.steps)
        .fold(0, u64::saturating_add);
    let least = judged
        .cases
        .iter()
        .map(|c| c.shot.smallest_step)
        .fold(f64::INFINITY, f64::min);
    let most = judged
        .cases
        .iter()
        .map(|c| c.shot.largest_step)
        .fold(0.0, f64::max);
    list.push(("method".to_owned(), first.method.clone()));
    list.push(("span".to_owned(), quantity(first.span, "s")));
    list.push((
        "steps".to_owned(),
        format!(
            "{steps} in all, of {} to {}",
            brief(least, "s", 3),
            brief(most, "s", 3)
        ),
    ));
    list.push((
        "accuracy".to_owned(),
        "each reading is found on several meshes; the bound behind ± is on the numerical error of the \
         value before it. A claim holds only where the whole interval meets it. The bound says nothing \
         about whether the parts in the netlist are those on the bench."
            .to_owned(),
    ));
    list
}

/// Claims by cases, in words; none where there is one case.
fn matrix(judged: &Judged) -> Option<Table> {
    if judged.cases.len() < 2 || judged.claims.is_empty() {
        return None;
    }
    let mut columns = vec!["case".to_owned()];
    columns.extend(judged.claims.iter().map(|c| c.name.clone()));
    let row = |(k, fired): (usize, &Fired)| {
        let mut row = vec![Cell::number(case_name(k, fired))];
        row.extend(fired.claims.iter().map(|c| Cell::verdict(c.verdict)));
        row
    };
    Some(Table {
        caption: "Verdicts: cases by claims".to_owned(),
        head: columns,
        rows: judged.cases.iter().enumerate().map(row).collect(),
    })
}

/// One claim over the cases, its values in one prefix; without a column of reasons where there are
/// none.
fn case_table(judged: &Judged, claim: usize) -> Option<Table> {
    let results: Vec<(usize, &Fired, &ClaimResult)> = judged
        .cases
        .iter()
        .enumerate()
        .filter_map(|(k, fired)| Some((k, fired, fired.claims.get(claim)?)))
        .collect();
    let (_, _, first) = results.first()?;
    let unit = unit_of(&first.answer, &first.text);
    let value = |c: &ClaimResult| match c.answer.found {
        Found::Value { value, bound } => Some((value, bound)),
        _ => None,
    };
    let scale = Scale::of(
        &unit,
        results.iter().filter_map(|r| value(r.2)).map(|v| v.0),
    );
    let explained = results.iter().any(|r| reason(r.2).is_some());
    let row = |(k, fired, c): &(usize, &Fired, &ClaimResult)| {
        let (shown, within) = match value(c) {
            Some((value, bound)) => (
                Cell::number(scale.show(value, Some(bound))),
                bounded(bound, &unit),
            ),
            None => (Cell::text("no value"), Cell::default()),
        };
        let mut row = vec![
            Cell::number(case_name(*k, fired)),
            shown,
            within,
            margin(c),
            Cell::verdict(c.verdict),
        ];
        if explained {
            row.push(Cell::text(glued(reason(c).unwrap_or_default())));
        }
        row
    };
    let answers = if first.answers.is_empty() {
        String::new()
    } else {
        format!("; answers {}", first.answers.join(", "))
    };
    let mut columns = head(&["case", "value", "bound", "margin", "verdict"]);
    if explained {
        columns.push("why".to_owned());
    }
    Some(Table {
        caption: glued(&format!(
            "{}: {} {}{answers}",
            first.name, first.text, first.relation
        )),
        head: columns,
        rows: results.iter().map(row).collect(),
    })
}

/// A text in which a number and what follows it stay together.
fn glued(text: &str) -> String {
    let mut out = String::new();
    for word in text.split(' ') {
        let number = out
            .rsplit([' ', '\u{a0}'])
            .next()
            .is_some_and(|w| w.trim_start_matches(['(', '−', '-']).parse::<f64>().is_ok());
        if !out.is_empty() {
            out.push(if number { '\u{a0}' } else { ' ' });
        }
        out.push_str(word);
    }
    out
}

/// Readings by cases.
fn readings(judged: &Judged) -> Option<Table> {
    let first = judged.cases.first().filter(|c| !c.readings.is_empty())?;
    let mut columns = vec!["case".to_owned()];
    columns.extend(
        first
            .readings
            .iter()
            .map(|r| format!("{}: {}", r.name, r.text)),
    );
    let row = |(k, fired): (usize, &Fired)| {
        let mut row = vec![Cell::number(case_name(k, fired))];
        row.extend(fired.readings.iter().map(|r| answered(&r.answer, &r.text)));
        row
    };
    Some(Table {
        caption: "Readings of each case".to_owned(),
        head: columns,
        rows: judged.cases.iter().enumerate().map(row).collect(),
    })
}

/// Which cases are shown with plots; empty where all are.
fn shown(judged: &Judged) -> String {
    let all = judged.cases.len();
    if picked(judged).len() < all {
        format!(
            "Of {all} cases only those are shown in which some claim comes nearest to failing; the record \
             holds the numbers of all."
        )
    } else {
        String::new()
    }
}

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

/// A bound in a cell of its own; empty where the value is exact.
pub(super) fn bounded(value: f64, unit: &str) -> Cell {
    Cell::number(if value == 0.0 {
        String::new()
    } else {
        format!("± {}", bound(value, unit))
    })
}

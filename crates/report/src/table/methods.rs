//! The page of the integrators: a table of errors for each reading, and what the runs took.
//!
//! ```text
//! dose: energy into chest
//!   reference 295.3220339 J ± 18 pJ
//!   step     backward Euler  trapezoidal rule
//!   500 µs        9.13 J         124 mJ
//!   250 µs        4.55 J          30.9 mJ
//!   order         1.00             2.00
//! ```
//!
//! An error that the reference is too uncertain to tell has its bound in its place: `< 3.1 nJ`.

use super::fire::{defaults, opening};
use super::{Align, Cell, Grid, answer, set_in_words, why};
use crate::look::{Look, Tone, heading, paragraph};
use crate::number::{bound, brief, quantity};
use crate::record::{Origin, unit_of};
use pulsewright_study::outcome::Found;
use pulsewright_study::{Compared, MethodWork, Methods, RunError};

/// Significant digits of errors, steps and times.
const DIGITS: i32 = 3;

/// What `methods` prints: for each reading the errors of each method at each step, then the work.
#[must_use]
pub fn methods(methods: &Methods, origin: &Origin<'_>, look: Look) -> String {
    let mut out = String::new();
    let names: Vec<&str> = methods.work.iter().map(|w| w.method.as_str()).collect();
    let run = format!(
        "{} by {}",
        quantity(methods.span, "s"),
        names.join(" and by ")
    );
    opening(&mut out, look, origin, &run);
    if !methods.set.is_empty() {
        let set = format!("with {}", set_in_words(&methods.set));
        paragraph(&mut out, look, 0, &set, Tone::Plain);
    }
    if let Some(first) = methods.readings.first() {
        let text = format!("errors are against {}", first.reference_by);
        paragraph(&mut out, look, 0, &text, Tone::Plain);
    } else {
        let text = "nothing to compare: the netlist names no reading and makes no claim";
        paragraph(&mut out, look, 0, text, Tone::Open);
    }
    for reading in &methods.readings {
        compared(&mut out, look, reading, &methods.work);
    }
    work(&mut out, look, &methods.work);
    defaults(&mut out, look, &methods.defaults);
    out
}

fn compared(out: &mut String, look: Look, reading: &Compared, work: &[MethodWork]) {
    out.push('\n');
    let title = format!("{}: {}", reading.name, reading.text);
    paragraph(out, look, 0, &title, Tone::Heading);
    if let Some(why) = why(&reading.reference) {
        let [word, _] = answer(&reading.reference, &reading.text);
        return paragraph(out, look, 2, &format!("{}: {why}", word.text), Tone::Open);
    }
    let [value, bound] = answer(&reading.reference, &reading.text).map(|c| c.text);
    let reference = format!("reference {value} {bound}");
    paragraph(out, look, 2, reference.trim_end(), Tone::Plain);
    let mut columns = vec![Align::Left];
    columns.extend(work.iter().map(|_| Align::Point));
    let heads = work.iter().map(|w| w.method.as_str());
    let mut grid = Grid::new(columns).headed(["step"].into_iter().chain(heads));
    for step in steps(work) {
        let own = reading.methods.iter().zip(work).map(|(m, w)| {
            let place = w.runs.iter().position(|r| same(r.step, step));
            place
                .and_then(|k| m.runs.get(k))
                .map_or_else(Cell::default, |run| error(run, reading))
        });
        grid.row(
            [Cell::from(brief(step, "s", DIGITS + 1))]
                .into_iter()
                .chain(own),
        );
    }
    let orders = reading.methods.iter().map(|m| {
        m.order.map_or_else(
            || Cell::toned("not seen", Tone::Faint),
            |p| format!("{p:.2}").into(),
        )
    });
    grid.row([Cell::from("order")].into_iter().chain(orders));
    grid.write(out, look);
}

/// The steps of all methods, largest first.
fn steps(work: &[MethodWork]) -> Vec<f64> {
    let mut all: Vec<f64> = work.iter().flat_map(|w| &w.runs).map(|r| r.step).collect();
    all.sort_by(|a, b| b.total_cmp(a));
    all.dedup_by(|a, b| same(*a, *b));
    all
}

fn same(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * a.abs()
}

/// An error without its sign, or what it is less than.
fn error(run: &RunError, reading: &Compared) -> Cell {
    let unit = unit_of(&reading.reference, &reading.text);
    match (run.error, &reading.reference.found) {
        (Some(e), _) if run.resolved => brief(e.abs(), &unit, DIGITS).into(),
        (Some(e), Found::Value { bound: b, .. }) if e != 0.0 || *b > 0.0 => {
            Cell::toned(format!("< {}", bound(e.abs() + b, &unit)), Tone::Faint)
        }
        (Some(_), _) => Cell::toned(brief(0.0, &unit, DIGITS), Tone::Faint),
        (None, _) => Cell::toned("absent", Tone::Open),
    }
}

/// What the runs took.
fn work(out: &mut String, look: Look, work: &[MethodWork]) {
    heading(out, look, "work", Tone::Heading);
    let timed = work
        .iter()
        .flat_map(|w| &w.runs)
        .any(|r| r.seconds.is_some());
    let mut columns = vec![Align::Left, Align::Point, Align::Right, Align::Right];
    let mut head = vec!["method", "step", "steps", "factorisations"];
    if timed {
        columns.push(Align::Point);
        head.push("time");
    }
    let mut grid = Grid::new(columns).headed(head);
    for method in work {
        for (k, run) in method.runs.iter().enumerate() {
            let name = if k == 0 { method.method.as_str() } else { "" };
            let mut row: Vec<Cell> = vec![
                name.into(),
                brief(run.step, "s", DIGITS + 1).into(),
                run.steps.to_string().into(),
                run.factorisations.to_string().into(),
            ];
            row.extend(run.seconds.map(|s| Cell::from(brief(s, "s", DIGITS))));
            grid.row(row);
        }
    }
    grid.write(out, look);
    for method in work {
        if let Some(why) = &method.ended {
            let text = format!("{}: no smaller steps, {why}", method.method);
            paragraph(out, look, 2, &text, Tone::Open);
        }
    }
}

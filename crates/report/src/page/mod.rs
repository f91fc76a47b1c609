//! The report: every case of a circuit on one page that stands alone.
//!
//! ```text
//! Judged, Origin ──> view     what each section shows, in words and digits
//!                ──> shot     a case: its plot with the data behind it, balance, stress, events
//!                ──> page     page.html filled in, with page.css and page.js inside
//! page           ──> verify   against a fresh one
//! ```
//!
//! The page needs no network and asks for none. All of it is there without scripts and in print;
//! the script adds cursors and zoom to the plots. It holds the record that it shows, as JSON, and
//! no date, path or name of a machine: the same input gives the same bytes.

mod bars;
mod sections;
mod shot;
mod verify;
mod view;

pub use sections::{corners_section, modes_section, opinion_section};
pub use verify::{Difference, verify};
pub use view::{Cell, Section, Table};

use crate::plot::SHEET;
use crate::record::{self, Origin};
use minijinja::value::Serde;
use minijinja::{Environment, UndefinedBehavior};
use pulsewright_study::outcome::Judged;
use serde::Serialize;

const TEMPLATE: &str = include_str!("page.html");
const STYLE: &str = include_str!("page.css");
const SCRIPT: &str = include_str!("page.js");

/// What a page may hold beside the cases as judged.
#[derive(Clone, Debug, Default, Serialize)]
pub struct Extras {
    /// A line of the user's own (a date, a name, a number of a document).
    pub stamp: Option<String>,
    /// What another method says of the same readings.
    pub second_opinion: Option<Section>,
    /// Where each claim comes nearest to failing over the tolerances.
    pub worst_corners: Option<Section>,
    /// Natural frequencies and damping.
    pub modes: Option<Section>,
    /// How much readings follow each value.
    pub sensitivities: Option<Section>,
}

/// What the template is filled with.
#[derive(Serialize)]
struct Filling<'a> {
    view: view::View,
    shots: Vec<shot::ShotView>,
    extras: &'a Extras,
    record: String,
    style: String,
    script: &'a str,
}

/// The page of every case.
///
/// # Errors
///
/// A text where the template could not be filled, which is a defect of this crate.
pub fn page(judged: &Judged, origin: &Origin<'_>, extras: &Extras) -> Result<String, String> {
    let record = record::text(&record::judge(judged, origin));
    let filling = Filling {
        view: view::view(judged, origin),
        shots: shot::shots(judged),
        extras,
        record: inert(&record),
        style: format!("{}\n{STYLE}\n{SHEET}", view::print_edges(origin)),
        script: SCRIPT,
    };
    let mut environment = Environment::new();
    environment.set_undefined_behavior(UndefinedBehavior::Strict);
    environment
        .add_template("page.html", TEMPLATE)
        .and_then(|()| environment.get_template("page.html"))
        .and_then(|template| template.render(Serde(&filling)))
        .map(|page| without_empty_lines(&page))
        .map_err(|e| format!("the report's template could not be filled: {e}"))
}

/// What the template's own lines leave behind is taken out; lines of a netlist are never empty, they
/// stand in elements.
fn without_empty_lines(page: &str) -> String {
    let lines = page.lines().filter(|line| !line.trim().is_empty());
    lines.fold(String::with_capacity(page.len()), |mut out, line| {
        out.push_str(line);
        out.push('\n');
        out
    })
}

/// JSON that may stand in a script element: no `<` can end it.
fn inert(json: &str) -> String {
    json.replace('<', "\\u003c")
}

//! A case on the page: its plot with the data behind it, balance, stress and events.
//!
//! The data are the points that the plot's cubics need to pass within a millionth of the
//! channel's range, so that a cursor reads the same digits as the tables.

use super::bars::{bars, rows};
use super::inert;
use super::view::{Cell, Table, bounded, case_name};
use crate::number::{Scale, brief, with_bound};
use crate::plot::{Figure, Plot, figure, knots};
use crate::table::set_in_words;
use pulsewright_study::outcome::{Channel, Extreme, Fired, Judged, Stress};
use serde::Serialize;

/// Up to how many cases all are shown; of more, those in which a claim comes nearest to failing.
const ALL: usize = 8;
/// How many of those at most.
const MOST: usize = 12;
/// How far the cursor's curve may be from the channel, in parts of its largest value.
const NEAR: f64 = 1e-6;
/// Significant digits of stress and costs.
const DIGITS: i32 = 5;

/// A case as shown.
#[derive(Serialize)]
pub(super) struct ShotView {
    id: String,
    heading: String,
    figure: String,
    data: String,
    balance_figure: String,
    balance: Table,
    stress: Option<Table>,
    events: Option<Table>,
}

/// The indices of the cases that are shown.
pub(super) fn picked(judged: &Judged) -> Vec<usize> {
    if judged.cases.len() <= ALL {
        return (0..judged.cases.len()).collect();
    }
    let mut some: Vec<usize> = judged.claims.iter().filter_map(|c| c.worst).collect();
    some.sort_unstable();
    some.dedup();
    some.truncate(MOST);
    if some.is_empty() {
        some.push(0);
    }
    some
}

/// The cases that are shown.
pub(super) fn shots(judged: &Judged) -> Vec<ShotView> {
    let one = |k: usize| Some(shot(k, judged.cases.get(k)?));
    picked(judged).into_iter().filter_map(one).collect()
}

fn shot(index: usize, fired: &Fired) -> ShotView {
    let id = format!("case-{}", index + 1);
    let name = case_name(index, fired);
    let plot = Plot::whole(fired);
    let drawn = figure(&plot, &format!("Plot of case {name}"), &id);
    let set = set_in_words(&fired.set);
    ShotView {
        heading: if set.is_empty() {
            format!("Case {}", index + 1)
        } else {
            format!("Case {}: {set}", index + 1)
        },
        data: inert(&data(fired, &drawn)),
        figure: drawn.svg,
        balance_figure: bars(
            &fired.balance,
            &format!("{id}-joules"),
            &format!("Where the joules went in case {name}"),
        ),
        balance: balance(fired, &name),
        stress: stress(&fired.stress, &name),
        events: events(fired, &name),
        id,
    }
}

/// What the script reads of a plot.
#[derive(Serialize)]
struct Data<'a> {
    across: (f64, f64),
    from: f64,
    to: f64,
    panels: &'a [(f64, f64, f64, f64)],
    channels: Vec<ChannelData<'a>>,
    events: Vec<(f64, String)>,
}

#[derive(Serialize)]
struct ChannelData<'a> {
    name: &'a str,
    unit: String,
    look: usize,
    panel: usize,
    crest: Option<(f64, f64)>,
    t: Vec<f64>,
    v: Vec<f64>,
    s: Vec<f64>,
}

fn data(fired: &Fired, drawn: &Figure) -> String {
    let shown: Vec<&Channel> = fired
        .channels
        .iter()
        .filter(|c| c.times.len() > 1)
        .collect();
    let channel = |(index, panel): &(usize, usize)| {
        let channel = shown.get(*index)?;
        let largest = channel.values.iter().fold(0.0, |m: f64, v| m.max(v.abs()));
        let kept = knots(channel, NEAR * largest);
        let pick = |list: &[f64], digits: usize| -> Vec<f64> {
            let all = kept.iter().filter_map(|k| list.get(*k));
            all.map(|x| rounded(*x, digits)).collect()
        };
        Some(ChannelData {
            name: &channel.text,
            unit: crate::number::printed(&channel.unit),
            look: index % 6,
            panel: *panel,
            crest: channel
                .crest
                .map(|c| (c.time, c.value))
                .filter(|c| c.0.is_finite() && c.1.is_finite()),
            t: pick(&channel.times, 11),
            v: pick(&channel.values, 8),
            s: pick(&channel.slopes, 7),
        })
    };
    let events = fired.events.iter().enumerate().map(|(k, (event, _))| {
        let part = fired.parts.get(event.part).map_or("", String::as_str);
        let change = fired.changes.get(k).map_or("", String::as_str);
        (event.time, format!("{part} {change}"))
    });
    let data = Data {
        across: drawn.across,
        from: 0.0,
        to: fired.span,
        panels: &drawn.panels,
        channels: drawn.panel_of.iter().filter_map(channel).collect(),
        events: events.collect(),
    };
    serde_json::to_string(&data).unwrap_or_default()
}

/// A number to so many significant digits; zero where it is not finite.
fn rounded(x: f64, digits: usize) -> f64 {
    let text = format!("{x:.*e}", digits.saturating_sub(1));
    text.parse::<f64>()
        .ok()
        .filter(|x| x.is_finite())
        .unwrap_or(0.0)
        + 0.0
}

fn words(list: &[&str]) -> Vec<String> {
    list.iter().map(|w| (*w).to_owned()).collect()
}

fn balance(fired: &Fired, name: &str) -> Table {
    let mut list: Vec<Vec<Cell>> = rows(&fired.balance)
        .into_iter()
        .map(|(what, how)| vec![Cell::text(what), Cell::number(how)])
        .collect();
    let (residual, bound) = (fired.balance.residual, fired.balance.bound);
    list.push(vec![
        Cell::text("residual"),
        Cell::number(with_bound(residual, bound, "J")),
    ]);
    Table {
        caption: format!("Energy balance of case {name}"),
        head: words(&["what", "energy"]),
        rows: list,
    }
}

fn stress(stress: &[Stress], name: &str) -> Option<Table> {
    let row = |s: &Stress| {
        let mut row = vec![Cell::text(&s.part)];
        for (extreme, unit) in [(&s.voltage, "V"), (&s.current, "A"), (&s.power, "W")] {
            row.extend(largest(extreme.as_ref(), unit));
        }
        row.push(total(s.energy, "J"));
        row.push(total(s.action, "A²*s"));
        row
    };
    (!stress.is_empty()).then(|| Table {
        caption: format!("Stress in case {name}: largest values and when, totals over the span"),
        head: words(&[
            "part", "voltage", "at", "current", "at", "power", "at", "energy", "action",
        ]),
        rows: stress.iter().map(row).collect(),
    })
}

fn largest(extreme: Option<&Extreme>, unit: &str) -> [Cell; 2] {
    extreme.map_or_else(Default::default, |e| {
        [
            total(Some((e.value, e.bound)), unit),
            Cell::number(brief(e.time, "s", DIGITS)),
        ]
    })
}

fn total(total: Option<(f64, f64)>, unit: &str) -> Cell {
    match total {
        None => Cell::default(),
        Some((value, bound)) if value.is_finite() && bound.is_finite() => {
            Cell::number(brief(value, unit, DIGITS))
        }
        Some(_) => Cell::text("unbounded"),
    }
}

fn events(fired: &Fired, name: &str) -> Option<Table> {
    let row = |(k, (event, bound)): (usize, &(pulsewright_engine::Event, f64))| {
        let part = fired.parts.get(event.part).map_or("", String::as_str);
        let change = fired.changes.get(k).map_or("", String::as_str);
        let cost = |x: f64, unit| {
            Cell::number(if x == 0.0 {
                String::new()
            } else {
                brief(x, unit, DIGITS)
            })
        };
        vec![
            Cell::number(Scale::of("s", [event.time, *bound]).show(event.time, Some(*bound))),
            bounded(*bound, "s"),
            Cell::text(part),
            Cell::text(change),
            cost(event.charge, "C"),
            cost(event.flux, "Wb"),
            cost(event.loss, "J"),
        ]
    };
    (!fired.events.is_empty()).then(|| Table {
        caption: format!("Event log of case {name}"),
        head: words(&[
            "instant", "bound", "part", "change", "charge", "flux", "lost",
        ]),
        rows: fired.events.iter().enumerate().map(row).collect(),
    })
}

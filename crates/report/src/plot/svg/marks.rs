//! What is marked in a picture: events, windows, limits, crests.

use super::labels::{Box2, place};
use super::paper::{px, width_of};
use super::style::{look, marker};
use super::{Field, LEFT, RIGHT, ROW, Sheet, crest_words, short};
use pulsewright_study::outcome::{Channel, Gate};

/// The most rows of names of events.
const EVENT_ROWS: usize = 4;
/// The most rows of windows.
const WINDOW_ROWS: usize = 6;
/// How far a limit's hatching reaches, pixels.
const HATCH: f64 = 9.0;

/// Events with the row that each name has found; those without room have none.
pub(super) struct EventMarks {
    /// Rows of names.
    pub(super) rows: usize,
    marks: Vec<(f64, Option<EventLabel>)>,
}

/// The row of a name, the name, and where it starts, pixels.
type EventLabel = (usize, String, f64);

/// Places the names of events: from the left, each in the first row in which it touches no other.
pub(super) fn event_marks(sheet: &Sheet<'_, '_>, events: &[(f64, String)]) -> EventMarks {
    let mut ends = [f64::NEG_INFINITY; EVENT_ROWS];
    let mut marks: Vec<(f64, Option<EventLabel>)> = Vec::new();
    let mut last: Option<f64> = None;
    for (time, words) in events {
        let x = sheet.x(*time);
        let near = last.is_some_and(|l| x - l < 0.7);
        let name = short(words, 44);
        let width = width_of(&name);
        let start = (x - width / 2.0).clamp(LEFT - 20.0, (RIGHT - width).max(LEFT));
        let row = ends.iter().position(|end| *end + 8.0 < start);
        let label = row.map(|row| {
            if let Some(end) = ends.get_mut(row) {
                *end = start + width;
            }
            (row, name, start)
        });
        if !near || label.is_some() {
            marks.push((x, label));
        }
        last = Some(x);
    }
    let rows = marks
        .iter()
        .filter_map(|(_, l)| l.as_ref().map(|l| l.0 + 1))
        .max()
        .unwrap_or(0);
    EventMarks { rows, marks }
}

impl EventMarks {
    /// Draws the verticals from their names to the bottom of the last panel.
    pub(super) fn draw(&self, sheet: &mut Sheet<'_, '_>, top: f64, (first, bottom): (f64, f64)) {
        for (x, label) in &self.marks {
            let Some((row, name, start)) = label else {
                sheet.paper.line("event t", (*x, first), (*x, bottom));
                continue;
            };
            let y = top + ROW * (*row as f64 + 1.0) - 3.0;
            sheet.paper.line("event t", (*x, y + 3.0), (*x, bottom));
            sheet.paper.text("soft halo t", (*start, y), name);
        }
    }
}

/// Shades the windows of readings in a panel.
pub(super) fn window_shades(sheet: &mut Sheet<'_, '_>, top: f64, bottom: f64) {
    let mut seen: Vec<(f64, f64)> = Vec::new();
    for window in &sheet.plot.fired.windows {
        for interval in &window.intervals {
            if seen.contains(interval) || seen.len() > 40 {
                continue;
            }
            seen.push(*interval);
        }
    }
    for (start, end) in seen {
        let Some((left, right)) = inside(sheet, start, end) else {
            continue;
        };
        sheet
            .paper
            .rect("shade t", (left, top), (right - left, bottom - top), "");
    }
}

/// Where an interval is, in pixels, as far as it is shown; `None` where it is not or is all.
fn inside(sheet: &Sheet<'_, '_>, start: f64, end: f64) -> Option<(f64, f64)> {
    let (from, to) = (sheet.plot.from, sheet.plot.to);
    if end <= from || start >= to || (start <= from && end >= to) {
        return None;
    }
    Some((sheet.x(start.max(from)), sheet.x(end.min(to))))
}

/// Names the windows under the time axis, a bar each; equal ones share one.
pub(super) fn window_bars(sheet: &mut Sheet<'_, '_>) {
    let mut groups: Vec<(&[(f64, f64)], String)> = Vec::new();
    for window in &sheet.plot.fired.windows {
        match groups.iter_mut().find(|g| g.0 == window.intervals) {
            Some(group) => group.1.push_str(&format!(", {}", window.name)),
            None => groups.push((&window.intervals, window.name.clone())),
        }
    }
    let mut ends = [f64::NEG_INFINITY; WINDOW_ROWS];
    let top = sheet.top + 6.0;
    let mut rows = 0;
    for (intervals, names) in groups {
        let bars: Vec<(f64, f64)> = intervals
            .iter()
            .filter_map(|(s, e)| inside(sheet, *s, *e))
            .collect();
        let (Some(first), Some(last)) = (bars.first(), bars.last()) else {
            continue;
        };
        let name = short(&names, 50);
        let width = width_of(&name);
        let start = f64::midpoint(first.0, last.1) - width / 2.0;
        let start = start.clamp(LEFT, (RIGHT - width).max(LEFT));
        let (left, right) = (start.min(first.0), (start + width).max(last.1));
        let Some(row) = ends.iter().position(|end| *end + 8.0 < left) else {
            continue;
        };
        if let Some(end) = ends.get_mut(row) {
            *end = right;
        }
        rows = rows.max(row + 1);
        let y = top + 22.0 * row as f64;
        for (l, r) in bars {
            let path = format!(
                "M{l} {a}V{b}M{l} {m}H{r}M{r} {a}V{b}",
                l = px(l),
                r = px(r),
                a = px(y - 3.0),
                b = px(y + 3.0),
                m = px(y)
            );
            sheet
                .paper
                .raw(&format!("<path class=\"bar t\" d=\"{path}\"/>"));
        }
        sheet.paper.text("soft t", (start, y + 13.0), &name);
    }
    sheet.top += 22.0 * rows as f64;
}

/// Draws the limits of claims on the channels of a panel, the forbidden side hatched.
pub(super) fn gates(sheet: &mut Sheet<'_, '_>, field: &Field<'_>, taken: &mut Vec<Box2>) {
    let mut said: Vec<&str> = Vec::new();
    for (_, channel) in &field.panel.channels {
        for gate in &channel.gates {
            let y = field.y(gate.level);
            if !(field.top - 0.5..=field.bottom() + 0.5).contains(&y) {
                continue;
            }
            let spans = spans(sheet, gate);
            for (left, right) in &spans {
                let depth = if gate.above {
                    (y - field.top).min(HATCH)
                } else {
                    (field.bottom() - y).min(HATCH)
                };
                let from = if gate.above { y - depth } else { y };
                let fill = format!(" fill=\"url(#{}-hatch)\"", sheet.id);
                sheet
                    .paper
                    .rect("t", (*left, from), (right - left, depth), &fill);
                sheet.paper.line("gate t", (*left, y), (*right, y));
                taken.push((*left, from - 1.0, *right, from + depth + 1.0));
            }
            if let Some(span) = spans
                .last()
                .filter(|_| !said.contains(&gate.claim.as_str()))
            {
                said.push(&gate.claim);
                label(sheet, field, gate, (*span, y), taken);
            }
        }
    }
}

/// Where a limit holds, in pixels: all of its window, or about the extreme that it is on.
fn spans(sheet: &Sheet<'_, '_>, gate: &Gate) -> Vec<(f64, f64)> {
    if !gate.every {
        if !sheet.plot.shows(gate.extreme.time) {
            return Vec::new();
        }
        let x = sheet.x(gate.extreme.time);
        return vec![((x - 45.0).max(LEFT), (x + 45.0).min(RIGHT))];
    }
    let (from, to) = (sheet.plot.from, sheet.plot.to);
    let shown = gate.intervals.iter().filter(|(s, e)| *e > from && *s < to);
    shown
        .map(|(s, e)| (sheet.x(s.max(from)), sheet.x(e.min(to))))
        .collect()
}

/// Writes what a limit is, on its allowed side, at its right end.
fn label(
    sheet: &mut Sheet<'_, '_>,
    field: &Field<'_>,
    gate: &Gate,
    ((left, right), y): ((f64, f64), f64),
    taken: &mut Vec<Box2>,
) {
    let relation = sheet
        .plot
        .fired
        .claims
        .iter()
        .find(|c| c.name == gate.claim)
        .map_or("", |c| c.relation.as_str());
    let text = short(&format!("{}: {relation}", gate.claim), 60);
    let width = width_of(&text);
    let bases = if gate.above {
        [y + 13.0, y + 27.0]
    } else {
        [y - 5.0, y - 19.0]
    };
    let starts = if gate.every {
        let middle = f64::midpoint(left, right) - width / 2.0;
        [right - 6.0 - width, middle, left + 6.0]
    } else {
        [right + 5.0, left - 5.0 - width, left]
    };
    let spots: Vec<(f64, f64)> = bases
        .iter()
        .flat_map(|base| starts.iter().map(|x| (*x, *base)))
        .collect();
    if let Some(spot) = place(sheet, field, width, &spots, taken) {
        sheet.paper.text("no halo t", spot, &text);
    }
}

/// The crest of a channel in pixels, where it is shown; none of one that never leaves zero.
fn crest_at(sheet: &Sheet<'_, '_>, field: &Field<'_>, channel: &Channel) -> Option<(f64, f64)> {
    let crest = channel.crest?;
    let shown = crest.value != 0.0 && sheet.plot.shows(crest.time);
    let y = field.y(crest.value);
    let inside = (field.top - 1.0..=field.bottom() + 1.0).contains(&y);
    (shown && inside).then(|| (sheet.x(crest.time), y))
}

/// Marks the crest of each curve of a panel.
pub(super) fn markers(sheet: &mut Sheet<'_, '_>, field: &Field<'_>, taken: &mut Vec<Box2>) {
    for (index, channel) in &field.panel.channels {
        let Some((x, y)) = crest_at(sheet, field, channel) else {
            continue;
        };
        taken.push((x - 5.0, y - 5.0, x + 5.0, y + 5.0));
        mark(sheet, *index, (x, y));
    }
}

/// Names the crest of each curve of a panel with its value and instant.
pub(super) fn crests(sheet: &mut Sheet<'_, '_>, field: &Field<'_>, taken: &mut Vec<Box2>) {
    for (index, channel) in &field.panel.channels {
        if let Some(place) = crest_at(sheet, field, channel) {
            name_crest(sheet, field, (*index, channel), place, taken);
        }
    }
}

/// Writes a crest beside its marker, where there is room; with the marker again where a panel has
/// several.
fn name_crest(
    sheet: &mut Sheet<'_, '_>,
    field: &Field<'_>,
    (index, channel): (usize, &Channel),
    (x, y): (f64, f64),
    taken: &mut Vec<Box2>,
) {
    let Some(text) = crest_words(channel, 4) else {
        return;
    };
    let key = if field.panel.channels.len() > 1 {
        12.0
    } else {
        0.0
    };
    let width = key + width_of(&text);
    let away = if channel.crest.is_some_and(|c| c.value < 0.0) {
        15.0
    } else {
        -6.0
    };
    let mut spots = vec![
        (x + 7.0, y + away),
        (x - 7.0 - width, y + away),
        (x + 9.0, y + 4.0),
        (x - width / 2.0, y - 9.0),
        (x + 30.0, y + 4.0),
        (x + 50.0, y + 4.0),
        (x + 80.0, y + 4.0),
    ];
    for down in [18.0, 32.0, 46.0, 60.0, -20.0] {
        for side in [x + 7.0, x + 30.0, x - 7.0 - width] {
            spots.push((side, y + down));
        }
    }
    let Some((left, base)) = place(sheet, field, width, &spots, taken) else {
        return;
    };
    if key > 0.0 {
        mark(sheet, index, (left + 4.0, base - 4.0));
    }
    sheet.paper.text("halo t", (left + key, base), &text);
}

/// Draws a channel's marker.
fn mark(sheet: &mut Sheet<'_, '_>, index: usize, (x, y): (f64, f64)) {
    sheet.paper.raw(&format!(
        "<g class=\"mark t {}\" transform=\"translate({} {})\">{}</g>",
        look(index),
        px(x),
        px(y),
        marker(index)
    ));
}

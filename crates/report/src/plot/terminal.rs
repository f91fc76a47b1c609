//! A plot in a terminal: dots in a grid of characters, or plain signs.
//!
//! ```text
//!         a  voltage across chest: crest 2.794 kV at 986.1 µs
//!     kV
//!      3 ┤    a
//!      2 ┤  ⡜  ⢣
//!      0 ┤⣀⡰    ⠣⣀⣀⣀⣀
//!        └┬─────┬─────┬
//!         0     1     2  ms
//! ```
//!
//! A character is two by four dots. Which curve is whose is told by its letter, which stands at its
//! crest, or by its sign; colour only repeats it. No line is wider than the look allows.

use super::curve::{points, value_at};
use super::{Axis, Panel, Plot, events, quantity_of};
use crate::look::{Look, columns};
use crate::number::brief;
use pulsewright_study::outcome::Channel;

/// What curves are drawn with.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ink {
    /// Dots, eight to a character; needs a terminal that shows Braille.
    Dots,
    /// A sign for each curve, ASCII only.
    Signs,
}

/// Columns left of a panel.
const MARGIN: usize = 10;
/// Letters of curves drawn in dots.
const LETTERS: [char; 8] = ['a', 'b', 'c', 'd', 'e', 'f', 'g', 'h'];
/// Signs of curves in ASCII.
const SIGNS: [char; 8] = ['*', '+', 'o', 'x', '#', '%', '@', '='];
/// Colours of curves.
const COLOURS: [&str; 6] = ["36", "33", "32", "35", "34", "91"];

/// The channels of a plot as lines of text, each with a line feed; empty where there are none.
#[must_use]
pub fn terminal(plot: &Plot<'_>, look: Look, ink: Ink) -> String {
    let panels = plot.panels();
    let across = look.width.saturating_sub(MARGIN + 2).clamp(20, 400);
    let rows = match panels.len() {
        0 | 1 => 12,
        2 => 9,
        _ => 6,
    };
    let mut out = String::new();
    let time = Axis::over(plot.from, plot.to, "s", ticks_in(across));
    for panel in &panels {
        let mut field = Field::new(plot, panel, (across, rows), ink);
        field.draw();
        field.write(&mut out, look);
    }
    if !panels.is_empty() {
        foot(&mut out, plot, &time, across, ink);
    }
    out
}

/// How many ticks of time a width has room for.
fn ticks_in(across: usize) -> u32 {
    u32::try_from(across / 12).unwrap_or(8).clamp(3, 12)
}

/// A character of the picture: what it shows and whose it is.
#[derive(Clone, Copy)]
struct Spot {
    dots: u8,
    sign: char,
    curve: Option<usize>,
}

const EMPTY: Spot = Spot {
    dots: 0,
    sign: ' ',
    curve: None,
};

struct Field<'a, 'p> {
    plot: &'p Plot<'a>,
    panel: &'p Panel<'a>,
    axis: Axis,
    across: usize,
    rows: usize,
    ink: Ink,
    spots: Vec<Spot>,
}

impl<'a, 'p> Field<'a, 'p> {
    fn new(
        plot: &'p Plot<'a>,
        panel: &'p Panel<'a>,
        (across, rows): (usize, usize),
        ink: Ink,
    ) -> Self {
        let (mut low, mut high) = (0.0f64, 0.0f64);
        for (_, channel) in &panel.channels {
            for (_, v) in points(channel, plot.from, plot.to, across * 2) {
                (low, high) = (low.min(v), high.max(v));
            }
        }
        let count = if rows > 8 { 6 } else { 4 };
        Field {
            plot,
            panel,
            axis: Axis::over(low, high, panel.unit, count),
            across,
            rows,
            ink,
            spots: vec![EMPTY; across * rows],
        }
    }

    /// Dots to the right and upward in a character.
    const fn grain(&self) -> (usize, usize) {
        match self.ink {
            Ink::Dots => (2, 4),
            Ink::Signs => (1, 1),
        }
    }

    fn draw(&mut self) {
        for (time, _) in events(self.plot) {
            let x = self.column(time);
            for row in 0..self.rows {
                let sign = if self.ink == Ink::Dots { '┊' } else { ':' };
                self.put(x, row, |spot| spot.sign = sign);
            }
        }
        let channels = self.panel.channels.clone();
        for (curve, (_, channel)) in channels.iter().enumerate() {
            self.curve(curve, channel);
        }
        if self.ink == Ink::Dots {
            for (curve, (_, channel)) in channels.iter().enumerate() {
                self.name(curve, channel);
            }
        }
    }

    fn curve(&mut self, curve: usize, channel: &Channel) {
        let (gx, gy) = self.grain();
        let span = self.plot.to - self.plot.from;
        let (w, h) = ((self.across * gx) as f64, (self.rows * gy) as f64);
        let mut last: Option<(f64, f64)> = None;
        for (t, v) in points(channel, self.plot.from, self.plot.to, self.across * gx) {
            let x = ((t - self.plot.from) / span * (w - 1.0)).clamp(0.0, w - 1.0);
            let y = (self.axis.share(v) * (h - 1.0)).clamp(0.0, h - 1.0);
            let from = last.unwrap_or((x, y));
            let steps = (x - from.0).abs().max((y - from.1).abs()).ceil().max(1.0) as u32;
            for k in 0..=steps {
                let share = f64::from(k) / f64::from(steps);
                let at = (from.0 + (x - from.0) * share, from.1 + (y - from.1) * share);
                self.dot(curve, at.0.round() as usize, at.1.round() as usize);
            }
            last = Some((x, y));
        }
    }

    /// Sets a dot, counted from the lower left corner.
    fn dot(&mut self, curve: usize, x: usize, y: usize) {
        let (gx, gy) = self.grain();
        let row = self.rows.saturating_sub(1 + y / gy);
        let bit = match (x % gx, y % gy) {
            (0, 3) => 0x01,
            (0, 2) => 0x02,
            (0, 1) => 0x04,
            (1, 3) => 0x08,
            (1, 2) => 0x10,
            (1, 1) => 0x20,
            (0, 0) => 0x40,
            _ => 0x80,
        };
        let sign = SIGNS.get(curve % SIGNS.len()).copied().unwrap_or('*');
        let signs = self.ink == Ink::Signs;
        self.put(x / gx, row, |spot| {
            spot.dots |= bit;
            spot.curve.get_or_insert(curve);
            if signs && (spot.curve == Some(curve) || spot.sign == ' ') {
                spot.sign = sign;
            }
        });
    }

    /// Puts a curve's letter at its crest, or where it can be seen beside the others.
    fn name(&mut self, curve: usize, channel: &Channel) {
        if self.panel.channels.len() < 2 {
            return;
        }
        let span = self.plot.to - self.plot.from;
        let tries = [0.35, 0.55, 0.2, 0.75, 0.9, 0.05];
        let crest = channel.crest.filter(|c| self.plot.shows(c.time));
        let times = crest
            .map(|c| c.time)
            .into_iter()
            .chain(tries.map(|s| self.plot.from + span * s));
        for time in times {
            let Some(value) = value_at(channel, time).filter(|v| v.is_finite()) else {
                continue;
            };
            let x = self.column(time);
            let share = (self.axis.share(value) * (self.rows - 1) as f64).round();
            let row = (self.rows - 1).saturating_sub(share.max(0.0) as usize);
            let letter = LETTERS.get(curve % LETTERS.len()).copied().unwrap_or('a');
            let spot = self.spots.get(row * self.across + x).copied();
            if spot
                .is_some_and(|s| !s.sign.is_ascii_lowercase() && s.curve.is_none_or(|c| c == curve))
            {
                self.put(x, row, |spot| {
                    spot.dots = 0;
                    spot.sign = letter;
                    spot.curve = Some(curve);
                });
                return;
            }
        }
    }

    fn column(&self, time: f64) -> usize {
        place(time, (self.plot.from, self.plot.to), self.across)
    }

    fn put(&mut self, x: usize, row: usize, change: impl FnOnce(&mut Spot)) {
        if x < self.across
            && let Some(spot) = self.spots.get_mut(row * self.across + x)
        {
            change(spot);
        }
    }

    fn write(&self, out: &mut String, look: Look) {
        for (curve, (_, channel)) in self.panel.channels.iter().enumerate() {
            self.legend(out, curve, channel, look);
        }
        let labels = self.labels();
        let wall = if self.ink == Ink::Dots {
            ["┤", "│"]
        } else {
            ["+", "|"]
        };
        for row in 0..self.rows {
            let label = labels.iter().find(|l| l.0 == row).map(|l| l.1.as_str());
            let side = wall
                .get(usize::from(label.is_none()))
                .copied()
                .unwrap_or("|");
            let start = row * self.across;
            let spots = self
                .spots
                .get(start..start + self.across)
                .unwrap_or_default();
            let line: String = runs(spots, look);
            let label = label.unwrap_or_default();
            let line = format!("{label:>width$} {side}{line}", width = MARGIN - 1);
            out.push_str(line.trim_end());
            out.push('\n');
        }
    }

    fn legend(&self, out: &mut String, curve: usize, channel: &Channel, look: Look) {
        let sign = match self.ink {
            Ink::Dots if self.panel.channels.len() < 2 => None,
            Ink::Dots => LETTERS.get(curve % LETTERS.len()),
            Ink::Signs => SIGNS.get(curve % SIGNS.len()),
        };
        let crest = channel.crest.map_or_else(String::new, |c| {
            let [value, time] = [brief(c.value, &channel.unit, 4), brief(c.time, "s", 4)];
            format!(": crest {value} at {time}")
        });
        let sign = sign.map_or_else(String::new, |s| format!("{s}  "));
        let text = format!("{sign}{}{crest}", channel.text);
        let room = look.width.saturating_sub(MARGIN + 1);
        let shown: String = if columns(&text) > room {
            text.chars()
                .take(room.saturating_sub(1))
                .chain(['~'])
                .collect()
        } else {
            text
        };
        out.push_str(&" ".repeat(MARGIN + 1));
        out.push_str(&painted(&shown, curve, look));
        out.push('\n');
    }

    /// Rows with their labels: ticks, the topmost with the unit.
    fn labels(&self) -> Vec<(usize, String)> {
        let mut labels: Vec<(usize, String)> = Vec::new();
        for tick in self.axis.ticks().iter().rev() {
            let share = self.axis.share(tick.value) * (self.rows - 1) as f64;
            let row = (self.rows - 1).saturating_sub(share.round().max(0.0) as usize);
            if labels.iter().all(|l| l.0 != row) {
                let unit = if labels.is_empty() {
                    self.unit()
                } else {
                    String::new()
                };
                labels.push((row, format!("{}{unit}", tick.label)));
            }
        }
        labels
    }

    fn unit(&self) -> String {
        if self.axis.unit.is_empty() {
            format!(" {}", quantity_of(self.panel.unit))
        } else {
            format!(" {}", self.axis.unit)
        }
    }
}

/// The column of an instant.
fn place(time: f64, (from, to): (f64, f64), across: usize) -> usize {
    let share = ((time - from) / (to - from)).clamp(0.0, 1.0);
    (share * (across.saturating_sub(1)) as f64).round() as usize
}

/// A row's characters, neighbours of one curve in one colour.
fn runs(spots: &[Spot], look: Look) -> String {
    let mut line = String::new();
    let mut rest = spots;
    while let Some(first) = rest.first() {
        let n = rest.iter().take_while(|s| s.curve == first.curve).count();
        let text: String = rest.iter().take(n).map(shown).collect();
        line.push_str(&match first.curve {
            Some(curve) => painted(&text, curve, look),
            None => text,
        });
        rest = rest.get(n..).unwrap_or_default();
    }
    line
}

fn shown(spot: &Spot) -> char {
    if spot.dots == 0 || spot.sign.is_ascii_graphic() {
        return spot.sign;
    }
    char::from_u32(0x2800 + u32::from(spot.dots)).unwrap_or('*')
}

fn painted(text: &str, curve: usize, look: Look) -> String {
    match COLOURS.get(curve % COLOURS.len()) {
        Some(code) if look.colour && !text.trim().is_empty() => {
            format!("\u{1b}[{code}m{text}\u{1b}[0m")
        }
        _ => text.to_owned(),
    }
}

/// The time axis under the last panel.
fn foot(out: &mut String, plot: &Plot<'_>, time: &Axis, across: usize, ink: Ink) {
    let (corner, line, tick) = match ink {
        Ink::Dots => ('└', '─', '┬'),
        Ink::Signs => ('+', '-', '+'),
    };
    let mut rule = vec![line; across];
    let mut labels = vec![' '; across + 2];
    let ends = (plot.from, plot.to);
    let mut free = 0;
    let unit = format!(" {}", time.unit);
    let room = across.saturating_sub(columns(&unit));
    for mark in time.ticks() {
        let x = place(mark.value, ends, across);
        if let Some(spot) = rule.get_mut(x) {
            *spot = tick;
        }
        let width = columns(&mark.label);
        let start = x.saturating_sub(width / 2);
        if start < free || start + width > room {
            continue;
        }
        for (k, c) in mark.label.chars().enumerate() {
            if let Some(spot) = labels.get_mut(start + k) {
                *spot = c;
            }
        }
        free = start + width + 1;
    }
    for (k, c) in unit.chars().enumerate() {
        if let Some(spot) = labels.get_mut(room.max(free) + k) {
            *spot = c;
        }
    }
    let rule: String = rule.into_iter().collect();
    let labels: String = labels.into_iter().collect();
    let margin = " ".repeat(MARGIN);
    out.push_str(&format!("{margin}{corner}{rule}\n"));
    out.push_str(format!("{margin} {labels}").trim_end());
    out.push('\n');
}

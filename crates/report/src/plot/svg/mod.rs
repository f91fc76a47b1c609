//! A plot as SVG: a picture that can stand alone or in a page.
//!
//! ```text
//!   title
//!             fire closes              names of events, in rows where they would touch
//!             ┆  ── voltage across chest
//!   voltage ┌─┆────────────┐
//!   (kV)    │ ┆  o 2.54 kV at 8.4 ms
//!           └─┆────────────┘           a panel for each quantity
//!           0    10   20   30
//!                time (ms)
//!             |── front ──|            windows of readings
//! ```
//!
//! The same plot gives the same bytes. Text is text, colours are in the style sheet, and what the
//! picture says is said in its description too.

mod labels;
mod marks;
mod paper;
mod style;

use super::curve::{Trace, points, thinned};
use super::{Axis, Panel, Plot, events, quantity_of};
use crate::number::{brief, quantity};
use labels::Box2;
use marks::{crests, event_marks, gates, markers, window_bars, window_shades};
pub(crate) use paper::escaped;
use paper::{Paper, px, width_of};
use pulsewright_study::outcome::Channel;
pub use style::SHEET;
use style::look;

/// Width of a picture, in pixels.
const WIDTH: f64 = 760.0;
/// Left edge of the panels.
const LEFT: f64 = 66.0;
/// Right edge of the panels.
const RIGHT: f64 = 744.0;
/// Height of a panel.
const HEIGHT: f64 = 176.0;
/// Height of the row above a panel that names its curves.
const LEGEND: f64 = 20.0;
/// Height of a row of small text.
const ROW: f64 = 14.0;

/// A finished picture.
#[derive(Clone, Debug)]
pub struct Figure {
    /// The SVG element.
    pub svg: String,
    /// Where time is: left and right edge of the panels in its coordinates, pixels.
    pub across: (f64, f64),
    /// Where the panels are: top and bottom, pixels; value at the bottom, value at the top.
    pub panels: Vec<(f64, f64, f64, f64)>,
    /// For each channel drawn, the index of its panel.
    pub panel_of: Vec<(usize, usize)>,
}

/// A plot as an SVG file.
#[must_use]
pub fn svg(plot: &Plot<'_>, title: &str) -> String {
    let mut sheet = Sheet::new(plot, "plot");
    sheet.head(title);
    sheet.draw();
    sheet
        .finish(title, &format!("<style>\n{SHEET}\n</style>\n"))
        .svg
}

/// A plot as an SVG element of a page that holds [`SHEET`]; its ids begin with `id`, which is
/// unique there. The title is read out, and not drawn: the page has a heading.
#[must_use]
pub fn figure(plot: &Plot<'_>, title: &str, id: &str) -> Figure {
    let mut sheet = Sheet::new(plot, id);
    sheet.draw();
    sheet.finish(title, "")
}

/// A panel as laid out.
struct Field<'a> {
    panel: Panel<'a>,
    top: f64,
    axis: Axis,
    traces: Vec<Trace>,
}

impl Field<'_> {
    fn bottom(&self) -> f64 {
        self.top + HEIGHT
    }

    fn y(&self, value: f64) -> f64 {
        self.bottom() - HEIGHT * self.axis.share(value)
    }
}

struct Sheet<'a, 'p> {
    plot: &'p Plot<'a>,
    id: &'p str,
    time: Axis,
    top: f64,
    paper: Paper,
    panels: Vec<(f64, f64, f64, f64)>,
    panel_of: Vec<(usize, usize)>,
}

impl<'a, 'p> Sheet<'a, 'p> {
    fn new(plot: &'p Plot<'a>, id: &'p str) -> Self {
        Sheet {
            plot,
            id,
            time: Axis::over(plot.from, plot.to, "s", 8),
            top: 10.0,
            paper: Paper::default(),
            panels: Vec::new(),
            panel_of: Vec::new(),
        }
    }

    fn x(&self, time: f64) -> f64 {
        LEFT + (RIGHT - LEFT) * self.time.share(time)
    }

    /// Draws the title.
    fn head(&mut self, title: &str) {
        if !title.is_empty() {
            self.paper
                .text("head", (LEFT, self.top + 12.0), &short(title, 92));
            self.top += 24.0;
        }
    }

    fn draw(&mut self) {
        let marks = event_marks(self, &events(self.plot));
        let label_top = self.top;
        self.top += ROW * marks.rows as f64 + if marks.rows > 0 { 4.0 } else { 0.0 };
        let fields = self.fields();
        if fields.is_empty() {
            self.paper.text(
                "soft",
                (LEFT, self.top + 20.0),
                "no channel has a value in this shot",
            );
            self.top += 40.0;
            return;
        }
        let ends = (
            fields.first().map_or(0.0, |f| f.top),
            fields.last().map_or(0.0, Field::bottom),
        );
        for field in &fields {
            self.backdrop(field);
        }
        marks.draw(self, label_top, ends);
        for (n, field) in fields.iter().enumerate() {
            self.curves(field, n);
        }
        for field in &fields {
            let mut taken: Vec<Box2> = Vec::new();
            markers(self, field, &mut taken);
            gates(self, field, &mut taken);
            crests(self, field, &mut taken);
        }
        self.time_axis(ends.1);
        window_bars(self);
    }

    /// Lays the panels out one under the other.
    fn fields(&mut self) -> Vec<Field<'a>> {
        let mut fields = Vec::new();
        for panel in self.plot.panels() {
            let columns = RIGHT - LEFT;
            let traces: Vec<Trace> = panel
                .channels
                .iter()
                .map(|(_, c)| points(c, self.plot.from, self.plot.to, columns as usize))
                .collect();
            let (low, high) = range(&panel, &traces);
            let axis = Axis::over(low, high, panel.unit, 5);
            let top = self.top + LEGEND;
            self.top = top + HEIGHT + 8.0;
            fields.push(Field {
                panel,
                top,
                axis,
                traces,
            });
        }
        fields
    }

    /// Grid, frame, scale and legend of a panel.
    fn backdrop(&mut self, field: &Field<'_>) {
        let (top, bottom) = (field.top, field.bottom());
        for time in self.time.minor_ticks() {
            let x = self.x(time);
            self.paper.line("fine t", (x, top), (x, bottom));
        }
        for value in field.axis.minor_ticks() {
            let y = field.y(value);
            self.paper.line("fine", (LEFT, y), (RIGHT, y));
            self.paper.line("tick", (LEFT - 3.0, y), (LEFT, y));
        }
        for tick in self.time.ticks() {
            let x = self.x(tick.value);
            self.paper.line("grid t", (x, top), (x, bottom));
        }
        for tick in field.axis.ticks() {
            let y = field.y(tick.value);
            let class = if tick.value == 0.0 { "zero" } else { "grid" };
            self.paper.line(class, (LEFT, y), (RIGHT, y));
            self.paper.line("tick", (LEFT - 6.0, y), (LEFT, y));
            self.paper.text("end", (LEFT - 9.0, y + 4.0), &tick.label);
        }
        window_shades(self, top, bottom);
        self.paper
            .rect("frame", (LEFT, top), (RIGHT - LEFT, HEIGHT), "");
        let middle = top + HEIGHT / 2.0;
        let title = titled(&quantity_of(field.panel.unit), &field.axis.unit);
        self.paper.raw(&format!(
            "<text class=\"mid\" transform=\"translate(15 {}) rotate(-90)\">{}</text>",
            px(middle),
            escaped(&title)
        ));
        self.legend(field);
    }

    fn legend(&mut self, field: &Field<'_>) {
        let mut x = LEFT;
        let y = field.top - 7.0;
        for (index, channel) in &field.panel.channels {
            let name = short(&channel.text, 60);
            let class = format!("curve {}", look(*index));
            self.paper.line(&class, (x, y - 3.5), (x + 30.0, y - 3.5));
            self.paper.text("halo", (x + 36.0, y), &name);
            x += 56.0 + width_of(&name);
            if x > RIGHT - 80.0 {
                break;
            }
        }
    }

    fn curves(&mut self, field: &Field<'_>, n: usize) {
        let columns = (RIGHT - LEFT) as usize;
        self.panels
            .push((field.top, field.bottom(), field.axis.low, field.axis.high));
        for ((index, _), trace) in field.panel.channels.iter().zip(&field.traces) {
            let shares: Trace = trace
                .iter()
                .map(|(t, v)| (self.time.share(*t), field.axis.share(*v)))
                .collect();
            // A fifteenth of a pixel.
            let path: Vec<String> = thinned(&shares, columns, 0.065 / HEIGHT)
                .iter()
                .map(|(x, y)| {
                    format!(
                        "{} {}",
                        px(LEFT + (RIGHT - LEFT) * x),
                        px(field.bottom() - HEIGHT * y)
                    )
                })
                .collect();
            self.paper.raw(&format!(
                "<path class=\"curve t {}\" d=\"M{}\"/>",
                look(*index),
                path.join("L")
            ));
            self.panel_of.push((*index, n));
        }
    }

    fn time_axis(&mut self, bottom: f64) {
        for time in self.time.minor_ticks() {
            let x = self.x(time);
            self.paper.line("tick t", (x, bottom), (x, bottom + 3.0));
        }
        for tick in self.time.ticks() {
            let x = self.x(tick.value);
            self.paper.line("tick t", (x, bottom), (x, bottom + 6.0));
            self.paper.text("mid t", (x, bottom + 18.0), &tick.label);
        }
        let title = titled("time", &self.time.unit);
        let middle = f64::midpoint(LEFT, RIGHT);
        self.paper.text("mid t", (middle, bottom + 34.0), &title);
        self.top = bottom + 42.0;
    }

    fn finish(self, title: &str, style: &str) -> Figure {
        let height = (self.top + 6.0).ceil();
        let (id, words) = (self.id, description(self.plot));
        let name = if title.is_empty() { "waveforms" } else { title };
        let (w, h) = (px(WIDTH), px(height));
        let head = format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" class=\"pulse-plot\" id=\"{id}\" role=\"img\" \
             aria-labelledby=\"{id}-title {id}-desc\" viewBox=\"0 0 {w} {h}\" width=\"{w}\" height=\"{h}\">\n\
             <title id=\"{id}-title\">{}</title>\n<desc id=\"{id}-desc\">{}</desc>\n{style}\
             <defs><pattern id=\"{id}-hatch\" width=\"6\" height=\"6\" patternUnits=\"userSpaceOnUse\" \
             patternTransform=\"rotate(45)\"><line class=\"hatch\" x1=\"0\" y1=\"0\" x2=\"0\" y2=\"6\"/></pattern></defs>\n\
             <rect class=\"paper\" width=\"{w}\" height=\"{h}\"/>\n",
            escaped(name),
            escaped(&words)
        );
        Figure {
            svg: format!("{head}{}</svg>\n", self.paper.into_text()),
            across: (LEFT, RIGHT),
            panels: self.panels,
            panel_of: self.panel_of,
        }
    }
}

/// Least and greatest value of a panel: its curves, zero unless it is far away, and those limits
/// that do not squeeze the curves.
fn range(panel: &Panel<'_>, traces: &[Trace]) -> (f64, f64) {
    let values = traces.iter().flatten().map(|p| p.1);
    let (mut low, mut high) = values.fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), v| {
        (l.min(v), h.max(v))
    });
    if low > high {
        return (0.0, 0.0);
    }
    if (high - low) > 0.2 * low.abs().max(high.abs()) || low == high {
        low = low.min(0.0);
        high = high.max(0.0);
    }
    let (size, curve) = (high - low, (low, high));
    for gate in panel.channels.iter().flat_map(|(_, c)| &c.gates) {
        let near = gate.level <= curve.1 + 0.8 * size && gate.level >= curve.0 - 0.4 * size;
        if near {
            low = low.min(gate.level);
            high = high.max(gate.level);
        }
    }
    // Room for the name of a crest above or below the curve; less beside the zero line.
    let size = high - low;
    let room = |edge: f64| {
        if edge.abs() < 0.01 * size {
            0.05 * size
        } else {
            0.12 * size
        }
    };
    (low - room(low), high + room(high))
}

/// `voltage (kV)`; a quantity without a unit stands alone.
fn titled(quantity: &str, unit: &str) -> String {
    if unit.is_empty() || unit == quantity {
        quantity.to_owned()
    } else {
        format!("{quantity} ({unit})")
    }
}

/// At most so many characters of a text.
pub(crate) fn short(text: &str, most: usize) -> String {
    if text.chars().count() <= most {
        return text.to_owned();
    }
    let kept: String = text.chars().take(most.saturating_sub(1)).collect();
    format!("{kept}…")
}

/// `2.543 kV at 8.4 ms`
fn crest_words(channel: &Channel, digits: i32) -> Option<String> {
    let crest = channel.crest?;
    Some(format!(
        "{} at {}",
        brief(crest.value, &channel.unit, digits),
        brief(crest.time, "s", digits)
    ))
}

/// The picture in words, for who cannot see it.
fn description(plot: &Plot<'_>) -> String {
    let mut words = format!(
        "From {} to {}.",
        quantity(plot.from, "s"),
        quantity(plot.to, "s")
    );
    for channel in &plot.fired.channels {
        words.push_str(&format!(" {}", channel.text));
        if let Some(crest) = crest_words(channel, 5) {
            words.push_str(&format!(": crest {crest}"));
        }
        words.push('.');
    }
    for (time, what) in events(plot).iter().take(50) {
        words.push_str(&format!(" At {} {what}.", brief(*time, "s", 5)));
    }
    let claims = plot.fired.claims.iter().filter(|c| {
        let mut gates = plot.fired.channels.iter().flat_map(|k| &k.gates);
        gates.any(|g| g.claim == c.name)
    });
    for claim in claims {
        words.push_str(&format!(
            " Limit of {}: {} {}; {}.",
            claim.name,
            claim.text,
            claim.relation,
            claim.verdict.words()
        ));
    }
    words
}

//! A plot of work against precision: the error of each reading over the steps that it took.
//!
//! ```text
//!   error  |  o__                    one panel a reading, all on the same axes, both in
//!          |  #  o__                 logarithms: a method of order p falls by p decades
//!          |    #   o__  order 1     for each decade of steps
//!          |      #     o
//!          |        #    order 2
//!          +-------------- steps
//! ```
//!
//! Errors are over the reading's scale. Each method has a colour, a marker and a dash of its own, so
//! that the plot reads without colour; the colours are told apart by colour-blind eyes (Okabe and
//! Ito). An error that the reference is too uncertain to tell has a hollow marker and no line, on
//! the axis where it is below the range of the others; a reading that has no other errors has no
//! panel. The text is SVG, whole in itself: no style sheet, no script, no font to fetch.

use std::fmt::Write as _;

use crate::number::raised;
use crate::plot::escaped;
use crate::record::Origin;
use pulsewright_study::outcome::Found;
use pulsewright_study::{Compared, Methods};

/// Width of the picture, px.
const WIDTH: f64 = 760.0;
/// Height of a panel with its title and axis, px: alone, and beside others.
const TALL: f64 = 400.0;
const LOW: f64 = 270.0;
/// Where the first row of panels begins, px.
const TOP: f64 = 78.0;
/// Panels at most; further readings stand in the record.
const PANELS: usize = 12;
/// Room for the orders at the right of a panel, px.
const ORDERS: f64 = 76.0;
/// About how wide a letter is, px.
const LETTER: f64 = 6.9;
/// The error axis has so many decades at least.
const DECADES: f64 = 3.0;

/// How a method is drawn.
struct Pen {
    colour: &'static str,
    dash: &'static str,
    marker: fn(f64, f64) -> String,
}

const PENS: [Pen; 3] = [
    Pen {
        colour: "#0072B2",
        dash: "",
        marker: circle,
    },
    Pen {
        colour: "#D55E00",
        dash: "7 3",
        marker: square,
    },
    Pen {
        colour: "#009E73",
        dash: "2 3",
        marker: triangle,
    },
];

fn circle(x: f64, y: f64) -> String {
    format!("M{:.2} {y:.2}a4 4 0 1 0 8 0a4 4 0 1 0 -8 0z", x - 4.0)
}

fn square(x: f64, y: f64) -> String {
    format!("M{:.2} {:.2}h7.2v7.2h-7.2z", x - 3.6, y - 3.6)
}

fn triangle(x: f64, y: f64) -> String {
    format!("M{x:.2} {:.2}l4.6 8h-9.2z", y - 5.0)
}

/// The plot as SVG; without panels where no error is to be seen.
#[must_use]
pub fn work_precision(methods: &Methods, origin: &Origin<'_>) -> String {
    let (panels, silent): (Vec<Panel<'_>>, Vec<Panel<'_>>) = methods
        .readings
        .iter()
        .filter_map(|r| Panel::of(r, methods))
        .partition(Panel::shows);
    let shown = panels.len().min(PANELS);
    let columns = if shown > 1 { 2 } else { 1 };
    let height = if shown > 1 { LOW } else { TALL };
    #[allow(clippy::cast_precision_loss, reason = "a few rows")]
    let bottom = TOP + shown.div_ceil(columns) as f64 * height;
    let more = panels.iter().skip(shown);
    let notes = [
        note("no error to be seen", silent.iter()),
        note("not drawn", more),
    ];
    let notes: Vec<&String> = notes.iter().flatten().collect();
    let name = origin.title.unwrap_or("work and precision");
    let mut out = String::new();
    #[allow(clippy::cast_precision_loss, reason = "two at most")]
    let whole = bottom + 14.0 + 20.0 * notes.len() as f64;
    head(&mut out, whole, name, &in_words(&panels));
    let style = "font-size=\"15\" font-weight=\"600\"";
    text(&mut out, 16.0, 26.0, style, name);
    legend(&mut out, methods);
    let axes = Axes::over(panels.iter().take(shown));
    for (k, panel) in panels.iter().take(shown).enumerate() {
        #[allow(clippy::cast_precision_loss, reason = "a few rows and columns")]
        let (column, row) = ((k % columns) as f64, (k / columns) as f64);
        #[allow(clippy::cast_precision_loss, reason = "one or two")]
        let width = WIDTH / columns as f64;
        let frame = Frame {
            left: column * width + 66.0,
            right: (column + 1.0) * width - ORDERS,
            top: TOP + row * height + 28.0,
            bottom: TOP + (row + 1.0) * height - 46.0,
        };
        panel.draw(&mut out, &axes, &frame);
    }
    let mut y = bottom + 14.0;
    for note in notes {
        text(&mut out, 16.0, y, "fill=\"#555\"", note);
        y += 20.0;
    }
    out.push_str("</svg>\n");
    out
}

/// `no error to be seen: dose, brief`
fn note<'p>(words: &str, panels: impl Iterator<Item = &'p Panel<'p>>) -> Option<String> {
    let names: Vec<&str> = panels.map(|p| p.reading.name.as_str()).collect();
    (!names.is_empty()).then(|| shortened(&format!("{words}: {}", names.join(", ")), WIDTH))
}

fn head(out: &mut String, height: f64, name: &str, words: &str) {
    let _ = write!(
        out,
        "<svg xmlns=\"http://www.w3.org/2000/svg\" role=\"img\" viewBox=\"0 0 {WIDTH} {height}\" \
         width=\"{WIDTH}\" height=\"{height}\" font-family=\"system-ui, 'Segoe UI', Helvetica, Arial, sans-serif\" \
         font-size=\"12\" fill=\"#222\">\n<title>{}: error against steps</title>\n<desc>{}</desc>\n\
         <rect width=\"{WIDTH}\" height=\"{height}\" fill=\"#fff\"/>\n",
        escaped(name),
        escaped(words),
    );
}

/// What the plot shows, in words.
fn in_words(panels: &[Panel<'_>]) -> String {
    let mut words = String::from("Error over the reading's scale against the number of steps.");
    for panel in panels {
        let _ = write!(words, " {}:", panel.reading.name);
        let mut comma = "";
        for (line, method) in panel.lines.iter().zip(&panel.reading.methods) {
            let order = method
                .order
                .map_or_else(|| "no order seen".to_owned(), |p| format!("order {p:.2}"));
            let _ = write!(words, "{comma} {} {order}", method.method);
            if let (Some(a), Some(b)) = (line.first(), line.last()) {
                let _ = write!(
                    words,
                    ", {:.1e} with {} steps to {:.1e} with {} steps",
                    a.error, a.steps, b.error, b.steps
                );
            }
            comma = ";";
        }
        words.push('.');
    }
    words
}

/// The methods with their markers, and what a hollow one means.
fn legend(out: &mut String, methods: &Methods) {
    let mut x = 16.0;
    let y = 52.0;
    for (work, pen) in methods.work.iter().zip(PENS.iter().cycle()) {
        line(out, [x, y, x + 34.0, y], pen);
        mark(out, pen, x + 17.0, y, true);
        text(out, x + 42.0, y + 4.0, "", &work.method);
        x += 42.0 + letters(&work.method) + 26.0;
    }
    let hollow = Pen {
        colour: "#666",
        ..PENS[0]
    };
    mark(out, &hollow, x + 4.0, y, false);
    text(
        out,
        x + 14.0,
        y + 4.0,
        "fill=\"#555\"",
        "hollow: less than the reference can tell",
    );
}

/// About how wide a text is, px.
fn letters(text: &str) -> f64 {
    text.chars().map(|_| LETTER).sum()
}

/// A point: steps, and the error over the scale.
#[derive(Clone, Copy)]
struct Point {
    steps: u64,
    error: f64,
    resolved: bool,
}

/// A reading with the points of each method.
struct Panel<'a> {
    reading: &'a Compared,
    lines: Vec<Vec<Point>>,
}

impl<'a> Panel<'a> {
    /// The panel of a reading that has a reference.
    fn of(reading: &'a Compared, methods: &Methods) -> Option<Self> {
        if !matches!(reading.reference.found, Found::Value { .. }) {
            return None;
        }
        let scale = if reading.scale > 0.0 {
            reading.scale
        } else {
            1.0
        };
        let lines = reading.methods.iter().zip(&methods.work).map(|(m, w)| {
            let runs = m.runs.iter().zip(&w.runs);
            let point = |(run, work): (&pulsewright_study::RunError, &pulsewright_study::Work)| {
                Some(Point {
                    steps: work.steps,
                    error: run.error?.abs() / scale,
                    resolved: run.resolved,
                })
                .filter(|p| p.error.is_finite() && p.steps > 0)
            };
            runs.filter_map(point).collect()
        });
        Some(Panel {
            reading,
            lines: lines.collect(),
        })
    }

    /// Whether any error is to be seen.
    fn shows(&self) -> bool {
        self.lines.iter().flatten().any(|p| p.resolved)
    }

    fn draw(&self, out: &mut String, axes: &Axes, frame: &Frame) {
        let title = format!("{}: {}", self.reading.name, self.reading.text);
        let title = shortened(&title, frame.right + ORDERS - 16.0 - frame.left);
        text(
            out,
            frame.left,
            frame.top - 10.0,
            "font-weight=\"600\"",
            &title,
        );
        axes.draw(out, frame);
        for (points, pen) in self.lines.iter().zip(PENS.iter().cycle()) {
            let place = |p: &Point| axes.place(frame, p);
            for pair in points.windows(2) {
                if let [a, b] = pair
                    && a.resolved
                    && b.resolved
                {
                    let ((xa, ya), (xb, yb)) = (place(a), place(b));
                    line(out, [xa, ya, xb, yb], pen);
                }
            }
            for p in points {
                let (x, y) = place(p);
                mark(out, pen, x, y, p.resolved);
            }
        }
        self.orders(out, axes, frame);
    }

    /// The orders at the right of the lines that they are of, one under the other.
    fn orders(&self, out: &mut String, axes: &Axes, frame: &Frame) {
        let pens = PENS.iter().cycle();
        let lines = self.lines.iter().zip(&self.reading.methods).zip(pens);
        let mut labels: Vec<(f64, f64, &Pen)> = lines
            .filter_map(|((points, method), pen)| {
                let last = points.iter().rev().find(|p| p.resolved)?;
                Some((axes.place(frame, last).1 + 4.0, method.order?, pen))
            })
            .collect();
        labels.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut above = f64::NEG_INFINITY;
        for (y, order, pen) in labels {
            above = y.max(above + 14.0);
            let style = format!(
                "fill=\"{}\" font-size=\"11\" font-weight=\"600\"",
                pen.colour
            );
            let words = format!("order {order:.2}");
            text(out, frame.right + 4.0, above, &style, &words);
        }
    }
}

/// As much of a text as fits a width, px.
fn shortened(words: &str, width: f64) -> String {
    if letters(words) <= width {
        return words.to_owned();
    }
    let mut kept = String::new();
    for c in words.chars() {
        if letters(&kept) + 2.0 * LETTER > width {
            break;
        }
        kept.push(c);
    }
    format!("{}…", kept.trim_end())
}

/// Where a panel's axes are, px.
struct Frame {
    left: f64,
    right: f64,
    top: f64,
    bottom: f64,
}

/// Both axes in decades, the same for all panels.
struct Axes {
    steps: (f64, f64),
    error: (f64, f64),
}

impl Axes {
    /// Axes on which all points stand, with some room.
    fn over<'p>(panels: impl Iterator<Item = &'p Panel<'p>>) -> Self {
        let (mut steps, mut error) = (
            (f64::INFINITY, f64::NEG_INFINITY),
            (f64::INFINITY, f64::NEG_INFINITY),
        );
        let wider = |range: &mut (f64, f64), x: f64| *range = (range.0.min(x), range.1.max(x));
        for p in panels.flat_map(|p| p.lines.iter().flatten()) {
            #[allow(clippy::cast_precision_loss, reason = "a count of steps")]
            wider(&mut steps, (p.steps as f64).log10());
            if p.resolved {
                wider(&mut error, p.error.log10());
            }
        }
        let (least, most) = ((error.0 - 0.2).floor(), (error.1 + 0.2).ceil());
        Axes {
            steps: (steps.0 - 0.08, steps.1 + 0.08),
            error: (least.min(most - DECADES), most),
        }
    }

    fn x(&self, frame: &Frame, decade: f64) -> f64 {
        let share = (decade - self.steps.0) / (self.steps.1 - self.steps.0);
        frame.left + share * (frame.right - frame.left)
    }

    fn y(&self, frame: &Frame, decade: f64) -> f64 {
        let share = (decade - self.error.0) / (self.error.1 - self.error.0);
        frame.bottom - share * (frame.bottom - frame.top)
    }

    fn place(&self, frame: &Frame, p: &Point) -> (f64, f64) {
        #[allow(clippy::cast_precision_loss, reason = "a count of steps")]
        let steps = p.steps as f64;
        (
            self.x(frame, steps.log10()),
            self.y(frame, p.error.log10().max(self.error.0)),
        )
    }

    fn draw(&self, out: &mut String, frame: &Frame) {
        self.draw_steps(out, frame);
        self.draw_error(out, frame);
        let _ = writeln!(
            out,
            "<path d=\"M{:.2} {:.2}V{:.2}H{:.2}\" fill=\"none\" stroke=\"#555\"/>",
            frame.left, frame.top, frame.bottom, frame.right
        );
        let middle = 0.5 * (frame.left + frame.right);
        let style = "text-anchor=\"middle\" fill=\"#444\"";
        text(out, middle, frame.bottom + 36.0, style, "steps");
        let (x, y) = (frame.left - 50.0, 0.5 * (frame.top + frame.bottom));
        let style =
            format!("text-anchor=\"middle\" fill=\"#444\" transform=\"rotate(-90 {x:.2} {y:.2})\"");
        text(out, x, y, &style, "error / scale");
    }

    /// Numbers at 1 and 3 of each decade of steps where there are few decades.
    fn draw_steps(&self, out: &mut String, frame: &Frame) {
        let few = self.steps.1 - self.steps.0 < 2.5;
        for (power, digit) in ticks(self.steps) {
            let decade = f64::from(power) + f64::from(digit).log10();
            let numbered = digit == 1 || (few && digit == 3);
            let x = self.x(frame, decade);
            if numbered {
                rule(out, [x, frame.top, x, frame.bottom]);
                let style = "text-anchor=\"middle\" font-size=\"11\" fill=\"#444\"";
                text(out, x, frame.bottom + 18.0, style, &count(power, digit));
            }
            let size = if numbered { 6.0 } else { 3.0 };
            tick(out, [x, frame.bottom, x, frame.bottom + size]);
        }
    }

    /// Numbers at decades, at most some seven.
    fn draw_error(&self, out: &mut String, frame: &Frame) {
        let every = ((self.error.1 - self.error.0) / 7.0).ceil().max(1.0);
        let mut decade = self.error.0;
        while decade <= self.error.1 {
            let y = self.y(frame, decade);
            let numbered = (decade / every).fract() == 0.0;
            if numbered {
                rule(out, [frame.left, y, frame.right, y]);
                #[allow(clippy::cast_possible_truncation, reason = "between -16 and 300")]
                let label = format!("10{}", raised(decade as i32));
                let style = "text-anchor=\"end\" font-size=\"11\" fill=\"#444\"";
                text(out, frame.left - 9.0, y + 4.0, style, &label);
            }
            let size = if numbered { 6.0 } else { 3.0 };
            tick(out, [frame.left - size, y, frame.left, y]);
            decade += 1.0;
        }
    }
}

/// The first digits of all decades within a range of decades.
fn ticks((from, to): (f64, f64)) -> Vec<(i32, i32)> {
    #[allow(clippy::cast_possible_truncation, reason = "decades of a count")]
    let powers = from.floor() as i32..=to.floor() as i32;
    let all = powers.flat_map(|p| (1..10).map(move |d| (p, d)));
    let within = |&(p, d): &(i32, i32)| {
        let decade = f64::from(p) + f64::from(d).log10();
        decade >= from && decade <= to
    };
    all.filter(within).collect()
}

/// `200`, `5,000`, `10⁶`
fn count(power: i32, digit: i32) -> String {
    match power {
        0..=2 => format!("{digit}{}", "0".repeat(usize::try_from(power).unwrap_or(0))),
        3..=5 => format!(
            "{digit}{},000",
            "0".repeat(usize::try_from(power - 3).unwrap_or(0))
        ),
        _ if digit == 1 => format!("10{}", raised(power)),
        _ => format!("{digit}·10{}", raised(power)),
    }
}

fn line(out: &mut String, [x, y, to_x, to_y]: [f64; 4], pen: &Pen) {
    let dash = if pen.dash.is_empty() {
        String::new()
    } else {
        format!(" stroke-dasharray=\"{}\"", pen.dash)
    };
    let _ = writeln!(
        out,
        "<path d=\"M{x:.2} {y:.2}L{to_x:.2} {to_y:.2}\" fill=\"none\" stroke=\"{}\" stroke-width=\"1.8\"{dash}/>",
        pen.colour
    );
}

fn mark(out: &mut String, pen: &Pen, x: f64, y: f64, filled: bool) {
    let fill = if filled { pen.colour } else { "#fff" };
    let _ = writeln!(
        out,
        "<path d=\"{}\" fill=\"{fill}\" stroke=\"{}\" stroke-width=\"1.4\"/>",
        (pen.marker)(x, y),
        pen.colour
    );
}

fn rule(out: &mut String, [x, y, to_x, to_y]: [f64; 4]) {
    let _ = writeln!(
        out,
        "<path d=\"M{x:.2} {y:.2}L{to_x:.2} {to_y:.2}\" stroke=\"#e2e2e2\"/>"
    );
}

fn tick(out: &mut String, [x, y, to_x, to_y]: [f64; 4]) {
    let _ = writeln!(
        out,
        "<path d=\"M{x:.2} {y:.2}L{to_x:.2} {to_y:.2}\" stroke=\"#555\"/>"
    );
}

fn text(out: &mut String, x: f64, y: f64, style: &str, words: &str) {
    let gap = if style.is_empty() { "" } else { " " };
    let _ = writeln!(
        out,
        "<text x=\"{x:.2}\" y=\"{y:.2}\"{gap}{style}>{}</text>",
        escaped(words)
    );
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_xml_reads_as_its_own_is_escaped() {
        assert_eq!(
            escaped("a < \"b\" & c\u{7}"),
            "a &lt; &quot;b&quot; &amp; c "
        );
    }

    #[test]
    fn a_count_has_its_thousands_parted() {
        assert_eq!(
            [(0, 1), (2, 5), (3, 2), (5, 1), (6, 2)].map(|(p, d)| count(p, d)),
            ["1", "500", "2,000", "100,000", "2·10⁶"]
        );
    }

    #[test]
    fn ticks_stand_within_the_range() {
        assert_eq!(ticks((1.9, 2.4)), [(1, 8), (1, 9), (2, 1), (2, 2)]);
    }
}

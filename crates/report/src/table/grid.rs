//! Cells in columns: aligned, never split, fitted to a width.
//!
//! ```text
//!   dose   holds   311.860000 J  ± 12 µJ   the last column, which alone is broken
//!                                          at blanks where it is too long
//! ```
//!
//! Numbers are aligned on their decimal point. Where even so the columns do not fit, a row is
//! laid out line under line: its first cell, then the others, as many to a line as fit.

use crate::look::{Look, Tone, broken, columns};

/// How a column stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Align {
    /// At the left.
    Left,
    /// At the right.
    Right,
    /// On the decimal point of each cell's number.
    Point,
    /// At the left, broken at blanks; only the last column may.
    Text,
}

/// A cell: a text and its tone.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Cell {
    /// The text.
    pub text: String,
    /// Its tone.
    pub tone: Tone,
}

impl Cell {
    /// A text with a tone.
    #[must_use]
    pub fn toned(text: impl Into<String>, tone: Tone) -> Self {
        Cell {
            text: text.into(),
            tone,
        }
    }
}

impl<T: Into<String>> From<T> for Cell {
    fn from(text: T) -> Self {
        Cell {
            text: text.into(),
            tone: Tone::Plain,
        }
    }
}

/// A table.
#[derive(Clone, Debug, Default)]
pub struct Grid {
    columns: Vec<Align>,
    head: Vec<String>,
    rows: Vec<Vec<Cell>>,
}

const INDENT: usize = 2;
const GAP: usize = 2;
/// The least width in which text is broken; with less it goes under its row.
const LEAST_TEXT: usize = 20;

impl Grid {
    /// A table with these columns and no head.
    #[must_use]
    pub fn new(columns: impl Into<Vec<Align>>) -> Self {
        Grid {
            columns: columns.into(),
            head: Vec::new(),
            rows: Vec::new(),
        }
    }

    /// The same with a word over each column.
    #[must_use]
    pub fn headed<T: Into<String>>(mut self, head: impl IntoIterator<Item = T>) -> Self {
        self.head = head.into_iter().map(Into::into).collect();
        self
    }

    /// Adds a row.
    pub fn row(&mut self, cells: impl IntoIterator<Item = Cell>) {
        self.rows.push(cells.into_iter().collect());
    }

    /// Whether it has no rows.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.rows.is_empty()
    }

    /// Adds the table to a text.
    pub fn write(&self, out: &mut String, look: Look) {
        let layout = Layout::of(self);
        let fixed = layout.fixed();
        let text = look
            .width
            .saturating_sub(fixed + if layout.text.is_some() { GAP } else { 0 });
        let beside = layout.text.is_none() || text >= LEAST_TEXT.min(layout.text.unwrap_or(0));
        if fixed > look.width {
            return self.write_stacked(out, look);
        }
        if !self.head.is_empty() {
            let head: Vec<Cell> = self
                .head
                .iter()
                .map(|h| Cell::toned(h.as_str(), Tone::Faint))
                .collect();
            layout.line(
                out,
                look,
                &head,
                if beside { text } else { look.width },
                beside,
                Tone::Faint,
            );
        }
        for row in &self.rows {
            layout.line(out, look, row, text, beside, Tone::Plain);
        }
    }

    fn write_stacked(&self, out: &mut String, look: Look) {
        for row in &self.rows {
            let mut line = Line::new(INDENT);
            for (k, cell) in row.iter().enumerate().filter(|(_, c)| !c.text.is_empty()) {
                let labelled = self.head.get(k).filter(|h| k > 0 && !h.is_empty());
                let text =
                    labelled.map_or_else(|| cell.text.clone(), |h| format!("{h} {}", cell.text));
                for piece in if self.columns.get(k) == Some(&Align::Text) {
                    broken(&text, look.width.saturating_sub(2 * INDENT))
                } else {
                    vec![text]
                } {
                    if line.started && line.width + GAP + columns(&piece) > look.width {
                        line.end(out);
                        line = Line::new(2 * INDENT);
                    }
                    line.push(&piece, look, cell.tone);
                }
            }
            line.end(out);
        }
    }
}

/// The widths of a table's columns.
struct Layout<'a> {
    grid: &'a Grid,
    /// Columns before the decimal point, and from it on.
    widths: Vec<(usize, usize)>,
    /// Width of the text column, where there is one.
    text: Option<usize>,
}

impl<'a> Layout<'a> {
    fn of(grid: &'a Grid) -> Self {
        let mut widths = vec![(0, 0); grid.columns.len()];
        for row in &grid.rows {
            for ((width, cell), align) in widths.iter_mut().zip(row).zip(&grid.columns) {
                let (before, after) = parts(&cell.text, *align);
                *width = (width.0.max(before), width.1.max(after));
            }
        }
        for ((width, head), align) in widths.iter_mut().zip(&grid.head).zip(&grid.columns) {
            let missing = columns(head).saturating_sub(width.0 + width.1);
            if *align == Align::Point {
                width.0 += missing
            } else {
                width.1 += missing
            }
        }
        let is_text = grid.columns.last() == Some(&Align::Text);
        let text = is_text.then(|| widths.last().map_or(0, |w| w.0 + w.1));
        Layout { grid, widths, text }
    }

    /// The columns that all but the text take, gaps and indentation included; empty columns
    /// take none.
    fn fixed(&self) -> usize {
        let count = self.widths.len() - usize::from(self.text.is_some());
        let used: Vec<usize> = self
            .widths
            .iter()
            .take(count)
            .map(|w| w.0 + w.1)
            .filter(|w| *w > 0)
            .collect();
        INDENT + used.iter().sum::<usize>() + GAP * used.len().saturating_sub(1)
    }

    fn line(
        &self,
        out: &mut String,
        look: Look,
        row: &[Cell],
        text: usize,
        beside: bool,
        over: Tone,
    ) {
        let mut line = Line::new(INDENT);
        let heading = over == Tone::Faint;
        for ((cell, align), width) in row.iter().zip(&self.grid.columns).zip(&self.widths) {
            if width.0 + width.1 == 0 {
                continue;
            }
            if *align == Align::Text {
                self.text(
                    out,
                    line,
                    look,
                    cell,
                    if beside {
                        text
                    } else {
                        look.width - 2 * INDENT
                    },
                    beside,
                );
                return;
            }
            line.cell(
                cell,
                if heading && *align == Align::Point {
                    Align::Right
                } else {
                    *align
                },
                *width,
                look,
            );
        }
        line.end(out);
    }

    fn text(
        &self,
        out: &mut String,
        mut line: Line,
        look: Look,
        cell: &Cell,
        width: usize,
        beside: bool,
    ) {
        let start = if beside {
            self.fixed() + GAP
        } else {
            2 * INDENT
        };
        if !beside {
            line.end(out);
            line = Line::new(start);
        }
        let mut lines = broken(&cell.text, width).into_iter();
        if let Some(first) = lines.next() {
            line.to(start);
            line.push_bare(&first, look, cell.tone);
        }
        line.end(out);
        for rest in lines {
            let mut line = Line::new(start);
            line.push_bare(&rest, look, cell.tone);
            line.end(out);
        }
    }
}

/// A line in the making: blanks are owed until something follows them.
struct Line {
    text: String,
    width: usize,
    owed: usize,
    started: bool,
}

impl Line {
    fn new(indent: usize) -> Self {
        Line {
            text: String::new(),
            width: 0,
            owed: indent,
            started: false,
        }
    }

    /// A piece after a gap.
    fn push(&mut self, text: &str, look: Look, tone: Tone) {
        if self.started {
            self.owed += GAP;
        }
        self.push_bare(text, look, tone);
    }

    fn push_bare(&mut self, text: &str, look: Look, tone: Tone) {
        self.started = true;
        if text.is_empty() {
            return;
        }
        self.text.push_str(&" ".repeat(self.owed));
        self.text.push_str(&look.tinted(text, tone));
        self.width += self.owed + columns(text);
        self.owed = 0;
    }

    fn cell(&mut self, cell: &Cell, align: Align, width: (usize, usize), look: Look) {
        let (before, after) = parts(&cell.text, align);
        let total = width.0 + width.1;
        let left = match align {
            Align::Left | Align::Text => 0,
            Align::Right => total.saturating_sub(before + after),
            Align::Point => width.0.saturating_sub(before),
        };
        if self.started {
            self.owed += GAP;
        }
        self.owed += left;
        self.push_bare(&cell.text, look, cell.tone);
        self.owed += total.saturating_sub(left + before + after);
    }

    /// Owes blanks up to a column.
    fn to(&mut self, column: usize) {
        self.owed = column.saturating_sub(self.width);
    }

    fn end(self, out: &mut String) {
        out.push_str(&self.text);
        out.push('\n');
    }
}

/// The columns of a cell before its decimal point, and from it on.
fn parts(text: &str, align: Align) -> (usize, usize) {
    if align != Align::Point {
        return (0, columns(text));
    }
    let numeric = text.starts_with(|c: char| c.is_ascii_digit() || c == '−');
    let before = if numeric {
        text.find(['.', ' ']).unwrap_or(text.len())
    } else {
        0
    };
    let (whole, rest) = text.split_at(before);
    (columns(whole), columns(rest))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn written(grid: &Grid, width: usize) -> String {
        let mut out = String::new();
        grid.write(
            &mut out,
            Look {
                width,
                colour: false,
            },
        );
        out
    }

    fn sample() -> Grid {
        let mut grid = Grid::new([Align::Left, Align::Point, Align::Text])
            .headed(["reading", "value", "text"]);
        grid.row([
            "dose".into(),
            "311.860 J".into(),
            "energy into chest".into(),
        ]);
        grid.row([
            "top".into(),
            "−4.7 kV".into(),
            "lowest voltage across bank after 1 ms".into(),
        ]);
        grid
    }

    #[test]
    fn numbers_stand_on_their_point() {
        assert_eq!(
            written(&sample(), 80),
            "  reading      value  text\n\
             \x20 dose     311.860 J  energy into chest\n\
             \x20 top       −4.7 kV   lowest voltage across bank after 1 ms\n"
        );
    }

    #[test]
    fn text_is_broken_in_its_column() {
        assert_eq!(
            written(&sample(), 42).lines().skip(2).collect::<Vec<_>>(),
            [
                "  top       −4.7 kV   lowest voltage",
                "                      across bank after",
                "                      1 ms"
            ]
        );
    }

    #[test]
    fn text_without_room_goes_under_its_row() {
        assert_eq!(
            written(&sample(), 30)
                .lines()
                .skip(4)
                .take(3)
                .collect::<Vec<_>>(),
            [
                "  top       −4.7 kV",
                "    lowest voltage across bank",
                "    after 1 ms"
            ]
        );
    }

    #[test]
    fn a_row_that_does_not_fit_is_stacked() {
        let text = written(&sample(), 18);
        assert!(text.starts_with("  dose\n    value 311.860 J\n"), "{text}");
    }

    #[test]
    fn no_line_ends_in_blanks() {
        for width in [18, 30, 42, 80] {
            assert!(written(&sample(), width).lines().all(|l| !l.ends_with(' ')));
        }
    }
}

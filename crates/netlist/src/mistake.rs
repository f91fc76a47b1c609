//! Mistakes and remarks as a person reads them.
//!
//! ```text
//! stage.shot:3:37: mistake P0107: `chest` needs a resistance, and 50 has no unit
//!     resistor chest from pad to ground = 50
//!                                         ~~ a value with a unit belongs here
//!     write: 50 ohm
//! ```
//!
//! The place is underlined at the width that a terminal gives it: a tab is shown as one blank,
//! a wide character takes two cells, a combining mark none. A line that is too long is cut
//! around the place. [`Mistake::drawn`] hands out the pieces, for who puts colour to them.

use std::fmt::{self, Display, Formatter};

use pulsewright_circuit::fault::Fault;

use crate::source::Source;

/// How many mistakes are drawn before the rest is counted only.
const MOST_DRAWN: usize = 20;
/// How wide a drawn line may be, its indent included.
const WIDTH: usize = 80;
const INDENT: usize = 4;

/// Everything wrong with a text, by place; remarks after mistakes.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Mistakes {
    source: Source,
    list: Vec<Mistake>,
}

/// A mistake or a remark with its place.
#[derive(Clone, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub struct Mistake {
    /// `P0107`, or `R0703` for a remark; a code never changes its meaning.
    pub code: &'static str,
    /// Whether it stops nothing.
    pub is_remark: bool,
    /// Its line, from 1.
    pub line: usize,
    /// Its column, in characters, from 1.
    pub column: usize,
    /// Its first byte in the file.
    pub start: usize,
    /// One past its last byte.
    pub end: usize,
    /// The line that stands alone.
    pub message: String,
    /// What belongs at the place.
    pub label: Option<String>,
    /// What to write instead.
    pub write: Option<String>,
}

/// The pieces of a drawn mistake.
#[derive(Clone, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub struct Drawn {
    /// `stage.shot:3:37`
    pub place: String,
    /// `mistake` or `remark`.
    pub kind: &'static str,
    /// The code.
    pub code: &'static str,
    /// The line that stands alone.
    pub message: String,
    /// The line of the text, cut around the place where it is long, without indent.
    pub line: String,
    /// How many blanks stand before the underlining.
    pub blanks: usize,
    /// How many cells are underlined, 1 or more.
    pub width: usize,
    /// What belongs at the place.
    pub label: Option<String>,
    /// What to write instead.
    pub write: Option<String>,
}

impl Mistakes {
    pub(crate) fn new(source: Source, faults: Vec<Fault>) -> Self {
        let mut faults = faults;
        faults.sort_by_key(|f| (f.is_remark(), first_byte(f), f.code));
        let mut counter = Counter::default();
        let mut list: Vec<Mistake> = faults
            .into_iter()
            .map(|f| place(&source, &mut counter, f))
            .collect();
        list.dedup();
        Mistakes { source, list }
    }

    /// All of them, mistakes first, each by place.
    #[must_use]
    pub fn list(&self) -> &[Mistake] {
        &self.list
    }

    /// The text they are in.
    #[must_use]
    pub fn source(&self) -> &Source {
        &self.source
    }

    /// Whether there is none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }

    /// How many there are, remarks not counted.
    #[must_use]
    pub fn count(&self) -> usize {
        self.list.iter().filter(|m| !m.is_remark).count()
    }

    /// Those that are drawn, in order: at most 20 mistakes, then at most 20 remarks.
    pub fn drawn(&self) -> impl Iterator<Item = Drawn> {
        let mistakes = self.list.iter().filter(|m| !m.is_remark).take(MOST_DRAWN);
        let remarks = self.list.iter().filter(|m| m.is_remark).take(MOST_DRAWN);
        mistakes.chain(remarks).map(|m| m.drawn(&self.source))
    }

    /// What is said of those that are not drawn: `and 7 more mistakes`.
    #[must_use]
    pub fn undrawn(&self) -> Option<String> {
        let count = |n: usize, word: &str| match n.saturating_sub(MOST_DRAWN) {
            0 => None,
            1 => Some(format!("1 more {word}")),
            n => Some(format!("{n} more {word}s")),
        };
        let remarks = self.list.len() - self.count();
        let parts = [count(self.count(), "mistake"), count(remarks, "remark")];
        let said: Vec<String> = parts.into_iter().flatten().collect();
        (!said.is_empty()).then(|| format!("and {}", said.join(", ")))
    }
}

impl Display for Mistakes {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        for drawn in self.drawn() {
            writeln!(f, "{drawn}")?;
        }
        self.undrawn().map_or(Ok(()), |more| writeln!(f, "{more}"))
    }
}

impl std::error::Error for Mistakes {}

impl Display for Drawn {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        write!(
            f,
            "{}: {} {}: {}",
            self.place, self.kind, self.code, self.message
        )?;
        if !self.line.is_empty() {
            write!(f, "\n{:INDENT$}{}", "", self.line)?;
            write!(
                f,
                "\n{:INDENT$}{:blanks$}{:~<width$}",
                "",
                "",
                "",
                blanks = self.blanks,
                width = self.width
            )?;
            if let Some(label) = &self.label {
                write!(f, " {label}")?;
            }
        }
        self.write
            .as_ref()
            .map_or(Ok(()), |w| write!(f, "\n{:INDENT$}write: {w}", ""))
    }
}

fn first_byte(fault: &Fault) -> usize {
    if fault.span.is_some() {
        fault.span.start as usize
    } else {
        0
    }
}

/// Counts lines and columns from the place before, so that many mistakes on one long line are
/// placed in one walk along it.
#[derive(Default)]
struct Counter {
    byte: usize,
    at: (usize, usize),
}

impl Counter {
    fn position(&mut self, source: &Source, byte: usize) -> (usize, usize) {
        let between = source.text().get(self.byte..byte).unwrap_or("\n");
        let on_the_line = self.at.0 > 0 && !between.contains('\n');
        self.at = match self.at {
            (line, column) if on_the_line => (line, column + between.chars().count()),
            _ => source.position(byte),
        };
        self.byte = byte;
        self.at
    }
}

fn place(source: &Source, counter: &mut Counter, fault: Fault) -> Mistake {
    let is_remark = fault.is_remark();
    let start = first_byte(&fault);
    let end = if fault.span.is_some() {
        fault.span.end as usize
    } else {
        start
    };
    let (line, column) = counter.position(source, start);
    let Fault {
        code,
        message,
        label,
        write,
        ..
    } = fault;
    Mistake {
        code,
        is_remark,
        line,
        column,
        start,
        end: end.max(start),
        message,
        label,
        write,
    }
}

impl Mistake {
    /// The pieces to draw it with.
    #[must_use]
    pub fn drawn(&self, source: &Source) -> Drawn {
        let (line, first) = source.line(self.line);
        let cells = Cells::new(line);
        let from = cells.at(self.start.saturating_sub(first));
        let to = cells
            .at(self.end.saturating_sub(first).min(line.len()))
            .max(from + 1);
        let (shown, shift) = cells.cut(from, to);
        Drawn {
            place: format!("{}:{}:{}", source.name(), self.line, self.column),
            kind: if self.is_remark { "remark" } else { "mistake" },
            code: self.code,
            message: self.message.clone(),
            blanks: (from + shift.1).saturating_sub(shift.0),
            width: (to - from).min(WIDTH - INDENT - 2),
            line: shown,
            label: self.label.clone(),
            write: self.write.clone(),
        }
    }
}

/// A line as a terminal shows it: each character with its first byte, its cell and its width.
struct Cells {
    shown: Vec<(usize, usize, char)>,
    width: usize,
}

impl Cells {
    fn new(line: &str) -> Self {
        let mut width = 0;
        let mut shown = Vec::new();
        for (byte, c) in line.char_indices() {
            let c = match c {
                '\t' => ' ',
                '\u{feff}' => continue,
                c if c.is_control() => '\u{fffd}',
                c => c,
            };
            shown.push((byte, width, c));
            width += cells(c);
        }
        Cells { shown, width }
    }

    /// The cell that a byte of the line is shown at.
    fn at(&self, byte: usize) -> usize {
        let i = self.shown.partition_point(|(b, _, _)| *b < byte);
        self.shown.get(i).map_or(self.width, |(_, cell, _)| *cell)
    }

    /// The line cut to fit around the cells `from..to`: its text, and how many cells were cut
    /// off before it and put in their place.
    fn cut(&self, from: usize, to: usize) -> (String, (usize, usize)) {
        let room = WIDTH - INDENT;
        if self.width <= room {
            return (
                self.shown
                    .iter()
                    .map(|(_, _, c)| *c)
                    .collect::<String>()
                    .trim_end()
                    .to_owned(),
                (0, 0),
            );
        }
        let room = room - 2;
        let wanted = (to - from).min(room);
        let first = from
            .saturating_sub((room - wanted) / 2)
            .min(self.width.saturating_sub(room));
        let kept = self
            .shown
            .iter()
            .filter(|(_, cell, c)| *cell >= first && cell + cells(*c) <= first + room);
        let start = kept.clone().next().map_or(first, |(_, cell, _)| *cell);
        let mut text: String = kept.map(|(_, _, c)| *c).collect();
        if first + room < self.width {
            text.push('…');
        }
        if start > 0 {
            text.insert(0, '…');
        }
        (text, (start, usize::from(start > 0)))
    }
}

/// How many cells a terminal gives a character.
fn cells(c: char) -> usize {
    match u32::from(c) {
        0x0300..=0x036f | 0x200b..=0x200f | 0xfe00..=0xfe0f | 0x20d0..=0x20ff => 0,
        0x1100..=0x115f
        | 0x2e80..=0x303e
        | 0x3041..=0xa4cf
        | 0xac00..=0xd7a3
        | 0xf900..=0xfaff
        | 0xfe30..=0xfe6f
        | 0xff00..=0xff60
        | 0xffe0..=0xffe6
        | 0x1f300..=0x1faff
        | 0x20000..=0x3fffd => 2,
        _ => 1,
    }
}

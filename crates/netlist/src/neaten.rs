//! The canonical layout of a netlist.
//!
//! ```text
//! let load=50Ω                           let load = 50 ohm
//! repeat k from 1 to 3                   repeat k from 1 to 3
//! resistor r[ k ] from a to b=5kΩ   ->     resistor r[k] from a to b = 5 kohm
//! end                                    end
//! ```
//!
//! Tokens keep their order and their text; only units are spelled anew (`ohm`, `u`). What
//! changes is what stands between them: one blank or none, two blanks of indent a `repeat`,
//! four more where a statement goes on, at most one empty line, and columns in runs of
//! statements of one family. The layout of a layout is itself, and reads back as the same
//! draft.

use crate::document::Document;
use crate::grammar::{Mark, read, repeat_head};
use crate::lower::lower;
use crate::mistake::Mistakes;
use crate::scope::{Lets, Scope};
use crate::source::Source;
use crate::token::{Gap, Kind, Token};
use crate::tree::{Item, Statement};
use crate::unit::canonical;
use crate::words::PARTS;

/// Blanks of indent within a `repeat`.
const STEP: usize = 2;
/// Blanks of indent where a statement goes on.
const GOING_ON: usize = 4;
/// A column wider than this lines up with nothing.
const WIDEST: usize = 40;

/// Prints a netlist anew, in its canonical layout.
///
/// ```
/// let neat = pulsewright_netlist::neaten(b"let  load=50\xce\xa9 # ohms\n\n\n\nspan 5ms", "stage.shot")?;
/// assert_eq!(neat, "let load = 50 ohm  # ohms\n\nspan 5 ms\n");
/// # Ok::<(), pulsewright_netlist::Mistakes>(())
/// ```
///
/// # Errors
///
/// Every mistake of the text; those of the circuit are no hindrance.
pub fn neaten(bytes: &[u8], name: &str) -> Result<String, Mistakes> {
    let document = Document::new(bytes);
    let slips = lower(&document, &[]).slips;
    if !document.slips.is_empty() || !slips.is_empty() {
        let faults = document
            .slips
            .iter()
            .chain(&slips)
            .map(|s| s.fault())
            .collect();
        return Err(Source::of_text(document.text, name).mistakes(faults));
    }
    let lets = Lets::default();
    let mut printer = Printer {
        document: &document,
        lets: &lets,
        entries: Vec::new(),
        comments: 0,
        passed: 0,
    };
    printer.items(&document.items, 0, &mut Vec::new());
    printer.comments_up_to(document.tokens.len(), 0);
    Ok(laid_out(&mut printer.entries))
}

/// One line of the layout or, for a statement that goes on, several.
struct Entry {
    blank_before: bool,
    indent: usize,
    /// The statements that share columns.
    family: Option<&'static str>,
    /// The cells of the first line.
    cells: Vec<String>,
    /// What follows the first line's cells on it: a comment.
    comment: Option<String>,
    /// The lines on which the statement goes on.
    more: Vec<String>,
}

struct Printer<'a> {
    document: &'a Document,
    lets: &'a Lets,
    entries: Vec<Entry>,
    /// How many comments are printed.
    comments: usize,
    /// The first byte after what is printed.
    passed: usize,
}

/// The counters around a statement, for reading it once more.
type Counters<'a> = Vec<(&'a str, Option<i64>)>;

impl<'a> Printer<'a> {
    fn items(&mut self, items: &'a [Item], indent: usize, counters: &mut Counters<'a>) {
        for item in items {
            match item {
                Item::One(statement) => {
                    let marks = self.marks(statement, counters);
                    self.statement(statement, indent, &marks);
                }
                Item::Block(block) => {
                    let scope = self.scope(counters);
                    let tokens = self.document.tokens_of(&block.head);
                    let (_, _, marks) = repeat_head(&self.document.text, tokens, &scope);
                    self.statement(&block.head, indent, &marks);
                    counters.push((self.document.word(&block.head, 1), None));
                    self.items(&block.body, indent + STEP, counters);
                    counters.pop();
                    if let Some(end) = &block.end {
                        self.comments_up_to(end.first, indent + STEP);
                        self.statement(end, indent, &[]);
                    }
                }
            }
        }
    }

    fn scope(&self, counters: &Counters<'a>) -> Scope<'a> {
        Scope {
            counters: counters.clone(),
            lets: self.lets,
            nesting: self.document.nesting,
            marking: true,
        }
    }

    fn marks(&self, statement: &Statement, counters: &Counters<'a>) -> Vec<(usize, Mark)> {
        let scope = self.scope(counters);
        read(
            &self.document.text,
            self.document.tokens_of(statement),
            &scope,
        )
        .marks
    }

    /// Whether an empty line stands before the byte `start`, after what is printed.
    fn blank_before(&self, start: usize) -> bool {
        let between = self
            .document
            .text
            .get(self.passed..start)
            .unwrap_or_default();
        !self.entries.is_empty() && between.matches('\n').count() > 1
    }

    /// The comments on lines of their own before a token.
    fn comments_up_to(&mut self, token: usize, indent: usize) {
        while let Some(comment) = self.document.comments.get(self.comments) {
            if comment.tokens_before > token {
                return;
            }
            let (start, end) = (comment.span.start as usize, comment.span.end as usize);
            let entry = Entry {
                blank_before: self.blank_before(start),
                indent,
                family: None,
                cells: vec![self.comment_text(start, end)],
                comment: None,
                more: Vec::new(),
            };
            self.entries.push(entry);
            self.passed = end;
            self.comments += 1;
        }
    }

    fn comment_text(&self, start: usize, end: usize) -> String {
        self.document
            .text
            .get(start..end)
            .unwrap_or_default()
            .trim_end()
            .to_owned()
    }

    fn statement(&mut self, statement: &Statement, indent: usize, marks: &[(usize, Mark)]) {
        self.comments_up_to(statement.first, indent);
        let tokens = self.document.tokens_of(statement);
        let (Some(first), Some(last)) = (tokens.first(), tokens.last()) else {
            return;
        };
        let blank_before = self.blank_before(first.start as usize);
        let mut lines = Lines::new(&self.document.text, tokens, marks);
        for i in 0..tokens.len() {
            while let Some(comment) = self.document.comments.get(self.comments) {
                if comment.tokens_before > statement.first + i {
                    break;
                }
                let text =
                    self.comment_text(comment.span.start as usize, comment.span.end as usize);
                lines.comment(text, comment.alone);
                self.comments += 1;
            }
            lines.token(i);
        }
        self.passed = last.end as usize;
        if let Some(comment) = self.document.comments.get(self.comments)
            && comment.tokens_before == statement.last
            && !comment.alone
        {
            self.passed = comment.span.end as usize;
            lines.comment(
                self.comment_text(comment.span.start as usize, comment.span.end as usize),
                false,
            );
            self.comments += 1;
        }
        let (family, cells, comment, more) = lines.done();
        self.entries.push(Entry {
            blank_before,
            indent,
            family,
            cells,
            comment,
            more,
        });
    }
}

/// The lines of one statement.
struct Lines<'a> {
    text: &'a str,
    tokens: &'a [Token],
    marks: Vec<Option<Mark>>,
    /// The tokens that begin a new cell of the first line.
    columns: Vec<usize>,
    family: Option<&'static str>,
    depth: usize,
    cells: Vec<String>,
    comment: Option<String>,
    more: Vec<String>,
}

impl<'a> Lines<'a> {
    fn new(text: &'a str, tokens: &'a [Token], marked: &[(usize, Mark)]) -> Self {
        let mut marks = vec![None; tokens.len()];
        for (i, mark) in marked {
            if let Some(slot) = marks.get_mut(*i) {
                *slot = Some(*mark);
            }
        }
        let (family, columns) = columns(text, tokens);
        let (cells, more) = (vec![String::new()], Vec::new());
        Lines {
            text,
            tokens,
            marks,
            columns,
            family,
            depth: 0,
            cells,
            comment: None,
            more,
        }
    }

    /// Appends to the line that is being written.
    fn push(&mut self, text: &str) {
        if let Some(line) = self.more.last_mut().or(self.cells.last_mut()) {
            line.push_str(text);
        }
    }

    fn comment(&mut self, text: String, alone: bool) {
        if alone {
            self.more.push(format!("{:GOING_ON$}{text}", ""));
        } else if self.more.is_empty() {
            self.comment = Some(text);
        } else {
            self.push(&format!("  {text}"));
        }
    }

    fn token(&mut self, i: usize) {
        let Some(token) = self.tokens.get(i) else {
            return;
        };
        if i > 0 {
            if token.before == Gap::Line {
                self.more.push(" ".repeat(GOING_ON));
            } else if self.more.is_empty() && self.columns.contains(&i) {
                self.cells.push(String::new());
            } else if self.is_apart(i) {
                self.push(" ");
            }
        }
        let text = token.text(self.text);
        match (token.kind, self.mark(i)) {
            (Kind::Word, Some(Mark::Unit)) => self.push(&canonical(text)),
            (Kind::Star, _) => self.push("*"),
            _ => self.push(text),
        }
        match token.kind {
            Kind::Open => self.depth += 1,
            Kind::Close => self.depth = self.depth.saturating_sub(1),
            _ => {}
        }
    }

    fn mark(&self, i: usize) -> Option<Mark> {
        self.marks.get(i).copied().flatten()
    }

    /// Whether a blank stands between a token and the one before it.
    fn is_apart(&self, i: usize) -> bool {
        use Kind::{
            Caret, Close, CloseIndex, Colon, Comma, Dot, Open, OpenIndex, Semicolon, Slash, Square,
            Star,
        };
        let (Some(before), Some(token)) = (self.tokens.get(i - 1), self.tokens.get(i)) else {
            return false;
        };
        let (mark_before, mark) = (self.mark(i - 1), self.mark(i));
        let in_index = mark_before == Some(Mark::Index) && before.kind != CloseIndex;
        let in_unit = (mark_before == Some(Mark::Unit)
            && matches!(before.kind, Star | Slash | Open))
            || (mark == Some(Mark::Unit) && matches!(token.kind, Star | Slash | Open | Close));
        if in_index || in_unit || mark_before == Some(Mark::Sign) || mark == Some(Mark::Call) {
            return false;
        }
        if token.kind == Colon {
            return self.depth == 0 && self.family == Some("part");
        }
        !matches!(
            token.kind,
            Comma | Semicolon | Close | CloseIndex | OpenIndex | Square | Dot | Caret
        ) && !matches!(before.kind, Open | OpenIndex | Dot | Caret)
    }

    #[allow(clippy::type_complexity, reason = "taken apart where it is called")]
    fn done(
        self,
    ) -> (
        Option<&'static str>,
        Vec<String>,
        Option<String>,
        Vec<String>,
    ) {
        (self.family, self.cells, self.comment, self.more)
    }
}

/// The family of a statement, and the tokens that begin its columns.
fn columns(text: &str, tokens: &[Token]) -> (Option<&'static str>, Vec<usize>) {
    let word = tokens.first().map_or("", |t| t.text(text));
    let at = |kinds: &[Kind]| {
        let mut depth = 0_usize;
        tokens.iter().position(|t| {
            match t.kind {
                Kind::Open | Kind::OpenIndex => depth += 1,
                Kind::Close | Kind::CloseIndex => depth = depth.saturating_sub(1),
                _ => {}
            }
            depth == 0 && kinds.contains(&t.kind)
        })
    };
    let joint = |words: &[&str]| {
        let found = tokens
            .iter()
            .skip(2)
            .position(|t| t.kind == Kind::Word && words.contains(&t.text(text)));
        found.map(|i| i + 2)
    };
    match word {
        _ if PARTS.contains(&word) => {
            let columns = [
                Some(1),
                joint(&["from", "between"]),
                at(&[Kind::Equal, Kind::Colon]),
            ];
            (Some("part"), columns.into_iter().flatten().collect())
        }
        "let" => (Some("let"), at(&[Kind::Equal]).into_iter().collect()),
        "signal" => (Some("signal"), at(&[Kind::Equal]).into_iter().collect()),
        "reading" => (Some("reading"), at(&[Kind::Equal]).into_iter().collect()),
        "claim" => (
            Some("claim"),
            at(&[Kind::Colon]).map(|i| i + 1).into_iter().collect(),
        ),
        _ => (None, Vec::new()),
    }
}

/// All entries as text, runs of one family in columns.
fn laid_out(entries: &mut [Entry]) -> String {
    let mut first = 0;
    while first < entries.len() {
        let mut last = first + 1;
        while belongs(entries, first, last) {
            last += 1;
        }
        if let Some(run) = entries.get_mut(first..last) {
            line_up(run);
        }
        first = last;
    }
    let mut text = String::new();
    for entry in entries.iter() {
        write_entry(entry, &mut text);
    }
    text
}

/// Whether the entry `next` goes on the run that begins with `first`.
fn belongs(entries: &[Entry], first: usize, next: usize) -> bool {
    let (Some(a), Some(b)) = (entries.get(first), entries.get(next)) else {
        return false;
    };
    a.family.is_some() && a.family == b.family && a.indent == b.indent && !b.blank_before
}

fn line_up(run: &mut [Entry]) {
    let columns = run.iter().map(|e| e.cells.len()).max().unwrap_or(0);
    for column in 0..columns.saturating_sub(1) {
        let cell = |e: &Entry| {
            e.cells
                .get(column)
                .filter(|_| e.cells.len() > column + 1)
                .map(|c| c.chars().count())
        };
        let width = run
            .iter()
            .filter_map(cell)
            .filter(|w| *w <= WIDEST)
            .max()
            .unwrap_or(0);
        for entry in run.iter_mut().filter(|e| e.cells.len() > column + 1) {
            if let Some(cell) = entry.cells.get_mut(column) {
                let missing = width.saturating_sub(cell.chars().count());
                cell.extend(std::iter::repeat_n(' ', missing));
            }
        }
    }
}

fn write_entry(entry: &Entry, text: &mut String) {
    if entry.blank_before {
        text.push('\n');
    }
    let indent = " ".repeat(entry.indent);
    text.push_str(&indent);
    text.push_str(entry.cells.join(" ").trim_end());
    if let Some(comment) = &entry.comment {
        text.push_str("  ");
        text.push_str(comment);
    }
    text.push('\n');
    for line in &entry.more {
        text.push_str(&indent);
        text.push_str(line);
        text.push('\n');
    }
}

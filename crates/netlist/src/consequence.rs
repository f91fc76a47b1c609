//! Which faults of a circuit only follow from mistakes of its text.
//!
//! A statement with a mistake is *broken*: what stands in it may not be what was meant. A name
//! that a broken statement defines is *uncertain*, and so is what a statement defines that uses
//! an uncertain name. Faults in broken statements and in those that use uncertain names are
//! left out: they come back when the text is mended, if they are real. A part whose nodes could
//! not be read leaves the whole topology open.

use std::collections::HashSet;

use pulsewright_circuit::fault::Fault;

use crate::document::Document;
use crate::lower::Lowered;
use crate::token::Kind;
use crate::tree::{Item, Statement};
use crate::words::{PARTS, STATEMENTS, is_connective};

/// Names given twice or kept by the language are faults however the rest of a statement reads.
const CERTAIN: &[&str] = &["P0251", "P0252"];
/// Faults of the circuit as a whole: no ground, a node that one part only touches.
const OF_THE_WHOLE: &[&str] = &["P0701", "R0701", "R0702"];

/// No `span`, which has no place of its own.
const NO_SPAN: &str = "P0550";

/// The statements whose faults are left out.
pub(crate) struct Consequences {
    /// First and last bytes of the statements, by place.
    doubtful: Vec<(u32, u32)>,
    whole: bool,
    no_span: bool,
}

impl Consequences {
    pub(crate) fn new(document: &Document, lowered: &Lowered) -> Self {
        let mut all = Vec::new();
        flatten(&document.items, &mut all);
        let broken = |s: &Statement| lowered.broken.contains(&s.first);
        let mut uncertain: HashSet<&str> = HashSet::new();
        let (mut whole, mut no_span) = (false, false);
        for statement in all.iter().filter(|s| broken(s)) {
            let word = document.word(statement, 0);
            let unknown = !PARTS.contains(&word) && !STATEMENTS.contains(&word);
            whole |= unknown || (PARTS.contains(&word) && !has_ends(document, statement));
            no_span |= unknown || word == "span";
            uncertain.extend(defined(document, statement));
        }
        if uncertain.is_empty() && lowered.broken.is_empty() {
            return Consequences {
                doubtful: Vec::new(),
                whole,
                no_span,
            };
        }
        spread(document, &all, &mut uncertain);
        let uses = |s: &Statement| words(document, s).any(|w| uncertain.contains(w));
        let doubtful = all
            .iter()
            .filter(|s| broken(s) || uses(s))
            .filter_map(|s| place(document, s))
            .collect();
        Consequences {
            doubtful,
            whole,
            no_span,
        }
    }

    /// Whether a fault only follows from a mistake of the text.
    pub(crate) fn holds(&self, fault: &Fault) -> bool {
        if CERTAIN.contains(&fault.code) {
            return false;
        }
        if fault.code == NO_SPAN {
            return self.no_span;
        }
        if OF_THE_WHOLE.contains(&fault.code) || fault.code.starts_with("P07") {
            return self.whole;
        }
        if !fault.span.is_some() {
            return false;
        }
        let i = self
            .doubtful
            .partition_point(|(first, _)| *first <= fault.span.start);
        let within = i.checked_sub(1).and_then(|i| self.doubtful.get(i));
        within.is_some_and(|(_, last)| fault.span.start < *last)
    }
}

fn flatten<'a>(items: &'a [Item], into: &mut Vec<&'a Statement>) {
    for item in items {
        match item {
            Item::One(statement) => into.push(statement),
            Item::Block(block) => {
                into.push(&block.head);
                flatten(&block.body, into);
            }
        }
    }
}

fn is_definition(word: &str) -> bool {
    matches!(
        word,
        "let"
            | "signal"
            | "reading"
            | "claim"
            | "cases"
            | "adjust"
            | "span"
            | "start"
            | "title"
            | "note"
            | "repeat"
    )
}

/// The words of a statement.
fn words<'a>(document: &'a Document, statement: &Statement) -> impl Iterator<Item = &'a str> {
    let tokens = document
        .tokens_of(statement)
        .iter()
        .filter(|t| t.kind == Kind::Word);
    tokens.map(|t| t.text(&document.text))
}

/// What a broken statement may define: its name; where it is no definition, also its nodes.
fn defined<'a>(document: &'a Document, statement: &Statement) -> Vec<&'a str> {
    let tokens = document.tokens_of(statement);
    let text = |i: usize| tokens.get(i).map_or("", |t| t.text(&document.text));
    if is_definition(text(0)) {
        return vec![text(1)];
    }
    let head = tokens
        .iter()
        .skip(1)
        .take_while(|t| !matches!(t.kind, Kind::Equal | Kind::Colon));
    let names = head
        .filter(|t| t.kind == Kind::Word)
        .map(|t| t.text(&document.text));
    let nodes_known =
        PARTS.contains(&text(0)) && tokens.get(2).is_some() && has_ends(document, statement);
    let names: Vec<&str> = names
        .filter(|w| !is_connective(w) && *w != "ground")
        .collect();
    if nodes_known { Vec::new() } else { names }
}

/// Whether `from … to …` stand before the value, so that the nodes could be read.
fn has_ends(document: &Document, statement: &Statement) -> bool {
    let mut head = document
        .tokens_of(statement)
        .iter()
        .take_while(|t| !matches!(t.kind, Kind::Equal | Kind::Colon))
        .map(|t| t.text(&document.text));
    let joints: &[&str] = match document.word(statement, 0) {
        "coupling" => &["between", "and"],
        "changeover" => &["from", "to", "or"],
        _ => &["from", "to"],
    };
    joints.iter().all(|joint| head.any(|w| w == *joint)) && head.next().is_some()
}

/// Adds what is defined by means of uncertain names, until nothing is added.
fn spread<'a>(document: &'a Document, all: &[&Statement], uncertain: &mut HashSet<&'a str>) {
    let definitions: Vec<&&Statement> = all
        .iter()
        .filter(|s| matches!(document.word(s, 0), "let" | "signal" | "reading"))
        .collect();
    for _ in 0..64 {
        let before = uncertain.len();
        for statement in &definitions {
            if words(document, statement).any(|w| uncertain.contains(w)) {
                uncertain.insert(document.word(statement, 1));
            }
        }
        if uncertain.len() == before {
            return;
        }
    }
}

fn place(document: &Document, statement: &Statement) -> Option<(u32, u32)> {
    let tokens = document.tokens_of(statement);
    Some((tokens.first()?.start, tokens.last()?.end))
}

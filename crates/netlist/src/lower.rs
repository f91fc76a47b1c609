//! Statements to a draft: `repeat` written out, counters replaced by numbers.
//!
//! ```text
//! repeat k from 1 to 2            inductor l[1] from n[0] to n[1] = 10 uH
//!   inductor l[k] from n[k-1] to n[k] = 10 uH   ->   inductor l[2] from n[1] to n[2] = 10 uH
//! end
//! ```
//!
//! Let-values are read first, since bounds and indices may use them wherever they stand. A
//! block is read once for its form, then counted, and only then written out, so that a count
//! without measure ends in a mistake and not in the memory.

use std::collections::{HashMap, HashSet};

use pulsewright_circuit::draft::{Draft, Limit};
use pulsewright_circuit::{Expr, Name, Span};

use crate::document::Document;
use crate::grammar::{Made, RepeatHead, read, repeat_head};
use crate::scope::{Lets, Scope};
use crate::slip::{Slip, What};
use crate::tree::{Block, Item, Statement};
use crate::words::{OUTSIDE_REPEAT, is_reserved};

/// What lowering yields.
pub(crate) struct Lowered {
    pub(crate) draft: Draft,
    pub(crate) slips: Vec<Slip>,
    /// The first tokens of statements with mistakes.
    pub(crate) broken: HashSet<usize>,
    /// Let-values that set bounds or indices.
    pub(crate) counted: Vec<String>,
}

/// Lowers a document; `set` replaces let-values in bounds and indices.
pub(crate) fn lower(document: &Document, set: &[(String, Expr)]) -> Lowered {
    let mut out = Out::default();
    let plain = Lets::default();
    let first = Scope {
        counters: Vec::new(),
        lets: &plain,
        nesting: document.nesting,
        marking: false,
    };
    let mut pass = Pass {
        document,
        scope: first,
        out: &mut out,
        limit: 0,
        made: 0,
    };
    pass.let_values();
    let mut values: HashMap<String, Expr> = HashMap::new();
    for l in &out.draft.lets {
        values
            .entry(l.name.text.clone())
            .or_insert_with(|| l.value.nominal.clone());
    }
    values.extend(set.iter().cloned());
    let lets = Lets::new(values);
    let scope = Scope {
        counters: Vec::new(),
        lets: &lets,
        nesting: document.nesting,
        marking: false,
    };
    let limit = limit_parts(document);
    Pass {
        document,
        scope,
        out: &mut out,
        limit,
        made: 0,
    }
    .items(&document.items);
    out.close(&lets);
    let counted = lets.counted();
    Lowered {
        draft: out.draft,
        slips: out.slips,
        broken: out.broken,
        counted,
    }
}

/// What `limit parts` says, looked up before anything is written out.
fn limit_parts(document: &Document) -> u64 {
    let default = Limit::ALL
        .iter()
        .find(|(_, l, _)| *l == Limit::Parts)
        .map_or(0, |(_, _, n)| *n);
    let stated = document.items.iter().find_map(|item| match item {
        Item::One(s) if document.word(s, 0) == "limit" && document.word(s, 1) == "parts" => {
            document.word(s, 2).replace('_', "").parse::<u64>().ok()
        }
        _ => None,
    });
    stated.unwrap_or(default).min(MOST_PARTS)
}

/// The most that `limit parts` may say.
const MOST_PARTS: u64 = 100_000_000;

#[derive(Default)]
struct Out {
    draft: Draft,
    slips: Vec<Slip>,
    broken: HashSet<usize>,
    /// Statements that may stand once, with what was seen of them.
    once: HashSet<String>,
    counters: Vec<Name>,
}

struct Pass<'a, 'o> {
    document: &'a Document,
    scope: Scope<'a>,
    out: &'o mut Out,
    /// How many statements blocks may make.
    limit: u64,
    made: u64,
}

impl<'a> Pass<'a, '_> {
    fn let_values(&mut self) {
        for item in &self.document.items {
            if let Item::One(statement) = item
                && self.document.word(statement, 0) == "let"
                && let Some(Made::Let(made)) = self.one(statement, true)
            {
                self.out.draft.lets.push(made);
            }
        }
    }

    /// The statements of the file outside `let`.
    fn items(&mut self, items: &'a [Item]) {
        for item in items {
            match item {
                Item::One(statement) => {
                    if self.document.word(statement, 0) == "let" {
                        continue;
                    }
                    self.refuse_twice(statement);
                    if let Some(made) = self.one(statement, true) {
                        self.made += 1;
                        self.add(made);
                    }
                }
                Item::Block(block) => self.outermost(block),
            }
        }
    }

    /// Reads a statement; its mistakes are kept where `heed` says so.
    fn one(&mut self, statement: &Statement, heed: bool) -> Option<Made> {
        let outcome = read(
            &self.document.text,
            self.document.tokens_of(statement),
            &self.scope,
        );
        if heed {
            self.keep(statement, outcome.slips);
        }
        outcome.made
    }

    fn keep(&mut self, statement: &Statement, slips: Vec<Slip>) {
        let doubtful = self.document.is_doubtful(statement);
        if !slips.is_empty() || self.document.is_slipped(statement) {
            self.out.broken.insert(statement.first);
        }
        if !doubtful {
            self.out.slips.extend(slips);
        }
    }

    /// A block that stands in no other: read for its form, counted, and written out.
    fn outermost(&mut self, block: &'a Block) {
        if !self.form(block) {
            return;
        }
        let mut total = self.made;
        if self.count(block, &mut total) {
            self.made = total;
            self.rounds(block);
        } else {
            let what = What::TooManyParts { limit: self.limit };
            self.out
                .slips
                .push(Slip::new(self.place(&block.head), what));
        }
    }

    fn place(&self, statement: &Statement) -> Span {
        self.document
            .tokens
            .get(statement.first)
            .map_or(Span::NONE, |t| t.span())
    }

    fn head(&mut self, block: &'a Block, heed: bool) -> Option<RepeatHead> {
        let tokens = self.document.tokens_of(&block.head);
        let (head, slips, _) = repeat_head(&self.document.text, tokens, &self.scope);
        if heed {
            let fine = slips.is_empty() && !self.document.is_slipped(&block.head);
            self.keep(&block.head, slips);
            return head.filter(|_| fine);
        }
        head.filter(|_| slips.is_empty())
    }

    /// Reads a block for its form, with its counter unknown; whether all bounds could be read.
    fn form(&mut self, block: &'a Block) -> bool {
        if self.document.word(&block.head, 0) != "repeat" {
            self.one(&block.head, true);
            return false;
        }
        self.form_of_end(block);
        let head = self.head(block, true);
        let mut fine = head.is_some();
        let name = self.document.word(&block.head, 1);
        if let Some(head) = head {
            self.new_counter(head.counter);
        }
        self.scope.counters.push((name, None));
        for item in &block.body {
            match item {
                Item::One(statement) => self.form_of(statement),
                Item::Block(inner) => fine &= self.form(inner),
            }
        }
        self.scope.counters.pop();
        fine
    }

    fn form_of_end(&mut self, block: &Block) {
        let Some(end) = &block.end else { return };
        if let Some(token) = self
            .document
            .tokens
            .get(end.first + 1)
            .filter(|_| end.last > end.first + 1)
        {
            let (within, expected) = ("`end`".to_owned(), "the statement's end".to_owned());
            let found = format!("`{}`", token.text(&self.document.text));
            self.out.slips.push(Slip::new(
                token.span(),
                What::Expected {
                    within,
                    expected,
                    found,
                    near: None,
                },
            ));
        }
    }

    fn form_of(&mut self, statement: &Statement) {
        let word = self.document.word(statement, 0);
        if OUTSIDE_REPEAT.contains(&word) {
            let what = What::NotInRepeat {
                word: word.to_owned(),
            };
            self.out.broken.insert(statement.first);
            self.out.slips.push(Slip::new(self.place(statement), what));
            return;
        }
        self.refuse_twice(statement);
        self.one(statement, true);
    }

    fn new_counter(&mut self, name: Name) {
        let what = if is_reserved(&name.text) {
            Some(What::CounterReserved {
                name: name.text.clone(),
            })
        } else if self.scope.counter(&name.text).is_some() {
            Some(What::CounterTwice {
                name: name.text.clone(),
                by: "a counter around it".to_owned(),
            })
        } else {
            None
        };
        match what {
            Some(what) => self.out.slips.push(Slip::new(name.span, what)),
            None => self.out.counters.push(name),
        }
    }

    /// The values that a counter takes; none where the bounds cannot be worked out.
    fn bounds(&mut self, block: &'a Block) -> (i64, i64) {
        match self.head(block, false).map(|h| h.bounds) {
            Some((Some(from), Some(to))) => (from, to),
            _ => (0, -1),
        }
    }

    /// Adds what a block makes to `total`; false once that is past the limit.
    fn count(&mut self, block: &'a Block, total: &mut u64) -> bool {
        let (from, to) = self.bounds(block);
        let rounds = if to < from {
            0
        } else {
            to.abs_diff(from).saturating_add(1)
        };
        let ones = block
            .body
            .iter()
            .filter(|i| matches!(i, Item::One(_)))
            .count() as u64;
        *total = total.saturating_add(rounds.saturating_mul(ones.max(1)));
        if *total > self.limit {
            return false;
        }
        if ones == block.body.len() as u64 {
            return true;
        }
        let name = self.document.word(&block.head, 1);
        for k in from..=to {
            self.scope.counters.push((name, Some(k)));
            let within = block.body.iter().all(|item| match item {
                Item::One(_) => true,
                Item::Block(inner) => self.count(inner, total),
            });
            self.scope.counters.pop();
            if !within {
                return false;
            }
        }
        true
    }

    /// Writes a block out, round by round.
    fn rounds(&mut self, block: &'a Block) {
        if self.document.word(&block.head, 0) != "repeat" {
            return;
        }
        let (from, to) = self.bounds(block);
        let name = self.document.word(&block.head, 1);
        for k in from..=to {
            self.scope.counters.push((name, Some(k)));
            for item in &block.body {
                match item {
                    Item::One(statement) => self.round(statement),
                    Item::Block(inner) => self.rounds(inner),
                }
            }
            self.scope.counters.pop();
        }
    }

    fn round(&mut self, statement: &Statement) {
        if matches!(
            self.document.word(statement, 0),
            "let" | "title" | "note" | "cases" | "adjust"
        ) {
            return;
        }
        let heed = !self.out.broken.contains(&statement.first);
        if let Some(made) = self.one(statement, heed) {
            self.add(made);
        }
    }

    /// A statement of which a file has one.
    fn refuse_twice(&mut self, statement: &Statement) {
        let word = self.document.word(statement, 0);
        let key = match word {
            "limit" => format!("limit {}", self.document.word(statement, 1)),
            "time" => "time step".to_owned(),
            "title" | "adjust" | "span" | "start" | "integrate" | "error" | "channels" => {
                word.to_owned()
            }
            _ => return,
        };
        if !self.out.once.insert(key.clone()) {
            self.out.slips.push(Slip::new(
                self.place(statement),
                What::StatementTwice { word: key },
            ));
        }
    }

    fn add(&mut self, made: Made) {
        let draft = &mut self.out.draft;
        let run = &mut draft.run;
        match made {
            Made::Title(text) => draft.title = draft.title.take().or(Some(text)),
            Made::Note(text) => draft.notes.push(text),
            Made::Let(made) => draft.lets.push(made),
            Made::Part(part, claims) => {
                draft.parts.push(part);
                draft.claims.extend(claims);
            }
            Made::Signal(named) => draft.signals.push(named),
            Made::Reading(named) => draft.readings.push(named),
            Made::Claim(claim) => draft.claims.push(claim),
            Made::Cases(cases) => draft.cases.push(cases),
            Made::Adjust(adjust) => draft.adjust = draft.adjust.take().or(Some(adjust)),
            Made::Span(span) => run.span = run.span.take().or(Some(span)),
            Made::Start(steady) => run.steady = run.steady.or(Some(steady)),
            Made::Integrate(method, span) => run.method = run.method.or(Some((method, span))),
            Made::Error(error) => run.error = run.error.take().or(Some(error)),
            Made::Step(step) => run.step = run.step.take().or(Some(step)),
            Made::Channels(signals) => run.channels.get_or_insert_default().extend(signals),
            Made::Limit(limit, number, span) => {
                if !run.limits.iter().any(|(l, _, _)| *l == limit) {
                    run.limits.push((limit, number, span));
                }
            }
        }
    }
}

impl Out {
    /// What can be told only when all has been read.
    fn close(&mut self, lets: &Lets) {
        self.refuse_shared_counters();
        let counted: HashSet<String> = lets.counted().into_iter().collect();
        let varied = self.draft.cases.iter().flat_map(|c| &c.names);
        let adjusted = self.draft.adjust.iter().map(|a| (&a.name, "adjust"));
        for (name, by) in varied.map(|n| (n, "cases")).chain(adjusted) {
            if counted.contains(&name.text) {
                self.slips.push(Slip::new(
                    name.span,
                    What::CountVaried {
                        name: name.text.clone(),
                        by,
                    },
                ));
            }
        }
    }

    /// Counters share a name space with let-values, signals, readings and claims; the later of
    /// two is the mistake.
    fn refuse_shared_counters(&mut self) {
        let draft = &self.draft;
        let mut names: HashMap<&str, (Span, &'static str)> = HashMap::new();
        let all = (draft.lets.iter().map(|l| (&l.name, "a let-value")))
            .chain(draft.signals.iter().map(|s| (&s.name, "a signal")))
            .chain(draft.readings.iter().map(|r| (&r.name, "a reading")))
            .chain(draft.claims.iter().map(|c| (&c.name, "a claim")));
        for (name, what) in all {
            names.entry(&name.text).or_insert((name.span, what));
        }
        let mut found = Vec::new();
        for counter in &self.counters {
            let Some((span, what)) = names.get(counter.text.as_str()) else {
                continue;
            };
            let later = counter.span.start > span.start;
            let place = if later { counter.span } else { *span };
            found.push(Slip::new(
                place,
                What::CounterTwice {
                    name: counter.text.clone(),
                    by: (*what).to_owned(),
                },
            ));
        }
        self.slips.extend(found);
    }
}

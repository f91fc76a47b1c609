//! A whole file: its text, its tokens, its statements and blocks, and what is wrong with them.
//!
//! This is what both roads start from: the one to a draft (`lower`), and the one to the
//! canonical layout (`neaten`).

use crate::lex::{Lexed, decode, lex};
use crate::slip::{Slip, What};
use crate::token::{Comment, Kind, Token};
use crate::tree::{Item, Statement, blocks, statements};

/// How deep brackets, phrases and blocks nest where the file does not say.
const NESTING: usize = 64;
/// How deep a file may let them nest: what the stack of any thread holds with room to spare.
pub(crate) const MOST_NESTING: usize = 256;

/// A file cut into statements.
pub(crate) struct Document {
    pub(crate) text: String,
    pub(crate) tokens: Vec<Token>,
    pub(crate) comments: Vec<Comment>,
    pub(crate) items: Vec<Item>,
    /// Mistakes of characters, of lines and of blocks, by place.
    pub(crate) slips: Vec<Slip>,
    pub(crate) nesting: usize,
}

impl Document {
    pub(crate) fn new(bytes: &[u8]) -> Self {
        let (text, mut slips) = decode(bytes);
        let Lexed {
            tokens,
            comments,
            slips: lexical,
        } = lex(&text, &slips);
        slips.extend(lexical);
        let statements = statements(&text, &tokens);
        for statement in &statements {
            slips.extend(goes_on(statement, &tokens));
        }
        let nesting = nesting(&text, &tokens, &statements);
        let (items, of_blocks) = blocks(&text, &tokens, statements, nesting);
        slips.extend(of_blocks);
        slips.sort_by_key(|s| s.span.start);
        Document {
            text,
            tokens,
            comments,
            items,
            slips,
            nesting,
        }
    }

    pub(crate) fn tokens_of(&self, statement: &Statement) -> &[Token] {
        self.tokens
            .get(statement.first..statement.last)
            .unwrap_or_default()
    }

    /// The word `n` of a statement.
    pub(crate) fn word(&self, statement: &Statement, n: usize) -> &str {
        self.tokens_of(statement)
            .get(n)
            .map_or("", |t| t.text(&self.text))
    }

    /// Whether a mistake of characters or lines leaves open what a statement says, so that more
    /// mistakes in it may only follow from that one.
    pub(crate) fn is_doubtful(&self, statement: &Statement) -> bool {
        if statement.open.is_some() {
            return true;
        }
        let tokens = self.tokens_of(statement);
        let (Some(first), Some(last)) = (tokens.first(), tokens.last()) else {
            return true;
        };
        let from = self.slips.partition_point(|s| s.span.start < first.start);
        let within = self
            .slips
            .iter()
            .skip(from)
            .take_while(|s| s.span.start <= last.end);
        within.into_iter().any(|s| leaves_doubt(&s.what))
    }

    /// Whether any mistake stands in a statement; that a block has no `end` is none of its head.
    pub(crate) fn is_slipped(&self, statement: &Statement) -> bool {
        let tokens = self.tokens_of(statement);
        let (Some(first), Some(last)) = (tokens.first(), tokens.last()) else {
            return true;
        };
        let from = self.slips.partition_point(|s| s.span.start < first.start);
        self.slips
            .iter()
            .skip(from)
            .take_while(|s| s.span.start <= last.end)
            .any(|s| !matches!(s.what, What::NoEnd { .. }))
    }
}

fn leaves_doubt(what: &What) -> bool {
    matches!(
        what,
        What::CommaInNumber
            | What::Unknown { .. }
            | What::Control { .. }
            | What::NotUtf8 { .. }
            | What::QuoteOpen
    )
}

/// The mistake of a statement that ought to go on and does not.
fn goes_on(statement: &Statement, tokens: &[Token]) -> Option<Slip> {
    let token = tokens.get(statement.open?)?;
    let bracket = matches!(token.kind, Kind::Open | Kind::OpenIndex);
    let last = statement.last == tokens.len();
    Some(Slip::new(token.span(), What::GoesOn { bracket, last }))
}

/// What `limit nesting` says, looked up before anything is read that might be too deep.
fn nesting(text: &str, tokens: &[Token], statements: &[Statement]) -> usize {
    let stated = statements.iter().find_map(|s| {
        let [limit, nesting, number, ..] = tokens.get(s.first..s.last)? else {
            return None;
        };
        let is = limit.text(text) == "limit" && nesting.text(text) == "nesting";
        if is {
            number.text(text).replace('_', "").parse::<usize>().ok()
        } else {
            None
        }
    });
    stated.map_or(NESTING, |n| n.min(MOST_NESTING))
}

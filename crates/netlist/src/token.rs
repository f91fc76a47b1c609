//! The words of a netlist: what the lexer makes and the grammar reads.
//!
//! A token is a kind and a range of bytes; its text is looked up in the source. Comments are
//! no tokens: they are kept beside, each with the number of tokens before it, so that the
//! grammar never meets one and the printer finds all of them.

use pulsewright_circuit::Span;

/// What a token is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Kind {
    /// A name, a word of a phrase, or a unit.
    Word,
    /// A number without its unit.
    Number,
    /// A text in quotes, the quotes included.
    Quoted,
    Plus,
    Minus,
    /// `*` or `·`
    Star,
    Slash,
    Caret,
    Equal,
    Less,
    LessOrEqual,
    Greater,
    GreaterOrEqual,
    Colon,
    Semicolon,
    Comma,
    Dot,
    /// `(`
    Open,
    /// `)`
    Close,
    /// `[`
    OpenIndex,
    /// `]`
    CloseIndex,
    /// `%`
    Percent,
    /// `²`
    Square,
}

/// What stands between a token and the one before it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Gap {
    /// Nothing.
    None,
    /// Blanks.
    Blank,
    /// The end of a line, and perhaps more of them.
    Line,
}

/// A token.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Token {
    pub(crate) kind: Kind,
    pub(crate) before: Gap,
    pub(crate) start: u32,
    pub(crate) end: u32,
}

impl Token {
    pub(crate) const fn span(self) -> Span {
        Span::new(self.start, self.end)
    }

    pub(crate) fn text(self, source: &str) -> &str {
        source
            .get(self.start as usize..self.end as usize)
            .unwrap_or_default()
    }
}

/// A comment, from its `#` to the end of its line.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Comment {
    /// Where it stands.
    pub(crate) span: Span,
    /// How many tokens stand before it in the file.
    pub(crate) tokens_before: usize,
    /// Whether it has its line for itself.
    pub(crate) alone: bool,
}

//! Where something stands in the text it was read from, and names that remember it.
//!
//! Spans never take part in comparisons: two data are equal wherever they stood, so that a
//! netlist and its neatened form can be compared as data.

use std::fmt;

/// A range of bytes in the source text; [`Span::NONE`] for what a program built.
#[derive(Clone, Copy, Default)]
pub struct Span {
    /// First byte.
    pub start: u32,
    /// One past the last byte.
    pub end: u32,
}

impl Span {
    /// The span of what stands in no text.
    pub const NONE: Span = Span {
        start: u32::MAX,
        end: u32::MAX,
    };

    /// A span from `start` up to `end`, in bytes.
    #[must_use]
    pub const fn new(start: u32, end: u32) -> Self {
        Span { start, end }
    }

    /// Whether this is the span of something in a text.
    #[must_use]
    pub const fn is_some(self) -> bool {
        self.start != u32::MAX
    }

    /// The least span that holds both.
    #[must_use]
    pub fn to(self, other: Span) -> Span {
        match (self.is_some(), other.is_some()) {
            (true, true) => Span {
                start: self.start.min(other.start),
                end: self.end.max(other.end),
            },
            (true, false) => self,
            _ => other,
        }
    }
}

impl PartialEq for Span {
    fn eq(&self, _: &Span) -> bool {
        true
    }
}

impl Eq for Span {}

impl fmt::Debug for Span {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.is_some() {
            write!(f, "{}..{}", self.start, self.end)
        } else {
            f.write_str("-")
        }
    }
}

/// A name as written, with its place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Name {
    /// The name, indices included (`n[3]`).
    pub text: String,
    /// Where it stands.
    pub span: Span,
}

impl Name {
    /// A name at a place.
    #[must_use]
    pub fn new(text: impl Into<String>, span: Span) -> Self {
        Name {
            text: text.into(),
            span,
        }
    }
}

impl From<&str> for Name {
    fn from(text: &str) -> Self {
        Name::new(text, Span::NONE)
    }
}

impl From<String> for Name {
    fn from(text: String) -> Self {
        Name::new(text, Span::NONE)
    }
}

impl fmt::Display for Name {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.text)
    }
}

//! What is wrong with a draft, or worth a remark: code, place, words.
//!
//! ```text
//! FaultKind            --at(span)-->   Fault
//! typed names, numbers                 code, span, message, label, write:
//! ```
//!
//! A [`Fault`] is plain data for whoever prints it. The typed [`FaultKind`] that it is made of
//! carries names and numbers and is put into words once, here. Messages are lower case without
//! a full stop, names stand in backticks, and both sides of a contradiction are shown.

mod codes;
mod kind;
mod wording;

pub use codes::CODES;
pub use kind::{Bound, FaultKind, Given, NameSpace};

use crate::span::Span;

/// A mistake or a remark with its place and its words.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault {
    /// `P0107`: a mistake; `R0701`: a remark. A code never changes its meaning.
    pub code: &'static str,
    /// The bytes that it is about.
    pub span: Span,
    /// The line that stands alone.
    pub message: String,
    /// What belongs at the place.
    pub label: Option<String>,
    /// What to write instead.
    pub write: Option<String>,
}

impl Fault {
    /// A fault with its message only.
    ///
    /// ```
    /// use pulsewright_circuit::{Fault, Span};
    /// let fault = Fault::new("P0001", Span::new(3, 4), "a quote is not closed").label("opened here");
    /// assert_eq!(fault.to_string(), "P0001: a quote is not closed");
    /// ```
    #[must_use]
    pub fn new(code: &'static str, span: Span, message: impl Into<String>) -> Self {
        Fault {
            code,
            span,
            message: message.into(),
            label: None,
            write: None,
        }
    }

    /// With what belongs at the place.
    #[must_use]
    pub fn label(mut self, label: impl Into<String>) -> Self {
        self.label = Some(label.into());
        self
    }

    /// With what to write instead.
    #[must_use]
    pub fn write(mut self, write: impl Into<String>) -> Self {
        self.write = Some(write.into());
        self
    }

    /// Whether it is a remark, which stops nothing.
    #[must_use]
    pub fn is_remark(&self) -> bool {
        self.code.starts_with('R')
    }
}

impl std::fmt::Display for Fault {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{}: {}", self.code, self.message)
    }
}

impl std::error::Error for Fault {}

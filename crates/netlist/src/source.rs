//! The text that was read, under the name that messages give it, with its lines.

use std::sync::Arc;

use pulsewright_circuit::fault::Fault;

use crate::lex::decode;
use crate::mistake::Mistakes;

/// A netlist's text and the name of its file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Source {
    inner: Arc<Inner>,
}

#[derive(Debug, PartialEq, Eq)]
struct Inner {
    name: String,
    text: String,
    /// The first byte of every line.
    lines: Vec<usize>,
}

impl Source {
    /// A text under a name. Bytes that are no UTF-8 are kept as placeholders of equal length.
    #[must_use]
    pub fn new(bytes: &[u8], name: &str) -> Self {
        Source::of_text(decode(bytes).0, name)
    }

    pub(crate) fn of_text(text: String, name: &str) -> Self {
        let lines = std::iter::once(0)
            .chain(text.match_indices('\n').map(|(i, _)| i + 1))
            .collect();
        Source {
            inner: Arc::new(Inner {
                name: name.to_owned(),
                text,
                lines,
            }),
        }
    }

    /// The name that messages give it.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.inner.name
    }

    /// The text.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.inner.text
    }

    /// The line and the column of a byte, both counted from 1, the column in characters.
    #[must_use]
    pub fn position(&self, byte: usize) -> (usize, usize) {
        let line = self
            .inner
            .lines
            .partition_point(|start| *start <= byte)
            .max(1);
        let start = self.inner.lines.get(line - 1).copied().unwrap_or(0);
        let before = self
            .text()
            .get(start..byte.min(self.text().len()))
            .unwrap_or_default();
        let mark = usize::from(line == 1 && before.starts_with('\u{feff}'));
        (line, before.chars().count() - mark + 1)
    }

    /// A line by its number from 1, without its end, and its first byte.
    pub(crate) fn line(&self, number: usize) -> (&str, usize) {
        let start = number
            .checked_sub(1)
            .and_then(|i| self.inner.lines.get(i))
            .copied()
            .unwrap_or(0);
        let rest = self.text().get(start..).unwrap_or_default();
        let line = rest.split('\n').next().unwrap_or_default();
        (line.strip_suffix('\r').unwrap_or(line), start)
    }

    /// Faults found elsewhere, placed in this text: those of a case's values, or remarks.
    #[must_use]
    pub fn mistakes(&self, faults: Vec<Fault>) -> Mistakes {
        Mistakes::new(self.clone(), faults)
    }
}

//! The manual's pages for words and codes.
//!
//! The language reference (`LANGUAGE.md`) is one text; a heading `### \`energy into\`, \`energy
//! out of\`` begins a page, under each of the phrases in it. Codes are explained by the tables
//! of the crates that give them.

use std::sync::LazyLock;

/// The language reference.
pub const LANGUAGE: &str = include_str!("../LANGUAGE.md");

static TOPICS: LazyLock<Vec<(&'static str, &'static str)>> = LazyLock::new(|| {
    let mut topics = Vec::new();
    let mut rest = LANGUAGE;
    while let Some(start) = rest.find("\n### ") {
        let page = rest.get(start + 1..).unwrap_or_default();
        let end = page
            .match_indices("\n##")
            .map(|(i, _)| i + 1)
            .next()
            .unwrap_or(page.len());
        let text = page.get(..end).unwrap_or_default().trim_end();
        let heading = text.lines().next().unwrap_or_default();
        topics.extend(
            heading
                .split('`')
                .skip(1)
                .step_by(2)
                .map(|phrase| (phrase, text)),
        );
        rest = page.get(end.saturating_sub(1)..).unwrap_or_default();
    }
    topics
});

/// Every phrase that has a page, with the page, in the order of the reference.
#[must_use]
pub fn topics() -> &'static [(&'static str, &'static str)] {
    &TOPICS
}

/// The page for a word, a phrase or a code (`resistor`, `energy into`, `P0107`); `None` where
/// there is none.
///
/// A word alone gets the pages of all phrases that begin with it, or else of those that have it.
///
/// ```
/// assert!(pulsewright_netlist::explain("changeover").is_some_and(|page| page.contains("moves to")));
/// assert!(pulsewright_netlist::explain("P0103").is_some_and(|page| page.contains("unit")));
/// ```
#[must_use]
pub fn explain(word_or_code: &str) -> Option<String> {
    let asked = word_or_code.trim();
    if let Some(page) = explain_code(asked) {
        return Some(page);
    }
    let pages = |fits: &dyn Fn(&str) -> bool| {
        let mut found: Vec<&str> = Vec::new();
        for (_, page) in topics().iter().filter(|(phrase, _)| fits(phrase)) {
            if !found.contains(page) {
                found.push(page);
            }
        }
        (!found.is_empty()).then(|| found.join("\n\n"))
    };
    pages(&|phrase| phrase == asked)
        .or_else(|| pages(&|phrase| phrase.split(' ').next() == Some(asked)))
        .or_else(|| pages(&|phrase| phrase.split(' ').any(|w| w == asked)))
}

fn explain_code(code: &str) -> Option<String> {
    let code = code.to_uppercase();
    let mut all = crate::CODES.iter().chain(pulsewright_circuit::fault::CODES);
    let (code, title, text) = all.find(|(c, _, _)| *c == code)?;
    Some(format!("{code}: {title}\n\n{text}"))
}

//! Names: what is one, which words the language keeps, and what is given twice.
//!
//! Nodes and parts have a name space each, and places that leave no doubt, so that only
//! connectives are kept from them; let-values, signals, readings and claims share one and may
//! not be words of a value or a phrase either.

use std::collections::{HashMap, HashSet};

use crate::dimension::{PREFIXES, UNITS};
use crate::draft::{Claim, Draft};
use crate::expr::{ExprKind, Function};
use crate::fault::{Fault, FaultKind, NameSpace};
use crate::index::GROUND;
use crate::span::Name;
use crate::words::ORDINALS;

const CONNECTIVES: &[&str] = &[
    "and", "after", "at", "before", "between", "by", "during", "from", "in", "is", "of", "or",
    "to", "when", "while", "with",
];

const PHRASE_WORDS: &[&str] = &[
    "voltage", "time", "highest", "lowest", "largest", "steepest", "mean", "rms", "final", "jumps",
    "last", "t", "pi",
];

/// Whether a text is a name: an ASCII letter, then letters, digits and `_`, then indices, then
/// perhaps a dot and a name.
#[must_use]
pub fn is_name(text: &str) -> bool {
    text.split('.').all(|part| {
        let (base, indices) = part.split_at(part.find('[').unwrap_or(part.len()));
        let letters = base.chars().all(|c| c.is_ascii_alphanumeric() || c == '_');
        base.starts_with(|c: char| c.is_ascii_alphabetic()) && letters && are_indices(indices)
    })
}

fn are_indices(text: &str) -> bool {
    let mut rest = text;
    while !rest.is_empty() {
        let Some((index, after)) = rest.strip_prefix('[').and_then(|r| r.split_once(']')) else {
            return false;
        };
        if index.is_empty() || !index.bytes().all(|b| b.is_ascii_digit()) {
            return false;
        }
        rest = after;
    }
    true
}

/// Why a name may not be given in a space: another one to write; `None` where it may.
///
/// ```
/// use pulsewright_circuit::check::reserved;
/// use pulsewright_circuit::fault::NameSpace;
/// assert_eq!(reserved("mA", NameSpace::Let).as_deref(), Some("mA_"));
/// assert_eq!(reserved("mA", NameSpace::Node), None);
/// ```
#[must_use]
pub fn reserved(name: &str, space: NameSpace) -> Option<String> {
    let base = name.split(['[', '.']).next().unwrap_or(name);
    let kept = match space {
        NameSpace::Node => base != "in" && CONNECTIVES.contains(&base),
        NameSpace::Part => name == GROUND || (base != "in" && CONNECTIVES.contains(&base)),
        _ => {
            CONNECTIVES.contains(&base)
                || PHRASE_WORDS.contains(&base)
                || ORDINALS.contains(&base)
                || Function::ALL.iter().any(|(f, _)| *f == base)
                || base == "points"
                || is_unit(base)
        }
    };
    kept.then(|| name.replacen(base, &format!("{base}_"), 1))
}

fn is_unit(word: &str) -> bool {
    UNITS.iter().any(|(unit, _, prefixed)| {
        word == *unit
            || (*prefixed
                && word
                    .strip_suffix(unit)
                    .is_some_and(|p| PREFIXES.iter().any(|(prefix, _)| *prefix == p)))
    })
}

/// Every name that is given: form, reserved words, twice.
pub(super) fn check(draft: &Draft, faults: &mut Vec<Fault>) {
    let (mut parts, mut nodes) = (HashMap::new(), HashSet::new());
    for part in &draft.parts {
        form(&part.name, NameSpace::Part, faults);
        twice(&mut parts, &part.name, part.kind.word(), faults);
        for node in part.kind.nodes() {
            // Nodes are named wherever they are touched: once is enough.
            if fault_of(node, NameSpace::Node).is_some() && nodes.insert(node.text.as_str()) {
                form(node, NameSpace::Node, faults);
            }
        }
    }
    shared(draft, faults);
}

fn form(name: &Name, space: NameSpace, faults: &mut Vec<Fault>) {
    faults.extend(fault_of(name, space));
}

fn fault_of(name: &Name, space: NameSpace) -> Option<Fault> {
    if !is_name(&name.text) {
        return Some(
            FaultKind::BadName {
                name: name.text.clone(),
            }
            .at(name.span),
        );
    }
    let offer = reserved(&name.text, space)?;
    Some(
        FaultKind::Reserved {
            name: name.text.clone(),
            space,
            offer,
        }
        .at(name.span),
    )
}

/// The space of let-values, signals, readings and claims, in the order of the text.
fn shared(draft: &Draft, faults: &mut Vec<Fault>) {
    let mut all: Vec<(&Name, NameSpace, bool)> = Vec::new();
    all.extend(draft.lets.iter().map(|l| (&l.name, NameSpace::Let, false)));
    all.extend(
        draft
            .signals
            .iter()
            .map(|s| (&s.name, NameSpace::Signal, false)),
    );
    all.extend(
        draft
            .readings
            .iter()
            .map(|r| (&r.name, NameSpace::Reading, false)),
    );
    all.extend(
        draft
            .claims
            .iter()
            .map(|c| (&c.name, NameSpace::Claim, is_of_itself(c))),
    );
    all.sort_by_key(|(name, ..)| name.span.start);
    let (mut names, mut claims) = (HashMap::new(), HashMap::new());
    for (name, space, apart) in &all {
        // What a part's rating claims is named by the part, whose name has been looked at.
        if *space != NameSpace::Claim || !name.text.contains('.') {
            form(name, *space, faults);
        }
        if *apart {
            twice(&mut claims, name, space.word(), faults);
        }
    }
    for (name, space, apart) in all {
        if !apart {
            twice(&mut names, name, space.word(), faults);
            continue;
        }
        // A claim named as its reading is: any other holder of the name is a second one.
        if let Some(first) = names
            .get(name.text.as_str())
            .filter(|word| **word != NameSpace::Reading.word())
        {
            faults.push(again(name, first, space.word()));
        }
    }
}

/// `claim dose: dose is …`
fn is_of_itself(claim: &Claim) -> bool {
    matches!(&claim.reading.kind, ExprKind::Name(name) if *name == claim.name.text)
}

fn twice<'a>(
    seen: &mut HashMap<&'a str, &'static str>,
    name: &'a Name,
    word: &'static str,
    faults: &mut Vec<Fault>,
) {
    match seen.get(name.text.as_str()) {
        Some(first) => faults.push(again(name, first, word)),
        None => {
            seen.insert(&name.text, word);
        }
    }
}

fn again(name: &Name, first: &str, second: &str) -> Fault {
    let (first, second) = (first.to_owned(), second.to_owned());
    FaultKind::Twice {
        name: name.text.clone(),
        first,
        second,
    }
    .at(name.span)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_have_letters_digits_and_indices() {
        for good in ["a", "n[3]", "n[3][12]", "s1.coil", "A_b9"] {
            assert!(is_name(good), "{good}");
        }
        for bad in ["", "1a", "a b", "n[]", "n[a]", "n[1", "é", "a.", "n[1]x"] {
            assert!(!is_name(bad), "{bad}");
        }
    }

    #[test]
    fn units_with_a_prefix_are_kept_from_let_values() {
        for word in [
            "mA", "fs", "kohm", "ohm", "ppm", "deg", "sqrt", "second", "last", "t",
        ] {
            assert!(reserved(word, NameSpace::Let).is_some(), "{word}");
        }
        for word in ["kdeg", "load", "Volt", "heat", "current", "energy"] {
            assert!(reserved(word, NameSpace::Let).is_none(), "{word}");
        }
    }

    #[test]
    fn parts_and_nodes_may_be_called_in_but_not_to() {
        assert_eq!(reserved("in", NameSpace::Node), None);
        assert_eq!(reserved("to", NameSpace::Node).as_deref(), Some("to_"));
        assert_eq!(
            reserved("ground", NameSpace::Part).as_deref(),
            Some("ground_")
        );
        assert_eq!(reserved("ground", NameSpace::Node), None);
    }
}

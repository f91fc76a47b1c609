//! The words of the language, in lists: what begins a statement, what joins, what is reserved.

/// Words that join others, and so name nothing; `in` may name a node or a part.
pub(crate) const CONNECTIVES: &[&str] = &[
    "and", "after", "at", "before", "between", "by", "during", "from", "in", "is", "of", "or",
    "to", "when", "while", "with",
];

/// Words that begin phrases by themselves.
pub(crate) const PHRASE_WORDS: &[&str] = &[
    "voltage", "time", "highest", "lowest", "largest", "steepest", "mean", "rms", "final", "jumps",
];

/// The ordinals of edges.
pub(crate) const ORDINALS: &[&str] = &[
    "first", "second", "third", "fourth", "fifth", "sixth", "seventh", "eighth", "ninth", "tenth",
    "last",
];

/// Words that may stand after a number and are no unit there.
pub(crate) const AFTER_NUMBER: &[&str] = &[
    "values",
    "percentage",
    "just",
    "rises",
    "falls",
    "first",
    "last",
    "over",
    "tolerance",
    "standard",
    "lognormal",
    "allowing",
    "answers",
    "so",
];

/// The first words of the statements that a part is stated by.
pub(crate) const PARTS: &[&str] = &[
    "resistor",
    "capacitor",
    "inductor",
    "coupling",
    "wire",
    "voltage",
    "current",
    "switch",
    "changeover",
    "diode",
];

/// The first words of the other statements.
pub(crate) const STATEMENTS: &[&str] = &[
    "title",
    "note",
    "let",
    "signal",
    "reading",
    "claim",
    "cases",
    "adjust",
    "span",
    "start",
    "integrate",
    "error",
    "time",
    "channels",
    "limit",
    "repeat",
    "end",
];

/// First words of the statements that may not stand in a `repeat`.
pub(crate) const OUTSIDE_REPEAT: &[&str] = &[
    "title",
    "note",
    "let",
    "cases",
    "adjust",
    "span",
    "start",
    "integrate",
    "error",
    "time",
    "limit",
];

/// First words of statements that come later, with what they are.
pub(crate) const LATER: &[(&str, &str)] = &[
    ("transformer", "`transformer`, the ideal transformer,"),
    ("thyristor", "`thyristor`"),
    ("gap", "`gap`, the spark gap,"),
    ("varistor", "`varistor`"),
    ("assembly", "`assembly`"),
    ("mount", "`mount`"),
    ("take", "`take in`"),
    ("measured", "`measured`"),
];

/// Qualifiers that come later.
pub(crate) const LATER_QUALIFIERS: &[&str] = &[
    "saturates",
    "breakdown",
    "transit",
    "fires",
    "holding",
    "recovery",
    "triggered",
    "sparks",
    "arc",
];

/// Whether a word joins others.
pub(crate) fn is_connective(word: &str) -> bool {
    CONNECTIVES.contains(&word)
}

/// Whether a let-value, reading, signal, claim or counter may not be called so.
pub(crate) fn is_reserved(word: &str) -> bool {
    is_connective(word)
        || PHRASE_WORDS.contains(&word)
        || ORDINALS.contains(&word)
        || matches!(word, "t" | "pi" | "points")
        || pulsewright_circuit::expr::Function::ALL
            .iter()
            .any(|(name, _)| *name == word)
        || crate::unit::unit(word).is_some()
}

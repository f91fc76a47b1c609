//! Mistakes of the text itself: what is wrong, in the reader's words, with its place.
//!
//! [`What`] tells the cases apart and holds their data; its code, its line that stands alone,
//! its label and what to write instead are made here and nowhere else. What is wrong with the
//! circuit that a text describes is found in `pulsewright-circuit`, with codes of its own.

use pulsewright_circuit::Span;
use pulsewright_circuit::fault::Fault;

/// A mistake of the text and its place.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Slip {
    pub(crate) span: Span,
    pub(crate) what: What,
}

impl Slip {
    pub(crate) const fn new(span: Span, what: What) -> Self {
        Slip { span, what }
    }

    /// As a fault, for those who collect and print them.
    pub(crate) fn fault(&self) -> Fault {
        Fault {
            code: self.what.code(),
            span: self.span,
            message: self.what.to_string(),
            label: self.what.label(),
            write: self.what.write(),
        }
    }
}

/// What is wrong. Texts of the author stand in backticks.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub(crate) enum What {
    #[error(
        "the text has {bytes} bytes, and at most {} are read",
        crate::lex::MOST_BYTES
    )]
    TooLong { bytes: usize },
    #[error("a byte ({byte:#04x}) that is no UTF-8")]
    NotUtf8 { byte: u8 },
    #[error("a control character (U+{code:04X}) stands in the text")]
    Control { code: u32 },
    #[error("`{found}` is a sign of typography; the language has `{plain}`")]
    Typography { found: char, plain: &'static str },
    #[error("`{found}` is no character of the language")]
    Unknown { found: char },
    #[error("the quote is not closed on its line")]
    QuoteOpen,
    #[error("so many characters are wrong that the rest of the text is left unread")]
    TooMany,

    #[error("`{text}` is not how a number is written")]
    NumberForm { text: String, write: String },
    #[error("a comma stands between two digits")]
    CommaInNumber,
    #[error("`{unit}` is no unit of the language")]
    UnknownUnit {
        number: String,
        unit: String,
        near: Option<String>,
    },
    #[error("the unit `{unit}` stands without a number")]
    UnitAlone { unit: String, write: String },
    #[error(
        "`^` stands after the unit of `{value}`, and may mean the power of the value or of its unit"
    )]
    PowerOnUnit {
        value: String,
        power: String,
        squared: Option<String>,
    },
    #[error("`{fraction} {unit}` may mean {fraction} of 1 {unit}, or {top} over {bottom} {unit}")]
    FractionBeforeUnit {
        fraction: String,
        top: String,
        bottom: String,
        unit: String,
    },
    #[error("`{unit}` has more after its `/` than one unit")]
    UnitQuotient { unit: String, write: String },
    #[error("a share is added to a quantity")]
    ShareAdded {
        sign: &'static str,
        left: String,
        share: String,
    },
    #[error("`{number}` is {size} than a number that can be held")]
    NumberRange { number: String, size: &'static str },
    #[error("the unit has too high a power")]
    UnitPower,

    #[error("`{name}` is no name: names have an ASCII letter and then letters, digits and `_`")]
    NameForm { name: String },
    #[error("a blank stands before the index of `{name}`")]
    BlankBeforeIndex { name: String },
    #[error("the index of `{name}` is {value}, and an index is never below 0")]
    NegativeIndex { name: String, value: i64 },
    #[error("{what} is not a whole number known from counters and let-values")]
    NotWhole { what: String },
    #[error("the whole-number arithmetic goes past what can be counted")]
    WholeOverflow,
    #[error(
        "`{text}` is no part of a bound or an index, which have whole numbers, names and `+ - *`"
    )]
    WholeForm { text: String },

    #[error("the statement goes on after this, and {}", if *.last { "the text ends" } else { "the next line begins another one" })]
    GoesOn { bracket: bool, last: bool },
    #[error("no statement begins with `{word}`")]
    UnknownStatement { word: String, near: Option<String> },
    #[error("{}", expected_words(.within, .expected, .found))]
    Expected {
        within: String,
        expected: String,
        found: String,
        near: Option<String>,
    },
    #[error("`{word}` stands twice in {within}")]
    Twice { word: String, within: String },
    #[error("{what} comes with a later version")]
    Later { what: String },
    #[error("nested more than {limit} deep")]
    TooDeep { limit: usize },
    #[error("the expression is made of more than {limit} operations within or after each other")]
    TooManyOperations { limit: usize },
    #[error("a phrase takes a sum or a product as a signal only in brackets")]
    BracketsNeeded,
    #[error("a `{bracket}` that nothing has opened")]
    BracketAlone { bracket: &'static str },
    #[error("{}", qualifier_words(.word, .kind))]
    NoQualifier {
        word: String,
        kind: &'static str,
        known: &'static str,
        near: Option<String>,
    },
    #[error("`{function}` takes {takes}, and has {given}")]
    Arguments {
        function: &'static str,
        takes: &'static str,
        given: usize,
    },
    #[error(
        "`{part}` is rated by a voltage, a current, a power, an energy or an action, and {found} is none of these"
    )]
    NotRated { part: String, found: String },
    #[error("`{word}` may stand once in a file, and stands here again")]
    StatementTwice { word: String },

    #[error("`limit` knows no `{word}`")]
    UnknownLimit { word: String },
    #[error("{what} is a whole number, from {least} to {}", grouped(*.most))]
    Count {
        what: &'static str,
        least: u64,
        most: u64,
    },
    #[error("both allowances are {kind}")]
    SameAllowance { kind: &'static str },

    #[error("`{word}` has no `end`")]
    NoEnd { word: String },
    #[error("an `end` that ends nothing")]
    EndAlone,
    #[error("`{word}` stands in a `repeat`")]
    NotInRepeat { word: String },
    #[error("the repetitions make more than {} parts and other statements", grouped(*.limit))]
    TooManyParts { limit: u64 },
    #[error("the counter `{name}` is called by a word of the language")]
    CounterReserved { name: String },
    #[error("`{name}` is the name of a counter and of {by}")]
    CounterTwice { name: String, by: String },
    #[error("`{name}` sets bounds or indices of a `repeat`, and `{by}` would vary it")]
    CountVaried { name: String, by: &'static str },
    #[error("`{name}` is worked out from itself, in a circle")]
    WholeCircle { name: String },
}

fn expected_words(within: &str, expected: &str, found: &str) -> String {
    format!("{within} needs {expected} here, not {found}")
}

/// A count with `_` between groups of three digits, as the language may write it.
fn grouped(n: u64) -> String {
    let digits = n.to_string();
    let first = digits.len() % 3;
    let mut text = String::new();
    for (i, c) in digits.chars().enumerate() {
        if i > 0 && i % 3 == first {
            text.push('_');
        }
        text.push(c);
    }
    text
}

fn qualifier_words(word: &str, kind: &str) -> String {
    format!("`{word}` is no qualifier of a {kind}")
}

impl What {
    /// The code, which never changes its meaning.
    pub(crate) const fn code(&self) -> &'static str {
        match self {
            What::TooLong { .. } => "P0001",
            What::NotUtf8 { .. } => "P0002",
            What::Control { .. } => "P0003",
            What::Typography { .. } => "P0004",
            What::Unknown { .. } => "P0005",
            What::QuoteOpen => "P0006",
            What::TooMany => "P0007",
            What::NumberForm { .. } => "P0101",
            What::CommaInNumber => "P0102",
            What::UnknownUnit { .. } => "P0103",
            What::UnitAlone { .. } => "P0104",
            What::PowerOnUnit { .. } => "P0105",
            What::FractionBeforeUnit { .. } => "P0106",
            What::UnitQuotient { .. } => "P0108",
            What::ShareAdded { .. } => "P0109",
            What::NumberRange { .. } => "P0110",
            What::UnitPower => "P0111",
            What::NameForm { .. } => "P0201",
            What::BlankBeforeIndex { .. } => "P0202",
            What::NegativeIndex { .. } => "P0203",
            What::NotWhole { .. } => "P0204",
            What::WholeOverflow => "P0205",
            What::WholeForm { .. } => "P0206",
            What::GoesOn { .. } => "P0301",
            What::UnknownStatement { .. } => "P0302",
            What::Expected { .. } => "P0303",
            What::Twice { .. } => "P0304",
            What::Later { .. } => "P0305",
            What::TooDeep { .. } => "P0306",
            What::TooManyOperations { .. } => "P0307",
            What::BracketsNeeded => "P0308",
            What::BracketAlone { .. } => "P0309",
            What::NoQualifier { .. } => "P0310",
            What::Arguments { .. } => "P0311",
            What::StatementTwice { .. } => "P0312",
            What::NotRated { .. } => "P0313",
            What::UnknownLimit { .. } => "P0501",
            What::Count { .. } => "P0502",
            What::SameAllowance { .. } => "P0503",
            What::NoEnd { .. } => "P0601",
            What::EndAlone => "P0602",
            What::NotInRepeat { .. } => "P0603",
            What::TooManyParts { .. } => "P0604",
            What::CounterReserved { .. } => "P0605",
            What::CounterTwice { .. } => "P0606",
            What::CountVaried { .. } => "P0607",
            What::WholeCircle { .. } => "P0608",
        }
    }

    /// What belongs at the place.
    fn label(&self) -> Option<String> {
        Some(match self {
            What::NotUtf8 { .. } => "text is UTF-8".to_owned(),
            What::Control { .. } => "only the tab and the line's end may stand here".to_owned(),
            What::QuoteOpen => "a quote ends on the line it starts on".to_owned(),
            What::CommaInNumber => "a decimal sign is a point, and a list has a blank after its comma".to_owned(),
            What::UnknownUnit { .. } => "a unit belongs here".to_owned(),
            What::PowerOnUnit { .. } => "`²` squares a unit, brackets raise a value".to_owned(),
            What::UnitQuotient { .. } => "after `/` comes one unit or a bracket of units".to_owned(),
            What::NumberForm { .. } => "digits stand on both sides of the point, `_` only between digits".to_owned(),
            What::NotWhole { .. } => "a whole number".to_owned(),
            What::GoesOn { bracket: true, .. } => "this bracket is not closed".to_owned(),
            What::GoesOn { bracket: false, .. } => "nothing follows this".to_owned(),
            What::Expected { expected, .. } => format!("{expected} belongs here"),
            What::NoQualifier { known, .. } => format!("one of {known}"),
            What::BracketsNeeded => "outside brackets the phrase has ended here".to_owned(),
            What::TooDeep { .. } => "`limit nesting` raises this, up to 256".to_owned(),
            What::TooManyParts { .. } => "`limit parts` raises this".to_owned(),
            What::TooManyOperations { .. } => "signals and let-values can hold parts of it".to_owned(),
            What::NotInRepeat { .. } => {
                "a `repeat` holds parts, couplings, signals, readings, claims, channels and `repeat`".to_owned()
            }
            What::NegativeIndex { .. } => "0 or more".to_owned(),
            What::UnknownLimit { .. } => "`steps`, `events`, `unknowns`, `parts` or `nesting`".to_owned(),
            What::StatementTwice { .. } => "the first one holds".to_owned(),
            What::SameAllowance { .. } => "one is a share, the other an amount".to_owned(),
            _ => return None,
        })
    }

    /// What to write instead.
    fn write(&self) -> Option<String> {
        Some(match self {
            What::Typography { plain, .. } => (*plain).to_owned(),
            What::NumberForm { write, .. }
            | What::UnitAlone { write, .. }
            | What::UnitQuotient { write, .. } => write.clone(),
            What::UnknownUnit {
                number,
                near: Some(near),
                ..
            } => {
                let blank = if number.is_empty() { "" } else { " " };
                format!("{number}{blank}{near}")
            }
            What::PowerOnUnit {
                value,
                power,
                squared,
            } => match squared {
                Some(squared) => {
                    format!("({value})^{power} for the value, {squared} for the unit, as in A²*s")
                }
                None => format!("({value})^{power}"),
            },
            What::FractionBeforeUnit {
                fraction,
                top,
                bottom,
                unit,
            } => {
                format!("({fraction}) * 1 {unit}, or {top}/({bottom} {unit})")
            }
            What::ShareAdded { sign, left, share } => format!("{left} * (1 {sign} {share})"),
            What::BlankBeforeIndex { name } => format!("{name}["),
            What::UnknownStatement {
                near: Some(near), ..
            }
            | What::Expected {
                near: Some(near), ..
            }
            | What::NoQualifier {
                near: Some(near), ..
            } => near.clone(),
            _ => return None,
        })
    }
}

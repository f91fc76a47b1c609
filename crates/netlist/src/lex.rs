//! Text to tokens.
//!
//! The lexical grammar, in nom's combinators over what is left of the text:
//!
//! ```text
//! digits  = digit+ ( "_" digit+ )*
//! number  = digits [ "." digits ] [ ( "e" | "E" ) [ "+" | "-" ] digits ]
//! word    = ( letter | "_" ) ( letter | digit | "_" )*      letters of any alphabet, names are
//!                                                           held to ASCII by the grammar
//! quoted  = '"' ( any but '"' or the line's end | '""' )* '"'
//! comment = "#" any but the line's end
//! ```
//!
//! A place that is none of these is a mistake, and reading goes on after it as if the plain
//! sign had been written where that can be known (`−` is read as `-`). Bytes that are no UTF-8
//! are found before: they are replaced by as many bytes of [`SUBSTITUTE`], so that every
//! place in the replaced text is the same place in the file.

use nom::branch::alt;
use nom::bytes::complete::{is_not, tag, take_while, take_while1};
use nom::character::complete::{char, digit1, one_of};
use nom::combinator::{opt, recognize};
use nom::multi::many0_count;
use nom::sequence::preceded;
use nom::{IResult, Parser};
use pulsewright_circuit::Span;

use crate::slip::{Slip, What};
use crate::token::{Comment, Gap, Kind, Token};

/// The most bytes that are read.
pub(crate) const MOST_BYTES: usize = 256 << 20;
/// After this many mistakes of characters the rest of the text is left unread.
const MOST_SLIPS: usize = 10_000;
/// Stands in place of a byte that is no UTF-8; a mistake is already noted there.
const SUBSTITUTE: char = '\u{1a}';

/// What lexing yields.
pub(crate) struct Lexed {
    pub(crate) tokens: Vec<Token>,
    pub(crate) comments: Vec<Comment>,
    pub(crate) slips: Vec<Slip>,
}

/// The text of a file, with every byte that is no UTF-8 replaced and noted.
pub(crate) fn decode(bytes: &[u8]) -> (String, Vec<Slip>) {
    if bytes.len() > MOST_BYTES {
        return (
            String::new(),
            vec![Slip::new(
                Span::new(0, 0),
                What::TooLong { bytes: bytes.len() },
            )],
        );
    }
    let mut text = String::with_capacity(bytes.len());
    let mut slips = Vec::new();
    for chunk in bytes.utf8_chunks() {
        text.push_str(chunk.valid());
        let bad = chunk.invalid();
        if let Some(&byte) = bad.first() {
            let start = text.len();
            text.extend(std::iter::repeat_n(SUBSTITUTE, bad.len()));
            if slips.len() < MOST_SLIPS {
                slips.push(Slip::new(span(start, text.len()), What::NotUtf8 { byte }));
            }
        }
    }
    (text, slips)
}

/// Cuts a text into tokens and comments.
pub(crate) fn lex(text: &str, noted: &[Slip]) -> Lexed {
    let mut lexer = Lexer {
        text,
        at: if text.starts_with('\u{feff}') {
            '\u{feff}'.len_utf8()
        } else {
            0
        },
        gap: Gap::Line,
        noted,
        out: Lexed {
            tokens: Vec::new(),
            comments: Vec::new(),
            slips: Vec::new(),
        },
    };
    while lexer.step() {}
    lexer.out
}

fn digits(input: &str) -> IResult<&str, &str> {
    recognize((digit1, many0_count(preceded(char('_'), digit1)))).parse(input)
}

fn number(input: &str) -> IResult<&str, &str> {
    let fraction = (char('.'), digits);
    let exponent = (one_of("eE"), opt(one_of("+-")), digits);
    recognize((digits, opt(fraction), opt(exponent))).parse(input)
}

fn word(input: &str) -> IResult<&str, &str> {
    take_while1(|c: char| c.is_alphabetic() || c.is_ascii_digit() || c == '_').parse(input)
}

fn quoted(input: &str) -> IResult<&str, &str> {
    recognize((
        char('"'),
        many0_count(alt((is_not("\"\n"), tag("\"\"")))),
        char('"'),
    ))
    .parse(input)
}

fn comment(input: &str) -> IResult<&str, &str> {
    recognize((char('#'), take_while(|c| c != '\n'))).parse(input)
}

fn blanks(input: &str) -> IResult<&str, &str> {
    take_while1(|c| matches!(c, ' ' | '\t' | '\u{a0}' | '\u{202f}')).parse(input)
}

fn sign(input: &str) -> IResult<&str, (Kind, &str)> {
    let two = alt((
        tag("<=").map(|t| (Kind::LessOrEqual, t)),
        tag(">=").map(|t| (Kind::GreaterOrEqual, t)),
    ));
    let one = alt((
        tag("+").map(|t| (Kind::Plus, t)),
        tag("-").map(|t| (Kind::Minus, t)),
        alt((tag("*"), tag("·"))).map(|t| (Kind::Star, t)),
        tag("/").map(|t| (Kind::Slash, t)),
        tag("^").map(|t| (Kind::Caret, t)),
        tag("=").map(|t| (Kind::Equal, t)),
        tag("<").map(|t| (Kind::Less, t)),
        tag(">").map(|t| (Kind::Greater, t)),
        tag(":").map(|t| (Kind::Colon, t)),
        tag(";").map(|t| (Kind::Semicolon, t)),
        tag(",").map(|t| (Kind::Comma, t)),
        tag(".").map(|t| (Kind::Dot, t)),
        tag("%").map(|t| (Kind::Percent, t)),
        tag("²").map(|t| (Kind::Square, t)),
        alt((
            tag("(").map(|t| (Kind::Open, t)),
            tag(")").map(|t| (Kind::Close, t)),
            tag("[").map(|t| (Kind::OpenIndex, t)),
            tag("]").map(|t| (Kind::CloseIndex, t)),
        )),
    ));
    alt((two, one)).parse(input)
}

/// A sign of typography that stands where a plain one belongs.
const TYPOGRAPHY: &[(char, &str, Option<Kind>)] = &[
    ('−', "-", Some(Kind::Minus)),
    ('–', "-", Some(Kind::Minus)),
    ('×', "*", Some(Kind::Star)),
    ('⋅', "*", Some(Kind::Star)),
    ('÷', "/", Some(Kind::Slash)),
    ('≤', "<=", Some(Kind::LessOrEqual)),
    ('≥', ">=", Some(Kind::GreaterOrEqual)),
    ('“', "\"", None),
    ('”', "\"", None),
    ('„', "\"", None),
    ('‘', "\"", None),
    ('’', "\"", None),
    ('«', "\"", None),
    ('»', "\"", None),
];

struct Lexer<'a> {
    text: &'a str,
    at: usize,
    gap: Gap,
    /// Mistakes that decoding has noted, in the order of their places.
    noted: &'a [Slip],
    out: Lexed,
}

impl Lexer<'_> {
    fn rest(&self) -> &str {
        self.text.get(self.at..).unwrap_or_default()
    }

    /// Reads one token, comment or blank; false at the end.
    fn step(&mut self) -> bool {
        let rest = self.rest();
        let Some(first) = rest.chars().next() else {
            return false;
        };
        if self.out.slips.len() >= MOST_SLIPS {
            let end = span(self.at, self.at);
            self.out.slips.push(Slip::new(end, What::TooMany));
            return false;
        }
        match first {
            '\n' => self.line_end(1),
            '\r' if rest.starts_with("\r\n") => self.line_end(2),
            '0'..='9' => self.number(),
            '"' => self.quoted(),
            '#' => self.comment(),
            '.' if self.starts_fraction() => self.bare_fraction(),
            ' ' | '\t' | '\u{a0}' | '\u{202f}' => self.blanks(),
            _ => self.word_or_sign(first),
        }
        true
    }

    fn line_end(&mut self, bytes: usize) {
        self.at += bytes;
        self.gap = Gap::Line;
    }

    fn blanks(&mut self) {
        let n = blanks(self.rest()).map_or(1, |(_, b)| b.len());
        self.at += n;
        if self.gap == Gap::None {
            self.gap = Gap::Blank;
        }
    }

    fn push(&mut self, kind: Kind, bytes: usize) {
        let at = span(self.at, self.at + bytes);
        self.out.tokens.push(Token {
            kind,
            before: self.gap,
            start: at.start,
            end: at.end,
        });
        self.at += bytes;
        self.gap = Gap::None;
    }

    fn slip(&mut self, bytes: usize, what: What) {
        self.out
            .slips
            .push(Slip::new(span(self.at, self.at + bytes), what));
    }

    fn word_or_sign(&mut self, first: char) {
        let rest = self.rest();
        if let Ok((_, text)) = word(rest) {
            let n = text.len();
            return self.push(Kind::Word, n);
        }
        if let Ok((_, (kind, text))) = sign(rest) {
            let n = text.len();
            if kind == Kind::Comma && self.between_digits(n) {
                self.slip(n, What::CommaInNumber);
            }
            return self.push(kind, n);
        }
        self.stray(first);
    }

    fn byte_before(&self) -> Option<u8> {
        self.at
            .checked_sub(1)
            .and_then(|i| self.text.as_bytes().get(i))
            .copied()
    }

    fn byte_after(&self, n: usize) -> Option<u8> {
        self.text.as_bytes().get(self.at + n).copied()
    }

    fn between_digits(&self, n: usize) -> bool {
        let digit = |b: Option<u8>| b.is_some_and(|b| b.is_ascii_digit());
        digit(self.byte_before()) && digit(self.byte_after(n))
    }

    /// Whether the dot here begins a number (`.5`) and joins no inner name (`s1.5`).
    fn starts_fraction(&self) -> bool {
        self.byte_after(1).is_some_and(|b| b.is_ascii_digit())
            && !self
                .byte_before()
                .is_some_and(|b| b.is_ascii_alphanumeric() || b == b']' || b == b'_')
    }

    fn bare_fraction(&mut self) {
        let rest = self.rest().get(1..).unwrap_or_default();
        let n = 1 + number(rest).map_or(0, |(_, t)| t.len());
        let text = self.rest().get(..n).unwrap_or_default().to_owned();
        self.slip(
            n,
            What::NumberForm {
                write: format!("0{text}"),
                text,
            },
        );
        self.push(Kind::Number, n);
    }

    fn number(&mut self) {
        let rest = self.rest();
        let mut n = number(rest).map_or(1, |(_, t)| t.len());
        let after = rest.get(n..).unwrap_or_default();
        let tail = match after.as_bytes().first() {
            Some(b'_') => {
                after.len()
                    - after
                        .trim_start_matches(|c: char| c == '_' || c.is_ascii_digit())
                        .len()
            }
            Some(b'.') if !rest.get(..n).unwrap_or_default().contains(['e', 'E', '.']) => 1,
            _ => 0,
        };
        if tail > 0 {
            n += tail;
            let text = rest.get(..n).unwrap_or_default().to_owned();
            let write = text.trim_end_matches(['_', '.']).replace("__", "_");
            self.slip(n, What::NumberForm { write, text });
        }
        self.push(Kind::Number, n);
    }

    fn quoted(&mut self) {
        match quoted(self.rest()).map(|(_, t)| t.len()) {
            Ok(n) => {
                self.refuse_controls(n);
                self.push(Kind::Quoted, n);
            }
            Err(_) => {
                let n = self.rest_of_line();
                self.slip(n, What::QuoteOpen);
                self.push(Kind::Quoted, n);
            }
        }
    }

    fn rest_of_line(&self) -> usize {
        let rest = self.rest();
        let line = rest.split('\n').next().unwrap_or_default();
        line.trim_end_matches('\r').len()
    }

    fn comment(&mut self) {
        let whole = comment(self.rest()).map_or(1, |(_, t)| t.trim_end_matches('\r').len());
        self.refuse_controls(whole);
        self.out.comments.push(Comment {
            span: span(self.at, self.at + whole),
            tokens_before: self.out.tokens.len(),
            alone: self.gap == Gap::Line,
        });
        self.at += whole;
    }

    /// Notes the control characters in the next bytes, which are a comment or a quoted text.
    fn refuse_controls(&mut self, bytes: usize) {
        let part = self.rest().get(..bytes).unwrap_or_default();
        if part
            .bytes()
            .all(|b| (b' '..0x7f).contains(&b) || b == b'\t')
        {
            return;
        }
        let found: Vec<(usize, char)> = part
            .char_indices()
            .filter(|(_, c)| *c != '\t' && is_control(*c))
            .collect();
        for (offset, c) in found {
            self.note_control(self.at + offset, c);
        }
    }

    fn note_control(&mut self, at: usize, c: char) {
        let place = span(at, at + c.len_utf8());
        let is_noted = c == SUBSTITUTE && {
            let i = self.noted.partition_point(|s| s.span.end <= place.start);
            self.noted
                .get(i)
                .is_some_and(|s| s.span.start <= place.start)
        };
        if !is_noted && self.out.slips.len() < MOST_SLIPS {
            self.out
                .slips
                .push(Slip::new(place, What::Control { code: u32::from(c) }));
        }
    }

    /// A character that begins nothing.
    fn stray(&mut self, first: char) {
        let n = first.len_utf8();
        if is_control(first) {
            self.note_control(self.at, first);
        } else if let Some((_, plain, kind)) = TYPOGRAPHY.iter().find(|(c, _, _)| *c == first) {
            self.slip(
                n,
                What::Typography {
                    found: first,
                    plain,
                },
            );
            match kind {
                Some(kind) => self.push(*kind, n),
                None => self.curly(n),
            }
            return;
        } else {
            self.slip(n, What::Unknown { found: first });
        }
        self.at += n;
    }

    /// A text in curly quotes: read to the next quote of any kind on its line.
    fn curly(&mut self, n: usize) {
        let line = self.rest().get(..self.rest_of_line()).unwrap_or_default();
        let inner = line.get(n..).unwrap_or_default();
        let close = |c: char| c == '"' || TYPOGRAPHY.iter().any(|(q, p, _)| *q == c && *p == "\"");
        let end = inner
            .char_indices()
            .find(|(_, c)| close(*c))
            .map_or(line.len(), |(i, c)| n + i + c.len_utf8());
        self.push(Kind::Quoted, end);
    }
}

/// A control character, or one that turns the direction of text about, which could hide what
/// a line says.
fn is_control(c: char) -> bool {
    c.is_control()
        || matches!(c, '\u{2028}'..='\u{202e}' | '\u{2066}'..='\u{2069}' | '\u{feff}' | '\u{200e}' | '\u{200f}')
}

/// The text between the quotes, with doubled quotes made single.
pub(crate) fn unquote(text: &str) -> String {
    let is_quote = |c: char| c == '"' || TYPOGRAPHY.iter().any(|(q, p, _)| *q == c && *p == "\"");
    let inner = text.strip_prefix(is_quote).unwrap_or(text);
    let inner = inner.strip_suffix(is_quote).unwrap_or(inner);
    inner.replace("\"\"", "\"")
}

#[allow(
    clippy::cast_possible_truncation,
    reason = "the text has at most 256 MB"
)]
fn span(start: usize, end: usize) -> Span {
    Span::new(start as u32, end as u32)
}

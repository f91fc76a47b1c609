//! How text is laid out: how wide, and whether in colour; tones, and lines broken at blanks.
//!
//! Layout comes first and colour last: widths are counted on plain text, and the tone is put
//! around it when a line is written. A tone never carries a meaning that a word does not.

/// How wide a text may be, and whether it is coloured.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Look {
    /// Columns, 80 where there is no terminal.
    pub width: usize,
    /// Whether to colour.
    pub colour: bool,
}

impl Default for Look {
    fn default() -> Self {
        Look {
            width: 80,
            colour: false,
        }
    }
}

/// The tone of a piece of text.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Tone {
    /// As it is.
    #[default]
    Plain,
    /// A heading.
    Heading,
    /// Of less weight.
    Faint,
    /// Good news.
    Good,
    /// Bad news.
    Bad,
    /// Neither.
    Open,
}

impl Look {
    /// Puts a tone around a text.
    #[must_use]
    pub fn tinted(self, text: &str, tone: Tone) -> String {
        let code = match tone {
            Tone::Plain => "",
            Tone::Heading => "1",
            Tone::Faint => "2",
            Tone::Good => "32",
            Tone::Bad => "1;31",
            Tone::Open => "33",
        };
        if !self.colour || code.is_empty() || text.is_empty() {
            return text.to_owned();
        }
        format!("\u{1b}[{code}m{text}\u{1b}[0m")
    }
}

/// The columns that a text takes: its characters.
#[must_use]
pub fn columns(text: &str) -> usize {
    text.chars().count()
}

/// Breaks a text at blanks into lines of at most `width` columns. A number and the word after
/// it stay together; a piece wider than the line has one of its own.
#[must_use]
pub fn broken(text: &str, width: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for piece in pieces(text) {
        match lines.last_mut() {
            Some(line) if columns(line) + 1 + columns(&piece) <= width => {
                line.push(' ');
                line.push_str(&piece);
            }
            _ => lines.push(piece),
        }
    }
    lines
}

/// Words, with a number and what follows it in one piece (`25 %`, `4.7 kV`).
fn pieces(text: &str) -> Vec<String> {
    let mut pieces: Vec<String> = Vec::new();
    let mut glue = false;
    for word in text.split_whitespace() {
        match pieces.last_mut() {
            Some(last) if glue => {
                last.push(' ');
                last.push_str(word);
            }
            _ => pieces.push(word.to_owned()),
        }
        glue = is_number(word);
    }
    pieces
}

fn is_number(word: &str) -> bool {
    word == "±"
        || word == "×"
        || word
            .trim_start_matches(['(', '-', '−'])
            .replace('_', "")
            .parse::<f64>()
            .is_ok()
}

/// Adds a paragraph: broken lines, each after `indent` blanks.
pub fn paragraph(out: &mut String, look: Look, indent: usize, text: &str, tone: Tone) {
    for line in broken(text, look.width.saturating_sub(indent).max(20)) {
        out.push_str(&" ".repeat(indent));
        out.push_str(&look.tinted(&line, tone));
        out.push('\n');
    }
}

/// Adds a heading, with an empty line before it where something stands already.
pub fn heading(out: &mut String, look: Look, text: &str, tone: Tone) {
    if !out.is_empty() {
        out.push('\n');
    }
    out.push_str(&look.tinted(text, tone));
    out.push('\n');
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_value_and_its_unit_stay_together() {
        assert_eq!(
            broken("is at most 90 A or 3 J", 12),
            ["is at most", "90 A or 3 J"]
        );
        assert_eq!(broken("is at most 90 A", 13), ["is at most", "90 A"]);
        assert_eq!(broken("bank_v (4.8 kV)", 12), ["bank_v", "(4.8 kV)"]);
    }

    #[test]
    fn colour_is_put_on_only_where_asked_for() {
        let plain = Look::default();
        assert_eq!(plain.tinted("fails", Tone::Bad), "fails");
        assert_eq!(
            Look {
                colour: true,
                ..plain
            }
            .tinted("fails", Tone::Bad),
            "\u{1b}[1;31mfails\u{1b}[0m"
        );
    }
}

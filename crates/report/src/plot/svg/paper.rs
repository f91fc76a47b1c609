//! What an SVG is written on: elements as text, numbers to a hundredth of a pixel.

/// Collects the elements of a picture.
#[derive(Default)]
pub(super) struct Paper {
    text: String,
}

impl Paper {
    /// Adds markup as it is.
    pub(super) fn raw(&mut self, markup: &str) {
        self.text.push_str(markup);
        self.text.push('\n');
    }

    /// Adds a straight line.
    pub(super) fn line(&mut self, class: &str, (x1, y1): (f64, f64), (x2, y2): (f64, f64)) {
        self.raw(&format!(
            "<line class=\"{class}\" x1=\"{}\" y1=\"{}\" x2=\"{}\" y2=\"{}\"/>",
            px(x1),
            px(y1),
            px(x2),
            px(y2)
        ));
    }

    /// Adds a rectangle; `more` are further attributes.
    pub(super) fn rect(&mut self, class: &str, (x, y): (f64, f64), (w, h): (f64, f64), more: &str) {
        self.raw(&format!(
            "<rect class=\"{class}\" x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\"{more}/>",
            px(x),
            px(y),
            px(w.max(0.0)),
            px(h.max(0.0))
        ));
    }

    /// Adds a text; the class decides its anchor.
    pub(super) fn text(&mut self, class: &str, (x, y): (f64, f64), text: &str) {
        self.raw(&format!(
            "<text class=\"{class}\" x=\"{}\" y=\"{}\">{}</text>",
            px(x),
            px(y),
            escaped(text)
        ));
    }

    /// What was written.
    pub(super) fn into_text(self) -> String {
        self.text
    }
}

/// A length in pixels, to a hundredth, without trailing zeros.
pub(super) fn px(x: f64) -> String {
    let text = format!("{x:.2}");
    let short = text.trim_end_matches('0').trim_end_matches('.');
    if short == "-0" {
        "0".to_owned()
    } else {
        short.to_owned()
    }
}

/// A text with what XML reserves, and what it forbids, replaced.
pub(crate) fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            c if c.is_control() || matches!(c, '\u{fffe}' | '\u{ffff}') => out.push(' '),
            c => out.push(c),
        }
    }
    out
}

/// About how wide a text of 11 pixels is, in pixels.
pub(super) fn width_of(text: &str) -> f64 {
    let narrow = |c: char| {
        matches!(
            c,
            'i' | 'l' | 'j' | 'f' | 't' | ' ' | '.' | ',' | '1' | 'I' | ':'
        )
    };
    text.chars()
        .map(|c| if narrow(c) { 3.6 } else { 6.3 })
        .sum()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lengths_are_short() {
        assert_eq!(
            [px(1.0), px(-0.001), px(12.345), px(100.0)],
            ["1", "0", "12.35", "100"]
        );
    }

    #[test]
    fn text_cannot_leave_its_element() {
        assert_eq!(escaped("a<b>&\"'\u{1}"), "a&lt;b&gt;&amp;&quot;&#39; ");
    }
}

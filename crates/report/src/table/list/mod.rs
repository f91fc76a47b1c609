//! The circuit as understood: let-values, parts, schedules, what is read and claimed, cases,
//! defaults taken. What stands in the file as an expression stands here with its number too.
//!
//! ```text
//! parts
//!   capacitor  bank   top to ground  32 uF, tolerance 5 %, charged to bank_v (4.7 kV)
//!   switch     fire   top to mid     open; closes at 1 us
//! ```

mod parts;

use self::parts::{nodes, part};
use super::{Align, Cell, Grid};
use crate::look::{Look, Tone, heading, paragraph};
use crate::number::quantity;
use pulsewright_circuit::draft::{Claim, Named};
use pulsewright_circuit::expr::{Expr, ExprKind};
use pulsewright_circuit::spread::Value;
use pulsewright_circuit::{Circuit, LetValue, Lets};

/// What `list` prints. `lets` are the let-values' numbers in the case that is listed, `cases`
/// how many cases there are.
#[must_use]
pub fn list(circuit: &Circuit, lets: &Lets, cases: usize, look: Look) -> String {
    let (mut out, draft) = (String::new(), circuit.draft());
    if let Some(title) = &draft.title {
        paragraph(&mut out, look, 0, title, Tone::Heading);
    }
    let numbers = Numbers { circuit, lets };
    let_values(&mut out, look, &numbers, cases);
    parts(&mut out, look, &numbers);
    nodes(&mut out, look, &draft.parts);
    named(&mut out, look, "signals", &draft.signals);
    named(&mut out, look, "readings", &draft.readings);
    claims(&mut out, look, &draft.claims);
    channels(&mut out, look, circuit);
    notes(&mut out, look, &draft.notes);
    super::fire::defaults(&mut out, look, &circuit.defaults());
    out
}

/// Puts numbers beside expressions.
pub(super) struct Numbers<'a> {
    circuit: &'a Circuit,
    lets: &'a Lets,
}

impl Numbers<'_> {
    /// An expression as written, with its number after it where it is more than a number.
    pub(super) fn with_number(&self, expr: &Expr) -> String {
        let text = expr.to_string();
        match self.number(expr).filter(|_| !is_plain(expr)) {
            Some(number) => format!("{text} ({number})"),
            None => text,
        }
    }

    /// The number of an expression of let-values, or the circuit word it stands for.
    fn number(&self, expr: &Expr) -> Option<String> {
        if let ExprKind::Name(name) = &expr.kind {
            return self.lets.get(name).map(let_value);
        }
        let value = self.circuit.value(self.lets, expr).ok()?;
        Some(quantity(value, &self.circuit.dimension(expr).unit()))
    }
}

fn let_value(value: &LetValue) -> String {
    match value {
        LetValue::Number { value, dimension } => quantity(*value, &dimension.unit()),
        LetValue::Open => "open circuit".to_owned(),
        LetValue::Short => "short circuit".to_owned(),
    }
}

fn let_values(out: &mut String, look: Look, numbers: &Numbers<'_>, cases: usize) {
    let draft = numbers.circuit.draft();
    if draft.lets.is_empty() {
        return;
    }
    heading(out, look, "let-values", Tone::Heading);
    let varied = |name: &str| {
        draft
            .cases
            .iter()
            .any(|c| c.names.iter().any(|n| n.text == name))
    };
    let mut grid = Grid::new([Align::Left, Align::Point, Align::Text]);
    for entry in &draft.lets {
        let value = numbers
            .lets
            .get(&entry.name.text)
            .map_or_else(String::new, let_value);
        let varies = varied(&entry.name.text).then(|| "varied by the cases".to_owned());
        let words: Vec<String> = written(&entry.value).into_iter().chain(varies).collect();
        grid.row([
            entry.name.text.as_str().into(),
            value.into(),
            words.join(", ").into(),
        ]);
    }
    grid.write(out, look);
    if !draft.cases.is_empty() {
        paragraph(out, look, 2, &format!("{cases} cases"), Tone::Plain);
    }
}

/// What stands in the file beside a plain number: an expression, a spread.
fn written(value: &Value) -> Option<String> {
    let plain = is_plain(&value.nominal);
    let spread = value.spread.as_ref().map(ToString::to_string);
    if plain {
        spread
    } else {
        Some(value.to_string())
    }
}

fn is_plain(expr: &Expr) -> bool {
    matches!(
        expr.kind,
        ExprKind::Number { .. } | ExprKind::OpenCircuit | ExprKind::ShortCircuit
    )
}

fn parts(out: &mut String, look: Look, numbers: &Numbers<'_>) {
    heading(
        out,
        look,
        "parts: the reference direction is from the first node to the second",
        Tone::Heading,
    );
    let mut grid = Grid::new([Align::Left, Align::Left, Align::Left, Align::Text]);
    for entry in &numbers.circuit.draft().parts {
        let [between, text] = part(numbers, entry);
        grid.row([
            Cell::from(entry.kind.word()),
            entry.name.text.as_str().into(),
            between.into(),
            text.into(),
        ]);
    }
    grid.write(out, look);
}

fn named(out: &mut String, look: Look, title: &str, list: &[Named]) {
    if list.is_empty() {
        return;
    }
    heading(out, look, title, Tone::Heading);
    let mut grid = Grid::new([Align::Left, Align::Text]);
    for entry in list {
        grid.row([
            entry.name.text.as_str().into(),
            entry.value.to_string().into(),
        ]);
    }
    grid.write(out, look);
}

fn claims(out: &mut String, look: Look, claims: &[Claim]) {
    if claims.is_empty() {
        return;
    }
    heading(out, look, "claims", Tone::Heading);
    let mut grid = Grid::new([Align::Left, Align::Text]);
    for claim in claims {
        grid.row([
            claim.name.text.as_str().into(),
            claim_in_words(claim).into(),
        ]);
    }
    grid.write(out, look);
}

fn claim_in_words(claim: &Claim) -> String {
    let mut text = format!("{} {}", claim.reading, claim.relation);
    for condition in &claim.when {
        text.push_str(&format!(", when {condition}"));
    }
    if let Some(amount) = &claim.allowing {
        text.push_str(&format!(", allowing {amount}"));
    }
    if !claim.answers.is_empty() {
        text.push_str(&format!("; answers {}", claim.answers.join(", ")));
    }
    text
}

fn channels(out: &mut String, look: Look, circuit: &Circuit) {
    let channels: Vec<String> = circuit.channels().iter().map(ToString::to_string).collect();
    if !channels.is_empty() {
        heading(out, look, "channels", Tone::Heading);
        paragraph(out, look, 2, &channels.join(", "), Tone::Plain);
    }
}

fn notes(out: &mut String, look: Look, notes: &[String]) {
    if notes.is_empty() {
        return;
    }
    heading(out, look, "notes", Tone::Heading);
    for note in notes {
        paragraph(out, look, 2, note, Tone::Plain);
    }
}

//! From bytes to a circuit, or to everything that is wrong.
//!
//! The circuit's checks run on what could be read even where the text has mistakes, so that
//! one run shows all. What only follows from a mistake already reported is left out: faults in
//! a statement that could not be read, and in those that use what it was to define.

use std::collections::HashSet;

use pulsewright_circuit::circuit::{Circuit, LetValue};
use pulsewright_circuit::draft::{Draft, Let};
use pulsewright_circuit::fault::Fault;
use pulsewright_circuit::parts::{Part, PartKind, Resistor};
use pulsewright_circuit::{Dimension, Expr, ExprKind, Span};

use crate::consequence::Consequences;
use crate::document::Document;
use crate::grammar::constant;
use crate::lower::{Lowered, lower};
use crate::mistake::Mistakes;
use crate::scope::{Lets, Scope};
use crate::source::Source;

/// A netlist that was read.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub struct Netlist {
    /// The circuit.
    pub circuit: Circuit,
    /// What was seen that stops nothing, by place; [`Source::mistakes`] draws them.
    pub remarks: Vec<Fault>,
    /// The text, for faults that are found later.
    pub source: Source,
    /// Let-values that decided which parts there are. To set one of these, read anew with
    /// [`read_set`]; another is set in the circuit.
    pub counted: Vec<String>,
}

/// A netlist as written, before the circuit's checks.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub struct Parsed {
    /// What could be read.
    pub draft: Draft,
    /// The mistakes of the text, by place.
    pub faults: Vec<Fault>,
    /// The text.
    pub source: Source,
}

/// Reads a netlist; `name` is what messages call it.
///
/// # Errors
///
/// Every mistake in it, of the text and of the circuit that it describes.
pub fn read(bytes: &[u8], name: &str) -> Result<Netlist, Mistakes> {
    read_set(bytes, name, &[])
}

/// Reads a netlist with other let-values in bounds and indices than those it states.
///
/// The circuit keeps the let-values as written; they are replaced there by
/// [`Circuit::lets`] as for any other.
///
/// # Errors
///
/// As for [`read`].
pub fn read_set(bytes: &[u8], name: &str, set: &[(String, LetValue)]) -> Result<Netlist, Mistakes> {
    let document = Document::new(bytes);
    let set: Vec<(String, Expr)> = set
        .iter()
        .map(|(n, v)| (n.clone(), expression(v)))
        .collect();
    let lowered = lower(&document, &set);
    let source = Source::of_text(document.text.clone(), name);
    let mut faults = faults_of(&document, &lowered);
    let counted = lowered.counted.clone();
    let consequences = Consequences::new(&document, &lowered);
    match lowered.draft.check() {
        Ok(circuit) if faults.is_empty() => {
            let remarks = once_a_place(circuit.remarks().to_vec());
            Ok(Netlist {
                circuit,
                remarks,
                source,
                counted,
            })
        }
        Ok(_) => Err(source.mistakes(faults)),
        Err(found) => {
            faults.extend(found.into_iter().filter(|f| !consequences.holds(f)));
            Err(source.mistakes(once_a_place(faults)))
        }
    }
}

/// Reads a netlist without the circuit's checks: what could be read, and the mistakes of the
/// text.
#[must_use]
pub fn parse(bytes: &[u8], name: &str) -> Parsed {
    let document = Document::new(bytes);
    let lowered = lower(&document, &[]);
    let faults = faults_of(&document, &lowered);
    Parsed {
        draft: lowered.draft,
        faults,
        source: Source::of_text(document.text, name),
    }
}

/// Reads the value of a setting: an expression of numbers (`75 ohm`), or `open circuit`,
/// `short circuit`.
///
/// ```
/// use pulsewright_circuit::{Dimension, circuit::LetValue};
/// let value = pulsewright_netlist::parse_value("3.4 kV")?;
/// assert_eq!(value, LetValue::Number { value: 3400.0, dimension: Dimension::VOLT });
/// # Ok::<(), pulsewright_circuit::fault::Fault>(())
/// ```
///
/// # Errors
///
/// The first mistake in it, its span counted in the text given.
pub fn parse_value(text: &str) -> Result<LetValue, Fault> {
    let document = Document::new(text.as_bytes());
    if let Some(slip) = document.slips.first() {
        return Err(slip.fault());
    }
    let lets = Lets::default();
    let scope = Scope {
        counters: Vec::new(),
        lets: &lets,
        nesting: document.nesting,
        marking: false,
    };
    let expr = constant(&document.text, &document.tokens, &scope).map_err(|s| s.fault())?;
    value_of(expr).map_err(|faults| {
        let nothing = || Fault::new("P0303", Span::new(0, 0), "a setting needs a value");
        faults.into_iter().next().unwrap_or_else(nothing)
    })
}

/// The value of an expression as that of the only let-value of a circuit.
fn value_of(nominal: Expr) -> Result<LetValue, Vec<Fault>> {
    let (ohm, second) = (
        Expr::number(1.0, Dimension::OHM),
        Expr::number(1.0, Dimension::SECOND),
    );
    let any = Resistor {
        from: "a".into(),
        to: "ground".into(),
        value: ohm.into(),
    };
    let mut draft = Draft::default();
    draft.parts.push(Part {
        name: "any".into(),
        kind: PartKind::Resistor(any),
        span: Span::NONE,
    });
    draft.run.span = Some(second);
    draft.lets.push(Let {
        name: "value".into(),
        value: nominal.into(),
    });
    let lets = draft.check()?.lets(&[])?;
    lets.get("value").cloned().ok_or_else(Vec::new)
}

fn expression(value: &LetValue) -> Expr {
    match value {
        LetValue::Number { value, dimension } => Expr::number(*value, *dimension),
        LetValue::Open => Expr::new(ExprKind::OpenCircuit, Span::NONE),
        LetValue::Short => Expr::new(ExprKind::ShortCircuit, Span::NONE),
    }
}

fn faults_of(document: &Document, lowered: &Lowered) -> Vec<Fault> {
    let mut all: Vec<Fault> = document
        .slips
        .iter()
        .chain(&lowered.slips)
        .map(|s| s.fault())
        .collect();
    all.sort_by_key(|f| f.span.start);
    all
}

/// One fault of a kind at a place: those of the later rounds of a `repeat` say the same.
fn once_a_place(faults: Vec<Fault>) -> Vec<Fault> {
    let mut seen = HashSet::new();
    faults
        .into_iter()
        .filter(|f| !f.span.is_some() || seen.insert((f.code, f.span.start, f.span.end)))
        .collect()
}

//! Cases by readings as CSV: what a firmware's dose table is made from.
//!
//! ```text
//! load (ohm),yield,dose (J)
//! 25.0,0.7353,256.235
//! open circuit,,0.0             a reading that does not exist there is left empty
//! ```
//!
//! A column for each let-value that the cases vary and for each that is
//! adjusted, for each named reading, and for each claim
//! whose reading has no name; a row a case. Written as waveforms are ([`crate::waveform`]).

use crate::waveform::{digits, titled};
use pulsewright_study::outcome::{Answer, Fired, Found, SetValue};
use std::io::{self, Write};

/// Writes the cases.
///
/// # Errors
///
/// Those of `out`.
pub fn cases(cases: &[Fired], out: impl Write) -> io::Result<()> {
    let mut writer = csv::WriterBuilder::new().from_writer(out);
    if let Some(first) = cases.first() {
        let set = first
            .set
            .iter()
            .map(|(name, _)| titled(name, unit_in(cases, name)));
        let readings = first
            .answers()
            .map(|(name, text, answer)| titled(name, &crate::record::unit_of(answer, text)));
        let adjusted = first.adjusted.iter().map(|a| titled(&a.name, &a.unit));
        writer.write_record(set.chain(adjusted).chain(readings))?;
    }
    for case in cases {
        let set = case.set.iter().map(|(_, value)| match value {
            SetValue::Number { value, .. } => digits(*value),
            SetValue::Circuit(words) => words.clone(),
        });
        let readings = case.answers().map(|(_, _, answer)| number(answer));
        let adjusted = case.adjusted.iter().map(|a| digits(a.value));
        writer.write_record(set.chain(adjusted).chain(readings))?;
    }
    writer.flush()
}

/// The unit of a let-value, from a case in which it is a number.
fn unit_in<'a>(cases: &'a [Fired], name: &str) -> &'a str {
    let all = cases.iter().flat_map(|c| &c.set);
    let mut units = all.filter_map(|(other, value)| match value {
        SetValue::Number { unit, .. } if other == name => Some(unit.as_str()),
        _ => None,
    });
    units.next().unwrap_or("")
}

fn number(answer: &Answer) -> String {
    match answer.found {
        Found::Value { value, .. } => digits(value),
        _ => String::new(),
    }
}

//! Builds a circuit in code, without a text, and reads a shot of it.
//!
//! A capacitor of C farad, charged to V volt, discharges into a resistor of R ohm. After the
//! time RC the resistor has taken the share 1 - exp(-2) of the energy C V² / 2.
#![allow(clippy::print_stdout, reason = "an example shows what it found")]

use pulsewright::circuit::draft::{Named, Run};
use pulsewright::circuit::expr::Expr;
use pulsewright::circuit::parts::{Capacitor, Part, PartKind, Resistor};
use pulsewright::circuit::phrase::{Measure, Phrase};
use pulsewright::circuit::{Dimension, Span};
use pulsewright::report::number::{quantity, with_bound};
use pulsewright::{Draft, Found, Options};

const FARADS: f64 = 32e-6;
const VOLTS: f64 = 5e3;
const OHMS: f64 = 50.0;

/// Builds the circuit, fires it, and compares the dose with the closed form.
///
/// # Errors
///
/// Mistakes in the netlist, and what keeps a shot from being fired.
pub fn main() -> Result<(), Box<dyn std::error::Error>> {
    let circuit = discharge()
        .check()
        .map_err(|faults| format!("{faults:?}"))?;
    let fired = pulsewright::fire(&circuit, &Options::default())?;

    let expected = FARADS * VOLTS * VOLTS / 2.0 * (1.0 - (-2.0_f64).exp());
    for reading in &fired.readings {
        if let Found::Value { value, bound } = reading.answer.found {
            println!(
                "{}: {}; the closed form gives {}",
                reading.name,
                with_bound(value, bound, "J"),
                quantity(expected, "J")
            );
            assert!((value - expected).abs() <= bound + 1e-11 * expected);
        }
    }
    Ok(())
}

fn discharge() -> Draft {
    let bank = Capacitor {
        from: "top".into(),
        to: "ground".into(),
        value: Expr::number(FARADS, Dimension::FARAD).into(),
        charged: Some(Expr::number(VOLTS, Dimension::VOLT).into()),
        series: None,
        leakage: None,
    };
    let chest = Resistor {
        from: "top".into(),
        to: "ground".into(),
        value: Expr::number(OHMS, Dimension::OHM).into(),
    };
    let dose = Phrase {
        measure: Measure::EnergyInto("chest".into()),
        window: None,
        span: Span::NONE,
    };
    Draft {
        title: Some("a discharge".to_owned()),
        parts: vec![
            part("bank", PartKind::Capacitor(bank)),
            part("chest", PartKind::Resistor(chest)),
        ],
        readings: vec![Named {
            name: "dose".into(),
            value: Expr::reading(dose),
        }],
        run: Run {
            span: Some(Expr::number(OHMS * FARADS, Dimension::SECOND)),
            ..Run::default()
        },
        ..Draft::default()
    }
}

fn part(name: &str, kind: PartKind) -> Part {
    Part {
        name: name.into(),
        kind,
        span: Span::NONE,
    }
}

//! Circuits written in Rust: the same draft that a netlist gives, checked the same way.
//!
//! Statements are methods in the words of the language, values are expressions made by small
//! functions (`volts`, `seconds`, …), and a qualifier belongs to the part or the claim before
//! it:
//!
//! ```
//! use pulsewright_circuit::builder::*;
//!
//! let circuit = Builder::new("a bank into a load")
//!     .let_value("load", ohms(50.0))
//!     .capacitor("bank", "top", "ground", farads(32e-6)).charged_to(volts(4.7e3))
//!     .switch_open("fire", "top", "mid").closes(at(seconds(1e-6)))
//!     .inductor("choke", "mid", "pad", henrys(25e-3)).winding(ohms(10.0))
//!     .resistor("chest", "pad", "ground", name("load"))
//!     .span(seconds(30e-3))
//!     .claim("dose", energy_into("chest"), within(percent(25.0), joules(300.0))).answers("REQ-12")
//!     .claim("crest", largest(current_through("chest")), at_most(amps(90.0)))
//!     .cases("load", [ohms(25.0), ohms(50.0), ohms(175.0)])
//!     .build()?;
//!
//! let lets = circuit.lets(&[]).unwrap();
//! let setup = circuit.setup(&lets).unwrap();
//! assert_eq!(setup.nodes, ["ground", "top", "mid", "pad"]);
//! assert_eq!(circuit.case_sets(&[]).unwrap().len(), 3);
//! # Ok::<(), Vec<pulsewright_circuit::Fault>>(())
//! ```

mod claims;
mod operators;
mod parts;
mod readings;
mod run;
mod values;

pub use claims::{
    at_least, at_most, between_limits, circuit_is, compare, within, within_either, within_points,
};
pub use readings::*;
pub use values::*;

use crate::circuit::Circuit;
use crate::draft::{Draft, Let, Named};
use crate::expr::Expr;
use crate::fault::{Fault, FaultKind};
use crate::span::{Name, Span};

/// A draft in the making. Every method takes it and hands it on.
#[derive(Clone, Debug, Default)]
pub struct Builder {
    draft: Draft,
    /// Qualifiers that fit nothing before them.
    misplaced: Vec<Fault>,
}

impl Circuit {
    /// A builder of a circuit without a title.
    ///
    /// ```
    /// use pulsewright_circuit::{Circuit, builder::*};
    /// let built = Circuit::builder().resistor("r", "a", "ground", ohms(1.0)).span(seconds(1e-3)).build();
    /// assert!(built.is_ok());
    /// ```
    #[must_use]
    pub fn builder() -> Builder {
        Builder::default()
    }
}

impl Builder {
    /// A builder of a circuit with a title.
    ///
    /// ```
    /// use pulsewright_circuit::builder::Builder;
    /// assert_eq!(Builder::new("a stage").draft().title.as_deref(), Some("a stage"));
    /// ```
    #[must_use]
    pub fn new(title: impl Into<String>) -> Self {
        Builder {
            draft: Draft {
                title: Some(title.into()),
                ..Draft::default()
            },
            misplaced: Vec::new(),
        }
    }

    /// A builder that goes on from a draft.
    ///
    /// ```
    /// use pulsewright_circuit::builder::*;
    /// let first = Builder::new("a stage").span(seconds(1.0));
    /// let again = Builder::from_draft(first.draft().clone()).resistor("r", "a", "ground", ohms(1.0));
    /// assert!(again.build().is_ok());
    /// ```
    #[must_use]
    pub fn from_draft(draft: Draft) -> Self {
        Builder {
            draft,
            misplaced: Vec::new(),
        }
    }

    /// `let NAME = VALUE`
    ///
    /// ```
    /// use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").let_value("r0", ohms(5.0)).let_value("r1", 2.0 * name("r0"));
    /// assert_eq!(built.draft().lets.len(), 2);
    /// ```
    #[must_use]
    pub fn let_value(mut self, name: &str, value: impl Into<Expr>) -> Self {
        self.draft.lets.push(Let {
            name: name.into(),
            value: value.into().into(),
        });
        self
    }

    /// `signal NAME = EXPRESSION`
    ///
    /// ```
    /// use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").signal("drive", voltage_from("pad", "ground"));
    /// assert_eq!(built.draft().signals[0].value.to_string(), "voltage from pad to ground");
    /// ```
    #[must_use]
    pub fn signal(mut self, name: &str, value: impl Into<Expr>) -> Self {
        self.draft.signals.push(Named {
            name: name.into(),
            value: value.into(),
        });
        self
    }

    /// `reading NAME = EXPRESSION`
    ///
    /// ```
    /// use pulsewright_circuit::builder::*;
    /// let share = energy_into("chest") / value_just_before(energy_held("bank"), seconds(0.0));
    /// let built = Builder::new("").reading("share", share);
    /// assert_eq!(
    ///     built.draft().readings[0].value.to_string(),
    ///     "energy into chest / energy held by bank just before 0 s"
    /// );
    /// ```
    #[must_use]
    pub fn reading(mut self, name: &str, value: impl Into<Expr>) -> Self {
        self.draft.readings.push(Named {
            name: name.into(),
            value: value.into(),
        });
        self
    }

    /// The draft so far, nothing checked.
    #[must_use]
    pub fn draft(&self) -> &Draft {
        &self.draft
    }

    /// Checks the draft.
    ///
    /// # Errors
    ///
    /// Every mistake in it, and every qualifier that fits nothing before it.
    ///
    /// ```
    /// use pulsewright_circuit::builder::*;
    /// let faults = Builder::new("").resistor("r", "a", "ground", volts(1.0)).span(seconds(1.0)).build().unwrap_err();
    /// assert_eq!(faults[0].message, "`r` needs a resistance, and 1 V is a voltage");
    /// ```
    pub fn build(self) -> Result<Circuit, Vec<Fault>> {
        let checked = self.draft.check();
        if self.misplaced.is_empty() {
            return checked;
        }
        let mut faults = self.misplaced;
        faults.extend(checked.err().unwrap_or_default());
        Err(faults)
    }

    fn misplace(&mut self, qualifier: &'static str, follows: &'static str) {
        let found = self.draft.parts.last().map(|p| p.name.text.clone());
        self.misplaced.push(
            FaultKind::Misplaced {
                qualifier,
                follows,
                part: found,
            }
            .at(Span::NONE),
        );
    }
}

fn named(name: &str) -> Name {
    Name::new(name, Span::NONE)
}

//! `pulsewright.methods/1`: the integrators on one case, error against step.
//!
//! Times are not in it: they differ from run to run.

use super::{Finite, Input, Origin, Program, unit_of};
use pulsewright_study::outcome::Found;
use pulsewright_study::{Compared, MethodErrors, MethodWork, Methods};
use serde::{Deserialize, Serialize};

/// The record of the integrators on one case.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct MethodsRecord {
    /// `pulsewright.methods/1`.
    pub record: String,
    /// The program that wrote it.
    pub program: Program,
    /// What was fired.
    pub input: Input,
    /// How long the shot was followed, s.
    pub span: Option<Finite>,
    /// Defaults that were taken, in words.
    pub defaults: Vec<String>,
    /// The named readings, then those of the claims.
    pub readings: Vec<ComparedRecord>,
}

/// A reading by every method.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct ComparedRecord {
    /// Its name, or that of the claim on it.
    pub name: String,
    /// The reading as the language writes it.
    pub reading: String,
    /// The unit; empty for a plain number.
    pub unit: String,
    /// The value that the others are compared with; `null` where there is none.
    pub reference: Option<Finite>,
    /// The bound on its numerical error, rounded up to two digits.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub reference_bound: Option<Finite>,
    /// What it comes from.
    pub reference_by: String,
    /// Why there is no reference.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub absent: Option<String>,
    /// What errors are relative to in the plot, in the reading's unit.
    pub scale: Option<Finite>,
    /// Its values by each method.
    pub methods: Vec<MethodRecord>,
}

/// A reading by one method.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct MethodRecord {
    /// The method.
    pub method: String,
    /// The order that is observed; `null` where too few errors stand out of the reference's bound.
    pub order: Option<Finite>,
    /// Its runs, largest step first.
    pub runs: Vec<RunRecord>,
}

/// A reading in one run.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct RunRecord {
    /// The step, s.
    pub step: Option<Finite>,
    /// How many steps the run took.
    pub steps: u64,
    /// Factorisations of the equations in the run.
    pub factorisations: u64,
    /// The value; `null` where the reading does not exist in this run.
    pub value: Option<Finite>,
    /// The value less the reference.
    pub error: Option<Finite>,
    /// Whether the error stands out of the reference's bound and of rounding.
    pub resolved: bool,
}

/// The record of the integrators on one case.
#[must_use]
pub fn methods(methods: &Methods, origin: &Origin<'_>) -> MethodsRecord {
    MethodsRecord {
        record: "pulsewright.methods/1".to_owned(),
        program: Program::this(),
        input: Input::new(origin, &methods.set),
        span: Finite::new(methods.span),
        defaults: methods.defaults.clone(),
        readings: methods
            .readings
            .iter()
            .map(|r| compared(r, &methods.work))
            .collect(),
    }
}

fn compared(reading: &Compared, work: &[MethodWork]) -> ComparedRecord {
    let (reference, reference_bound, absent) = match &reading.reference.found {
        Found::Value { value, bound } => (Finite::new(*value), Finite::bound(*bound), None),
        Found::Absent(why) | Found::Unbounded(why) | Found::Floating(why) => {
            (None, None, Some(why.clone()))
        }
    };
    ComparedRecord {
        name: reading.name.clone(),
        reading: reading.text.clone(),
        unit: unit_of(&reading.reference, &reading.text),
        reference,
        reference_bound,
        reference_by: reading.reference_by.clone(),
        absent,
        scale: Finite::new(reading.scale),
        methods: reading
            .methods
            .iter()
            .zip(work)
            .map(|(m, w)| method(m, w))
            .collect(),
    }
}

fn method(errors: &MethodErrors, work: &MethodWork) -> MethodRecord {
    let runs = errors.runs.iter().zip(&work.runs);
    MethodRecord {
        method: errors.method.clone(),
        order: errors.order.and_then(Finite::new),
        runs: runs
            .map(|(run, work)| RunRecord {
                step: Finite::new(work.step),
                steps: work.steps,
                factorisations: work.factorisations,
                value: run.value.and_then(Finite::new),
                error: run.error.and_then(Finite::new),
                resolved: run.resolved,
            })
            .collect(),
    }
}

//! The integrators on one case: the error of every reading against the size of the step.
//!
//! ```text
//!   reference                          e = value - reference
//!   method × step h, h/2, h/4, …  ->   order = log₂ (e(h) / e(h/2))
//! ```
//!
//! Steps are of one size and cut short only at jumps, and nothing is extrapolated: what is seen is
//! the method itself. An error that does not stand out of the reference's own bound and of
//! rounding is told, but no order is taken from it.

use pulsewright_circuit::draft::Method;
use pulsewright_circuit::expr::ExprKind;
use pulsewright_circuit::{Circuit, Expr, Setup};
use pulsewright_engine::{Failure, Mesh, Request, Shot};

use crate::adjust::settle;
use crate::bounds::Precision;
use crate::cases::case_set;
use crate::error::StudyError;
use crate::fire::settings;
use crate::ladder::{Ladder, Turn};
use crate::options::{Options, Progress};
use crate::outcome::{Answer, Found, Set};
use crate::plan::Plan;
use crate::readings::{Case, Reader, Sample};

/// The methods that are compared.
const METHODS: [Method; 2] = [Method::BackwardEuler, Method::Trapezoidal];
/// The error asked of the reference, relative to each reading's scale.
const REFERENCE: f64 = 1e-10;
/// The largest step is about this share of the span, and as many times the netlist's own step
/// where it states one.
const SHARE: f64 = 1e-2;
const OF_STATED: f64 = 8.0;
/// How often steps are halved where nothing else is asked for, and at most.
const HALVINGS: u32 = 6;
const MOST_HALVINGS: u32 = 20;
/// By how much an error has to stand out of what the reference is uncertain by.
const RESOLVED: f64 = 4.0;

/// The ladder of steps, and what times the runs.
#[derive(Clone, Copy, Default)]
pub struct Rungs<'a> {
    /// The largest step, s; chosen by the span where none is given.
    pub largest: Option<f64>,
    /// How often it is halved, 20 at most; 6 times where nothing is given.
    pub halvings: Option<u32>,
    /// A clock in seconds from any origin; without one no times are taken.
    pub clock: Option<&'a (dyn Fn() -> f64 + Sync)>,
}

/// The integrators compared on one case.
#[derive(Clone, Debug)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Methods {
    /// The let-values that were set or varied.
    pub set: Set,
    /// How long the shot was followed, s.
    pub span: f64,
    /// Defaults that were taken, in words.
    pub defaults: Vec<String>,
    /// The named readings, then those of the claims.
    pub readings: Vec<Compared>,
    /// What each method took, in the order of [`Compared::methods`].
    pub work: Vec<MethodWork>,
}

/// A reading by every method.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Compared {
    /// Its name, or that of the claim on it.
    pub name: String,
    /// The reading as the language writes it.
    pub text: String,
    /// The reference.
    pub reference: Answer,
    /// What the reference comes from, in words.
    pub reference_by: String,
    /// What its error is relative to, in its unit; 0 where it has no value.
    pub scale: f64,
    /// Its values by each method.
    pub methods: Vec<MethodErrors>,
}

/// A reading by one method.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct MethodErrors {
    /// The method in words.
    pub method: String,
    /// The order that is observed on the finest steps; none where too few errors stand out.
    pub order: Option<f64>,
    /// Its value at each step, largest step first, as in [`MethodWork::runs`].
    pub runs: Vec<RunError>,
}

/// A reading in one run.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct RunError {
    /// Its value; none where it does not exist in this run.
    pub value: Option<f64>,
    /// The value less the reference.
    pub error: Option<f64>,
    /// Whether the error stands out of what the reference and rounding are uncertain by.
    pub resolved: bool,
}

/// What one method took.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct MethodWork {
    /// The method in words.
    pub method: String,
    /// Its runs, largest step first.
    pub runs: Vec<Work>,
    /// Why there are no runs with smaller steps, where they were asked for.
    pub ended: Option<String>,
}

/// What one run took.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize))]
pub struct Work {
    /// Its step, s.
    pub step: f64,
    /// How many steps there were.
    pub steps: u64,
    /// Factorisations of the equations.
    pub factorisations: u64,
    /// How long it took, s, without reading it; none without a clock.
    pub seconds: Option<f64>,
}

/// Compares the integrators on one case: that of the nominal let-values, or `options.case`.
///
/// # Errors
///
/// [`StudyError`] where the circuit has no answer, a let-value does not fit, no run succeeds, or
/// the hook stops it.
pub fn methods(
    circuit: &Circuit,
    options: &Options<'_>,
    rungs: &Rungs<'_>,
) -> Result<Methods, StudyError> {
    let set = case_set(circuit, options)?;
    let set = settle(circuit, &set, options, Turn::ONLY)?.set;
    let lets = circuit.lets(&set)?;
    let setup = circuit.setup(&lets)?;
    let case = Case {
        circuit,
        setup: &setup,
        lets: &lets,
    };
    let options = Options {
        stress: false,
        channels: Some(Vec::new()),
        ..options.clone()
    };
    let asked = asked(circuit);
    let reference = Reference::new(case, &options, &asked)?;
    let mut readings: Vec<Compared> = asked
        .iter()
        .zip(&reference.found)
        .map(|(one, found)| one.compared(circuit, found.clone(), &reference.by))
        .collect();
    let mut work = Vec::new();
    for method in METHODS {
        let setup = Setup {
            method,
            ..setup.clone()
        };
        let plan = Plan::new(
            Case {
                setup: &setup,
                ..case
            },
            &options,
        );
        let climb = Rung {
            plan: &plan,
            options: &options,
            clock: rungs.clock,
        };
        let (done, samples) = climb.all(rungs, &asked)?;
        for (k, reading) in readings.iter_mut().enumerate() {
            let own = samples.iter().filter_map(|run| run.get(k));
            reading.take(method, own.zip(&done.runs));
        }
        work.push(done);
    }
    Ok(Methods {
        set: settings(&set),
        span: setup.span,
        defaults: circuit.defaults(),
        readings,
        work,
    })
}

/// A reading that is asked for.
struct Asked<'c> {
    name: &'c str,
    expr: &'c Expr,
}

/// The named readings, and those of the claims that are not one of these by its name.
fn asked(circuit: &Circuit) -> Vec<Asked<'_>> {
    let draft = circuit.draft();
    let named = draft.readings.iter().map(|r| Asked {
        name: &r.name.text,
        expr: &r.value,
    });
    let is_named =
        |e: &Expr| matches!(&e.kind, ExprKind::Name(n) if circuit.find_reading(n).is_some());
    let claims = draft.claims.iter().filter(|c| !is_named(&c.reading));
    named
        .chain(claims.map(|c| Asked {
            name: &c.name.text,
            expr: &c.reading,
        }))
        .collect()
}

impl Asked<'_> {
    fn compared(&self, circuit: &Circuit, found: Found, by: &str) -> Compared {
        let dimension = circuit.dimension(self.expr);
        Compared {
            name: self.name.to_owned(),
            text: self.expr.to_string(),
            reference: Answer {
                found,
                dimension,
                unit: dimension.unit(),
            },
            reference_by: by.to_owned(),
            scale: 0.0,
            methods: Vec::new(),
        }
    }
}

/// What the methods are compared with.
struct Reference {
    found: Vec<Found>,
    by: String,
}

impl Reference {
    /// Exact propagation; where that does not apply, the trapezoidal rule on ever finer meshes of
    /// chosen steps, extrapolated.
    fn new(case: Case<'_>, options: &Options<'_>, asked: &[Asked<'_>]) -> Result<Self, StudyError> {
        match Reference::by(Method::Exact, case, options, asked) {
            Err(StudyError::Engine(_)) => Reference::by(Method::Trapezoidal, case, options, asked),
            other => other,
        }
    }

    fn by(
        method: Method,
        case: Case<'_>,
        options: &Options<'_>,
        asked: &[Asked<'_>],
    ) -> Result<Self, StudyError> {
        let setup = Setup {
            method,
            step: None,
            error: REFERENCE,
            ..case.setup.clone()
        };
        let case = Case {
            setup: &setup,
            ..case
        };
        let plan = Plan::new(case, options);
        let ladder = Ladder::climb(&plan, options, Turn::ONLY, &|_, _| true)?;
        let found = |one: &Asked<'_>| {
            let series = plan.place(one.expr).and_then(|k| ladder.readings.get(k));
            series.map_or_else(
                || Found::Absent(format!("{} was not measured", one.expr)),
                |s| s.found(ladder.rules),
            )
        };
        Ok(Reference {
            found: asked.iter().map(found).collect(),
            by: match method {
                Method::Exact => method.words().to_owned(),
                _ => format!("{}, finest meshes extrapolated", method.words()),
            },
        })
    }
}

impl Compared {
    fn take<'s>(&mut self, method: Method, runs: impl Iterator<Item = (&'s Sample, &'s Work)>) {
        let reference = match self.reference.found {
            Found::Value { value, bound } => Some((value, bound)),
            _ => None,
        };
        let mut all = Vec::new();
        for (sample, work) in runs {
            let Ok(number) = sample else {
                all.push((work.step, RunError::default()));
                continue;
            };
            self.scale = self.scale.max(number.scale);
            let precision = Precision {
                steps: work.steps,
                noise: 0.0,
            };
            let rounding = precision.rounding(number.value, number.size);
            let error = reference.map(|(value, _)| number.value - value);
            let unsure = reference.map_or(0.0, |(_, bound)| bound) + rounding;
            let run = RunError {
                value: Some(number.value),
                error,
                resolved: error.is_some_and(|e| e.abs() > RESOLVED * unsure),
            };
            all.push((work.step, run));
        }
        self.methods.push(MethodErrors {
            method: method.words().to_owned(),
            order: order(&all),
            runs: all.into_iter().map(|(_, run)| run).collect(),
        });
    }
}

/// The order seen on the finest steps: the median of the last three that errors which stand out
/// give; none where of many runs only two do, since a start that is damped on coarse steps alone
/// may be all they show. `runs` are steps with what came of them.
fn order(runs: &[(f64, RunError)]) -> Option<f64> {
    let told = |(step, run): &(f64, RunError)| Some((*step, run.error.filter(|_| run.resolved)?));
    let of = |pair: &[(f64, RunError)]| {
        let (first, second) = (told(pair.first()?)?, told(pair.last()?)?);
        Some((first.1 / second.1).abs().ln() / (first.0 / second.0).ln())
    };
    let mut last: Vec<f64> = runs.windows(2).rev().filter_map(of).take(3).collect();
    if last.len() < 2 && runs.len() > 2 {
        return None;
    }
    last.sort_by(f64::total_cmp);
    last.get(last.len() / 2).copied()
}

/// Fires a case by one method at one step after another.
struct Rung<'p, 'a> {
    plan: &'p Plan<'a>,
    options: &'p Options<'p>,
    clock: Option<&'p (dyn Fn() -> f64 + Sync)>,
}

impl Rung<'_, '_> {
    /// All runs, each with its readings; those that do not fit a limit or have no answer are left
    /// out, unless none is left.
    fn all(
        &self,
        rungs: &Rungs<'_>,
        asked: &[Asked<'_>],
    ) -> Result<(MethodWork, Vec<Vec<Sample>>), StudyError> {
        let setup = self.plan.case.setup;
        let mut work = MethodWork {
            method: setup.method.words().to_owned(),
            runs: Vec::new(),
            ended: None,
        };
        let mut samples = Vec::new();
        let mut failed = None;
        let halvings = rungs.halvings.unwrap_or(HALVINGS).min(MOST_HALVINGS);
        let mut step = rungs.largest.unwrap_or_else(|| largest(setup));
        for k in 0..=halvings {
            match self.shoot(step, k) {
                Ok((shot, seconds)) => {
                    let reader = Reader::new(self.plan.case, &shot);
                    samples.push(asked.iter().map(|a| reader.value(a.expr)).collect());
                    work.runs.push(Work {
                        step,
                        steps: shot.steps,
                        factorisations: shot.factorisations,
                        seconds,
                    });
                }
                Err(Failure::Cancelled { time }) => return Err(StudyError::Cancelled { time }),
                Err(failure @ Failure::Limit { .. }) => {
                    work.ended = Some(failure.to_string());
                    failed = Some(failure);
                    break;
                }
                // Steps too large for the circuit may end in a state that has no answer.
                Err(failure) => failed = Some(failure),
            }
            step *= 0.5;
        }
        match failed {
            Some(failure) if work.runs.is_empty() => Err(failure.into()),
            _ => Ok((work, samples)),
        }
    }

    /// One shot with steps of one size, and how long it took.
    fn shoot(&self, step: f64, halvings: u32) -> Result<(Shot, Option<f64>), Failure> {
        let span = self.plan.case.setup.span;
        let told = |time: f64| {
            self.options.hook.is_none_or(|hook| {
                hook(Progress {
                    case: 1,
                    of: 1,
                    halvings,
                    time,
                    span,
                })
            })
        };
        let mut request = Request::new(self.plan.probes.clone(), Mesh::Fixed(step));
        request.landings = self.plan.landings.clone();
        request.hook = Some(&told);
        let start = self.clock.map(|clock| clock());
        let shot = pulsewright_engine::fire(self.plan.case.setup, &request)?;
        let seconds = start.and_then(|t| Some(self.clock?() - t));
        Ok((shot, seconds))
    }
}

/// The largest step where none is asked for: a round one, of 1, 2 or 5.
fn largest(setup: &Setup) -> f64 {
    if let Some(step) = setup.step {
        return OF_STATED * step;
    }
    let about = SHARE * setup.span;
    let decade = about.log10().floor();
    let digit = about / 10_f64.powf(decade);
    let digit = [5, 2]
        .into_iter()
        .find(|d| f64::from(*d) <= digit * (1.0 + 1e-9));
    // Out of its digits, so that it is the number that a reader would write.
    format!("{}e{decade:.0}", digit.unwrap_or(1))
        .parse()
        .unwrap_or(about)
}

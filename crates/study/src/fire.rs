//! Fires a circuit: one case, read on a ladder of meshes, judged.
//!
//! ```text
//! let-values -> setup -> plan -> ladder of shots -> readings with bounds -> claims -> Fired
//! ```

use pulsewright_circuit::draft::{Claim, Method};
use pulsewright_circuit::setup::Element;
use pulsewright_circuit::{Circuit, Dimension, Expr, LetValue, Lets, Positions, Setup};
use pulsewright_engine::Event;

use crate::adjust::{Settled, settle};
use crate::cases::case_set;
use crate::channels::channels;
use crate::claims::{Bounded, Judgement, Limits, expressions, judge, limits};
use crate::error::StudyError;
use crate::hazards::hazards;
use crate::ladder::{Ladder, Turn};
use crate::marks::{mark, windows};
use crate::opinion::second_opinion;
use crate::options::Options;
use crate::outcome::{
    Answer, ClaimResult, Fired, Found, ReadingResult, SecondOpinion, Set, SetValue, Verdict,
};
use crate::plan::Plan;
use crate::readings::{Case, Reader};
use crate::remarks::remarks;
use crate::series::{Rules, Series};
use crate::waveform::Record;

/// How much smaller the first mesh's error is made where two methods disagree.
const FINER: f64 = 16.0;

/// Fires one shot at the nominal let-values, or at those of `options.case`, and judges it.
///
/// # Errors
///
/// [`StudyError`] where the circuit has no answer, a let-value does not fit, a claim is on a
/// floating reading, the joules do not add up, or the hook stops the run.
pub fn fire(circuit: &Circuit, options: &Options<'_>) -> Result<Fired, StudyError> {
    let set = case_set(circuit, options)?;
    let turn = Turn::ONLY;
    run(
        circuit,
        &settle(circuit, &set, options, turn)?,
        options,
        turn,
    )
}

/// What one shot of a study brings: readings and claims, and none of the rest.
pub(crate) struct Measured {
    pub readings: Vec<ReadingResult>,
    pub claims: Vec<ClaimResult>,
    pub steps: u64,
    pub smallest_step: f64,
    pub largest_step: f64,
}

impl Measured {
    /// The answers in the order of [`listed`].
    pub fn answers(&self) -> impl Iterator<Item = &Answer> {
        listed(&self.readings, &self.claims).map(|(.., answer)| answer)
    }
}

/// Named readings, then those of claims under the claim's name: name, text, answer. A claim that
/// shares its name with the reading it is on (`claim dose: dose is …`) is not listed again.
pub(crate) fn listed<'a>(
    readings: &'a [ReadingResult],
    claims: &'a [ClaimResult],
) -> impl Iterator<Item = (&'a str, &'a str, &'a Answer)> {
    let named = readings
        .iter()
        .map(|r| (r.name.as_str(), r.text.as_str(), &r.answer));
    let others = claims.iter().filter(|c| c.text != c.name);
    named.chain(others.map(|c| (c.name.as_str(), c.text.as_str(), &c.answer)))
}

/// The error allowed in a reading of a draw, relative to its scale: what it is drawn from is
/// known far less well, and verdicts are refined all the same.
const ERROR: f64 = 1e-4;

/// Draws of circuits with so many storing parts at most are propagated exactly.
const EXACT_STORES: usize = 24;

/// With what care a shot of a study is fired.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Care {
    /// As one of many draws.
    Drawn,
    /// As a shot that is reported by itself.
    Whole,
}

/// Fires one shot with values at positions within their spreads, for its readings and claims.
pub(crate) fn measure(
    circuit: &Circuit,
    set: &[(String, LetValue)],
    at: &Positions,
    options: &Options<'_>,
    turn: Turn,
    care: Care,
) -> Result<Measured, StudyError> {
    let lets = circuit.lets_at(set, at)?;
    let mut setup = circuit.setup_at(&lets, at)?;
    if care == Care::Drawn {
        setup.error = setup.error.max(ERROR);
    }
    let stores = setup.parts.iter().filter(|p| p.element.stores()).count();
    let stepped = setup.method == Method::Trapezoidal && setup.step.is_none();
    if care == Care::Drawn && stepped && stores <= EXACT_STORES {
        // In closed form a draw takes fewer points; where that does not apply it is stepped.
        let exact = Setup {
            method: Method::Exact,
            ..setup.clone()
        };
        match measured(circuit, &exact, &lets, options, turn, care) {
            Err(StudyError::Engine(_)) => {}
            other => return other,
        }
    }
    measured(circuit, &setup, &lets, options, turn, care)
}

fn measured(
    circuit: &Circuit,
    setup: &Setup,
    lets: &Lets,
    options: &Options<'_>,
    turn: Turn,
    care: Care,
) -> Result<Measured, StudyError> {
    let case = Case {
        circuit,
        setup,
        lets,
    };
    let plan = Plan::of_readings(case, care == Care::Drawn);
    let judge = Judge {
        plan: &plan,
        applies: applying(&plan)?,
    };
    let ladder = match care {
        Care::Drawn => climb(&judge, &plan, options, turn)?,
        Care::Whole => by_both(&judge, options, turn)?.0,
    };
    ladder.ledger.result(setup, ladder.rules)?;
    Ok(Measured {
        readings: named(&plan, &ladder),
        claims: judge.claims(&ladder.readings, ladder.rules)?,
        steps: ladder.shot.steps,
        smallest_step: ladder.shot.smallest_step,
        largest_step: ladder.shot.largest_step,
    })
}

/// One reading at nominal values, by one method alone.
pub(crate) fn aim(
    circuit: &Circuit,
    set: &[(String, LetValue)],
    options: &Options<'_>,
    turn: Turn,
    reading: &Expr,
) -> Result<Found, StudyError> {
    let lets = circuit.lets(set)?;
    let setup = circuit.setup(&lets)?;
    let case = Case {
        circuit,
        setup: &setup,
        lets: &lets,
    };
    let plan = Plan::of_one(case, reading);
    let ladder = Ladder::climb(&plan, options, turn, &|_, _| true)?;
    ladder.ledger.result(&setup, ladder.rules)?;
    let series = ladder.readings.first();
    Ok(series.map_or_else(
        || Found::Absent("it was not measured".to_owned()),
        |s| s.found(ladder.rules),
    ))
}

/// Fires one case.
pub(crate) fn run(
    circuit: &Circuit,
    settled: &Settled,
    options: &Options<'_>,
    turn: Turn,
) -> Result<Fired, StudyError> {
    let lets = circuit.lets_at(&settled.set, &options.at)?;
    let setup = circuit.setup_at(&lets, &options.at)?;
    let case = Case {
        circuit,
        setup: &setup,
        lets: &lets,
    };
    let plan = Plan::new(case, options);
    let applies = applying(&plan)?;
    let judge = Judge {
        plan: &plan,
        applies,
    };
    let (ladder, second_opinion) = by_both(&judge, options, turn)?;
    let claims = judge.claims(&ladder.readings, ladder.rules)?;
    let balance = ladder.ledger.result(&setup, ladder.rules)?;
    let reader = Reader::new(case, &ladder.shot);
    let mut channels = channels(&plan, &reader);
    mark(&plan, &reader, &claims, &mut channels);
    Ok(Fired {
        set: settings(&settled.stated),
        adjusted: settled.adjusted.clone(),
        stands: if options.at == Positions::nominal() {
            Vec::new()
        } else {
            circuit.stands(&lets, &options.at)
        },
        readings: named(&plan, &ladder),
        claims,
        events: ladder
            .log
            .result(&ladder.shot.events, setup.span, ladder.rules),
        balance,
        stress: if plan.stress {
            ladder.loads.result(&setup, ladder.rules)
        } else {
            Vec::new()
        },
        second_opinion,
        hazards: hazards(
            &plan,
            &Record::new(ladder.stores.as_ref().unwrap_or(&ladder.shot)),
        ),
        remarks: [
            remarks(circuit, &setup, &ladder.shot),
            settled.remarks.clone(),
        ]
        .concat(),
        defaults: circuit.defaults(),
        method: setup.method.words().to_owned(),
        span: setup.span,
        channels,
        windows: windows(&plan, &reader),
        parts: setup.parts.iter().map(|p| p.name.clone()).collect(),
        changes: ladder
            .shot
            .events
            .iter()
            .map(|e| change(&setup, e))
            .collect(),
        shot: ladder.shot,
    })
}

/// A ladder on which every claim is decided, or cannot be.
fn climb(
    judge: &Judge<'_, '_>,
    plan: &Plan<'_>,
    options: &Options<'_>,
    turn: Turn,
) -> Result<Ladder, StudyError> {
    Ladder::climb(plan, options, turn, &|series, rules| {
        judge.is_decided(series, rules)
    })
}

/// The ladder, and what the other method says of it.
fn by_both(
    judge: &Judge<'_, '_>,
    options: &Options<'_>,
    turn: Turn,
) -> Result<(Ladder, Option<SecondOpinion>), StudyError> {
    let plan = judge.plan;
    let ladder = climb(judge, plan, options, turn)?;
    match opine(plan, &ladder, options, turn) {
        Err(StudyError::Disagreement { .. }) => {
            // Once in some thousand readings a bound is too narrow: a finer ladder settles it.
            let finer = Plan {
                tolerance: plan.tolerance / FINER,
                ..plan.clone()
            };
            let ladder = climb(judge, &finer, options, turn)?;
            let opinion = opine(&finer, &ladder, options, turn)?;
            Ok((ladder, opinion))
        }
        opinion => Ok((ladder, opinion?)),
    }
}

/// The second opinion, where it is asked for.
fn opine(
    plan: &Plan<'_>,
    ladder: &Ladder,
    options: &Options<'_>,
    turn: Turn,
) -> Result<Option<SecondOpinion>, StudyError> {
    if options.alone {
        return Ok(None);
    }
    second_opinion(plan, ladder, options, turn).map(Some)
}

/// Which claims apply in a case.
fn applying(plan: &Plan<'_>) -> Result<Vec<bool>, StudyError> {
    let Case { circuit, lets, .. } = plan.case;
    let mut all = Vec::new();
    for claim in plan.claims() {
        let mut applies = true;
        for condition in &claim.when {
            applies &= circuit.applies(lets, condition)?;
        }
        all.push(applies);
    }
    Ok(all)
}

struct Judge<'p, 'a> {
    plan: &'p Plan<'a>,
    applies: Vec<bool>,
}

impl Judge<'_, '_> {
    /// Whether every claim that applies is decided, or no further mesh would decide it.
    fn is_decided(&self, series: &[Series], rules: Rules) -> bool {
        let claims = self.plan.claims().iter().zip(&self.applies);
        claims.filter(|(_, applies)| **applies).all(|(claim, _)| {
            self.judgement(claim, series, rules).1.verdict != Verdict::Undecided
                || self.is_final(claim, series, rules)
        })
    }

    /// Whether no further mesh would narrow what a claim compares.
    fn is_final(&self, claim: &Claim, series: &[Series], rules: Rules) -> bool {
        let mut all = expressions(&claim.relation, claim.allowing.as_ref());
        all.push(&claim.reading);
        let read = all.into_iter().filter_map(|e| self.read(e, series));
        read.into_iter().all(|s| s.is_final(rules))
    }

    fn read<'s>(&self, expr: &Expr, series: &'s [Series]) -> Option<&'s Series> {
        series.get(self.plan.place(expr)?)
    }

    fn found(&self, expr: &Expr, series: &[Series], rules: Rules) -> Found {
        match self.read(expr, series) {
            Some(series) => series.found(rules),
            None => Found::Absent(format!("{expr} was not measured")),
        }
    }

    /// A limit's expression: a number as written, or a reading with its bound.
    fn limit(&self, expr: &Expr, series: &[Series], rules: Rules) -> Result<Bounded, String> {
        let case = self.plan.case;
        if let Ok(value) = case.circuit.value(case.lets, expr) {
            return Ok(Bounded { value, bound: 0.0 });
        }
        match self.found(expr, series, rules) {
            Found::Value { value, bound } => Ok(Bounded { value, bound }),
            Found::Absent(why) | Found::Unbounded(why) | Found::Floating(why) => {
                Err(format!("its limit has no number: {why}"))
            }
        }
    }

    fn judgement(&self, claim: &Claim, series: &[Series], rules: Rules) -> (Limits, Judgement) {
        let number = |e: &Expr| self.limit(e, series, rules);
        let found = self.found(&claim.reading, series, rules);
        let dimension = self.plan.case.circuit.dimension(&claim.reading);
        match limits(&claim.relation, claim.allowing.as_ref(), &number) {
            Ok(limits) => (limits, judge(&found, &limits, dimension)),
            Err(why) => {
                let failed = Judgement {
                    margin: None,
                    verdict: Verdict::Fails,
                    reason: Some(why),
                };
                (Limits::default(), failed)
            }
        }
    }

    fn claims(&self, series: &[Series], rules: Rules) -> Result<Vec<ClaimResult>, StudyError> {
        let claims = self.plan.claims().iter().zip(&self.applies);
        claims
            .map(|(claim, applies)| self.claim(claim, *applies, series, rules))
            .collect()
    }

    fn claim(
        &self,
        claim: &Claim,
        applies: bool,
        series: &[Series],
        rules: Rules,
    ) -> Result<ClaimResult, StudyError> {
        let found = self.found(&claim.reading, series, rules);
        if let (Found::Floating(why), true) = (&found, applies) {
            return Err(StudyError::Floating {
                claim: claim.name.text.clone(),
                why: why.clone(),
            });
        }
        let (limits, judged) = self.judgement(claim, series, rules);
        let (verdict, reason) = if applies {
            (judged.verdict, judged.reason)
        } else {
            (
                Verdict::DoesNotApply,
                Some(format!("it applies only when {}", conditions(claim))),
            )
        };
        Ok(ClaimResult {
            name: claim.name.text.clone(),
            text: claim.reading.to_string(),
            answer: answer(found, self.plan.case.circuit.dimension(&claim.reading)),
            relation: claim.relation.to_string(),
            least: limits.least.map(|l| l.value),
            most: limits.most.map(|l| l.value),
            margin: judged.margin,
            verdict,
            reason,
            answers: claim.answers.clone(),
        })
    }
}

fn conditions(claim: &Claim) -> String {
    claim
        .when
        .iter()
        .map(ToString::to_string)
        .collect::<Vec<_>>()
        .join(" and ")
}

fn answer(found: Found, dimension: Dimension) -> Answer {
    Answer {
        found,
        dimension,
        unit: dimension.unit(),
    }
}

fn named(plan: &Plan<'_>, ladder: &Ladder) -> Vec<ReadingResult> {
    let circuit = plan.case.circuit;
    let result = |named: &pulsewright_circuit::draft::Named| {
        let series = ladder.readings.get(plan.place(&named.value)?)?;
        Some(ReadingResult {
            name: named.name.text.clone(),
            text: named.value.to_string(),
            answer: answer(series.found(ladder.rules), circuit.dimension(&named.value)),
        })
    };
    circuit.draft().readings.iter().filter_map(result).collect()
}

/// Let-values as results show them.
pub(crate) fn settings(set: &[(String, LetValue)]) -> Set {
    let value = |v: &LetValue| match v {
        LetValue::Number { value, dimension } => SetValue::Number {
            value: *value,
            unit: dimension.unit(),
        },
        LetValue::Open => SetValue::Circuit("open circuit".to_owned()),
        LetValue::Short => SetValue::Circuit("short circuit".to_owned()),
    };
    set.iter()
        .map(|(name, v)| (name.clone(), value(v)))
        .collect()
}

/// What an event changed, in words.
fn change(setup: &Setup, event: &Event) -> String {
    match setup.parts.get(event.part).map(|p| &p.element) {
        Some(Element::Changeover { contacts, .. }) => {
            let node = contacts
                .get(usize::from(event.state))
                .and_then(|n| setup.nodes.get(*n));
            format!("moves to {}", node.map_or("?", String::as_str))
        }
        Some(Element::Diode { .. }) => if event.state == 1 {
            "conducts"
        } else {
            "blocks"
        }
        .to_owned(),
        _ => if event.state == 1 { "closes" } else { "opens" }.to_owned(),
    }
}

//! The second opinion: the same readings by another method, compared within their bounds.
//!
//! A stepped run is checked by exact propagation, an exact one by the trapezoidal rule. They share
//! the equations at an instant, the restarts and the reading of waveforms, and nothing of how a
//! circuit gets from one instant to the next. Where exact propagation does not apply, that is said.

use pulsewright_circuit::Expr;
use pulsewright_circuit::dimension::ONE;
use pulsewright_circuit::draft::Method;
use pulsewright_circuit::setup::Setup;
use pulsewright_engine::Failure;

use crate::error::StudyError;
use crate::ladder::{Ladder, Turn};
use crate::options::Options;
use crate::outcome::{Difference, Found, SecondOpinion};
use crate::plan::Plan;
use crate::readings::Case;

/// So many storing parts at most get a second opinion: its matrices are full.
const STORES: usize = 60;
/// Steps that it may take, over those of the run, and at least.
const STEPS: (u64, u64) = (20, 200_000);
/// What the error of its first mesh is of the error that the run is allowed.
const FINER: f64 = 1e-3;
/// Differences of this share of a value are rounding, whatever the bounds.
const ROUNDING: f64 = 1e-14;

/// A second opinion on a ladder, by the other method.
///
/// # Errors
///
/// [`StudyError::Disagreement`] where a reading differs by more than both bounds;
/// [`StudyError::Cancelled`].
pub(crate) fn second_opinion(
    plan: &Plan<'_>,
    ladder: &Ladder,
    options: &Options<'_>,
    turn: Turn,
) -> Result<SecondOpinion, StudyError> {
    let setup = other(plan.case.setup, ladder.shot.steps);
    let stores = plan.case.setup.parts.iter().filter(|p| p.element.stores());
    if setup.method == Method::Exact && stores.count() > STORES {
        return Ok(none(
            &setup,
            format!("more than {STORES} parts store energy"),
        ));
    }
    fired_by(&setup, plan, ladder, options, turn)
}

/// The setup with the other method in force.
fn other(setup: &Setup, steps: u64) -> Setup {
    let mut other = setup.clone();
    other.method = if setup.method == Method::Exact {
        Method::Trapezoidal
    } else {
        Method::Exact
    };
    other.step = None;
    other.limits.steps = steps
        .saturating_mul(STEPS.0)
        .max(STEPS.1)
        .min(setup.limits.steps);
    other
}

fn none(setup: &Setup, why: String) -> SecondOpinion {
    SecondOpinion {
        method: setup.method.words().to_owned(),
        missing: Some(why),
        largest: None,
    }
}

fn fired_by(
    setup: &Setup,
    plan: &Plan<'_>,
    ladder: &Ladder,
    options: &Options<'_>,
    turn: Turn,
) -> Result<SecondOpinion, StudyError> {
    let bare = Options {
        stress: false,
        ..options.clone()
    };
    let mut again = Plan::new(Case { setup, ..plan.case }, &bare);
    again.read_only();
    if setup.method == Method::Exact {
        again.tolerance = (FINER * setup.error).clamp(1e-12, 1e-8);
    }
    let second = match Ladder::climb(&again, &bare, turn, &|_, _| true) {
        Ok(second) => second,
        Err(StudyError::Engine(Failure::NotExact { why })) => return Ok(none(setup, why)),
        Err(StudyError::Engine(failure)) => return Ok(none(setup, failure.to_string())),
        Err(other) => return Err(other),
    };
    let mut largest: Option<Difference> = None;
    for (k, expr) in plan.readings.iter().enumerate() {
        let (Some(a), Some(b)) = (ladder.readings.get(k), second.readings.get(k)) else {
            continue;
        };
        let (a, b) = (a.found(ladder.rules), b.found(second.rules));
        let noise = noise(plan.case, expr, ladder);
        let Some(share) = share(&a, &b, noise) else {
            continue;
        };
        if share > 1.0 || share.is_nan() {
            return Err(StudyError::Disagreement {
                reading: plan.name(expr),
                answers: format!(
                    "{} by {}, {} by {}",
                    words(&a),
                    plan.case.setup.method.words(),
                    words(&b),
                    setup.method.words()
                ),
            });
        }
        if largest.as_ref().is_none_or(|l| share > l.share) {
            largest = Some(Difference {
                reading: plan.name(expr),
                share,
            });
        }
    }
    Ok(SecondOpinion {
        method: setup.method.words().to_owned(),
        missing: None,
        largest,
    })
}

/// What of a reading is rounding of the circuit's largest voltage and current: its size with one
/// of its factors replaced by that factor's rounding.
fn noise(case: Case<'_>, expr: &Expr, ladder: &Ladder) -> f64 {
    let d = case.circuit.dimension(expr);
    let whole = |x: i16| (x % ONE == 0 && x >= 0).then_some(i32::from(x / ONE));
    let (Some(v), Some(a), Some(s)) = (whole(d.volt), whole(d.ampere), whole(d.second)) else {
        return 0.0;
    };
    let ([volts, amperes], [dv, da]) = (ladder.shot.largest, ladder.shot.noise);
    let size = |v: i32, a: i32| volts.powi(v) * amperes.powi(a) * case.setup.span.powi(s);
    let part = |n: i32, size: f64| if n > 0 { f64::from(n) * size } else { 0.0 };
    let found = part(v, dv * size((v - 1).max(0), a)) + part(a, da * size(v, (a - 1).max(0)));
    if found.is_finite() { found } else { 0.0 }
}

/// The difference over the sum of the bounds; infinite where only one has a number; `None` where
/// there is nothing to compare.
fn share(a: &Found, b: &Found, noise: f64) -> Option<f64> {
    match (a, b) {
        (Found::Value { value: x, bound: p }, Found::Value { value: y, bound: q }) => {
            let room = p + q + noise + ROUNDING * x.abs().max(y.abs());
            let difference = (x - y).abs();
            Some(if difference == 0.0 {
                0.0
            } else {
                difference / room
            })
        }
        (Found::Value { .. }, _) | (_, Found::Value { .. }) => Some(f64::INFINITY),
        _ => None,
    }
}

fn words(found: &Found) -> String {
    match found {
        Found::Value { value, bound } => format!("{value} ± {bound:.1e}"),
        Found::Absent(why) | Found::Unbounded(why) | Found::Floating(why) => why.clone(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use pulsewright_circuit::setup::Element;

    const STAGE: &str = "capacitor bank from top to ground = 32 uF, charged to 5 kV\n\
         switch fire from top to a : open, closes at 1 us\n\
         inductor choke from a to b = 25 mH, winding 10 ohm\n\
         resistor chest from b to ground = 50 ohm\n\
         span 5 ms\n\
         reading dose = energy into chest\n\
         reading crest = largest current through chest\n";

    fn with<T>(run: impl FnOnce(&Plan<'_>, &Ladder, &Options<'_>) -> T) -> T {
        let circuit = pulsewright_netlist::read(STAGE.as_bytes(), "stage")
            .unwrap_or_else(|m| panic!("{m}"))
            .circuit;
        let lets = circuit.lets(&[]).unwrap();
        let setup = circuit.setup(&lets).unwrap();
        let case = Case {
            circuit: &circuit,
            setup: &setup,
            lets: &lets,
        };
        let options = Options::default();
        let plan = Plan::new(case, &options);
        let ladder = Ladder::climb(&plan, &options, Turn::ONLY, &|_, _| true).unwrap();
        run(&plan, &ladder, &options)
    }

    #[test]
    fn two_methods_agree_on_the_stage() {
        with(|plan, ladder, options| {
            let o = second_opinion(plan, ladder, options, Turn::ONLY).unwrap();
            assert_eq!(o.missing, None);
            assert!(o.largest.unwrap().share < 1.0);
        });
    }

    /// A method that is wrong by 2 in 100,000, as if it took the coil for a larger one.
    #[test]
    fn a_broken_method_is_found_out() {
        with(|plan, ladder, options| {
            let mut broken = other(plan.case.setup, 1000);
            for p in &mut broken.parts {
                if let Element::Inductor { henrys, .. } = &mut p.element {
                    *henrys *= 1.00002;
                }
            }
            let found = fired_by(&broken, plan, ladder, options, Turn::ONLY);
            let Err(StudyError::Disagreement { reading, .. }) = found else {
                panic!("{found:?}")
            };
            assert!(reading == "dose" || reading == "crest", "{reading}");
        });
    }
}

//! Claims: a reading's interval against its limits.
//!
//! ```text
//!      least                        most
//!        |   [value ± bound] holds   |   [ fails ]
//!        |                        [ undecided ]
//! ```
//!
//! A claim holds when the whole interval lies within the limits, fails when none of it does, and
//! is undecided between. A limit that is itself computed has a bound, which counts too. Nothing
//! is allowed silently: `allowing` is what a user writes to widen the limits.

use pulsewright_circuit::Dimension;
use pulsewright_circuit::draft::Relation;
use pulsewright_circuit::expr::Expr;

use crate::outcome::{Found, Verdict};
use crate::readings::said;

/// A number with the bound on its error, 0 for what is stated.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Bounded {
    /// The value.
    pub value: f64,
    /// The bound, 0 or more.
    pub bound: f64,
}

/// The limits of a claim; what is `None` is not limited.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Limits {
    /// The least that is allowed.
    pub least: Option<Bounded>,
    /// The most that is allowed.
    pub most: Option<Bounded>,
}

/// A judgement: how far inside the limits, the verdict, and why where a number does not say it.
#[derive(Clone, Debug, PartialEq)]
pub struct Judgement {
    /// How far the value is inside the limits; negative outside.
    pub margin: Option<f64>,
    /// The verdict.
    pub verdict: Verdict,
    /// Why.
    pub reason: Option<String>,
}

/// The expressions in a relation, and `allowing`, in a fixed order.
#[must_use]
pub fn expressions<'e>(relation: &'e Relation, allowing: Option<&'e Expr>) -> Vec<&'e Expr> {
    let mut all = match relation {
        Relation::AtMost(x) | Relation::AtLeast(x) => vec![x],
        Relation::Between(x, y) => vec![x, y],
        Relation::Within {
            share,
            amount,
            points,
            of,
        } => [share.as_ref(), amount.as_ref(), points.as_ref(), Some(of)]
            .into_iter()
            .flatten()
            .collect(),
        _ => Vec::new(),
    };
    all.extend(allowing);
    all
}

impl Bounded {
    fn shifted(self, by: Bounded, sign: f64) -> Bounded {
        let value = self.value + sign * by.value;
        Bounded {
            value,
            bound: self.bound + by.bound,
        }
    }
}

/// The limits of a relation; `number` gives each of its expressions.
///
/// # Errors
///
/// Why a limit has no number.
pub fn limits(
    relation: &Relation,
    allowing: Option<&Expr>,
    number: &dyn Fn(&Expr) -> Result<Bounded, String>,
) -> Result<Limits, String> {
    let mut found = match relation {
        Relation::AtMost(x) => Limits {
            least: None,
            most: Some(number(x)?),
        },
        Relation::AtLeast(x) => Limits {
            least: Some(number(x)?),
            most: None,
        },
        Relation::Between(x, y) => Limits {
            least: Some(number(x)?),
            most: Some(number(y)?),
        },
        Relation::Within {
            share,
            amount,
            points,
            of,
        } => within(
            share.as_ref(),
            amount.as_ref(),
            points.as_ref(),
            number(of)?,
            number,
        )?,
        _ => Limits::default(),
    };
    if let Some(allowing) = allowing {
        let by = number(allowing)?;
        found.least = found.least.map(|x| x.shifted(by, -1.0));
        found.most = found.most.map(|x| x.shifted(by, 1.0));
    }
    Ok(found)
}

fn within(
    share: Option<&Expr>,
    amount: Option<&Expr>,
    points: Option<&Expr>,
    of: Bounded,
    number: &dyn Fn(&Expr) -> Result<Bounded, String>,
) -> Result<Limits, String> {
    let mut half = Bounded::default();
    if let Some(share) = share {
        let share = number(share)?;
        let bound = share.value.abs() * of.bound + of.value.abs() * share.bound;
        half = Bounded {
            value: share.value * of.value.abs(),
            bound,
        };
    }
    if let Some(amount) = amount {
        let amount = number(amount)?;
        if amount.value > half.value {
            half = amount;
        }
    }
    if let Some(points) = points {
        let points = number(points)?;
        half = Bounded {
            value: points.value / 100.0,
            bound: points.bound / 100.0,
        };
    }
    Ok(Limits {
        least: Some(of.shifted(half, -1.0)),
        most: Some(of.shifted(half, 1.0)),
    })
}

/// Judges what was found against the limits.
#[must_use]
pub fn judge(found: &Found, limits: &Limits, dimension: Dimension) -> Judgement {
    match found {
        Found::Value { value, bound } => decide(
            Bounded {
                value: *value,
                bound: *bound,
            },
            limits,
            dimension,
        ),
        Found::Absent(why) | Found::Unbounded(why) | Found::Floating(why) => Judgement {
            margin: None,
            verdict: Verdict::Fails,
            reason: Some(why.clone()),
        },
    }
}

fn decide(x: Bounded, limits: &Limits, dimension: Dimension) -> Judgement {
    let least = limits
        .least
        .map(|l| (x.value - l.value, x.bound + l.bound, l.value));
    let most = limits
        .most
        .map(|m| (m.value - x.value, x.bound + m.bound, m.value));
    let sides: Vec<(f64, f64, f64)> = [least, most].into_iter().flatten().collect();
    let margin = sides.iter().map(|s| s.0).reduce(f64::min);
    let open = sides
        .iter()
        .find(|(inside, bound, _)| *inside >= -bound && inside < bound);
    let verdict = if sides.iter().all(|(inside, bound, _)| inside >= bound) {
        Verdict::Holds
    } else if sides.iter().any(|(inside, bound, _)| *inside < -bound) {
        Verdict::Fails
    } else {
        Verdict::Undecided
    };
    let reason = match (verdict, open) {
        (Verdict::Undecided, Some((inside, bound, limit))) => {
            Some(on_limit(*limit, *inside, *bound, dimension))
        }
        _ => None,
    };
    Judgement {
        margin,
        verdict,
        reason,
    }
}

fn on_limit(limit: f64, inside: f64, bound: f64, dimension: Dimension) -> String {
    let limit = said(limit, dimension);
    if !bound.is_finite() {
        return format!(
            "no bound on its error could be found to compare it with the limit of {limit}"
        );
    }
    let allowing = said(upwards(1.5 * (bound - inside).max(bound)), dimension);
    format!(
        "it sits on the limit of {limit}, closer than its bound of {} can be made; write `allowing {allowing}` \
         to let it",
        said(bound, dimension)
    )
}

/// The next of 1, 2, 5, 10, … times a power of ten.
fn upwards(x: f64) -> f64 {
    if !(x > 0.0 && x.is_finite()) {
        return x;
    }
    let power = 10_f64.powf(x.log10().floor());
    [1.0, 2.0, 5.0, 10.0]
        .into_iter()
        .map(|k| k * power)
        .find(|y| *y >= x)
        .unwrap_or(10.0 * power)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn stated(least: Option<f64>, most: Option<f64>) -> Limits {
        let bounded = |value| Bounded { value, bound: 0.0 };
        Limits {
            least: least.map(bounded),
            most: most.map(bounded),
        }
    }

    fn check(value: f64, bound: f64, limits: &Limits) -> Judgement {
        judge(&Found::Value { value, bound }, limits, Dimension::JOULE)
    }

    #[test]
    fn an_interval_inside_holds() {
        let j = check(311.0, 1e-3, &stated(Some(225.0), Some(375.0)));
        assert_eq!(
            (j.verdict, j.margin, j.reason),
            (Verdict::Holds, Some(64.0), None)
        );
    }

    #[test]
    fn an_interval_outside_fails_with_a_negative_margin() {
        let j = check(376.0, 1e-3, &stated(Some(225.0), Some(375.0)));
        assert_eq!((j.verdict, j.margin), (Verdict::Fails, Some(-1.0)));
    }

    #[test]
    fn an_interval_across_a_limit_is_undecided_and_offers_an_allowance() {
        let j = check(300.0, 2e-6, &stated(None, Some(300.0)));
        assert_eq!(j.verdict, Verdict::Undecided);
        assert_eq!(
            j.reason.unwrap(),
            "it sits on the limit of 300 J, closer than its bound of 2 uJ can be made; write `allowing 5 uJ` to let it"
        );
    }

    #[test]
    fn an_exact_value_on_its_limit_holds() {
        assert_eq!(
            check(7.0, 0.0, &stated(None, Some(7.0))).verdict,
            Verdict::Holds
        );
    }

    #[test]
    fn what_is_absent_fails_with_its_reason() {
        let j = judge(
            &Found::Absent("why".into()),
            &stated(None, Some(1.0)),
            Dimension::VOLT,
        );
        assert_eq!(
            (j.verdict, j.margin, j.reason.as_deref()),
            (Verdict::Fails, None, Some("why"))
        );
    }

    fn number(e: &Expr) -> Result<Bounded, String> {
        match e.kind {
            pulsewright_circuit::ExprKind::Number { value, .. } => {
                Ok(Bounded { value, bound: 0.0 })
            }
            _ => Err("no number".into()),
        }
    }

    #[test]
    fn within_takes_the_greater_of_a_share_and_an_amount() {
        let of = |x| Expr::number(x, Dimension::JOULE);
        let within = |target| Relation::Within {
            share: Some(Expr::share(0.15)),
            amount: Some(of(3.0)),
            points: None,
            of: of(target),
        };
        let large = limits(&within(300.0), None, &number).unwrap();
        assert_eq!(
            (large.least.unwrap().value, large.most.unwrap().value),
            (255.0, 345.0)
        );
        let small = limits(&within(10.0), None, &number).unwrap();
        assert_eq!(
            (small.least.unwrap().value, small.most.unwrap().value),
            (7.0, 13.0)
        );
    }

    #[test]
    fn allowing_widens_both_limits() {
        let e = |x| Expr::number(x, Dimension::VOLT);
        let l = limits(&Relation::Between(e(1.0), e(2.0)), Some(&e(0.25)), &number).unwrap();
        assert_eq!(
            (l.least.unwrap().value, l.most.unwrap().value),
            (0.75, 2.25)
        );
    }

    #[test]
    fn percentage_points_are_hundredths() {
        let n = |x| Expr::number(x, Dimension::NONE);
        let r = Relation::Within {
            share: None,
            amount: None,
            points: Some(n(2.0)),
            of: Expr::share(0.05),
        };
        let l = limits(&r, None, &number).unwrap();
        assert!((l.least.unwrap().value - 0.03).abs() < 1e-15);
    }
}

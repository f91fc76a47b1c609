//! Claims: relations, conditions, and what qualifies the claim before it.

use super::{Builder, named};
use crate::draft::{Applies, Claim, Comparison, Relation};
use crate::expr::Expr;
use crate::span::Span;

/// `is at most X`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(at_most(amps(90.0)).to_string(), "is at most 90 A");
/// ```
#[must_use]
pub fn at_most(limit: impl Into<Expr>) -> Relation {
    Relation::AtMost(limit.into())
}

/// `is at least X`
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(at_least(amps(90.0)).to_string(), "is at least 90 A");
/// ```
#[must_use]
pub fn at_least(limit: impl Into<Expr>) -> Relation {
    Relation::AtLeast(limit.into())
}

/// `is between X and Y`, ascending
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(between_limits(amps(1.0), amps(2.0)).to_string(), "is between 1 A and 2 A");
/// ```
#[must_use]
pub fn between_limits(low: impl Into<Expr>, high: impl Into<Expr>) -> Relation {
    Relation::Between(low.into(), high.into())
}

/// `is within X of TARGET`: a share of the target, or an amount in the reading's unit.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(within(percent(15.0), joules(300.0)).to_string(), "is within 15 % of 300 J");
/// ```
#[must_use]
pub fn within(allowed: impl Into<Expr>, of: impl Into<Expr>) -> Relation {
    // Which of the two it is the check finds by its type, and puts it in its place.
    Relation::Within {
        share: Some(allowed.into()),
        amount: None,
        points: None,
        of: of.into(),
    }
}

/// `is within SHARE or AMOUNT of TARGET`: the greater of the two.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// let relation = within_either(percent(15.0), joules(3.0), joules(300.0));
/// assert_eq!(relation.to_string(), "is within 15 % or 3 J of 300 J");
/// ```
#[must_use]
pub fn within_either(
    share: impl Into<Expr>,
    amount: impl Into<Expr>,
    of: impl Into<Expr>,
) -> Relation {
    Relation::Within {
        share: Some(share.into()),
        amount: Some(amount.into()),
        points: None,
        of: of.into(),
    }
}

/// `is within N percentage points of TARGET`, for a reading without a unit.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(within_points(2.0, percent(5.0)).to_string(), "is within 2 percentage points of 5 %");
/// ```
#[must_use]
pub fn within_points(points: f64, of: impl Into<Expr>) -> Relation {
    Relation::Within {
        share: None,
        amount: None,
        points: Some(points.into()),
        of: of.into(),
    }
}

/// `when LEFT >= RIGHT`: in which cases a claim applies.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// use pulsewright_circuit::draft::Comparison;
/// let heavy = compare(name("load"), Comparison::GreaterOrEqual, ohms(25.0));
/// assert_eq!(heavy.to_string(), "load >= 25 ohm");
/// ```
#[must_use]
pub fn compare(left: impl Into<Expr>, comparison: Comparison, right: impl Into<Expr>) -> Applies {
    Applies::Compare {
        left: left.into(),
        comparison,
        right: right.into(),
    }
}

/// `when LET is open circuit`, or `short circuit`.
///
/// ```
/// # use pulsewright_circuit::builder::*;
/// assert_eq!(circuit_is("load", true).to_string(), "load is open circuit");
/// ```
#[must_use]
pub fn circuit_is(name: &str, open: bool) -> Applies {
    Applies::Circuit {
        name: named(name),
        open,
    }
}

impl Builder {
    /// `claim NAME: READING is RELATION`
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("")
    ///     .claim("crest", largest(current_through("chest")), at_most(amps(90.0)))
    ///     .answers("REQ-3");
    /// # assert_eq!(built.draft().claims.len(), 1);
    /// ```
    #[must_use]
    pub fn claim(mut self, name: &str, reading: impl Into<Expr>, relation: Relation) -> Self {
        let (name, reading) = (named(name), reading.into());
        let (answers, when) = (Vec::new(), Vec::new());
        self.draft.claims.push(Claim {
            name,
            reading,
            relation,
            answers,
            when,
            allowing: None,
            in_shots: None,
            span: Span::NONE,
        });
        self
    }

    /// `answers "REQUIREMENT"`, of the claim before it; may repeat.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("").claim("dose", energy_into("r"), at_most(joules(1.0))).answers("A").answers("B");
    /// assert_eq!(built.draft().claims[0].answers, ["A", "B"]);
    /// ```
    #[must_use]
    pub fn answers(self, requirement: &str) -> Self {
        self.of_claim("answers", |claim| {
            claim.answers.push(requirement.to_owned())
        })
    }

    /// `when CONDITION`, of the claim before it; all of several must hold.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("")
    ///     .claim("dose", energy_into("r"), at_most(joules(1.0)))
    ///     .applies_when(circuit_is("load", false));
    /// assert_eq!(built.draft().claims[0].when.len(), 1);
    /// ```
    #[must_use]
    pub fn applies_when(self, condition: Applies) -> Self {
        self.of_claim("when", |claim| claim.when.push(condition))
    }

    /// `allowing AMOUNT`, of the claim before it: added to each limit.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("")
    ///     .claim("dose", energy_into("r"), at_most(joules(1.0)))
    ///     .allowing(joules(1e-6));
    /// assert!(built.draft().claims[0].allowing.is_some());
    /// ```
    #[must_use]
    pub fn allowing(self, amount: impl Into<Expr>) -> Self {
        self.of_claim("allowing", |claim| claim.allowing = Some(amount.into()))
    }

    /// `in at least SHARE of shots`, of the claim before it.
    ///
    /// ```
    /// # use pulsewright_circuit::builder::*;
    /// let built = Builder::new("")
    ///     .claim("dose", energy_into("r"), at_most(joules(1.0)))
    ///     .in_at_least(percent(99.7));
    /// assert!(built.draft().claims[0].in_shots.is_some());
    /// ```
    #[must_use]
    pub fn in_at_least(self, share: impl Into<Expr>) -> Self {
        self.of_claim("in at least … of shots", |claim| {
            claim.in_shots = Some(share.into());
        })
    }

    fn of_claim(mut self, qualifier: &'static str, change: impl FnOnce(&mut Claim)) -> Self {
        match self.draft.claims.last_mut() {
            Some(claim) => change(claim),
            None => self.misplace(qualifier, "a claim"),
        }
        self
    }
}

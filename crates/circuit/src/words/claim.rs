//! Claims' relations and conditions in words.

use std::fmt::{self, Display, Formatter};

use crate::draft::{Applies, Comparison, Relation};

impl Display for Relation {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Relation::AtMost(x) => write!(f, "is at most {x}"),
            Relation::AtLeast(x) => write!(f, "is at least {x}"),
            Relation::Between(x, y) => write!(f, "is between {x} and {y}"),
            Relation::Within {
                points: Some(n),
                of,
                ..
            } => write!(f, "is within {n} percentage points of {of}"),
            Relation::Within {
                share: Some(s),
                amount: Some(a),
                of,
                ..
            } => write!(f, "is within {s} or {a} of {of}"),
            Relation::Within {
                share: Some(x), of, ..
            }
            | Relation::Within {
                amount: Some(x),
                of,
                ..
            } => {
                write!(f, "is within {x} of {of}")
            }
            Relation::Within { of, .. } => write!(f, "is {of}"),
        }
    }
}

impl Display for Applies {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        match self {
            Applies::Compare {
                left,
                comparison,
                right,
            } => write!(f, "{left} {comparison} {right}"),
            Applies::Circuit { name, open } => write!(
                f,
                "{name} is {} circuit",
                if *open { "open" } else { "short" }
            ),
        }
    }
}

impl Display for Comparison {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Comparison::Less => "<",
            Comparison::LessOrEqual => "<=",
            Comparison::Greater => ">",
            Comparison::GreaterOrEqual => ">=",
            Comparison::Equal => "=",
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::dimension::Dimension;
    use crate::expr::Expr;

    #[test]
    fn a_limit_is_written_with_its_unit() {
        assert_eq!(
            Relation::AtMost(Expr::number(90.0, Dimension::AMPERE)).to_string(),
            "is at most 90 A"
        );
    }

    #[test]
    fn the_greater_of_a_share_and_an_amount() {
        let within = Relation::Within {
            share: Some(Expr::share(0.15)),
            amount: Some(Expr::number(3.0, Dimension::JOULE)),
            points: None,
            of: Expr::number(300.0, Dimension::JOULE),
        };
        assert_eq!(within.to_string(), "is within 15 % or 3 J of 300 J");
    }

    #[test]
    fn percentage_points_are_counted() {
        let within = Relation::Within {
            share: None,
            amount: None,
            points: Some(Expr::number(2.0, Dimension::NONE)),
            of: Expr::share(0.05),
        };
        assert_eq!(within.to_string(), "is within 2 percentage points of 5 %");
    }

    #[test]
    fn a_condition_reads_as_written() {
        let of = Applies::Compare {
            left: Expr::name("load"),
            comparison: Comparison::GreaterOrEqual,
            right: Expr::number(25.0, Dimension::OHM),
        };
        assert_eq!(of.to_string(), "load >= 25 ohm");
        assert_eq!(
            Applies::Circuit {
                name: "load".into(),
                open: true
            }
            .to_string(),
            "load is open circuit"
        );
    }
}

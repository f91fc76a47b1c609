//! Written limits of claims: ascending, and allowances of 0 or more.

use super::Setter;
use crate::dimension::Dimension;
use crate::draft::{Claim, Relation};
use crate::expr::Expr;
use crate::fault::{Bound, FaultKind};

impl Setter<'_> {
    /// Checks a claim's numbers; `dimension` is that of its reading.
    pub fn claim(&mut self, claim: &Claim, dimension: Dimension) {
        self.reading(&claim.reading);
        let name = &claim.name.text;
        if let Some(e) = &claim.allowing {
            self.number(
                e,
                &format!("what `{name}` allows"),
                dimension,
                Bound::AtLeast(0.0),
            );
        }
        if let Some(e) = &claim.in_shots {
            let what = format!("the share of shots of `{name}`");
            self.share(e, &what, Bound::From(0.0, 1.0));
        }
        match &claim.relation {
            Relation::AtMost(x) | Relation::AtLeast(x) => {
                self.limit(x, name, dimension);
            }
            Relation::Between(x, y) => self.ascending_limits(x, y, name, dimension),
            Relation::Within {
                share,
                amount,
                points,
                of,
            } => {
                let what = format!("what `{name}` is within");
                if let Some(e) = share {
                    self.share(e, &what, Bound::AtLeast(0.0));
                }
                if let Some(e) = amount {
                    self.number(e, &what, dimension, Bound::AtLeast(0.0));
                }
                if let Some(e) = points {
                    self.number(e, &what, Dimension::NONE, Bound::AtLeast(0.0));
                }
                self.limit(of, name, dimension);
            }
        }
    }

    fn limit(&mut self, e: &Expr, name: &str, dimension: Dimension) -> Option<f64> {
        self.reading(e);
        self.written_number(e, &format!("a limit of `{name}`"), dimension, Bound::Any)
    }

    fn ascending_limits(&mut self, x: &Expr, y: &Expr, name: &str, dimension: Dimension) {
        if let (Some(low), Some(high)) = (
            self.limit(x, name, dimension),
            self.limit(y, name, dimension),
        ) && low >= high
        {
            let given = self.given(false);
            self.fault(
                FaultKind::LimitOrder {
                    low,
                    high,
                    dimension,
                    given,
                }
                .at(x.span.to(y.span)),
            );
        }
    }
}

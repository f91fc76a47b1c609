//! The adjusted let-value of one case, with numbers in.

use crate::circuit::{Circuit, LetValue};
use crate::dimension::Dimension;
use crate::draft::Adjust;
use crate::fault::{Fault, FaultKind, Given};

/// What `adjust` asks for in one case.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub struct Adjusting<'a> {
    /// The statement.
    pub adjust: &'a Adjust,
    /// The dimension of the let-value.
    pub dimension: Dimension,
    /// The lower end of where it is looked for, in coherent SI units.
    pub from: f64,
    /// The upper end, in coherent SI units.
    pub to: f64,
    /// What the reading is to reach, in its coherent SI unit.
    pub value: f64,
}

impl Circuit {
    /// What `adjust` asks for in the case of a set of [`Circuit::case_sets`]; `None` where
    /// nothing is adjusted.
    ///
    /// # Errors
    ///
    /// As for [`Circuit::lets`]; a set that gives the adjusted let-value a number; ends that do
    /// not ascend in this case.
    pub fn adjusting(
        &self,
        set: &[(String, LetValue)],
    ) -> Result<Option<Adjusting<'_>>, Vec<Fault>> {
        let Some(adjust) = &self.draft().adjust else {
            return Ok(None);
        };
        let name = &adjust.name;
        if set.iter().any(|(n, _)| *n == name.text) {
            let kind = FaultKind::AdjustVaried {
                name: name.text.clone(),
                by: "`--set` or the caller",
            };
            return Err(vec![kind.at(name.span)]);
        }
        let lets = self.lets(set)?;
        let from = self.value(&lets, &adjust.from)?;
        let to = self.value(&lets, &adjust.to)?;
        let dimension = self.dimension(&adjust.from);
        if from >= to {
            let kind = FaultKind::AdjustOrder {
                low: from,
                high: to,
                dimension,
                given: Given {
                    case: set.iter().map(|(n, v)| crate::lets::words(n, v)).collect(),
                    spread: false,
                },
            };
            return Err(vec![kind.at(adjust.from.span.to(adjust.to.span))]);
        }
        Ok(Some(Adjusting {
            adjust,
            dimension,
            from,
            to,
            value: self.value(&lets, &adjust.value)?,
        }))
    }
}

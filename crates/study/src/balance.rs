//! The energy balance: where the joules of a shot went, with a bound on what does not add up.
//!
//! ```text
//! stored_start + Σ supplied = Σ dissipated + lost_at_events + stored_end + residual
//! ```
//!
//! On each mesh the joules add up to rounding. Every entry is reported as the same linear
//! combination of its values on the last meshes (Richardson's), so that what is reported adds up
//! as well; the bound of each entry is that of any reading, and the bound on the residual their
//! sum.

use pulsewright_circuit::Setup;
use pulsewright_circuit::setup::Element;
use pulsewright_engine::shot::Balance;

use crate::bounds::{Precision, estimate};
use crate::error::StudyError;
use crate::outcome::BalanceResult;
use crate::series::Rules;

/// The balance on each mesh, coarsest first.
#[derive(Clone, Debug, Default)]
pub struct Ledger {
    meshes: Vec<Balance>,
}

impl Ledger {
    /// Adds the balance of the next mesh.
    pub fn push(&mut self, balance: &Balance) {
        self.meshes.push(balance.clone());
    }

    /// What does not add up on the last mesh, relative to what was turned over.
    #[must_use]
    pub fn noise(&self) -> f64 {
        let Some(b) = self.meshes.last() else {
            return 0.0;
        };
        let sum = |all: &[f64]| all.iter().sum::<f64>();
        let residual =
            b.stored_start + sum(&b.supplied) - sum(&b.dissipated) - b.lost - b.stored_end;
        let size = turnover(b);
        if size > 0.0 {
            residual.abs() / size
        } else {
            0.0
        }
    }

    /// The balance.
    ///
    /// # Errors
    ///
    /// [`StudyError::Balance`] where the residual is outside its bound.
    pub fn result(&self, setup: &Setup, rules: Rules) -> Result<BalanceResult, StudyError> {
        let size = self.meshes.last().map_or(0.0, turnover);
        let mut book = Book {
            ledger: self,
            rules,
            size,
            bound: 0.0,
        };
        let stored_start = book.entry(&|b| b.stored_start);
        let stored_end = book.entry(&|b| b.stored_end);
        let lost_at_events = book.entry(&|b| b.lost);
        let (mut supplied, mut dissipated) = (Vec::new(), Vec::new());
        for (i, part) in setup.parts.iter().enumerate() {
            let at = |all: &Vec<f64>| all.get(i).copied().unwrap_or(0.0);
            if matches!(
                part.element,
                Element::Voltage { .. } | Element::Current { .. }
            ) {
                supplied.push((part.name.clone(), book.entry(&|b| at(&b.supplied))));
            }
            if self.meshes.iter().any(|b| at(&b.dissipated) != 0.0) {
                dissipated.push((part.name.clone(), book.entry(&|b| at(&b.dissipated))));
            }
        }
        let sum = |all: &[(String, f64)]| all.iter().map(|e| e.1).sum::<f64>();
        let residual =
            stored_start + sum(&supplied) - sum(&dissipated) - lost_at_events - stored_end;
        let bound = book.bound + rules.precision.rounding(0.0, size);
        if residual.abs() > bound || residual.is_nan() {
            return Err(StudyError::Balance { residual, bound });
        }
        Ok(BalanceResult {
            stored_start,
            stored_end,
            supplied,
            dissipated,
            lost_at_events,
            residual,
            bound,
        })
    }
}

/// All joules that were held, supplied, dissipated or lost: what rounding is relative to.
fn turnover(b: &Balance) -> f64 {
    let sum = |all: &[f64]| all.iter().map(|x| x.abs()).sum::<f64>();
    b.stored_start.abs() + b.stored_end.abs() + b.lost.abs() + sum(&b.supplied) + sum(&b.dissipated)
}

struct Book<'l> {
    ledger: &'l Ledger,
    rules: Rules,
    size: f64,
    bound: f64,
}

impl Book<'_> {
    /// An entry's value as reported; its bound is added up.
    fn entry(&mut self, read: &dyn Fn(&Balance) -> f64) -> f64 {
        let values: Vec<f64> = self.ledger.meshes.iter().map(read).collect();
        let least = Precision {
            steps: 1,
            ..self.rules.precision
        }
        .rounding(0.0, self.size);
        let e = estimate(&values, self.rules.order, least);
        let value = match values.first() {
            Some(first) if self.rules.fixed => *first,
            _ => self.rules.order.combine(&values),
        };
        self.bound += (value - e.value).abs() + e.bound;
        value
    }
}

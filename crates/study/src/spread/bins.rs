//! How often each value came, in bins fine enough for quantiles and few enough to keep.
//!
//! A bin holds the numbers that agree in sign, exponent and the first eleven bits of their
//! mantissa: it is at most 1/2048 of its value wide. What is counted is the distance from the
//! nominal value, so that a quantile is known to 1/4096 of how far it lies from nominal, far
//! within what drawing leaves uncertain, and a million shots need some ten thousand bins.

use std::collections::BTreeMap;

#[cfg(feature = "serde")]
use serde::{Deserialize, Serialize};

/// Bits of the mantissa that a bin leaves out.
const DROPPED: u32 = 41;

/// Counts by bin, in ascending order of value.
#[derive(Clone, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(Serialize, Deserialize))]
#[cfg_attr(
    feature = "serde",
    serde(from = "Vec<(i64, u64)>", into = "Vec<(i64, u64)>")
)]
pub struct Bins {
    counts: BTreeMap<i64, u64>,
}

impl From<Bins> for Vec<(i64, u64)> {
    fn from(bins: Bins) -> Self {
        bins.counts.into_iter().collect()
    }
}

impl From<Vec<(i64, u64)>> for Bins {
    fn from(pairs: Vec<(i64, u64)>) -> Self {
        Bins {
            counts: pairs.into_iter().collect(),
        }
    }
}

impl Bins {
    /// Counts a number.
    pub fn add(&mut self, y: f64) {
        let size = i64::try_from(y.abs().to_bits() >> DROPPED).unwrap_or(0);
        let key = if y < 0.0 { -size } else { size };
        *self.counts.entry(key).or_insert(0) += 1;
    }

    /// Adds the counts of others.
    pub fn join(&mut self, other: &Bins) {
        for (key, n) in &other.counts {
            let count = self.counts.entry(*key).or_insert(0);
            *count = count.saturating_add(*n);
        }
    }

    /// The least number below or at which lies a share `q` of all, to its bin's middle.
    pub fn quantile(&self, q: f64) -> Option<f64> {
        let all: u64 = self.counts.values().fold(0, |s, n| s.saturating_add(*n));
        #[allow(clippy::cast_precision_loss, reason = "counts of shots")]
        let wanted = (q * all as f64).max(1.0);
        let mut below = 0_u64;
        for (key, n) in &self.counts {
            below = below.saturating_add(*n);
            #[allow(clippy::cast_precision_loss, reason = "counts of shots")]
            if below as f64 >= wanted {
                return Some(middle(*key));
            }
        }
        None
    }
}

fn middle(key: i64) -> f64 {
    if key == 0 {
        return 0.0;
    }
    let size = f64::from_bits((key.unsigned_abs() << DROPPED) | (1 << (DROPPED - 1)));
    if key < 0 { -size } else { size }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_quantile_is_right_to_a_part_in_four_thousand() {
        let mut bins = Bins::default();
        for k in -500..=500 {
            bins.add(f64::from(k));
        }
        for (q, y) in [(0.01, -490.0), (0.5, 0.0), (0.99, 490.0), (1.0, 500.0)] {
            let found = bins.quantile(q).unwrap();
            assert!(
                (found - y).abs() <= y.abs() / 4096.0 + 1e-300,
                "{q}: {found}"
            );
        }
    }

    #[test]
    fn nothing_has_no_quantile() {
        assert_eq!(Bins::default().quantile(0.5), None);
    }
}

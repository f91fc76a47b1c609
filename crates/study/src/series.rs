//! One reading on a ladder of meshes: its answer, and whether more meshes are wanted.
//!
//! A reading may exist on one mesh and not on another (a crest that just touches a level). Then
//! only the finest meshes on which it exists count; where the very last one brought it about,
//! its bound is its own scale. Refinement of a reading ends when its bound is within the allowed
//! error, at rounding, or when two more meshes no longer halve the difference between neighbours.

use crate::bounds::{Estimate, Order, Precision, estimate};
use crate::outcome::Found;
use crate::readings::{Lack, Number, Sample};

/// How a ladder of meshes is read.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rules {
    /// The order of the method.
    pub order: Order,
    /// How rounding grew in the run.
    pub precision: Precision,
    /// Whether the steps are the user's: then the value of the first mesh is reported, and the
    /// others only serve its bound.
    pub fixed: bool,
}

/// A reading on each mesh so far, coarsest first.
#[derive(Clone, Debug, Default)]
pub struct Series {
    samples: Vec<Sample>,
}

/// How many meshes a reading is followed before it can count as stuck.
const PATIENCE: usize = 7;

impl Series {
    /// Adds the reading on the next mesh.
    pub fn push(&mut self, sample: Sample) {
        self.samples.push(sample);
    }

    /// The numbers on the finest meshes, back to where there is none.
    fn trailing(&self, len: usize) -> Vec<Number> {
        let taken = self.samples.get(..len).unwrap_or_default();
        let mut numbers: Vec<Number> = taken.iter().rev().map_while(|s| s.clone().ok()).collect();
        numbers.reverse();
        numbers
    }

    /// The estimate after the first `len` meshes, with the scale and the rounding that go with it.
    fn estimate(&self, len: usize, rules: Rules) -> Option<(Estimate, f64, f64)> {
        let numbers = self.trailing(len);
        let last = numbers.last()?;
        let round = rules.precision.rounding(last.value, last.size);
        let values: Vec<f64> = numbers.iter().map(|n| n.value).collect();
        let mut e = estimate(&values, rules.order, round);
        if numbers.len() == 1 {
            e.bound = last.scale.max(last.value.abs());
        }
        Some((e, last.scale, round))
    }

    /// The value of the first mesh, and the first reason why there is none, where steps are fixed.
    fn fixed(&self, rules: Rules) -> Found {
        match (
            self.samples.first(),
            self.estimate(self.samples.len(), rules),
        ) {
            (Some(Ok(n)), Some((e, ..))) => Found::Value {
                value: n.value,
                bound: (n.value - e.value).abs() + e.bound,
            },
            (Some(Ok(n)), None) => Found::Value {
                value: n.value,
                bound: n.scale.max(n.value.abs()),
            },
            (Some(Err(lack)), _) => lacking(lack),
            (None, _) => Found::Absent("it was not measured".to_owned()),
        }
    }

    /// The answer.
    #[must_use]
    pub fn found(&self, rules: Rules) -> Found {
        if rules.fixed {
            return self.fixed(rules);
        }
        match (
            self.samples.last(),
            self.estimate(self.samples.len(), rules),
        ) {
            (_, Some((e, ..))) => Found::Value {
                value: e.value,
                bound: e.bound,
            },
            (Some(Err(lack)), None) if self.is_torn() => match lacking(lack) {
                Found::Absent(why) => Found::Absent(format!(
                    "{why} (closer than the stepping can tell: on a coarser mesh it exists)"
                )),
                other => other,
            },
            (Some(Err(lack)), None) => lacking(lack),
            _ => Found::Absent("it was not measured".to_owned()),
        }
    }

    /// Whether the last two meshes disagree on there being a number.
    fn is_torn(&self) -> bool {
        let mut last = self.samples.iter().rev().take(2).map(Result::is_ok);
        last.next() != last.next()
    }

    /// Whether more meshes are wanted for the reading to come within `error` times its scale.
    #[must_use]
    pub fn wants_more(&self, error: f64, rules: Rules) -> bool {
        match self.estimate(self.samples.len(), rules) {
            None => self.is_torn(),
            Some((e, scale, _)) => {
                e.bound > error * scale && (self.is_torn() || !self.is_final(rules))
            }
        }
    }

    /// Whether more meshes would not narrow its bound: at rounding, or stuck.
    #[must_use]
    pub fn is_final(&self, rules: Rules) -> bool {
        let n = self.samples.len();
        let Some((e, _, round)) = self.estimate(n, rules) else {
            return !self.is_torn();
        };
        if e.bound <= 4.0 * round {
            return true;
        }
        let values = self.trailing(n);
        match values.as_slice() {
            [.., a, b, c, d] if n >= PATIENCE => {
                let (before, last) = ((b.value - a.value).abs(), (d.value - c.value).abs());
                last > 0.5 * before
            }
            _ => false,
        }
    }
}

fn lacking(lack: &Lack) -> Found {
    match lack {
        Lack::Absent(why) => Found::Absent(why.clone()),
        Lack::Unbounded(why) => Found::Unbounded(why.clone()),
        Lack::Floating(why) => Found::Floating(why.clone()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const RULES: Rules = Rules {
        order: Order::Second,
        precision: Precision {
            steps: 100,
            noise: 0.0,
        },
        fixed: false,
    };

    fn series(values: &[f64]) -> Series {
        Series {
            samples: values.iter().map(|v| Ok(Number::new(*v, 1.0))).collect(),
        }
    }

    #[test]
    fn a_reading_within_its_allowed_error_wants_no_more() {
        let s = series(&[
            1.0 + 1e-5,
            1.0 + 0.25e-5,
            1.0 + 0.0625e-5,
            1.0 + 0.015625e-5,
        ]);
        assert!(!s.wants_more(1e-6, RULES));
        assert!(series(&[1.01, 1.0026, 1.00064, 1.00016]).wants_more(1e-6, RULES));
    }

    #[test]
    fn with_fixed_steps_the_first_mesh_is_reported_with_an_honest_bound() {
        let s = series(&[1.01, 1.0025, 1.000_625, 1.000_156_25]);
        let Found::Value { value, bound } = s.found(Rules {
            fixed: true,
            ..RULES
        }) else {
            panic!()
        };
        assert_eq!(value, 1.01);
        assert!((0.01..0.0101).contains(&bound), "{bound}");
    }

    #[test]
    fn what_exists_on_the_last_mesh_only_is_uncertain_by_its_scale() {
        let mut s = Series::default();
        s.push(Err(Lack::Absent("no".into())));
        s.push(Ok(Number::new(0.5, 2.0)));
        assert!(s.wants_more(1e-6, RULES));
        assert_eq!(
            s.found(RULES),
            Found::Value {
                value: 0.5,
                bound: 2.0
            }
        );
    }
}

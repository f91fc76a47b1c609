//! A reading's number in one shot, and why there may be none.
//!
//! Beside its value a number carries two magnitudes in the same unit. `scale` is what the
//! allowed error is relative to: the largest absolute value of the signal over the span, the
//! integral of the absolute value, the time since the event before an instant, a duration or a
//! ratio itself. `size` is what rounding is relative to: the magnitude that, times the rounding
//! of a signal's relative value, is the rounding of the reading. Through arithmetic both go by
//! the rules of error propagation,
//!
//! ```text
//! a + b: sa + sb      a b: |a| sb + |b| sa      a / b: (sa + |a/b| sb) / |b|      f(a): |f'(a)| sa
//! ```
//!
//! but the scale of a difference of times and of a ratio is the result itself, and at least a
//! thousandth of what the rules give: a ratio near zero is not asked for more digits than a
//! shot has.

/// A number with what its error is measured by; all three in one unit.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Number {
    /// The value.
    pub value: f64,
    /// What the allowed error is relative to, 0 or more.
    pub scale: f64,
    /// What rounding is relative to, 0 or more; 0 for a number that is exact.
    pub size: f64,
}

/// Why a reading has no number in a shot.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Lack {
    /// It does not exist; why.
    Absent(String),
    /// It is without bound; why, with the instant.
    Unbounded(String),
    /// It depends on the potential at which an island was held; what to name instead.
    Floating(String),
}

/// A reading in one shot.
pub type Sample = Result<Number, Lack>;

/// Why there is none, in words.
pub fn absent<T>(why: impl Into<String>) -> Result<T, Lack> {
    Err(Lack::Absent(why.into()))
}

/// The least scale of a ratio or a duration, relative to what the rules of propagation give.
const LEAST: f64 = 1e-3;

impl Number {
    /// A number as written.
    #[must_use]
    pub fn exact(value: f64) -> Self {
        Number {
            value,
            scale: value.abs(),
            size: 0.0,
        }
    }

    /// A number whose scale and size are the same.
    #[must_use]
    pub fn new(value: f64, scale: f64) -> Self {
        Number {
            value,
            scale,
            size: scale,
        }
    }

    /// A ratio, a fraction or a duration made of parts that are known to `made_of`: its scale is
    /// itself.
    #[must_use]
    pub fn itself(value: f64, made_of: f64, size: f64) -> Self {
        Number {
            value,
            scale: value.abs().max(LEAST * made_of),
            size,
        }
    }

    /// From an instant to a later one, s.
    #[must_use]
    pub fn between(from: Number, to: Number) -> Self {
        let value = to.value - from.value;
        Number::itself(value, from.scale + to.scale, rounded(from, to, value))
    }

    /// The sum.
    #[must_use]
    pub fn plus(self, b: Number) -> Self {
        let value = self.value + b.value;
        Number {
            value,
            scale: self.scale + b.scale,
            size: rounded(self, b, value),
        }
    }

    /// The negative.
    #[must_use]
    pub fn negative(self) -> Self {
        Number {
            value: -self.value,
            ..self
        }
    }

    /// The product.
    #[must_use]
    pub fn times(self, b: Number) -> Self {
        let cross = |x: f64, y: f64| self.value.abs() * y + b.value.abs() * x;
        let value = self.value * b.value;
        Number {
            value,
            scale: cross(self.scale, b.scale),
            size: cross(self.size, b.size) + value.abs() / 4.0,
        }
    }

    /// The quotient.
    #[must_use]
    pub fn over(self, b: Number) -> Self {
        let value = self.value / b.value;
        let cross = |x: f64, y: f64| (x + value.abs() * y) / b.value.abs();
        Number::itself(
            value,
            cross(self.scale, b.scale),
            cross(self.size, b.size) + value.abs() / 4.0,
        )
    }

    /// A function of it with value `f` and derivative `d` there.
    #[must_use]
    pub fn mapped(self, f: f64, d: f64) -> Self {
        Number {
            value: f,
            scale: d.abs() * self.scale,
            size: d.abs() * self.size + f.abs() / 4.0,
        }
    }
}

/// The size of a sum or difference: exact operands leave only its own rounding.
fn rounded(a: Number, b: Number, value: f64) -> f64 {
    a.size + b.size + (a.value.abs() + b.value.abs() + value.abs()) / 16.0
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_scale_of_a_ratio_is_itself() {
        let r = Number::new(30.0, 100.0).over(Number::new(60.0, 100.0));
        assert_eq!((r.value, r.scale), (0.5, 0.5));
    }

    #[test]
    fn a_ratio_near_zero_keeps_a_thousandth_of_its_parts() {
        let r = Number::new(0.0, 100.0).over(Number::new(50.0, 100.0));
        assert_eq!((r.value, r.scale), (0.0, 0.002));
    }

    #[test]
    fn the_scale_of_a_sum_is_the_sum_of_the_scales() {
        let s = Number::new(5.0, 8.0).plus(Number::new(-5.0, 7.0));
        assert_eq!((s.value, s.scale), (0.0, 15.0));
    }
}

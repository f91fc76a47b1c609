//! Sums that are exact, and so the same in any order and however they are cut.
//!
//! A finite number is an integer times 2^-1074. It is added as three digits of 32 bits to a
//! row of digits of 64, which leaves room for 2^30 numbers before carries are due:
//!
//! ```text
//! x = m 2^e    place = (e + 1074) / 32    m << ((e + 1074) mod 32)  ->  digits place .. place + 2
//! ```

#[cfg(feature = "serde")]
use serde::{Deserialize, Serialize};

/// Digits: 2^-1074 to 2^1088, room for 2^64 of the largest numbers.
const DIGITS: usize = 68;
const BASE: i64 = 1 << 32;

/// An exact sum of finite numbers.
#[derive(Clone, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(Serialize, Deserialize))]
#[cfg_attr(feature = "serde", serde(from = "Written", into = "Written"))]
pub struct Sum {
    digits: Box<[i64; DIGITS]>,
    added: u32,
}

impl Default for Sum {
    fn default() -> Self {
        Sum {
            digits: Box::new([0; DIGITS]),
            added: 0,
        }
    }
}

impl Sum {
    /// Adds a number; what is not finite is left out.
    pub fn add(&mut self, x: f64) {
        if x == 0.0 || !x.is_finite() {
            return;
        }
        let bits = x.abs().to_bits();
        let (raised, fraction) = ((bits >> 52) as usize, bits & ((1 << 52) - 1));
        let (mantissa, exponent) = match raised {
            0 => (fraction, 0),
            e => (fraction | (1 << 52), e - 1),
        };
        let wide = u128::from(mantissa) << (exponent % 32);
        for (k, digit) in self
            .digits
            .iter_mut()
            .skip(exponent / 32)
            .take(3)
            .enumerate()
        {
            let part = ((wide >> (32 * k)) & 0xffff_ffff) as i64;
            *digit += if x < 0.0 { -part } else { part };
        }
        self.added += 1;
        if self.added >= 1 << 30 {
            self.carry();
        }
    }

    /// Adds the product of two numbers, exactly where it neither over- nor underflows.
    pub fn add_product(&mut self, a: f64, b: f64) {
        let product = a * b;
        self.add(product);
        self.add(a.mul_add(b, -product));
    }

    /// Adds another sum.
    pub fn join(&mut self, other: &Sum) {
        let mut other = other.clone();
        other.carry();
        self.carry();
        for (a, b) in self.digits.iter_mut().zip(other.digits.iter()) {
            *a += b;
        }
        self.carry();
    }

    /// Brings every digit but the last into 0 to 2^32 - 1.
    fn carry(&mut self) {
        let mut over = 0;
        let last = DIGITS - 1;
        for (k, digit) in self.digits.iter_mut().enumerate() {
            *digit += over;
            if k < last {
                over = digit.div_euclid(BASE);
                *digit = digit.rem_euclid(BASE);
            }
        }
        self.added = 0;
    }

    /// Sign and digits of the magnitude.
    fn magnitude(&self) -> (bool, Sum) {
        let mut sum = self.clone();
        sum.carry();
        let negative = sum.digits.last().is_some_and(|d| *d < 0);
        if negative {
            sum.digits.iter_mut().for_each(|d| *d = -*d);
            sum.carry();
        }
        (negative, sum)
    }

    /// The sum as a number, to within its last bit.
    pub fn value(&self) -> f64 {
        let (negative, sum) = self.magnitude();
        let mut value = 0.0;
        for (k, digit) in sum.digits.iter().enumerate() {
            let place = i32::try_from(32 * k).unwrap_or(0) - 1074;
            #[allow(clippy::cast_precision_loss, reason = "32 bits")]
            let digit = *digit as f64;
            value += libm::scalbn(digit, place);
        }
        if negative { -value } else { value }
    }
}

/// A sum in a record: its sign, the place of its lowest digit, its digits from there.
#[cfg(feature = "serde")]
#[derive(Serialize, Deserialize)]
struct Written(bool, usize, Vec<i64>);

#[cfg(feature = "serde")]
impl From<Sum> for Written {
    fn from(sum: Sum) -> Self {
        let (negative, sum) = sum.magnitude();
        let from = sum.digits.iter().position(|d| *d != 0).unwrap_or(0);
        let to = sum
            .digits
            .iter()
            .rposition(|d| *d != 0)
            .map_or(0, |k| k + 1);
        let digits = sum.digits.get(from..to).unwrap_or_default().to_vec();
        Written(negative, from, digits)
    }
}

#[cfg(feature = "serde")]
impl From<Written> for Sum {
    fn from(Written(negative, from, digits): Written) -> Self {
        let mut sum = Sum::default();
        for (place, digit) in sum.digits.iter_mut().skip(from).zip(digits) {
            let digit = digit.clamp(0, BASE - 1);
            *place = if negative { -digit } else { digit };
        }
        sum
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(numbers: &[f64]) -> Sum {
        let mut sum = Sum::default();
        numbers.iter().for_each(|x| sum.add(*x));
        sum
    }

    #[test]
    fn nothing_is_lost_beside_what_is_large() {
        assert_eq!(of(&[1e300, 1.0, -1e300]).value(), 1.0);
        assert_eq!(of(&[-1e300, 5e-324, 1e300]).value(), 5e-324);
        assert_eq!(of(&[0.1, 0.2, -0.3]).value(), 2.0_f64.powi(-55));
        assert_eq!(of(&[-1.5, -2.25]).value(), -3.75);
        assert_eq!(of(&[f64::MAX, f64::MAX]).value(), f64::INFINITY);
    }

    #[test]
    fn order_and_cuts_change_nothing() {
        let numbers: Vec<f64> = (1..2000)
            .map(|k| (f64::from(k) * 0.7).sin() * 1e3)
            .collect();
        let all = of(&numbers);
        let (left, right) = numbers.split_at(777);
        let mut joined = of(right);
        joined.join(&of(left));
        assert_eq!(joined.value().to_bits(), all.value().to_bits());
    }

    #[test]
    fn a_product_is_added_whole() {
        let mut sum = Sum::default();
        let x = 1.0 + f64::EPSILON;
        sum.add_product(x, x);
        sum.add(-1.0);
        sum.add(-2.0 * f64::EPSILON);
        assert_eq!(sum.value(), f64::EPSILON * f64::EPSILON);
    }
}

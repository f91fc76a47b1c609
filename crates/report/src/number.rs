//! Numbers for people: `311.860000 J ± 12 µJ`.
//!
//! A value, a blank, a unit with one SI prefix. The digits follow the bound: the bound is
//! rounded *up* to two significant digits and the value shown to the same place, at most
//! [`MOST_DIGITS`] of them. The minus is a true minus (U+2212), the prefix a micro sign, the
//! ohm its letter. A unit that can take no prefix (`A²·s`, a plain number) gets a power of ten
//! where it needs one: `10.28 × 10⁶ A²·s`.
//!
//! What machines read is written elsewhere ([`crate::record`], [`crate::waveform`]), in
//! coherent SI units and with the shortest digits that read back to the same number.

use pulsewright_circuit::dimension::UNITS;

/// The most significant digits shown; more are noise to a reader.
pub const MOST_DIGITS: i32 = 10;

/// A bound rounded up to two significant digits: never below the bound itself.
///
/// Zero, infinity and what is no number come back as they are.
///
/// # Example
///
/// ```
/// assert_eq!(pulsewright_report::number::rounded_up(1.21e-5), 1.3e-5);
/// assert_eq!(pulsewright_report::number::rounded_up(0.0), 0.0);
/// ```
#[must_use]
pub fn rounded_up(bound: f64) -> f64 {
    two_digits(bound).map_or(bound, |(digits, place)| power_of_ten(digits, place))
}

/// A value with its bound, in its own prefixed unit.
///
/// # Example
///
/// ```
/// use pulsewright_report::number::with_bound;
/// assert_eq!(with_bound(311.86, 1.2e-5, "J"), "311.860000 J ± 12 µJ");
/// ```
#[must_use]
pub fn with_bound(value: f64, bound: f64, unit: &str) -> String {
    let shown = Scale::of(unit, [value, bound]).show(value, Some(bound));
    if bound > 0.0 {
        format!("{shown} ± {}", self::bound(bound, unit))
    } else {
        shown
    }
}

/// A value without a bound, in its own prefixed unit, with as many digits as it has.
///
/// # Example
///
/// ```
/// assert_eq!(pulsewright_report::number::quantity(-1030.0, "A"), "−1.03 kA");
/// ```
#[must_use]
pub fn quantity(value: f64, unit: &str) -> String {
    Scale::of(unit, [value]).show(value, None)
}

/// A value to at most `digits` significant digits, in its own prefixed unit.
#[must_use]
pub fn brief(value: f64, unit: &str, digits: i32) -> String {
    Scale::of(unit, [value]).brief(value, None, digits)
}

/// A bound: two significant digits, rounded up, in its own prefixed unit.
#[must_use]
pub fn bound(bound: f64, unit: &str) -> String {
    let Some((digits, place)) = two_digits(bound) else {
        return if bound == 0.0 {
            with_unit("0", &printed(unit))
        } else {
            "without bound".to_owned()
        };
    };
    let scale = Scale::of(unit, [power_of_ten(digits, place)]);
    scale.join(&scale.digits(power_of_ten(digits, place), place))
}

/// The prefix, or power of ten, that a value or a whole column of values is shown in.
#[derive(Clone, Debug, PartialEq)]
pub struct Scale {
    /// Values are divided by this power of ten.
    exponent: i32,
    /// What stands after the digits: `µJ`, `× 10⁶ A²·s`; empty for a plain number.
    suffix: String,
}

impl Scale {
    /// The scale that suits the largest of some values of one unit.
    #[must_use]
    pub fn of(unit: &str, values: impl IntoIterator<Item = f64>) -> Self {
        let largest = values
            .into_iter()
            .filter(|v| v.is_finite())
            .fold(0.0, |a: f64, v| a.max(v.abs()));
        let printed = printed(unit);
        let exponent = if largest == 0.0 {
            0
        } else {
            leading(largest, MOST_DIGITS).div_euclid(3) * 3
        };
        if let Some(prefix) = prefix(exponent).filter(|_| takes_prefix(unit)) {
            return Scale {
                exponent,
                suffix: format!("{prefix}{printed}"),
            };
        }
        if largest == 0.0 || (1e-4..1e7).contains(&largest) {
            return Scale {
                exponent: 0,
                suffix: printed,
            };
        }
        Scale {
            exponent,
            suffix: with_unit(&format!("× 10{}", raised(exponent)), &printed),
        }
    }

    /// What stands after the digits: `µJ`, `× 10⁶ A²·s`; empty for a plain number.
    #[must_use]
    pub fn suffix(&self) -> &str {
        &self.suffix
    }

    /// What values are divided by to be shown before [`Scale::suffix`].
    #[must_use]
    pub fn divisor(&self) -> f64 {
        10f64.powi(self.exponent)
    }

    /// A value of this scale's unit, to the place of its bound (as many digits as it has where
    /// there is none).
    #[must_use]
    pub fn show(&self, value: f64, bound: Option<f64>) -> String {
        self.brief(value, bound, MOST_DIGITS)
    }

    /// Like [`Scale::show`], with at most `most` significant digits.
    #[must_use]
    pub fn brief(&self, value: f64, bound: Option<f64>, most: i32) -> String {
        if !value.is_finite() {
            return "no finite number".to_owned();
        }
        self.join(&self.digits(value, place(value, bound, most)))
    }

    /// The digits of `value` down to the decimal `place` (−6 for micro), in this scale.
    fn digits(&self, value: f64, place: i32) -> String {
        let most = if value == 0.0 { 9 } else { 12 };
        let decimals = usize::try_from(self.exponent - place)
            .unwrap_or(0)
            .min(most);
        let text = format!("{:.decimals$}", divided(value.abs(), self.exponent));
        let nothing = text.bytes().all(|b| matches!(b, b'0' | b'.'));
        if value < 0.0 && !nothing {
            format!("−{text}")
        } else {
            text
        }
    }

    fn join(&self, digits: &str) -> String {
        with_unit(digits, &self.suffix)
    }
}

/// A unit as people write it: `Ω` for `ohm`, `·` for `*`.
#[must_use]
pub fn printed(unit: &str) -> String {
    unit.replace("ohm", "Ω").replace('*', "·")
}

fn with_unit(digits: &str, unit: &str) -> String {
    if unit.is_empty() {
        digits.to_owned()
    } else {
        format!("{digits} {unit}")
    }
}

/// The decimal place of the last digit worth showing.
fn place(value: f64, bound: Option<f64>, most: i32) -> i32 {
    let least = if value == 0.0 {
        i32::MIN
    } else {
        leading(value, most) - most + 1
    };
    match bound.and_then(two_digits) {
        Some((_, place)) => place.max(least),
        None if value == 0.0 => 0,
        None => last(value, most),
    }
}

/// The decimal exponent of the first digit of `x`, after rounding to `digits` digits.
fn leading(x: f64, digits: i32) -> i32 {
    scientific(x, digits).1
}

/// The decimal place of the last digit of `x` that is not zero, after rounding to `digits`.
fn last(x: f64, digits: i32) -> i32 {
    let (mantissa, exponent) = scientific(x, digits);
    let kept = mantissa.trim_end_matches('0').len();
    exponent + 1 - i32::try_from(kept.max(1)).unwrap_or(1)
}

/// The digits of `x` (without point and sign) and the exponent of the first.
fn scientific(x: f64, digits: i32) -> (String, i32) {
    let decimals = usize::try_from(digits - 1).unwrap_or(0);
    let text = format!("{:.decimals$e}", x.abs());
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    (mantissa.replace('.', ""), exponent.parse().unwrap_or(0))
}

/// A bound as two digits and the place of the second (12 and −6 for 11.3 µ); `None` for zero
/// and what is not finite.
fn two_digits(bound: f64) -> Option<(u32, i32)> {
    if !bound.is_finite() || bound <= 0.0 {
        return None;
    }
    let (mantissa, exponent) = scientific(bound, 2);
    let (digits, place) = (mantissa.parse::<u32>().ok()?, exponent - 1);
    if power_of_ten(digits, place) >= bound {
        return Some((digits, place));
    }
    Some(if digits == 99 {
        (10, place + 1)
    } else {
        (digits + 1, place)
    })
}

/// `value / 10^exponent`, in two steps where that power is below what a number can hold.
fn divided(value: f64, exponent: i32) -> f64 {
    if exponent < -290 {
        value * 1e290 / 10f64.powi(exponent + 290)
    } else {
        value / 10f64.powi(exponent)
    }
}

/// `digits × 10^place`, read once from its decimal text so that it is the nearest number.
fn power_of_ten(digits: u32, place: i32) -> f64 {
    format!("{digits}e{place}").parse().unwrap_or(f64::INFINITY)
}

/// Whether an SI prefix may stand before the unit: its first factor is a unit to the power of 1.
fn takes_prefix(unit: &str) -> bool {
    let end = unit.find(['*', '/', '²', '^']).unwrap_or(unit.len());
    let (first, rest) = unit.split_at(end);
    !rest.starts_with(['²', '^'])
        && UNITS
            .iter()
            .any(|(name, _, prefixed)| *prefixed && *name == first)
}

fn prefix(exponent: i32) -> Option<&'static str> {
    const PREFIXES: [&str; 10] = ["f", "p", "n", "µ", "m", "", "k", "M", "G", "T"];
    PREFIXES
        .get(usize::try_from(exponent / 3 + 5).ok()?)
        .copied()
}

/// A whole number as an exponent.
pub(crate) fn raised(exponent: i32) -> String {
    const DIGITS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    let digit = |c: char| {
        c.to_digit(10)
            .and_then(|d| DIGITS.get(d as usize))
            .copied()
            .unwrap_or('⁻')
    };
    exponent.to_string().chars().map(digit).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits_follow_the_bound() {
        assert_eq!(with_bound(311.86, 1.2e-5, "J"), "311.860000 J ± 12 µJ");
        assert_eq!(with_bound(311.86, 0.123, "J"), "311.86 J ± 130 mJ");
        assert_eq!(with_bound(1234.0, 120.0, "V"), "1.23 kV ± 120 V");
        assert_eq!(
            with_bound(0.882_352_9, 1.3e-8, ""),
            "0.882352900 ± 13 × 10⁻⁹"
        );
    }

    #[test]
    fn the_smallest_numbers_have_digits() {
        assert_eq!(brief(1e-320, "s", 3), "10 × 10⁻³²¹ s");
    }

    #[test]
    fn a_bound_of_nothing_is_not_shown() {
        assert_eq!(with_bound(1e-6, 0.0, "s"), "1 µs");
    }

    #[test]
    fn a_bound_is_rounded_up() {
        assert_eq!(rounded_up(1.2e-5), 1.2e-5);
        assert_eq!(rounded_up(1.200_000_1e-5), 1.3e-5);
        assert_eq!(rounded_up(9.91), 10.0);
        assert_eq!(rounded_up(f64::MIN_POSITIVE), 2.3e-308);
        assert!(rounded_up(f64::INFINITY).is_infinite());
    }

    #[test]
    fn absurd_digits_are_cut() {
        assert_eq!(
            with_bound(1.0 / 3.0, 1e-30, "V"),
            "333.3333333 mV ± 1.0 × 10⁻³⁰ V"
        );
        assert_eq!(quantity(1.0 / 3.0, ""), "0.3333333333");
    }

    #[test]
    fn a_value_below_its_bound_is_zero_without_a_sign() {
        assert_eq!(with_bound(-1e-12, 1.2e-9, "J"), "0.0 nJ ± 1.2 nJ");
        assert_eq!(with_bound(0.0, 1.2e-9, "J"), "0.0 nJ ± 1.2 nJ");
    }

    #[test]
    fn prefixes_stand_where_they_may() {
        assert_eq!(quantity(4700.0, "V"), "4.7 kV");
        assert_eq!(quantity(999.999_999_999_9, "V"), "1 kV");
        assert_eq!(quantity(50.0, "ohm"), "50 Ω");
        assert_eq!(quantity(32e-6, "F"), "32 µF");
        assert_eq!(quantity(10_275_326.5, "A²*s"), "10.2753265 × 10⁶ A²·s");
        assert_eq!(quantity(12.0, "A²*s"), "12 A²·s");
        assert_eq!(quantity(2e9, "V/s"), "2 GV/s");
        assert_eq!(quantity(0.0, "V"), "0 V");
        assert_eq!(quantity(-0.0, "V"), "0 V");
        assert_eq!(quantity(1e-20, "V"), "10 × 10⁻²¹ V");
        assert_eq!(quantity(1e300, "V"), "1 × 10³⁰⁰ V");
    }

    #[test]
    fn a_column_has_one_prefix() {
        let scale = Scale::of("V", [4700.0, 12.0]);
        assert_eq!(scale.show(12.0, Some(0.1)), "0.01200 kV");
        assert_eq!(scale.show(4700.0, Some(0.1)), "4.70000 kV");
    }

    #[test]
    fn nothing_in_a_column_of_much_has_few_digits() {
        assert_eq!(
            Scale::of("V", [4700.0]).show(0.0, Some(1e-30)),
            "0.000000000 kV"
        );
    }

    #[test]
    fn no_number_is_said_to_be_none() {
        assert_eq!(quantity(f64::NAN, "V"), "no finite number");
        assert_eq!(bound(f64::INFINITY, "V"), "without bound");
    }
}

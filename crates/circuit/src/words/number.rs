//! Numbers with their units, in the shortest digits that name the same `f64`.
//!
//! The decimal point of the shortest digits is moved, never their value: `0.0000047 F` and
//! `4.7 uF` are the same decimal number, so reading it back gives the same `f64`.

use crate::dimension::{Dimension, ONE, PREFIXES};

/// A value with its unit: `4.7 uF`, `50 ohm`, `1.2 kV/s`, `0.003 A²*s`, `7`.
#[must_use]
pub fn quantity(value: f64, dimension: Dimension) -> String {
    if dimension.is_none() {
        return plain(value);
    }
    let (unit, prefixed) = unit_of(dimension);
    if !value.is_finite() || value == 0.0 || !prefixed {
        return format!("{} {unit}", plain(value));
    }
    let (sign, digits, exponent) = taken_apart(value);
    let thousands = exponent.div_euclid(3) * 3;
    let Some(prefix) = prefix_of(thousands) else {
        return format!("{} {unit}", plain(value));
    };
    format!(
        "{sign}{} {prefix}{unit}",
        pointed(&digits, exponent - thousands + 1)
    )
}

/// A share: `5 %`, and `10 ppm` below a hundredth of a percent.
#[must_use]
pub fn share(value: f64) -> String {
    if !value.is_finite() || value == 0.0 {
        return format!("{value} %");
    }
    let (sign, digits, exponent) = taken_apart(value);
    if !(-12..=12).contains(&exponent) {
        return format!("{sign}{}e{} %", pointed(&digits, 1), exponent + 2);
    }
    let (shift, unit) = if exponent < -4 { (6, "ppm") } else { (2, "%") };
    format!("{sign}{} {unit}", pointed(&digits, exponent + shift + 1))
}

/// A number of an expression as it is written there.
#[must_use]
pub fn text_of(value: f64, dimension: Dimension, is_share: bool) -> String {
    if is_share {
        share(value)
    } else {
        quantity(value, dimension)
    }
}

fn plain(value: f64) -> String {
    if !value.is_finite() || value == 0.0 {
        return format!("{value}");
    }
    let (sign, digits, exponent) = taken_apart(value);
    if (-5..15).contains(&exponent) {
        format!("{sign}{}", pointed(&digits, exponent + 1))
    } else {
        format!("{value:e}")
    }
}

/// Sign, shortest digits and the decimal exponent of the first of them.
fn taken_apart(value: f64) -> (&'static str, String, i32) {
    let text = format!("{:e}", value.abs());
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    let sign = if value < 0.0 { "-" } else { "" };
    (
        sign,
        mantissa.replace('.', ""),
        exponent.parse().unwrap_or(0),
    )
}

/// The digits with a decimal point after the first `before` of them.
fn pointed(digits: &str, before: i32) -> String {
    let n = usize::try_from(before).unwrap_or(0);
    if before <= 0 {
        let zeros = usize::try_from(-before).unwrap_or(0);
        return format!("0.{}{digits}", "0".repeat(zeros));
    }
    match digits.get(n..) {
        Some("") => digits.to_owned(),
        Some(rest) => format!("{}.{rest}", digits.get(..n).unwrap_or_default()),
        None => format!("{digits}{}", "0".repeat(n - digits.len())),
    }
}

fn prefix_of(power: i32) -> Option<&'static str> {
    if power == 0 {
        return Some("");
    }
    PREFIXES
        .iter()
        .find(|(_, p)| *p == power)
        .map(|(name, _)| *name)
}

/// A unit that can be written after a number, and whether a prefix may stand before it (not
/// before a squared one, whose prefix would be squared too).
fn unit_of(d: Dimension) -> (String, bool) {
    let above = [d.volt, d.ampere, d.second].into_iter().find(|n| *n > 0);
    match above {
        None if d == Dimension::HERTZ => ("Hz".to_owned(), true),
        None => {
            let more = Dimension {
                second: d.second - ONE,
                ..d
            };
            (format!("s{}", more.unit().trim_start_matches('1')), false)
        }
        Some(first) => (
            d.unit(),
            d.quantity()
                .map_or(first == ONE && d.second < ONE, |_| d != Dimension::ACTION),
        ),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(value: f64, dimension: Dimension, text: &str) {
        assert_eq!(quantity(value, dimension), text);
    }

    #[test]
    fn a_mantissa_lies_between_1_and_1000() {
        check(4.7e-6, Dimension::FARAD, "4.7 uF");
        check(999.9e-6, Dimension::SECOND, "999.9 us");
        check(1e-3, Dimension::SECOND, "1 ms");
        check(1000.0, Dimension::VOLT, "1 kV");
        check(-4700.0, Dimension::VOLT, "-4.7 kV");
        check(0.1, Dimension::OHM, "100 mohm");
        check(0.0, Dimension::OHM, "0 ohm");
    }

    #[test]
    fn beyond_the_prefixes_the_unit_stands_alone() {
        check(1e-18, Dimension::FARAD, "1e-18 F");
        check(1e18, Dimension::VOLT, "1e18 V");
    }

    #[test]
    fn a_squared_unit_takes_no_prefix() {
        check(0.0032, Dimension::ACTION, "0.0032 A²*s");
        check(
            3e6,
            Dimension::VOLT.over(Dimension::SECOND).unwrap(),
            "3 MV/s",
        );
    }

    #[test]
    fn a_unit_with_nothing_above_the_line_can_still_be_written() {
        check(2.0, Dimension::new(-1, 0, 0), "2 s/(V*s)");
        check(50.0, Dimension::HERTZ, "50 Hz");
    }

    #[test]
    fn digits_name_the_same_number() {
        for x in [
            0.1 + 0.2,
            1.0 / 3.0,
            6.038e-6,
            25.105,
            2.5198e-3,
            1e-14 / 7.0,
        ] {
            let text = quantity(x, Dimension::VOLT);
            let (m, unit) = text.split_once(' ').unwrap();
            let prefix = unit.strip_suffix('V').unwrap();
            let power = PREFIXES
                .iter()
                .find(|(p, _)| *p == prefix)
                .map_or(0, |p| p.1);
            assert_eq!(format!("{m}e{power}").parse::<f64>().unwrap(), x, "{text}");
        }
    }

    #[test]
    fn a_share_is_written_in_percent_or_ppm() {
        assert_eq!(share(0.05), "5 %");
        assert_eq!(share(1e-6), "1 ppm");
        assert_eq!(share(0.0125), "1.25 %");
        assert_eq!(share(-0.2), "-20 %");
        assert_eq!(share(2.0), "200 %");
    }
}

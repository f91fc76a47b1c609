//! Units and numbers: `4.7 uF` is 4.7e-6 with the dimension of a capacitance.
//!
//! A unit's word is `[prefix] name`; the exponents of ten of all its factors are added up and
//! glued to the mantissa as *text* (`"4.7"`, -6 -> `"4.7e-6"`), which is then read once, so that
//! the value is the double next to what was written. Only `deg` multiplies (by pi/180).

use pulsewright_circuit::Dimension;
use pulsewright_circuit::dimension::{PREFIXES, UNITS};
use pulsewright_circuit::near::nearest;

/// One unit, or a product of them.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Unit {
    /// Its dimension.
    pub(crate) dimension: Dimension,
    /// Its power of ten.
    pub(crate) ten: i64,
    /// How often `deg` is a factor of it.
    pub(crate) degrees: i32,
    /// Whether it is `%` or `ppm`.
    pub(crate) share: bool,
}

impl Unit {
    pub(crate) const ONE: Unit = Unit {
        dimension: Dimension::NONE,
        ten: 0,
        degrees: 0,
        share: false,
    };

    /// The square, prefix included: `kV²` is (kV)².
    pub(crate) fn squared(self) -> Option<Unit> {
        self.times(self)
    }

    /// The product; `None` where a power grows past what is kept.
    pub(crate) fn times(self, other: Unit) -> Option<Unit> {
        Some(Unit {
            dimension: self.dimension.times(other.dimension)?,
            ten: self.ten + other.ten,
            degrees: self.degrees + other.degrees,
            share: false,
        })
    }

    /// The quotient; `None` as for [`Unit::times`].
    pub(crate) fn over(self, other: Unit) -> Option<Unit> {
        Some(Unit {
            dimension: self.dimension.over(other.dimension)?,
            ten: self.ten - other.ten,
            degrees: self.degrees - other.degrees,
            share: false,
        })
    }
}

/// The ohm sign and the micro sign in their other code points.
fn plain(c: char) -> char {
    match c {
        '\u{2126}' => 'Ω',
        '\u{3bc}' => 'µ',
        c => c,
    }
}

/// The unit that a word is, with or without a prefix.
pub(crate) fn unit(word: &str) -> Option<Unit> {
    if word.is_ascii() {
        return unit_of(word);
    }
    unit_of(&word.chars().map(plain).collect::<String>())
}

fn unit_of(word: &str) -> Option<Unit> {
    if let Some((name, dimension, _)) = UNITS.iter().find(|(name, _, _)| *name == word) {
        let (ten, degrees) = match *name {
            "%" => (-2, 0),
            "ppm" => (-6, 0),
            "deg" => (0, 1),
            _ => (0, 0),
        };
        return Some(Unit {
            dimension: *dimension,
            ten,
            degrees,
            share: matches!(*name, "%" | "ppm"),
        });
    }
    let (prefix, ten) = PREFIXES.iter().find(|(p, _)| word.starts_with(p))?;
    let rest = word.strip_prefix(prefix)?;
    let (_, dimension, _) = UNITS
        .iter()
        .find(|(name, _, prefixed)| *prefixed && *name == rest)?;
    Some(Unit {
        dimension: *dimension,
        ten: i64::from(*ten),
        ..Unit::ONE
    })
}

/// A unit's word in canonical letters: `ohm` for the ohm sign, `u` for micro.
pub(crate) fn canonical(word: &str) -> String {
    word.chars()
        .map(plain)
        .map(|c| match c {
            'Ω' => "ohm".to_owned(),
            'µ' => "u".to_owned(),
            c => c.to_string(),
        })
        .collect()
}

/// The value of a number's text in a unit; infinite or zero where it cannot be held.
pub(crate) fn value(number: &str, unit: Unit) -> f64 {
    let plain: String = number.chars().filter(|c| *c != '_').collect();
    let (mantissa, exponent) = match plain.split_once(['e', 'E']) {
        Some((m, e)) => (
            m,
            e.parse::<i64>().unwrap_or(if e.starts_with('-') {
                -1_000_000
            } else {
                1_000_000
            }),
        ),
        None => (plain.as_str(), 0),
    };
    let ten = exponent
        .saturating_add(unit.ten)
        .clamp(-2_000_000_000, 2_000_000_000);
    let value = format!("{mantissa}e{ten}")
        .parse::<f64>()
        .unwrap_or(f64::NAN);
    match unit.degrees {
        0 => value,
        n => value * (std::f64::consts::PI / 180.0).powi(n),
    }
}

/// Units as people write them elsewhere, with what they are here.
const ELSEWHERE: &[(&str, &str)] = &[
    ("ohms", "ohm"),
    ("r", "ohm"),
    ("volt", "V"),
    ("volts", "V"),
    ("amp", "A"),
    ("amps", "A"),
    ("ampere", "A"),
    ("amperes", "A"),
    ("sec", "s"),
    ("second", "s"),
    ("seconds", "s"),
    ("farad", "F"),
    ("farads", "F"),
    ("henry", "H"),
    ("henries", "H"),
    ("joule", "J"),
    ("joules", "J"),
    ("watt", "W"),
    ("watts", "W"),
    ("hertz", "Hz"),
    ("coulomb", "C"),
    ("weber", "Wb"),
    ("siemens", "S"),
    ("mho", "S"),
    ("percent", "%"),
    ("degree", "deg"),
    ("degrees", "deg"),
    ("radians", "rad"),
];

/// The unit that was probably meant by a word that is none.
pub(crate) fn near_unit(word: &str) -> Option<String> {
    if word.chars().count() > 16 {
        return None;
    }
    let word: String = word.chars().map(plain).collect();
    let lower = word.to_lowercase();
    let elsewhere = |w: &str| ELSEWHERE.iter().find(|(a, _)| *a == w).map(|(_, u)| *u);
    if let Some(unit) = elsewhere(&lower) {
        return Some(unit.to_owned());
    }
    same_but_case(&word)
        .or_else(|| same_but_case(word.strip_suffix('s').unwrap_or_default()))
        .or_else(|| with_prefix(&word, elsewhere))
        .or_else(|| without_prefix(&word))
        .or_else(|| misspelt(&word))
}

/// `om`, `ohn`: an edit away from a unit of three letters or more.
fn misspelt(word: &str) -> Option<String> {
    let units: Vec<String> = all_units()
        .filter(|u| u.chars().count() > 2 && u.is_ascii())
        .collect();
    let near = |word: &str| nearest(word, units.iter().map(String::as_str)).map(str::to_owned);
    near(word)
        .filter(|_| word.len() > 1)
        .or_else(|| near(word.strip_suffix('s').filter(|w| w.len() > 1)?))
}

/// `mrad`, `k%`: a unit that takes no prefix.
fn without_prefix(word: &str) -> Option<String> {
    let rest = PREFIXES.iter().find_map(|(p, _)| word.strip_prefix(p))?;
    UNITS
        .iter()
        .find(|(name, _, prefixed)| !*prefixed && *name == rest)
        .map(|(name, _, _)| (*name).to_owned())
}

/// `kvolts`: a prefix before a unit's name of elsewhere.
fn with_prefix(word: &str, elsewhere: impl Fn(&str) -> Option<&'static str>) -> Option<String> {
    PREFIXES.iter().find_map(|(prefix, _)| {
        let unit = elsewhere(&word.strip_prefix(prefix)?.to_lowercase())?;
        UNITS
            .iter()
            .any(|(name, _, prefixed)| *prefixed && *name == unit)
            .then(|| format!("{prefix}{unit}"))
    })
}

/// The unit that differs in capitals alone, in as few as possible: `KV` is `kV`.
fn same_but_case(word: &str) -> Option<String> {
    let lower = word.to_lowercase();
    let differing = |unit: &str| {
        unit.chars()
            .zip(word.chars())
            .filter(|(a, b)| a != b)
            .count()
    };
    all_units()
        .filter(|unit| unit.to_lowercase() == lower)
        .min_by_key(|unit| differing(unit))
}

/// Every unit with every prefix that it takes.
fn all_units() -> impl Iterator<Item = String> {
    UNITS.iter().flat_map(|(name, _, prefixed)| {
        let prefixes: &[(&str, i32)] = if *prefixed { PREFIXES } else { &[] };
        std::iter::once((*name).to_owned())
            .chain(prefixes.iter().map(move |(p, _)| format!("{p}{name}")))
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(number: &str, word: &str) -> f64 {
        value(number, unit(word).unwrap())
    }

    #[test]
    fn a_value_is_the_double_next_to_what_was_written() {
        assert_eq!(read("4.7", "uF"), 4.7e-6);
        for n in 1..1000 {
            assert_eq!(
                read(&format!("{n}"), "nF"),
                format!("{n}e-9").parse::<f64>().unwrap()
            );
        }
    }

    #[test]
    fn a_square_squares_its_prefix() {
        assert_eq!(value("2", unit("kV").unwrap().squared().unwrap()), 2e6);
    }

    #[test]
    fn milli_is_not_mega() {
        assert_eq!(read("5", "mV"), 5e-3);
        assert_eq!(read("5", "MV"), 5e6);
    }

    #[test]
    fn both_code_points_of_micro_and_ohm_are_read() {
        for word in ["µΩ", "\u{3bc}\u{2126}", "uohm"] {
            assert_eq!(read("1", word), 1e-6);
        }
    }

    #[test]
    fn an_exponent_without_end_is_out_of_range_and_no_panic() {
        assert_eq!(read("1e99999999999999999999", "kV"), f64::INFINITY);
        assert_eq!(read("1e-99999999999999999999", "kV"), 0.0);
    }

    #[test]
    fn a_unit_in_the_wrong_capitals_has_a_near_one() {
        for (word, near) in [
            ("Ohm", "ohm"),
            ("KV", "kV"),
            ("mf", "mF"),
            ("kohms", "kohm"),
            ("Mhz", "MHz"),
            ("oms", "ohm"),
        ] {
            assert_eq!(near_unit(word).as_deref(), Some(near), "{word}");
        }
    }

    #[test]
    fn percent_takes_no_prefix() {
        assert_eq!(unit("mrad"), None);
        assert_eq!(near_unit("mrad").as_deref(), Some("rad"));
    }
}

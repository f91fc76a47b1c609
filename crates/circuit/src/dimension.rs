//! Dimensions of electrical quantities, and their units.
//!
//! The base is volt, ampere and second, since every unit of the language is a product of
//! their powers (`ohm` is V/A, `J` is V A s). Exponents are counted in sixtieths, so that
//! roots and fractional powers stay exact.

use std::fmt;

/// How many counts make an exponent of 1.
pub const ONE: i16 = 60;

/// Exponents of volt, ampere and second, in sixtieths.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub struct Dimension {
    /// Of the volt.
    pub volt: i16,
    /// Of the ampere.
    pub ampere: i16,
    /// Of the second.
    pub second: i16,
}

impl Dimension {
    /// A plain number.
    pub const NONE: Dimension = Dimension::new(0, 0, 0);
    /// V
    pub const VOLT: Dimension = Dimension::new(1, 0, 0);
    /// A
    pub const AMPERE: Dimension = Dimension::new(0, 1, 0);
    /// s
    pub const SECOND: Dimension = Dimension::new(0, 0, 1);
    /// ohm
    pub const OHM: Dimension = Dimension::new(1, -1, 0);
    /// S
    pub const SIEMENS: Dimension = Dimension::new(-1, 1, 0);
    /// F
    pub const FARAD: Dimension = Dimension::new(-1, 1, 1);
    /// H
    pub const HENRY: Dimension = Dimension::new(1, -1, 1);
    /// Hz
    pub const HERTZ: Dimension = Dimension::new(0, 0, -1);
    /// J
    pub const JOULE: Dimension = Dimension::new(1, 1, 1);
    /// W
    pub const WATT: Dimension = Dimension::new(1, 1, 0);
    /// C
    pub const COULOMB: Dimension = Dimension::new(0, 1, 1);
    /// Wb, which is V s
    pub const WEBER: Dimension = Dimension::new(1, 0, 1);
    /// A²·s
    pub const ACTION: Dimension = Dimension::new(0, 2, 1);

    /// Whole exponents of volt, ampere and second.
    #[must_use]
    pub const fn new(volt: i16, ampere: i16, second: i16) -> Self {
        Dimension {
            volt: volt * ONE,
            ampere: ampere * ONE,
            second: second * ONE,
        }
    }

    /// Whether it is that of a plain number.
    #[must_use]
    pub fn is_none(self) -> bool {
        self == Dimension::NONE
    }

    /// The product's dimension; `None` where an exponent grows past what is kept (±500).
    #[must_use]
    pub fn times(self, other: Dimension) -> Option<Dimension> {
        Some(Dimension {
            volt: add(self.volt, other.volt)?,
            ampere: add(self.ampere, other.ampere)?,
            second: add(self.second, other.second)?,
        })
    }

    /// The quotient's dimension; `None` as for [`Dimension::times`].
    #[must_use]
    pub fn over(self, other: Dimension) -> Option<Dimension> {
        self.times(Dimension {
            volt: -other.volt,
            ampere: -other.ampere,
            second: -other.second,
        })
    }

    /// The dimension of a power; `None` where an exponent would be no whole sixtieth, or too
    /// large.
    #[must_use]
    pub fn power(self, exponent: f64) -> Option<Dimension> {
        Some(Dimension {
            volt: scale(self.volt, exponent)?,
            ampere: scale(self.ampere, exponent)?,
            second: scale(self.second, exponent)?,
        })
    }

    /// What a quantity of this dimension is called (`a resistance`), where the trade has a word.
    #[must_use]
    pub fn quantity(self) -> Option<&'static str> {
        NAMED
            .iter()
            .find(|(d, _, _)| *d == self)
            .map(|(_, _, q)| *q)
    }

    /// The coherent SI unit: `J`, `V/us` never, `A²*s` as such; empty for a plain number.
    #[must_use]
    pub fn unit(self) -> String {
        if let Some((_, unit, _)) = NAMED.iter().find(|(d, _, _)| *d == self) {
            return (*unit).to_owned();
        }
        let (mut above, mut below) = (Vec::new(), Vec::new());
        for (name, count) in [("V", self.volt), ("A", self.ampere), ("s", self.second)] {
            if count > 0 {
                above.push(factor(name, count));
            } else if count < 0 {
                below.push(factor(name, -count));
            }
        }
        let top = if above.is_empty() {
            "1".to_owned()
        } else {
            above.join("*")
        };
        match below.len() {
            0 => top,
            1 => format!("{top}/{}", below.join("*")),
            _ => format!("{top}/({})", below.join("*")),
        }
    }
}

impl fmt::Display for Dimension {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.is_none() {
            f.write_str("a number without a unit")
        } else {
            f.write_str(&self.unit())
        }
    }
}

fn add(a: i16, b: i16) -> Option<i16> {
    a.checked_add(b).filter(|x| x.abs() <= 500 * ONE)
}

fn scale(count: i16, exponent: f64) -> Option<i16> {
    let x = f64::from(count) * exponent;
    let whole = x.round();
    #[allow(clippy::cast_possible_truncation, reason = "checked to fit")]
    ((x - whole).abs() < 1e-6 && whole.abs() <= f64::from(500 * ONE)).then_some(whole as i16)
}

fn factor(name: &str, count: i16) -> String {
    match (count / ONE, count % ONE) {
        (1, 0) => name.to_owned(),
        (2, 0) => format!("{name}²"),
        (n, 0) => std::iter::repeat_n(name, usize::from(n.unsigned_abs()))
            .collect::<Vec<_>>()
            .join("*"),
        _ => format!("{name}^({count}/{ONE})"),
    }
}

/// Dimensions with a unit and a word of their own.
const NAMED: &[(Dimension, &str, &str)] = &[
    (Dimension::NONE, "", "a number without a unit"),
    (Dimension::VOLT, "V", "a voltage"),
    (Dimension::AMPERE, "A", "a current"),
    (Dimension::SECOND, "s", "a time"),
    (Dimension::OHM, "ohm", "a resistance"),
    (Dimension::SIEMENS, "S", "a conductance"),
    (Dimension::FARAD, "F", "a capacitance"),
    (Dimension::HENRY, "H", "an inductance"),
    (Dimension::HERTZ, "Hz", "a frequency"),
    (Dimension::JOULE, "J", "an energy"),
    (Dimension::WATT, "W", "a power"),
    (Dimension::COULOMB, "C", "a charge"),
    (Dimension::WEBER, "V*s", "a flux"),
    (Dimension::ACTION, "A²*s", "an action"),
];

/// The units of the language without prefix: name, dimension, whether a prefix may stand.
pub const UNITS: &[(&str, Dimension, bool)] = &[
    ("V", Dimension::VOLT, true),
    ("A", Dimension::AMPERE, true),
    ("ohm", Dimension::OHM, true),
    ("Ω", Dimension::OHM, true),
    ("S", Dimension::SIEMENS, true),
    ("F", Dimension::FARAD, true),
    ("H", Dimension::HENRY, true),
    ("s", Dimension::SECOND, true),
    ("Hz", Dimension::HERTZ, true),
    ("J", Dimension::JOULE, true),
    ("W", Dimension::WATT, true),
    ("C", Dimension::COULOMB, true),
    ("Wb", Dimension::WEBER, true),
    ("rad", Dimension::NONE, false),
    ("deg", Dimension::NONE, false),
    ("%", Dimension::NONE, false),
    ("ppm", Dimension::NONE, false),
];

/// SI prefixes of the language with their powers of ten.
pub const PREFIXES: &[(&str, i32)] = &[
    ("f", -15),
    ("p", -12),
    ("n", -9),
    ("u", -6),
    ("µ", -6),
    ("m", -3),
    ("k", 3),
    ("M", 6),
    ("G", 9),
    ("T", 12),
];

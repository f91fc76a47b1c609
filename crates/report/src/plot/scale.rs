//! Axes: from values to places, with ticks at round values.
//!
//! Ticks stand at 1, 2 or 5 times a power of ten, minor ones between them, in one SI prefix for
//! the whole axis. Tick values are multiples of the step by whole numbers, never running sums, so
//! that zero is zero.

use crate::number::{Scale, printed};

/// A value worth a mark on an axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Tick {
    /// The value, in coherent SI units.
    pub value: f64,
    /// What stands beside it, in the axis's prefix; empty for a minor tick.
    pub label: String,
}

/// A linear axis from one value to a larger one.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// The value at its start, in coherent SI units.
    pub low: f64,
    /// The value at its end.
    pub high: f64,
    /// The unit with the axis's prefix: `kV`; empty for a plain number.
    pub unit: String,
    /// Values are divided by this to be shown.
    divisor: f64,
    step: f64,
    minor: u32,
}

impl Axis {
    /// An axis over these values, with some `count` ticks.
    #[must_use]
    pub fn over(low: f64, high: f64, unit: &str, count: u32) -> Self {
        let (low, high) = apart(low, high);
        let raw = high / f64::from(count.max(1)) - low / f64::from(count.max(1));
        let power = 10f64.powf(raw.log10().floor());
        let (step, minor) = match raw / power {
            x if x <= 1.0 + 1e-9 => (power, 5),
            x if x <= 2.0 + 1e-9 => (2.0 * power, 4),
            x if x <= 5.0 + 1e-9 => (5.0 * power, 5),
            _ => (10.0 * power, 5),
        };
        let scale = Scale::of(unit, [low, high]);
        Axis {
            low,
            high,
            unit: if scale.suffix().is_empty() {
                printed(unit)
            } else {
                scale.suffix().to_owned()
            },
            divisor: scale.divisor(),
            step: step.max(f64::MIN_POSITIVE),
            minor,
        }
    }

    /// Where a value is, from 0 at the start to 1 at the end.
    #[must_use]
    pub fn share(&self, value: f64) -> f64 {
        // Halved first, so that the greatest numbers do not overflow.
        (value / 2.0 - self.low / 2.0) / (self.high / 2.0 - self.low / 2.0)
    }

    /// The ticks with labels.
    #[must_use]
    pub fn ticks(&self) -> Vec<Tick> {
        self.multiples(self.step)
            .into_iter()
            .map(|(_, value)| Tick {
                value,
                label: self.label(value),
            })
            .collect()
    }

    /// The values of the ticks between those.
    #[must_use]
    pub fn minor_ticks(&self) -> Vec<f64> {
        let all = self.multiples(self.step / f64::from(self.minor));
        let between = |(k, _): &(i64, f64)| k.rem_euclid(i64::from(self.minor)) != 0;
        all.into_iter().filter(between).map(|(_, v)| v).collect()
    }

    /// Multiples of a step inside the axis; none where rounding leaves no room for them.
    fn multiples(&self, step: f64) -> Vec<(i64, f64)> {
        let slack = 1e-9;
        let (first, last) = (
            (self.low / step - slack).ceil(),
            (self.high / step + slack).floor(),
        );
        if !(first.abs() < 1e12 && last.abs() < 1e12 && last - first < 1e3) {
            return Vec::new();
        }
        (first as i64..=last as i64)
            .map(|k| (k, k as f64 * step))
            .collect()
    }

    /// The label of a value, to the place of the ticks' step.
    fn label(&self, value: f64) -> String {
        let place = (self.step / self.divisor).log10();
        let decimals = if place < 0.0 {
            (-place - 1e-9).ceil()
        } else {
            0.0
        };
        let decimals = format!("{decimals:.0}")
            .parse::<usize>()
            .unwrap_or(0)
            .min(12);
        let text = format!("{:.decimals$}", (value / self.divisor).abs());
        if value < 0.0 && text.bytes().any(|b| matches!(b, b'1'..=b'9')) {
            format!("−{text}")
        } else {
            text
        }
    }
}

/// Two values with room between them.
fn apart(low: f64, high: f64) -> (f64, f64) {
    let finite = |x: f64| x.clamp(-f64::MAX / 4.0, f64::MAX / 4.0);
    let (low, high) = if low.is_nan() || high.is_nan() {
        (0.0, 0.0)
    } else {
        (finite(low.min(high)), finite(low.max(high)))
    };
    let size = low.abs().max(high.abs());
    if high - low > 1e-12 * size && high - low > 1e-290 {
        (low, high)
    } else if size > 1e-280 {
        (low - size / 2.0, high + size / 2.0)
    } else {
        (-1.0, 1.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn labels(axis: &Axis) -> Vec<String> {
        axis.ticks().into_iter().map(|t| t.label).collect()
    }

    #[test]
    fn ticks_are_round_and_in_one_prefix() {
        let axis = Axis::over(-1300.0, 2543.0, "V", 4);
        assert_eq!(labels(&axis), ["−1", "0", "1", "2"]);
        assert_eq!(axis.unit, "kV");
        let axis = Axis::over(0.0, 0.05, "s", 6);
        assert_eq!(labels(&axis), ["0", "10", "20", "30", "40", "50"]);
        assert_eq!(axis.unit, "ms");
        assert_eq!(axis.minor_ticks().len(), 20);
    }

    #[test]
    fn a_step_below_the_prefix_shows_its_decimals() {
        let axis = Axis::over(1e-3, 1.0012e-3, "s", 6);
        assert_eq!(labels(&axis)[..2], ["1.0000", "1.0002"]);
    }

    #[test]
    fn values_without_room_get_some() {
        for (low, high) in [
            (0.0, 0.0),
            (5.0, 5.0),
            (f64::NAN, 1.0),
            (f64::NEG_INFINITY, f64::INFINITY),
            (1e-320, 2e-320),
            (-1e308, 1e308),
        ] {
            let axis = Axis::over(low, high, "V", 5);
            assert!(axis.low < axis.high, "{low} {high}");
            assert!(axis.share(0.0).is_finite());
            assert!(axis.ticks().len() < 30);
        }
    }

    #[test]
    fn the_ends_are_at_0_and_1() {
        let axis = Axis::over(-1.0, 3.0, "", 4);
        assert_eq!((axis.share(axis.low), axis.share(axis.high)), (0.0, 1.0));
    }
}

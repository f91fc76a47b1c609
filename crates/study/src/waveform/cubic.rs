//! One piece of a signal: the cubic with given values and slopes at both ends.
//!
//! With `x = (t - t0) / h`, `d = v1 - v0` and slopes `s0`, `s1` in units per second,
//!
//! ```text
//! v(x) = v0 + a x + b x² + c x³,   a = h s0,  b = 3 d - h (2 s0 + s1),  c = h (s0 + s1) - 2 d
//! ```
//!
//! Its extrema are the zeros of a quadratic, its steepest slope lies at an end or where
//! `b + 3 c x = 0`, and its integral is `h (v0 + v1) / 2 + h² (s0 - s1) / 12`. The four Bézier
//! ordinates enclose it, so that most pieces are dismissed without solving anything.

/// A cubic piece from `t0` to `t1`, s; values in the signal's unit, slopes in that unit per
/// second.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Cubic {
    /// Start, s.
    pub t0: f64,
    /// End, s, above the start.
    pub t1: f64,
    /// Value at the start.
    pub v0: f64,
    /// Value at the end.
    pub v1: f64,
    /// Slope at the start.
    pub s0: f64,
    /// Slope at the end.
    pub s1: f64,
}

/// Nodes and weights of the four-point Gauss rule on 0 to 1: exact up to degree 7.
const GAUSS: [(f64, f64); 4] = [
    (0.069_431_844_202_973_71, 0.173_927_422_568_726_93),
    (0.330_009_478_207_571_87, 0.326_072_577_431_273_07),
    (0.669_990_521_792_428_1, 0.326_072_577_431_273_07),
    (0.930_568_155_797_026_3, 0.173_927_422_568_726_93),
];

impl Cubic {
    /// Its length, s.
    #[must_use]
    pub fn length(&self) -> f64 {
        self.t1 - self.t0
    }

    fn coefficients(&self) -> (f64, f64, f64) {
        let (h, d) = (self.length(), self.v1 - self.v0);
        (
            h * self.s0,
            3.0 * d - h * (2.0 * self.s0 + self.s1),
            h * (self.s0 + self.s1) - 2.0 * d,
        )
    }

    fn share(&self, t: f64) -> f64 {
        ((t - self.t0) / self.length()).clamp(0.0, 1.0)
    }

    fn instant(&self, x: f64) -> f64 {
        if x >= 1.0 {
            self.t1
        } else {
            self.t0 + x * self.length()
        }
    }

    /// The value at `t`, s; that of the nearer end outside.
    #[must_use]
    pub fn value(&self, t: f64) -> f64 {
        self.value_at(self.share(t))
    }

    fn value_at(&self, x: f64) -> f64 {
        if x <= 0.0 {
            return self.v0;
        }
        if x >= 1.0 {
            return self.v1;
        }
        let (a, b, c) = self.coefficients();
        self.v0 + x * (a + x * (b + x * c))
    }

    /// The slope at `t`.
    #[must_use]
    pub fn slope(&self, t: f64) -> f64 {
        self.slope_at(self.share(t))
    }

    fn slope_at(&self, x: f64) -> f64 {
        if x <= 0.0 {
            return self.s0;
        }
        if x >= 1.0 {
            return self.s1;
        }
        let (a, b, c) = self.coefficients();
        (a + x * (2.0 * b + x * 3.0 * c)) / self.length()
    }

    /// The second derivative at `t`, per s².
    #[must_use]
    pub fn bend(&self, t: f64) -> f64 {
        let (_, b, c) = self.coefficients();
        let h = self.length();
        (2.0 * b + 6.0 * c * self.share(t)) / (h * h)
    }

    /// The same curve between `from` and `to`, which lie inside.
    #[must_use]
    pub fn between(&self, from: f64, to: f64) -> Cubic {
        if from <= self.t0 && to >= self.t1 {
            return *self;
        }
        let (from, to) = (from.max(self.t0), to.min(self.t1));
        Cubic {
            t0: from,
            t1: to,
            v0: self.value(from),
            v1: self.value(to),
            s0: self.slope(from),
            s1: self.slope(to),
        }
    }

    /// `k` times the curve less `level`.
    #[must_use]
    pub fn scaled(&self, k: f64, level: f64) -> Cubic {
        Cubic {
            v0: k * self.v0 - level,
            v1: k * self.v1 - level,
            s0: k * self.s0,
            s1: k * self.s1,
            ..*self
        }
    }

    /// Two numbers that enclose all its values.
    #[must_use]
    pub fn hull(&self) -> (f64, f64) {
        let third = self.length() / 3.0;
        let (p, q) = (self.v0 + third * self.s0, self.v1 - third * self.s1);
        (
            self.v0.min(self.v1).min(p).min(q),
            self.v0.max(self.v1).max(p).max(q),
        )
    }

    /// The shares of its length, inside, at which the slope is zero, ascending.
    fn flat(&self) -> [Option<f64>; 2] {
        let (a, b, c) = self.coefficients();
        let inside = |x: f64| (x > 0.0 && x < 1.0).then_some(x);
        let (p, q) = (3.0 * c, 2.0 * b);
        if p == 0.0 {
            return [if q == 0.0 { None } else { inside(-a / q) }, None];
        }
        let discriminant = q * q - 4.0 * p * a;
        if discriminant <= 0.0 || discriminant.is_nan() {
            return [None, None];
        }
        let w = -0.5 * (q + q.signum() * discriminant.sqrt());
        let (x, y) = (w / p, if w == 0.0 { f64::NAN } else { a / w });
        let (x, y) = if y < x { (y, x) } else { (x, y) };
        match (inside(x), inside(y)) {
            (None, second) => [second, None],
            both => [both.0, both.1],
        }
    }

    /// Instants inside at which it turns, ascending, with the values there.
    pub fn turns(&self) -> impl Iterator<Item = (f64, f64)> + '_ {
        self.flat()
            .into_iter()
            .flatten()
            .map(|x| (self.instant(x), self.value_at(x)))
    }

    /// The largest absolute slope, and where, s.
    #[must_use]
    pub fn steepest(&self) -> (f64, f64) {
        let (_, b, c) = self.coefficients();
        let middle = if c == 0.0 {
            0.0
        } else {
            (-b / (3.0 * c)).clamp(0.0, 1.0)
        };
        let mut best = (self.s0.abs(), self.t0);
        for x in [middle, 1.0] {
            let slope = self.slope_at(x).abs();
            if slope > best.0 {
                best = (slope, self.instant(x));
            }
        }
        best
    }

    /// The largest absolute value, and where, s.
    #[must_use]
    pub fn largest(&self) -> (f64, f64) {
        let ends = [(self.t0, self.v0), (self.t1, self.v1)]
            .into_iter()
            .chain(self.turns());
        ends.fold((0.0, self.t0), |best, (t, v)| {
            if v.abs() > best.0 { (v.abs(), t) } else { best }
        })
    }

    /// The zero near `t`, s, within a length of it, by Newton's method; it may lie a little outside.
    #[must_use]
    pub fn zero_near(&self, t: f64) -> Option<f64> {
        let (a, b, c) = self.coefficients();
        let h = self.length();
        let start = (t - self.t0) / h;
        let mut x = start;
        for _ in 0..8 {
            x -= (self.v0 + x * (a + x * (b + x * c))) / (a + x * (2.0 * b + x * 3.0 * c));
        }
        ((x - start).abs() < 1.0).then_some(self.t0 + x * h)
    }

    /// Its integral, unit times s.
    #[must_use]
    pub fn integral(&self) -> f64 {
        let h = self.length();
        h * (0.5 * (self.v0 + self.v1) + h * (self.s0 - self.s1) / 12.0)
    }

    /// The integral of the product with another curve over the same stretch of time.
    #[must_use]
    pub fn product(&self, other: &Cubic) -> f64 {
        let sum: f64 = GAUSS
            .iter()
            .map(|(x, w)| w * self.value_at(*x) * other.value_at(*x))
            .sum();
        sum * self.length()
    }

    /// Splits it at its zeros: each part with its sign; a part is zero (sign 0) where its curve
    /// stays within `noise` of it. At most seven parts come out, in order of time.
    pub fn signs(&self, noise: f64, mut emit: impl FnMut(f64, f64, i8)) {
        let (low, high) = self.hull();
        if low > noise {
            return emit(self.t0, self.t1, 1);
        }
        if high < -noise {
            return emit(self.t0, self.t1, -1);
        }
        let mut start = 0.0;
        for end in self.flat().into_iter().flatten().chain([1.0]) {
            if end > start {
                self.monotone_signs(start, end, noise, &mut emit);
            }
            start = end;
        }
    }

    fn monotone_signs(&self, from: f64, to: f64, noise: f64, emit: &mut impl FnMut(f64, f64, i8)) {
        let sign = |v: f64| {
            if v > noise {
                1
            } else if v < -noise {
                -1
            } else {
                0_i8
            }
        };
        let (y, z) = (self.value_at(from), self.value_at(to));
        let (a, b) = (self.instant(from), self.instant(to));
        match (sign(y), sign(z)) {
            (0, 0) => emit(a, b, 0),
            (p, q) if p * q < 0 => {
                let root = self.instant(self.root(from, to));
                emit(a, root, p);
                emit(root, b, q);
            }
            (p, q) => emit(a, b, if p == 0 { q } else { p }),
        }
    }

    /// The zero between two shares of the length with values of opposite sign, by Newton's
    /// method kept inside a shrinking bracket.
    fn root(&self, mut low: f64, mut high: f64) -> f64 {
        let (a, b, c) = self.coefficients();
        let rising = self.value_at(low) < 0.0;
        let mut x = 0.5 * (low + high);
        for _ in 0..100 {
            let v = self.v0 + x * (a + x * (b + x * c));
            if v == 0.0 {
                return x;
            }
            if (v < 0.0) == rising {
                low = x;
            } else {
                high = x;
            }
            let newton = x - v / (a + x * (2.0 * b + x * 3.0 * c));
            let next = if newton > low && newton < high {
                newton
            } else {
                0.5 * (low + high)
            };
            if (next - x).abs() <= f64::EPSILON * 0.5 {
                return next;
            }
            x = next;
        }
        x
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// 2 - 3 t + t³ between 0 and 2.
    fn sample() -> Cubic {
        Cubic {
            t0: 0.0,
            t1: 2.0,
            v0: 2.0,
            v1: 4.0,
            s0: -3.0,
            s1: 9.0,
        }
    }

    #[test]
    fn a_cubic_is_reproduced() {
        for t in [0.0_f64, 0.3, 1.0, 1.7, 2.0] {
            assert!((sample().value(t) - (2.0 - 3.0 * t + t.powi(3))).abs() < 1e-14);
            assert!((sample().slope(t) - (3.0 * t * t - 3.0)).abs() < 1e-14);
            assert!((sample().bend(t) - 6.0 * t).abs() < 1e-13);
        }
    }

    #[test]
    fn its_turn_is_found() {
        let turns: Vec<_> = sample().turns().collect();
        assert_eq!(turns.len(), 1);
        assert!((turns[0].0 - 1.0).abs() < 1e-15 && turns[0].1.abs() < 1e-15);
    }

    #[test]
    fn its_integral_is_exact() {
        assert!((sample().integral() - 2.0).abs() < 1e-14);
        let part = sample().between(0.5, 1.5);
        let exact = |t: f64| 2.0 * t - 1.5 * t * t + 0.25 * t.powi(4);
        assert!((part.integral() - exact(1.5) + exact(0.5)).abs() < 1e-14);
    }

    #[test]
    fn the_product_of_two_cubics_is_integrated_exactly() {
        // (2 - 3 t + t³)² = 4 - 12 t + 9 t² + 4 t³ - 6 t⁴ + t⁶
        let exact = 8.0 - 24.0 + 24.0 + 16.0 - 6.0 * 32.0 / 5.0 + 128.0 / 7.0;
        assert!((sample().product(&sample()) - exact).abs() < 1e-13);
    }

    #[test]
    fn three_zeros_make_four_parts() {
        // (x - 0.2)(x - 0.5)(x - 0.9)
        let f = |x: f64| (x - 0.2) * (x - 0.5) * (x - 0.9);
        let d = |x: f64| 3.0 * x * x - 3.2 * x + 0.73;
        let c = Cubic {
            t0: 0.0,
            t1: 1.0,
            v0: f(0.0),
            v1: f(1.0),
            s0: d(0.0),
            s1: d(1.0),
        };
        let mut found = Vec::new();
        c.signs(0.0, |a, b, s| found.push((a, b, s)));
        let mut changes = Vec::new();
        for pair in found.windows(2) {
            if pair[0].2 != pair[1].2 {
                changes.push(pair[1].0);
            }
        }
        assert_eq!(changes.len(), 3);
        for (got, want) in changes.iter().zip([0.2, 0.5, 0.9]) {
            assert!((got - want).abs() < 1e-14, "{got}");
        }
    }

    #[test]
    fn a_touch_changes_no_sign() {
        // (t - 1)² between 0 and 2
        let c = Cubic {
            t0: 0.0,
            t1: 2.0,
            v0: 1.0,
            v1: 1.0,
            s0: -2.0,
            s1: 2.0,
        };
        let mut found = Vec::new();
        c.signs(1e-15, |_, _, s| found.push(s));
        assert!(found.iter().all(|s| *s == 1));
    }
}

//! The exact interval of a share after k of n trials (Clopper and Pearson 1934).
//!
//! Its ends are the shares at which as many successes, or as few, would come with a probability
//! of α/2:
//!
//! ```text
//! P(X >= k | low) = I_low(k, n - k + 1) = α/2        low = 0 for k = 0
//! P(X <= k | high) = 1 - I_high(k + 1, n - k) = α/2  high = 1 for k = n
//! ```
//!
//! with the regularised incomplete beta function I, taken by its continued fraction; the ends
//! are found by halving.

/// The confidence of the intervals.
pub const CONFIDENCE: f64 = 0.95;

/// The ends of the interval after `k` successes in `n` trials.
pub fn interval(k: u64, n: u64) -> (f64, f64) {
    let tail = (1.0 - CONFIDENCE) / 2.0;
    #[allow(clippy::cast_precision_loss, reason = "counts of shots")]
    let (x, y) = (k as f64, n.saturating_sub(k) as f64);
    let low = if k == 0 {
        0.0
    } else {
        root(&|p| beta(p, x, y + 1.0) < tail)
    };
    let high = if k >= n {
        1.0
    } else {
        root(&|p| 1.0 - beta(p, x + 1.0, y) > tail)
    };
    (low, high)
}

/// The share up to which `below` holds.
fn root(below: &dyn Fn(f64) -> bool) -> f64 {
    let (mut low, mut high) = (0.0_f64, 1.0_f64);
    for _ in 0..200 {
        let middle = f64::midpoint(low, high);
        if middle <= low || middle >= high {
            break;
        }
        if below(middle) {
            low = middle;
        } else {
            high = middle;
        }
    }
    f64::midpoint(low, high)
}

/// I_x(a, b).
fn beta(x: f64, a: f64, b: f64) -> f64 {
    if x <= 0.0 {
        return 0.0;
    }
    if x >= 1.0 {
        return 1.0;
    }
    let front = libm::lgamma(a + b) - libm::lgamma(a) - libm::lgamma(b)
        + a * libm::log(x)
        + b * libm::log1p(-x);
    let front = libm::exp(front);
    if x < (a + 1.0) / (a + b + 2.0) {
        front * fraction(x, a, b) / a
    } else {
        1.0 - front * fraction(1.0 - x, b, a) / b
    }
}

/// The continued fraction of I_x(a, b), evaluated from the front (Lentz 1976).
fn fraction(x: f64, a: f64, b: f64) -> f64 {
    let safe = |v: f64| if v.abs() < 1e-300 { 1e-300 } else { v };
    let (mut c, mut d) = (1.0, 1.0 / safe(1.0 - (a + b) * x / (a + 1.0)));
    let mut value = d;
    for m in 1..100_000 {
        let m = f64::from(m);
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        let mut step = 1.0;
        for term in [even, odd] {
            d = 1.0 / safe(1.0 + term * d);
            c = safe(1.0 + term / c);
            step = c * d;
            value *= step;
        }
        if (step - 1.0_f64).abs() < 1e-15 {
            break;
        }
    }
    value
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(k: u64, n: u64, low: f64, high: f64) {
        let found = interval(k, n);
        assert!((found.0 - low).abs() < 6e-5, "{k} of {n}: {found:?}");
        assert!((found.1 - high).abs() < 6e-5, "{k} of {n}: {found:?}");
    }

    /// Newcombe (1998), Statistics in Medicine 17, method 5, to its four decimals; from memory, and
    /// confirmed by the sums that define them.
    #[test]
    fn published_intervals() {
        check(81, 263, 0.2527, 0.3676);
        check(15, 148, 0.0578, 0.1617);
        check(0, 20, 0.0, 0.1684);
        check(1, 29, 0.0009, 0.1776);
    }

    #[test]
    fn none_and_all_have_closed_forms() {
        for n in [1_u64, 10, 10_000, 1_000_000] {
            #[allow(clippy::cast_precision_loss)]
            let one = 0.025_f64.powf(1.0 / n as f64);
            assert!((interval(n, n).0 - one).abs() < 1e-11);
            assert!((interval(0, n).1 - (1.0 - one)).abs() < 1e-11);
            assert_eq!((interval(n, n).1, interval(0, n).0), (1.0, 0.0));
        }
    }

    /// Each end against the sum of the binomial distribution that defines it.
    #[test]
    fn the_ends_have_their_probabilities() {
        let (k, n) = (9731_u32, 10_000_u32);
        let (low, high) = interval(u64::from(k), u64::from(n));
        let tail = |p: f64, from: u32, to: u32| {
            let choose = |j: u32| {
                libm::lgamma(f64::from(n) + 1.0)
                    - libm::lgamma(f64::from(j) + 1.0)
                    - libm::lgamma(f64::from(n - j) + 1.0)
            };
            (from..=to)
                .map(|j| {
                    (choose(j) + f64::from(j) * p.ln() + f64::from(n - j) * (1.0 - p).ln()).exp()
                })
                .sum::<f64>()
        };
        assert!((tail(low, k, n) - 0.025).abs() < 1e-9);
        assert!((tail(high, 0, k) - 0.025).abs() < 1e-9);
    }
}

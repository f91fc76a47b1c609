//! Numbers for random circuits and random damage: the same on every machine for a seed.
//!
//! SplitMix64 (Steele, Lea and Flood, 2014): a counter times a constant, mixed.

/// A source of random numbers.
#[derive(Clone, Debug)]
pub struct Random(u64);

impl Random {
    /// The stream of a seed.
    #[must_use]
    pub fn new(seed: u64) -> Self {
        Random(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15))
    }

    /// 64 random bits.
    pub fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// A whole number from 0 to `n` - 1; 0 for `n` = 0.
    pub fn below(&mut self, n: usize) -> usize {
        let n = u64::try_from(n).unwrap_or(u64::MAX).max(1);
        usize::try_from(self.bits() % n).unwrap_or(0)
    }

    /// Between 0 and 1.
    #[allow(clippy::cast_precision_loss, reason = "53 bits fit")]
    pub fn unit(&mut self) -> f64 {
        (self.bits() >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// Between two values.
    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }

    /// Between two positive values, evenly in the logarithm, rounded to four digits so that it
    /// can be written.
    pub fn decade(&mut self, low: f64, high: f64) -> f64 {
        let x = (self.between(low.ln(), high.ln())).exp();
        format!("{x:.3e}").parse().unwrap_or(x)
    }
}

//! Draws: where every value stands within its spread in one shot of a study.
//!
//! A pure function of (seed, draw, value): the seed keys ChaCha with eight rounds, the draw is
//! its stream, the value's place in [`Circuit::varying`] the word in it. So draw k is the same
//! alone, in a slice, on any thread, and in every case, which are thereby compared draw by draw.

use pulsewright_circuit::vary::Law;
use pulsewright_circuit::{Circuit, Positions};
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

use super::normal;

/// The positions of draw `draw`, counted from 1, of the study with that seed.
#[must_use]
pub fn draw(circuit: &Circuit, seed: u64, draw: u64) -> Positions {
    let laws: Vec<Law> = circuit.varying().iter().map(|v| v.law).collect();
    at(&laws, seed, draw)
}

/// The same for values distributed so.
pub(super) fn at(laws: &[Law], seed: u64, draw: u64) -> Positions {
    let mut words = ChaCha8Rng::seed_from_u64(seed);
    words.set_stream(draw);
    laws.iter()
        .map(|law| position(*law, words.next_u64()))
        .collect()
}

fn position(law: Law, word: u64) -> f64 {
    // The middle of one of 2^53 equal cells: never 0 or 1.
    #[allow(clippy::cast_precision_loss, reason = "53 bits")]
    let u = ((word >> 11) as f64 + 0.5) / (1u64 << 53) as f64;
    match law {
        Law::Normal => normal::quantile(u) / 3.0,
        _ => 2.0 * u - 1.0,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_draw_is_a_function_of_seed_draw_and_value() {
        let laws = [Law::Even, Law::Normal, Law::Even];
        assert_eq!(at(&laws, 1, 7), at(&laws, 1, 7));
        assert_ne!(at(&laws, 1, 7), at(&laws, 1, 8));
        assert_ne!(at(&laws, 1, 7), at(&laws, 2, 7));
        let fewer = at(&laws[..2], 1, 7);
        assert_eq!(fewer.as_slice(), &at(&laws, 1, 7).as_slice()[..2]);
    }

    /// Mean and variance of an even position are 0 and 1/3; of a normal one, cut at three
    /// deviations, 0 and (1 - 6 φ(3) / (1 - 2 Φ(-3))) / 9. Four deviations of the mean of 20,000.
    #[test]
    fn positions_have_the_moments_of_their_laws() {
        let cut = 1.0 - 6.0 * 0.004_431_848_411_938_008 / 0.997_300_203_936_739_8;
        for (law, variance) in [(Law::Even, 1.0 / 3.0), (Law::Normal, cut / 9.0)] {
            let n = 20_000;
            let all: Vec<f64> = (1..=n)
                .filter_map(|k| at(&[law], 3, k).as_slice()[0])
                .collect();
            let mean = all.iter().sum::<f64>() / 2e4;
            let square = all.iter().map(|p| p * p).sum::<f64>() / 2e4;
            assert!(all.iter().all(|p| (-1.0..=1.0).contains(p)));
            assert!(
                mean.abs() < 4.0 * f64::sqrt(variance / 2e4),
                "{law:?} {mean}"
            );
            assert!((square / variance - 1.0).abs() < 0.04, "{law:?} {square}");
        }
    }
}

//! A small seeded generator: SplitMix64 (G. L. Steele, D. Lea, C. H. Flood, OOPSLA 2014). Never a platform-sized integer.

use statrs::function::erf::erfc_inv;

/// The generator; equal seeds give equal sequences everywhere.
#[derive(Clone, Debug)]
pub struct SplitMix64 {
    state: u64,
}

impl SplitMix64 {
    /// Starts a sequence.
    pub fn new(seed: u64) -> SplitMix64 {
        SplitMix64 { state: seed }
    }

    /// The next 64 bits.
    pub fn bits(&mut self) -> u64 {
        self.state = self.state.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.state;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// Uniform in the open interval from 0 to 1, a multiple of 2⁻⁵⁴.
    pub fn unit(&mut self) -> f64 {
        ((self.bits() >> 11) as f64 + 0.5) / 9_007_199_254_740_992.0
    }

    /// Uniform between two numbers.
    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }

    /// Uniform over 0 … n − 1.
    pub fn below(&mut self, n: u64) -> u64 {
        ((u128::from(self.bits()) * u128::from(n)) >> 64) as u64
    }

    /// True with this probability.
    pub fn chance(&mut self, probability: f64) -> bool {
        self.unit() < probability
    }

    /// One of several.
    ///
    /// # Panics
    /// Where there is none to choose from.
    pub fn one_of<'a, T>(&mut self, choices: &'a [T]) -> &'a T {
        &choices[self.below(choices.len() as u64) as usize]
    }

    /// Standard normal, by the inverse distribution function.
    pub fn normal(&mut self) -> f64 {
        -std::f64::consts::SQRT_2 * erfc_inv(2.0 * self.unit())
    }

    /// Puts a list into random order (Fisher–Yates).
    pub fn shuffle<T>(&mut self, list: &mut [T]) {
        for last in (1..list.len()).rev() {
            let other = self.below(last as u64 + 1) as usize;
            list.swap(last, other);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// First outputs for seed 1234567, as listed with the reference implementation (from memory).
    #[test]
    fn bits_are_those_of_the_reference_implementation() {
        let mut random = SplitMix64::new(1_234_567);
        let first: Vec<u64> = (0..3).map(|_| random.bits()).collect();
        assert_eq!(first, [6_457_827_717_110_365_317, 3_203_168_211_198_807_973, 9_817_491_932_198_370_423]);
    }

    #[test]
    fn normal_draws_have_mean_zero_and_variance_one() {
        let mut random = SplitMix64::new(5);
        let draws: Vec<f64> = (0..100_000).map(|_| random.normal()).collect();
        let mean = draws.iter().sum::<f64>() / 1e5;
        let variance = draws.iter().map(|z| z * z).sum::<f64>() / 1e5;
        assert!(libm::fabs(mean) < 4.0 / libm::sqrt(1e5), "{mean}");
        assert!(libm::fabs(variance - 1.0) < 4.0 * libm::sqrt(2.0 / 1e5), "{variance}");
    }
}

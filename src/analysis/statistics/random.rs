//! Pinned random numbers: a seed means the same for ever, and a trial's numbers do not depend on how the work is shared
//! out.

use rand_pcg::{Pcg64Dxsm, rand_core::Rng as _};

/// The random numbers of a study: one sequence of PCG-DXSM (O'Neill 2014, HMC-CS-2014-0905; the DXSM output is that of
/// 2019), in which each trial has its own stretch.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Sequence {
    seed: u64,
    stream: u64,
}

impl Sequence {
    /// The sequence of this seed. Streams of one seed are different sequences, for different parts of a study.
    #[must_use]
    pub const fn new(seed: u64, stream: u64) -> Self {
        Self { seed, stream }
    }

    /// The numbers from the `start`-th on.
    #[must_use]
    pub fn from(&self, start: u64) -> Uniforms {
        // The seed is spread over the whole state: seeds 1, 2, 3 … must not start near one another.
        let state = u128::from(mixed(self.seed)) << 64 | u128::from(mixed(self.seed ^ 0xa5a5_a5a5_a5a5_a5a5));
        let mut generator = Pcg64Dxsm::new(state, u128::from(self.stream));
        generator.advance(u128::from(start));
        Uniforms(generator)
    }
}

/// SplitMix64's finaliser (Steele, Lea & Flood 2014, doi 10.1145/2714064.2660195).
const fn mixed(seed: u64) -> u64 {
    let z = seed.wrapping_add(0x9e37_79b9_7f4a_7c15);
    let z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    let z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    z ^ (z >> 31)
}

/// Uniform numbers, one step of the generator each.
#[derive(Debug, Clone)]
pub struct Uniforms(Pcg64Dxsm);

impl Uniforms {
    /// The next number, above 0 and below 1: the middle of one of 2⁵² equal cells.
    #[inline]
    pub fn next_open(&mut self) -> f64 {
        ((self.0.next_u64() >> 12) as f64 + 0.5) * CELL
    }
}

/// 2⁻⁵².
const CELL: f64 = 1.0 / (1_u64 << 52) as f64;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_stretch_is_the_same_wherever_one_starts() {
        let sequence = Sequence::new(1, 0);
        let mut whole = sequence.from(0);
        let numbers: Vec<f64> = (0..100).map(|_| whole.next_open()).collect();
        for start in [0_u64, 1, 17, 99] {
            assert_eq!(sequence.from(start).next_open(), numbers[start as usize]);
        }
    }

    #[test]
    fn a_seed_means_the_same_for_ever() {
        let first = |seed, stream| Sequence::new(seed, stream).from(0).next_open().to_bits();
        assert_eq!(first(1, 0), PINNED);
        assert_ne!(first(1, 0), first(1, 1));
        assert_ne!(first(1, 0), first(2, 0));
    }

    /// What this generator gave when it was chosen.
    const PINNED: u64 = 4596467222687235476;

    #[test]
    fn moments_are_those_of_the_uniform_distribution() {
        let mut numbers = Sequence::new(7, 3).from(0);
        let n = 200_000;
        let (mut sum, mut squares) = (0.0, 0.0);
        for _ in 0..n {
            let u = numbers.next_open();
            assert!(u > 0.0 && u < 1.0);
            sum += u - 0.5;
            squares += (u - 0.5) * (u - 0.5);
        }
        let n = f64::from(n);
        assert!((sum / n).abs() < 4.0 / (12.0 * n).sqrt());
        assert!((squares / n - 1.0 / 12.0).abs() < 4.0 / (180.0 * n).sqrt());
    }
}

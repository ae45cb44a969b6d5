//! The margin over the trials: moments, quantiles, histogram.

use rayon::prelude::*;

use crate::analysis::statistics::order::{extremes, quantiles};

/// Probabilities of the quantiles that are given.
pub const QUANTILES: [f64; 9] = [0.001, 0.01, 0.025, 0.05, 0.5, 0.95, 0.975, 0.99, 0.999];

/// The margin over the trials.
#[derive(Debug, Clone, PartialEq)]
pub struct Summary {
    /// Mean.
    pub mean: f64,
    /// Standard deviation.
    pub standard_deviation: f64,
    /// The values with [`QUANTILES`] of the trials below them.
    pub quantiles: Vec<f64>,
    /// How often which margin occurs.
    pub histogram: Histogram,
}

/// Counts in equal bins. Zero, where it lies within, is one of the edges.
#[derive(Debug, Clone, PartialEq)]
pub struct Histogram {
    /// Edges, one more than counts.
    pub edges: Vec<f64>,
    /// Trials from each edge up to the next.
    pub counts: Vec<u64>,
}

/// Values summed in one piece; the sums are added in order, so that no result depends on the threads.
const AT_A_TIME: usize = 1 << 14;

/// Bins aimed at.
const BINS: f64 = 50.0;

impl Summary {
    /// Of these margins, of which there is at least one.
    pub(super) fn of(margins: &[f64]) -> Self {
        let n = margins.len() as f64;
        let total = |f: &(dyn Fn(f64) -> f64 + Sync)| {
            let parts: Vec<f64> =
                margins.par_chunks(AT_A_TIME).map(|chunk| chunk.iter().map(|x| f(*x)).sum()).collect();
            parts.iter().sum::<f64>()
        };
        let mean = total(&|x| x) / n;
        let squares = total(&|x| (x - mean) * (x - mean));
        Self {
            mean,
            standard_deviation: (squares / (n - 1.0).max(1.0)).sqrt(),
            quantiles: quantiles(margins, &QUANTILES),
            histogram: Histogram::of(margins),
        }
    }
}

impl Histogram {
    fn of(margins: &[f64]) -> Self {
        let (low, high) = extremes(margins);
        let width = round_step((high - low) / BINS, high.abs().max(low.abs()));
        let (first, last) = ((low / width).floor(), (high / width).floor());
        let bins = (last - first) as usize + 1;
        let counts = margins
            .par_chunks(AT_A_TIME)
            .map(|chunk| {
                let mut counts = vec![0_u64; bins];
                for x in chunk {
                    counts[((x / width).floor() - first) as usize] += 1;
                }
                counts
            })
            .reduce(
                || vec![0; bins],
                |mut a, b| {
                    a.iter_mut().zip(b).for_each(|(a, b)| *a += b);
                    a
                },
            );
        let edges = (0..=bins).map(|i| (first + i as f64) * width).collect();
        Self { edges, counts }
    }
}

/// The next of 1, 2, 5 times a power of ten at or above `step`, but no less than rounding of numbers of this `size`
/// allows.
fn round_step(step: f64, size: f64) -> f64 {
    let step = step.max(1e-9 * size).max(1e-12);
    let decade = libm::pow(10.0, libm::log10(step).floor());
    [1.0, 2.0, 5.0, 10.0].into_iter().map(|m| m * decade).find(|w| *w >= step).unwrap_or(10.0 * decade)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_trial_is_in_a_bin_and_zero_is_an_edge() {
        let margins: Vec<f64> = (0..10_000).map(|i| -0.31 + 1e-4 * f64::from(i)).collect();
        let summary = Summary::of(&margins);
        let Histogram { edges, counts } = &summary.histogram;
        assert_eq!(edges.len(), counts.len() + 1);
        assert_eq!(counts.iter().sum::<u64>(), 10_000);
        assert!(edges.contains(&0.0) && (25..=130).contains(&counts.len()), "{edges:?}");
        let below: u64 = edges.iter().zip(counts).filter(|(e, _)| **e < -1e-12).map(|(_, c)| c).sum();
        assert_eq!(below, margins.iter().filter(|m| **m < 0.0).count() as u64);
        assert!((summary.mean - 0.189_95).abs() < 1e-12);
    }

    #[test]
    fn margins_that_do_not_vary_have_one_bin() {
        let summary = Summary::of(&[0.25; 100]);
        assert_eq!(summary.histogram.counts, [100]);
        assert_eq!((summary.mean, summary.standard_deviation), (0.25, 0.0));
    }
}

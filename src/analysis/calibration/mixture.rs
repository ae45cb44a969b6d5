//! The posterior as a mixture of normal distributions over a grid on ln s.

use super::matrix::{Symmetric, Vector, dot};
use crate::physics::numerics::{normal_cdf, normal_quantile};

/// The normal distribution of b at one value of ln s, and that value's share of the posterior.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GridPoint {
    /// ln s.
    pub ln_scatter: f64,
    /// Share of the posterior; all shares make 1.
    pub weight: f64,
    /// Mean of b.
    pub mean: Vector,
    /// Covariance of b.
    pub covariance: Symmetric,
}

/// The mixture.
#[derive(Debug, Clone, PartialEq)]
pub struct Mixture {
    /// Its parts, by rising ln s.
    pub grid: Vec<GridPoint>,
}

/// Mean and covariance of b under the mixture, and the moments of the scatter.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Moments {
    /// Mean of b.
    pub mean: Vector,
    /// Covariance of b, the spread between the parts included.
    pub covariance: Symmetric,
    /// E\[s²\].
    pub scatter_variance: f64,
    /// Mean of ln s.
    pub ln_scatter: f64,
    /// Standard deviation of ln s.
    pub ln_scatter_sd: f64,
}

impl Moments {
    /// Mean and variance of a new onset with covariates x, less its offset: xᵀm and xᵀCx + E\[s²\]. Exact for the mixture.
    #[must_use]
    pub fn predict(&self, x: &Vector) -> (f64, f64) {
        (dot(x, &self.mean), self.covariance.form(x) + self.scatter_variance)
    }
}

impl Mixture {
    /// The moments, exact for the mixture.
    #[must_use]
    pub fn moments(&self) -> Moments {
        let mut mean = [0.0; 3];
        let (mut scatter_variance, mut ln_scatter) = (0.0, 0.0);
        for point in &self.grid {
            for (sum, value) in mean.iter_mut().zip(point.mean) {
                *sum += point.weight * value;
            }
            scatter_variance += point.weight * libm::exp(2.0 * point.ln_scatter);
            ln_scatter += point.weight * point.ln_scatter;
        }
        let mut covariance = Symmetric::default();
        let mut ln_scatter_variance = 0.0;
        for point in &self.grid {
            let away = [point.mean[0] - mean[0], point.mean[1] - mean[1], point.mean[2] - mean[2]];
            covariance.add(point.weight, &point.covariance);
            covariance.add_outer(point.weight, &away);
            let off = point.ln_scatter - ln_scatter;
            ln_scatter_variance += point.weight * off * off;
        }
        let ln_scatter_sd = ln_scatter_variance.max(0.0).sqrt();
        Moments { mean, covariance, scatter_variance, ln_scatter, ln_scatter_sd }
    }

    /// Probability that a new onset with covariates x lies below `excess` = y − offset: that a pour with ln We = y is clean.
    #[must_use]
    pub fn clean_probability(&self, x: &Vector, excess: f64) -> f64 {
        let part = |point: &GridPoint| {
            let variance = point.covariance.form(x) + libm::exp(2.0 * point.ln_scatter);
            point.weight * normal_cdf((excess - dot(x, &point.mean)) / variance.sqrt())
        };
        self.grid.iter().map(part).sum()
    }

    /// Two-sided interval at `level` of the share of pours with covariates x that are clean at `excess` = y − offset: what is not known of b and s, without the scatter from pour
    /// to pour, which is in the share itself.
    #[must_use]
    pub fn clean_share_interval(&self, x: &Vector, excess: f64, level: f64) -> (f64, f64) {
        // The normal distribution of xᵀb at each ln s by equal shares of it.
        const SHARES: usize = 160;
        let mut shares = Vec::with_capacity(self.grid.len() * SHARES);
        for point in &self.grid {
            let (mean, sd) = (dot(x, &point.mean), point.covariance.form(x).max(0.0).sqrt());
            let s = libm::exp(point.ln_scatter);
            for i in 0..SHARES {
                let z = normal_quantile((i as f64 + 0.5) / SHARES as f64);
                shares.push((normal_cdf((excess - mean - sd * z) / s), point.weight / SHARES as f64));
            }
        }
        shares.sort_by(|a, b| a.0.total_cmp(&b.0));
        let at = |p: f64| {
            let mut below = 0.0;
            let found = shares.iter().find(|(_, weight)| {
                below += weight;
                below >= p
            });
            found.or(shares.last()).map_or(f64::NAN, |(share, _)| *share)
        };
        (at(0.5 * (1.0 - level)), at(0.5 * (1.0 + level)))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn moments_and_probabilities_of_two_parts() {
        let part = |ln_scatter: f64, weight: f64, mean: f64| GridPoint {
            ln_scatter,
            weight,
            mean: [mean, 0.0, 0.0],
            covariance: Symmetric::diagonal([0.04, 1.0, 1.0]),
        };
        let mixture = Mixture { grid: vec![part(-2.0, 0.25, 0.0), part(-1.0, 0.75, 0.4)] };
        let m = mixture.moments();
        assert!((m.mean[0] - 0.3).abs() < 1e-15);
        assert!((m.covariance.0[0] - (0.04 + 0.25 * 0.09 + 0.75 * 0.01)).abs() < 1e-15);
        assert!((m.scatter_variance - (0.25 * libm::exp(-4.0) + 0.75 * libm::exp(-2.0))).abs() < 1e-15);
        // Mean and variance of the prediction are those of the mixture's density, by its distribution function.
        let x = [1.0, 0.0, 0.0];
        let (mean, variance) = m.predict(&x);
        let (mut first, mut second) = (0.0, 0.0);
        let step = 1e-3;
        for i in -6000..6000 {
            let y = f64::from(i) * step;
            let share = mixture.clean_probability(&x, y + step) - mixture.clean_probability(&x, y);
            let middle = y + 0.5 * step;
            first += share * middle;
            second += share * middle * middle;
        }
        assert!((first - mean).abs() < 1e-6 && (second - first * first - variance).abs() < 1e-6);
        let (low, high) = mixture.clean_share_interval(&x, 0.3, 0.95);
        let predictive = mixture.clean_probability(&x, 0.3);
        assert!(low < predictive && predictive < high && low > 0.0 && high <= 1.0);
    }
}

//! The posterior as a mixture of normal distributions over a grid on ln s.

use super::matrix::{Symmetric, Vector, dot};
use crate::physics::numerics::normal_cdf;

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
}

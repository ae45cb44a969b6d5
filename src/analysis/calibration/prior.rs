//! What is held of the coefficients before any row.

use super::matrix::{Symmetric, Vector};

/// b ~ N(mean, precision⁻¹), ln s ~ N(mean, sd²), independent of each other.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Prior {
    /// Mean of b.
    pub mean: Vector,
    /// Inverse covariance of b; zero where nothing is held.
    pub precision: Symmetric,
    /// Mean of ln s.
    pub ln_scatter: f64,
    /// Standard deviation of ln s.
    pub ln_scatter_sd: f64,
}

impl Prior {
    /// Independent coefficients with these means and standard deviations.
    #[must_use]
    pub fn independent(mean: Vector, sd: Vector, ln_scatter: f64, ln_scatter_sd: f64) -> Self {
        let precision = Symmetric::diagonal(sd.map(|sd| 1.0 / (sd * sd)));
        Self { mean, precision, ln_scatter, ln_scatter_sd }
    }

    /// The service's own: the closed form may be off by 0.35 of ln We_c, the standard uncertainty of set 1; each exponent by 0.3; the scatter from pour to pour is 15 %
    /// of We_c, within a factor e^0.5 (own judgement).
    #[must_use]
    pub fn of_the_closed_form() -> Self {
        Self::independent([0.0; 3], [0.35, 0.3, 0.3], libm::log(0.15), 0.5)
    }

    /// −ln density of b and ln s, without its constant.
    #[must_use]
    pub fn misfit(&self, b: &Vector, ln_s: f64) -> f64 {
        let z = (ln_s - self.ln_scatter) / self.ln_scatter_sd;
        0.5 * (self.precision.form(&self.away(b)) + z * z)
    }

    /// b less the prior's mean.
    #[must_use]
    pub fn away(&self, b: &Vector) -> Vector {
        [b[0] - self.mean[0], b[1] - self.mean[1], b[2] - self.mean[2]]
    }
}

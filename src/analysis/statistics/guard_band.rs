//! The guard band: how far inside a limit a measured value must lie, and the risks that remain (JCGM 106:2012).

use super::normal::{density, normal_cdf, normal_quantile};
use crate::physics::numerics::gauss_legendre_8;

/// g: the guard band in standard uncertainties that leaves a part on its edge conforming with `conformance`
/// (one-sided; 1.645 at 95 %, as ISO 14253-1:2017).
#[must_use]
pub fn factor(conformance: f64) -> f64 {
    normal_quantile(conformance)
}

/// Probability that a part conforms to an upper limit when `measured` with this standard `uncertainty`, nothing
/// known of it beforehand.
#[must_use]
pub fn conformance_probability(measured: f64, uncertainty: f64, upper: f64) -> f64 {
    normal_cdf((upper - measured) / uncertainty)
}

/// A production, its measurement, and the limits: what the risks of a part depend on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Inspection {
    /// Mean of the true values.
    pub mean: f64,
    /// Standard deviation of the true values, above 0.
    pub spread: f64,
    /// Standard uncertainty of a measurement, at least 0.
    pub uncertainty: f64,
    /// Upper tolerance limit of the true value.
    pub upper: f64,
    /// A part is accepted when measured at or below this.
    pub accept_up_to: f64,
}

impl Inspection {
    /// Probability that a part is beyond the limit and yet accepted: the consumer's risk over all production
    /// (JCGM 106, clause 9.5).
    #[must_use]
    pub fn consumer_risk(&self) -> f64 {
        if self.uncertainty == 0.0 {
            let between = self.upper..self.accept_up_to;
            return if between.is_empty() {
                0.0
            } else {
                self.below(between.end) - self.below(between.start)
            };
        }
        let accepted = |x: f64| normal_cdf((self.accept_up_to - x) / self.uncertainty);
        self.integral(accepted, self.z(self.upper).max(-REACH), REACH)
    }

    /// Probability that a part is within the limit and yet not accepted: the producer's risk (JCGM 106, clause 9.5).
    #[must_use]
    pub fn producer_risk(&self) -> f64 {
        if self.uncertainty == 0.0 {
            let between = self.accept_up_to..self.upper;
            return if between.is_empty() {
                0.0
            } else {
                self.below(between.end) - self.below(between.start)
            };
        }
        let rejected = |x: f64| normal_cdf((x - self.accept_up_to) / self.uncertainty);
        self.integral(rejected, -REACH, self.z(self.upper).min(REACH))
    }

    fn z(&self, x: f64) -> f64 {
        (x - self.mean) / self.spread
    }

    fn below(&self, x: f64) -> f64 {
        normal_cdf(self.z(x))
    }

    /// ∫ φ(z) f(x(z)) dz by panels no wider than the spread and, around the acceptance limit, than the uncertainty.
    fn integral(&self, f: impl Fn(f64) -> f64, from: f64, to: f64) -> f64 {
        let integrand = |z: f64| density(z) * f(self.mean + self.spread * z);
        let turn = self.z(self.accept_up_to);
        let narrow = (self.uncertainty / self.spread).min(1.0);
        let sum_of = |low: f64, high: f64, width: f64| {
            if high <= low {
                return 0.0;
            }
            let panels = ((high - low) / width).ceil().max(1.0);
            let step = (high - low) / panels;
            (0..panels as u32)
                .map(|i| {
                    let at = low + f64::from(i) * step;
                    gauss_legendre_8(integrand, at, at + step)
                })
                .sum()
        };
        if from >= to {
            return 0.0;
        }
        let (low, high) = ((turn - REACH * narrow).clamp(from, to), (turn + REACH * narrow).clamp(from, to));
        let middle = turn.clamp(low, high);
        let sums: [f64; 4] = [
            sum_of(from, low, 1.0),
            sum_of(low, middle, narrow),
            sum_of(middle, high, narrow),
            sum_of(high, to, 1.0),
        ];
        sums.iter().sum()
    }
}

/// How many standard deviations are integrated over.
const REACH: f64 = 10.0;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_perfect_gauge_leaves_only_what_the_guard_band_gives_away() {
        let at =
            |accept_up_to| Inspection { mean: 0.0, spread: 1.0, uncertainty: 0.0, upper: 2.0, accept_up_to };
        assert_eq!((at(2.0).consumer_risk(), at(2.0).producer_risk()), (0.0, 0.0));
        let given_away = normal_cdf(2.0) - normal_cdf(1.5);
        assert!((at(1.5).producer_risk() - given_away).abs() < 1e-15);
        // A nearly perfect one tends to it.
        let nearly = Inspection { uncertainty: 1e-4, ..at(1.5) };
        assert!((nearly.producer_risk() - given_away).abs() < 1e-6);
        assert!(nearly.consumer_risk() < 1e-30);
    }

    #[test]
    fn risks_add_up() {
        // accepted and beyond + rejected and within + the rest = 1, with measured values N(μ, s² + u²).
        let i = Inspection { mean: 0.47, spread: 0.03, uncertainty: 0.008, upper: 0.52, accept_up_to: 0.51 };
        let accepted = normal_cdf((0.51 - 0.47) / libm::hypot(0.03, 0.008));
        let within = normal_cdf((0.52 - 0.47) / 0.03);
        // accepted − accepted∧beyond = within − within∧rejected.
        let gap = (accepted - i.consumer_risk()) - (within - i.producer_risk());
        assert!(gap.abs() < 1e-12, "{gap}");
    }
}

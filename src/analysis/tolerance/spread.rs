//! How an input spreads from part to part or from pour to pour, and draws from it within the field's range.

use crate::{
    analysis::statistics::{
        normal::{normal_cdf, quick_quantile, quick_quantiles},
        order::quantile_of_sorted,
    },
    physics::quantity::Quantity,
};

/// The distribution of an input, in the field's unit.
#[derive(Debug, Clone, PartialEq)]
pub enum Spread {
    /// Normal.
    Normal {
        /// Mean.
        mean: f64,
        /// Standard deviation, above 0.
        sd: f64,
    },
    /// Uniform.
    Uniform {
        /// Lowest value.
        low: f64,
        /// Highest value, above the lowest.
        high: f64,
    },
    /// Triangular.
    Triangular {
        /// Lowest value.
        low: f64,
        /// Most frequent value, between the others.
        mode: f64,
        /// Highest value, above the lowest.
        high: f64,
    },
    /// Lognormal.
    Lognormal {
        /// Median, above 0.
        median: f64,
        /// Standard deviation of the natural logarithm, above 0.
        sd_log: f64,
    },
    /// A measured sample: each value as likely as any other. Sorted, not empty.
    Sample(Vec<f64>),
}

impl Spread {
    /// Mean.
    #[must_use]
    pub fn mean(&self) -> f64 {
        match self {
            Self::Normal { mean, .. } => *mean,
            Self::Uniform { low, high } => 0.5 * (low + high),
            Self::Triangular { low, mode, high } => (low + mode + high) / 3.0,
            Self::Lognormal { median, sd_log } => median * libm::exp(0.5 * sd_log * sd_log),
            Self::Sample(values) => values.iter().sum::<f64>() / values.len() as f64,
        }
    }

    /// Standard deviation; of a sample, that of its values as a population, since it is they that are drawn.
    #[must_use]
    pub fn standard_deviation(&self) -> f64 {
        match self {
            Self::Normal { sd, .. } => *sd,
            Self::Uniform { low, high } => (high - low) / 12.0_f64.sqrt(),
            Self::Triangular { low, mode, high } => {
                let (a, b) = (mode - low, high - mode);
                ((a * a + a * b + b * b) / 18.0).sqrt()
            }
            Self::Lognormal { sd_log, .. } => self.mean() * libm::expm1(sd_log * sd_log).sqrt(),
            Self::Sample(values) => {
                let mean = self.mean();
                let squares: f64 = values.iter().map(|x| (x - mean) * (x - mean)).sum();
                (squares / values.len() as f64).sqrt()
            }
        }
    }

    /// Probability of a value below `x` (for a sample: below, or at it).
    fn below(&self, x: f64) -> f64 {
        match self {
            Self::Normal { mean, sd } => normal_cdf((x - mean) / sd),
            Self::Uniform { low, high } => ((x - low) / (high - low)).clamp(0.0, 1.0),
            Self::Triangular { low, mode, high } => {
                let width = high - low;
                if x <= *low {
                    0.0
                } else if x < *mode {
                    (x - low) * (x - low) / (width * (mode - low))
                } else if x < *high {
                    1.0 - (high - x) * (high - x) / (width * (high - mode))
                } else {
                    1.0
                }
            }
            Self::Lognormal { median, sd_log } => {
                if x <= 0.0 {
                    0.0
                } else {
                    normal_cdf(libm::log(x / median) / sd_log)
                }
            }
            Self::Sample(values) => values.partition_point(|v| *v <= x) as f64 / values.len() as f64,
        }
    }

    /// Probability of a value outside the range of this quantity.
    #[must_use]
    pub fn outside(&self, quantity: &Quantity) -> f64 {
        if let Self::Sample(values) = self {
            let out = values.iter().filter(|v| !quantity.accepts(**v)).count();
            return out as f64 / values.len() as f64;
        }
        self.below(quantity.minimum) + (1.0 - self.below(quantity.maximum))
    }
}

/// A spread cut to its field's range, ready to be drawn from.
///
/// The cut distribution is drawn from directly: what would lie outside is spread over the rest in proportion, so that a
/// trial never needs a second draw.
#[derive(Debug, Clone)]
pub struct Drawn {
    spread: Spread,
    low: f64,
    high: f64,
    /// Probability below the range, and within it.
    below: f64,
    within: f64,
}

impl Drawn {
    /// The spread cut to the range of this quantity; `None` where nothing of it lies within.
    #[must_use]
    pub fn new(spread: &Spread, quantity: &Quantity) -> Option<Self> {
        let (low, high) = (quantity.minimum, quantity.maximum);
        let spread = match spread {
            Spread::Sample(values) => {
                Spread::Sample(values.iter().copied().filter(|v| quantity.accepts(*v)).collect())
            }
            other => other.clone(),
        };
        if matches!(&spread, Spread::Sample(values) if values.is_empty()) {
            return None;
        }
        let (below, within) = match &spread {
            Spread::Sample(_) => (0.0, 1.0),
            other => (other.below(low), other.below(high) - other.below(low)),
        };
        (within > 0.0).then_some(Self { spread, low, high, below, within })
    }

    /// The spread that is cut.
    #[must_use]
    pub fn spread(&self) -> &Spread {
        &self.spread
    }

    /// Whether a value lies within the range.
    #[must_use]
    pub fn allows(&self, x: f64) -> bool {
        x >= self.low && x <= self.high
    }

    /// The value below which the share `u` (0 to 1, both excluded) of the cut distribution lies.
    #[inline]
    #[must_use]
    pub fn at(&self, u: f64) -> f64 {
        // Rounding may put the share at 1, where a normal quantile is infinite.
        let p = (self.below + self.within * u).min(LARGEST_SHARE);
        let x = match &self.spread {
            Spread::Normal { mean, sd } => mean + sd * quick_quantile(p),
            Spread::Uniform { low, high } => low + (high - low) * p,
            Spread::Triangular { low, mode, high } => {
                let width = high - low;
                let rising = (mode - low) / width;
                if p < rising {
                    low + (p * width * (mode - low)).sqrt()
                } else {
                    high - ((1.0 - p) * width * (high - mode)).sqrt()
                }
            }
            Spread::Lognormal { median, sd_log } => median * libm::exp(sd_log * quick_quantile(p)),
            Spread::Sample(values) => {
                let place = (u * values.len() as f64) as usize;
                values[place.min(values.len() - 1)]
            }
        };
        // The ends of the cut, which rounding may pass by a hair.
        x.max(self.low).min(self.high)
    }

    /// [`Drawn::at`] of many shares, in place.
    pub fn fill(&self, arch: pulp::Arch, shares: &mut [f64]) {
        if let Spread::Normal { mean, sd } = &self.spread {
            for u in shares.iter_mut() {
                *u = (self.below + self.within * *u).min(LARGEST_SHARE);
            }
            quick_quantiles(arch, shares);
            for x in shares.iter_mut() {
                *x = (mean + sd * *x).max(self.low).min(self.high);
            }
        } else {
            for u in shares.iter_mut() {
                *u = self.at(*u);
            }
        }
    }

    /// The value that belongs to a standard normal number; of a sample, between its values, so that slopes exist.
    #[must_use]
    pub fn smooth_at_normal(&self, z: f64) -> f64 {
        match &self.spread {
            Spread::Sample(values) => quantile_of_sorted(values, normal_cdf(z)).unwrap_or(self.low),
            _ => self.at_normal(z),
        }
    }

    /// The value that belongs to a standard normal number: the same share of the distribution lies below both.
    #[must_use]
    pub fn at_normal(&self, z: f64) -> f64 {
        let whole = self.below == 0.0 && self.within == 1.0;
        match &self.spread {
            // Without the way through the share, which loses the upper tail to rounding.
            Spread::Normal { mean, sd } if whole => (mean + sd * z).max(self.low).min(self.high),
            Spread::Lognormal { median, sd_log } if whole => {
                (median * libm::exp(sd_log * z)).max(self.low).min(self.high)
            }
            _ => self.at(normal_cdf(z).max(f64::MIN_POSITIVE)),
        }
    }
}

/// The largest double below 1.
const LARGEST_SHARE: f64 = 1.0 - 0.5 * f64::EPSILON;

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physics::quantity::{CONTACT_ANGLE, EDGE_RADIUS};

    fn all() -> Vec<Spread> {
        vec![
            Spread::Normal { mean: 0.8, sd: 0.05 },
            Spread::Uniform { low: 0.5, high: 0.9 },
            Spread::Triangular { low: 0.4, mode: 0.5, high: 0.9 },
            Spread::Triangular { low: 0.4, mode: 0.4, high: 0.9 },
            Spread::Lognormal { median: 0.7, sd_log: 0.2 },
            Spread::Sample(vec![0.5, 0.5, 0.6, 0.9]),
        ]
    }

    #[test]
    fn draws_have_the_moments_of_the_spread() {
        for spread in all() {
            let drawn = Drawn::new(&spread, &EDGE_RADIUS).unwrap();
            let n = 200_000;
            let values: Vec<f64> = (0..n).map(|i| drawn.at((f64::from(i) + 0.5) / f64::from(n))).collect();
            let mean = values.iter().sum::<f64>() / f64::from(n);
            let variance = values.iter().map(|x| (x - mean) * (x - mean)).sum::<f64>() / f64::from(n);
            assert!((mean - spread.mean()).abs() < 1e-4, "{spread:?} {mean}");
            assert!((variance.sqrt() - spread.standard_deviation()).abs() < 1e-4, "{spread:?}");
            assert!(values.windows(2).all(|pair| pair[0] <= pair[1]));
        }
    }

    #[test]
    fn many_draws_are_the_same_as_one_by_one() {
        for spread in all() {
            let drawn = Drawn::new(&spread, &EDGE_RADIUS).unwrap();
            let shares: Vec<f64> = (0..300).map(|i| (f64::from(i) + 0.5) / 300.0).collect();
            let mut found = shares.clone();
            drawn.fill(pulp::Arch::new(), &mut found);
            assert!(found.iter().zip(&shares).all(|(x, u)| x.to_bits() == drawn.at(*u).to_bits()));
        }
    }

    #[test]
    fn a_normal_number_stands_for_its_share() {
        for spread in all() {
            let drawn = Drawn::new(&spread, &EDGE_RADIUS).unwrap();
            for i in -30..30 {
                let z = 0.1 * f64::from(i) + 0.03;
                assert!((drawn.at_normal(z) - drawn.at(normal_cdf(z))).abs() < 1e-12, "{spread:?} {z}");
            }
            assert!(drawn.at_normal(40.0).is_finite() && drawn.at_normal(-40.0).is_finite());
        }
    }

    #[test]
    fn the_cut_keeps_to_the_range_and_says_how_much_it_takes() {
        let spread = Spread::Normal { mean: 178.0, sd: 1.0 };
        let outside = spread.outside(&CONTACT_ANGLE);
        assert!((outside - normal_cdf(-2.0)).abs() < 1e-12, "{outside}");
        let drawn = Drawn::new(&spread, &CONTACT_ANGLE).unwrap();
        assert!(drawn.at(1.0 - 1e-16) <= 180.0 && drawn.at(1e-300) > 100.0);
        // Half of what is left lies below this.
        let median = drawn.at(0.5);
        assert!((normal_cdf(median - 178.0) - 0.5 * (1.0 - outside)).abs() < 1e-12);
        assert!(Drawn::new(&Spread::Uniform { low: 200.0, high: 300.0 }, &CONTACT_ANGLE).is_none());
        let sample = Spread::Sample(vec![-1.0, 10.0, 20.0, 500.0]);
        assert_eq!(sample.outside(&CONTACT_ANGLE), 0.5);
    }
}

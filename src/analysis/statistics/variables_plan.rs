//! One-sided sampling by variables, standard deviation unknown: accept when the mean lies k standard deviations
//! inside the limit.

use super::{StatisticsFault, noncentral_t::NoncentralT, normal::normal_quantile};

/// A point of the operating characteristic that a plan must respect.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RiskPoint {
    /// Fraction nonconforming.
    pub fraction: f64,
    /// Risk: of rejecting the producer's quality, of accepting the consumer's.
    pub risk: f64,
}

/// A plan by variables.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct VariablesPlan {
    /// Pieces to measure.
    pub pieces: u64,
    /// Smallest k that keeps the consumer's risk.
    pub k_low: f64,
    /// Largest k that keeps the producer's risk.
    pub k_high: f64,
}

/// The most pieces of a plan that is looked for (own judgement: beyond it nobody measures).
pub const MOST_PIECES: u64 = 10_000;

impl VariablesPlan {
    /// The smallest plan that keeps both risks: fewest pieces with `k_low` ≤ `k_high`, by the non-central t (exact).
    /// The producer's fraction is below the consumer's.
    ///
    /// # Errors
    /// [`StatisticsFault::PlanTooLarge`] beyond [`MOST_PIECES`].
    pub fn between(producer: RiskPoint, consumer: RiskPoint) -> Result<Self, StatisticsFault> {
        let fits = |n: u64| Self::with_pieces(n, producer, consumer).map(|plan| plan.k_low <= plan.k_high);
        // Wallis's closed approximation is within a few pieces; from there outward, then halving.
        let start = wallis(producer, consumer).sigma_unknown;
        if start > 2.0 * MOST_PIECES as f64 {
            return Err(StatisticsFault::PlanTooLarge { most: MOST_PIECES });
        }
        let start = (start as u64).clamp(2, MOST_PIECES);
        let (mut low, mut high) = (1, start);
        let mut step = 1;
        if fits(start)? {
            while high > 2 {
                let next = high.saturating_sub(step).max(2);
                if fits(next)? {
                    high = next;
                } else {
                    low = next;
                    break;
                }
                step *= 2;
            }
        } else {
            low = start;
            loop {
                if low >= MOST_PIECES {
                    return Err(StatisticsFault::PlanTooLarge { most: MOST_PIECES });
                }
                high = (low + step).min(MOST_PIECES);
                if fits(high)? {
                    break;
                }
                low = high;
                step *= 2;
            }
        }
        while high - low > 1 {
            let middle = low + (high - low) / 2;
            if fits(middle)? {
                high = middle;
            } else {
                low = middle;
            }
        }
        Self::with_pieces(high, producer, consumer)
    }

    /// The two acceptance constants for this many pieces (≥ 2), whether or not they agree.
    ///
    /// # Errors
    /// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
    pub fn with_pieces(
        pieces: u64,
        producer: RiskPoint,
        consumer: RiskPoint,
    ) -> Result<Self, StatisticsFault> {
        Ok(Self {
            pieces,
            k_low: acceptance_constant(pieces, consumer.fraction, 1.0 - consumer.risk)?,
            k_high: acceptance_constant(pieces, producer.fraction, producer.risk)?,
        })
    }

    /// The middle between the two constants: both risks are kept with something to spare.
    #[must_use]
    pub fn k(&self) -> f64 {
        0.5 * (self.k_low + self.k_high)
    }
}

/// The k above which the quality (U − x̄)/s of `pieces` lies with probability 1 − `probability` when `fraction` is
/// nonconforming.
fn acceptance_constant(pieces: u64, fraction: f64, probability: f64) -> Result<f64, StatisticsFault> {
    let root = (pieces as f64).sqrt();
    let delta = -normal_quantile(fraction) * root;
    NoncentralT { degrees: pieces as f64 - 1.0, delta }.quantile(probability).map(|t| t / root)
}

/// Probability that a lot with this `fraction` nonconforming is accepted by `pieces` (≥ 2) and constant `k`.
#[must_use]
pub fn acceptance_probability(pieces: u64, k: f64, fraction: f64) -> f64 {
    let root = (pieces as f64).sqrt();
    let delta = -normal_quantile(fraction) * root;
    NoncentralT { degrees: pieces as f64 - 1.0, delta }.survival(k * root)
}

/// The fraction nonconforming that is accepted with `probability` by `pieces` and `k`: a point of the operating
/// characteristic read backwards.
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn fraction_accepted(pieces: u64, k: f64, probability: f64) -> Result<f64, StatisticsFault> {
    let root = (pieces as f64).sqrt();
    let delta = super::noncentral_t::noncentrality(k * root, pieces as f64 - 1.0, probability)?;
    Ok(super::normal::normal_cdf(-delta / root))
}

/// Wallis's approximation of a plan (Wallis 1947, in Eisenhart et al., *Techniques of Statistical Analysis*).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WallisPlan {
    /// Pieces when the standard deviation is known, not rounded.
    pub sigma_known: f64,
    /// Pieces when it is not, not rounded.
    pub sigma_unknown: f64,
    /// Acceptance constant.
    pub k: f64,
}

/// Wallis's approximation of the plan through both points: n = ((z_α + z_β)/(z_1 − z_2))², times 1 + k²/2 when the
/// standard deviation is unknown.
#[must_use]
pub fn wallis(producer: RiskPoint, consumer: RiskPoint) -> WallisPlan {
    let upper = |p: f64| -normal_quantile(p);
    let (a, b) = (upper(producer.risk), upper(consumer.risk));
    let (good, bad) = (upper(producer.fraction), upper(consumer.fraction));
    let root = (a + b) / (good - bad);
    let k = (a * bad + b * good) / (a + b);
    let sigma_known = root * root;
    WallisPlan { sigma_known, sigma_unknown: sigma_known * (1.0 + 0.5 * k * k), k }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn plans_keep_both_risks_and_one_piece_fewer_does_not() {
        for (aql, lq) in [(0.01, 0.06), (0.001, 0.05), (0.04, 0.06), (0.1, 0.4), (1e-4, 0.3)] {
            let producer = RiskPoint { fraction: aql, risk: 0.05 };
            let consumer = RiskPoint { fraction: lq, risk: 0.1 };
            let plan = VariablesPlan::between(producer, consumer).unwrap();
            let accept = |k: f64, p: f64| acceptance_probability(plan.pieces, k, p);
            assert!(accept(plan.k(), aql) >= 0.95 && accept(plan.k(), lq) <= 0.1, "{plan:?}");
            if plan.pieces > 2 {
                let fewer = VariablesPlan::with_pieces(plan.pieces - 1, producer, consumer).unwrap();
                assert!(fewer.k_low > fewer.k_high, "{aql} {lq}");
            }
        }
    }

    #[test]
    fn qualities_too_close_to_tell_apart_are_refused() {
        let point = |fraction, risk| RiskPoint { fraction, risk };
        let plan = VariablesPlan::between(point(0.01, 0.05), point(0.010_01, 0.1));
        assert_eq!(plan, Err(StatisticsFault::PlanTooLarge { most: MOST_PIECES }));
    }
}

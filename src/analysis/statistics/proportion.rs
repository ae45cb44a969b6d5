//! Confidence intervals of a proportion: events among trials.

use super::{StatisticsFault, beta::beta_quantile, normal::normal_quantile};

/// Two-sided Wilson interval of `events` among `trials` (≥ 1) at `confidence` (Wilson 1927, doi
/// 10.1080/01621459.1927.10502953).
#[must_use]
pub fn wilson(events: u64, trials: u64, confidence: f64) -> (f64, f64) {
    let z = normal_quantile(0.5 * (1.0 + confidence));
    let (x, n) = (events as f64, trials as f64);
    let square = z * z;
    let centre = (x + 0.5 * square) / (n + square);
    let half = z / (n + square) * (x * (n - x) / n + 0.25 * square).sqrt();
    let low = if events == 0 { 0.0 } else { centre - half };
    let high = if events == trials { 1.0 } else { centre + half };
    (low, high)
}

/// Two-sided Clopper–Pearson interval of `events` among `trials` (≥ 1) at `confidence`: exact, never too narrow
/// (Clopper & Pearson 1934, doi 10.1093/biomet/26.4.404).
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn clopper_pearson(events: u64, trials: u64, confidence: f64) -> Result<(f64, f64), StatisticsFault> {
    let tail = 0.5 * (1.0 - confidence);
    Ok((lower_bound(events, trials, 1.0 - tail)?, upper_bound(events, trials, 1.0 - tail)?))
}

/// One-sided exact upper bound of the proportion at `confidence`; with no events 1 − (1 − γ)^(1/n).
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn upper_bound(events: u64, trials: u64, confidence: f64) -> Result<f64, StatisticsFault> {
    if events >= trials {
        return Ok(1.0);
    }
    if events == 0 {
        return Ok(-libm::expm1(libm::log1p(-confidence) / trials as f64));
    }
    beta_quantile((events + 1) as f64, (trials - events) as f64, confidence)
}

/// One-sided exact lower bound of the proportion at `confidence`.
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn lower_bound(events: u64, trials: u64, confidence: f64) -> Result<f64, StatisticsFault> {
    if events == 0 {
        return Ok(0.0);
    }
    beta_quantile(events as f64, (trials - events + 1) as f64, 1.0 - confidence)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ends_are_kept() {
        assert_eq!(wilson(0, 10, 0.95).0, 0.0);
        assert_eq!(wilson(10, 10, 0.95).1, 1.0);
        assert_eq!(clopper_pearson(0, 10, 0.95).unwrap().0, 0.0);
        assert_eq!(clopper_pearson(10, 10, 0.95).unwrap().1, 1.0);
        // All events: the mirror of none.
        let (none, all) = (upper_bound(0, 30, 0.95).unwrap(), lower_bound(30, 30, 0.95).unwrap());
        assert!((none + all - 1.0).abs() < 1e-12);
    }
}

//! Student's t distribution.

use super::{
    StatisticsFault,
    beta::{beta_quantile, tails},
};

/// P(T ≤ `t`) with `degrees` of freedom (> 0).
#[must_use]
pub fn t_cdf(t: f64, degrees: f64) -> f64 {
    let whole = degrees + t * t;
    let tail = 0.5 * tails(0.5 * degrees, 0.5, degrees / whole, t * t / whole).0;
    if t < 0.0 { tail } else { 1.0 - tail }
}

/// The quantile: the `t` with P(T ≤ t) = `p`, 0 < p < 1.
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn t_quantile(p: f64, degrees: f64) -> Result<f64, StatisticsFault> {
    let tail = p.min(1.0 - p);
    if tail >= 0.5 {
        return Ok(0.0);
    }
    // t² = ν y/(1 − y) where y has the beta distribution (½, ν/2).
    let y = beta_quantile(0.5, 0.5 * degrees, 1.0 - 2.0 * tail)?;
    let t = (degrees * y / (1.0 - y)).sqrt();
    Ok(if p < 0.5 { -t } else { t })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_degree_is_cauchy() {
        assert!((t_cdf(1.0, 1.0) - 0.75).abs() < 1e-14);
        assert!((t_quantile(0.75, 1.0).unwrap() - 1.0).abs() < 1e-12);
        assert!((t_quantile(0.25, 1.0).unwrap() + 1.0).abs() < 1e-12);
        assert_eq!(t_quantile(0.5, 7.0), Ok(0.0));
    }

    #[test]
    fn inverts() {
        for degrees in [1.0, 2.5, 9.0, 120.0, 9999.0] {
            for p in [0.001, 0.05, 0.3, 0.5, 0.9, 0.995] {
                let t = t_quantile(p, degrees).unwrap();
                assert!((t_cdf(t, degrees) - p).abs() < 1e-12, "{degrees} {p}");
            }
        }
    }
}

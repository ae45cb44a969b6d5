//! Capability against one limit: the index, its exact lower bound, and the fraction nonconforming.

use super::{StatisticsFault, beta::incomplete_beta, noncentral_t::noncentrality, normal::normal_cdf};

/// The capability index against one limit, quality/3 (P_pk of one lot; ISO 22514-2), of a quality (U − x̄)/s.
#[must_use]
pub fn index(quality: f64) -> f64 {
    quality / 3.0
}

/// Exact lower bound, at `confidence`, of the true quality (U − μ)/σ from that of `pieces` (≥ 2) normal values: the
/// non-central t (Chou, Owen & Borrego Aguirre 1990, doi 10.1080/00224065.1990.11979242).
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn quality_low(quality: f64, pieces: u64, confidence: f64) -> Result<f64, StatisticsFault> {
    let root = (pieces as f64).sqrt();
    noncentrality(quality * root, pieces as f64 - 1.0, 1.0 - confidence).map(|delta| delta / root)
}

/// Fraction nonconforming of a normal characteristic with this true quality.
#[must_use]
pub fn fraction_at(quality: f64) -> f64 {
    normal_cdf(-quality)
}

/// Best unbiased estimate of the fraction nonconforming from `pieces` (≥ 3) normal values of this quality
/// (Lieberman & Resnikoff 1955, doi 10.1080/01621459.1955.10501279): I_x(n/2 − 1, n/2 − 1) with x = ½ − Q√n/(2(n − 1)).
/// With two pieces it is 0, ½ or 1 by the side of the limit the mean is on; `None` below.
#[must_use]
pub fn fraction_unbiased(quality: f64, pieces: u64) -> Option<f64> {
    if pieces < 3 {
        return None;
    }
    let n = pieces as f64;
    let x = (0.5 - 0.5 * quality * n.sqrt() / (n - 1.0)).clamp(0.0, 1.0);
    let half = 0.5 * n - 1.0;
    Some(incomplete_beta(half, half, x))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_bound_tends_to_the_estimate_with_many_pieces() {
        let few = quality_low(4.0, 10, 0.95).unwrap();
        let many = quality_low(4.0, 100_000, 0.95).unwrap();
        assert!(few < 3.0 && many > 3.97 && many < 4.0, "{few} {many}");
    }

    #[test]
    fn on_the_limit_half_is_nonconforming() {
        assert!((fraction_unbiased(0.0, 9).unwrap() - 0.5).abs() < 1e-13);
        assert_eq!(fraction_unbiased(100.0, 9), Some(0.0));
        assert_eq!(fraction_unbiased(1.0, 2), None);
    }
}

//! What a sample says of a limit without any distribution: by its order statistics alone.

use super::{StatisticsFault, proportion};

/// Exact upper bound, at `confidence`, of the fraction beyond a limit when `beyond` of `pieces` values are: no
/// distribution is assumed (Clopper & Pearson).
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn fraction_beyond_high(beyond: u64, pieces: u64, confidence: f64) -> Result<f64, StatisticsFault> {
    proportion::upper_bound(beyond, pieces, confidence)
}

/// The value with `probability` of a sorted sample below it: linear between the order statistics, the i-th of n (from
/// 0) standing at i/(n − 1) (definition 7 of Hyndman & Fan 1996, doi 10.1080/00031305.1996.10473566).
#[must_use]
pub fn quantile_of_sorted(sorted: &[f64], probability: f64) -> Option<f64> {
    let last = sorted.len().checked_sub(1)?;
    let place = probability.clamp(0.0, 1.0) * last as f64;
    let below = (place.floor() as usize).min(last);
    let above = (below + 1).min(last);
    Some(sorted[below] + (place - below as f64) * (sorted[above] - sorted[below]))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn quantiles_between_order_statistics() {
        assert_eq!(quantile_of_sorted(&[], 0.5), None);
        assert_eq!(quantile_of_sorted(&[4.0], 0.9), Some(4.0));
        assert_eq!(quantile_of_sorted(&[1.0, 2.0, 4.0], 0.75), Some(3.0));
        assert_eq!(quantile_of_sorted(&[1.0, 2.0, 4.0], 1.0), Some(4.0));
    }
}

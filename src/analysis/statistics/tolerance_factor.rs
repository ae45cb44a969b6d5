//! How many standard deviations a one-sided tolerance limit lies from the mean, and how many pieces stand for a
//! quantile without any distribution.

use super::{StatisticsFault, noncentral_t::NoncentralT, normal::normal_quantile};

/// k such that mean + k·s of `pieces` normal values is above the `coverage` quantile with `confidence`.
///
/// k = t′_{n−1, γ}(z_P √n)/√n, t′ the non-central t (exact; e.g. Hahn & Meeker 1991). `pieces` at least 2.
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn one_sided_factor(pieces: u64, coverage: f64, confidence: f64) -> Result<f64, StatisticsFault> {
    let root = (pieces as f64).sqrt();
    let delta = normal_quantile(coverage) * root;
    NoncentralT { degrees: pieces as f64 - 1.0, delta }.quantile(confidence).map(|t| t / root)
}

/// The fewest pieces of which the largest is above the `coverage` quantile with `confidence`, whatever the
/// distribution: ⌈ln(1 − γ)/ln P⌉.
#[must_use]
pub fn pieces_without_distribution(coverage: f64, confidence: f64) -> u64 {
    let exact = libm::log1p(-confidence) / libm::log(coverage);
    // A whole number that rounding has lifted by a hair is that number.
    (exact - 1e-9).ceil().max(1.0) as u64
}

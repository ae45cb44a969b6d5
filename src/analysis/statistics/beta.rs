//! The incomplete beta function and what follows from it: the beta and the binomial distribution.

use super::StatisticsFault;
use crate::physics::numerics::{Bracket, find_root};

/// ln B(a, b), the beta function, for a, b > 0.
///
/// Where one argument is large, the difference of the two large ln Γ is taken by Stirling's series (Abramowitz &
/// Stegun 1964, 6.1.41), so that no digits are lost at ppm scale.
#[must_use]
pub fn ln_beta(a: f64, b: f64) -> f64 {
    let (small, large) = (a.min(b), a.max(b));
    if large < LARGE {
        return libm::lgamma(small) + libm::lgamma(large) - libm::lgamma(small + large);
    }
    let sum = small + large;
    libm::lgamma(small) - (large - 0.5) * libm::log1p(small / large) - small * libm::log(sum)
        + small
        + stirling_rest(large)
        - stirling_rest(sum)
}

/// From here on Stirling's series gives full accuracy in seven terms.
pub(super) const LARGE: f64 = 15.0;

/// ln Γ(z) − (z − ½) ln z + z − ½ ln 2π, z ≥ 15.
pub(super) fn stirling_rest(z: f64) -> f64 {
    let r = 1.0 / (z * z);
    let terms = [
        1.0 / 12.0,
        -1.0 / 360.0,
        1.0 / 1260.0,
        -1.0 / 1680.0,
        1.0 / 1188.0,
        -691.0 / 360_360.0,
        1.0 / 156.0,
    ];
    terms.iter().rev().fold(0.0, |sum, term| sum * r + term) / z
}

/// I_x(a, b), the regularised incomplete beta function: the probability below `x` of the beta distribution; a, b > 0.
///
/// Continued fraction (Abramowitz & Stegun 1964, 26.5.8) by Lentz's method, on the side where it converges quickly.
#[must_use]
pub fn incomplete_beta(a: f64, b: f64, x: f64) -> f64 {
    tails(a, b, x, 1.0 - x).0
}

/// I_x(a, b) and 1 − I_x(a, b), each with its own relative accuracy; `rest` is 1 − x, given apart so that it may be
/// more exact than the difference.
pub(super) fn tails(a: f64, b: f64, x: f64, rest: f64) -> (f64, f64) {
    if x <= 0.0 {
        return (0.0, 1.0);
    }
    if rest <= 0.0 {
        return (1.0, 0.0);
    }
    let ln_x = if x < 0.5 { libm::log(x) } else { libm::log1p(-rest) };
    let ln_rest = if rest < 0.5 { libm::log(rest) } else { libm::log1p(-x) };
    let front = libm::exp(a * ln_x + b * ln_rest - ln_beta(a, b));
    if x < (a + 1.0) / (a + b + 2.0) {
        let below = front * continued_fraction(a, b, x) / a;
        (below, 1.0 - below)
    } else {
        let above = front * continued_fraction(b, a, rest) / b;
        (1.0 - above, above)
    }
}

fn continued_fraction(a: f64, b: f64, x: f64) -> f64 {
    const TINY: f64 = 1e-300;
    let away = |v: f64| if v.abs() < TINY { TINY } else { v };
    let mut c = 1.0;
    let mut d = 1.0 / away(1.0 - (a + b) * x / (a + 1.0));
    let mut h = d;
    // It takes of the order of the root of the larger argument; the bound is never met in practice.
    for step in 1..100_000 {
        let m = f64::from(step);
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        d = 1.0 / away(1.0 + even * d);
        c = away(1.0 + even / c);
        h *= d * c;
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        d = 1.0 / away(1.0 + odd * d);
        c = away(1.0 + odd / c);
        let change = d * c;
        h *= change;
        if (change - 1.0).abs() < 1e-16 {
            break;
        }
    }
    h
}

/// The quantile of the beta distribution: the `x` with I_x(a, b) = `p`, 0 < p < 1.
///
/// Solved on ln(x/(1 − x)) for the logarithm of the smaller tail, which keeps its relative accuracy at ppm scale.
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn beta_quantile(a: f64, b: f64, p: f64) -> Result<f64, StatisticsFault> {
    let excess = |logit: f64| {
        let e = libm::exp(-logit.abs());
        let (minor, major) = (e / (1.0 + e), 1.0 / (1.0 + e));
        let (x, rest) = if logit < 0.0 { (minor, major) } else { (major, minor) };
        let (below, above) = tails(a, b, x, rest);
        let least = f64::MIN_POSITIVE;
        if p < 0.5 {
            libm::log(below.max(least)) - libm::log(p)
        } else {
            libm::log1p(-p) - libm::log(above.max(least))
        }
    };
    let (mut low, mut high) = (-1.0, 1.0);
    let (mut at_low, mut at_high) = (excess(low), excess(high));
    while at_low > 0.0 && low > -700.0 {
        low *= 2.0;
        at_low = excess(low);
    }
    while at_high < 0.0 && high < 700.0 {
        high *= 2.0;
        at_high = excess(high);
    }
    find_root(excess, Bracket { low: (low, at_low), high: (high, at_high) }, 1e-15)
        .map(|logit| 1.0 / (1.0 + libm::exp(-logit)))
        .ok_or(StatisticsFault::NotConverged { what: "quantile of the beta distribution" })
}

/// P(X ≤ `events`) of the binomial distribution: `pieces` n, each an event with probability `fraction`.
#[must_use]
pub fn binomial_cdf(events: u64, pieces: u64, fraction: f64) -> f64 {
    if events >= pieces {
        return 1.0;
    }
    // P(X ≤ x) = I_{1−p}(n − x, x + 1).
    tails((events + 1) as f64, (pieces - events) as f64, fraction, 1.0 - fraction).1
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn small_cases_by_hand() {
        assert!((incomplete_beta(1.0, 1.0, 0.3) - 0.3).abs() < 1e-15);
        assert!((incomplete_beta(2.0, 1.0, 0.3) - 0.09).abs() < 1e-15);
        // Two coins: 1/4, 3/4.
        assert!((binomial_cdf(0, 2, 0.5) - 0.25).abs() < 1e-15);
        assert!((binomial_cdf(1, 2, 0.5) - 0.75).abs() < 1e-15);
        assert_eq!(binomial_cdf(2, 2, 0.5), 1.0);
        assert_eq!(binomial_cdf(0, 7, 0.0), 1.0);
        assert_eq!(binomial_cdf(6, 7, 1.0), 0.0);
    }

    #[test]
    fn stirling_joins_the_plain_sum() {
        let plain = |a: f64, b: f64| libm::lgamma(a) + libm::lgamma(b) - libm::lgamma(a + b);
        for (a, b) in [(0.5, 16.0), (3.0, 20.0), (16.0, 16.0), (12.0, 40.0)] {
            assert!((ln_beta(a, b) - plain(a, b)).abs() < 1e-13, "{a} {b}");
        }
    }

    proptest! {
        #[test]
        fn the_quantile_inverts_and_the_function_is_symmetric(
            ln_a in -1.0..12.0_f64, ln_b in -1.0..12.0_f64, p in 1e-6..0.999_999_f64,
        ) {
            let (a, b) = (libm::exp(ln_a), libm::exp(ln_b));
            let x = beta_quantile(a, b, p).unwrap();
            prop_assert!((0.0..=1.0).contains(&x));
            let back = incomplete_beta(a, b, x);
            // What rounding of x alone does to the probability, near 1 for small b.
            let rounding = 1e-10 + 1e-9 * p;
            prop_assert!((back - p).abs() < rounding || 1.0 - x < 1e-9, "{a} {b} {p} {x} {back}");
            let mirrored = 1.0 - incomplete_beta(b, a, 1.0 - x);
            prop_assert!((mirrored - back).abs() < 1e-9 || x < 1e-9 || 1.0 - x < 1e-9);
        }
    }
}

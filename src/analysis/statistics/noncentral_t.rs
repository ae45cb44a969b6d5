//! The non-central t distribution: what variables plans, tolerance factors and capability bounds rest on.

use super::{
    StatisticsFault,
    beta::{LARGE, stirling_rest},
    normal::{normal_cdf, normal_quantile},
};
use crate::physics::numerics::{Bracket, find_root, gauss_legendre_8};

/// T = (Z + δ)/S with Z standard normal and νS² chi-squared with ν degrees of freedom.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct NoncentralT {
    /// Degrees of freedom ν, above 0.
    pub degrees: f64,
    /// Non-centrality δ.
    pub delta: f64,
}

impl NoncentralT {
    /// P(T ≤ t) = ∫ Φ(ts − δ) f(s) ds over the density f of S.
    ///
    /// Gauss–Legendre panels no wider than the spread of S and, around s = δ/t where Φ turns, than 1/|t|.
    #[must_use]
    pub fn cdf(&self, t: f64) -> f64 {
        self.integral(t, normal_cdf)
    }

    /// P(T > t), with its own relative accuracy.
    #[must_use]
    pub fn survival(&self, t: f64) -> f64 {
        self.integral(t, |x| normal_cdf(-x))
    }

    fn integral(&self, t: f64, cdf: impl Fn(f64) -> f64) -> f64 {
        let Self { degrees, delta } = *self;
        let spread = 1.0 / (2.0 * degrees).sqrt();
        let (from, to) = ((1.0 - REACH * spread).max(0.0), 1.0 + REACH * spread);
        // ln of 2 (ν/2)^(ν/2)/Γ(ν/2) s^(ν−1) exp(−νs²/2), around s = 1 to keep digits.
        let half = 0.5 * degrees;
        let constant = ln_density_scale(half);
        let density = |s: f64| {
            let excess = (s - 1.0) * (s + 1.0);
            libm::exp(constant + (degrees - 1.0) * libm::log(s) - half * excess)
        };
        let integrand = |s: f64| cdf(t * s - delta) * density(s);
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
                .sum::<f64>()
        };
        let turn = delta / t;
        let narrow = 1.0 / t.abs();
        if narrow >= spread || !turn.is_finite() {
            return sum_of(from, to, spread).min(1.0);
        }
        let (low, high) = ((turn - REACH * narrow).clamp(from, to), (turn + REACH * narrow).clamp(from, to));
        let middle = turn.clamp(low, high);
        let whole = sum_of(from, low, spread)
            + sum_of(low, middle, narrow)
            + sum_of(middle, high, narrow)
            + sum_of(high, to, spread);
        whole.min(1.0)
    }

    /// The quantile: the t with P(T ≤ t) = `p`, 0 < p < 1.
    ///
    /// # Errors
    /// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
    pub fn quantile(&self, p: f64) -> Result<f64, StatisticsFault> {
        let Self { degrees, delta } = *self;
        let spread = (1.0 + delta * delta / (2.0 * degrees)).sqrt();
        let guess = delta + normal_quantile(p) * spread;
        let what = "quantile of the non-central t distribution";
        let excess = |t: f64| if p < 0.5 { self.cdf(t) - p } else { 1.0 - p - self.survival(t) };
        let at_guess = excess(guess);
        let mut step = 0.25 * spread;
        let (mut low, mut high) = ((guess, at_guess), (guess, at_guess));
        for _ in 0..200 {
            if low.1 > 0.0 {
                high = low;
                low = (low.0 - step, excess(low.0 - step));
            } else if high.1 < 0.0 {
                low = high;
                high = (high.0 + step, excess(high.0 + step));
            } else {
                break;
            }
            step *= 2.0;
        }
        let tolerance = 1e-13 * (1.0 + guess.abs());
        find_root(excess, Bracket { low, high }, tolerance).ok_or(StatisticsFault::NotConverged { what })
    }
}

/// ln of 2 (ν/2)^(ν/2) e^(−ν/2)/Γ(ν/2), with `half` = ν/2; by Stirling's series where the terms are large and nearly cancel.
fn ln_density_scale(half: f64) -> f64 {
    use core::f64::consts::{LN_2, TAU};
    if half < LARGE {
        LN_2 + half * (libm::log(half) - 1.0) - libm::lgamma(half)
    } else {
        LN_2 + 0.5 * libm::log(half / TAU) - stirling_rest(half)
    }
}

/// How many standard deviations of S, or of the normal distribution, are integrated over.
const REACH: f64 = 12.0;

/// The non-centrality δ for which P(T > `t`) is `tail`, with `degrees` of freedom: how confidence bounds are found.
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn noncentrality(t: f64, degrees: f64, tail: f64) -> Result<f64, StatisticsFault> {
    let what = "confidence bound by the non-central t distribution";
    let spread = (1.0 + t * t / (2.0 * degrees)).sqrt();
    let guess = t + normal_quantile(tail) * spread;
    let excess = |delta: f64| NoncentralT { degrees, delta }.survival(t) - tail;
    let at_guess = excess(guess);
    let mut step = 0.25 * spread;
    let (mut low, mut high) = ((guess, at_guess), (guess, at_guess));
    for _ in 0..200 {
        if low.1 > 0.0 {
            high = low;
            low = (low.0 - step, excess(low.0 - step));
        } else if high.1 < 0.0 {
            low = high;
            high = (high.0 + step, excess(high.0 + step));
        } else {
            break;
        }
        step *= 2.0;
    }
    let tolerance = 1e-13 * (1.0 + guess.abs());
    find_root(excess, Bracket { low, high }, tolerance).ok_or(StatisticsFault::NotConverged { what })
}

#[cfg(test)]
mod tests {
    use super::{super::student::t_cdf, *};
    use proptest::prelude::*;

    #[test]
    fn without_noncentrality_it_is_students() {
        for degrees in [1.0, 2.0, 5.0, 41.0, 999.0] {
            for t in [-8.0, -1.0, -1e-3, 0.0, 0.4, 2.0, 30.0] {
                let ours = NoncentralT { degrees, delta: 0.0 }.cdf(t);
                assert!((ours - t_cdf(t, degrees)).abs() < 1e-12, "{degrees} {t} {ours}");
            }
        }
    }

    #[test]
    fn at_zero_it_is_the_normal() {
        let p = NoncentralT { degrees: 7.0, delta: 1.3 }.cdf(0.0);
        assert!((p - normal_cdf(-1.3)).abs() < 1e-13);
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(64))]
        #[test]
        fn quantile_and_bound_invert(degrees in 1.0..2000.0_f64, delta in -5.0..200.0_f64, p in 0.001..0.999_f64) {
            let distribution = NoncentralT { degrees: degrees.floor(), delta };
            let t = distribution.quantile(p).unwrap();
            prop_assert!((distribution.cdf(t) - p).abs() < 1e-11);
            prop_assert!((distribution.cdf(t) + distribution.survival(t) - 1.0).abs() < 1e-12);
            let back = noncentrality(t, degrees.floor(), 1.0 - p).unwrap();
            prop_assert!((back - delta).abs() < 1e-8 * (1.0 + delta.abs()), "{back}");
        }
    }
}

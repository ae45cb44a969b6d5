//! Tests of normality: Anderson–Darling and Shapiro–Wilk.

use super::{
    moments::Moments,
    normal::{ln_cdf, normal_cdf, normal_quantile},
};

/// A test statistic and its p-value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TestResult {
    /// The statistic.
    pub statistic: f64,
    /// Probability of a statistic at least as far out, were the sample normal.
    pub p_value: f64,
}

/// Anderson–Darling A² of a sorted sample, mean and standard deviation estimated from it. `None` for fewer than three
/// values or no spread.
#[must_use]
pub fn anderson_darling_a2(sorted: &[f64]) -> Option<f64> {
    let moments = Moments::of(sorted)?;
    let spread = moments.standard_deviation.filter(|s| *s > 0.0)?;
    if sorted.len() < 3 {
        return None;
    }
    let n = sorted.len() as f64;
    let z = |x: f64| (x - moments.mean) / spread;
    let sum: f64 = sorted
        .iter()
        .zip(sorted.iter().rev())
        .enumerate()
        .map(|(i, (low, high))| (2 * i + 1) as f64 * (ln_cdf(z(*low)) + ln_cdf(-z(*high))))
        .sum();
    Some(-n - sum / n)
}

/// Anderson–Darling A* = A² (1 + 0.75/n + 2.25/n²) of a sorted sample, with the p-value of D'Agostino & Stephens 1986,
/// *Goodness-of-Fit Techniques*, table 4.9. `None` for fewer than eight values, where that table does not hold, or no
/// spread.
#[must_use]
pub fn anderson_darling(sorted: &[f64]) -> Option<TestResult> {
    if sorted.len() < 8 {
        return None;
    }
    let n = sorted.len() as f64;
    let statistic = anderson_darling_a2(sorted)? * (1.0 + 0.75 / n + 2.25 / (n * n));
    Some(TestResult { statistic, p_value: anderson_darling_p(statistic) })
}

/// The p-value of a modified statistic A*.
#[must_use]
pub fn anderson_darling_p(a: f64) -> f64 {
    let square = a * a;
    if a >= 153.0 {
        // The fitted parabola turns here; the value is below 1e-180.
        0.0
    } else if a >= 0.6 {
        libm::exp(1.2937 - 5.709 * a + 0.0186 * square)
    } else if a >= 0.34 {
        libm::exp(0.9177 - 4.279 * a - 1.38 * square)
    } else if a >= 0.2 {
        1.0 - libm::exp(-8.318 + 42.796 * a - 59.938 * square)
    } else {
        1.0 - libm::exp(-13.436 + 101.14 * a - 223.73 * square)
    }
}

/// Sample sizes for which Royston's approximation of Shapiro–Wilk holds.
pub const SHAPIRO_WILK_SIZES: core::ops::RangeInclusive<usize> = 3..=5000;

/// Shapiro–Wilk W of a sorted sample with Royston's approximations (Royston 1995, algorithm AS R94, doi
/// 10.2307/2986146; coefficients from memory, held by published values). `None` outside [`SHAPIRO_WILK_SIZES`] or
/// without spread.
#[must_use]
pub fn shapiro_wilk(sorted: &[f64]) -> Option<TestResult> {
    let count = sorted.len();
    if !SHAPIRO_WILK_SIZES.contains(&count) || sorted.first() == sorted.last() {
        return None;
    }
    let weights = royston_weights(count);
    let moments = Moments::of(sorted)?;
    let residual = |x: f64| x - moments.mean;
    let squares: f64 = sorted.iter().map(|x| residual(*x) * residual(*x)).sum();
    let half: f64 = weights
        .iter()
        .zip(sorted.iter().zip(sorted.iter().rev()))
        .map(|(weight, (low, high))| weight * (high - low))
        .sum();
    let statistic = (half * half / squares).min(1.0);
    Some(TestResult { statistic, p_value: shapiro_wilk_p(statistic, count) })
}

fn polynomial(coefficients: &[f64], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, c| sum * x + c)
}

/// Weights of the upper half of the sample, outermost first.
fn royston_weights(count: usize) -> Vec<f64> {
    let half = count / 2;
    if count == 3 {
        return vec![core::f64::consts::FRAC_1_SQRT_2];
    }
    let n = count as f64;
    let m: Vec<f64> = (1..=half).map(|i| -normal_quantile((i as f64 - 0.375) / (n + 0.25))).collect();
    let total: f64 = 2.0 * m.iter().map(|x| x * x).sum::<f64>();
    let root = total.sqrt();
    let small = 1.0 / n.sqrt();
    let outer = polynomial(&[0.0, 0.221157, -0.147981, -2.07119, 4.434685, -2.706056], small) + m[0] / root;
    let mut weights = vec![outer];
    let square = |x: f64| x * x;
    let scale = if count > 5 {
        let next =
            m[1] / root + polynomial(&[0.0, 0.042981, -0.293762, -1.752461, 5.682633, -3.582633], small);
        weights.push(next);
        ((total - 2.0 * square(m[0]) - 2.0 * square(m[1])) / (1.0 - 2.0 * square(outer) - 2.0 * square(next)))
            .sqrt()
    } else {
        ((total - 2.0 * square(m[0])) / (1.0 - 2.0 * square(outer))).sqrt()
    };
    let rest = m.iter().skip(weights.len()).map(|x| x / scale).collect::<Vec<_>>();
    weights.extend(rest);
    weights
}

/// The p-value of W for a sample of `count`.
#[must_use]
pub fn shapiro_wilk_p(w: f64, count: usize) -> f64 {
    use core::f64::consts::{FRAC_PI_3, PI};
    if count == 3 {
        return (6.0 / PI * (libm::asin(w.sqrt()) - FRAC_PI_3)).clamp(0.0, 1.0);
    }
    let n = count as f64;
    let ln_rest = libm::log(1.0 - w);
    let (y, mean, spread) = if count <= 11 {
        let gamma = polynomial(&[-2.273, 0.459], n);
        if ln_rest >= gamma {
            return 0.0;
        }
        let mean = polynomial(&[0.544, -0.39978, 0.025054, -6.714e-4], n);
        let spread = libm::exp(polynomial(&[1.3822, -0.77857, 0.062767, -0.0020322], n));
        (-libm::log(gamma - ln_rest), mean, spread)
    } else {
        let x = libm::log(n);
        let mean = polynomial(&[-1.5861, -0.31082, -0.083751, 0.0038915], x);
        let spread = libm::exp(polynomial(&[-0.4803, -0.082676, 0.0030302], x));
        (ln_rest, mean, spread)
    };
    normal_cdf((mean - y) / spread)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn normal_scores(count: usize) -> Vec<f64> {
        (0..count).map(|i| normal_quantile((i as f64 + 0.5) / count as f64)).collect()
    }

    #[test]
    fn normal_scores_pass_and_their_exponentials_do_not() {
        for count in [8, 11, 12, 50, 1000, 5000] {
            let scores = normal_scores(count);
            let skew: Vec<f64> = scores.iter().map(|x| libm::exp(2.0 * x)).collect();
            for test in [anderson_darling, shapiro_wilk] {
                assert!(test(&scores).unwrap().p_value > 0.5, "{count}");
                assert!(test(&skew).unwrap().p_value < 0.02, "{count}");
            }
        }
    }

    #[test]
    fn too_few_or_all_equal_give_nothing() {
        assert_eq!(anderson_darling(&[1.0; 20]), None);
        assert_eq!(shapiro_wilk(&[1.0; 20]), None);
        assert_eq!(shapiro_wilk(&[1.0, 2.0]), None);
        assert_eq!(anderson_darling(&[1.0, 2.0, 3.0]), None);
        assert!(shapiro_wilk(&[1.0, 2.0, 4.0]).is_some());
    }
}

//! The standard normal distribution, on portable functions (statistics crates call the platform's).

use super::lanes::normal_cdf;

/// Below this Φ is computed through its hazard, where `erfc` would in the end vanish.
const FAR_TAIL: f64 = -8.0;

/// ln Φ(x), finite however far `x` lies in the lower tail.
#[must_use]
pub fn ln_normal_cdf(x: f64) -> f64 {
    if x > FAR_TAIL {
        // Near Φ = 1 the upper tail keeps the accuracy.
        return if x > 0.0 { libm::log1p(-normal_cdf(-x)) } else { libm::log(normal_cdf(x)) };
    }
    -0.5 * x * x - LN_ROOT_2_PI - libm::log(hazard_in_far_tail(-x))
}

/// φ(x)/Φ(x), the inverse Mills ratio of the lower tail; near −x far below zero.
#[must_use]
pub fn normal_hazard_below(x: f64) -> f64 {
    if x > FAR_TAIL {
        return libm::exp(-0.5 * x * x - LN_ROOT_2_PI) / normal_cdf(x);
    }
    hazard_in_far_tail(-x)
}

/// φ(t)/(1 − Φ(t)) for large t by Laplace's continued fraction t + 1/(t + 2/(t + 3/(t + …))) (Abramowitz & Stegun 26.2.14).
fn hazard_in_far_tail(t: f64) -> f64 {
    (1..=40).rev().fold(t, |rest, k| t + f64::from(k) / rest)
}

/// ln √(2π).
const LN_ROOT_2_PI: f64 = 0.918_938_533_204_672_8;

/// The quantile: the `x` with Φ(x) = `p`, for 0 < p < 1; NaN otherwise.
///
/// Winitzki's approximation of the inverse error function (from memory), polished by Halley's method on Φ to machine accuracy.
#[must_use]
pub fn normal_quantile(p: f64) -> f64 {
    if p.is_nan() || p <= 0.0 || p >= 1.0 {
        return f64::NAN;
    }
    // Work in the lower tail, where Φ keeps its relative accuracy.
    let tail = p.min(1.0 - p);
    const A: f64 = 0.147;
    let ln_term = libm::log(4.0 * tail * (1.0 - tail));
    let c = 2.0 / (core::f64::consts::PI * A) + 0.5 * ln_term;
    let mut x = -(2.0 * ((c * c - ln_term / A).sqrt() - c)).max(0.0).sqrt();
    for _ in 0..4 {
        let density = libm::exp(-0.5 * x * x) / (2.0 * core::f64::consts::PI).sqrt();
        let step = (normal_cdf(x) - tail) / density;
        let halley = step / (1.0 + 0.5 * x * step);
        x -= halley;
        if halley.abs() < 1e-15 * (1.0 + x.abs()) {
            break;
        }
    }
    if p > 0.5 { -x } else { x }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_lower_tail_is_followed_to_any_depth() {
        // Φ(−10) = 7.619853024160527e-24 (tables); ln Φ(−38) by a deeper continued fraction: Φ itself is subnormal there.
        assert!((ln_normal_cdf(-10.0) - libm::log(7.619853024160527e-24)).abs() < 1e-12);
        assert!((ln_normal_cdf(-38.0) - -726.557_216_018_820_1).abs() < 1e-9, "{}", ln_normal_cdf(-38.0));
        for x in [-40.0, -9.0, -8.0 - 1e-9, -8.0 + 1e-9, -7.0, -1.0, 0.0, 2.0, 9.0] {
            let slope = (ln_normal_cdf(x + 1e-6) - ln_normal_cdf(x - 1e-6)) / 2e-6;
            assert!((normal_hazard_below(x) - slope).abs() < 1e-6 * (1.0 + x.abs()), "{x}");
        }
        assert!((ln_normal_cdf(FAR_TAIL - 1e-12) - ln_normal_cdf(FAR_TAIL + 1e-12)).abs() < 1e-9);
        assert!(ln_normal_cdf(-1e5).is_finite());
    }

    #[test]
    fn quantile_inverts_the_distribution() {
        // Handbook values of the normal distribution.
        for (p, x) in [
            (0.975, 1.959_963_984_540_054),
            (0.95, 1.644_853_626_951_472_2),
            (0.5, 0.0),
            (0.999, 3.090_232_306_167_813_5),
        ] {
            assert!((normal_quantile(p) - x).abs() < 1e-13, "{p} {}", normal_quantile(p));
        }
        for i in 1..1000 {
            let p = f64::from(i) / 1000.0;
            assert!((normal_cdf(normal_quantile(p)) - p).abs() < 1e-14);
        }
        assert!((normal_cdf(normal_quantile(1e-12)) / 1e-12 - 1.0).abs() < 1e-10);
        assert!(
            normal_quantile(0.0).is_nan()
                && normal_quantile(1.0).is_nan()
                && normal_quantile(f64::NAN).is_nan()
        );
    }
}

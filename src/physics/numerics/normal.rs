//! The standard normal distribution, on portable functions (statistics crates call the platform's).

use super::lanes::normal_cdf;

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

//! The standard normal distribution: density, logarithms of the tails, and a quantile quick enough for random trials.

pub use crate::physics::numerics::{normal_cdf, normal_quantile};

/// ln √(2π).
const LN_ROOT_TWO_PI: f64 = 0.918_938_533_204_672_8;

/// φ(x), the density at `x`.
#[must_use]
pub fn density(x: f64) -> f64 {
    libm::exp(-0.5 * x * x - LN_ROOT_TWO_PI)
}

/// ln Φ(x), finite also where Φ(x) is below the smallest double.
#[must_use]
pub fn ln_cdf(x: f64) -> f64 {
    if x > -30.0 {
        return libm::log(normal_cdf(x));
    }
    // Φ(x) ~ φ(x)/|x| (1 − 1/x² + 3/x⁴ − 15/x⁶ …) (Abramowitz & Stegun 1964, 26.2.12).
    let r = 1.0 / (x * x);
    -0.5 * x * x - LN_ROOT_TWO_PI - libm::log(-x)
        + libm::log1p(r * (-1.0 + r * (3.0 + r * (-15.0 + r * (105.0 - 945.0 * r)))))
}

/// The quantile: the `x` with Φ(x) = `p`, 0 < p < 1, to about 1e-15 relative.
///
/// Rational approximations of Wichura 1988 (algorithm AS 241, PPND16; doi 10.2307/2347330): one division in the
/// middle 85 % of the probability, a logarithm and a root outside it.
#[must_use]
pub fn quick_quantile(p: f64) -> f64 {
    let q = p - 0.5;
    if q.abs() <= 0.425 {
        let r = 0.180_625 - q * q;
        return q * ratio(r, &MIDDLE);
    }
    let tail = if q < 0.0 { p } else { 1.0 - p };
    let r = (-libm::log(tail)).sqrt();
    let x = if r <= 5.0 { ratio(r - 1.6, &OUTER) } else { ratio(r - 5.0, &FAR) };
    if q < 0.0 { -x } else { x }
}

/// [`quick_quantile`] of many probabilities, in place: the middle part in vector instructions, the tails one by one. The same bytes.
pub fn quick_quantiles(arch: pulp::Arch, probabilities: &mut [f64]) {
    const AT_A_TIME: usize = 64;
    struct Middle<'a> {
        from: &'a [f64],
        to: &'a mut [f64],
    }
    impl pulp::NullaryFnOnce for Middle<'_> {
        type Output = ();

        #[inline(always)]
        fn call(self) {
            for (p, z) in self.from.iter().zip(self.to) {
                let q = p - 0.5;
                *z = q * ratio(0.180_625 - q * q, &MIDDLE);
            }
        }
    }
    let mut found = [0.0; AT_A_TIME];
    for chunk in probabilities.chunks_mut(AT_A_TIME) {
        arch.dispatch(Middle { from: chunk, to: &mut found[..chunk.len()] });
        for (p, z) in chunk.iter_mut().zip(found) {
            *p = if (*p - 0.5).abs() <= 0.425 { z } else { quick_quantile(*p) };
        }
    }
}

type Rational = ([f64; 8], [f64; 8]);

#[inline(always)]
fn ratio(r: f64, (above, below): &Rational) -> f64 {
    let sum = |c: &[f64; 8]| {
        ((((((c[7] * r + c[6]) * r + c[5]) * r + c[4]) * r + c[3]) * r + c[2]) * r + c[1]) * r + c[0]
    };
    sum(above) / sum(below)
}

// AS 241, from memory; the test against the polished quantile holds them.
const MIDDLE: Rational = (
    [
        3.3871328727963666080,
        1.3314166789178437745e2,
        1.9715909503065514427e3,
        1.3731693765509461125e4,
        4.5921953931549871457e4,
        6.7265770927008700853e4,
        3.3430575583588128105e4,
        2.5090809287301226727e3,
    ],
    [
        1.0,
        4.2313330701600911252e1,
        6.8718700749205790830e2,
        5.3941960214247511077e3,
        2.1213794301586595867e4,
        3.9307895800092710610e4,
        2.8729085735721942674e4,
        5.2264952788528545610e3,
    ],
);
const OUTER: Rational = (
    [
        1.42343711074968357734,
        4.63033784615654529590,
        5.76949722146069140550,
        3.64784832476320460504,
        1.27045825245236838258,
        2.41780725177450611770e-1,
        2.27238449892691845833e-2,
        7.74545014278341407640e-4,
    ],
    [
        1.0,
        2.05319162663775882187,
        1.67638483018380384940,
        6.89767334985100004550e-1,
        1.48103976427480074590e-1,
        1.51986665636164571966e-2,
        5.47593808499534494600e-4,
        1.05075007164441684324e-9,
    ],
);
const FAR: Rational = (
    [
        6.65790464350110377720,
        5.46378491116411436990,
        1.78482653991729133580,
        2.96560571828504891230e-1,
        2.65321895265761230930e-2,
        1.24266094738807843860e-3,
        2.71155556874348757815e-5,
        2.01033439929228813265e-7,
    ],
    [
        1.0,
        5.99832206555887937690e-1,
        1.36929880922735805310e-1,
        1.48753612908506148525e-2,
        7.86869131145613259100e-4,
        1.84631831751005468180e-5,
        1.42151175831644588870e-7,
        2.04426310338993978564e-15,
    ],
);

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_quick_quantile_agrees_with_the_polished_one() {
        for i in 1..20_000 {
            let p = f64::from(i) / 20_000.0;
            let (quick, polished) = (quick_quantile(p), normal_quantile(p));
            assert!((quick - polished).abs() < 1e-14 * (1.0 + polished.abs()), "{p} {quick} {polished}");
        }
        for exponent in 1..300 {
            let p = libm::pow(10.0, -f64::from(exponent));
            let relative = libm::exp(ln_cdf(quick_quantile(p)) - libm::log(p)) - 1.0;
            assert!(relative.abs() < 1e-11, "{p} {relative}");
        }
    }

    #[test]
    fn many_at_a_time_are_the_same() {
        let probabilities: Vec<f64> = (0..777).map(|i| (f64::from(i) + 0.5) / 777.0).collect();
        let mut found = probabilities.clone();
        quick_quantiles(pulp::Arch::new(), &mut found);
        assert!(found.iter().zip(&probabilities).all(|(z, p)| z.to_bits() == quick_quantile(*p).to_bits()));
    }

    #[test]
    fn logarithm_of_the_tail_joins_smoothly() {
        let (near, far) = (ln_cdf(-29.999_999), ln_cdf(-30.000_001));
        assert!((near - far - 30.03 * 2e-6).abs() < 1e-6, "{near} {far}");
        assert!(ln_cdf(-100.0).is_finite() && ln_cdf(-1e4).is_finite());
    }
}

//! Gauss–Legendre quadrature.

/// Nodes and weights of the 8-point rule on [−1, 1], positive half; the rule is symmetric.
/// (Abramowitz & Stegun 1964, table 25.4.)
const HALF_RULE: [(f64, f64); 4] = [
    (0.183_434_642_495_649_8, 0.362_683_783_378_362_0),
    (0.525_532_409_916_329_0, 0.313_706_645_877_887_3),
    (0.796_666_477_413_626_7, 0.222_381_034_453_374_5),
    (0.960_289_856_497_536_2, 0.101_228_536_290_376_3),
];

/// Integral of `f` from `from` to `to` by the 8-point Gauss–Legendre rule: exact for polynomials up to degree
/// 15.
pub fn gauss_legendre_8(mut f: impl FnMut(f64) -> f64, from: f64, to: f64) -> f64 {
    let (centre, half) = (0.5 * (from + to), 0.5 * (to - from));
    let sum: f64 = HALF_RULE
        .iter()
        .map(|&(node, weight)| weight * (f(centre - half * node) + f(centre + half * node)))
        .sum();
    half * sum
}

#[cfg(test)]
mod tests {
    use super::gauss_legendre_8;

    #[test]
    fn is_exact_for_degree_fifteen_and_not_beyond() {
        let power = |n: i32| move |x: f64| (0..n).fold(1.0, |p, _| p * x);
        let exact = |n: i32| 1.0 / f64::from(n + 1);
        assert!((gauss_legendre_8(power(15), 0.0, 1.0) - exact(15)).abs() < 1e-15);
        assert!((gauss_legendre_8(power(40), 0.0, 1.0) - exact(40)).abs() > 1e-9);
    }

    #[test]
    fn integrates_an_exponential() {
        let integral = gauss_legendre_8(libm::exp, 0.0, 2.0);
        assert!((integral - (libm::exp(2.0) - 1.0)).abs() < 1e-13, "{integral}");
    }
}

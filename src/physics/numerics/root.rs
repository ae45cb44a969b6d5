//! Root of a continuous function in a bracket.

/// A bracket and the function's values at its ends, which must differ in sign (or be zero).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bracket {
    /// Lower end and the function's value there.
    pub low: (f64, f64),
    /// Upper end and the function's value there.
    pub high: (f64, f64),
}

/// Root of `f` in the bracket by Brent's method (Brent 1973, *Algorithms for Minimization without Derivatives*, ch. 4),
/// to within `tolerance` (absolute, in the argument's unit).
///
/// Gives `None` when the ends do not differ in sign, when a value is not finite, or after 200 steps.
pub fn find_root(mut f: impl FnMut(f64) -> f64, bracket: Bracket, tolerance: f64) -> Option<f64> {
    let (mut a, mut fa) = bracket.low;
    let (mut b, mut fb) = bracket.high;
    if !(fa.is_finite() && fb.is_finite()) || fa * fb > 0.0 {
        return None;
    }
    let (mut c, mut fc) = (a, fa);
    let mut d = b - a;
    let mut e = d;
    for _ in 0..200 {
        if (fb > 0.0) == (fc > 0.0) {
            (c, fc) = (a, fa);
            d = b - a;
            e = d;
        }
        if fc.abs() < fb.abs() {
            (a, fa) = (b, fb);
            (b, fb) = (c, fc);
            (c, fc) = (a, fa);
        }
        let tol = 2.0 * f64::EPSILON * b.abs() + 0.5 * tolerance;
        let half = 0.5 * (c - b);
        if half.abs() <= tol || fb == 0.0 {
            return Some(b);
        }
        if e.abs() >= tol && fa.abs() > fb.abs() {
            let s = fb / fa;
            let (mut p, mut q) = if a == c {
                (2.0 * half * s, 1.0 - s)
            } else {
                let (q, r) = (fa / fc, fb / fc);
                (s * (2.0 * half * q * (q - r) - (b - a) * (r - 1.0)), (q - 1.0) * (r - 1.0) * (s - 1.0))
            };
            if p > 0.0 {
                q = -q;
            } else {
                p = -p;
            }
            if 2.0 * p < (3.0 * half * q - (tol * q).abs()).min((e * q).abs()) {
                e = d;
                d = p / q;
            } else {
                d = half;
                e = half;
            }
        } else {
            d = half;
            e = half;
        }
        (a, fa) = (b, fb);
        b += if d.abs() > tol { d } else { tol.copysign(half) };
        fb = f(b);
        if !fb.is_finite() {
            return None;
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::{Bracket, find_root};

    fn solve(f: impl Fn(f64) -> f64, low: f64, high: f64) -> Option<f64> {
        find_root(&f, Bracket { low: (low, f(low)), high: (high, f(high)) }, 1e-14)
    }

    #[test]
    fn finds_the_dottie_number() {
        let x = solve(|x| libm::cos(x) - x, 0.0, 1.0).unwrap();
        assert!((x - 0.739_085_133_215_160_6).abs() < 1e-13, "{x}");
    }

    #[test]
    fn finds_a_triple_root_and_an_end() {
        assert!(
            solve(|x| (x - 1.0) * (x - 1.0) * (x - 1.0), -1.0, 4.0).is_some_and(|x| (x - 1.0).abs() < 1e-4)
        );
        assert_eq!(solve(|x| x, 0.0, 1.0), Some(0.0));
    }

    #[test]
    fn refuses_a_bracket_without_a_change_of_sign() {
        assert_eq!(solve(|x| x * x + 1.0, -1.0, 1.0), None);
        assert_eq!(solve(|_| f64::NAN, 0.0, 1.0), None);
    }
}

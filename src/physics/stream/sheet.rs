//! The wide laminar film on a constant slope, in closed form.

use super::newton::newton;

/// Beyond this many e-foldings of h − h_N the film is normal to the last digit.
const NORMAL: f64 = 45.0;

/// Depth, m, of a wide film that has run `length`, m, down a slope from the depth `start`, m.
///
/// (g_c h − βq²/h²) h′ = g_s h − 3νq/h² has the integral x = cot σ {h − h₀ + (h_c³ − h_N³)[B(h₀) − B(h)]},
/// with B(h) = h_N⁻²{ln|s−1|/3 − ln(s²+s+1)/6 − atan((2s+1)/√3)/√3}, s = h/h_N (own integration; the flat-bed
/// case is Bresse's). h_N = (3νq/g_s)^⅓ `normal`, m; h_c³ = βq²/g_c `critical_cubed`, m³; `cotangent` cot σ.
/// The film must be supercritical at the start, h₀ < h_c, and the slope steep, h_N < h_c. Solved by Newton's
/// method for ln((h₀ − h_N)/(h − h_N)), in which x is monotone. `None` only if the iteration fails.
#[must_use]
pub fn depth_after(length: f64, start: f64, normal: f64, critical_cubed: f64, cotangent: f64) -> Option<f64> {
    let gap = start - normal;
    if length <= 0.0 {
        return Some(start);
    }
    let depth_at = |folds: f64| normal + gap * libm::exp(-folds);
    // dx/dn, n the number of e-foldings.
    let rate = |h: f64| cotangent * (critical_cubed - h * h * h) / (h * h + h * normal + normal * normal);
    let (first, last) = (rate(start), rate(normal));
    if length > NORMAL * first.max(last) {
        return Some(normal);
    }
    let surplus = critical_cubed - normal * normal * normal;
    let at_start = primitive(start / normal);
    let excess = |folds: f64| {
        let depth = depth_at(folds);
        let s = depth / normal;
        let difference = if s > FAR {
            far_primitive(s) - far_primitive(start / normal)
        } else {
            folds / 3.0 + at_start - primitive(s)
        };
        let x = cotangent * (depth - start + surplus / (normal * normal) * difference);
        (x - length, rate(depth))
    };
    // The rate changes monotonically from `first` to `last`; a parabola through the start overshoots or
    // nearly meets the root.
    let curvature = gap * cotangent * {
        let q = start * start + start * normal + normal * normal;
        (3.0 * start * start * q + (critical_cubed - start * start * start) * (2.0 * start + normal))
            / (q * q)
    };
    let guess = 2.0 * length / (first + (first * first + 2.0 * curvature * length).max(0.0).sqrt());
    let most = 1.000_001 * length / first.min(last);
    newton(excess, 0.0, most, guess.min(most)).map(depth_at)
}

/// h/h_N from which the series [`far_primitive`] is used: no cancellation there, and no transcendental
/// function.
const FAR: f64 = 4.0;

/// The part of h_N² B that stays finite at s = 1.
fn primitive(s: f64) -> f64 {
    let root3 = 3.0_f64.sqrt();
    -libm::log(s * s + s + 1.0) / 6.0 - libm::atan((2.0 * s + 1.0) / root3) / root3
}

/// −h_N² B(s) less its value at infinity: ∫_s^∞ ds/(s³ − 1) = Σ s^−(3k+2)/(3k+2), to 1e-16 for s ≥ 4.
fn far_primitive(s: f64) -> f64 {
    let r = 1.0 / s;
    let (square, cube) = (r * r, r * r * r);
    let series =
        [2.0, 5.0, 8.0, 11.0, 14.0, 17.0, 20.0, 23.0].iter().rev().fold(0.0, |sum, n| sum * cube + 1.0 / n);
    square * series
}

#[cfg(test)]
mod tests {
    use super::{depth_after, far_primitive, primitive};

    #[test]
    fn series_and_closed_primitive_agree() {
        let difference =
            |a: f64, b: f64| libm::log((a - 1.0) / (b - 1.0)) / 3.0 + primitive(a) - primitive(b);
        let (near, far) = (difference(9.0, 4.5), far_primitive(4.5) - far_primitive(9.0));
        assert!((near - far).abs() < 1e-14, "{near} {far}");
    }

    #[test]
    fn agrees_with_a_fine_march() {
        // Fourth-order Runge–Kutta on h′(x), 20 000 steps.
        for (start, normal, critical_cubed, cotangent, length) in [
            (4.2e-3, 2.0e-3, 1.2e-7, 1.0, 0.03),
            (4.0e-3, 3.0e-4, 1.2e-7, 0.6, 0.05),
            (4.0e-3, 3.9e-3, 9e-8, 2.0, 0.2),
        ] {
            let n3: f64 = normal * normal * normal;
            let slope = |h: f64| (h * h * h - n3) / (cotangent * (h * h * h - critical_cubed));
            let steps = 20_000;
            let dx = length / f64::from(steps);
            let mut h: f64 = start;
            for _ in 0..steps {
                let k1 = slope(h);
                let k2 = slope(h + 0.5 * dx * k1);
                let k3 = slope(h + 0.5 * dx * k2);
                let k4 = slope(h + dx * k3);
                h += dx / 6.0 * (k1 + 2.0 * k2 + 2.0 * k3 + k4);
            }
            let closed = depth_after(length, start, normal, critical_cubed, cotangent).unwrap();
            assert!((closed / h - 1.0).abs() < 1e-9, "{closed} {h}");
        }
    }
}

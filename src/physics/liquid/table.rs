//! Monotone cubic interpolation in a small table, without allocation.

/// Interpolates the points (`xs[i]`, `y(i)`) at `x` by monotone piecewise cubic Hermite polynomials: inner slopes are
/// weighted harmonic means, so that the curve never overshoots its table (Fritsch & Butland 1984,
/// doi:10.1137/0905021), end slopes are one-sided three-point formulas limited likewise. Outside the table it goes on in
/// a straight line with the end's slope.
///
/// `xs` ascends strictly and has at least three members. `y` is asked for at most four points.
pub(super) fn interpolate(xs: &[f64], y: impl Fn(usize) -> f64, x: f64) -> f64 {
    let last = xs.len() - 1;
    let i = xs.partition_point(|&knot| knot <= x).clamp(1, last) - 1;
    let width = xs[i + 1] - xs[i];
    let (y0, y1) = (y(i), y(i + 1));
    let secant = (y1 - y0) / width;
    let before = (i > 0).then(|| {
        let h = xs[i] - xs[i - 1];
        (h, (y0 - y(i - 1)) / h)
    });
    let after = (i + 1 < last).then(|| {
        let h = xs[i + 2] - xs[i + 1];
        (h, (y(i + 2) - y1) / h)
    });
    let here = (width, secant);
    // With three points at least, one of the neighbours exists.
    let slope0 = match (before, after) {
        (Some(before), _) => inner_slope(before, here),
        (None, Some(after)) => end_slope(here, after),
        (None, None) => secant,
    };
    let slope1 = match (after, before) {
        (Some(after), _) => inner_slope(here, after),
        (None, Some(before)) => end_slope(here, before),
        (None, None) => secant,
    };
    if x < xs[i] {
        return y0 + slope0 * (x - xs[i]);
    }
    if x > xs[i + 1] {
        return y1 + slope1 * (x - xs[i + 1]);
    }
    let s = (x - xs[i]) / width;
    let r = 1.0 - s;
    (1.0 + 2.0 * s) * r * r * y0 + s * r * r * width * slope0 + s * s * (3.0 - 2.0 * s) * y1
        - s * s * r * width * slope1
}

/// Slope at an inner point from the (width, secant) on both sides.
fn inner_slope((h0, d0): (f64, f64), (h1, d1): (f64, f64)) -> f64 {
    if d0 * d1 <= 0.0 {
        return 0.0;
    }
    let (a, b) = (2.0 * h1 + h0, h1 + 2.0 * h0);
    (a + b) / (a / d0 + b / d1)
}

/// Slope at an end from the (width, secant) next to it and the one after.
fn end_slope((h0, d0): (f64, f64), (h1, d1): (f64, f64)) -> f64 {
    let slope = ((2.0 * h0 + h1) * d0 - h0 * d1) / (h0 + h1);
    if slope * d0 <= 0.0 {
        0.0
    } else if d0 * d1 < 0.0 && slope.abs() > 3.0 * d0.abs() {
        3.0 * d0
    } else {
        slope
    }
}

#[cfg(test)]
mod tests {
    use super::interpolate;

    const XS: [f64; 5] = [0.0, 1.0, 3.0, 4.0, 7.0];

    #[test]
    fn passes_through_its_points_and_reproduces_a_straight_line() {
        let ys = [1.0, 4.0, 2.0, 2.0, 9.0];
        for (x, y) in XS.iter().zip(ys) {
            assert!((interpolate(&XS, |i| ys[i], *x) - y).abs() < 1e-14);
        }
        for x in [-2.0, 0.3, 2.9, 6.0, 11.0] {
            assert!((interpolate(&XS, |i| 3.0 * XS[i] - 1.0, x) - (3.0 * x - 1.0)).abs() < 1e-13);
        }
    }

    #[test]
    fn never_overshoots_and_has_no_jump() {
        let ys = [0.0, 0.1, 5.0, 5.0, 6.0];
        let mut previous = interpolate(&XS, |i| ys[i], 0.0);
        for k in 1..=700 {
            let y = interpolate(&XS, |i| ys[i], f64::from(k) * 0.01);
            assert!(y >= previous - 1e-12 && y - previous < 0.1, "{k}: {previous} {y}");
            previous = y;
        }
        assert!((previous - 6.0).abs() < 1e-12);
    }

    #[test]
    fn not_a_number_stays_one() {
        assert!(interpolate(&XS, |i| XS[i], f64::NAN).is_nan());
    }
}

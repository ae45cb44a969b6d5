//! Newton's method inside a bracket.

/// Root of a function that gives its value and slope, by Newton's steps, halving the bracket where a step
/// leaves it or shrinks too slowly.
///
/// `below` and `above` are arguments where the function is negative (or zero) and positive; either may be the
/// larger. Ends when a Newton step is below 1e-9 of the argument's size (which it has then reached to about
/// 1e-14), a halving below 1e-14, or the function is exactly zero; `None` after 100 steps or when a value is
/// not a number.
pub(super) fn newton(
    mut f: impl FnMut(f64) -> (f64, f64),
    mut below: f64,
    mut above: f64,
    guess: f64,
) -> Option<f64> {
    let mut x = guess;
    let mut last_step = (above - below).abs();
    for _ in 0..100 {
        let (value, slope) = f(x);
        if value == 0.0 {
            return Some(x);
        } else if value < 0.0 {
            below = x;
        } else if value > 0.0 {
            above = x;
        } else {
            return None;
        }
        let (low, high) = (below.min(above), below.max(above));
        let newton = x - value / slope;
        let next = if newton > low && newton < high && (newton - x).abs() < 0.7 * last_step {
            newton
        } else if (newton - x).abs() <= 1e-14 * x.abs() {
            return Some(x);
        } else {
            0.5 * (low + high)
        };
        last_step = (next - x).abs();
        x = next;
        // Newton's error after a step is of the order of the step's square.
        if last_step <= if next == newton { 1e-9 } else { 1e-14 } * x.abs() {
            return Some(x);
        }
    }
    None
}

#[cfg(test)]
mod tests {
    use super::newton;

    #[test]
    fn finds_a_cube_root_from_a_bad_guess() {
        let root = newton(|x| (x * x * x - 2.0, 3.0 * x * x), 0.0, 2.0, 1e-3).unwrap();
        assert!((root - libm::cbrt(2.0)).abs() < 1e-14);
    }

    #[test]
    fn takes_a_falling_function_and_refuses_what_is_no_number() {
        let root = newton(|x| (1.0 / x - 4.0, -1.0 / (x * x)), 10.0, 1e-9, 9.0).unwrap();
        assert!((root - 0.25).abs() < 1e-14);
        assert_eq!(newton(|_| (f64::NAN, 1.0), 0.0, 1.0, 0.5), None);
    }
}

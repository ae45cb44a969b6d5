//! Mean and standard deviation of a sample.

/// Mean and standard deviation of a sample.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Moments {
    /// How many values there are.
    pub count: usize,
    /// Mean.
    pub mean: f64,
    /// Standard deviation with n − 1 below the sum of squares; `None` for fewer than two values.
    pub standard_deviation: Option<f64>,
}

impl Moments {
    /// Moments of these values, in two passes; `None` for no values.
    #[must_use]
    pub fn of(values: &[f64]) -> Option<Self> {
        let count = values.len();
        let first = *values.first()?;
        let n = count as f64;
        // Around the first value, so that a constant sample has a spread of exactly zero.
        let offset = values.iter().map(|x| x - first).sum::<f64>() / n;
        let mean = first + offset;
        let residual = |x: &f64| (x - first) - offset;
        let squares: f64 = values.iter().map(|x| residual(x) * residual(x)).sum();
        let standard_deviation = (count > 1).then(|| (squares / (n - 1.0)).sqrt());
        Some(Self { count, mean, standard_deviation })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn of_small_samples() {
        assert_eq!(Moments::of(&[]), None);
        let one = Moments::of(&[3.0]).unwrap();
        assert_eq!((one.mean, one.standard_deviation), (3.0, None));
        let constant = Moments::of(&[0.1; 7]).unwrap();
        assert_eq!((constant.mean, constant.standard_deviation), (0.1, Some(0.0)));
        let two = Moments::of(&[1e9, 1e9 + 2.0]).unwrap();
        assert_eq!((two.mean, two.standard_deviation), (1e9 + 1.0, Some(2.0_f64.sqrt())));
    }
}

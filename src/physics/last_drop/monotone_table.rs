//! A table read by monotone cubic interpolation.

/// A table of `N` points, x ascending, read by the piecewise cubic of Fritsch & Butland (1984), doi:10.1137/0905021: it passes through every point and never
/// overshoots between two. Slopes are worked out when the program is compiled.
pub(super) struct MonotoneTable<const N: usize> {
    x: [f64; N],
    y: [f64; N],
    slope: [f64; N],
}

impl<const N: usize> MonotoneTable<N> {
    pub(super) const fn new(points: [(f64, f64); N]) -> Self {
        let (mut x, mut y, mut slope) = ([0.0; N], [0.0; N], [0.0; N]);
        let mut i = 0;
        while i < N {
            (x[i], y[i]) = points[i];
            i += 1;
        }
        i = 0;
        while i < N {
            slope[i] = if i == 0 {
                secant(&x, &y, 0)
            } else if i == N - 1 {
                secant(&x, &y, N - 2)
            } else {
                let (before, after) = (secant(&x, &y, i - 1), secant(&x, &y, i));
                if before * after > 0.0 {
                    // Weighted harmonic mean.
                    let (h0, h1) = (x[i] - x[i - 1], x[i + 1] - x[i]);
                    let (w0, w1) = (h0 + 2.0 * h1, 2.0 * h0 + h1);
                    (w0 + w1) / (w0 / before + w1 / after)
                } else {
                    0.0
                }
            };
            i += 1;
        }
        Self { x, y, slope }
    }

    /// Value at `x`; callers keep within the table (beyond it the end value is given).
    pub(super) fn at(&self, x: f64) -> f64 {
        let above = self.x.partition_point(|node| *node <= x);
        if above == 0 {
            return self.y[0];
        }
        if above == N {
            return self.y[N - 1];
        }
        let i = above - 1;
        let h = self.x[above] - self.x[i];
        let t = (x - self.x[i]) / h;
        let (t2, s) = (t * t, 1.0 - t);
        let s2 = s * s;
        self.y[i] * s2 * (1.0 + 2.0 * t)
            + self.y[above] * t2 * (1.0 + 2.0 * s)
            + h * (self.slope[i] * t * s2 - self.slope[above] * t2 * s)
    }
}

const fn secant<const N: usize>(x: &[f64; N], y: &[f64; N], i: usize) -> f64 {
    (y[i + 1] - y[i]) / (x[i + 1] - x[i])
}

#[cfg(test)]
mod tests {
    use super::MonotoneTable;

    static STEP: MonotoneTable<5> =
        MonotoneTable::new([(0.0, 0.0), (1.0, 0.0), (2.0, 5.0), (3.0, 5.5), (5.0, 5.5)]);

    #[test]
    fn passes_through_its_points_and_never_overshoots() {
        for (x, y) in [(0.0, 0.0), (1.0, 0.0), (2.0, 5.0), (3.0, 5.5), (5.0, 5.5)] {
            assert_eq!(STEP.at(x), y);
        }
        let mut last = 0.0;
        for i in 0..=500 {
            let y = STEP.at(f64::from(i) * 0.01);
            assert!(y >= last - 1e-12 && y <= 5.5 + 1e-12, "{i}: {y}");
            last = y;
        }
    }

    #[test]
    fn reproduces_a_straight_line() {
        let line = MonotoneTable::new([(0.0, 1.0), (0.5, 2.0), (2.0, 5.0)]);
        for i in 0..=20 {
            let x = f64::from(i) * 0.1;
            assert!((line.at(x) - (1.0 + 2.0 * x)).abs() < 1e-14, "{x}");
        }
    }
}

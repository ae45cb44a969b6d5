//! Symmetric 3 × 3 matrices: products, quadratic forms and the Cholesky factor. Sums, products and square roots only, so the bytes are the same
//! everywhere.

/// A vector with a member for each coefficient.
pub type Vector = [f64; 3];

/// Scalar product.
#[must_use]
pub fn dot(a: &Vector, b: &Vector) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// A symmetric matrix, its upper triangle row by row: 00, 01, 02, 11, 12, 22.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Symmetric(pub [f64; 6]);

impl Symmetric {
    /// Nothing but this diagonal.
    #[must_use]
    pub const fn diagonal(d: Vector) -> Self {
        Self([d[0], 0.0, 0.0, d[1], 0.0, d[2]])
    }

    /// Its diagonal.
    #[must_use]
    pub const fn on_diagonal(&self) -> Vector {
        [self.0[0], self.0[3], self.0[5]]
    }

    /// Adds `factor` · v vᵀ.
    pub fn add_outer(&mut self, factor: f64, v: &Vector) {
        let [a, b, c] = *v;
        let products = [a * a, a * b, a * c, b * b, b * c, c * c];
        for (own, product) in self.0.iter_mut().zip(products) {
            *own += factor * product;
        }
    }

    /// Adds `factor` times another matrix.
    pub fn add(&mut self, factor: f64, other: &Self) {
        for (own, other) in self.0.iter_mut().zip(other.0) {
            *own += factor * other;
        }
    }

    /// M v.
    #[must_use]
    pub fn times(&self, v: &Vector) -> Vector {
        let [a, b, c, d, e, f] = self.0;
        [dot(&[a, b, c], v), dot(&[b, d, e], v), dot(&[c, e, f], v)]
    }

    /// vᵀ M v.
    #[must_use]
    pub fn form(&self, v: &Vector) -> f64 {
        dot(v, &self.times(v))
    }

    /// The Cholesky factor; `None` unless the matrix is positive definite.
    #[must_use]
    pub fn factor(&self) -> Option<Factor> {
        let [a, b, c, d, e, f] = self.0;
        let root = |x: f64| (x > 0.0 && x.is_finite()).then(|| x.sqrt());
        let l00 = root(a)?;
        let (l10, l20) = (b / l00, c / l00);
        let l11 = root(d - l10 * l10)?;
        let l21 = (e - l20 * l10) / l11;
        let l22 = root(f - l20 * l20 - l21 * l21)?;
        Some(Factor { l00, l10, l11, l20, l21, l22 })
    }

    /// Eigenvalues, smallest first, by cyclic Jacobi rotations.
    #[must_use]
    pub fn eigenvalues(&self) -> Vector {
        let [a, b, c, d, e, f] = self.0;
        let mut m = [[a, b, c], [b, d, e], [c, e, f]];
        for _ in 0..32 {
            for (p, q) in [(0, 1), (0, 2), (1, 2)] {
                if m[p][q] == 0.0 {
                    continue;
                }
                let tau = (m[q][q] - m[p][p]) / (2.0 * m[p][q]);
                let t = tau.signum() / (tau.abs() + (1.0 + tau * tau).sqrt());
                let cosine = 1.0 / (1.0 + t * t).sqrt();
                let sine = t * cosine;
                for row in &mut m {
                    let (x, y) = (row[p], row[q]);
                    (row[p], row[q]) = (cosine * x - sine * y, sine * x + cosine * y);
                }
                let (x, y) = (m[p], m[q]);
                m[p] = core::array::from_fn(|k| cosine * x[k] - sine * y[k]);
                m[q] = core::array::from_fn(|k| sine * x[k] + cosine * y[k]);
            }
        }
        let mut values = [m[0][0], m[1][1], m[2][2]];
        values.sort_by(f64::total_cmp);
        values
    }
}

/// The lower triangle L with M = L Lᵀ.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Factor {
    l00: f64,
    l10: f64,
    l11: f64,
    l20: f64,
    l21: f64,
    l22: f64,
}

impl Factor {
    /// The x with M x = v.
    #[must_use]
    pub fn solve(&self, v: &Vector) -> Vector {
        let y0 = v[0] / self.l00;
        let y1 = (v[1] - self.l10 * y0) / self.l11;
        let y2 = (v[2] - self.l20 * y0 - self.l21 * y1) / self.l22;
        let x2 = y2 / self.l22;
        let x1 = (y1 - self.l21 * x2) / self.l11;
        [(y0 - self.l10 * x1 - self.l20 * x2) / self.l00, x1, x2]
    }

    /// M⁻¹.
    #[must_use]
    pub fn inverse(&self) -> Symmetric {
        let [a, b, c] = self.solve(&[1.0, 0.0, 0.0]);
        let [_, d, e] = self.solve(&[0.0, 1.0, 0.0]);
        let [_, _, f] = self.solve(&[0.0, 0.0, 1.0]);
        Symmetric([a, b, c, d, e, f])
    }

    /// ln |M|.
    #[must_use]
    pub fn ln_determinant(&self) -> f64 {
        2.0 * (libm::log(self.l00) + libm::log(self.l11) + libm::log(self.l22))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_matrix_times_its_inverse_is_one() {
        let m = Symmetric([4.0, 1.0, -0.5, 3.0, 0.7, 2.0]);
        let factor = m.factor().unwrap();
        let inverse = factor.inverse();
        for i in 0..3 {
            let mut unit = [0.0; 3];
            unit[i] = 1.0;
            for (got, want) in m.times(&inverse.times(&unit)).iter().zip(unit) {
                assert!((got - want).abs() < 1e-14);
            }
        }
        let product: f64 = m.eigenvalues().iter().product();
        assert!((libm::log(product) - factor.ln_determinant()).abs() < 1e-13);
        let trace: f64 = m.eigenvalues().iter().sum();
        assert!((trace - 9.0).abs() < 1e-13);
        assert!(Symmetric([1.0, 2.0, 0.0, 1.0, 0.0, 1.0]).factor().is_none());
    }
}

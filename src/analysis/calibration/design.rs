//! What the rows can tell, before it is known what was seen.

use super::{
    matrix::{Symmetric, Vector},
    row::Row,
};

/// Mean of each of two covariates over the rows.
#[must_use]
pub fn centre(covariates: &[[f64; 2]]) -> [f64; 2] {
    let count = covariates.len().max(1) as f64;
    [0, 1].map(|j| covariates.iter().map(|x| x[j]).sum::<f64>() / count)
}

/// 2-norm condition number of the covariates, the second and third standardised (their sample standard deviation, n − 1). `None` where one of them does not vary or
/// they vary together: their coefficients cannot then be told apart by these rows.
#[must_use]
pub fn condition_number(rows: &[Row]) -> Option<f64> {
    let count = rows.len() as f64;
    let standard = |j: usize| {
        let mean = rows.iter().map(|row| row.covariates[j]).sum::<f64>() / count;
        let squares: f64 =
            rows.iter().map(|row| (row.covariates[j] - mean) * (row.covariates[j] - mean)).sum();
        (mean, (squares / (count - 1.0)).sqrt())
    };
    let (first, second) = (standard(1), standard(2));
    let varies = |(mean, sd): (f64, f64)| sd > 1e-9 * (1.0 + mean.abs());
    if rows.len() < 3 || !varies(first) || !varies(second) {
        return None;
    }
    let mut gram = Symmetric::default();
    for row in rows {
        let x: Vector = [
            row.covariates[0],
            (row.covariates[1] - first.0) / first.1,
            (row.covariates[2] - second.0) / second.1,
        ];
        gram.add_outer(1.0, &x);
    }
    let [smallest, _, largest] = gram.eigenvalues();
    (smallest > 1e-12 * largest).then(|| (largest / smallest).sqrt())
}

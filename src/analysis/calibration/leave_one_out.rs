//! How well the other rows foretell each row, and how much each row weighs.

use super::{matrix::dot, mixture::Mixture, row::Row};
use crate::physics::numerics::normal_quantile;

/// What one row says beside the others.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Standing {
    /// Normal quantile of what was seen, foretold by the other rows; positive where it dribbled up to a higher Weber number than foretold. For a clean,
    /// dribbled or bracketed row the middle of the probabilities that what was seen leaves open.
    pub z: f64,
    /// Share of the information on this row's own prediction that the row itself brings, 0 to 1.
    pub leverage: f64,
}

/// The standing of each row.
///
/// Leaving row i out of the quadratic form at each ln s is a change of rank one, so its mode, weight and prediction follow in closed form (one Newton step from the mode
/// of all rows; exact when every row is an onset).
#[must_use]
pub fn standings(rows: &[Row], mixture: &Mixture) -> Vec<Standing> {
    rows.iter().map(|row| standing(row, mixture)).collect()
}

fn standing(row: &Row, mixture: &Mixture) -> Standing {
    let x = &row.covariates;
    let mut parts = Vec::with_capacity(mixture.grid.len());
    let (mut largest, mut leverage) = (f64::NEG_INFINITY, 0.0);
    for point in mixture.grid.iter().filter(|point| point.weight > 0.0) {
        let s = libm::exp(point.ln_scatter);
        let misfit = row.misfit(&point.mean, s);
        let spread = point.covariance.form(x);
        let own = misfit.curvature * spread;
        let rest = (1.0 - own).max(1e-12);
        // Without the row: mode moved by C x g/(1 − h q), covariance C + h C x xᵀ C/(1 − h q).
        let moved = spread * misfit.slope / rest;
        let ln_weight =
            libm::log(point.weight) + misfit.value + 0.5 * moved * misfit.slope - 0.5 * libm::log(rest);
        let (below, above) = row.probabilities(dot(x, &point.mean) + moved, spread / rest + s * s);
        parts.push((ln_weight, 0.5 * (below + above), 0.5 * (2.0 - below - above)));
        largest = largest.max(ln_weight);
        leverage += point.weight * own;
    }
    let (mut total, mut lower, mut upper) = (0.0, 0.0, 0.0);
    for (ln_weight, below, above) in parts {
        let weight = libm::exp(ln_weight - largest);
        total += weight;
        lower += weight * below;
        upper += weight * above;
    }
    // Each tail by its own sum; a probability that vanishes in a double stands at the end of the scale.
    let tail = |sum: f64| normal_quantile((sum / total).max(1e-300));
    let z = if lower <= upper { tail(lower) } else { -tail(upper) };
    Standing { z, leverage }
}

/// |z| beyond which a row is flagged: two-sided 5 % over all rows together (Bonferroni).
#[must_use]
pub fn flag_beyond(rows: usize) -> f64 {
    -normal_quantile(0.025 / rows.max(1) as f64)
}

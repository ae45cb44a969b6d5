//! A calibration with all that is said about it.

use super::{
    bench::BenchRow,
    correction::{Calibration, Covered},
    design::{centre, condition_number},
    leave_one_out::{Standing, flag_beyond, standings},
    mixture::{Mixture, Moments},
    posterior::{FitFault, posterior},
    prior::Prior,
    row::{Row, Seen},
    separation::separable,
};

/// How many rows of each kind.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Counts {
    /// Onsets.
    pub onset: usize,
    /// Brackets.
    pub bracket: usize,
    /// Clean pours.
    pub clean: usize,
    /// Dribbled pours.
    pub dribbled: usize,
}

/// A calibration with its diagnostics.
#[derive(Debug, Clone, PartialEq)]
pub struct Fit {
    /// The posterior.
    pub mixture: Mixture,
    /// Its moments.
    pub moments: Moments,
    /// Means of ln(r/h) and ln E over the rows.
    pub centre: [f64; 2],
    /// The region of the rows.
    pub covered: Covered,
    /// Standing of each row.
    pub standings: Vec<Standing>,
    /// |z| beyond which a row is flagged.
    pub flag_beyond: f64,
    /// Rows of each kind.
    pub counts: Counts,
    /// Condition number of the standardised covariates; `None` where they do not tell the coefficients apart.
    pub condition_number: Option<f64>,
    /// Whether clean and dribbled rows can be told apart without error.
    pub separable: bool,
    /// Posterior over prior standard deviation of b0, b1, b2 and ln s.
    pub sd_ratio: [f64; 4],
}

/// Above this ratio of posterior to prior standard deviation the rows have taught nothing of a coefficient (own judgement).
pub const TAUGHT_BELOW: f64 = 0.9;

/// Fits the model to bench rows.
///
/// # Errors
/// When rows and prior together leave a coefficient open, or the search does not settle.
pub fn fit(bench: &[BenchRow], prior: &Prior) -> Result<Fit, FitFault> {
    let covariates: Vec<[f64; 2]> = bench
        .iter()
        .map(|row| {
            let [radius, wetting, ..] = row.place.scales();
            [radius, wetting]
        })
        .collect();
    let centre = centre(&covariates);
    let rows: Vec<Row> = bench.iter().map(|row| row.row(&centre)).collect();
    let mixture = posterior(&rows, prior)?;
    let moments = mixture.moments();
    let mut covered: Covered = Covered::default();
    for (i, row) in bench.iter().enumerate() {
        for (range, value) in covered.iter_mut().zip(row.place.scales()) {
            *range = if i == 0 { [value; 2] } else { [range[0].min(value), range[1].max(value)] };
        }
    }
    let mut counts = Counts::default();
    for row in &rows {
        match row.seen {
            Seen::Onset { .. } => counts.onset += 1,
            Seen::Bracket { .. } => counts.bracket += 1,
            Seen::Clean { .. } => counts.clean += 1,
            Seen::Dribbled { .. } => counts.dribbled += 1,
        }
    }
    let prior_covariance = prior.precision.factor().ok_or(FitFault::Unbounded)?.inverse();
    let [a, b, c] = moments.covariance.on_diagonal();
    let [prior_a, prior_b, prior_c] = prior_covariance.on_diagonal();
    let sd_ratio = [
        (a / prior_a).sqrt(),
        (b / prior_b).sqrt(),
        (c / prior_c).sqrt(),
        moments.ln_scatter_sd / prior.ln_scatter_sd,
    ];
    Ok(Fit {
        standings: standings(&rows, &mixture),
        flag_beyond: flag_beyond(rows.len()),
        condition_number: condition_number(&rows),
        separable: separable(&rows),
        mixture,
        moments,
        centre,
        covered,
        counts,
        sd_ratio,
    })
}

impl Fit {
    /// What a decision takes from it.
    #[must_use]
    pub fn calibration(&self) -> Calibration {
        Calibration::new(&self.moments, self.centre, self.covered)
    }
}

//! The calibration as a picture: probability of a clean pour against ln We, with what the bench saw.

use super::{
    answer::CalibrationsAnswer,
    request::{CalibrationsRequest, Observed},
};
use crate::{
    analysis::calibration::{Fit, Seen},
    service::render::{self, Axis, Heading, Mark, ProbabilityChart, Scale, probability, significant},
};

/// The most rows that are drawn.
const MOST_MARKS: usize = 500;

/// Points of the curve.
const POINTS: usize = 121;

/// Draws P(clean) at the centre of the bench rows against ln We − ln We_c as calibrated, each row where it lies on that scale.
pub(super) fn picture(
    request: &CalibrationsRequest,
    observed: &Observed,
    fit: &Fit,
    answer: &CalibrationsAnswer<'_>,
) -> String {
    let centre = [1.0, 0.0, 0.0];
    let (offset, variance) = fit.moments.predict(&centre);
    let reach = 3.5 * variance.sqrt();
    let points: Vec<[f64; 4]> = (0..POINTS)
        .map(|i| {
            let at = reach * (2.0 * i as f64 / (POINTS - 1) as f64 - 1.0);
            let (low, high) = fit.mixture.clean_share_interval(&centre, offset + at, 0.95);
            [at, fit.mixture.clean_probability(&centre, offset + at), low, high]
        })
        .collect();
    let seen: Vec<render::Seen> = observed
        .rows
        .iter()
        .take(MOST_MARKS)
        .map(|row| {
            let (shift, _) = fit.moments.predict(&row.row(&fit.centre).covariates);
            match row.seen {
                Seen::Clean { at } => render::Seen::Clean(at - shift),
                Seen::Dribbled { at } => render::Seen::Dribbled(at - shift),
                Seen::Bracket { low, high } => {
                    render::Seen::Bracket { dribbled: low - shift, clean: high - shift }
                }
                Seen::Onset { at, standard_uncertainty } => {
                    render::Seen::Onset { at: at - shift, standard_uncertainty }
                }
            }
        })
        .collect();
    let count = request.observations.len();
    let scatter = libm::exp(fit.moments.ln_scatter);
    let subtitle = format!(
        "{count} bench rows. Offset of the closed form {} ± {} in ln We_c, scatter from pour to pour about {}. Curve: a new pour at the centre of the rows; band: 95 % interval of the share that is clean.",
        significant(fit.moments.mean[0], 2),
        significant(fit.moments.covariance.on_diagonal()[0].sqrt(), 2),
        significant(scatter, 2),
    );
    let left_out = match count.checked_sub(MOST_MARKS) {
        Some(more) if more > 0 => format!("; {more} more rows are not drawn"),
        _ => String::new(),
    };
    let note = format!(
        "dribble-risk {}, coefficients {}, fingerprint {}{left_out}",
        answer.model.version, answer.model.coefficients, answer.model.fingerprint
    );
    probability(&ProbabilityChart {
        heading: Heading {
            title: "Probability of a clean pour, as calibrated",
            subtitle: &subtitle,
            note: &note,
        },
        x: Axis { name: "ln We less ln We_c as calibrated", unit: "", scale: Scale::Linear },
        of: "Probability of a clean pour",
        points: &points,
        marked: &[],
        limits: &[Mark { at: 0.0, label: "We = We_c" }],
        seen: &seen,
    })
}

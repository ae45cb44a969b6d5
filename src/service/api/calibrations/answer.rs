//! The calibration answer.

use serde::Serialize;
use utoipa::ToSchema;

use super::request::{CalibrationsRequest, Observed};
use crate::{
    analysis::{
        calibration::{COEFFICIENTS, Fit, TAUGHT_BELOW, remarks},
        notice::Notice,
    },
    physics::quantity::DEGREE,
    service::{
        api::{calibration::CalibrationPart, notice::NoticeAnswer, quantity::Number},
        fingerprint::{ModelAnswer, digest_of},
    },
};

/// What the bench pours say.
#[derive(Debug, Serialize, ToSchema)]
pub struct CalibrationsAnswer<'a> {
    /// To be passed back, whole and unchanged, as `calibration` wherever a verdict is asked for.
    pub calibration: CalibrationPart,
    /// The coefficients: what the rows made of the prior.
    pub coefficients: Vec<CoefficientAnswer>,
    /// Whether the rows can tell what is asked of them.
    pub diagnostics: DiagnosticsAnswer,
    /// The rows, in the order of the request.
    pub rows: Vec<RowAnswer<'a>>,
    /// What to keep in mind.
    pub warnings: Vec<NoticeAnswer<'a>>,
    /// What computed this.
    pub model: ModelAnswer,
}

/// One coefficient.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct CoefficientAnswer {
    /// `offset`, `radius_ratio`, `wetting` or `ln_scatter`.
    #[schema(example = "offset")]
    pub name: &'static str,
    /// Posterior mean.
    #[schema(value_type = f64)]
    pub mean: Number,
    /// Posterior standard deviation.
    #[schema(value_type = f64)]
    pub standard_deviation: Number,
    /// Prior mean.
    #[schema(value_type = f64)]
    pub prior_mean: Number,
    /// Prior standard deviation.
    #[schema(value_type = f64)]
    pub prior_standard_deviation: Number,
    /// Posterior over prior standard deviation; above 0.9 the rows teach nothing of it.
    #[schema(value_type = f64)]
    pub sd_ratio: Number,
    /// Whether the rows taught something of it: `sd_ratio` at most 0.9.
    pub learned: bool,
}

/// Whether the rows can tell what is asked of them.
#[derive(Debug, Serialize, ToSchema)]
pub struct DiagnosticsAnswer {
    /// Rows of each kind.
    pub counts: CountsAnswer,
    /// 2-norm condition number of the standardised covariates; null where they do not vary, or vary together.
    #[schema(value_type = Option<f64>)]
    pub condition_number: Option<Number>,
    /// Whether clean and dribbled rows can be told apart without error; then the rows alone do not bound the scatter.
    pub separable: bool,
    /// |z| beyond which a row is flagged: two-sided 5 % over all rows together (Bonferroni).
    #[schema(value_type = f64)]
    pub flag_beyond: Number,
    /// Posterior covariance of offset, radius ratio and wetting.
    #[schema(value_type = Vec<Vec<f64>>)]
    pub covariance: [[Number; 3]; 3],
    /// Standard uncertainty of ln We_c for a new pour at the centre of the bench rows, in place of the closed form's own.
    #[schema(value_type = f64)]
    pub standard_uncertainty_at_centre: Number,
    /// The closed form's own, without calibration.
    #[schema(value_type = f64)]
    pub standard_uncertainty_without: Number,
}

/// Rows of each kind.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct CountsAnswer {
    /// Onsets.
    pub onset: usize,
    /// Brackets.
    pub bracket: usize,
    /// Clean pours.
    pub clean: usize,
    /// Dribbled pours.
    pub dribbled: usize,
}

/// One row against the others.
#[derive(Debug, Serialize, ToSchema)]
pub struct RowAnswer<'a> {
    /// Its name.
    pub name: &'a str,
    /// SHA-256 over the row, its name left out, first 16 digits: to find pours that were entered twice, here or in an earlier calibration.
    pub digest: String,
    /// Normal quantile of what was seen, foretold by the other rows; positive where it dribbled up to a higher Weber number than they foretell.
    #[schema(value_type = f64)]
    pub z: Number,
    /// Whether it is not what the others foretell: flagged, never left out.
    pub flagged: bool,
    /// Share of what is known of this row's own prediction that the row itself brings, 0 to 1.
    #[schema(value_type = f64)]
    pub leverage: Number,
    /// Weber number of the approach film; of a bracket at the geometric mean of its rates.
    #[schema(value_type = f64)]
    pub weber: Number,
    /// Critical Weber number of the closed form.
    #[schema(value_type = f64)]
    pub critical_weber: Number,
    /// Critical Weber number as calibrated (median).
    #[schema(value_type = f64)]
    pub calibrated_critical_weber: Number,
    /// Edge radius over film thickness.
    #[schema(value_type = f64)]
    pub radius_ratio: Number,
    /// The contact angle that counted.
    #[schema(value_type = f64)]
    pub contact_angle_deg: Number,
}

/// First digits of a row's digest that an answer shows.
const SHOWN_DIGITS: usize = 16;

/// What is said beside the numbers.
#[must_use]
pub fn notices(request: &CalibrationsRequest, observed: &Observed, fit: &Fit) -> Vec<Notice> {
    let names: Vec<&str> = request.observations.iter().map(|row| row.name.as_str()).collect();
    let without_sheet: Vec<bool> = observed.rows.iter().map(|row| row.clean_without_free_sheet).collect();
    let mut found = remarks(fit, &names, &without_sheet);
    // Rows alike in all but name, by pairs of neighbours in the order of digests.
    let mut order: Vec<usize> = (0..names.len()).collect();
    order.sort_by(|a, b| observed.digests[*a].cmp(&observed.digests[*b]).then(a.cmp(b)));
    let twins: Vec<String> = order
        .windows(2)
        .filter(|pair| observed.digests[pair[0]] == observed.digests[pair[1]])
        .map(|pair| format!("{} and {}", names[pair[0]], names[pair[1]]))
        .collect();
    if !twins.is_empty() {
        let shown = twins.iter().take(10).map(String::as_str).collect::<Vec<_>>().join("; ");
        found.push(Notice::new(
            "rows_alike",
            format!(
                "Alike in all but name ({} pairs): {shown}. If one pour was entered twice, it counts double.",
                twins.len()
            ),
        ));
    }
    found
}

impl<'a> CalibrationsAnswer<'a> {
    /// The answer to a request.
    #[must_use]
    pub fn new(
        request: &'a CalibrationsRequest,
        observed: &Observed,
        fit: &Fit,
        notices: &'a [Notice],
    ) -> Self {
        let mut sorted: Vec<&String> = observed.digests.iter().collect();
        sorted.sort();
        let set = observed.coefficients;
        let calibration = CalibrationPart::of(fit, set.id, request.prior, digest_of(&sorted));
        let moments = &fit.moments;
        let prior = &request.prior;
        let sd = moments.covariance.on_diagonal().map(f64::sqrt);
        let [b0, b1, b2] = moments.mean;
        let rows = [
            (b0, sd[0], prior.offset.mean, prior.offset.standard_deviation),
            (b1, sd[1], prior.radius_ratio.mean, prior.radius_ratio.standard_deviation),
            (b2, sd[2], prior.wetting.mean, prior.wetting.standard_deviation),
            (
                moments.ln_scatter,
                moments.ln_scatter_sd,
                prior.ln_scatter.mean,
                prior.ln_scatter.standard_deviation,
            ),
        ];
        let coefficients = COEFFICIENTS
            .into_iter()
            .zip(rows)
            .zip(fit.sd_ratio)
            .map(|((name, (mean, sd, prior_mean, prior_sd)), ratio)| CoefficientAnswer {
                name,
                mean: Number(mean),
                standard_deviation: Number(sd),
                prior_mean: Number(prior_mean),
                prior_standard_deviation: Number(prior_sd),
                sd_ratio: Number(ratio),
                learned: ratio <= TAUGHT_BELOW,
            })
            .collect();
        let [a, b, c, d, e, f] = moments.covariance.0.map(Number);
        let (_, variance) = moments.predict(&[1.0, 0.0, 0.0]);
        let counts = &fit.counts;
        Self {
            calibration,
            coefficients,
            diagnostics: DiagnosticsAnswer {
                counts: CountsAnswer {
                    onset: counts.onset,
                    bracket: counts.bracket,
                    clean: counts.clean,
                    dribbled: counts.dribbled,
                },
                condition_number: fit.condition_number.map(Number),
                separable: fit.separable,
                flag_beyond: Number(fit.flag_beyond),
                covariance: [[a, b, c], [b, d, e], [c, e, f]],
                standard_uncertainty_at_centre: Number(variance.sqrt()),
                standard_uncertainty_without: Number(set.model_uncertainty),
            },
            rows: Self::rows(request, observed, fit),
            warnings: notices.iter().map(NoticeAnswer::from).collect(),
            model: ModelAnswer::of(request, set.id),
        }
    }

    fn rows(request: &'a CalibrationsRequest, observed: &Observed, fit: &Fit) -> Vec<RowAnswer<'a>> {
        let parts =
            request.observations.iter().zip(&observed.rows).zip(&observed.digests).zip(&fit.standings);
        parts
            .map(|(((asked, row), digest), standing)| {
                let (shift, _) = fit.moments.predict(&row.row(&fit.centre).covariates);
                RowAnswer {
                    name: &asked.name,
                    digest: digest.chars().take(SHOWN_DIGITS).collect(),
                    z: Number(standing.z),
                    flagged: standing.z.abs() > fit.flag_beyond,
                    leverage: Number(standing.leverage),
                    weber: Number(libm::exp(row.ln_weber)),
                    critical_weber: Number(libm::exp(row.ln_critical_weber)),
                    calibrated_critical_weber: Number(libm::exp(row.ln_critical_weber + shift)),
                    radius_ratio: Number(row.place.radius_ratio),
                    contact_angle_deg: Number(row.place.contact_angle / DEGREE),
                }
            })
            .collect()
    }
}

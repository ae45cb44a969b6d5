//! A calibration as it is passed back: what `POST /v1/calibrations` returned, in any request that asks for a verdict. Members stand in alphabetical order.

use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};
use utoipa::ToSchema;

use crate::{
    analysis::{
        calibration::{Calibration, Covered, Fit, GridPoint, Mixture, Prior, Symmetric},
        fault::Fault,
    },
    physics::quantity::DEGREE,
    service::{
        fingerprint::{VERSION, hexadecimal},
        nearest::quoted,
    },
};

/// The form of a calibration; a calibration in another form is refused by name.
pub const FORM: &str = "calibration-1";

/// What bench pours have taught of the critical Weber number, as `POST /v1/calibrations` returned it: pass it back whole and unchanged.
///
/// ln We_c = closed form + b0 + b1 (ln(r/h) − mean) + b2 (ln(1 + cos θ) − mean) + e, e ~ N(0, s²), with the posterior of b and s as a mixture of normal distributions over a grid
/// on ln s. Outside `ranges` both covariates level off over a factor of two, and the closed form's own standard uncertainty comes back in quadrature, times 1 − exp(−D/ln 2) with D the
/// distance from the ranges in ln(r/h), ln(1 + cos θ), ln(1 − cos α), ln Re and ln Fr together.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(as = Calibration)]
pub struct CalibrationPart {
    /// Means of the covariates over the bench rows.
    pub centre: CentrePart,
    /// Coefficient set of the closed form that it corrects.
    #[schema(example = "set-1")]
    pub coefficients: String,
    /// SHA-256 over all other members, numbers to 12 significant digits. It shows corruption in storage or transport. It is not a signature: whoever changes the numbers on purpose can compute it anew.
    pub digest: String,
    /// The mixture, by rising ln s.
    #[schema(min_items = 1, max_items = 64)]
    pub grid: Vec<GridPart>,
    /// Version of the service that made it.
    #[schema(example = "0.1.0")]
    pub model: String,
    /// The prior it started from.
    pub prior: PriorPart,
    /// What the bench rows covered.
    pub ranges: RangesPart,
    /// SHA-256 over the digests of its rows, sorted: calibrations of the same rows have the same.
    pub rows_digest: String,
    /// Form of this object.
    #[schema(example = "calibration-1")]
    pub version: String,
}

/// Means of the covariates over the bench rows.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct CentrePart {
    /// Mean of ln(r/h).
    #[schema(minimum = -100, maximum = 100)]
    pub ln_radius_ratio: f64,
    /// Mean of ln(1 + cos θ).
    #[schema(minimum = -100, maximum = 100)]
    pub ln_wetting: f64,
}

/// The normal distribution of b at one value of ln s.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct GridPart {
    /// Covariance of b, upper triangle row by row: 00, 01, 02, 11, 12, 22.
    #[schema(value_type = Vec<f64>, min_items = 6, max_items = 6)]
    pub covariance: [f64; 6],
    /// ln s.
    #[schema(minimum = -40, maximum = 40)]
    pub ln_scatter: f64,
    /// Mean of b: offset, radius ratio, wetting.
    #[schema(value_type = Vec<f64>, min_items = 3, max_items = 3)]
    pub mean: [f64; 3],
    /// Share of the posterior.
    #[schema(minimum = 0, maximum = 1)]
    pub weight: f64,
}

/// What is held of the coefficients before any row. The defaults: the closed form may be off by 0.35 of ln We_c and each of the two exponents by 0.3; pours scatter by 15 %, within a factor e^0.5.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields, default)]
pub struct PriorPart {
    /// ln s, the scatter from pour to pour.
    pub ln_scatter: ScatterPriorPart,
    /// b0, the closed form's offset in ln We_c.
    pub offset: NormalPart,
    /// b1, the correction of its answer to ln(r/h).
    pub radius_ratio: NormalPart,
    /// b2, the correction of its answer to ln(1 + cos θ).
    pub wetting: NormalPart,
}

/// A normal distribution of a coefficient.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct NormalPart {
    /// Mean.
    #[schema(minimum = -5, maximum = 5)]
    pub mean: f64,
    /// Standard deviation.
    #[schema(minimum = 0.001, maximum = 5)]
    pub standard_deviation: f64,
}

/// A normal distribution of ln s.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct ScatterPriorPart {
    /// Mean; −1.9 is a scatter of 15 %.
    #[schema(minimum = -5, maximum = 1)]
    pub mean: f64,
    /// Standard deviation.
    #[schema(minimum = 0.01, maximum = 1)]
    pub standard_deviation: f64,
}

/// What the bench rows covered.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RangesPart {
    /// Contact angle that counted, degrees.
    pub contact_angle_deg: RangePart,
    /// Froude number.
    pub froude: RangePart,
    /// Edge radius over film thickness.
    pub radius_ratio: RangePart,
    /// Reynolds number.
    pub reynolds: RangePart,
    /// Turn of the edge, degrees.
    pub turn_deg: RangePart,
}

/// Lowest and highest of the bench rows.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RangePart {
    /// Highest.
    pub high: f64,
    /// Lowest.
    pub low: f64,
}

impl Default for PriorPart {
    fn default() -> Self {
        let prior = Prior::of_the_closed_form();
        let sd = prior.precision.on_diagonal().map(|precision| 1.0 / precision.sqrt());
        let normal = |i: usize| NormalPart { mean: tidy(prior.mean[i]), standard_deviation: tidy(sd[i]) };
        Self {
            ln_scatter: ScatterPriorPart::default(),
            offset: normal(0),
            radius_ratio: normal(1),
            wetting: normal(2),
        }
    }
}

impl Default for ScatterPriorPart {
    fn default() -> Self {
        let prior = Prior::of_the_closed_form();
        Self { mean: tidy(prior.ln_scatter), standard_deviation: prior.ln_scatter_sd }
    }
}

impl PriorPart {
    /// The prior, and every fault of it; `at` is its pointer in the request.
    pub fn prior(&self, at: &str, faults: &mut Vec<Fault>) -> Prior {
        let mut check = |member: &str, value: f64, low: f64, high: f64| {
            if !(value >= low && value <= high) {
                let detail = format!("must be between {low} and {high}");
                faults.push(Fault::new(format!("{at}/{member}"), "out_of_range", detail).within(low, high));
            }
        };
        let three = [("offset", self.offset), ("radius_ratio", self.radius_ratio), ("wetting", self.wetting)];
        for (name, normal) in three {
            check(&format!("{name}/mean"), normal.mean, -5.0, 5.0);
            check(&format!("{name}/standard_deviation"), normal.standard_deviation, 0.001, 5.0);
        }
        check("ln_scatter/mean", self.ln_scatter.mean, -5.0, 1.0);
        check("ln_scatter/standard_deviation", self.ln_scatter.standard_deviation, 0.01, 1.0);
        Prior::independent(
            three.map(|(_, normal)| normal.mean),
            three.map(|(_, normal)| normal.standard_deviation),
            self.ln_scatter.mean,
            self.ln_scatter.standard_deviation,
        )
    }
}

/// To 12 significant digits: more than any use of it needs, and few enough that every JSON library returns them unchanged.
#[must_use]
pub fn tidy(value: f64) -> f64 {
    // Adding zero turns −0 into 0.
    format!("{value:.11e}").parse().unwrap_or(value) + 0.0
}

impl CalibrationPart {
    /// The part to be passed back of a fit to the set named `coefficients`.
    #[must_use]
    pub fn of(fit: &Fit, coefficients: &str, prior: PriorPart, rows_digest: String) -> Self {
        let grid = fit.mixture.grid.iter().map(|point| GridPart {
            covariance: point.covariance.0.map(tidy),
            ln_scatter: tidy(point.ln_scatter),
            mean: point.mean.map(tidy),
            weight: tidy(point.weight),
        });
        let mut part = Self {
            centre: CentrePart { ln_radius_ratio: tidy(fit.centre[0]), ln_wetting: tidy(fit.centre[1]) },
            coefficients: coefficients.to_owned(),
            digest: String::new(),
            grid: grid.collect(),
            model: VERSION.to_owned(),
            prior,
            ranges: RangesPart::of(&fit.covered),
            rows_digest,
            version: FORM.to_owned(),
        };
        part.digest = part.digest_of_the_rest();
        part
    }

    /// The mixture.
    #[must_use]
    pub fn mixture(&self) -> Mixture {
        let point = |part: &GridPart| GridPoint {
            ln_scatter: part.ln_scatter,
            weight: part.weight,
            mean: part.mean,
            covariance: Symmetric(part.covariance),
        };
        Mixture { grid: self.grid.iter().map(point).collect() }
    }

    /// What a decision takes from it. `at`: its pointer in the request; `coefficients`: the set that the request asks for.
    ///
    /// # Errors
    /// Every reason not to trust it: another form, another set, corruption, no distribution.
    pub fn calibration(&self, at: &str, coefficients: &str) -> Result<Calibration, Vec<Fault>> {
        if self.version != FORM {
            let detail =
                format!("{} is not a form of calibration that this version reads", quoted(&self.version));
            return Err(vec![Fault::new(format!("{at}/version"), "unknown_choice", detail).choices([FORM])]);
        }
        let mut faults = Vec::new();
        if self.digest != self.digest_of_the_rest() {
            let detail = "the calibration is not as it was made: its digest does not fit; post the bench rows again, or send the stored original";
            faults.push(Fault::new(format!("{at}/digest"), "corrupted", detail));
        }
        if self.coefficients != coefficients {
            let detail = format!(
                "it corrects the coefficient set {}, but the request asks for {}; post the bench rows again with that set",
                quoted(&self.coefficients),
                quoted(coefficients)
            );
            faults.push(Fault::new(format!("{at}/coefficients"), "contradiction", detail));
        }
        let sound = self.is_sound();
        let covered = self.ranges.covered().filter(|_| sound);
        if covered.is_none() && faults.is_empty() {
            let detail = "the grid is no distribution of finite width, or a range is none";
            faults.push(Fault::new(at.to_owned(), "not_applicable", detail));
        }
        match covered {
            Some(covered) if faults.is_empty() => {
                let centre = [self.centre.ln_radius_ratio, self.centre.ln_wetting];
                Ok(Calibration::new(&self.mixture().moments(), centre, covered))
            }
            _ => Err(faults),
        }
    }

    /// Whether it is a distribution at all, of numbers that a verdict survives.
    fn is_sound(&self) -> bool {
        const MOST: f64 = 100.0;
        let small = |x: f64| x.abs() <= MOST;
        let total: f64 = self.grid.iter().map(|point| point.weight).sum();
        small(self.centre.ln_radius_ratio)
            && small(self.centre.ln_wetting)
            && (1..=64).contains(&self.grid.len())
            && (total - 1.0).abs() < 1e-6
            && self.grid.iter().all(|point| {
                point.weight >= 0.0
                    && point.ln_scatter.abs() <= 40.0
                    && point.mean.iter().copied().all(small)
                    && point.covariance.iter().copied().all(small)
                    && Symmetric(point.covariance).factor().is_some()
            })
    }

    fn digest_of_the_rest(&self) -> String {
        let mut text = String::with_capacity(8192);
        let mut word = |word: &str| {
            text.push_str(word);
            text.push('\n');
        };
        for name in [&self.coefficients, &self.model, &self.rows_digest, &self.version] {
            word(name);
        }
        let mut number = |value: f64| word(&format!("{:.11e}", value + 0.0));
        number(self.centre.ln_radius_ratio);
        number(self.centre.ln_wetting);
        number(self.grid.len() as f64);
        for point in &self.grid {
            point.covariance.into_iter().for_each(&mut number);
            number(point.ln_scatter);
            point.mean.into_iter().for_each(&mut number);
            number(point.weight);
        }
        let PriorPart { ln_scatter, offset, radius_ratio, wetting } = self.prior;
        for value in [ln_scatter.mean, ln_scatter.standard_deviation] {
            number(value);
        }
        for normal in [offset, radius_ratio, wetting] {
            number(normal.mean);
            number(normal.standard_deviation);
        }
        let RangesPart { contact_angle_deg, froude, radius_ratio, reynolds, turn_deg } = self.ranges;
        for range in [contact_angle_deg, froude, radius_ratio, reynolds, turn_deg] {
            number(range.high);
            number(range.low);
        }
        hexadecimal(&Sha256::digest(text.as_bytes()))
    }
}

impl RangesPart {
    fn of(covered: &Covered) -> Self {
        let [radius, wetting, bend, reynolds, froude] = *covered;
        let range = |low: f64, high: f64| RangePart { high: tidy(high), low: tidy(low) };
        let logarithmic = |[low, high]: [f64; 2]| range(libm::exp(low), libm::exp(high));
        // E falls and 1 − cos α rises with the angle.
        let wetting_angle = |ln_e: f64| libm::acos((libm::exp(ln_e) - 1.0).clamp(-1.0, 1.0)) / DEGREE;
        let turn = |ln_bend: f64| libm::acos((1.0 - libm::exp(ln_bend)).clamp(-1.0, 1.0)) / DEGREE;
        Self {
            contact_angle_deg: range(wetting_angle(wetting[1]), wetting_angle(wetting[0])),
            froude: logarithmic(froude),
            radius_ratio: logarithmic(radius),
            reynolds: logarithmic(reynolds),
            turn_deg: range(turn(bend[0]), turn(bend[1])),
        }
    }

    /// On the scales of the model; `None` where a range is none.
    fn covered(&self) -> Option<Covered> {
        let ln = |range: RangePart| [libm::log(range.low), libm::log(range.high)];
        let wetting = |angle: f64| libm::log(1.0 + libm::cos(angle * DEGREE));
        let bend = |angle: f64| libm::log(1.0 - libm::cos(angle * DEGREE));
        let covered = [
            ln(self.radius_ratio),
            [wetting(self.contact_angle_deg.high), wetting(self.contact_angle_deg.low)],
            [bend(self.turn_deg.low), bend(self.turn_deg.high)],
            ln(self.reynolds),
            ln(self.froude),
        ];
        covered
            .iter()
            .all(|[low, high]| low.is_finite() && high.is_finite() && low <= high)
            .then_some(covered)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ranges_come_back_to_the_slack_that_is_called_rounding() {
        let covered = [[-2.0, 0.3], [-1.2, 0.69], [-0.4, 0.6], [3.0, 6.0], [0.0, 0.0]];
        let back = RangesPart::of(&covered).covered().unwrap();
        for (there, here) in covered.iter().flatten().zip(back.iter().flatten()) {
            assert!((there - here).abs() < 1e-9, "{there} {here}");
        }
    }

    #[test]
    fn tidy_numbers_stay_as_they_are() {
        for value in [0.1 + 0.2, -1e-17 / 3.0, 1.0 / 3.0, 12345.678901234567, -0.0] {
            let once = tidy(value);
            assert_eq!(once.to_bits(), tidy(once).to_bits());
            assert_eq!(serde_json::from_str::<f64>(&serde_json::to_string(&once).unwrap()).unwrap(), once);
        }
    }
}

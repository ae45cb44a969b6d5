//! What a decision takes from a calibration: a correction of ln We_c and its standard uncertainty.

use super::{
    matrix::{Symmetric, Vector},
    mixture::Moments,
};
use crate::physics::separation::{
    closed_form::{CoefficientSet, Threshold},
    numbers::Numbers,
};

/// Where a threshold is asked for: what the closed form answers to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    /// r/h.
    pub radius_ratio: f64,
    /// Contact angle θ, rad.
    pub contact_angle: f64,
    /// Turn α of the edge, rad.
    pub turn: f64,
    /// Re.
    pub reynolds: f64,
    /// Fr.
    pub froude: f64,
}

impl Place {
    /// How many quantities there are.
    pub const COUNT: usize = 5;

    /// A stream with these numbers at an edge with this contact angle and turn, rad.
    #[must_use]
    pub fn of(numbers: &Numbers, contact_angle: f64, turn: f64) -> Self {
        let Numbers { radius_ratio, reynolds, froude, .. } = *numbers;
        Self { radius_ratio, contact_angle, turn, reynolds, froude }
    }

    /// On the scales of the model: ln(r/h), ln E, ln(1 − cos α), ln Re, ln Fr.
    #[must_use]
    pub fn scales(&self) -> [f64; Self::COUNT] {
        [
            libm::log(self.radius_ratio),
            libm::log((1.0 + libm::cos(self.contact_angle)).max(0.0)),
            libm::log((1.0 - libm::cos(self.turn)).max(0.0)),
            libm::log(self.reynolds),
            libm::log(self.froude),
        ]
    }
}

/// The region of the bench rows: lowest and highest of each of [`Place::scales`].
pub type Covered = [[f64; 2]; Place::COUNT];

/// A calibration, reduced to what a decision needs. The reduction is exact: mean and variance of ln We_c under the mixture depend on nothing else of it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Calibration {
    mean: Vector,
    covariance: Symmetric,
    scatter_variance: f64,
    centre: [f64; 2],
    covered: Covered,
}

/// Over this distance, a factor of two, a calibration loses most of what it says (own judgement).
const FADES_OVER: f64 = core::f64::consts::LN_2;

/// Beyond the bench rows by less than this is rounding.
const SLACK: f64 = 1e-9;

/// A covariate as the calibration follows it.
#[derive(Debug, Clone, Copy)]
struct Followed {
    value: f64,
    /// Its derivative in the covariate itself.
    slope: f64,
}

impl Calibration {
    /// A calibration with these moments, centred at `centre` (means of ln(r/h) and ln E over the bench rows) and made on the region `covered`.
    #[must_use]
    pub fn new(moments: &Moments, centre: [f64; 2], covered: Covered) -> Self {
        let Moments { mean, covariance, scatter_variance, .. } = *moments;
        Self { mean, covariance, scatter_variance, centre, covered }
    }

    /// Which of [`Place::scales`] lie outside the bench rows.
    #[must_use]
    pub fn beyond(&self, place: &Place) -> [bool; Place::COUNT] {
        self.distances(&place.scales()).map(|distance| distance > SLACK)
    }

    /// Whether the rows have spoken of the closed form's offset: its standard deviation is at most half the set's own uncertainty (own judgement).
    #[must_use]
    pub fn knows_offset(&self, set: &CoefficientSet) -> bool {
        self.covariance.on_diagonal()[0].sqrt() <= 0.5 * set.model_uncertainty
    }

    fn distances(&self, scales: &[f64; Place::COUNT]) -> [f64; Place::COUNT] {
        core::array::from_fn(|j| {
            let [low, high] = self.covered[j];
            (low - scales[j]).max(scales[j] - high).max(0.0)
        })
    }

    /// The covariate as it is between the bench rows; beyond them it goes on ever more slowly and stops a factor of two further out, so that a sharp edge (ln(r/h) = −∞)
    /// or a lip that is not wetted at all (ln E = −∞) still has a finite correction. Continuous, with a continuous slope.
    fn follow(&self, j: usize, covariate: f64) -> Followed {
        let [low, high] = self.covered[j];
        let distance = (low - covariate).max(covariate - high);
        if distance <= 0.0 {
            return Followed { value: covariate, slope: 1.0 };
        }
        let slope = libm::exp(-distance / FADES_OVER);
        let on = FADES_OVER * (1.0 - slope);
        Followed { value: if covariate < low { low - on } else { high + on }, slope }
    }

    fn covariates(&self, scales: &[f64; Place::COUNT]) -> [Followed; 2] {
        [0, 1].map(|j| {
            let followed = self.follow(j, scales[j]);
            Followed { value: followed.value - self.centre[j], ..followed }
        })
    }

    /// ln We_c + b0 + b1 (ln(r/h) − mean) + b2 (ln E − mean), with its slopes.
    #[must_use]
    pub fn corrected(&self, threshold: &Threshold, place: &Place) -> Threshold {
        let [radius, wetting] = self.covariates(&place.scales());
        let [b0, b1, b2] = self.mean;
        // ∂ ln E/∂θ = −sin θ/(1 + cos θ); where E vanishes the covariate has long stopped.
        let (sin, cos) = libm::sincos(place.contact_angle);
        let by_angle = if wetting.slope > 0.0 { -sin / (1.0 + cos) * wetting.slope } else { 0.0 };
        let shift = b0 + b1 * radius.value + b2 * wetting.value;
        Threshold {
            critical_weber: threshold.critical_weber * libm::exp(shift),
            ln_critical_weber: threshold.ln_critical_weber + shift,
            by_ln_radius_ratio: threshold.by_ln_radius_ratio + b1 * radius.slope,
            by_contact_angle: threshold.by_contact_angle + b2 * by_angle,
            ..*threshold
        }
    }

    /// Standard uncertainty of the corrected ln We_c. `without`: that of the closed form here, its widening outside the set's range included.
    ///
    /// The set's own term gives way to the predictive variance xᵀCx + E\[s²\]; what widens it outside the set's range stays. Beyond the bench rows, by D in all five
    /// [`Place::scales`] together (root of the sum of squares), the set's own term comes back, times 1 − exp(−D/ln 2), in quadrature (own judgement): a calibration vouches
    /// for what its rows showed, and far away from them no more is known than before.
    #[must_use]
    pub fn standard_uncertainty(&self, without: f64, set: &CoefficientSet, place: &Place) -> f64 {
        let scales = place.scales();
        let [radius, wetting] = self.covariates(&scales);
        let x = [1.0, radius.value, wetting.value];
        let own = set.model_uncertainty * set.model_uncertainty;
        let widening = (without * without - own).max(0.0);
        let predictive = self.covariance.form(&x) + self.scatter_variance;
        let distance = self.distances(&scales).iter().map(|d| d * d).sum::<f64>().sqrt();
        let left = -libm::expm1(-distance / FADES_OVER);
        (widening + predictive + own * left * left).sqrt()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physics::{
        quantity::DEGREE,
        separation::closed_form::{Edge, SET_1},
    };
    use proptest::prelude::*;

    fn place(radius_ratio: f64, theta: f64) -> Place {
        Place { radius_ratio, contact_angle: theta * DEGREE, turn: 1.6, reynolds: 300.0, froude: 3.0 }
    }

    fn calibration() -> Calibration {
        let moments = Moments {
            mean: [0.2, -0.15, 0.1],
            covariance: Symmetric([0.01, 0.002, -0.001, 0.02, 0.003, 0.03]),
            scatter_variance: 0.0225,
            ln_scatter: -1.9,
            ln_scatter_sd: 0.1,
        };
        let low = place(0.2, 110.0).scales();
        let high = place(1.0, 50.0).scales();
        let covered = core::array::from_fn(|j| [low[j], high[j]]);
        Calibration::new(&moments, [libm::log(0.45), libm::log(1.2)], covered)
    }

    fn threshold(at: &Place) -> Threshold {
        let numbers = Numbers {
            weber: 10.0,
            reynolds: at.reynolds,
            froude: at.froude,
            capillary: 0.01,
            bond: 0.1,
            radius_ratio: at.radius_ratio,
        };
        Edge::new(&SET_1, at.contact_angle, at.turn).threshold(&SET_1, &numbers)
    }

    #[test]
    fn between_the_bench_rows_it_is_the_linear_model() {
        let at = place(0.3, 80.0);
        let shift =
            0.2 - 0.15 * libm::log(0.3 / 0.45) + 0.1 * libm::log((1.0 + libm::cos(80.0 * DEGREE)) / 1.2);
        let plain = threshold(&at);
        let corrected = calibration().corrected(&plain, &at);
        assert!((corrected.ln_critical_weber - plain.ln_critical_weber - shift).abs() < 1e-14);
        assert_eq!(calibration().beyond(&at), [false; 5]);
        let x = [1.0, libm::log(0.3 / 0.45), libm::log((1.0 + libm::cos(80.0 * DEGREE)) / 1.2)];
        let u = calibration().standard_uncertainty(0.35, &SET_1, &at);
        assert!((u * u - calibration().covariance.form(&x) - 0.0225).abs() < 1e-14);
        // What the set is widened by outside its own range stays.
        let wider = calibration().standard_uncertainty(libm::hypot(0.35, 0.3), &SET_1, &at);
        assert!((wider - libm::hypot(u, 0.3)).abs() < 1e-14);
    }

    proptest! {
        #[test]
        fn slopes_agree_with_differences_and_nothing_jumps(r in 0.01..20.0_f64, theta in 1.0..178.0_f64) {
            let ln = |r: f64, theta: f64| calibration().corrected(&threshold(&place(r, theta)), &place(r, theta));
            let u = |r: f64, theta: f64| calibration().standard_uncertainty(0.35, &SET_1, &place(r, theta));
            let here = ln(r, theta);
            let e: f64 = 1e-6;
            let up = libm::exp(e);
            let by_radius = (ln(r * up, theta).ln_critical_weber - ln(r / up, theta).ln_critical_weber) / (2.0 * e);
            let by_angle = (ln(r, theta + e).ln_critical_weber - ln(r, theta - e).ln_critical_weber) / (2.0 * e * DEGREE);
            prop_assert!((here.by_ln_radius_ratio - by_radius).abs() < 1e-5 + 1e-5 * by_radius.abs());
            prop_assert!((here.by_contact_angle - by_angle).abs() < 1e-5 + 1e-4 * by_angle.abs(), "{} {by_angle}", here.by_contact_angle);
            prop_assert!((u(r * up, theta) - u(r, theta)).abs() < 1e-5 && (u(r, theta + e) - u(r, theta)).abs() < 1e-5);
        }
    }

    #[test]
    fn doubt_comes_back_beyond_the_bench_rows_and_stays_finite_at_the_ends() {
        let u = |r: f64, theta: f64| calibration().standard_uncertainty(0.35, &SET_1, &place(r, theta));
        assert!(u(0.3, 80.0) < 0.25);
        let mut last = u(1.0, 80.0);
        for i in 1..200 {
            let next = u(libm::exp(f64::from(i) * 0.02), 80.0);
            assert!(next > last);
            last = next;
        }
        assert!(last > 0.35);
        let mut other = place(0.3, 80.0);
        other.turn = 2.6;
        assert!(calibration().beyond(&other)[2]);
        assert!(calibration().standard_uncertainty(0.35, &SET_1, &other) > 1.1 * u(0.3, 80.0));
        for (r, theta) in [(0.0, 80.0), (0.3, 180.0), (0.0, 180.0), (1e9, 0.0)] {
            let at = place(r, theta);
            let t = calibration().corrected(&threshold(&at), &at);
            let numbers = [t.ln_critical_weber, t.by_ln_radius_ratio, t.by_contact_angle, u(r, theta)];
            assert!(numbers.iter().all(|x| x.is_finite()), "{r} {theta} {numbers:?}");
        }
    }
}

//! A lot judged by a measured characteristic.

use super::{Decision, Limit, Points, Reason, Sense, decide_by_count, fractions};
use crate::analysis::{
    notice::Notice,
    statistics::{
        StatisticsFault,
        attribute_plan::{AttributePlan, Population},
        capability,
        guard_band::{self, Inspection},
        moments::Moments,
        normality::{self, TestResult},
        order,
        variables_plan::{VariablesPlan, acceptance_probability},
    },
};

/// Measured parts of a lot.
#[derive(Debug, Clone, PartialEq)]
pub struct Measurement<'a> {
    /// The values, at least one.
    pub values: &'a [f64],
    /// Standard uncertainty of one measurement, at least 0.
    pub standard_uncertainty: f64,
    /// The part of it that differs from measurement to measurement, at most the whole: it shows in the spread of the
    /// values. The rest is common to all parts and shows nowhere.
    pub repeatability: f64,
    /// By how much the gauge reads too high.
    pub bias: f64,
    /// The limit.
    pub limit: Limit,
    /// The risks to keep.
    pub points: Points,
    /// Confidence of the bounds and of the guard band.
    pub confidence: f64,
}

/// By what the lot was decided.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Method {
    /// Mean and standard deviation, normal values.
    Variables,
    /// The same of the logarithms.
    VariablesOfLogarithms,
    /// Counting parts beyond the limit, whatever the distribution.
    Attributes,
}

/// Tests of normality of the values.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Normality {
    /// Anderson–Darling A*; from eight values on.
    pub anderson_darling: Option<TestResult>,
    /// Shapiro–Wilk W; three to 5000 values.
    pub shapiro_wilk: Option<TestResult>,
}

impl Normality {
    fn of(sorted: &[f64]) -> Self {
        Self {
            anderson_darling: normality::anderson_darling(sorted),
            shapiro_wilk: normality::shapiro_wilk(sorted),
        }
    }

    /// Shapiro–Wilk's p-value, the more powerful; Anderson–Darling's where that cannot be had.
    #[must_use]
    pub fn p_value(&self) -> Option<f64> {
        self.shapiro_wilk.or(self.anderson_darling).map(|test| test.p_value)
    }

    fn rejected_at(&self, level: f64) -> bool {
        self.p_value().is_some_and(|p| p < level)
    }
}

/// Below this p-value a warning says that the values do not look normal (common practice).
pub const NOT_NORMAL_TOLD: f64 = 0.05;
/// Below this p-value the lot is not decided by mean and standard deviation (own judgement: one normal lot in a hundred is
/// then judged by a method that asks for more pieces).
pub const NOT_NORMAL_DECIDES: f64 = 0.01;

/// The guard band: how far inside the limit values must lie, and the risks of single parts.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GuardBand {
    /// In standard uncertainties that are common to all parts.
    pub factor: f64,
    /// The limit that decides.
    pub limit_used: f64,
    /// Share of parts beyond the limit that measure within the limit used; none without spread.
    pub consumer_risk: Option<f64>,
    /// Share of parts within the limit that measure beyond the limit used; none without spread.
    pub producer_risk: Option<f64>,
}

/// What the quality of so many pieces is held against.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Criterion {
    /// Accepted from here on.
    pub accept_from: f64,
    /// Rejected below.
    pub reject_below: f64,
}

/// What is said of the lot.
#[derive(Debug, Clone, PartialEq)]
pub struct Measured {
    /// The decision.
    pub decision: Decision,
    /// Why.
    pub reasons: Vec<Reason>,
    /// By what it was decided.
    pub method: Method,
    /// Mean and standard deviation, freed of the bias.
    pub moments: Moments,
    /// Distance of the mean from the limit, in standard deviations; none without spread.
    pub quality: Option<f64>,
    /// The same from the limit used.
    pub quality_used: Option<f64>,
    /// The smallest plan by variables that keeps both risks.
    pub plan: VariablesPlan,
    /// What so many pieces are held against; none for a single one.
    pub criterion: Option<Criterion>,
    /// P_pk of the lot and its lower bound.
    pub performance: Option<(f64, f64)>,
    /// Fraction beyond the limit: estimate and upper bound.
    pub fraction: (f64, f64),
    /// The guard band.
    pub guard_band: GuardBand,
    /// Parts beyond the limit, and beyond the limit used.
    pub beyond: (u64, u64),
    /// Fraction beyond the limit used, and probability of accepting.
    pub operating_characteristic: Vec<(f64, f64)>,
    /// Tests of normality.
    pub normality: Normality,
    /// Where the numbers deserve less trust.
    pub warnings: Vec<Notice>,
}

impl Measurement<'_> {
    /// Judges the lot.
    ///
    /// # Errors
    /// [`StatisticsFault`] where a bound cannot be computed, or no plan of a practicable size keeps both risks.
    pub fn judge(&self) -> Result<Measured, StatisticsFault> {
        // A lower limit is an upper one of the negative values.
        let side = match self.limit.sense {
            Sense::AtMost => 1.0,
            Sense::AtLeast => -1.0,
        };
        let mut sorted: Vec<f64> = self.values.iter().map(|x| side * (x - self.bias)).collect();
        sorted.sort_by(f64::total_cmp);
        let limit = side * self.limit.value;
        let common = (self.standard_uncertainty * self.standard_uncertainty
            - self.repeatability * self.repeatability)
            .max(0.0)
            .sqrt();
        let factor = guard_band::factor(self.confidence);
        let used = limit - factor * common;
        let plan = VariablesPlan::between(self.points.producer, self.points.consumer)?;
        let count_plan =
            AttributePlan::between(Population::Stream, self.points.producer, self.points.consumer).ok();
        // There is at least one value.
        let none = Moments { count: 0, mean: f64::NAN, standard_deviation: None };
        let moments = Moments::of(&sorted).unwrap_or(none);
        let pieces = moments.count as u64;
        let spread = moments.standard_deviation.filter(|s| *s > 0.0);
        let normality = Normality::of(&sorted);
        let beyond = |limit: f64| (sorted.len() - sorted.partition_point(|x| *x <= limit)) as u64;
        let (beyond_limit, beyond_used) = (beyond(limit), beyond(used));
        let quality = spread.map(|s| (limit - moments.mean) / s);
        let quality_used = spread.map(|s| (used - moments.mean) / s);
        let criterion = match pieces {
            0 | 1 => None,
            n => Some(Criterion::of(n, self.points, plan)?),
        };

        let logarithms = self.logarithms(used);
        let by_count = decide_by_count(Population::Stream, pieces, beyond_used, self.points, count_plan);
        let not_normal = normality.rejected_at(NOT_NORMAL_DECIDES);
        let (method, decision, deciding) = match (quality_used, criterion) {
            (Some(q), Some(criterion)) if !not_normal => (Method::Variables, criterion.decide(q), Some(q)),
            (Some(_), Some(criterion)) if logarithms.is_some() => {
                let q = logarithms.unwrap_or(f64::NAN);
                (Method::VariablesOfLogarithms, criterion.decide(q), Some(q))
            }
            _ => (Method::Attributes, by_count, None),
        };
        let performance = match quality {
            Some(q) if pieces >= 2 => {
                let low = capability::quality_low(q, pieces, self.confidence)?;
                Some((capability::index(q), capability::index(low)))
            }
            _ => None,
        };
        let fraction = match (method, quality, performance) {
            (Method::Variables, Some(q), Some((_, low))) => {
                let estimate =
                    capability::fraction_unbiased(q, pieces).unwrap_or_else(|| capability::fraction_at(q));
                (estimate, capability::fraction_at(3.0 * low))
            }
            // Without trust in the distribution: by counting.
            _ => (
                beyond_limit as f64 / pieces as f64,
                order::fraction_beyond_high(beyond_limit, pieces, self.confidence)?,
            ),
        };
        let risks = spread.and_then(|s| {
            let true_spread = (s * s - self.repeatability * self.repeatability).max(0.0).sqrt();
            (true_spread > 0.0).then_some(Inspection {
                mean: moments.mean,
                spread: true_spread,
                uncertainty: self.standard_uncertainty,
                upper: limit,
                accept_up_to: used,
            })
        });
        let mut found = Measured {
            decision,
            reasons: Vec::new(),
            method,
            moments: Moments { mean: side * moments.mean, ..moments },
            quality,
            quality_used,
            plan,
            criterion,
            performance,
            fraction,
            guard_band: GuardBand {
                factor,
                limit_used: side * used,
                consumer_risk: risks.map(|r| r.consumer_risk()),
                producer_risk: risks.map(|r| r.producer_risk()),
            },
            beyond: (beyond_limit, beyond_used),
            operating_characteristic: self.operating_characteristic(method, pieces, criterion),
            normality,
            warnings: Vec::new(),
        };
        self.explain(&mut found, deciding, count_plan, spread.is_none(), logarithms.is_some());
        Ok(found)
    }

    /// Quality of the logarithms against that of the limit used; `None` where they make no sense or are not normal either.
    fn logarithms(&self, used: f64) -> Option<f64> {
        let side = match self.limit.sense {
            Sense::AtMost => 1.0,
            Sense::AtLeast => -1.0,
        };
        let limit = side * used;
        let mut logarithms = Vec::with_capacity(self.values.len());
        for x in self.values {
            let x = x - self.bias;
            if !(x > 0.0 && limit > 0.0) {
                return None;
            }
            logarithms.push(side * libm::log(x));
        }
        logarithms.sort_by(f64::total_cmp);
        let moments = Moments::of(&logarithms)?;
        let spread = moments.standard_deviation.filter(|s| *s > 0.0)?;
        let normality = Normality::of(&logarithms);
        normality.p_value().filter(|p| *p >= NOT_NORMAL_TOLD)?;
        Some((side * libm::log(limit) - moments.mean) / spread)
    }

    fn operating_characteristic(
        &self,
        method: Method,
        pieces: u64,
        criterion: Option<Criterion>,
    ) -> Vec<(f64, f64)> {
        let accept = |fraction: f64| match (method, criterion) {
            (Method::Variables | Method::VariablesOfLogarithms, Some(criterion)) => {
                acceptance_probability(pieces, criterion.accept_from, fraction)
            }
            _ => Population::Stream
                .consumer_number(pieces, self.points.consumer)
                .map_or(0.0, |c| Population::Stream.acceptance_probability(pieces, c, fraction)),
        };
        fractions(self.points).into_iter().map(|fraction| (fraction, accept(fraction))).collect()
    }

    fn explain(
        &self,
        found: &mut Measured,
        deciding: Option<f64>,
        count_plan: Option<AttributePlan>,
        no_spread: bool,
        logarithms_normal: bool,
    ) {
        let pieces = found.moments.count;
        let what = match found.method {
            Method::Variables => "the mean lies",
            Method::VariablesOfLogarithms => "the mean of the logarithms lies",
            Method::Attributes => "",
        };
        let reason = match (deciding, found.criterion, found.decision) {
            (Some(q), Some(c), Decision::Accept) => Reason::new(
                "quality_reached",
                format!(
                    "{what} {q:.3} standard deviations within the limit used; {:.3} are needed with {pieces} pieces",
                    c.accept_from
                ),
            ),
            (Some(q), Some(c), Decision::Reject) => Reason::new(
                "quality_missed",
                format!(
                    "{what} {q:.3} standard deviations within the limit used; below {:.3} a lot of {pieces} pieces is rejected",
                    c.reject_below
                ),
            ),
            (Some(q), Some(c), Decision::MorePiecesNeeded) => Reason::new(
                "too_few_pieces",
                format!(
                    "{what} {q:.3} standard deviations within the limit used, between {:.3} and {:.3}; {} pieces decide",
                    c.reject_below, c.accept_from, found.plan.pieces
                ),
            ),
            (_, _, decision) => {
                let code = match decision {
                    Decision::Accept => "few_enough_beyond",
                    Decision::Reject => "too_many_beyond",
                    Decision::MorePiecesNeeded => "too_few_pieces",
                };
                let wanted = match (decision, count_plan) {
                    (Decision::MorePiecesNeeded, Some(plan)) => format!(
                        "; by counting, {} pieces decide, of which {} may be beyond it; by measuring {} normal ones",
                        plan.pieces, plan.accept_at_most, found.plan.pieces
                    ),
                    _ => String::new(),
                };
                Reason::new(code, format!("{} of {pieces} lie beyond the limit used{wanted}", found.beyond.1))
            }
        };
        found.reasons.push(reason);
        let mut warn = |code, detail: String| found.warnings.push(Notice::new(code, detail));
        if no_spread && pieces > 1 {
            warn("no_spread", "all values are equal: the gauge resolves too little to show their spread, so parts were only counted".into());
        }
        if let Some(p) = found.normality.p_value()
            && p < NOT_NORMAL_TOLD
        {
            let then = match found.method {
                Method::Variables => "bounds and risks by mean and standard deviation deserve less trust",
                Method::VariablesOfLogarithms => "their logarithms do, and were judged instead",
                Method::Attributes => "neither do their logarithms, so parts were only counted",
            };
            warn("not_normal", format!("the values do not look normal (p = {p:.2e}): {then}"));
        } else if logarithms_normal && !no_spread && pieces < 8 {
            warn(
                "normality_unknown",
                format!("{pieces} values cannot show whether the characteristic is normal"),
            );
        }
        if found.beyond.0 > 0 {
            warn(
                "parts_beyond_limit",
                format!(
                    "{} of the measured parts lie beyond the limit; they are nonconforming whatever becomes of the lot",
                    found.beyond.0
                ),
            );
        }
        if let Some(s) = found.moments.standard_deviation
            && self.standard_uncertainty > 0.3 * s
            && s > 0.0
        {
            warn(
                "coarse_gauge",
                format!(
                    "the standard uncertainty of a measurement is {:.0} % of the standard deviation of the values (above 30 %: own judgement)",
                    100.0 * self.standard_uncertainty / s
                ),
            );
        }
    }
}

impl Criterion {
    /// For so many pieces (≥ 2). With as many as the plan asks for, one constant decides; with fewer, what lies between the
    /// two stays open.
    fn of(pieces: u64, points: Points, plan: VariablesPlan) -> Result<Self, StatisticsFault> {
        let own = VariablesPlan::with_pieces(pieces, points.producer, points.consumer)?;
        Ok(if pieces >= plan.pieces {
            Self { accept_from: own.k(), reject_below: own.k() }
        } else {
            Self { accept_from: own.k_low.max(own.k_high), reject_below: own.k_high.min(own.k_low) }
        })
    }

    fn decide(self, quality: f64) -> Decision {
        if quality >= self.accept_from {
            Decision::Accept
        } else if quality < self.reject_below {
            Decision::Reject
        } else {
            Decision::MorePiecesNeeded
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::statistics::{normal::normal_quantile, random::Sequence, variables_plan::RiskPoint};

    const POINTS: Points = Points {
        producer: RiskPoint { fraction: 0.01, risk: 0.05 },
        consumer: RiskPoint { fraction: 0.06, risk: 0.10 },
    };

    fn measurement(values: &[f64], limit: Limit) -> Measurement<'_> {
        Measurement {
            values,
            standard_uncertainty: 0.0,
            repeatability: 0.0,
            bias: 0.0,
            limit,
            points: POINTS,
            confidence: 0.95,
        }
    }

    const UPPER: Limit = Limit { value: 0.52, sense: Sense::AtMost };

    fn normal_values(count: u64, mean: f64, sd: f64, seed: u64) -> Vec<f64> {
        let mut numbers = Sequence::new(seed, 77).from(0);
        (0..count).map(|_| mean + sd * normal_quantile(numbers.next_open())).collect()
    }

    #[test]
    fn upper_and_lower_limits_are_mirrors() {
        let values = normal_values(42, 0.43, 0.03, 1);
        let negative: Vec<f64> = values.iter().map(|x| -x).collect();
        let up = measurement(&values, UPPER).judge().unwrap();
        let down = measurement(&negative, Limit { value: -0.52, sense: Sense::AtLeast }).judge().unwrap();
        assert_eq!((up.decision, up.quality, up.fraction), (down.decision, down.quality, down.fraction));
        assert_eq!(up.moments.mean, -down.moments.mean);
        assert_eq!(up.guard_band.limit_used, -down.guard_band.limit_used);
    }

    /// The risks that the plan states are those that simulated lots show.
    #[test]
    fn simulated_lots_are_accepted_as_often_as_the_plan_says() {
        let plan = VariablesPlan::between(POINTS.producer, POINTS.consumer).unwrap();
        for (point, accepted) in [(POINTS.producer, 0.95), (POINTS.consumer, 0.10)] {
            let mean = 0.52 + 0.03 * normal_quantile(point.fraction);
            let lots = 400_u64;
            let mut count = 0.0;
            for seed in 0..lots {
                let values = normal_values(plan.pieces, mean, 0.03, seed);
                let moments = Moments::of(&values).unwrap();
                let quality = (0.52 - moments.mean) / moments.standard_deviation.unwrap();
                if quality >= plan.k() {
                    count += 1.0;
                }
            }
            let n = lots as f64;
            let error = (n * accepted * (1.0 - accepted)).sqrt();
            assert!((count - n * accepted).abs() < 3.5 * error + 0.01 * n, "{point:?} {count}");
        }
    }

    #[test]
    fn uncertainty_common_to_all_parts_moves_the_limit_and_repeatability_does_not() {
        let values = normal_values(42, 0.43, 0.03, 2);
        let plain = measurement(&values, UPPER);
        let doubtful = Measurement { standard_uncertainty: 0.01, ..plain.clone() };
        let repeatable = Measurement { repeatability: 0.01, ..doubtful.clone() };
        let used = |m: &Measurement<'_>| m.judge().unwrap().guard_band.limit_used;
        assert_eq!(used(&plain), 0.52);
        assert!((used(&doubtful) - (0.52 - 0.016_448_536)).abs() < 1e-8);
        assert_eq!(used(&repeatable), 0.52);
        let biased = Measurement { bias: 0.02, ..plain.clone() };
        let shift = plain.judge().unwrap().moments.mean - biased.judge().unwrap().moments.mean;
        assert!((shift - 0.02).abs() < 1e-12);
    }

    #[test]
    fn few_pieces_leave_it_open_between_the_two_constants() {
        // Five pieces, quality 2: good for the producer, not enough for the consumer.
        let values: Vec<f64> = [-1.0, -0.5, 0.0, 0.5, 1.0].iter().map(|z| 0.42 + 0.05 * z).collect();
        let found = measurement(&values, UPPER).judge().unwrap();
        assert_eq!(found.decision, Decision::MorePiecesNeeded);
        assert!(found.reasons[0].detail.contains("42 pieces decide"), "{:?}", found.reasons);
        let one = measurement(&values[..1], UPPER).judge().unwrap();
        assert_eq!((one.decision, one.method), (Decision::MorePiecesNeeded, Method::Attributes));
        assert!(one.quality.is_none() && one.criterion.is_none() && one.performance.is_none());
    }

    #[test]
    fn equal_values_are_counted() {
        let found = measurement(&[0.45; 60], UPPER).judge().unwrap();
        assert_eq!((found.decision, found.method), (Decision::Accept, Method::Attributes));
        assert!(found.warnings.iter().any(|w| w.code == "no_spread"));
        let found = measurement(&[0.45; 10], UPPER).judge().unwrap();
        assert_eq!(found.decision, Decision::MorePiecesNeeded);
        assert_eq!(measurement(&[0.55; 10], UPPER).judge().unwrap().decision, Decision::Reject);
    }

    #[test]
    fn skewed_values_are_judged_by_their_logarithms_or_counted() {
        let scores: Vec<f64> = (0..60).map(|i| normal_quantile((f64::from(i) + 0.5) / 60.0)).collect();
        let skewed: Vec<f64> = scores.iter().map(|z| 0.2 * libm::exp(0.5 * z)).collect();
        let found = measurement(&skewed, Limit { value: 1.0, sense: Sense::AtMost }).judge().unwrap();
        assert_eq!((found.method, found.decision), (Method::VariablesOfLogarithms, Decision::Accept));
        assert!(found.warnings.iter().any(|w| w.code == "not_normal"));
        let double: Vec<f64> = scores.iter().map(|z| libm::exp(0.3 * libm::exp(0.9 * z))).collect();
        let found = measurement(&double, Limit { value: 100.0, sense: Sense::AtMost }).judge().unwrap();
        assert_eq!((found.method, found.decision), (Method::Attributes, Decision::Accept));
    }
}

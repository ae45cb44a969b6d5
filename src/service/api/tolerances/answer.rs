//! The answer about tolerances.

use serde::Serialize;
use utoipa::ToSchema;

use crate::{
    analysis::{
        statistics::indices::Index,
        tolerance::{Interval, Outcome, QUANTILES, Study},
    },
    service::{
        api::{notice::NoticeAnswer, quantity::Number},
        fingerprint::ModelAnswer,
    },
};

/// How many of a million pours dribble, and what drives it.
#[derive(Debug, Serialize, ToSchema)]
pub struct TolerancesAnswer<'a> {
    /// Pours that dribble, per million.
    pub dribble_ppm: RateAnswer,
    /// The same at either end of what is not known of everything that does not vary, and of the models: common to all pours, so no number of trials
    /// narrows it. At the base's confidence; 0 where not one trial lies so far out.
    pub dribble_ppm_with_model_doubt: DoubtAnswer,
    /// Sobol' indices of the margin, in the order of `varying`; null when the margin does not vary. They are shares of its variance, and say little about rare
    /// events far out in the tail.
    pub drivers: Option<Vec<DriverAnswer>>,
    /// How often which margin occurs. Where 0 lies within, it is one of the edges.
    pub histogram: HistogramAnswer<'a>,
    /// Linear propagation (JCGM 100): a check of the standard deviation, no guide to ppm.
    pub linear_check: LinearAnswer,
    /// The margin, ln(safety factor): below 0 a pour dribbles.
    pub margin: MarginAnswer,
    /// What computed this answer.
    pub model: ModelAnswer,
    /// Seed of the random numbers.
    pub seed: u64,
    /// Trials.
    pub trials: u64,
    /// Trials that made no case and were left out (a liquid that freezes, angles that contradict each other): 1 % at most.
    pub trials_left_out: u64,
    /// Where the numbers deserve less trust. Pointers are those of `varying`: into the base.
    pub warnings: Vec<NoticeAnswer<'a>>,
}

/// How an interval was found.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum IntervalKind {
    /// Wilson's, of the trials counted.
    Wilson,
    /// Clopper and Pearson's exact one: fewer than 20 trials dribbled, or did not.
    ClopperPearson,
    /// One-sided: no trial dribbled.
    ZeroEvents,
    /// Of weighted trials around the most probable ways to dribble: under 100 ppm.
    ImportanceSampling,
}

impl From<Interval> for IntervalKind {
    fn from(interval: Interval) -> Self {
        match interval {
            Interval::Wilson => Self::Wilson,
            Interval::ClopperPearson => Self::ClopperPearson,
            Interval::ZeroEvents => Self::ZeroEvents,
            Interval::ImportanceSampling => Self::ImportanceSampling,
        }
    }
}

/// A rate per million with the interval of its sampling error, at the base's confidence.
#[derive(Debug, Serialize, ToSchema)]
pub struct RateAnswer {
    /// High end.
    #[schema(value_type = f64, minimum = 0, maximum = 1_000_000)]
    pub high: Number,
    /// How the interval was found.
    pub interval: IntervalKind,
    /// Low end.
    #[schema(value_type = f64, minimum = 0, maximum = 1_000_000)]
    pub low: Number,
    /// The rate.
    #[schema(value_type = f64, minimum = 0, maximum = 1_000_000)]
    pub value: Number,
}

/// A band per million, and the doubt that it comes from.
#[derive(Debug, Serialize, ToSchema)]
pub struct DoubtAnswer {
    /// High end.
    #[schema(value_type = f64, minimum = 0, maximum = 1_000_000)]
    pub high: Number,
    /// Low end.
    #[schema(value_type = f64, minimum = 0, maximum = 1_000_000)]
    pub low: Number,
    /// Standard uncertainty of the margin from everything that does not vary, and from the models.
    #[schema(value_type = f64, minimum = 0)]
    pub standard_uncertainty: Number,
}

/// The margin over the trials.
#[derive(Debug, Serialize, ToSchema)]
pub struct MarginAnswer {
    /// Mean.
    pub mean: Number,
    /// Quantiles.
    pub quantiles: Vec<QuantileAnswer>,
    /// Standard deviation.
    pub standard_deviation: Number,
}

/// A quantile.
#[derive(Debug, Serialize, ToSchema)]
pub struct QuantileAnswer {
    /// Share of trials below it.
    #[schema(value_type = f64, minimum = 0, maximum = 1, example = 0.05)]
    pub probability: Number,
    /// The margin.
    pub value: Number,
}

/// Linear propagation of the spreads.
#[derive(Debug, Serialize, ToSchema)]
pub struct LinearAnswer {
    /// Slopes of the margin at the means, per unit of the field, in the order of `varying`.
    pub sensitivities: Vec<SensitivityAnswer>,
    /// Standard uncertainty of the margin; null where a slope could not be had.
    pub standard_uncertainty: Option<Number>,
}

/// A slope of the margin.
#[derive(Debug, Serialize, ToSchema)]
pub struct SensitivityAnswer {
    /// The field.
    #[schema(example = "/lip/edge/rounded/radius_mm")]
    pub pointer: &'static str,
    /// Change of the margin per unit of the field; null where the neighbourhood of the mean makes no case.
    pub value: Option<Number>,
}

/// Shares of the variance of the margin.
#[derive(Debug, Serialize, ToSchema)]
pub struct DriverAnswer {
    /// Share that goes when this number is held.
    pub first_order: Number,
    /// Standard error of that share.
    pub first_order_standard_error: Number,
    /// The number.
    #[schema(example = "/lip/edge/rounded/radius_mm")]
    pub pointer: &'static str,
    /// Share that is left when all others are held, interactions included.
    pub total: Number,
    /// Standard error of that share.
    pub total_standard_error: Number,
}

impl DriverAnswer {
    fn new(pointer: &'static str, index: &Index) -> Self {
        Self {
            first_order: Number(index.first_order),
            first_order_standard_error: Number(index.first_order_error),
            pointer,
            total: Number(index.total),
            total_standard_error: Number(index.total_error),
        }
    }
}

/// Counts in equal bins.
#[derive(Debug, Serialize, ToSchema)]
pub struct HistogramAnswer<'a> {
    /// Trials from each edge up to the next.
    pub counts: &'a [u64],
    /// Edges, one more than counts.
    pub edges: Vec<Number>,
}

const PER_MILLION: f64 = 1e6;

impl<'a> TolerancesAnswer<'a> {
    /// The answer to this study.
    #[must_use]
    pub fn new(study: &Study, outcome: &'a Outcome, model: ModelAnswer) -> Self {
        let ppm = |share: f64| Number(PER_MILLION * share);
        let pointers = || study.varying.iter().map(|varying| varying.field.pointer());
        let Outcome { rate, rate_with_model_doubt: (low, high), margin, linear, .. } = outcome;
        Self {
            dribble_ppm: RateAnswer {
                high: ppm(rate.high),
                interval: rate.interval.into(),
                low: ppm(rate.low),
                value: ppm(rate.value),
            },
            dribble_ppm_with_model_doubt: DoubtAnswer {
                high: ppm(*high),
                low: ppm(*low),
                standard_uncertainty: Number(outcome.model_doubt),
            },
            drivers: outcome.drivers.as_ref().map(|d| {
                pointers().zip(d).map(|(pointer, index)| DriverAnswer::new(pointer, index)).collect()
            }),
            histogram: HistogramAnswer {
                counts: &margin.histogram.counts,
                edges: margin.histogram.edges.iter().copied().map(Number).collect(),
            },
            linear_check: LinearAnswer {
                sensitivities: pointers()
                    .zip(&linear.sensitivities)
                    .map(|(pointer, value)| SensitivityAnswer { pointer, value: value.map(Number) })
                    .collect(),
                standard_uncertainty: linear.standard_uncertainty.map(Number),
            },
            margin: MarginAnswer {
                mean: Number(margin.mean),
                quantiles: QUANTILES
                    .iter()
                    .zip(&margin.quantiles)
                    .map(|(p, value)| QuantileAnswer { probability: Number(*p), value: Number(*value) })
                    .collect(),
                standard_deviation: Number(margin.standard_deviation),
            },
            model,
            seed: study.seed,
            trials: study.trials,
            trials_left_out: outcome.left_out,
            warnings: outcome.warnings.iter().map(NoticeAnswer::from).collect(),
        }
    }
}

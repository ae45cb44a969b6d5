//! The answer about a lot.

use serde::Serialize;
use utoipa::ToSchema;

use crate::{
    analysis::{
        lot::{Counted, Criterion, Decision, Limit, Measured, Method, Normality, Sense},
        statistics::normality::TestResult,
    },
    service::{
        api::{notice::NoticeAnswer, quantity::Number},
        fingerprint::ModelAnswer,
    },
};

/// What becomes of the lot, why, and at which risks.
#[derive(Debug, Serialize, ToSchema)]
pub struct LotAnswer<'a> {
    /// The decision.
    pub decision: DecisionAnswer,
    /// Fraction nonconforming in the long run.
    pub fraction_nonconforming: FractionAnswer,
    /// How far inside the limit values must lie; null for a pour test.
    pub guard_band: Option<GuardBandAnswer>,
    /// The limit; null for a pour test.
    pub limit: Option<LimitAnswer<'a>>,
    /// By what the lot was decided.
    pub method: MethodAnswer,
    /// What computed this answer.
    pub model: ModelAnswer,
    /// Tests of normality of the values; null for a pour test.
    pub normality: Option<NormalityAnswer>,
    /// Probability of accepting by fraction nonconforming (with measured parts: beyond the limit used), with as many pieces as were given.
    pub operating_characteristic: Vec<OperatingPoint>,
    /// Capability of the lot against the limit; null for a pour test, a single part and values without spread.
    pub performance: Option<PerformanceAnswer>,
    /// The smallest plan that keeps both risks, and what so many pieces as were given are held against.
    pub plan: PlanAnswer,
    /// Why.
    pub reasons: Vec<NoticeAnswer<'a>>,
    /// What the values say; null for a pour test.
    pub statistic: Option<StatisticAnswer>,
    /// Where the numbers deserve less trust.
    pub warnings: Vec<NoticeAnswer<'a>>,
}

/// What becomes of the lot.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum DecisionAnswer {
    /// The consumer's risk is kept.
    Accept,
    /// The lot is not good enough.
    Reject,
    /// Neither can be said at these risks with so few pieces.
    MorePiecesNeeded,
}

impl From<Decision> for DecisionAnswer {
    fn from(decision: Decision) -> Self {
        match decision {
            Decision::Accept => Self::Accept,
            Decision::Reject => Self::Reject,
            Decision::MorePiecesNeeded => Self::MorePiecesNeeded,
        }
    }
}

/// By what a lot was decided.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum MethodAnswer {
    /// Mean and standard deviation of normal values.
    Variables,
    /// The same of the logarithms: the values are not normal, their logarithms are.
    VariablesOfLogarithms,
    /// Counting, whatever the distribution.
    Attributes,
}

impl From<Method> for MethodAnswer {
    fn from(method: Method) -> Self {
        match method {
            Method::Variables => Self::Variables,
            Method::VariablesOfLogarithms => Self::VariablesOfLogarithms,
            Method::Attributes => Self::Attributes,
        }
    }
}

/// A limit.
#[derive(Debug, Serialize, ToSchema)]
pub struct LimitAnswer<'a> {
    /// Which side conforms.
    pub sense: LimitSense,
    /// Its unit.
    #[schema(example = "mm")]
    pub unit: &'a str,
    /// Its value.
    pub value: Number,
}

/// Which side of a limit conforms.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum LimitSense {
    /// At most the limit.
    AtMost,
    /// At least the limit.
    AtLeast,
}

/// What the values say, freed of the gauge's bias.
#[derive(Debug, Serialize, ToSchema)]
pub struct StatisticAnswer {
    /// How many there are.
    pub count: usize,
    /// How many lie beyond the limit.
    pub beyond_limit: u64,
    /// How many lie beyond the limit used.
    pub beyond_limit_used: u64,
    /// Mean.
    pub mean: Number,
    /// Distance of the mean within the limit, in standard deviations; null without spread.
    pub quality: Option<Number>,
    /// The same within the limit used: this decides.
    pub quality_used: Option<Number>,
    /// Standard deviation; null for a single part.
    pub standard_deviation: Option<Number>,
}

/// The smallest plan, and what the pieces given are held against.
#[derive(Debug, Serialize, ToSchema)]
#[serde(untagged)]
pub enum PlanAnswer {
    /// By measuring.
    Variables(VariablesPlanAnswer),
    /// By counting.
    Attributes(AttributesPlanAnswer),
}

/// A plan by measuring: accept when the mean lies k standard deviations within the limit used.
#[derive(Debug, Serialize, ToSchema)]
pub struct VariablesPlanAnswer {
    /// Quality from which so many pieces as were given are accepted; null for a single part.
    pub accept_from: Option<Number>,
    /// k, the middle between the two that follow.
    pub k: Number,
    /// Largest k that keeps the producer's risk.
    pub k_high: Number,
    /// Smallest k that keeps the consumer's risk.
    pub k_low: Number,
    /// Pieces.
    pub pieces: u64,
    /// Quality below which so many pieces as were given are rejected; between the two the answer is left open. Null for a single part.
    pub reject_below: Option<Number>,
}

/// A plan by counting.
#[derive(Debug, Serialize, ToSchema)]
pub struct AttributesPlanAnswer {
    /// Accept at most so many; null where even the whole lot does not tell the two qualities apart.
    pub accept_at_most: Option<u64>,
    /// Count up to which so many pieces as were given are accepted; null where not even none is enough.
    pub accept_given_at_most: Option<u64>,
    /// Pieces; null where even the whole lot does not tell the two qualities apart.
    pub pieces: Option<u64>,
    /// Count from which so many pieces as were given are rejected.
    pub reject_given_from: u64,
    /// Fewest pieces of a plan that accepts on none: it keeps the consumer's risk alone.
    pub zero_acceptance_pieces: Option<u64>,
}

/// Capability of the lot: one lot without evidence of a stable process, so P_pk rather than C_pk.
#[derive(Debug, Serialize, ToSchema)]
pub struct PerformanceAnswer {
    /// Distance of the mean within the limit, over three standard deviations.
    pub ppk: Number,
    /// Exact lower bound at the confidence asked for, for normal values.
    pub ppk_low: Number,
}

/// Fraction nonconforming.
#[derive(Debug, Serialize, ToSchema)]
pub struct FractionAnswer {
    /// Best unbiased estimate; by counting, the share seen.
    #[schema(value_type = f64, minimum = 0, maximum = 1)]
    pub estimate: Number,
    /// Upper bound at the confidence asked for: to be relied on rather than the estimate.
    #[schema(value_type = f64, minimum = 0, maximum = 1)]
    pub high: Number,
}

/// The guard band.
#[derive(Debug, Serialize, ToSchema)]
pub struct GuardBandAnswer {
    /// Share of parts that lie beyond the limit and yet measure within the limit used; null without spread.
    pub consumer_risk: Option<Number>,
    /// Width in standard uncertainties.
    pub factor: Number,
    /// The limit that decides: inside the other by the factor times what of the standard uncertainty is common to all parts.
    pub limit_used: Number,
    /// Share of parts that lie within the limit and yet measure beyond the limit used; null without spread.
    pub producer_risk: Option<Number>,
}

/// A point of the operating characteristic.
#[derive(Debug, Serialize, ToSchema)]
pub struct OperatingPoint {
    /// Probability of accepting such a lot.
    #[schema(value_type = f64, minimum = 0, maximum = 1)]
    pub acceptance_probability: Number,
    /// Fraction nonconforming.
    #[schema(value_type = f64, minimum = 0, maximum = 1)]
    pub fraction: Number,
}

/// Tests of normality.
#[derive(Debug, Serialize, ToSchema)]
pub struct NormalityAnswer {
    /// Anderson–Darling A*; null below eight values and without spread.
    pub anderson_darling: Option<TestAnswer>,
    /// The p-value that counts: Shapiro–Wilk's, else Anderson–Darling's. Below 0.05 a warning is given; below 0.01 mean and standard deviation do not decide.
    pub p_value: Option<Number>,
    /// Shapiro–Wilk W; null below three and above 5000 values, and without spread.
    pub shapiro_wilk: Option<TestAnswer>,
}

/// A test.
#[derive(Debug, Serialize, ToSchema)]
pub struct TestAnswer {
    /// Probability of a statistic at least as far out, were the values normal.
    #[schema(value_type = f64, minimum = 0, maximum = 1)]
    pub p_value: Number,
    /// The statistic.
    pub statistic: Number,
}

impl From<TestResult> for TestAnswer {
    fn from(test: TestResult) -> Self {
        Self { p_value: Number(test.p_value), statistic: Number(test.statistic) }
    }
}

impl From<&Normality> for NormalityAnswer {
    fn from(normality: &Normality) -> Self {
        Self {
            anderson_darling: normality.anderson_darling.map(TestAnswer::from),
            p_value: normality.p_value().map(Number),
            shapiro_wilk: normality.shapiro_wilk.map(TestAnswer::from),
        }
    }
}

fn operating_points(points: &[(f64, f64)]) -> Vec<OperatingPoint> {
    let point = |&(fraction, probability): &(f64, f64)| OperatingPoint {
        acceptance_probability: Number(probability),
        fraction: Number(fraction),
    };
    points.iter().map(point).collect()
}

impl<'a> LotAnswer<'a> {
    /// The answer about measured parts.
    #[must_use]
    pub fn of_measured(found: &'a Measured, limit: Limit, unit: &'a str, model: ModelAnswer) -> Self {
        let number = |x: Option<f64>| x.map(Number);
        let accept = found.criterion.map(|Criterion { accept_from, .. }| accept_from);
        let reject = found.criterion.map(|Criterion { reject_below, .. }| reject_below);
        Self {
            decision: found.decision.into(),
            fraction_nonconforming: FractionAnswer {
                estimate: Number(found.fraction.0),
                high: Number(found.fraction.1),
            },
            guard_band: Some(GuardBandAnswer {
                consumer_risk: number(found.guard_band.consumer_risk),
                factor: Number(found.guard_band.factor),
                limit_used: Number(found.guard_band.limit_used),
                producer_risk: number(found.guard_band.producer_risk),
            }),
            limit: Some(LimitAnswer {
                sense: match limit.sense {
                    Sense::AtMost => LimitSense::AtMost,
                    Sense::AtLeast => LimitSense::AtLeast,
                },
                unit,
                value: Number(limit.value),
            }),
            method: found.method.into(),
            model,
            normality: Some(NormalityAnswer::from(&found.normality)),
            operating_characteristic: operating_points(&found.operating_characteristic),
            performance: found
                .performance
                .map(|(ppk, low)| PerformanceAnswer { ppk: Number(ppk), ppk_low: Number(low) }),
            plan: PlanAnswer::Variables(VariablesPlanAnswer {
                accept_from: number(accept),
                k: Number(found.plan.k()),
                k_high: Number(found.plan.k_high),
                k_low: Number(found.plan.k_low),
                pieces: found.plan.pieces,
                reject_below: number(reject),
            }),
            reasons: found.reasons.iter().map(NoticeAnswer::from).collect(),
            statistic: Some(StatisticAnswer {
                count: found.moments.count,
                beyond_limit: found.beyond.0,
                beyond_limit_used: found.beyond.1,
                mean: Number(found.moments.mean),
                quality: number(found.quality),
                quality_used: number(found.quality_used),
                standard_deviation: number(found.moments.standard_deviation),
            }),
            warnings: found.warnings.iter().map(NoticeAnswer::from).collect(),
        }
    }

    /// The answer about a pour test.
    #[must_use]
    pub fn of_pour_test(found: &'a Counted, model: ModelAnswer) -> Self {
        Self {
            decision: found.decision.into(),
            fraction_nonconforming: FractionAnswer {
                estimate: Number(found.fraction),
                high: Number(found.fraction_high),
            },
            guard_band: None,
            limit: None,
            method: MethodAnswer::Attributes,
            model,
            normality: None,
            operating_characteristic: operating_points(&found.operating_characteristic),
            performance: None,
            plan: PlanAnswer::Attributes(AttributesPlanAnswer {
                accept_at_most: found.plan.map(|plan| plan.accept_at_most),
                accept_given_at_most: found.accept_at_most,
                pieces: found.plan.map(|plan| plan.pieces),
                reject_given_from: found.reject_from,
                zero_acceptance_pieces: found.zero_acceptance_pieces,
            }),
            reasons: found.reasons.iter().map(NoticeAnswer::from).collect(),
            statistic: None,
            warnings: Vec::new(),
        }
    }
}

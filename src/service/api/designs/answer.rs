//! The answer of a design.

use serde::Serialize;
use utoipa::ToSchema;

use super::request::{DesignRequest, Plan};
use crate::{
    analysis::{
        decision::Verdict,
        design::{CaseOutcome, Interval, Look, Outcome, Sense},
    },
    service::{api::quantity::Number, fingerprint::ModelAnswer},
};

/// The limit of one field over many cases.
#[derive(Serialize, ToSchema)]
pub struct DesignAnswer<'a> {
    /// The case in the way, where there is no limit: of those that are clean nowhere in the bracket the one furthest from it, else the one that is worst at
    /// the nearest miss. Null where there is a limit.
    blocking_case: Option<&'a str>,
    /// The cases, in the order of the request.
    cases: Vec<CaseAnswer<'a>>,
    /// The case that is the first not to be clean beyond the limit. Null where the bracket ends first, or where there is no limit.
    governing_case: Option<&'a str>,
    /// Every interval of the bracket in which all cases are clean, ends included.
    #[schema(value_type = Vec<Vec<f64>>)]
    intervals: Vec<[Number; 2]>,
    /// The limit; null where no value in the bracket is clean for all cases.
    limit: Option<LimitAnswer>,
    /// What computed it.
    model: ModelAnswer,
    /// The value that comes nearest to clean for all, where there is no limit. Null where there is one, or where no case can be computed in the bracket.
    nearest: Option<NearestAnswer<'a>>,
}

/// A limit, verified by deciding every case anew on both sides of it.
#[derive(Serialize, ToSchema)]
pub struct LimitAnswer {
    /// Whether the bracket ends here rather than cleanness: a wider bracket may give a wider limit.
    at_bracket_end: bool,
    /// A value just beyond the limit at which the governing case was verified not to be clean. Null where the bracket ends first.
    not_clean_at: Option<Number>,
    /// Where the clean interval ends on its other side. Null where that is the end of the bracket.
    other_end: Option<Number>,
    /// Which side of the limit is clean.
    sense: SenseAnswer,
    /// Unit of every value here.
    #[schema(example = "mm")]
    unit: &'static str,
    /// The last value at which every case is clean, rounded to six digits towards the clean side. Of several clean intervals it is that of the one which
    /// holds the base's own value, else of the widest.
    value: Number,
}

/// Which side of a limit is clean.
#[derive(Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SenseAnswer {
    /// Clean up to the limit.
    AtMost,
    /// Clean from the limit on.
    AtLeast,
}

/// One case.
#[derive(Serialize, ToSchema)]
pub struct CaseAnswer<'a> {
    /// Degree of belief that it dribbles at the common limit (else at the nearest miss); null where it is impossible there.
    dribble_probability_at_limit: Option<Number>,
    /// Code of the fault that makes it impossible at the common limit (else at the nearest miss).
    fault_at_limit: Option<&'static str>,
    /// Where in the bracket it is clean, ends included.
    #[schema(value_type = Vec<Vec<f64>>)]
    intervals: Vec<[Number; 2]>,
    /// Its own limit, of the same sense as the common one; null where it is clean nowhere.
    limit: Option<Number>,
    /// Its name.
    name: &'a str,
    /// Weber number over critical Weber number at the common limit (else at the nearest miss); null where it is impossible there.
    safety_factor_at_limit: Option<Number>,
    /// Its verdict at the common limit (else at the nearest miss); null where it is impossible there.
    verdict_at_limit: Option<VerdictAnswer>,
}

/// A verdict.
#[derive(Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum VerdictAnswer {
    /// The stream leaves, at the confidence asked for.
    Clean,
    /// Neither can be said at the confidence asked for.
    Marginal,
    /// The liquid runs down the outside, at the confidence asked for.
    Dribbles,
}

/// The nearest miss.
#[derive(Serialize, ToSchema)]
pub struct NearestAnswer<'a> {
    /// The case that is worst there.
    case: &'a str,
    /// Its dribble probability there.
    dribble_probability: Number,
    /// Its safety factor there.
    safety_factor: Number,
    /// The value of the field.
    value: Number,
    /// Its verdict there.
    verdict: Option<VerdictAnswer>,
}

impl<'a> DesignAnswer<'a> {
    /// The answer to a request.
    pub(super) fn new(
        request: &'a DesignRequest,
        plan: &Plan,
        outcome: &Outcome,
        model: ModelAnswer,
    ) -> Self {
        let name = |index: usize| request.cases.get(index).map(|case| case.name.as_str());
        let limit = outcome.limit.map(|limit| LimitAnswer {
            at_bracket_end: limit.governing.is_none(),
            not_clean_at: limit.not_clean_at.map(Number),
            other_end: limit.other_end.map(Number),
            sense: match limit.sense {
                Sense::AtMost => SenseAnswer::AtMost,
                Sense::AtLeast => SenseAnswer::AtLeast,
            },
            unit: plan.field.quantity().unit,
            value: Number(limit.value),
        });
        let nearest = outcome.nearest.and_then(|miss| {
            Some(NearestAnswer {
                case: name(miss.worst)?,
                dribble_probability: Number(miss.look.dribble_probability),
                safety_factor: Number(miss.look.safety_factor),
                value: Number(miss.value),
                verdict: verdict(&miss.look),
            })
        });
        Self {
            blocking_case: outcome.blocking.and_then(name),
            cases: request.cases.iter().zip(&outcome.cases).map(|(c, o)| case(&c.name, o)).collect(),
            governing_case: outcome.limit.and_then(|limit| limit.governing).and_then(name),
            intervals: ends(&outcome.intervals),
            limit,
            model,
            nearest,
        }
    }
}

fn ends(intervals: &[Interval]) -> Vec<[Number; 2]> {
    intervals.iter().map(|interval| [Number(interval.low), Number(interval.high)]).collect()
}

fn verdict(look: &Look) -> Option<VerdictAnswer> {
    look.verdict.map(|verdict| match verdict {
        Verdict::Clean => VerdictAnswer::Clean,
        Verdict::Marginal => VerdictAnswer::Marginal,
        Verdict::Dribbles => VerdictAnswer::Dribbles,
    })
}

fn case<'a>(name: &'a str, outcome: &CaseOutcome) -> CaseAnswer<'a> {
    let look = &outcome.at_limit;
    let known = |value: f64| value.is_finite().then_some(Number(value));
    CaseAnswer {
        dribble_probability_at_limit: known(look.dribble_probability),
        fault_at_limit: look.fault,
        intervals: ends(&outcome.intervals),
        limit: outcome.limit.map(Number),
        name,
        safety_factor_at_limit: known(look.safety_factor),
        verdict_at_limit: verdict(look),
    }
}

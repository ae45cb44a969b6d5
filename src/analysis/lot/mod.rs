//! Lots: measured parts or a pour test against a plan, accept or reject, with the risks stated.

mod counted;
mod measured;
mod units;

pub use counted::{Counted, PourTest};
pub use measured::{
    Criterion, GuardBand, Measured, Measurement, Method, NOT_NORMAL_DECIDES, NOT_NORMAL_TOLD, Normality,
};
pub use units::{MixedUnits, mixed_units};

use super::statistics::{
    attribute_plan::{AttributePlan, Population},
    variables_plan::RiskPoint,
};

/// Which side of a limit conforms.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sense {
    /// At most the limit.
    AtMost,
    /// At least the limit.
    AtLeast,
}

/// The limit of a characteristic.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limit {
    /// Its value.
    pub value: f64,
    /// Which side conforms.
    pub sense: Sense,
}

/// The two points of the operating characteristic that a plan keeps.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Points {
    /// Quality that is to be accepted, and the risk of not accepting it.
    pub producer: RiskPoint,
    /// Quality that is not to be accepted, and the risk of accepting it.
    pub consumer: RiskPoint,
}

/// What becomes of the lot.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Decision {
    /// Accept: the consumer's risk is kept.
    Accept,
    /// Reject.
    Reject,
    /// Neither can be said at these risks with so few pieces.
    MorePiecesNeeded,
}

/// Why, in plain words.
pub use super::notice::Notice as Reason;

/// Decides by counting events, at these risks; `plan` is the smallest plan that keeps both.
fn decide_by_count(
    population: Population,
    pieces: u64,
    events: u64,
    points: Points,
    plan: Option<AttributePlan>,
) -> Decision {
    let keeps = population.consumer_number(pieces, points.consumer).is_some_and(|c| events <= c);
    if keeps {
        return Decision::Accept;
    }
    // With as many pieces as the plan asks for, what does not keep the consumer's risk is rejected: the producer's is kept.
    // With fewer, only what good quality would hardly show.
    let enough = plan.is_some_and(|plan| pieces >= plan.pieces);
    if enough || events > population.producer_number(pieces, points.producer) {
        Decision::Reject
    } else {
        Decision::MorePiecesNeeded
    }
}

/// Fractions at which operating characteristics are given: 1e-4 to 0.5, evenly in their logarithm, and the plan's own two.
#[must_use]
pub fn fractions(points: Points) -> Vec<f64> {
    const COUNT: u32 = 40;
    let (low, high) = (libm::log(1e-4), libm::log(0.5));
    let share = |i: u32| f64::from(i) / f64::from(COUNT);
    let mut all: Vec<f64> = (0..=COUNT).map(|i| libm::exp(low + share(i) * (high - low))).collect();
    all.extend([points.producer.fraction, points.consumer.fraction]);
    all.sort_by(f64::total_cmp);
    all.dedup();
    all
}

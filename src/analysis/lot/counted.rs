//! A lot judged by a pour test: pieces poured, pieces that dribbled.

use super::{Decision, Points, Reason, decide_by_count, fractions};
use crate::analysis::statistics::{
    StatisticsFault,
    attribute_plan::{AttributePlan, Population},
    proportion,
};

/// A pour test.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PourTest {
    /// Pieces poured, at least 1 and at most the lot.
    pub pieces: u64,
    /// Pieces that dribbled, at most the pieces.
    pub dribbled: u64,
    /// Size of the lot; none for a stream of production.
    pub lot_size: Option<u64>,
    /// The risks to keep.
    pub points: Points,
    /// Confidence of the upper bound.
    pub confidence: f64,
}

/// What is said of the lot.
#[derive(Debug, Clone, PartialEq)]
pub struct Counted {
    /// The decision.
    pub decision: Decision,
    /// Why.
    pub reasons: Vec<Reason>,
    /// The smallest plan that keeps both risks; none where even the whole lot does not tell.
    pub plan: Option<AttributePlan>,
    /// Fewest pieces for a plan that accepts on none; none where even the whole lot does not tell.
    pub zero_acceptance_pieces: Option<u64>,
    /// Events per piece.
    pub fraction: f64,
    /// Upper bound of the fraction in the long run.
    pub fraction_high: f64,
    /// The largest count with which so many pieces are accepted; none where not even none is enough.
    pub accept_at_most: Option<u64>,
    /// The smallest count with which so many pieces are rejected.
    pub reject_from: u64,
    /// Fraction that dribbles, and probability of accepting with so many pieces.
    pub operating_characteristic: Vec<(f64, f64)>,
}

impl PourTest {
    /// Judges the lot.
    ///
    /// # Errors
    /// [`StatisticsFault`] where a bound cannot be computed, or no plan of a practicable size keeps both risks in a stream.
    pub fn judge(&self) -> Result<Counted, StatisticsFault> {
        let Self { pieces, dribbled, points, .. } = *self;
        let population = self.lot_size.map_or(Population::Stream, Population::Lot);
        let plan = match AttributePlan::between(population, points.producer, points.consumer) {
            Ok(plan) => Some(plan),
            // In a small lot the two qualities may be the same number of pieces.
            Err(StatisticsFault::PlanTooLarge { .. }) if self.lot_size.is_some() => None,
            Err(fault) => return Err(fault),
        };
        let decision = decide_by_count(population, pieces, dribbled, points, plan);
        let accept_at_most = population.consumer_number(pieces, points.consumer);
        let enough = plan.is_some_and(|plan| pieces >= plan.pieces);
        let reject_from = match accept_at_most {
            Some(c) if enough => c + 1,
            other => population.producer_number(pieces, points.producer).max(other.unwrap_or(0)) + 1,
        };
        let oc = |fraction: f64| {
            let probability =
                accept_at_most.map_or(0.0, |c| population.acceptance_probability(pieces, c, fraction));
            (fraction, probability)
        };
        Ok(Counted {
            decision,
            reasons: vec![self.reason(decision, accept_at_most, plan)],
            plan,
            zero_acceptance_pieces: population.pieces_for(0, points.consumer),
            fraction: dribbled as f64 / pieces as f64,
            fraction_high: proportion::upper_bound(dribbled, pieces, self.confidence)?,
            accept_at_most,
            reject_from,
            operating_characteristic: fractions(points).into_iter().map(oc).collect(),
        })
    }

    fn reason(&self, decision: Decision, accept: Option<u64>, plan: Option<AttributePlan>) -> Reason {
        let Self { pieces, dribbled, points, .. } = self;
        let percent = |x: f64| 100.0 * x;
        match decision {
            Decision::Accept => {
                let most = accept.unwrap_or(0);
                let detail = format!(
                    "{dribbled} of {pieces} dribbled; with up to {most}, a lot of which {:.3} % dribble is accepted at most {:.3} % of the time",
                    percent(points.consumer.fraction),
                    percent(points.consumer.risk)
                );
                Reason::new("consumer_risk_kept", detail)
            }
            Decision::Reject => {
                let detail = format!(
                    "{dribbled} of {pieces} dribbled, more than the plan allows; a lot of which {:.3} % dribble would show that at most {:.3} % of the time",
                    percent(points.producer.fraction),
                    percent(points.producer.risk)
                );
                Reason::new("too_many_dribbled", detail)
            }
            Decision::MorePiecesNeeded => {
                let wanted = plan.map_or_else(
                    || "no plan keeps both risks in so small a lot".to_owned(),
                    |plan| {
                        format!(
                            "{} pieces are needed, of which {} may dribble",
                            plan.pieces, plan.accept_at_most
                        )
                    },
                );
                let detail = format!(
                    "{dribbled} of {pieces} dribbled, which tells neither quality from the other; {wanted}"
                );
                Reason::new("too_few_pieces", detail)
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::statistics::variables_plan::RiskPoint;

    const POINTS: Points = Points {
        producer: RiskPoint { fraction: 0.01, risk: 0.05 },
        consumer: RiskPoint { fraction: 0.06, risk: 0.10 },
    };

    fn test(pieces: u64, dribbled: u64, lot_size: Option<u64>) -> Counted {
        PourTest { pieces, dribbled, lot_size, points: POINTS, confidence: 0.95 }.judge().unwrap()
    }

    #[test]
    fn decisions_follow_the_plan() {
        let plan = test(1, 0, None).plan.unwrap();
        for dribbled in 0..=plan.pieces {
            let accept = dribbled <= plan.accept_at_most;
            let expected = if accept { Decision::Accept } else { Decision::Reject };
            let found = test(plan.pieces, dribbled, None);
            assert_eq!(found.decision, expected);
            assert_eq!(found.accept_at_most, Some(plan.accept_at_most));
            assert_eq!(found.reject_from, plan.accept_at_most + 1);
        }
        assert_eq!(test(5, 0, None).decision, Decision::MorePiecesNeeded);
        assert_eq!(test(5, 5, None).decision, Decision::Reject);
        // Zero acceptance: ⌈ln 0.1/ln 0.94⌉ = 38 pieces.
        assert_eq!(test(38, 0, None).decision, Decision::Accept);
        assert_eq!(test(37, 0, None).decision, Decision::MorePiecesNeeded);
        assert_eq!(test(37, 0, None).zero_acceptance_pieces, Some(38));
    }

    #[test]
    fn a_finite_lot_needs_fewer_pieces() {
        let (stream, lot) = (test(10, 0, None), test(10, 0, Some(100)));
        assert!(lot.zero_acceptance_pieces < stream.zero_acceptance_pieces);
        // A whole small lot poured: known.
        assert_eq!(test(10, 0, Some(10)).decision, Decision::Accept);
        assert_eq!(test(10, 3, Some(10)).decision, Decision::Reject);
    }
}

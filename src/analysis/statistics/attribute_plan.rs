//! Sampling by attributes: accept when at most c of n pieces are events.

use super::{
    StatisticsFault, beta::binomial_cdf, hypergeometric::hypergeometric_cdf, variables_plan::RiskPoint,
};

/// Where the pieces are drawn from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Population {
    /// A stream of production: binomial.
    Stream,
    /// A lot of this many pieces: hypergeometric.
    Lot(u64),
}

impl Population {
    /// Probability of accepting with `pieces` and acceptance number `accept` when `fraction` are events. In a finite
    /// lot the number of events is `fraction` of it, rounded to the nearest whole number.
    #[must_use]
    pub fn acceptance_probability(self, pieces: u64, accept: u64, fraction: f64) -> f64 {
        match self {
            Self::Stream => binomial_cdf(accept, pieces, fraction),
            Self::Lot(lot) => {
                let marked = libm::round(fraction * lot as f64) as u64;
                hypergeometric_cdf(accept, lot, marked.min(lot), pieces.min(lot))
            }
        }
    }

    /// The same with the events of a finite lot rounded up, against the consumer.
    fn accepts_bad(self, pieces: u64, accept: u64, fraction: f64) -> f64 {
        match self {
            Self::Stream => binomial_cdf(accept, pieces, fraction),
            Self::Lot(lot) => {
                let marked = (fraction * lot as f64 - 1e-9).ceil().max(0.0) as u64;
                hypergeometric_cdf(accept, lot, marked.min(lot), pieces.min(lot))
            }
        }
    }

    /// The same with the events of a finite lot rounded down, for the producer.
    fn accepts_good(self, pieces: u64, accept: u64, fraction: f64) -> f64 {
        match self {
            Self::Stream => binomial_cdf(accept, pieces, fraction),
            Self::Lot(lot) => {
                let marked = (fraction * lot as f64 + 1e-9).floor() as u64;
                hypergeometric_cdf(accept, lot, marked.min(lot), pieces.min(lot))
            }
        }
    }

    fn most(self) -> u64 {
        match self {
            Self::Stream => MOST_PIECES,
            Self::Lot(lot) => lot.min(MOST_PIECES),
        }
    }

    /// Fewest pieces for which the consumer's risk is kept with acceptance number `accept`; `None` beyond the lot or
    /// [`MOST_PIECES`].
    #[must_use]
    pub fn pieces_for(self, accept: u64, consumer: RiskPoint) -> Option<u64> {
        let keeps = |n: u64| self.accepts_bad(n, accept, consumer.fraction) <= consumer.risk;
        let most = self.most();
        let (mut low, mut high) = (accept, (2 * accept + 2).min(most));
        while !keeps(high) {
            if high >= most {
                return None;
            }
            low = high;
            high = (2 * high).min(most);
        }
        while high - low > 1 {
            let middle = low + (high - low) / 2;
            if keeps(middle) {
                high = middle;
            } else {
                low = middle;
            }
        }
        Some(high)
    }

    /// The largest acceptance number with which `pieces` keep the consumer's risk; `None` when not even zero does.
    #[must_use]
    pub fn consumer_number(self, pieces: u64, consumer: RiskPoint) -> Option<u64> {
        largest(pieces, |c| self.accepts_bad(pieces, c, consumer.fraction) <= consumer.risk)
    }

    /// The smallest acceptance number with which `pieces` keep the producer's risk.
    #[must_use]
    pub fn producer_number(self, pieces: u64, producer: RiskPoint) -> u64 {
        let fails = |c: u64| self.accepts_good(pieces, c, producer.fraction) < 1.0 - producer.risk;
        largest(pieces, fails).map_or(0, |c| c + 1)
    }
}

/// The largest c from 0 up to `pieces` for which `holds`, which holds up to some c and not beyond.
fn largest(pieces: u64, holds: impl Fn(u64) -> bool) -> Option<u64> {
    if !holds(0) {
        return None;
    }
    let (mut low, mut high) = (0, pieces + 1);
    while high - low > 1 {
        let middle = low + (high - low) / 2;
        if holds(middle) {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some(low)
}

/// A plan by attributes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct AttributePlan {
    /// Pieces to test.
    pub pieces: u64,
    /// Accept at most this many events.
    pub accept_at_most: u64,
}

/// The most pieces of a plan that is looked for (own judgement).
pub const MOST_PIECES: u64 = 1_000_000;

impl AttributePlan {
    /// The smallest plan that keeps both risks: for c = 0, 1, … the fewest pieces that keep the consumer's, until the
    /// producer's is kept as well. The producer's fraction is below the consumer's.
    ///
    /// # Errors
    /// [`StatisticsFault::PlanTooLarge`] where no such plan exists.
    pub fn between(
        population: Population,
        producer: RiskPoint,
        consumer: RiskPoint,
    ) -> Result<Self, StatisticsFault> {
        let too_large = StatisticsFault::PlanTooLarge { most: population.most() };
        for accept in 0..MOST_ACCEPTED {
            let pieces = population.pieces_for(accept, consumer).ok_or(too_large)?;
            if population.accepts_good(pieces, accept, producer.fraction) >= 1.0 - producer.risk {
                return Ok(Self { pieces, accept_at_most: accept });
            }
        }
        Err(too_large)
    }
}

/// Acceptance numbers looked through (own judgement).
const MOST_ACCEPTED: u64 = 2_000;

#[cfg(test)]
mod tests {
    use super::*;

    const PRODUCER: RiskPoint = RiskPoint { fraction: 0.01, risk: 0.05 };
    const CONSUMER: RiskPoint = RiskPoint { fraction: 0.06, risk: 0.1 };

    #[test]
    fn plans_keep_both_risks_and_one_piece_fewer_does_not() {
        for population in [Population::Stream, Population::Lot(800)] {
            let plan = AttributePlan::between(population, PRODUCER, CONSUMER).unwrap();
            let AttributePlan { pieces, accept_at_most } = plan;
            assert!(population.acceptance_probability(pieces, accept_at_most, 0.01) >= 0.95);
            assert!(population.acceptance_probability(pieces, accept_at_most, 0.06) <= 0.1);
            assert!(population.acceptance_probability(pieces - 1, accept_at_most, 0.06) > 0.1);
            assert_eq!(population.consumer_number(pieces, CONSUMER), Some(accept_at_most));
            assert!(population.producer_number(pieces, PRODUCER) <= accept_at_most);
        }
    }

    #[test]
    fn few_pieces_decide_nothing() {
        assert_eq!(Population::Stream.consumer_number(5, CONSUMER), None);
        assert_eq!(Population::Stream.producer_number(1, PRODUCER), 0);
        // A whole lot looked at is known.
        assert_eq!(Population::Lot(10).acceptance_probability(10, 0, 0.1), 0.0);
    }
}

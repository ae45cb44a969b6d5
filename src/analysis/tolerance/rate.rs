//! The share of trials that dribble: by counting, and by importance sampling where dribbling is rare.

use rayon::prelude::*;

use super::{
    Failure,
    spread::Drawn,
    trial::Trial,
    trials::{RARE_STREAM, Trials},
};
use crate::analysis::{
    statistics::{
        normal::{normal_quantile, quick_quantile},
        proportion,
        random::Sequence,
        rare::{Mixture, WeightedCount, probable_points},
    },
    watch::{Cancelled, Watch},
};

/// How the interval of a rate was found.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Interval {
    /// Wilson's: enough events.
    Wilson,
    /// Clopper and Pearson's: few events.
    ClopperPearson,
    /// One-sided, from no events at all.
    ZeroEvents,
    /// From weighted draws around the most probable points of dribbling.
    ImportanceSampling,
}

/// A share with its interval at the confidence of the question: sampling error only.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Rate {
    /// The share.
    pub value: f64,
    /// Low end.
    pub low: f64,
    /// High end.
    pub high: f64,
    /// How the interval was found.
    pub interval: Interval,
}

/// Below this share plain counting is helped by importance sampling.
const RARE: f64 = 100e-6;

/// With fewer events than this the exact interval is given (own judgement; Wilson's undercovers there).
const FEW_EVENTS: u64 = 20;

/// Weighted draws: enough for a standard error near 1 %.
const WEIGHTED_DRAWS: u64 = 100_000;

/// Shares of trials below any margin.
pub(super) struct Rates<'a> {
    pub(super) main: Rate,
    /// Whether counting and importance sampling contradict each other.
    pub(super) disagree: bool,
    margins: &'a [f64],
    weighted: Option<Weighted>,
}

impl<'a> Rates<'a> {
    pub(super) fn of(
        trials: &'a Trials,
        start: &Trial<'_>,
        drawn: &[Drawn],
        seed: u64,
        confidence: f64,
        watch: Watch<'_>,
    ) -> Result<Self, Failure> {
        let margins = trials.margins.as_slice();
        let events = count_below(margins, 0.0);
        let counted = counted(events, margins.len() as u64, confidence)?;
        let mut rates = Self { main: counted, disagree: false, margins, weighted: None };
        if counted.value >= RARE {
            return Ok(rates);
        }
        let Some(weighted) = Weighted::run(start, drawn, (seed, WEIGHTED_DRAWS), watch)? else {
            return Ok(rates);
        };
        let z = normal_quantile(0.5 * (1.0 + confidence));
        let count = weighted.below(0.0);
        let Some((low, high)) = count.interval(z) else { return Ok(rates) };
        // Far apart, beyond what chance does: a branch was missed. Both intervals at four standard errors.
        let wide = count.interval(4.0).unwrap_or((low, high));
        let exact = proportion::clopper_pearson(events, margins.len() as u64, 0.999_9)?;
        if wide.1 < exact.0 || wide.0 > exact.1 {
            rates.disagree = true;
            return Ok(rates);
        }
        rates.main = Rate { value: count.probability(), low, high, interval: Interval::ImportanceSampling };
        rates.weighted = Some(weighted);
        Ok(rates)
    }

    /// Share of trials with a margin below this.
    pub(super) fn below(&self, margin: f64) -> f64 {
        let counted = count_below(self.margins, margin) as f64 / self.margins.len() as f64;
        match &self.weighted {
            Some(weighted) if counted < RARE => weighted.below(margin).probability(),
            _ => counted,
        }
    }
}

fn count_below(margins: &[f64], margin: f64) -> u64 {
    margins.par_chunks(1 << 15).map(|chunk| chunk.iter().filter(|m| **m < margin).count() as u64).sum()
}

fn counted(events: u64, trials: u64, confidence: f64) -> Result<Rate, Failure> {
    let value = events as f64 / trials as f64;
    let ((low, high), interval) = if events == 0 {
        ((0.0, proportion::upper_bound(0, trials, confidence)?), Interval::ZeroEvents)
    } else if events < FEW_EVENTS || trials - events < FEW_EVENTS {
        (proportion::clopper_pearson(events, trials, confidence)?, Interval::ClopperPearson)
    } else {
        (proportion::wilson(events, trials, confidence), Interval::Wilson)
    };
    Ok(Rate { value, low, high, interval })
}

/// Draws around the most probable points of dribbling, with their weights.
struct Weighted {
    /// Margin and weight of every draw that made a case.
    draws: Vec<(f64, f64)>,
}

/// Draws worked on in one piece.
const AT_A_TIME: u64 = 4096;

impl Weighted {
    /// `None` where no such point is found.
    fn run(
        start: &Trial<'_>,
        drawn: &[Drawn],
        (seed, draws): (u64, u64),
        watch: Watch<'_>,
    ) -> Result<Option<Self>, Cancelled> {
        let inputs = drawn.len();
        let mut trial = start.clone();
        let mut values = vec![0.0; inputs];
        let mut limit_state = |u: &[f64]| {
            for ((value, drawn), z) in values.iter_mut().zip(drawn).zip(u) {
                *value = drawn.smooth_at_normal(*z);
            }
            trial.margin(&values)
        };
        let points = probable_points(&mut limit_state, inputs);
        if points.is_empty() {
            return Ok(None);
        }
        let mixture = Mixture::around(&points, inputs);
        let sequence = Sequence::new(seed, RARE_STREAM);
        let parts: Vec<Vec<(f64, f64)>> = (0..draws.div_ceil(AT_A_TIME))
            .into_par_iter()
            .map(|piece| {
                watch.look()?;
                let from = piece * AT_A_TIME;
                let to = (from + AT_A_TIME).min(draws);
                let mut numbers = sequence.from(from * (inputs as u64 + 1));
                let mut trial = start.clone();
                let (mut z, mut values) = (vec![0.0; inputs], vec![0.0; inputs]);
                let mut part = Vec::with_capacity((to - from) as usize);
                for _ in from..to {
                    let pick = numbers.next_open();
                    z.iter_mut().for_each(|x| *x = quick_quantile(numbers.next_open()));
                    let weight = mixture.draw(pick, &mut z);
                    for ((value, drawn), z) in values.iter_mut().zip(drawn).zip(&z) {
                        *value = drawn.at_normal(*z);
                    }
                    // What makes no case is no event; it is rarer than 1 % and told of.
                    part.push((trial.margin(&values).unwrap_or(f64::INFINITY), weight));
                }
                Ok(part)
            })
            .collect::<Result<_, Cancelled>>()?;
        Ok(Some(Self { draws: parts.concat() }))
    }

    fn below(&self, margin: f64) -> WeightedCount {
        let mut count = WeightedCount::default();
        for (m, weight) in &self.draws {
            count.add(*weight, *m < margin);
        }
        count
    }
}

#[cfg(test)]
mod tests {
    use std::sync::atomic::{AtomicBool, AtomicUsize};

    use super::*;
    use crate::{
        analysis::{
            field::Field,
            spec::Spec,
            statistics::normal::normal_cdf,
            tolerance::{Spread, trial::tests::measured},
        },
        physics::numerics::{Bracket, find_root},
    };

    /// A lip whose margin falls with the radius through zero somewhere above 0.5 mm, and the radius where it does.
    fn lip() -> (Spec, f64) {
        let base = Spec { radius_mm: 0.5, turn_deg: 125.0, slope_deg: 15.0, flow_ml_s: 60.0, ..measured() };
        let mut trial = Trial::new(&base, &[Field::EdgeRadius]).unwrap();
        let mut margin = |radius: f64| trial.margin(&[radius]).unwrap();
        let bracket = Bracket { low: (0.05, margin(0.05)), high: (20.0, margin(20.0)) };
        let critical = find_root(margin, bracket, 1e-13).unwrap();
        (base, critical)
    }

    fn watched<T>(run: impl FnOnce(Watch<'_>) -> T) -> T {
        run(Watch { done: &AtomicUsize::new(0), cancelled: &AtomicBool::new(false) })
    }

    /// Counts how often an interval holds the exact rate of a normal spread whose rate is known: the lip dribbles beyond
    /// the critical radius.
    fn coverage(rate: f64, mut interval: impl FnMut(&Trial<'_>, &[Drawn], u64) -> (f64, f64)) -> u64 {
        let (base, critical) = lip();
        let sd = 0.02 * critical;
        let spread = Spread::Normal { mean: critical + sd * normal_quantile(rate), sd };
        let drawn = [Drawn::new(&spread, &Field::EdgeRadius.quantity()).unwrap()];
        let exact = normal_cdf(-(critical - spread.mean()) / sd);
        assert!((exact / rate - 1.0).abs() < 1e-9);
        let start = Trial::new(&base, &[Field::EdgeRadius]).unwrap();
        (1..=SEEDS)
            .filter(|seed| {
                let (low, high) = interval(&start, &drawn, *seed);
                low <= rate && rate <= high
            })
            .count() as u64
    }

    const SEEDS: u64 = 300;

    /// 95 % intervals hold the truth as often as they say, within three and a half binomial standard deviations; exact ones may
    /// hold it more often.
    #[test]
    fn counted_intervals_cover() {
        let spread = (0.95 * 0.05 * SEEDS as f64).sqrt();
        for (rate, trials, exact) in [(0.03, 2000, false), (0.004, 2000, true), (0.0005, 2000, true)] {
            let hits = coverage(rate, |start, drawn, seed| {
                let trials = watched(|watch| Trials::run(start, drawn, trials, seed, watch)).unwrap();
                let margins = &trials.margins;
                let rate = counted(count_below(margins, 0.0), margins.len() as u64, 0.95).unwrap();
                (rate.low, rate.high)
            }) as f64;
            let expected = 0.95 * SEEDS as f64;
            assert!(hits > expected - 3.5 * spread, "{rate} {hits}");
            assert!(exact || hits < expected + 3.5 * spread, "{rate} {hits}");
        }
    }

    #[test]
    fn intervals_of_rare_rates_cover() {
        let spread = (0.95 * 0.05 * SEEDS as f64).sqrt();
        for rate in [3e-5, 1e-7] {
            let hits = coverage(rate, |start, drawn, seed| {
                let found =
                    watched(|watch| Weighted::run(start, drawn, (seed, 2000), watch)).unwrap().unwrap();
                found.below(0.0).interval(1.96).unwrap()
            }) as f64;
            assert!((hits - 0.95 * SEEDS as f64).abs() < 3.5 * spread, "{rate} {hits}");
        }
    }
}

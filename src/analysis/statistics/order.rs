//! What a sample says of a limit without any distribution: by its order statistics alone.

use rayon::prelude::*;

use super::{StatisticsFault, proportion};

/// Exact upper bound, at `confidence`, of the fraction beyond a limit when `beyond` of `pieces` values are: no
/// distribution is assumed (Clopper & Pearson).
///
/// # Errors
/// [`StatisticsFault::NotConverged`], which no accepted input is known to cause.
pub fn fraction_beyond_high(beyond: u64, pieces: u64, confidence: f64) -> Result<f64, StatisticsFault> {
    proportion::upper_bound(beyond, pieces, confidence)
}

/// The value with `probability` of a sorted sample below it: linear between the order statistics, the i-th of n (from
/// 0) standing at i/(n − 1) (definition 7 of Hyndman & Fan 1996, doi 10.1080/00031305.1996.10473566).
#[must_use]
pub fn quantile_of_sorted(sorted: &[f64], probability: f64) -> Option<f64> {
    let last = sorted.len().checked_sub(1)?;
    let place = probability.clamp(0.0, 1.0) * last as f64;
    let below = (place.floor() as usize).min(last);
    let above = (below + 1).min(last);
    Some(sorted[below] + (place - below as f64) * (sorted[above] - sorted[below]))
}

/// The least and the largest value; infinite the wrong way round for none.
#[must_use]
pub fn extremes(values: &[f64]) -> (f64, f64) {
    let wider = |(l, h): (f64, f64), (a, b): (f64, f64)| (l.min(a), h.max(b));
    let none = (f64::INFINITY, f64::NEG_INFINITY);
    values
        .par_chunks(AT_A_TIME)
        .map(|chunk| {
            chunk.iter().fold(none, |(l, h), x| (if *x < l { *x } else { l }, if *x > h { *x } else { h }))
        })
        .reduce(|| none, wider)
}

/// Values looked at in one piece; no result depends on it.
const AT_A_TIME: usize = 1 << 15;

/// Bins of the first look at a large sample.
const BINS: usize = 4096;

/// The values with these probabilities of an unsorted sample below them, as [`quantile_of_sorted`] gives them, without
/// sorting all of it: the values are counted in bins, and only the bins that hold a quantile are sorted. Empty for a
/// sample that is empty or not finite.
#[must_use]
pub fn quantiles(values: &[f64], probabilities: &[f64]) -> Vec<f64> {
    let (low, high) =
        values.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), x| (x.min(l), x.max(h)));
    let scale = BINS as f64 / (high - low);
    if !(low.is_finite() && high.is_finite()) {
        return Vec::new();
    }
    if low == high || !scale.is_finite() {
        let mut sorted = values.to_vec();
        sorted.sort_by(f64::total_cmp);
        return probabilities.iter().filter_map(|p| quantile_of_sorted(&sorted, *p)).collect();
    }
    let bin = |x: f64| (((x - low) * scale) as usize).min(BINS - 1);
    let counts = values
        .par_chunks(AT_A_TIME)
        .fold(
            || vec![0_usize; BINS],
            |mut counts, chunk| {
                for x in chunk {
                    counts[bin(*x)] += 1;
                }
                counts
            },
        )
        .reduce(
            || vec![0; BINS],
            |mut a, b| {
                a.iter_mut().zip(b).for_each(|(a, b)| *a += b);
                a
            },
        );
    let mut first_ranks = Vec::with_capacity(BINS);
    let mut total = 0;
    for count in &counts {
        first_ranks.push(total);
        total += count;
    }
    let bin_of_rank = |rank: usize| first_ranks.partition_point(|first| *first <= rank) - 1;
    let last = values.len() - 1;
    let places: Vec<(usize, usize, f64)> = probabilities
        .iter()
        .map(|p| {
            let place = p.clamp(0.0, 1.0) * last as f64;
            let below = (place.floor() as usize).min(last);
            (below, (below + 1).min(last), place - below as f64)
        })
        .collect();
    let mut kept: Vec<Option<Vec<f64>>> = vec![None; BINS];
    for (below, above, _) in &places {
        for rank in [*below, *above] {
            kept[bin_of_rank(rank)].get_or_insert_default();
        }
    }
    let wanted: Vec<bool> = kept.iter().map(Option::is_some).collect();
    let found: Vec<Vec<f64>> = values
        .par_chunks(AT_A_TIME)
        .map(|chunk| chunk.iter().copied().filter(|x| wanted[bin(*x)]).collect())
        .collect();
    for x in found.into_iter().flatten() {
        if let Some(bin) = &mut kept[bin(x)] {
            bin.push(x);
        }
    }
    for bin in kept.iter_mut().flatten() {
        bin.sort_by(f64::total_cmp);
    }
    let value = |rank: usize| {
        let bin = bin_of_rank(rank);
        kept[bin].as_ref().map_or(f64::NAN, |values| values[rank - first_ranks[bin]])
    };
    places
        .iter()
        .map(|(below, above, share)| value(*below) + share * (value(*above) - value(*below)))
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn quantiles_of_a_large_sample_are_those_of_the_sorted_one() {
        let mut numbers = super::super::random::Sequence::new(3, 0).from(0);
        for count in [1, 2, 3, 10, 1000, 50_000] {
            let values: Vec<f64> = (0..count).map(|_| libm::tan(3.1 * (numbers.next_open() - 0.5))).collect();
            let probabilities = [0.0, 1e-3, 0.25, 0.5, 0.9, 0.999, 1.0];
            let mut sorted = values.clone();
            sorted.sort_by(f64::total_cmp);
            let plain: Vec<f64> =
                probabilities.iter().map(|p| quantile_of_sorted(&sorted, *p).unwrap()).collect();
            assert_eq!(quantiles(&values, &probabilities), plain);
        }
        assert_eq!(quantiles(&[2.0; 9], &[0.1, 0.9]), [2.0, 2.0]);
        assert!(quantiles(&[], &[0.5]).is_empty());
    }

    #[test]
    fn quantiles_between_order_statistics() {
        assert_eq!(quantile_of_sorted(&[], 0.5), None);
        assert_eq!(quantile_of_sorted(&[4.0], 0.9), Some(4.0));
        assert_eq!(quantile_of_sorted(&[1.0, 2.0, 4.0], 0.75), Some(3.0));
        assert_eq!(quantile_of_sorted(&[1.0, 2.0, 4.0], 1.0), Some(4.0));
    }
}

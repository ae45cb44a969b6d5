//! Sobol' indices: which input drives the variance of a result.
//!
//! First order by Saltelli et al. 2010 (doi 10.1016/j.cpc.2009.09.018, table 2 b), total by Jansen 1999 (doi
//! 10.1016/S0010-4655(98)00154-4, table 2 f): N(d + 2) runs on Owen-scrambled Sobol' points. Independent scrambles give
//! the standard error; rules for random points do not hold on such points.

use rayon::prelude::*;

/// Indices of one input, each with its standard error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Index {
    /// Share of the variance that goes when this input is held: S_i.
    pub first_order: f64,
    /// Standard error of the first-order index.
    pub first_order_error: f64,
    /// Share of the variance that is left when all others are held: S_Ti, interactions included.
    pub total: f64,
    /// Standard error of the total index.
    pub total_error: f64,
}

/// How the indices are computed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Design {
    /// N, base points over all scrambles; a multiple of [`SCRAMBLES`].
    pub points: u32,
    /// Seed of the scrambles.
    pub seed: u32,
}

/// Independent scrambles: enough for a standard error (16 at least; own judgement).
pub const SCRAMBLES: u32 = 16;

/// The most inputs; two coordinates are used for each.
pub const MOST_INPUTS: usize = 64;

/// Runs worked on in one piece.
const AT_A_TIME: u32 = 256;

/// A function of the unit cube, for many points at a time.
pub trait Function {
    /// Turns coordinates of this input (above 0, below 1) into its values, in place.
    fn place(&mut self, input: usize, coordinates: &mut [f64]);

    /// The results for values that stand in columns, one for each input; NaN where there is none.
    fn results(&mut self, columns: &[Vec<f64>], results: &mut [f64]);
}

/// Indices of the `inputs` of a function; `make` makes one for each piece of work. Points where it has no result are left
/// out with all their runs. `runs` is told of runs done and says whether to go on.
///
/// `None` when stopped, when the function does not vary, or when fewer than two points are left in a scramble.
pub fn indices<F: Function>(
    inputs: usize,
    design: Design,
    make: impl Fn() -> F + Sync,
    runs: impl Fn(u64) -> bool + Sync,
) -> Option<Vec<Index>> {
    let each = design.points / SCRAMBLES;
    let pieces: Vec<(u32, u32)> = (0..SCRAMBLES)
        .flat_map(|scramble| (0..each).step_by(AT_A_TIME as usize).map(move |from| (scramble, from)))
        .collect();
    let blocks: Vec<Option<Block>> = pieces
        .par_iter()
        .map(|&(scramble, from)| {
            let seed = design.seed.wrapping_mul(SCRAMBLES).wrapping_add(scramble);
            let points = from..(from + AT_A_TIME).min(each);
            let count = u64::from(points.end - points.start);
            let block = Block::run(inputs, seed, points, &mut make());
            runs(count * (inputs as u64 + 2)).then_some(block)
        })
        .collect();
    let blocks = blocks.into_iter().collect::<Option<Vec<_>>>()?;
    // The mean of all runs serves every scramble, so that large means cost no digits.
    let mut shares = Vec::with_capacity(SCRAMBLES as usize);
    for scramble in 0..SCRAMBLES {
        let of_scramble =
            blocks.iter().zip(&pieces).filter(|(_, piece)| piece.0 == scramble).map(|(block, _)| block);
        shares.push(scramble_shares(inputs, &of_scramble)?);
    }
    Some((0..inputs).map(|i| summary(&shares.iter().map(|s| s[i]))).collect())
}

/// Results at the points of one piece: at A, at B, and at A with input i from B, input by input.
struct Block {
    a: Vec<f64>,
    b: Vec<f64>,
    mixed: Vec<f64>,
}

impl Block {
    fn run(inputs: usize, seed: u32, points: core::ops::Range<u32>, function: &mut impl Function) -> Self {
        let count = points.len();
        let mut columns = |from: usize| -> Vec<Vec<f64>> {
            (0..inputs)
                .map(|i| {
                    // f32 numbers in [0, 1): the middle of their cells is above 0.
                    let coordinate = |point: u32| {
                        f64::from(sobol_burley::sample(point, (from + i) as u32, seed)) + HALF_CELL
                    };
                    let mut column: Vec<f64> = points.clone().map(coordinate).collect();
                    function.place(i, &mut column);
                    column
                })
                .collect()
        };
        let (mut at_a, mut at_b) = (columns(0), columns(inputs));
        let mut all = vec![vec![0.0; count]; inputs + 2];
        function.results(&at_a, &mut all[0]);
        function.results(&at_b, &mut all[1]);
        for i in 0..inputs {
            core::mem::swap(&mut at_a[i], &mut at_b[i]);
            function.results(&at_a, &mut all[i + 2]);
            core::mem::swap(&mut at_a[i], &mut at_b[i]);
        }
        let mut block = Self { a: Vec::new(), b: Vec::new(), mixed: Vec::new() };
        for point in (0..count).filter(|point| all.iter().all(|results| !results[*point].is_nan())) {
            block.a.push(all[0][point]);
            block.b.push(all[1][point]);
            block.mixed.extend(all[2..].iter().map(|results| results[point]));
        }
        block
    }
}

/// Half of 2⁻²⁴, the spacing of the points' coordinates.
const HALF_CELL: f64 = 1.0 / (1_u32 << 25) as f64;

/// First-order and total share of every input over one scramble.
fn scramble_shares<'a>(
    inputs: usize,
    blocks: &(impl Iterator<Item = &'a Block> + Clone),
) -> Option<Vec<(f64, f64)>> {
    let values = || blocks.clone().flat_map(|block| block.a.iter().chain(&block.b));
    let count = values().count() as f64;
    if count < 4.0 {
        return None;
    }
    let mean = values().sum::<f64>() / count;
    let variance = values().map(|x| (x - mean) * (x - mean)).sum::<f64>() / count;
    // A result that does not move beyond rounding has no variance to share out.
    if variance.is_nan() || variance <= 1e-26 * (1.0 + mean * mean) {
        return None;
    }
    let mut sums = vec![(0.0, 0.0); inputs];
    for block in blocks.clone() {
        for ((a, b), mixed) in block.a.iter().zip(&block.b).zip(block.mixed.chunks_exact(inputs)) {
            for (sum, value) in sums.iter_mut().zip(mixed) {
                sum.0 += (b - mean) * (value - a);
                sum.1 += (a - value) * (a - value);
            }
        }
    }
    let points = 0.5 * count;
    Some(sums.iter().map(|s| (s.0 / points / variance, 0.5 * s.1 / points / variance)).collect())
}

/// Mean and standard error over the scrambles.
fn summary(shares: &(impl Iterator<Item = (f64, f64)> + Clone)) -> Index {
    let n = f64::from(SCRAMBLES);
    let of = |pick: fn(&(f64, f64)) -> f64| {
        let mean = shares.clone().map(|s| pick(&s)).sum::<f64>() / n;
        let squares = shares.clone().map(|s| pick(&s) - mean).map(|d| d * d).sum::<f64>();
        (mean, (squares / (n - 1.0) / n).sqrt())
    };
    let ((first_order, first_order_error), (total, total_error)) = (of(|s| s.0), of(|s| s.1));
    Index { first_order, first_order_error, total, total_error }
}

#[cfg(test)]
mod tests {
    use super::*;

    struct Plain<F>(F);

    impl<F: Fn(&[f64]) -> Option<f64>> Function for Plain<F> {
        fn place(&mut self, _: usize, _: &mut [f64]) {}

        fn results(&mut self, columns: &[Vec<f64>], results: &mut [f64]) {
            for (i, result) in results.iter_mut().enumerate() {
                let point: Vec<f64> = columns.iter().map(|c| c[i]).collect();
                *result = (self.0)(&point).unwrap_or(f64::NAN);
            }
        }
    }

    const DESIGN: Design = Design { points: 8192, seed: 1 };

    #[test]
    fn a_sum_has_no_interactions_and_a_product_has() {
        let sum = indices(2, DESIGN, || Plain(|u: &[f64]| Some(1e6 + u[0] + 2.0 * u[1])), |_| true).unwrap();
        assert!((sum[0].first_order - 0.2).abs() < 0.01 && (sum[0].total - 0.2).abs() < 0.01, "{sum:?}");
        assert!((sum[1].first_order - 0.8).abs() < 0.01 && (sum[1].total - 0.8).abs() < 0.01);
        // (u − ½)(v − ½): interaction only.
        let product =
            indices(2, DESIGN, || Plain(|u: &[f64]| Some((u[0] - 0.5) * (u[1] - 0.5))), |_| true).unwrap();
        assert!(product[0].first_order.abs() < 0.02 && (product[0].total - 1.0).abs() < 0.05, "{product:?}");
    }

    #[test]
    fn nothing_to_share_out() {
        assert_eq!(indices(2, DESIGN, || Plain(|_: &[f64]| Some(3.0)), |_| true), None);
        assert_eq!(indices(2, DESIGN, || Plain(|_: &[f64]| None), |_| true), None);
        assert_eq!(indices(1, DESIGN, || Plain(|u: &[f64]| Some(u[0])), |_| false), None);
    }

    #[test]
    fn points_without_result_are_left_out() {
        let some =
            indices(2, DESIGN, || Plain(|u: &[f64]| (u[0] > 0.005).then(|| u[0] + u[1])), |_| true).unwrap();
        assert!((some[0].total - 0.5).abs() < 0.03, "{some:?}");
    }
}

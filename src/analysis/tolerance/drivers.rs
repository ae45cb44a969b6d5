//! Which input drives the variance of the margin.

use super::{spread::Drawn, trial::Trial};
use crate::analysis::{
    statistics::indices::{self, Design, Index},
    watch::{Cancelled, Watch},
};

pub use crate::analysis::statistics::indices::MOST_INPUTS;

/// Base points of the indices, N: N(d + 2) runs.
pub const INDEX_POINTS: u32 = 16_384;

/// The indices of the inputs; `None` when the margin does not vary.
pub(super) fn drivers(
    start: &Trial<'_>,
    drawn: &[Drawn],
    seed: u64,
    watch: Watch<'_>,
) -> Result<Option<Vec<Index>>, Cancelled> {
    // Both halves of the seed count.
    let design = Design { points: INDEX_POINTS, seed: (seed ^ (seed >> 32)) as u32 };
    let make = || {
        let mut trial = start.clone();
        let mut values = vec![0.0; drawn.len()];
        move |u: &[f64]| {
            for ((value, drawn), u) in values.iter_mut().zip(drawn).zip(u) {
                *value = drawn.at(*u);
            }
            trial.margin(&values)
        }
    };
    let found = indices::indices(drawn.len(), design, make, |runs| watch.advance(runs as usize));
    watch.look()?;
    Ok(found)
}

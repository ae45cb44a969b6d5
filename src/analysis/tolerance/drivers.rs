//! Which input drives the variance of the margin.

use super::{spread::Drawn, trial::Trial};
use crate::analysis::{
    statistics::indices::{self, Design, Function, Index},
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
    let make = || Margins { trial: start.clone(), drawn };
    let found = indices::indices(drawn.len(), design, make, |runs| watch.advance(runs as usize));
    watch.look()?;
    Ok(found)
}

/// The margin as a function of the unit cube.
struct Margins<'a> {
    trial: Trial<'a>,
    drawn: &'a [Drawn],
}

impl Function for Margins<'_> {
    fn place(&mut self, input: usize, coordinates: &mut [f64]) {
        self.drawn[input].fill(self.trial.arch(), coordinates);
    }

    fn results(&mut self, columns: &[Vec<f64>], results: &mut [f64]) {
        self.trial.margins(columns, results);
    }
}

//! Sweeps: one question at many points, over one to four of its fields.
//!
//! This is the twin of [`decide`](super::decision::decide) for many cases at once. It computes nothing of its own: every layer of a decision comes
//! from the same functions ([`Approach`](super::balance::Approach), [`StreamSlopes`](super::balance::StreamSlopes),
//! [`judge`]), but once for each distinct combination of the fields that it depends on. A test holds both equal
//! point by point.

mod axis;
mod block;
mod lanes;
mod layers;
mod output;
mod picture;
mod point;

use std::{
    cell::OnceCell,
    ops::Range,
    sync::atomic::{AtomicBool, Ordering},
};

use rayon::prelude::*;

pub use axis::{Axis, MOST_AXES, Values};
pub use block::{Block, Column, Faults};
pub use output::Output;
pub use picture::{PictureAxis, PicturePoint, PictureTable};

use self::{
    lanes::{Given, Judged, LANES, Step},
    layers::{Desk, Ground, Layers, Places},
    point::Point,
};
use super::{case::Confidence, decision::judge, doubt::EdgeDoubt, spec::Spec};

/// Points computed in one go. Neither results nor their order depend on it.
pub const CHUNK: usize = 1 << 14;

/// Points between two looks at whether the work is still wanted.
const LOOK_EVERY: usize = LANES;

/// The work was given up because nobody wants it any more.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[error("the work was cancelled")]
pub struct Cancelled;

/// Points side by side, and the vector instructions that this machine has.
#[derive(Default)]
struct Lanes {
    arch: pulp::Arch,
    given: Given,
    judged: Judged,
}

/// One question at many points. The first axis is the slowest.
#[derive(Debug)]
pub struct Sweep {
    ground: Ground,
    layers: Layers,
    confidence: Confidence,
    rows: usize,
}

impl Sweep {
    /// Prepares a sweep of `base` over `axes`, of which there must be one to four; each field must be one that the base has. Values are taken as
    /// they are: their ranges are checked where they come from.
    ///
    /// # Errors
    /// [`Cancelled`] once the flag is set.
    pub fn new(base: Spec, axes: Vec<Axis>, cancelled: &AtomicBool) -> Result<Self, Cancelled> {
        let rows = axes.iter().map(Axis::len).fold(1, usize::saturating_mul);
        let ground = Ground { base, axes };
        let layers = Layers::new(&ground, rows, cancelled)?;
        Ok(Self { layers, confidence: Confidence::at(base.confidence), rows, ground })
    }

    /// How many points there are.
    #[must_use]
    pub const fn rows(&self) -> usize {
        self.rows
    }

    /// The axes, slowest first.
    #[must_use]
    pub fn axes(&self) -> &[Axis] {
        &self.ground.axes
    }

    /// The points `rows`, on this thread.
    ///
    /// # Errors
    /// [`Cancelled`] once the flag is set.
    pub fn chunk(
        &self,
        rows: Range<usize>,
        outputs: &[Output],
        cancelled: &AtomicBool,
    ) -> Result<Block, Cancelled> {
        let axes = &self.ground.axes;
        let mut block = Block::new(axes.len(), outputs, rows.len());
        let fastest = axes.len().saturating_sub(1);
        let length = axes.last().map_or(1, Axis::len);
        let mut desk = Desk::default();
        let side_by_side = outputs.iter().all(|output| output.is_of_judgement());
        let side_by_side = side_by_side && self.ground.base.calibration.is_none();
        let mut lanes = side_by_side.then(Lanes::default);
        let mut row = rows.start;
        while row < rows.end {
            if cancelled.load(Ordering::Relaxed) {
                return Err(Cancelled);
            }
            let places = self.places(row);
            let run = (length - places[fastest]).min(rows.end - row).min(LOOK_EVERY);
            self.run(places, fastest, run, outputs, (&mut desk, lanes.as_mut()), &mut block);
            row += run;
        }
        Ok(block)
    }

    /// All the points `rows`, on all threads of the current pool.
    ///
    /// # Errors
    /// [`Cancelled`] once the flag is set.
    pub fn block(
        &self,
        rows: Range<usize>,
        outputs: &[Output],
        cancelled: &AtomicBool,
    ) -> Result<Block, Cancelled> {
        let starts: Vec<usize> = rows.clone().step_by(CHUNK).collect();
        let chunks = starts
            .into_par_iter()
            .map(|start| self.chunk(start..(start + CHUNK).min(rows.end), outputs, cancelled))
            .collect::<Result<Vec<Block>, Cancelled>>()?;
        let mut whole = Block::new(self.ground.axes.len(), outputs, rows.len());
        for chunk in chunks {
            whole.append(chunk);
        }
        Ok(whole)
    }

    /// The values of one axis at the points `rows`.
    #[must_use]
    pub fn axis_values(&self, axis: usize, rows: Range<usize>) -> Vec<f64> {
        let Some(values) = self.ground.axes.get(axis) else { return Vec::new() };
        rows.map(|row| values.at(self.places(row)[axis])).collect()
    }

    fn places(&self, row: usize) -> Places {
        let mut places = [0; MOST_AXES];
        let mut rest = row;
        for (place, axis) in places.iter_mut().zip(&self.ground.axes).rev() {
            *place = rest % axis.len();
            rest /= axis.len();
        }
        places
    }

    /// `run` points along the fastest axis.
    fn run(
        &self,
        mut places: Places,
        fastest: usize,
        run: usize,
        outputs: &[Output],
        (desk, lanes): (&mut Desk, Option<&mut Lanes>),
        block: &mut Block,
    ) {
        let Self { ground, layers, confidence, .. } = self;
        let first = places[fastest];
        for (i, (axis, values)) in ground.axes.iter().zip(&mut block.axes).enumerate() {
            if i == fastest {
                values.extend((first..first + run).map(|place| axis.at(place)));
            } else {
                values.resize(values.len() + run, axis.at(places[i]));
            }
        }
        let mut keys = layers.keys(&places);
        let steps = layers.steps(fastest);
        let set = ground.base.coefficients;
        if let Some(Lanes { arch, given, judged }) = lanes {
            layers.make_still(ground, desk, &places, (&keys, &steps));
            if let Some(condition) = layers.fill(given, desk, (&keys, &steps), run) {
                let doubt = condition.doubt;
                arch.dispatch(Step { set, confidence: confidence.level, doubt, given, judged });
                block.push_lanes(outputs, (given.weber(), judged), *confidence, run);
                return;
            }
        }
        for step in 0..run {
            places[fastest] = first + step;
            match layers.parts(ground, desk, &places, &keys) {
                Ok(parts) => {
                    let judged = judge(
                        set,
                        ground.base.calibration.as_ref(),
                        confidence.level,
                        &(&parts.stream.approach).into(),
                        (&parts.edge.edge, &parts.rim.rim),
                        (
                            &parts.condition.doubt,
                            EdgeDoubt { turn: parts.edge.doubt, radius: parts.rim.doubt },
                            &parts.stream.doubt,
                        ),
                    );
                    let point = Point {
                        parts,
                        judged,
                        two_sided: confidence.two_sided,
                        spec: &|| ground.spec(&places),
                        flows: OnceCell::new(),
                    };
                    block.push(outputs, &point);
                }
                Err(code) => block.push_fault(code),
            }
            keys.advance(&steps);
        }
    }
}

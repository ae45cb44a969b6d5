//! What a picture of a sweep is drawn from: the whole table of a sweep of one or two axes, and the point that the base stands for.

use std::sync::atomic::AtomicBool;

use super::{Block, Cancelled, Column, Output, Sweep};
use crate::analysis::{
    decision::{Decision, Verdict, decide},
    field::Field,
};

/// A sweep's table as pictures need it. Every column has one entry for each combination of the axes, the first axis slowest.
#[derive(Debug, Clone)]
pub struct PictureTable {
    /// The axes, with their values in the fields' units.
    pub axes: Vec<PictureAxis>,
    /// Safety factor; NaN at a point that is impossible.
    pub safety_factor: Vec<f64>,
    /// Low end of its interval.
    pub low: Vec<f64>,
    /// High end of its interval.
    pub high: Vec<f64>,
    /// Dribble probability.
    pub dribble_probability: Vec<f64>,
    /// Verdicts; none at a point that is impossible.
    pub verdicts: Vec<Option<Verdict>>,
    /// Confidence of verdicts and intervals.
    pub confidence: f64,
    /// The base itself, where it gives every field of the axes and is possible: to be marked where it lies within them.
    pub asked: Option<PicturePoint>,
}

/// An axis of a picture.
#[derive(Debug, Clone, PartialEq)]
pub struct PictureAxis {
    /// The field.
    pub field: Field,
    /// Its values.
    pub values: Vec<f64>,
    /// Whether they lie evenly in their logarithm.
    pub is_logarithmic: bool,
}

/// The point that the base stands for.
#[derive(Debug, Clone)]
pub struct PicturePoint {
    /// Its values of the axes, in their order.
    pub at: Vec<f64>,
    /// Its decision.
    pub decision: Decision,
}

impl Sweep {
    /// The whole table as pictures need it. Memory grows with it: whoever asks bounds the number of points.
    ///
    /// # Errors
    /// [`Cancelled`] once the flag is set.
    pub fn picture_table(&self, cancelled: &AtomicBool) -> Result<PictureTable, Cancelled> {
        const OUTPUTS: [Output; 5] = [
            Output::SafetyFactor,
            Output::SafetyFactorLow,
            Output::SafetyFactorHigh,
            Output::DribbleProbability,
            Output::Verdict,
        ];
        let Block { columns, .. } = self.block(0..self.rows(), &OUTPUTS, cancelled)?;
        let mut columns = columns.into_iter();
        let mut numbers = || match columns.next() {
            Some(Column::Numbers(numbers)) => numbers,
            Some(Column::Words(_)) | None => Vec::new(),
        };
        let [safety_factor, low, high, dribble_probability] = [numbers(), numbers(), numbers(), numbers()];
        let verdicts = match columns.next() {
            Some(Column::Words(words)) => {
                words.into_iter().map(|word| word.and_then(Verdict::named)).collect()
            }
            Some(Column::Numbers(_)) | None => Vec::new(),
        };
        let axes = self.axes().iter().map(|axis| PictureAxis {
            field: axis.field(),
            values: (0..axis.len()).map(|place| axis.at(place)).collect(),
            is_logarithmic: axis.is_logarithmic(),
        });
        let base = &self.ground.base;
        let at: Option<Vec<f64>> = self.axes().iter().map(|axis| axis.field().get(base)).collect();
        let decided = || decide(&base.resolve().ok()?.case).ok();
        let asked = at.and_then(|at| Some(PicturePoint { at, decision: decided()? }));
        Ok(PictureTable {
            axes: axes.collect(),
            safety_factor,
            low,
            high,
            dribble_probability,
            verdicts,
            confidence: self.confidence.level,
            asked,
        })
    }
}

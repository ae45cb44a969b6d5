//! Results of neighbouring points, column by column.

use super::{
    axis::MOST_AXES,
    lanes::{Judged, Lane},
    output::Output,
    point::Point,
};
use crate::{
    analysis::{case::Confidence, decision::verdict},
    physics::separation::numbers::FREE_SHEET_WEBER,
};

/// One output of neighbouring points.
#[derive(Debug, Clone, PartialEq)]
pub enum Column {
    /// Numbers; NaN where there is none.
    Numbers(Vec<f64>),
    /// Words.
    Words(Vec<Option<&'static str>>),
}

impl Column {
    /// An empty column for this output.
    #[must_use]
    pub fn of(output: Output, capacity: usize) -> Self {
        if output.is_word() {
            Self::Words(Vec::with_capacity(capacity))
        } else {
            Self::Numbers(Vec::with_capacity(capacity))
        }
    }
}

/// The codes of the first faults of neighbouring points.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Faults {
    rows: usize,
    /// Empty until there is one.
    codes: Vec<Option<&'static str>>,
}

impl Faults {
    /// How many points.
    #[must_use]
    pub const fn rows(&self) -> usize {
        self.rows
    }

    /// The codes, one for each point; none of them if no point is impossible.
    #[must_use]
    pub fn codes(&self) -> Option<&[Option<&'static str>]> {
        (!self.codes.is_empty()).then_some(&self.codes)
    }

    /// Why this point is impossible, if it is.
    #[must_use]
    pub fn at(&self, row: usize) -> Option<&'static str> {
        self.codes.get(row).copied().flatten()
    }

    fn none(&mut self, rows: usize) {
        self.rows += rows;
        if !self.codes.is_empty() {
            self.codes.resize(self.rows, None);
        }
    }

    fn push(&mut self, code: &'static str) {
        self.codes.resize(self.rows, None);
        self.codes.push(Some(code));
        self.rows += 1;
    }

    fn append(&mut self, other: Self) {
        if other.codes.is_empty() {
            self.none(other.rows);
        } else {
            self.codes.resize(self.rows, None);
            self.codes.extend(other.codes);
            self.rows += other.rows;
        }
    }
}

/// Results of neighbouring points, in the order of the rows.
#[derive(Debug, Clone, PartialEq)]
pub struct Block {
    /// Values of the axes, in the order of the axes and in the fields' units.
    pub axes: Vec<Vec<f64>>,
    /// The outputs asked for, in their order.
    pub columns: Vec<Column>,
    /// Why a point is impossible.
    pub faults: Faults,
}

impl Block {
    pub(super) fn new(axes: usize, outputs: &[Output], capacity: usize) -> Self {
        Self {
            axes: (0..axes.min(MOST_AXES)).map(|_| Vec::with_capacity(capacity)).collect(),
            columns: outputs.iter().map(|output| Column::of(*output, capacity)).collect(),
            faults: Faults::default(),
        }
    }

    /// How many points.
    #[must_use]
    pub const fn len(&self) -> usize {
        self.faults.rows()
    }

    /// Whether there are none.
    #[must_use]
    pub const fn is_empty(&self) -> bool {
        self.faults.rows() == 0
    }

    /// Adds the outputs of a point.
    #[inline]
    pub(super) fn push(&mut self, outputs: &[Output], point: &Point<'_>) {
        for (column, output) in self.columns.iter_mut().zip(outputs) {
            match column {
                Column::Numbers(numbers) => numbers.push(output.number(point)),
                Column::Words(words) => words.push(output.word(point)),
            }
        }
        self.faults.none(1);
    }

    /// Adds `run` points that were judged side by side.
    pub(super) fn push_lanes(
        &mut self,
        outputs: &[Output],
        (weber, judged): (&Lane, &Judged),
        confidence: Confidence,
        run: usize,
    ) {
        for (column, output) in self.columns.iter_mut().zip(outputs) {
            match column {
                Column::Numbers(numbers) => output.lane(weber, judged, confidence.two_sided, numbers, run),
                Column::Words(words) => {
                    let probabilities = judged.dribble_probability.iter().zip(weber).take(run);
                    words.extend(probabilities.map(|(p, weber)| {
                        Some(verdict(*p, confidence.level, *weber >= FREE_SHEET_WEBER).as_str())
                    }));
                }
            }
        }
        self.faults.none(run);
    }

    /// Adds a point that is impossible.
    pub(super) fn push_fault(&mut self, code: &'static str) {
        for column in &mut self.columns {
            match column {
                Column::Numbers(numbers) => numbers.push(f64::NAN),
                Column::Words(words) => words.push(None),
            }
        }
        self.faults.push(code);
    }

    /// Adds the points of another block with the same columns.
    pub(super) fn append(&mut self, other: Self) {
        for (mine, theirs) in self.axes.iter_mut().zip(other.axes) {
            mine.extend(theirs);
        }
        for (mine, theirs) in self.columns.iter_mut().zip(other.columns) {
            match (mine, theirs) {
                (Column::Numbers(mine), Column::Numbers(theirs)) => mine.extend(theirs),
                (Column::Words(mine), Column::Words(theirs)) => mine.extend(theirs),
                _ => {}
            }
        }
        self.faults.append(other.faults);
    }
}

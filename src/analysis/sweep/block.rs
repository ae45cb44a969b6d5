//! Results of neighbouring points, column by column.

use super::{axis::MOST_AXES, output::Output, point::Point};

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

/// Results of neighbouring points, in the order of the rows.
#[derive(Debug, Clone, PartialEq)]
pub struct Block {
    /// Values of the axes, in the order of the axes and in the fields' units.
    pub axes: Vec<Vec<f64>>,
    /// The outputs asked for, in their order.
    pub columns: Vec<Column>,
    /// Why a point is impossible: the code of its first fault.
    pub faults: Vec<Option<&'static str>>,
}

impl Block {
    pub(super) fn new(axes: usize, outputs: &[Output], capacity: usize) -> Self {
        Self {
            axes: (0..axes.min(MOST_AXES)).map(|_| Vec::with_capacity(capacity)).collect(),
            columns: outputs.iter().map(|output| Column::of(*output, capacity)).collect(),
            faults: Vec::with_capacity(capacity),
        }
    }

    /// How many points.
    #[must_use]
    pub fn len(&self) -> usize {
        self.faults.len()
    }

    /// Whether there are none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.faults.is_empty()
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
        self.faults.push(None);
    }

    /// Adds a point that is impossible.
    pub(super) fn push_fault(&mut self, code: &'static str) {
        for column in &mut self.columns {
            match column {
                Column::Numbers(numbers) => numbers.push(f64::NAN),
                Column::Words(words) => words.push(None),
            }
        }
        self.faults.push(Some(code));
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
        self.faults.extend(other.faults);
    }
}

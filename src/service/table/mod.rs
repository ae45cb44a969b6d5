//! Tables on their way out: JSON by columns, CSV and Arrow by rows, piece by piece, so that memory does not grow with the table.

pub mod arrow;
pub mod csv;
pub mod json;

use crate::analysis::sweep::Block;

/// A column's head.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Head {
    /// Name, with the unit in it.
    pub name: &'static str,
    /// Unit; empty for ratios, counts and words.
    pub unit: &'static str,
    /// What it is.
    pub meaning: &'static str,
    /// Whether it holds words rather than numbers.
    pub is_word: bool,
    /// Whether there may be nothing in a row.
    pub may_be_empty: bool,
}

/// The column that says why a row is empty.
pub const FAULT: Head = Head {
    name: "fault",
    unit: "",
    meaning: "code of the row's first fault; empty where the row is possible",
    is_word: true,
    may_be_empty: true,
};

/// One column of a block of neighbouring rows.
#[derive(Debug, Clone, Copy)]
pub enum Cells<'a> {
    /// Numbers; NaN where there is none.
    Numbers(&'a [f64]),
    /// Words.
    Words(&'a [Option<&'static str>]),
    /// Nothing in so many rows.
    Nothing(usize),
}

/// The columns of a block: axes, outputs, fault.
pub fn columns(block: &Block) -> impl Iterator<Item = Cells<'_>> {
    let axes = block.axes.iter().map(|values| Cells::Numbers(values));
    let outputs = block.columns.iter().map(Cells::from);
    axes.chain(outputs).chain([faults(block)])
}

/// The fault column of a block.
pub fn faults(block: &Block) -> Cells<'_> {
    block.faults.codes().map_or(Cells::Nothing(block.len()), Cells::Words)
}

impl<'a> From<&'a crate::analysis::sweep::Column> for Cells<'a> {
    fn from(column: &'a crate::analysis::sweep::Column) -> Self {
        match column {
            crate::analysis::sweep::Column::Numbers(numbers) => Self::Numbers(numbers),
            crate::analysis::sweep::Column::Words(words) => Self::Words(words),
        }
    }
}

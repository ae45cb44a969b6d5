//! The JSON answer of a sweep: its form in the contract, and the parts of it that are not numbers of the table. It is written piece by piece.

use std::collections::BTreeMap;

use serde::Serialize;
use utoipa::ToSchema;

use crate::{
    analysis::sweep::{Axis, Output},
    service::{
        fingerprint::ModelAnswer,
        table::{FAULT, Head},
    },
};

/// A table by columns.
#[derive(Serialize, ToSchema)]
pub struct SweepAnswer {
    /// The axes, slowest first.
    axes: Vec<AxisAnswer>,
    /// The columns by name, all of the same length: the axes, the outputs, `fault`. Where a point is impossible its outputs are null and `fault`
    /// holds the code of its first fault. An output may be null elsewhere too, a deflection once the stream is attached, say.
    columns: BTreeMap<String, Vec<CellAnswer>>,
    /// How many rows.
    count: u64,
    /// What computed it.
    model: ModelAnswer,
}

/// A cell: a number, a word, or null.
#[derive(Serialize, ToSchema)]
#[serde(untagged)]
#[expect(dead_code, reason = "the form shown in the contract; cells are written as text")]
pub enum CellAnswer {
    /// A number.
    Number(Option<f64>),
    /// A word.
    Word(String),
}

/// An axis.
#[derive(Serialize, ToSchema)]
pub struct AxisAnswer {
    /// Name of its column: the last part of the pointer.
    #[schema(example = "radius_mm")]
    name: &'static str,
    /// The field.
    #[schema(example = "/lip/edge/rounded/radius_mm")]
    pointer: &'static str,
    /// Unit.
    #[schema(example = "mm")]
    unit: &'static str,
    /// Its values, in order.
    values: Vec<f64>,
}

/// An axis up to its values.
pub(super) fn axis_opening(axis: &Axis) -> String {
    let field = axis.field();
    let [name, pointer, unit] = [field.member(), field.pointer(), field.quantity().unit];
    // The service's own words need no escapes.
    format!("{{\"name\":\"{name}\",\"pointer\":\"{pointer}\",\"unit\":\"{unit}\",\"values\":[")
}

/// What follows the last column.
pub(super) fn closing(count: usize, model: &ModelAnswer) -> String {
    // Strings only: this cannot fail.
    let model = serde_json::to_string(model).unwrap_or_default();
    format!("}},\"count\":{count},\"model\":{model}}}")
}

/// The columns' heads.
pub(super) fn heads(axes: &[Axis], outputs: &[Output]) -> Vec<Head> {
    let axes = axes.iter().map(|axis| Head {
        name: axis.field().member(),
        unit: axis.field().quantity().unit,
        meaning: axis.field().quantity().name,
        is_word: false,
        may_be_empty: false,
    });
    let outputs = outputs.iter().map(|output| Head {
        name: output.name(),
        unit: output.unit(),
        meaning: output.meaning(),
        is_word: output.is_word(),
        may_be_empty: true,
    });
    axes.chain(outputs).chain([FAULT]).collect()
}

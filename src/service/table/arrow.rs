//! Arrow IPC streams (columnar format 1.5, metadata version 5): a schema message, then a record batch for each block of rows.

use std::{collections::HashMap, sync::Arc};

use arrow_array::{ArrayRef, Float64Array, RecordBatch, StringArray};
use arrow_buffer::{Buffer, NullBuffer, ScalarBuffer};
use arrow_ipc::writer::StreamEncoder;
use arrow_schema::{ArrowError, DataType, Field, Schema, SchemaRef};
use bytes::Bytes;

use super::Head;
use crate::{
    analysis::sweep::{Block, Column},
    service::fingerprint::ModelAnswer,
};

/// What a table says of its model.
#[must_use]
pub fn about(model: &ModelAnswer) -> HashMap<String, String> {
    let ModelAnswer { version, coefficients, fingerprint } = model;
    HashMap::from([
        ("version".to_owned(), (*version).to_owned()),
        ("coefficients".to_owned(), (*coefficients).to_owned()),
        ("fingerprint".to_owned(), fingerprint.clone()),
    ])
}

/// The schema of a table: each field with its unit and meaning as metadata, the table with `about`.
#[must_use]
pub fn schema(heads: &[Head], about: HashMap<String, String>) -> SchemaRef {
    let fields: Vec<Field> = heads
        .iter()
        .map(|head| {
            let kind = if head.is_word { DataType::Utf8 } else { DataType::Float64 };
            let mut about = HashMap::from([("meaning".to_owned(), head.meaning.to_owned())]);
            if !head.unit.is_empty() {
                about.insert("unit".to_owned(), head.unit.to_owned());
            }
            Field::new(head.name, kind, head.may_be_empty).with_metadata(about)
        })
        .collect();
    Arc::new(Schema::new_with_metadata(fields, about))
}

/// A block as a record batch; numbers are not copied.
///
/// # Errors
/// When the block does not fit the schema.
pub fn batch(schema: &SchemaRef, block: Block) -> Result<RecordBatch, ArrowError> {
    let faults = block.faults.codes().map_or_else(|| vec![None; block.len()], <[_]>::to_vec);
    let axes = block.axes.into_iter().map(Column::Numbers);
    rows(schema, axes.chain(block.columns).chain([Column::Words(faults)]))
}

/// Columns of equal length as a record batch; numbers are not copied. A number that is not finite becomes null where the schema lets a row have none.
///
/// # Errors
/// When the columns do not fit the schema.
pub fn rows(
    schema: &SchemaRef,
    columns: impl IntoIterator<Item = Column>,
) -> Result<RecordBatch, ArrowError> {
    let columns = columns.into_iter().enumerate().map(|(i, column)| match column {
        Column::Numbers(values) => {
            numbers(values, schema.fields().get(i).is_some_and(|field| field.is_nullable()))
        }
        Column::Words(values) => words(values),
    });
    RecordBatch::try_new(schema.clone(), columns.collect())
}

fn numbers(values: Vec<f64>, may_be_empty: bool) -> ArrayRef {
    let nulls = (may_be_empty && values.iter().any(|value| !value.is_finite()))
        .then(|| values.iter().map(|value| value.is_finite()).collect::<NullBuffer>());
    Arc::new(Float64Array::new(ScalarBuffer::from(values), nulls))
}

fn words(values: Vec<Option<&'static str>>) -> ArrayRef {
    Arc::new(StringArray::from(values))
}

/// Writes record batches as a stream.
pub struct Stream(StreamEncoder);

impl Stream {
    /// A stream of batches of this schema.
    ///
    /// # Errors
    /// None in practice: the options are fixed.
    pub fn new(schema: &Schema) -> Result<Self, ArrowError> {
        StreamEncoder::try_new(schema).map(Self)
    }

    /// The next pieces of the stream; numbers are not copied.
    ///
    /// # Errors
    /// When the batch does not fit the schema.
    pub fn pieces(&mut self, batch: &RecordBatch) -> Result<Vec<Bytes>, ArrowError> {
        self.0.encode(batch).map(joined)
    }

    /// The end of the stream.
    ///
    /// # Errors
    /// None in practice.
    pub fn end(self) -> Result<Vec<Bytes>, ArrowError> {
        self.0.finish().map(joined)
    }
}

/// Buffers up to this size are joined with their neighbours: a frame for each padding would cost more than the copy.
const SMALL: usize = 4096;

fn joined(buffers: Vec<Buffer>) -> Vec<Bytes> {
    let mut pieces = Vec::new();
    let mut small = Vec::new();
    for buffer in buffers.into_iter().filter(|buffer| !buffer.is_empty()) {
        if buffer.len() <= SMALL {
            small.extend_from_slice(&buffer);
        } else {
            if !small.is_empty() {
                pieces.push(Bytes::from(std::mem::take(&mut small)));
            }
            pieces.push(Bytes::from_owner(Owned(buffer)));
        }
    }
    if !small.is_empty() {
        pieces.push(Bytes::from(small));
    }
    pieces
}

struct Owned(Buffer);

impl AsRef<[u8]> for Owned {
    fn as_ref(&self) -> &[u8] {
        &self.0
    }
}

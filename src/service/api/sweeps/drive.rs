//! A sweep on its way out: pieces are computed on the threads kept for long work, a few ahead of the caller, and handed over in order.

use std::{
    ops::Range,
    sync::{
        Arc, OnceLock,
        atomic::{AtomicBool, AtomicUsize, Ordering},
    },
};

use axum::body::Body;
use bytes::Bytes;
use futures_util::{Stream, StreamExt, stream};
use tokio::sync::{OwnedSemaphorePermit, mpsc};

use super::{
    answer::{axis_opening, closing, heads},
    request::Plan,
};
use crate::{
    analysis::sweep::{Block, CHUNK, Cancelled, Output, Sweep},
    service::{
        events,
        fingerprint::ModelAnswer,
        heavy::piece,
        settings::cores,
        table::{Cells, arrow, columns, csv, faults, json},
    },
};

/// A JSON answer of up to so many cells is kept while its columns are written one after the other; of a larger one each column is computed when
/// its turn comes. 2²¹ cells are 16 MB.
const KEPT_CELLS: usize = 1 << 21;

/// The form of the answer.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Form {
    Json,
    Csv,
    Arrow,
    Events,
}

/// A sweep to be computed and written.
#[derive(Debug)]
struct Job {
    plan: Plan,
    model: ModelAnswer,
    cancelled: Arc<AtomicBool>,
}

/// Why an answer ends early.
#[derive(Debug, thiserror::Error)]
enum Stopped {
    #[error("the caller hung up")]
    HungUp,
    #[error("a piece of the work failed")]
    Failed,
}

impl From<Cancelled> for Stopped {
    fn from(_: Cancelled) -> Self {
        Self::HungUp
    }
}

/// The body of the answer. Dropping it stops the work.
pub(super) fn body(plan: Plan, model: ModelAnswer, form: Form, permit: OwnedSemaphorePermit) -> Body {
    let guard = events::Guard::default();
    let job = Arc::new(Job { plan, model, cancelled: guard.flag() });
    let (sender, receiver) = mpsc::channel(2);
    tokio::spawn(async move {
        let _held = permit;
        let out = Out { sender };
        if let Err(Stopped::Failed) = write(&job, form, &out).await {
            tracing::error!("a sweep broke off: a piece of it failed");
            // The caller sees the connection break off rather than a table that looks whole.
            let broken = std::io::Error::other("the table broke off");
            let _ = out.sender.send(Err(broken)).await;
        }
    });
    Body::from_stream(stream::unfold((receiver, guard), |(mut receiver, guard)| async move {
        receiver.recv().await.map(|piece| (piece, (receiver, guard)))
    }))
}

struct Out {
    sender: mpsc::Sender<Result<Bytes, std::io::Error>>,
}

impl Out {
    async fn send(&self, piece: impl Into<Bytes>) -> Result<(), Stopped> {
        self.sender.send(Ok(piece.into())).await.map_err(|_| Stopped::HungUp)
    }
}

async fn write(job: &Arc<Job>, form: Form, out: &Out) -> Result<(), Stopped> {
    let preparing = {
        let job = job.clone();
        piece(move || Sweep::new(job.plan.spec, job.plan.axes.clone(), &job.cancelled))
    };
    let work = Arc::new(Work {
        sweep: preparing.await.map_err(|_| Stopped::Failed)??,
        job: job.clone(),
        kept: OnceLock::new(),
    });
    match form {
        Form::Csv => write_csv(work, out).await,
        Form::Arrow => write_arrow(work, out).await,
        Form::Json => {
            keep(&work, &AtomicUsize::new(0)).await?;
            write_json(work, out).await
        }
        Form::Events => write_events(work, out).await,
    }
}

/// A prepared sweep.
struct Work {
    job: Arc<Job>,
    sweep: Sweep,
    /// Results kept for writing column by column; none where there are too many.
    kept: OnceLock<Vec<Block>>,
}

impl Work {
    fn rows(&self) -> Range<usize> {
        self.job.plan.rows.clone()
    }

    /// The rows in pieces of [`CHUNK`].
    fn chunks(&self) -> impl Iterator<Item = Range<usize>> + use<> {
        let rows = self.rows();
        let end = rows.end;
        rows.step_by(CHUNK).map(move |start| start..(start + CHUNK).min(end))
    }

    fn block(&self, rows: Range<usize>, outputs: &[Output]) -> Result<Block, Cancelled> {
        self.sweep.chunk(rows, outputs, &self.job.cancelled)
    }

    fn cells(&self) -> usize {
        self.rows().len().saturating_mul(self.job.plan.outputs.len())
    }
}

/// Pieces of work, computed a few ahead on the threads kept for it, in order.
fn in_order<I, T, W>(items: I, work: W) -> impl Stream<Item = Result<T, Stopped>>
where
    I: Iterator + Send,
    I::Item: Send + 'static,
    T: Send + 'static,
    W: Fn(I::Item) -> Result<T, Cancelled> + Clone + Send + 'static,
{
    stream::iter(items)
        .map(move |item| {
            let work = work.clone();
            let result = piece(move || work(item));
            async move { Ok(result.await.map_err(|_| Stopped::Failed)??) }
        })
        .buffered(2 * cores())
}

async fn write_csv(work: Arc<Work>, out: &Out) -> Result<(), Stopped> {
    let plan = &work.job.plan;
    out.send(csv::header(&heads(&plan.axes, &plan.outputs))).await?;
    let lines = {
        let work = work.clone();
        move |rows: Range<usize>| {
            let block = work.block(rows, &work.job.plan.outputs)?;
            let columns: Vec<Cells<'_>> = columns(&block).collect();
            Ok(csv::lines(&columns, block.len()))
        }
    };
    let mut pieces = std::pin::pin!(in_order(work.chunks(), lines));
    while let Some(text) = pieces.next().await {
        out.send(text?).await?;
    }
    Ok(())
}

async fn write_arrow(work: Arc<Work>, out: &Out) -> Result<(), Stopped> {
    let plan = &work.job.plan;
    let about = arrow::about(&work.job.model);
    let schema = arrow::schema(&heads(&plan.axes, &plan.outputs), about);
    let mut written = arrow::Stream::new(&schema).map_err(|_| Stopped::Failed)?;
    let batch = {
        let (work, schema) = (work.clone(), schema.clone());
        move |rows: Range<usize>| {
            let block = work.block(rows, &work.job.plan.outputs)?;
            Ok(arrow::batch(&schema, block))
        }
    };
    let mut batches = std::pin::pin!(in_order(work.chunks(), batch));
    while let Some(batch) = batches.next().await {
        let batch = batch?.map_err(|_| Stopped::Failed)?;
        for piece in written.pieces(&batch).map_err(|_| Stopped::Failed)? {
            out.send(piece).await?;
        }
    }
    for piece in written.end().map_err(|_| Stopped::Failed)? {
        out.send(piece).await?;
    }
    Ok(())
}

/// Computes the results and keeps them, if they are few. `done` counts the points.
async fn keep(work: &Arc<Work>, done: &AtomicUsize) -> Result<(), Stopped> {
    if work.cells() > KEPT_CELLS {
        return Ok(());
    }
    let compute = {
        let work = work.clone();
        move |rows: Range<usize>| work.block(rows, &work.job.plan.outputs)
    };
    let mut kept = Vec::with_capacity(work.rows().len().div_ceil(CHUNK));
    let mut blocks = std::pin::pin!(in_order(work.chunks(), compute));
    while let Some(block) = blocks.next().await {
        let block = block?;
        done.fetch_add(block.len(), Ordering::Relaxed);
        kept.push(block);
    }
    // It is set only here.
    let _ = work.kept.set(kept);
    Ok(())
}

/// A column of the JSON answer.
#[derive(Debug, Clone, Copy)]
enum Part {
    Axis(usize),
    Output(usize),
    Fault,
}

async fn write_json(work: Arc<Work>, out: &Out) -> Result<(), Stopped> {
    let plan = &work.job.plan;
    let mut opening = String::from("{\"axes\":[");
    for (i, axis) in plan.axes.iter().enumerate() {
        if i > 0 {
            opening.push(',');
        }
        opening.push_str(&axis_opening(axis));
        out.send(std::mem::take(&mut opening)).await?;
        let values = {
            let work = work.clone();
            move |places: Range<usize>| Ok(values(&work, i, places))
        };
        let count = axis.len();
        let places = (0..count).step_by(CHUNK).map(move |start| start..(start + CHUNK).min(count));
        let mut pieces = std::pin::pin!(in_order(places, values));
        while let Some(text) = pieces.next().await {
            out.send(text?).await?;
        }
        opening.push_str("]}");
    }
    opening.push_str("],\"columns\":{");
    let parts = (0..plan.axes.len())
        .map(Part::Axis)
        .chain((0..plan.outputs.len()).map(Part::Output))
        .chain([Part::Fault]);
    for (i, (part, head)) in parts.zip(heads(&plan.axes, &plan.outputs)).enumerate() {
        if i > 0 {
            opening.push_str("],");
        }
        opening.push_str(&format!("\"{}\":[", head.name));
        out.send(std::mem::take(&mut opening)).await?;
        let text = {
            let work = work.clone();
            move |rows: Range<usize>| column(&work, part, rows)
        };
        let mut pieces = std::pin::pin!(in_order(work.chunks(), text));
        while let Some(text) = pieces.next().await {
            out.send(text?).await?;
        }
    }
    out.send(format!("]{}", closing(plan.rows.len(), &work.job.model))).await
}

fn values(work: &Work, axis: usize, places: Range<usize>) -> Vec<u8> {
    let first = places.start == 0;
    let axis = work.job.plan.axes.get(axis);
    let values: Vec<f64> = places.filter_map(|place| axis.map(|axis| axis.at(place))).collect();
    json::items(Cells::Numbers(&values), first)
}

/// Some rows of one column as JSON text: from what was kept, or computed now.
fn column(work: &Work, part: Part, rows: Range<usize>) -> Result<Vec<u8>, Cancelled> {
    let start = work.job.plan.rows.start;
    let first = rows.start == start;
    if let Part::Axis(index) = part {
        let values = work.sweep.axis_values(index, rows);
        return Ok(json::items(Cells::Numbers(&values), first));
    }
    if let Some(block) = work.kept.get().and_then(|kept| kept.get((rows.start - start) / CHUNK)) {
        let cells = match part {
            Part::Output(index) => block.columns.get(index).map(Cells::from),
            Part::Axis(_) | Part::Fault => None,
        };
        return Ok(json::items(cells.unwrap_or_else(|| faults(block)), first));
    }
    let output = match part {
        Part::Output(index) => work.job.plan.outputs.get(index),
        Part::Axis(_) | Part::Fault => None,
    };
    let block = work.block(rows, output.map_or(&[], std::slice::from_ref))?;
    let cells = block.columns.first().map_or_else(|| faults(&block), Cells::from);
    Ok(json::items(cells, first))
}

/// Progress events while the points are computed, then the JSON answer as one event.
async fn write_events(work: Arc<Work>, out: &Out) -> Result<(), Stopped> {
    let (total, done) = (work.rows().len(), AtomicUsize::new(0));
    let mut clock = events::Clock::default();
    {
        let mut computing = std::pin::pin!(compute(&work, &done));
        loop {
            tokio::select! {
                biased;
                finished = &mut computing => break finished?,
                () = clock.tick() => out.send(clock.event(done.load(Ordering::Relaxed), total)).await?,
            }
        }
    }
    out.send(clock.event(total, total)).await?;
    out.send(events::RESULT).await?;
    write_json(work, out).await?;
    out.send(events::END).await
}

/// Computes every point. Where they are too many to be kept, they are computed again as they are written.
async fn compute(work: &Arc<Work>, done: &AtomicUsize) -> Result<(), Stopped> {
    if work.cells() <= KEPT_CELLS {
        return keep(work, done).await;
    }
    let count = {
        let work = work.clone();
        move |rows: Range<usize>| work.block(rows, &work.job.plan.outputs).map(|block| block.len())
    };
    let mut counts = std::pin::pin!(in_order(work.chunks(), count));
    while let Some(count) = counts.next().await {
        done.fetch_add(count?, Ordering::Relaxed);
    }
    Ok(())
}

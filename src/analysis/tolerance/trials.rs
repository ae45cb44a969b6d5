//! The trials of a study.

use rayon::prelude::*;

use super::{Failure, MOST_OUTSIDE, spread::Drawn, trial::Trial};
use crate::analysis::{
    fault::Fault,
    statistics::random::Sequence,
    watch::{Cancelled, Watch},
};

/// Trials worked on in one piece. Neither results nor their order depend on it.
const AT_A_TIME: u64 = 4096;

/// The margins of all trials that make a case, in the order of the trials.
pub(super) struct Trials {
    pub(super) margins: Vec<f64>,
    pub(super) left_out: u64,
    /// The first values that made no case.
    example: Option<Vec<f64>>,
}

/// Random numbers of the plain trials, of the indices, of importance sampling.
pub(super) const PLAIN_STREAM: u64 = 1;
pub(super) const RARE_STREAM: u64 = 2;

impl Trials {
    /// Runs them. Trial i takes the numbers i·d to (i + 1)·d − 1 of the seed's sequence, d inputs, whoever computes it.
    pub(super) fn run(
        start: &Trial<'_>,
        drawn: &[Drawn],
        count: u64,
        seed: u64,
        watch: Watch<'_>,
    ) -> Result<Self, Cancelled> {
        let sequence = Sequence::new(seed, PLAIN_STREAM);
        let inputs = drawn.len();
        let pieces = count.div_ceil(AT_A_TIME);
        let done: Vec<Self> = (0..pieces)
            .into_par_iter()
            .map(|piece| {
                watch.look()?;
                let from = piece * AT_A_TIME;
                let to = (from + AT_A_TIME).min(count);
                let mut numbers = sequence.from(from * inputs as u64);
                let mut trial = start.clone();
                let count = (to - from) as usize;
                let mut columns = vec![vec![0.0; count]; inputs];
                for i in 0..count {
                    for column in &mut columns {
                        column[i] = numbers.next_open();
                    }
                }
                for (column, drawn) in columns.iter_mut().zip(drawn) {
                    drawn.fill(trial.arch(), column);
                }
                let mut part = Self { margins: vec![0.0; count], left_out: 0, example: None };
                trial.margins(&columns, &mut part.margins);
                if let Some(first) = part.margins.iter().position(|m| m.is_nan()) {
                    part.example = Some(columns.iter().map(|column| column[first]).collect());
                    part.margins.retain(|m| !m.is_nan());
                    part.left_out = (count - part.margins.len()) as u64;
                }
                watch.advance((to - from) as usize).then_some(part).ok_or(Cancelled)
            })
            .collect::<Result<_, Cancelled>>()?;
        let mut whole = Self { margins: Vec::with_capacity(count as usize), left_out: 0, example: None };
        for part in done {
            whole.margins.extend_from_slice(&part.margins);
            whole.left_out += part.left_out;
            whole.example = whole.example.or(part.example);
        }
        Ok(whole)
    }

    /// Refuses a study of which more than 1 % of the trials make no case, with the fault of the first such trial.
    pub(super) fn refuse_when_too_few(&self, start: &Trial<'_>) -> Result<(), Failure> {
        let all = self.margins.len() as u64 + self.left_out;
        let share = self.left_out as f64 / all as f64;
        if share <= MOST_OUTSIDE && !self.margins.is_empty() {
            return Ok(());
        }
        let reasons = self.example.as_ref().map(|values| start.faults(values)).unwrap_or_default();
        let reason = reasons.first();
        let detail = format!(
            "{} of {all} trials make no case; at most 1 % may. The first: {}",
            self.left_out,
            reason.map_or_else(
                || "the stream cannot be computed".to_owned(),
                |fault| format!("{}: {}", fault.pointer, fault.detail)
            )
        );
        Err(Failure::Varying(vec![Fault::new("/varying", "outside_range", detail)]))
    }
}

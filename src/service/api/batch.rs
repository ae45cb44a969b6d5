//! `POST /v1/evaluations/batch`: many lips in one call; one bad case does not spoil the others.

use std::{
    ops::Range,
    panic::{AssertUnwindSafe, catch_unwind},
    sync::{Arc, OnceLock},
};

use axum::{body::Body, extract::State, response::Response};
use bytes::Bytes;
use futures_util::{StreamExt, stream};
use http::{HeaderMap, HeaderValue, header};
use serde::{Deserialize, Serialize};
use serde_json::value::RawValue;
use utoipa::ToSchema;

use super::evaluations::{EXAMPLE, EvaluationAnswer, EvaluationRequest, evaluate_into};
use crate::{
    analysis::fault::Fault,
    service::{
        body::JsonBytes,
        explain::{Contract, Request, invalid, read},
        heavy::permit,
        negotiation::{JSON, choose},
        problem::{Problem, ProblemDocument},
        settings::cores,
        state::Shared,
    },
};

/// The most cases of one batch.
pub const MOST_CASES: usize = 10_000;

/// Cases computed in one go, between looks at whether the caller still listens.
const AT_A_TIME: usize = 64;

const PATH: &str = "/v1/evaluations/batch";

/// Many lips in one call.
#[derive(Debug, ToSchema)]
#[schema(examples(example))]
#[expect(dead_code, reason = "the form shown in the contract; a batch is read as an `Envelope`")]
pub struct BatchRequest {
    /// Evaluation requests; each is judged on its own.
    #[schema(value_type = Vec<EvaluationRequest>, max_items = 10_000)]
    cases: Vec<serde_json::Value>,
}

fn example() -> serde_json::Value {
    let case: serde_json::Value = serde_json::from_str(EXAMPLE).unwrap_or_default();
    let mut faster = case.clone();
    faster["pour"]["flow_ml_s"] = 40.into();
    faster["include"] = serde_json::json!([]);
    serde_json::json!({ "cases": [case, faster] })
}

/// The batch as it is read: each case stays as it stands until its turn.
#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct Envelope<'a> {
    #[serde(borrow)]
    cases: Vec<&'a RawValue>,
}

/// The form of a batch whose cases are not looked into: for finding what is wrong with the envelope.
#[derive(Debug, Deserialize, ToSchema)]
#[serde(deny_unknown_fields)]
struct BareBatch {
    /// The cases.
    #[expect(dead_code, reason = "only its form is looked at")]
    cases: Vec<serde_json::Value>,
}

impl Request for BareBatch {
    fn sound() -> &'static str {
        r#"{"cases": []}"#
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        Vec::new()
    }
}

/// The answers, in the order of the cases.
#[derive(Serialize, ToSchema)]
pub struct BatchAnswer {
    /// One for each case.
    results: Vec<BatchItem>,
}

/// The answer to one case.
#[derive(Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum BatchItem {
    /// What is said of this lip.
    #[schema(value_type = EvaluationAnswer<'static>)]
    Result(serde_json::Value),
    /// Why nothing is said of it. Its pointers start at the batch.
    #[schema(value_type = ProblemDocument)]
    Problem(serde_json::Value),
}

/// Many lips in one call
///
/// Up to 10 000 evaluation requests, each judged on its own: `results` holds, in the same order, either a `result` or a `problem`. The answer is streamed.
#[utoipa::path(post, path = "/v1/evaluations/batch", tag = "lip",
    request_body(content = BatchRequest, description = "Evaluation requests"),
    responses((status = 200, description = "One answer for each case", body = BatchAnswer)))]
pub async fn evaluate_batch(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let cases = cases(&bytes)?;
    let permit = permit(&state).await?;
    let batch = Arc::new(Batch { bytes, cases, base_path: state.settings.base_path.as_str().to_owned() });
    let count = batch.cases.len();
    let work = stream::iter((0..count).step_by(AT_A_TIME)).map({
        move |from| {
            let batch = batch.clone();
            tokio::task::spawn_blocking(move || batch.answers(from..(from + AT_A_TIME).min(count)))
        }
    });
    // A caller that hangs up drops the stream: what is under way ends, the rest never starts.
    let pieces = work.buffered(cores()).map(move |piece| {
        let _held = &permit;
        piece.map(Bytes::from)
    });
    let opening = stream::iter([Ok(Bytes::from_static(b"{\"results\":["))]);
    let closing = stream::iter([Ok(Bytes::from_static(b"]}"))]);
    let mut response = Response::new(Body::from_stream(opening.chain(pieces).chain(closing)));
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(JSON));
    Ok(response)
}

/// Where each case stands in the body.
fn cases(bytes: &Bytes) -> Result<Vec<Range<usize>>, Problem> {
    let envelope = match serde_json::from_slice::<Envelope<'_>>(bytes) {
        Ok(envelope) => envelope,
        // Not JSON, or not a batch: read once more for all that is wrong with it.
        Err(error) => {
            read::<BareBatch>(bytes)?;
            return Err(invalid(vec![Fault::new("", "invalid", error.to_string())]));
        }
    };
    let count = envelope.cases.len();
    if count == 0 || count > MOST_CASES {
        let detail = format!("{count} cases are given; accepted: 1 to {MOST_CASES}");
        let fault = Fault::new("/cases", "wrong_count", detail).within(1.0, MOST_CASES as f64);
        return Err(invalid(vec![fault]));
    }
    let start = bytes.as_ptr().addr();
    let place = |case: &&RawValue| {
        let from = case.get().as_ptr().addr() - start;
        from..from + case.get().len()
    };
    Ok(envelope.cases.iter().map(place).collect())
}

struct Batch {
    bytes: Bytes,
    cases: Vec<Range<usize>>,
    base_path: String,
}

impl Batch {
    /// The answers to these cases, as items of a JSON list; after the first case of the batch with a comma before each.
    fn answers(&self, indices: Range<usize>) -> Vec<u8> {
        let mut text = Vec::with_capacity(indices.len() * 2048);
        for index in indices {
            if index > 0 {
                text.push(b',');
            }
            let start = text.len();
            text.extend_from_slice(b"{\"result\":");
            let case = &self.bytes[self.cases[index].clone()];
            let outcome = catch_unwind(AssertUnwindSafe(|| answer(case, &mut text)))
                .unwrap_or_else(|_| Err(Problem::internal("The service failed on this case.")));
            if let Err(problem) = outcome {
                text.truncate(start);
                self.refuse(index, problem, &mut text);
            }
            text.push(b'}');
        }
        text
    }

    fn refuse(&self, index: usize, mut problem: Problem, text: &mut Vec<u8>) {
        for fault in &mut problem.errors {
            fault.pointer.insert_str(0, &format!("/cases/{index}"));
        }
        if let [only] = problem.errors.as_slice() {
            problem.detail = format!("{}: {}", only.pointer, only.detail);
        }
        text.extend_from_slice(b"{\"problem\":");
        // A problem is made of strings and finite numbers.
        let document = problem.into_document(&self.base_path, PATH);
        text.extend_from_slice(&serde_json::to_vec(&document).unwrap_or_else(|_| b"null".to_vec()));
    }
}

fn answer(case: &[u8], text: &mut Vec<u8>) -> Result<(), Problem> {
    let request: EvaluationRequest = read(case)?;
    Ok(evaluate_into(&request, text)?)
}

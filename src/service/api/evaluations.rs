//! `POST /v1/evaluations`: does this lip dribble?

use crate::service::problem::Problem;

/// Decides one evaluation request given as JSON text and writes the answer as JSON text.
///
/// # Errors
/// The problem that the HTTP resource would answer with.
pub fn evaluate_json(_request: &[u8]) -> Result<Vec<u8>, Problem> {
    Err(Problem::internal("This build has no evaluation in it yet."))
}

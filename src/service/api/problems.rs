//! `GET /problems/{slug}`: the page behind each problem's `type`.

use axum::extract::{Path, State};
use axum::response::Response;
use http::{HeaderMap, header};
use serde::Serialize;
use utoipa::ToSchema;

use super::PAGE_POLICY;
use crate::service::negotiation::{JSON, LOOK_UP, cacheable, choose};
use crate::service::problem::{Problem, ProblemKind};
use crate::service::state::Shared;

const HTML: &str = "text/html; charset=utf-8";
/// What `Accept` is compared with; people follow these links, so HTML comes first.
const OFFERS: &[&str] = &["text/html", JSON];

/// A kind of problem, explained.
#[derive(Debug, Clone, Serialize, ToSchema)]
pub struct Explanation {
    /// The URI reference that problem documents carry as their `type`.
    #[serde(rename = "type")]
    #[schema(example = "/problems/invalid-request")]
    pub kind: String,
    /// The problem in a few words.
    pub title: &'static str,
    /// The HTTP status.
    #[schema(example = 422)]
    pub status: u16,
    /// What it means.
    pub meaning: &'static str,
    /// What the caller can do.
    pub remedy: &'static str,
}

impl Explanation {
    fn of(kind: ProblemKind, base_path: &str) -> Self {
        Self {
            kind: format!("{base_path}/problems/{}", kind.slug()),
            title: kind.title(),
            status: kind.status().as_u16(),
            meaning: kind.meaning(),
            remedy: kind.remedy(),
        }
    }
}

/// All kinds of problem.
#[utoipa::path(get, path = "/problems", tag = "operation",
    responses((status = 200, description = "All kinds of problem", content(
        (String = "text/html"),
        (Vec<Explanation> = "application/json")
    ))))]
pub async fn list_problems(State(state): State<Shared>, headers: HeaderMap) -> Result<Response, Problem> {
    let base_path = state.settings.base_path.as_str();
    let all: Vec<_> = ProblemKind::ALL.into_iter().map(|kind| Explanation::of(kind, base_path)).collect();
    if choose(&headers, OFFERS)? == JSON {
        return json(&headers, &all);
    }
    let rows: String = all
        .iter()
        .map(|one| format!("<li><a href=\"{}\">{}</a> ({})</li>", one.kind, one.title, one.status))
        .collect();
    Ok(html(&headers, &page("Problems", &format!("<h1>Problems</h1><ul>{rows}</ul>"))))
}

/// One kind of problem: what it means and what to do.
#[utoipa::path(get, path = "/problems/{slug}", tag = "operation",
    params(("slug" = String, Path, description = "Last part of the problem's type", example = "invalid-request")),
    responses((status = 200, description = "The kind of problem, explained", content(
        (String = "text/html"),
        (Explanation = "application/json")
    ))))]
pub async fn explain_problem(
    State(state): State<Shared>,
    Path(slug): Path<String>,
    headers: HeaderMap,
) -> Result<Response, Problem> {
    let base_path = state.settings.base_path.as_str();
    let Some(kind) = ProblemKind::from_slug(&slug) else {
        return Err(Problem::not_found(format!("No problem is called so; {base_path}/problems lists them.")));
    };
    let one = Explanation::of(kind, base_path);
    if choose(&headers, OFFERS)? == JSON {
        return json(&headers, &one);
    }
    let Explanation { title, status, meaning, remedy, .. } = one;
    let body = format!(
        "<p class=\"status\">{status}</p><h1>{title}</h1><p>{meaning}</p><h2>What to do</h2><p>{remedy}</p><p><a href=\"{base_path}/problems\">All problems</a></p>"
    );
    Ok(html(&headers, &page(title, &body)))
}

fn json<T: Serialize>(headers: &HeaderMap, body: &T) -> Result<Response, Problem> {
    let text = serde_json::to_vec(body).map_err(|_| Problem::internal("The page could not be written."))?;
    Ok(cacheable(headers, JSON, LOOK_UP, text))
}

fn html(headers: &HeaderMap, page: &str) -> Response {
    let mut response = cacheable(headers, HTML, LOOK_UP, page.to_owned());
    response.headers_mut().insert(header::CONTENT_SECURITY_POLICY, PAGE_POLICY);
    response
}

fn page(title: &str, body: &str) -> String {
    format!(
        "<!doctype html><html lang=\"en\"><head><meta charset=\"utf-8\"><meta name=\"viewport\" content=\"width=device-width\"><title>{title} · dribble-risk</title><style>body{{font:1rem/1.5 system-ui,sans-serif;max-width:40rem;margin:3rem auto;padding:0 1rem;color:#222;background:#fff}}.status{{color:#666;margin:0}}h1{{margin-top:0}}@media(prefers-color-scheme:dark){{body{{color:#ddd;background:#191919}}a{{color:#8cf}}}}</style></head><body><main>{body}</main></body></html>\n"
    )
}

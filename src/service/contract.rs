//! The OpenAPI document's common parts: what holds for every operation is added here, once.

use utoipa::openapi::path::{Operation, PathItem};
use utoipa::openapi::schema::{AdditionalProperties, Schema};
use utoipa::openapi::security::{HttpAuthScheme, HttpBuilder, SecurityRequirement, SecurityScheme};
use utoipa::openapi::{ContentBuilder, OpenApi, Ref, RefOr, Response, ResponseBuilder, Server};
use utoipa::{OpenApi as _, ToSchema};

use super::problem::{PROBLEM_JSON, ProblemDocument, ProblemKind};

#[derive(utoipa::OpenApi)]
#[openapi(
    info(
        title = "dribble-risk",
        description = include_str!("contract.md")
    ),
    tags(
        (name = "lip", description = "Does a lip dribble?"),
        (name = "bench", description = "What bench pours and measured parts say"),
        (name = "production", description = "Spread and lot: what production makes of a lip"),
        (name = "maps", description = "Where does clean end?"),
        (name = "catalogue", description = "Liquids, materials, and how they wet each other"),
        (name = "operation", description = "For those who run the service")
    ),
    components(schemas(ProblemDocument))
)]
struct Ground;

/// The document before any resource is added.
pub(super) fn ground() -> OpenApi {
    Ground::openapi()
}

/// Adds what every operation shares: problem responses, the optional bearer token, the server's base path.
pub(super) fn complete(document: &mut OpenApi, base_path: &str) {
    let server = if base_path.is_empty() { "/" } else { base_path };
    document.servers = Some(vec![Server::new(server)]);
    let components = document.components.get_or_insert_default();
    for kind in ProblemKind::ALL {
        components.responses.insert(component(kind), RefOr::T(response(kind.title())));
    }
    components.responses.insert("Problem".into(), RefOr::T(response("Any other failure")));
    components.add_security_scheme(
        "bearer",
        SecurityScheme::Http(
            HttpBuilder::new()
                .scheme(HttpAuthScheme::Bearer)
                .description(Some("Asked for only by servers that were given a list of tokens"))
                .build(),
        ),
    );
    for schema in components.schemas.values_mut() {
        close_choices(schema);
    }
    for (path, item) in &mut document.paths.paths {
        for operation in operations(item) {
            add_problems(path, operation);
        }
    }
}

/// Alternatives are objects with exactly one member: no other beside it.
fn close_choices(schema: &mut RefOr<Schema>) {
    let RefOr::T(Schema::OneOf(choices)) = schema else { return };
    for choice in &mut choices.items {
        if let RefOr::T(Schema::Object(object)) = choice
            && object.properties.len() == 1
        {
            object.additional_properties = Some(Box::new(AdditionalProperties::FreeForm(false)));
        }
    }
}

fn operations(item: &mut PathItem) -> impl Iterator<Item = &mut Operation> {
    [&mut item.get, &mut item.head, &mut item.post, &mut item.put, &mut item.patch, &mut item.delete]
        .into_iter()
        .flatten()
}

fn add_problems(path: &str, operation: &mut Operation) {
    use ProblemKind as Kind;
    let mut kinds = vec![Kind::NotAcceptable, Kind::Internal, Kind::Overloaded, Kind::TimedOut];
    if path.starts_with("/v1") {
        kinds.push(Kind::Unauthorized);
        operation.security =
            Some(vec![SecurityRequirement::default(), SecurityRequirement::new("bearer", [] as [&str; 0])]);
    }
    if operation.request_body.is_some() {
        kinds.extend([
            Kind::NotJson,
            Kind::SlowRequest,
            Kind::TooLarge,
            Kind::UnsupportedMediaType,
            Kind::InvalidRequest,
        ]);
    }
    if path.contains('{') {
        kinds.push(Kind::NotFound);
    }
    let responses = &mut operation.responses.responses;
    for kind in kinds {
        let status = kind.status().as_str().to_owned();
        responses.entry(status).or_insert_with(|| reference(&component(kind)));
    }
    responses.entry("default".into()).or_insert_with(|| reference("Problem"));
}

fn reference(component: &str) -> RefOr<Response> {
    RefOr::Ref(Ref::from_response_name(component))
}

/// The name of the component: the slug in the manner of schema names, e.g. `InvalidRequest`.
fn component(kind: ProblemKind) -> String {
    format!("{kind:?}")
}

fn response(description: &str) -> Response {
    let schema = RefOr::Ref(Ref::from_schema_name(ProblemDocument::name()));
    ResponseBuilder::new()
        .description(description)
        .content(PROBLEM_JSON, ContentBuilder::new().schema(Some(schema)).build())
        .build()
}

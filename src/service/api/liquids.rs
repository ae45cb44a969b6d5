//! `GET /v1/liquids` and `GET /v1/liquids/{id}`: what the catalogue knows of liquids.

pub mod conditions;

use axum::{
    extract::{Path, Query},
    response::Response,
};
use http::HeaderMap;
use serde::Serialize;
use utoipa::ToSchema;

use self::conditions::{Asked, ConditionsAnswer, ConditionsQuery, Found, Pairs, pointer_in_query};
use super::{notice::NoticeAnswer, property::PropertyAnswer, quantity::Number};
use crate::{
    analysis::{cautions::cautions, notice::Notice},
    physics::{
        liquid::{Conditions, Entry, Hazard, Properties, catalogue, find},
        quantity::{DENSITY, SURFACE_TENSION, VISCOSITY},
    },
    service::{
        explain::invalid,
        nearest::{nearest, quoted},
        negotiation::{JSON, LOOK_UP, cacheable, choose},
        problem::{self, Problem, ProblemDocument},
    },
};

/// The liquids of the catalogue.
#[derive(Debug, Serialize, ToSchema)]
pub struct LiquidList {
    /// The liquids, related ones together.
    pub liquids: Vec<LiquidEntry>,
}

/// A liquid of the catalogue: what it is and what it needs to be told.
#[derive(Debug, Serialize, ToSchema)]
pub struct LiquidEntry {
    /// Identifier.
    #[schema(example = "sucrose-solution")]
    pub id: &'static str,
    /// Name.
    #[schema(example = "Sucrose solution (sugar syrup)")]
    pub name: &'static str,
    /// Family of liquids it belongs to.
    #[schema(example = "sugars")]
    pub family: &'static str,
    /// What it needs besides the temperature; every one of them must be given.
    pub parameters: Vec<ParameterAnswer>,
    /// Temperatures at which it is accepted, °C, from freezing to boiling or as far as anything can be computed; null where they depend on the composition.
    pub temperature_c: Option<RangeAnswer>,
    /// Codes of every hazard it can have at some composition or temperature besides heat; the cautions of `GET /v1/liquids/{id}` say which hold.
    #[schema(example = json!(["food_contact"]))]
    pub hazards: Vec<&'static str>,
    /// How it behaves on solids.
    pub wetting: WettingAnswer,
    /// What to know before relying on the numbers; may be empty.
    pub note: &'static str,
}

/// A number that a liquid needs.
#[derive(Debug, Serialize, ToSchema)]
pub struct ParameterAnswer {
    /// The member, or query parameter, that gives it.
    #[schema(example = "mass_fraction")]
    pub name: &'static str,
    /// What it is.
    #[schema(example = "mass fraction")]
    pub meaning: &'static str,
    /// Its unit; empty for ratios.
    #[schema(example = "")]
    pub unit: &'static str,
    /// Smallest value this liquid accepts.
    #[schema(value_type = f64)]
    pub minimum: Number,
    /// Largest value this liquid accepts; what dissolves at a given temperature may be less.
    #[schema(value_type = f64)]
    pub maximum: Number,
    /// A usual value, for forms; never filled in.
    #[schema(value_type = f64)]
    pub typical: Number,
}

/// A range with its ends.
#[derive(Debug, Serialize, ToSchema)]
pub struct RangeAnswer {
    /// Smallest value.
    #[schema(value_type = f64)]
    pub minimum: Number,
    /// Largest value.
    #[schema(value_type = f64)]
    pub maximum: Number,
}

/// How a liquid behaves on solids.
#[derive(Debug, Serialize, ToSchema)]
pub struct WettingAnswer {
    /// Dispersive share of the surface tension (Owens & Wendt); null where it is not known.
    #[schema(value_type = Option<f64>, minimum = 0, maximum = 1)]
    pub dispersive_fraction: Option<Number>,
    /// Leaves protein, fat, surfactant or alcohol behind: after the first wetting the receding angle is near 0°.
    pub leaves_film: bool,
}

/// A liquid's properties at some conditions.
#[derive(Debug, Serialize, ToSchema)]
pub struct LiquidAnswer<'a> {
    /// Identifier.
    #[schema(example = "water")]
    pub id: &'static str,
    /// Name.
    #[schema(example = "Water")]
    pub name: &'static str,
    /// The conditions, the default temperature filled in.
    pub conditions: ConditionsAnswer,
    /// Density, kg/m³.
    pub density_kg_m3: PropertyAnswer,
    /// Dynamic viscosity, mPa·s.
    pub viscosity_mpa_s: PropertyAnswer,
    /// Surface tension against air, mN/m.
    pub surface_tension_mn_m: PropertyAnswer,
    /// Where a number deserves less trust.
    pub warnings: Vec<NoticeAnswer<'a>>,
    /// Where the liquid can hurt someone. They defer to local codes and licensed practice.
    pub cautions: Vec<NoticeAnswer<'a>>,
}

impl From<&Entry> for LiquidEntry {
    fn from(entry: &Entry) -> Self {
        Self {
            id: entry.id,
            name: entry.name,
            family: entry.family,
            parameters: entry
                .parameters
                .iter()
                .map(|parameter| {
                    let quantity = parameter.component.quantity();
                    ParameterAnswer {
                        name: parameter.component.field(),
                        meaning: quantity.name,
                        unit: quantity.unit,
                        minimum: Number(parameter.minimum),
                        maximum: Number(parameter.maximum),
                        typical: Number(parameter.typical),
                    }
                })
                .collect(),
            temperature_c: temperatures(entry),
            hazards: entry.hazards.iter().copied().map(Hazard::code).collect(),
            wetting: WettingAnswer {
                dispersive_fraction: entry.wetting.dispersive_fraction.map(Number),
                leaves_film: entry.wetting.leaves_film,
            },
            note: entry.note,
        }
    }
}

/// The accepted temperatures where they are the same at both ends and the typical value of every parameter.
fn temperatures(entry: &Entry) -> Option<RangeAnswer> {
    let at = |value: fn(&crate::physics::liquid::Parameter) -> f64| {
        let mut conditions = Conditions::default();
        for parameter in entry.parameters {
            conditions.set(parameter.component, value(parameter));
        }
        entry.temperatures_c(&conditions)
    };
    let range = at(|p| p.typical)?;
    if at(|p| p.minimum) != Some(range) || at(|p| p.maximum) != Some(range) {
        return None;
    }
    Some(RangeAnswer { minimum: Number(range.0), maximum: Number(range.1) })
}

/// The liquids of the catalogue.
///
/// What each is, which numbers it needs to be told, the temperatures at which it is accepted, its hazards, and how it behaves on solids.
#[utoipa::path(get, path = "/v1/liquids", tag = "catalogue",
    responses((status = 200, description = "The liquids", body = LiquidList), (status = 304, description = "As in If-None-Match"),
        (status = 422, description = "Query parameters at fault", body = ProblemDocument, content_type = "application/problem+json")))]
pub async fn list_liquids(headers: HeaderMap, Query(pairs): Query<Pairs>) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let faults = Asked::nothing(&pairs);
    if !faults.is_empty() {
        return Err(invalid(faults));
    }
    let list = LiquidList { liquids: catalogue().iter().map(LiquidEntry::from).collect() };
    answer(&headers, &list)
}

/// A liquid at these conditions.
///
/// Density, viscosity and surface tension, each with its uncertainty, source, basis and range, and the cautions that hold at these conditions.
#[utoipa::path(get, path = "/v1/liquids/{id}", tag = "catalogue",
    params(("id" = String, Path, description = "Identifier, as in GET /v1/liquids", example = "water"), ConditionsQuery),
    responses((status = 200, description = "The liquid's properties", body = LiquidAnswer<'static>), (status = 304, description = "As in If-None-Match"),
        (status = 422, description = "Query parameters at fault", body = ProblemDocument, content_type = "application/problem+json")))]
pub async fn liquid(
    headers: HeaderMap,
    Path(id): Path<String>,
    Query(pairs): Query<Pairs>,
) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let entry = find(&id).ok_or_else(|| not_in_catalogue("liquid", &id, catalogue().iter().map(|e| e.id)))?;
    let found = Asked::read(&pairs, false).resolve(entry).map_err(invalid)?;
    let warnings = warnings(&found);
    let mut cautions = cautions(&found.spec, &found.properties);
    for caution in &mut cautions {
        caution.pointer = caution.pointer.map(pointer_in_query);
    }
    answer(
        &headers,
        &LiquidAnswer {
            id: entry.id,
            name: entry.name,
            conditions: (&found.conditions).into(),
            density_kg_m3: PropertyAnswer::new(&found.properties.density, &DENSITY, None),
            viscosity_mpa_s: PropertyAnswer::new(&found.properties.viscosity, &VISCOSITY, None),
            surface_tension_mn_m: PropertyAnswer::new(
                &found.properties.surface_tension,
                &SURFACE_TENSION,
                None,
            ),
            warnings: warnings.iter().map(NoticeAnswer::from).collect(),
            cautions: cautions.iter().map(NoticeAnswer::from).collect(),
        },
    )
}

/// A look-up's answer.
pub(super) fn answer<T: Serialize>(headers: &HeaderMap, body: &T) -> Result<Response, Problem> {
    let body = serde_json::to_vec(body)
        .map_err(|_| Problem::internal("The answer holds a number that is not finite."))?;
    Ok(cacheable(headers, JSON, LOOK_UP, body))
}

/// 404 for an identifier that the catalogue does not have, with the nearest ones it has.
pub(super) fn not_in_catalogue<'a>(kind: &str, id: &str, known: impl Iterator<Item = &'a str>) -> Problem {
    let near = nearest(id, known);
    let detail = format!("The catalogue has no {kind} {}; nearest: {}.", quoted(id), near.join(", "));
    let fault = problem::Fault::new("/id", "unknown_id", detail.clone()).among(near);
    Problem { errors: vec![fault], ..Problem::not_found(detail) }
}

/// Where the numbers deserve less trust.
fn warnings(found: &Found) -> Vec<Notice> {
    let Properties { density, viscosity, surface_tension } = &found.properties;
    let rows = [
        (density, "/density_kg_m3", "density"),
        (viscosity, "/viscosity_mpa_s", "viscosity"),
        (surface_tension, "/surface_tension_mn_m", "surface tension"),
    ];
    let extrapolated = rows.into_iter().filter(|(property, ..)| !property.within_range);
    let mut warnings: Vec<Notice> = extrapolated
        .map(|(property, pointer, name)| {
            let detail =
                format!("The {name} is extrapolated: {} covers {}.", property.source, property.range);
            Notice::at("outside_correlation_range", pointer, detail)
        })
        .collect();
    if !found.entry.note.is_empty() {
        warnings.push(Notice::at("liquid_note", "/id", found.entry.note));
    }
    if found.entry.wetting.leaves_film {
        warnings.push(leaves_film("/id"));
    }
    warnings
}

/// Said of a liquid that leaves a film.
pub(super) fn leaves_film(pointer: &'static str) -> Notice {
    Notice::at(
        "leaves_film",
        pointer,
        "This liquid leaves protein, fat, surfactant or alcohol on the lip: after the first wetting expect a receding angle near 0°, and ask for measured angles.",
    )
}

/// What the correlations of an entry give across its region: for the catalogue's digest.
#[must_use]
pub fn samples(entry: &Entry) -> Vec<[f64; 3]> {
    let steps = [0.05, 0.3, 0.6, 0.95];
    let mut found = Vec::new();
    for share in steps {
        let mut conditions = Conditions::at(20.0);
        for parameter in entry.parameters {
            conditions.set(
                parameter.component,
                parameter.minimum + share * (parameter.maximum - parameter.minimum),
            );
        }
        let Some((low, high)) = entry.temperatures_c(&conditions) else { continue };
        for t in steps {
            conditions.temperature_c = low + t * (high - low);
            if let Ok(p) = entry.properties(&conditions) {
                found.push([p.density.value, p.viscosity.value, p.surface_tension.value]);
            }
        }
    }
    found
}

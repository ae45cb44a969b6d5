//! `GET /v1/surfaces` and `GET /v1/surfaces/{id}`: lip materials and finishes, and the angles that a liquid makes on them.

use axum::{
    extract::{Path, Query},
    response::Response,
};
use http::HeaderMap;
use serde::Serialize;
use utoipa::{IntoParams, ToSchema};

use super::{
    liquids::{
        answer,
        conditions::{Asked, ConditionsAnswer, ConditionsQuery, Found, Pairs},
        leaves_film, not_in_catalogue,
    },
    notice::NoticeAnswer,
    property::{AngleAnswer, PropertyAnswer},
    quantity::Number,
};
use crate::{
    analysis::{fault::Fault, notice::Notice, resolve::wetting_liquid},
    physics::{
        liquid,
        quantity::{SURFACE_ENERGY, SURFACE_TENSION},
        surface::{Finish, Material, State, SurfaceEnergy, SurfaceKind, WettingLiquid, catalogue, find},
    },
    service::{
        explain::invalid,
        nearest::{nearest, quoted},
        negotiation::{JSON, choose},
        problem::{Problem, ProblemDocument},
    },
};

/// The liquid of a look-up that names none.
const DEFAULT_LIQUID: &str = "water";

/// The liquid of a look-up of a surface.
#[derive(Debug, IntoParams)]
#[into_params(parameter_in = Query)]
pub struct WithLiquidQuery {
    /// Identifier of the liquid, as in `GET /v1/liquids`; default `water`. For other liquids the angles are re-estimated, with a wider band.
    #[param(required = false, example = "water")]
    pub liquid: Option<String>,
}

/// The lip materials of the catalogue.
#[derive(Debug, Serialize, ToSchema)]
pub struct SurfaceList {
    /// The materials, related ones together.
    pub surfaces: Vec<SurfaceEntry>,
}

/// A lip material.
#[derive(Debug, Serialize, ToSchema)]
pub struct SurfaceEntry {
    /// Identifier.
    #[schema(example = "porcelain-glazed")]
    pub id: &'static str,
    /// Name.
    #[schema(example = "Glazed porcelain")]
    pub name: &'static str,
    /// How it meets liquids: `dense`, `absorbent` (it drinks the liquid and stays wet) or `composite` (it carries water on tips).
    #[schema(example = "dense")]
    pub kind: &'static str,
    /// The states with values, out of `clean`, `in_use` and `worn`.
    #[schema(example = json!(["clean", "in_use"]))]
    pub states: Vec<&'static str>,
    /// Surface energy, mN/m, in the everyday state (or the clean one, where only that is known); null where none is defined.
    pub surface_energy_mn_m: Option<EnergyAnswer>,
}

/// A lip material and the angles that a liquid makes on it.
#[derive(Debug, Serialize, ToSchema)]
pub struct SurfaceAnswer<'a> {
    /// Identifier.
    #[schema(example = "porcelain-glazed")]
    pub id: &'static str,
    /// Name.
    #[schema(example = "Glazed porcelain")]
    pub name: &'static str,
    /// How it meets liquids: `dense`, `absorbent` or `composite`.
    #[schema(example = "dense")]
    pub kind: &'static str,
    /// The liquid that makes these angles.
    #[schema(example = "water")]
    pub with_liquid: &'static str,
    /// Its conditions, the default temperature filled in. Water has the angles measured at 20 to 25 °C whatever its temperature.
    pub conditions: ConditionsAnswer,
    /// Surface tension of the liquid, mN/m.
    pub surface_tension_mn_m: PropertyAnswer,
    /// The angles by state.
    pub states: StatesAnswer,
    /// Surface energy, mN/m, in the everyday state (or the clean one, where only that is known); null where none is defined.
    pub surface_energy_mn_m: Option<EnergyAnswer>,
    /// Where a number deserves less trust.
    pub warnings: Vec<NoticeAnswer<'a>>,
}

/// The angles by state; null where nothing is known.
#[derive(Debug, Serialize, ToSchema)]
pub struct StatesAnswer {
    /// As made, or freshly cleaned.
    pub clean: Option<StateAnswer>,
    /// Washed, handled or aged in air.
    pub in_use: Option<StateAnswer>,
    /// Worn or fouled.
    pub worn: Option<StateAnswer>,
}

/// A material in one state.
#[derive(Debug, Serialize, ToSchema)]
pub struct StateAnswer {
    /// The finish meant, in words.
    #[schema(example = "smooth glossy glaze, washed")]
    pub finish: &'static str,
    /// Static contact angle.
    pub contact_angle_deg: AngleAnswer,
    /// Advancing angle: at it a dry face is wetted.
    pub advancing_deg: AngleAnswer,
    /// Receding angle: at it a wet face lets go.
    pub receding_deg: AngleAnswer,
    /// Surface energy in this state, mN/m; null where none is defined.
    pub surface_energy_mn_m: Option<EnergyAnswer>,
    /// How far the values with water can be trusted: `high` (published measurements agree), `medium` (an angle is published) or `low` (recalled or judged).
    #[schema(example = "low")]
    pub confidence: &'static str,
    /// What to know about them; may be empty.
    pub note: &'static str,
}

/// A surface energy split after Owens & Wendt, at 20 °C.
#[derive(Debug, Serialize, ToSchema)]
pub struct EnergyAnswer {
    /// Dispersive component.
    pub dispersive: ComponentAnswer,
    /// Polar component.
    pub polar: ComponentAnswer,
}

/// A component of a surface energy.
#[derive(Debug, Serialize, ToSchema)]
pub struct ComponentAnswer {
    /// The value, mN/m.
    #[schema(value_type = f64)]
    pub value: Number,
    /// Its standard uncertainty, mN/m: 10 %, at least 1 mN/m (own judgement: published splits of one polymer differ by so much).
    #[schema(value_type = f64)]
    pub standard_uncertainty: Number,
    /// Where it comes from.
    #[schema(example = "from memory")]
    pub source: &'static str,
}

/// Relative standard uncertainty of a component of the catalogue (own judgement: recalled splits of one polymer differ by so much, poly(ethylene terephthalate)
/// 43.2 + 4.1 against 37.8 + 3.5 mN/m, polyamide 6.6 40.8 + 6.2 against 34.1 + 9.1).
const ENERGY_DOUBT: f64 = 0.1;
/// Least standard uncertainty of a component of the catalogue, mN/m (own judgement, from the same splits).
const LEAST_ENERGY_DOUBT: f64 = 1.0;

impl From<&SurfaceEnergy> for EnergyAnswer {
    fn from(energy: &SurfaceEnergy) -> Self {
        let component = |si: f64| {
            let value = si / SURFACE_ENERGY.to_si;
            ComponentAnswer {
                value: Number(value),
                standard_uncertainty: Number((ENERGY_DOUBT * value).max(LEAST_ENERGY_DOUBT)),
                source: energy.source,
            }
        };
        Self { dispersive: component(energy.dispersive), polar: component(energy.polar) }
    }
}

const fn kind(material: &Material) -> &'static str {
    match material.kind {
        SurfaceKind::Dense => "dense",
        SurfaceKind::Absorbent => "absorbent",
        SurfaceKind::Composite => "composite",
    }
}

impl From<&Material> for SurfaceEntry {
    fn from(material: &Material) -> Self {
        Self {
            id: material.id,
            name: material.name,
            kind: kind(material),
            states: material.states().iter().map(State::as_str).collect(),
            surface_energy_mn_m: material.surface_energy.as_ref().map(EnergyAnswer::from),
        }
    }
}

/// The lip materials of the catalogue.
///
/// What each is, which of its states have values, and its surface energy.
#[utoipa::path(get, path = "/v1/surfaces", tag = "catalogue",
    responses((status = 200, description = "The materials", body = SurfaceList), (status = 304, description = "As in If-None-Match"),
        (status = 422, description = "Query parameters at fault", body = ProblemDocument, content_type = "application/problem+json")))]
pub async fn list_surfaces(headers: HeaderMap, Query(pairs): Query<Pairs>) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let faults = Asked::nothing(&pairs);
    if !faults.is_empty() {
        return Err(invalid(faults));
    }
    answer(&headers, &SurfaceList { surfaces: catalogue().iter().map(SurfaceEntry::from).collect() })
}

/// A lip material and the angles that a liquid makes on it.
///
/// Static, advancing and receding angle in every state that is known, each with its uncertainty, source and basis. The catalogue's angles are for water; those of
/// other liquids are re-estimated, with a wider band.
#[utoipa::path(get, path = "/v1/surfaces/{id}", tag = "catalogue",
    params(("id" = String, Path, description = "Identifier, as in GET /v1/surfaces", example = "porcelain-glazed"), WithLiquidQuery, ConditionsQuery),
    responses((status = 200, description = "The material with its angles", body = SurfaceAnswer<'static>), (status = 304, description = "As in If-None-Match"),
        (status = 422, description = "Query parameters at fault", body = ProblemDocument, content_type = "application/problem+json")))]
pub async fn surface(
    headers: HeaderMap,
    Path(id): Path<String>,
    Query(pairs): Query<Pairs>,
) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let material =
        find(&id).ok_or_else(|| not_in_catalogue("surface", &id, catalogue().iter().map(|m| m.id)))?;
    let found = liquid_asked(Asked::read(&pairs, true)).map_err(invalid)?;
    let wetting = wetting_liquid(&found.spec, &found.properties);
    let states = states(material, &wetting).map_err(|fault| invalid(vec![fault]))?;
    let warnings = warnings(&found, &wetting);
    answer(
        &headers,
        &SurfaceAnswer {
            id: material.id,
            name: material.name,
            kind: kind(material),
            with_liquid: found.entry.id,
            conditions: (&found.conditions).into(),
            surface_tension_mn_m: PropertyAnswer::new(
                &found.properties.surface_tension,
                &SURFACE_TENSION,
                None,
            ),
            states,
            surface_energy_mn_m: material.surface_energy.as_ref().map(EnergyAnswer::from),
            warnings: warnings.iter().map(NoticeAnswer::from).collect(),
        },
    )
}

fn liquid_asked(mut asked: Asked) -> Result<Found, Vec<Fault>> {
    let id = asked.liquid.clone();
    let id = id.as_deref().unwrap_or(DEFAULT_LIQUID);
    if let Some(entry) = liquid::find(id) {
        return asked.resolve(entry);
    }
    let detail = format!("the catalogue has no liquid {}; GET /v1/liquids lists them", quoted(id));
    let near = nearest(id, liquid::catalogue().iter().map(|entry| entry.id));
    asked.fault(Fault::new("/liquid", "unknown_id", detail).choices(near));
    Err(asked.without_liquid())
}

fn states(material: &Material, liquid: &WettingLiquid) -> Result<StatesAnswer, Fault> {
    let state = |state: State| {
        material.state(state).map(|finish| state_answer(material, state, finish, liquid)).transpose()
    };
    Ok(StatesAnswer { clean: state(State::Clean)?, in_use: state(State::InUse)?, worn: state(State::Worn)? })
}

fn state_answer(
    material: &Material,
    state: State,
    finish: &Finish,
    liquid: &WettingLiquid,
) -> Result<StateAnswer, Fault> {
    let angles = material
        .angles(state, liquid)
        .map_err(|fault| Fault::new("/liquid", "not_applicable", fault.to_string()))?;
    Ok(StateAnswer {
        finish: finish.finish,
        contact_angle_deg: (&angles.contact).into(),
        advancing_deg: (&angles.advancing).into(),
        receding_deg: (&angles.receding).into(),
        surface_energy_mn_m: finish.surface_energy.as_ref().map(EnergyAnswer::from),
        confidence: finish.confidence.as_str(),
        note: finish.note,
    })
}

/// Where the angles deserve less trust.
fn warnings(found: &Found, wetting: &WettingLiquid) -> Vec<Notice> {
    let mut warnings = Vec::new();
    if !wetting.is_water {
        warnings.push(Notice::at(
            "angles_re_estimated",
            "/states",
            "The catalogue's angles are for water; they were re-estimated for this liquid, with a wider band. Measured angles are better.",
        ));
    }
    let tension = &found.properties.surface_tension;
    if !tension.within_range {
        let detail =
            format!("The surface tension is extrapolated: {} covers {}.", tension.source, tension.range);
        warnings.push(Notice::at("outside_correlation_range", "/surface_tension_mn_m", detail));
    }
    if found.entry.wetting.leaves_film {
        warnings.push(leaves_film("/with_liquid"));
    }
    warnings
}

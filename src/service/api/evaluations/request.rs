//! The evaluation request. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::{collections::BTreeMap, sync::OnceLock};

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

use crate::{
    analysis::{
        evaluation::Include,
        fault::Fault,
        field::Field,
        remedy::{LEVERS, Limit},
        spec::{LiquidSpec, OuterFace, SectionSpec, Spec, SurfaceSpec, Uncertainties},
    },
    physics::separation::closed_form::{CoefficientSet, DEFAULT_SET, SETS},
    service::{
        api::{
            calibration::CalibrationPart,
            lip::{EdgeRequest, LipRequest},
            liquid::LiquidRequest,
            quantity::{Confidence, Flow, distinct, given},
            surface::SurfaceRequest,
        },
        explain::{Contract, Request, escaped},
        nearest::{nearest, quoted},
    },
};

/// Does this lip dribble with this liquid at this pour rate, by what margin, how surely, and what would mend it?
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct EvaluationRequest {
    /// What bench pours have taught of the critical Weber number: the `calibration` that `POST /v1/calibrations` returned, whole and unchanged.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub calibration: Option<Box<CalibrationPart>>,
    /// Coefficient set of the closed form, by name; default the newest.
    #[serde(default = "default_coefficients")]
    #[schema(example = "set-1")]
    pub coefficients: String,
    /// Confidence of the verdict and of every interval; default 0.95.
    #[serde(default = "default_confidence")]
    pub confidence: Confidence,
    /// Optional parts of the answer; default all four. Callers that want speed name fewer.
    #[serde(default = "all_parts")]
    pub include: Vec<PartRequest>,
    /// What the caller's tooling allows a remedy to change: JSON Pointers of fields, each with a range. When given, only these fields are changed.
    #[serde(default, deserialize_with = "distinct", skip_serializing_if = "BTreeMap::is_empty")]
    #[schema(example = json!({"/lip/edge/rounded/radius_mm": {"minimum": 0.3, "maximum": 2.0}}))]
    pub limits: BTreeMap<String, LimitRequest>,
    /// Where the liquid leaves the vessel.
    pub lip: LipRequest,
    /// What is poured.
    pub liquid: LiquidRequest,
    /// How the verdict is computed; default the closed form.
    #[serde(default)]
    pub method: MethodRequest,
    /// Whether the outer face below the edge is dry (default) or already wet.
    #[serde(default)]
    pub outer_face: OuterFaceRequest,
    /// How fast it is poured.
    pub pour: PourRequest,
    /// What the lip is made of.
    pub surface: SurfaceRequest,
    /// Standard uncertainties of given numbers: JSON Pointers of fields of this request, each with a standard uncertainty in the field's unit.
    /// Defaults stand at each field.
    #[serde(default, deserialize_with = "distinct", skip_serializing_if = "BTreeMap::is_empty")]
    #[schema(example = json!({"/lip/edge/rounded/radius_mm": 0.03}))]
    pub uncertainty: BTreeMap<String, f64>,
}

/// How fast it is poured.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct PourRequest {
    /// Pour rate. Default standard uncertainty: 3 %.
    pub flow_ml_s: Flow,
}

/// Optional parts of the answer.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum PartRequest {
    /// Smallest single changes that reach clean.
    Remedies,
    /// Shares of the variance by source.
    Contributions,
    /// The last drop.
    LastDrop,
    /// The independent adhesion estimate.
    AdhesionEstimate,
}

/// How the verdict is computed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum MethodRequest {
    /// The fitted closed form of the critical Weber number.
    #[default]
    ClosedForm,
}

/// The outer face below the edge.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum OuterFaceRequest {
    /// Dry: the advancing angle counts.
    #[default]
    Dry,
    /// Already wet: the receding angle counts.
    Wet,
}

/// A range in which a remedy may change a field, in the field's unit.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct LimitRequest {
    /// Largest value; default the largest accepted.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub maximum: Option<f64>,
    /// Smallest value; default the smallest accepted.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub minimum: Option<f64>,
}

/// Stands in for a surface that is not known while the rest of a request is looked at.
const STAND_IN_SURFACE: SurfaceSpec =
    SurfaceSpec::Measured { contact_angle_deg: Some(60.0), advancing_deg: None, receding_deg: None };

/// Stands in for a liquid that is not known while the rest of a request is looked at.
const STAND_IN_LIQUID: LiquidSpec =
    LiquidSpec::Measured { density_kg_m3: 1000.0, viscosity_mpa_s: 1.0, surface_tension_mn_m: 72.0 };

fn default_coefficients() -> String {
    DEFAULT_SET.id.to_owned()
}

const fn default_confidence() -> Confidence {
    Confidence::known(0.95)
}

fn all_parts() -> Vec<PartRequest> {
    vec![
        PartRequest::Remedies,
        PartRequest::Contributions,
        PartRequest::LastDrop,
        PartRequest::AdhesionEstimate,
    ]
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

impl EvaluationRequest {
    /// Which parts of the answer are wanted.
    #[must_use]
    pub fn include(&self) -> Include {
        let wants = |part| self.include.contains(&part);
        Include {
            remedies: wants(PartRequest::Remedies),
            contributions: wants(PartRequest::Contributions),
            last_drop: wants(PartRequest::LastDrop),
            adhesion_estimate: wants(PartRequest::AdhesionEstimate),
        }
    }

    /// The question asked, with what a remedy may change.
    ///
    /// # Errors
    /// Every name that is not known and every pointer that names no field, together.
    pub fn question(&self) -> Result<(Spec, Vec<Limit>), Vec<Fault>> {
        let mut faults = Vec::new();
        let mut note = |fault: Fault| faults.push(fault);
        let surface = self.surface.spec("/surface").map_err(&mut note).ok();
        let liquid = self.liquid.spec("/liquid").map_err(&mut note).ok();
        let coefficients = CoefficientSet::named(&self.coefficients);
        if coefficients.is_none() {
            let detail = format!("there is no coefficient set {}", quoted(&self.coefficients));
            note(Fault::new("/coefficients", "unknown_id", detail).choices(SETS.iter().map(|set| set.id)));
        }
        let calibration = self.calibration.as_ref().and_then(|part| {
            part.calibration("/calibration", &self.coefficients).map_err(|found| faults.extend(found)).ok()
        });
        let EdgeRequest::Rounded(edge) = self.lip.edge;
        let limits = self.limits(&mut faults);
        let uncertainties = self.uncertainties(&mut faults);
        let known = (surface.is_some(), liquid.is_some());
        let mut spec = Spec {
            section: SectionSpec::from(self.lip.section),
            radius_mm: edge.radius_mm.get(),
            turn_deg: edge.turn_deg.get(),
            slope_deg: self.lip.run.slope_deg.get(),
            length_mm: self.lip.run.length_mm.get(),
            surface: surface.unwrap_or(STAND_IN_SURFACE),
            liquid: liquid.unwrap_or(STAND_IN_LIQUID),
            flow_ml_s: self.pour.flow_ml_s.get(),
            outer_face: match self.outer_face {
                OuterFaceRequest::Dry => OuterFace::Dry,
                OuterFaceRequest::Wet => OuterFace::Wet,
            },
            confidence: self.confidence.get(),
            uncertainty: Uncertainties::default(),
            coefficients: coefficients.unwrap_or(DEFAULT_SET),
            calibration,
        };
        for (field, value) in uncertainties {
            let part_known = match field.pointer().split('/').nth(1) {
                Some("surface") => known.0,
                Some("liquid") => known.1,
                _ => true,
            };
            if field.get(&spec).is_some() {
                spec.uncertainty.set(field, value);
            } else if part_known {
                let pointer = field.pointer();
                let detail = format!("this request gives no {pointer}");
                let known = Field::all().filter(|field| field.get(&spec).is_some()).map(Field::pointer);
                let fault = Fault::new(uncertainty_pointer(pointer), "unknown_pointer", detail);
                faults.push(fault.choices(nearest(pointer, known)));
            }
        }
        if faults.is_empty() {
            return Ok((spec, limits));
        }
        // What else is wrong, as far as it does not hang on a part that stands in for an unknown one.
        let stands_in = |fault: &Fault| {
            (!known.0 && fault.pointer.starts_with("/surface"))
                || (!known.1 && fault.pointer.starts_with("/liquid"))
        };
        let elsewhere = spec.resolve().err().unwrap_or_default();
        let together = known.0 && known.1;
        let counts = |fault: &Fault| !stands_in(fault) && (together || fault.code != "not_applicable");
        faults.extend(elsewhere.into_iter().filter(counts));
        Err(faults)
    }

    /// The uncertainties given, by field.
    fn uncertainties(&self, faults: &mut Vec<Fault>) -> Vec<(Field, f64)> {
        let mut known = Vec::with_capacity(self.uncertainty.len());
        for (pointer, &value) in &self.uncertainty {
            let Some(field) = Field::at(pointer) else {
                let detail = format!("{} names no number of an evaluation request", quoted(pointer));
                let fault = Fault::new(uncertainty_pointer(pointer), "unknown_pointer", detail);
                faults.push(fault.choices(nearest(pointer, Field::all().map(Field::pointer))));
                continue;
            };
            let quantity = field.quantity();
            let most = quantity.maximum - quantity.minimum;
            if value >= 0.0 && value <= most {
                known.push((field, value));
            } else {
                let detail = format!("a standard uncertainty must be between 0 and {most} {}", quantity.unit);
                let fault = Fault::new(uncertainty_pointer(pointer), "out_of_range", detail.trim_end());
                faults.push(fault.within(0.0, most));
            }
        }
        known
    }

    fn limits(&self, faults: &mut Vec<Fault>) -> Vec<Limit> {
        let mut limits = Vec::with_capacity(self.limits.len());
        for (pointer, range) in &self.limits {
            let at = format!("/limits/{}", escaped(pointer));
            let Some(field) = Field::at(pointer).filter(|field| LEVERS.contains(field)) else {
                let detail = format!("{} names nothing that a remedy changes", quoted(pointer));
                let known = LEVERS.iter().map(|field| field.pointer());
                faults.push(Fault::new(at, "unknown_pointer", detail).choices(nearest(pointer, known)));
                continue;
            };
            let quantity = field.quantity();
            let minimum = range.minimum.unwrap_or(quantity.minimum);
            let maximum = range.maximum.unwrap_or(quantity.maximum);
            let before = faults.len();
            for (member, value) in [("minimum", minimum), ("maximum", maximum)] {
                if !quantity.accepts(value) {
                    let detail = format!(
                        "must be between {} and {} {}",
                        quantity.minimum, quantity.maximum, quantity.unit
                    );
                    let fault = Fault::new(format!("{at}/{member}"), "out_of_range", detail.trim_end());
                    faults.push(fault.within(quantity.minimum, quantity.maximum));
                }
            }
            if faults.len() == before && minimum > maximum {
                faults.push(Fault::new(at, "contradiction", "the minimum is above the maximum"));
            } else {
                limits.push(Limit { field, minimum, maximum });
            }
        }
        limits
    }
}

fn uncertainty_pointer(pointer: &str) -> String {
    format!("/uncertainty/{}", escaped(pointer))
}

impl Request for EvaluationRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        match self.question() {
            Ok((spec, _)) => spec.resolve().err().unwrap_or_default(),
            Err(faults) => faults,
        }
    }
}

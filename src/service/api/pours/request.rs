//! The pour request. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::{collections::BTreeMap, sync::OnceLock};

use serde::{Deserialize, Serialize};
use utoipa::{
    PartialSchema, ToSchema,
    openapi::{ArrayBuilder, ObjectBuilder, RefOr, Type, schema::Schema},
};

use crate::{
    analysis::{
        fault::Fault,
        field::Field,
        pour::{LipPositionSpec, PourSpec, TiltSpec, VesselSpec},
    },
    service::{
        api::{
            calibration::CalibrationPart,
            evaluations::{EvaluationRequest, MethodRequest, OuterFaceRequest, PourRequest},
            lip::LipRequest,
            liquid::LiquidRequest,
            quantity::{
                Confidence, Drop, Fill, Flow, Tilt, TiltRate, Time, VesselLength, VesselOffset, distinct,
                given,
            },
            surface::SurfaceRequest,
        },
        explain::{Contract, Request, escaped},
    },
};

/// A whole pour from a tilting vessel: how much is served, how much runs down the outside, when, and what the last drop does.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct VesselPourRequest {
    /// What bench pours have taught of the critical Weber number: the `calibration` that `POST /v1/calibrations` returned, whole and unchanged.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub calibration: Option<Box<CalibrationPart>>,
    /// Coefficient set of the closed form, by name; default the newest.
    #[serde(default = "default_coefficients")]
    #[schema(example = "set-1")]
    pub coefficients: String,
    /// Confidence of the verdicts and of every interval; default 0.95.
    #[serde(default = "default_confidence")]
    pub confidence: Confidence,
    /// Height of the lip above where the stream lands, for `landing_mm`; default 100.
    #[serde(default = "default_drop")]
    pub drop_mm: Drop,
    /// Liquid in the vessel at the start.
    pub fill_ml: Fill,
    /// Where the liquid leaves the vessel. Here `run.slope_deg` is the floor's slope with the vessel upright: at time t it is slope_deg + tilt(t).
    pub lip: LipRequest,
    /// Where the edge of the lip is; default on the brim.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub lip_position: Option<LipPositionRequest>,
    /// What is poured.
    pub liquid: LiquidRequest,
    /// Whether lip and outer face are dry at the start (default) or already wet. A dry lip holds back a capillary head and then starts suddenly; once the stream has
    /// clung, the face counts as wet.
    #[serde(default)]
    pub outer_face: OuterFaceRequest,
    /// What the lip is made of.
    pub surface: SurfaceRequest,
    /// Tilt back when this much has left the vessel, at the rate of the course's return.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub target_ml: Option<Fill>,
    /// How the vessel is tilted.
    pub tilt: TiltRequest,
    /// Standard uncertainties of given numbers of lip, surface and liquid, by pointer, as in an evaluation.
    #[serde(default, deserialize_with = "distinct", skip_serializing_if = "BTreeMap::is_empty")]
    #[schema(example = json!({"/lip/edge/rounded/radius_mm": 0.03}))]
    pub uncertainty: BTreeMap<String, f64>,
    /// The vessel, inside measures.
    pub vessel: VesselRequest,
}

/// Where the edge of the lip is, in the upright vessel.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct LipPositionRequest {
    /// Height above the base.
    pub height_mm: VesselLength,
    /// Distance from the vessel's axis.
    pub radius_mm: VesselLength,
}

/// The vessel: exactly one member names its kind.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum VesselRequest {
    /// A box.
    Box(BoxRequest),
    /// A cone or frustum.
    Cone(ConeRequest),
    /// A cylinder.
    Cylinder(CylinderRequest),
    /// A body of revolution.
    Revolved(RevolvedRequest),
}

/// A box.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct BoxRequest {
    /// Inner height.
    pub height_mm: VesselLength,
    /// Along the pour.
    pub length_mm: VesselLength,
    /// Across the pour.
    pub width_mm: VesselLength,
}

/// A cone or frustum.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct ConeRequest {
    /// Inner diameter at the base; 0 for a pointed cone.
    pub bottom_diameter_mm: VesselOffset,
    /// Inner height.
    pub height_mm: VesselLength,
    /// Inner diameter at the brim.
    pub top_diameter_mm: VesselLength,
}

/// A cylinder.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct CylinderRequest {
    /// Inner diameter.
    pub diameter_mm: VesselLength,
    /// Inner height.
    pub height_mm: VesselLength,
}

/// A body of revolution.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RevolvedRequest {
    /// The inside's profile from the base (height 0) to the brim, straight between points; heights never fall, and at most two points share one (a flat step).
    #[schema(min_items = 2, max_items = 500)]
    pub profile_mm: Vec<ProfilePoint>,
}

/// How the vessel is tilted: exactly one member names its kind.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum TiltRequest {
    /// Any course.
    Program(ProgramRequest),
    /// To a tilt at one rate, held, and back at another.
    Steady(SteadyRequest),
}

/// A course of the tilt.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct ProgramRequest {
    /// Tilt against time, straight between points; times rise.
    #[schema(min_items = 2, max_items = 1000)]
    pub points: Vec<CoursePoint>,
}

/// To a tilt at one rate, held, and back at another; upright at the start.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct SteadyRequest {
    /// The tilt that is held.
    pub hold_deg: Tilt,
    /// How long it is held.
    pub hold_s: Time,
    /// Rate of tilting to it.
    pub rate_deg_s: TiltRate,
    /// Rate of tilting back.
    pub return_rate_deg_s: TiltRate,
}

macro_rules! pairs {
    ($($(#[$doc:meta])* $name:ident = $description:literal, $first:expr, $second:expr;)*) => {$(
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize)]
        #[serde(transparent)]
        pub struct $name(pub [f64; 2]);

        impl PartialSchema for $name {
            fn schema() -> RefOr<Schema> {
                let number = ObjectBuilder::new().schema_type(Type::Number);
                ArrayBuilder::new()
                    .items(number)
                    .min_items(Some(2))
                    .max_items(Some(2))
                    .description(Some($description))
                    .examples([serde_json::json!([$first, $second])])
                    .into()
            }
        }

        impl ToSchema for $name {
            fn name() -> std::borrow::Cow<'static, str> {
                stringify!($name).into()
            }
        }
    )*};
}

pairs! {
    /// A point of a profile.
    ProfilePoint = "[height above the base, distance from the axis], mm, each 0 to 5000", 10.0, 50.0;
    /// A point of a course.
    CoursePoint = "[time, 0 to 3600 s; tilt, 0 to 180 degrees]", 2.0, 45.0;
}

const MOST_PROFILE_POINTS: usize = 500;
const MOST_COURSE_POINTS: usize = 1000;

fn default_coefficients() -> String {
    crate::physics::separation::closed_form::DEFAULT_SET.id.to_owned()
}

const fn default_confidence() -> Confidence {
    Confidence::known(0.95)
}

const fn default_drop() -> Drop {
    Drop::known(100.0)
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

/// The demonstration: an invented 1.2 L jug poured with cold milk, hot tea and sunflower oil, its lip new and worn. A list of {name, request}.
pub const DEMO: &str = include_str!("demo.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

impl VesselPourRequest {
    /// The pour that is asked for.
    ///
    /// # Errors
    /// Every name that is not known and every pointer that names no field, together.
    pub fn question(&self) -> Result<PourSpec, Vec<Fault>> {
        let mut faults = Vec::new();
        let own = |pointer: &&String| Field::at(pointer) != Some(Field::Flow);
        for pointer in self.uncertainty.keys().filter(|pointer| !own(pointer)) {
            let at = format!("/uncertainty/{}", escaped(pointer));
            let detail = "a pour has no pour rate of its own: it follows from tilt and lip";
            faults.push(Fault::new(at, "unknown_pointer", detail));
        }
        // Lip, surface, liquid and their uncertainties are those of an evaluation.
        let lip = EvaluationRequest {
            calibration: self.calibration.clone(),
            coefficients: self.coefficients.clone(),
            confidence: self.confidence,
            include: Vec::new(),
            limits: BTreeMap::new(),
            lip: self.lip,
            liquid: self.liquid.clone(),
            method: MethodRequest::default(),
            outer_face: self.outer_face,
            pour: PourRequest { flow_ml_s: Flow::known(1.0) },
            surface: self.surface.clone(),
            uncertainty: self
                .uncertainty
                .iter()
                .filter(|(pointer, _)| own(pointer))
                .map(|(pointer, value)| (pointer.clone(), *value))
                .collect(),
        };
        let lip = lip.question().map_err(|mut found| faults.append(&mut found)).ok();
        let mut count = |at: &'static str, count: usize, most: usize| {
            if count > most {
                let detail = format!("{count} points are given; accepted: 2 to {most}");
                faults.push(Fault::new(at, "wrong_count", detail).within(2.0, most as f64));
            }
        };
        if let VesselRequest::Revolved(body) = &self.vessel {
            count("/vessel/revolved/profile_mm", body.profile_mm.len(), MOST_PROFILE_POINTS);
        }
        if let TiltRequest::Program(course) = &self.tilt {
            count("/tilt/program/points", course.points.len(), MOST_COURSE_POINTS);
        }
        match lip {
            Some((lip, _)) if faults.is_empty() => Ok(PourSpec {
                lip,
                vessel: self.vessel.spec(),
                lip_position: self.lip_position.map(|position| LipPositionSpec {
                    radius_mm: position.radius_mm.get(),
                    height_mm: position.height_mm.get(),
                }),
                fill_ml: self.fill_ml.get(),
                tilt: self.tilt.spec(),
                target_ml: self.target_ml.map(Fill::get),
                drop_mm: self.drop_mm.get(),
                step_factor: 1.0,
            }),
            _ => Err(faults),
        }
    }
}

impl VesselRequest {
    fn spec(&self) -> VesselSpec {
        match self {
            Self::Box(body) => VesselSpec::Box {
                length_mm: body.length_mm.get(),
                width_mm: body.width_mm.get(),
                height_mm: body.height_mm.get(),
            },
            Self::Cone(body) => VesselSpec::Cone {
                top_diameter_mm: body.top_diameter_mm.get(),
                bottom_diameter_mm: body.bottom_diameter_mm.get(),
                height_mm: body.height_mm.get(),
            },
            Self::Cylinder(body) => {
                VesselSpec::Cylinder { diameter_mm: body.diameter_mm.get(), height_mm: body.height_mm.get() }
            }
            Self::Revolved(body) => {
                VesselSpec::Revolved { profile_mm: body.profile_mm.iter().map(|point| point.0).collect() }
            }
        }
    }
}

impl TiltRequest {
    fn spec(&self) -> TiltSpec {
        match self {
            Self::Program(course) => {
                TiltSpec::Program { points: course.points.iter().map(|point| point.0).collect() }
            }
            Self::Steady(steady) => TiltSpec::Steady {
                rate_deg_s: steady.rate_deg_s.get(),
                hold_deg: steady.hold_deg.get(),
                hold_s: steady.hold_s.get(),
                return_rate_deg_s: steady.return_rate_deg_s.get(),
            },
        }
    }
}

impl Request for VesselPourRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        match self.question() {
            Ok(spec) => spec.faults(),
            Err(faults) => faults,
        }
    }

    fn rests_on(code: &str) -> &'static [&'static str] {
        match code {
            "over_full" | "lip_below_level" => &["vessel", "lip_position", "fill_ml"],
            "lip_inside_vessel" => &["vessel"],
            "beyond_fill" => &["fill_ml"],
            "no_return" => &["tilt", "target_ml"],
            _ => &[],
        }
    }
}

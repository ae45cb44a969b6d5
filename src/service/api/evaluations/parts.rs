//! The parts of an evaluation answer.

use std::collections::BTreeMap;

use serde::Serialize;
use utoipa::ToSchema;

use crate::{
    analysis::decision::Verdict,
    physics::{separation::numbers::Regime, stream::Control},
    service::api::{
        notice::NoticeAnswer,
        property::{AngleAnswer, PropertyAnswer},
        quantity::Number,
    },
};

/// The verdict.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum VerdictAnswer {
    /// The stream leaves, at the confidence asked for.
    Clean,
    /// Neither can be said at the confidence asked for.
    Marginal,
    /// The liquid runs down the outside, at the confidence asked for.
    Dribbles,
}

impl From<Verdict> for VerdictAnswer {
    fn from(verdict: Verdict) -> Self {
        match verdict {
            Verdict::Clean => Self::Clean,
            Verdict::Marginal => Self::Marginal,
            Verdict::Dribbles => Self::Dribbles,
        }
    }
}

/// What sets the stream.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum ControlAnswer {
    /// A level, mild or rising floor: critical just before the brink.
    Brink,
    /// A steep floor: critical at its crest, faster and thinner from there.
    Crest,
    /// A tube running full.
    Full,
}

impl From<Control> for ControlAnswer {
    fn from(control: Control) -> Self {
        match control {
            Control::Brink => Self::Brink,
            Control::Crest => Self::Crest,
            Control::Full => Self::Full,
        }
    }
}

/// What rules the stream as a whole.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum RegimeAnswer {
    /// Weber and Reynolds numbers far above 1: inertia.
    Inertial,
    /// Between the others.
    Transitional,
    /// Weber number below 2: surface tension; the liquid drips, beads or runs.
    Capillary,
    /// Reynolds number below 1: viscosity.
    Viscous,
}

impl From<Regime> for RegimeAnswer {
    fn from(regime: Regime) -> Self {
        match regime {
            Regime::Inertial => Self::Inertial,
            Regime::Transitional => Self::Transitional,
            Regime::Capillary => Self::Capillary,
            Regime::Viscous => Self::Viscous,
        }
    }
}

/// A value with its interval.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct IntervalAnswer {
    /// Best estimate.
    #[schema(value_type = f64)]
    pub value: Number,
    /// Lower end.
    #[schema(value_type = f64)]
    pub low: Number,
    /// Upper end.
    #[schema(value_type = f64)]
    pub high: Number,
}

/// The approach film.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct StreamAnswer {
    /// Pour rate.
    #[schema(value_type = f64)]
    pub flow_ml_s: Number,
    /// Thickness of the (equivalent) sheet.
    #[schema(value_type = f64)]
    pub thickness_mm: Number,
    /// The thinnest reading of the equivalent sheet of this section.
    #[schema(value_type = f64)]
    pub thickness_low_mm: Number,
    /// The thickest reading of the equivalent sheet of this section.
    #[schema(value_type = f64)]
    pub thickness_high_mm: Number,
    /// Mean speed.
    #[schema(value_type = f64)]
    pub speed_m_s: Number,
    /// We = ρU²h/γ.
    #[schema(value_type = f64)]
    pub weber: Number,
    /// Re = ρUh/μ.
    #[schema(value_type = f64)]
    pub reynolds: Number,
    /// Fr = U²/(gh).
    #[schema(value_type = f64)]
    pub froude: Number,
    /// Bo = ρg r²/γ with the edge radius r.
    #[schema(value_type = f64)]
    pub bond: Number,
    /// Ca = μU/γ.
    #[schema(value_type = f64)]
    pub capillary: Number,
    /// Thickness at the brink, for information.
    #[schema(value_type = f64)]
    pub brink_thickness_mm: Number,
    /// Speed at the brink, for information.
    #[schema(value_type = f64)]
    pub brink_speed_m_s: Number,
    /// What sets the stream.
    pub control: ControlAnswer,
    /// What rules the stream as a whole.
    pub regime: RegimeAnswer,
}

/// Where the lip changes sides.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct ThresholdAnswer {
    /// Weber number of the approach film below which the stream clings.
    #[schema(value_type = f64)]
    pub critical_weber: Number,
    /// A slowing pour starts to dribble here (advancing angle, dry outer face); null: none in the accepted range.
    #[schema(value_type = Option<f64>)]
    pub onset_flow_ml_s: Option<Number>,
    /// A lip once wetted clears above this (receding angle); null: none in the accepted range.
    pub recovery_flow_ml_s: Option<AtLeastAnswer>,
    /// Below this no free sheet can leave (We < 2), whatever the edge; null: none in the accepted range.
    #[schema(value_type = Option<f64>)]
    pub free_sheet_flow_ml_s: Option<Number>,
}

/// A lower bound.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct AtLeastAnswer {
    /// The bound. A stream on a wetted wall did not let go at all in the runs behind the coefficients.
    #[schema(value_type = f64)]
    pub at_least: Number,
}

/// What the edge can hold statically.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct PinningAnswer {
    /// Whether the contact line stays at the edge whatever the liquid does statically.
    pub edge_holds: bool,
    /// Largest contact angle against the floor at which the line stays (Gibbs), at most 180°.
    #[schema(value_type = f64)]
    pub limit_deg: Number,
    /// Whether the edge is sharp enough for that limit: radius at most a tenth of film thickness and capillary length (own judgement).
    pub sharp: bool,
}

/// What hangs, stays and runs when the pour ends.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct LastDropAnswer {
    /// Largest volume that hangs from the lip.
    #[schema(value_type = f64)]
    pub hanging_ul: Number,
    /// What is left on the lip after the drop has fallen.
    #[schema(value_type = f64)]
    pub left_on_lip_ul: Number,
    /// Largest volume that the outer wall holds.
    #[schema(value_type = f64)]
    pub held_on_wall_ul: Number,
    /// Whether what is left runs down: left on the lip exceeds held on the wall.
    pub runs_down: bool,
}

/// The adhesion estimate.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct AdhesionAnswer {
    /// Weber number at which it turns the stream by 90°.
    #[schema(value_type = f64)]
    pub critical_weber: Number,
    /// Deflection it gives at this pour rate.
    #[schema(value_type = f64)]
    pub deflection_deg: Number,
}

/// One change that reaches clean, verified by deciding the changed case.
#[derive(Debug, Clone, Serialize, ToSchema)]
pub struct RemedyAnswer<'a> {
    /// The field to change.
    #[schema(example = "/lip/edge/rounded/turn_deg")]
    pub pointer: &'static str,
    /// Its value now.
    #[schema(value_type = f64)]
    pub from: Number,
    /// The value that reaches clean.
    #[schema(value_type = f64)]
    pub to: Number,
    /// Unit of both.
    #[schema(example = "deg")]
    pub unit: &'static str,
    /// Why it helps.
    pub reason: NoticeAnswer<'a>,
}

/// One source's share of the variance of ln(safety factor).
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct ContributionAnswer {
    /// JSON Pointer of the input, `stream` (the stream model) or `model` (the separation model).
    #[schema(example = "/surface/catalogue")]
    pub source: &'static str,
    /// Share, 0 to 1.
    #[schema(value_type = f64, minimum = 0, maximum = 1)]
    pub share: Number,
}

/// The numbers really used.
#[derive(Debug, Serialize, ToSchema)]
pub struct ResolvedAnswer {
    /// Properties of the liquid.
    pub liquid: LiquidProperties,
    /// Contact angles of this liquid on this surface.
    pub surface: SurfaceAngles,
    /// Numbers of lip and pour with their standard uncertainties, by member name.
    pub lip: BTreeMap<&'static str, GivenAnswer>,
}

/// Properties of the liquid.
#[derive(Debug, Clone, Serialize, ToSchema)]
pub struct LiquidProperties {
    /// Density.
    pub density_kg_m3: PropertyAnswer,
    /// Dynamic viscosity.
    pub viscosity_mpa_s: PropertyAnswer,
    /// Surface tension.
    pub surface_tension_mn_m: PropertyAnswer,
}

/// Contact angles of this liquid on this surface.
#[derive(Debug, Clone, Serialize, ToSchema)]
pub struct SurfaceAngles {
    /// Static contact angle.
    pub contact_angle_deg: AngleAnswer,
    /// Advancing angle.
    pub advancing_deg: AngleAnswer,
    /// Receding angle.
    pub receding_deg: AngleAnswer,
    /// Which of them counted for the verdict: `advancing_deg` (dry outer face) or `receding_deg` (wet).
    #[schema(example = "advancing_deg")]
    pub counted: &'static str,
}

/// A number given by the caller, with the standard uncertainty used.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct GivenAnswer {
    /// The number.
    #[schema(value_type = f64)]
    pub value: Number,
    /// Its standard uncertainty.
    #[schema(value_type = f64)]
    pub standard_uncertainty: Number,
    /// Where the uncertainty comes from: `given` or `default`.
    #[schema(example = "default")]
    pub uncertainty_from: &'static str,
}

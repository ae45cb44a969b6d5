//! The evaluation answer.

use std::collections::BTreeMap;

use serde::Serialize;
use utoipa::ToSchema;

use crate::{
    analysis::{
        case::Confidence, decision::Verdict, evaluation::Evaluation, field::Field, notice::Notice,
        remedy::Remedy, spec::Spec, uncertainty::standard_uncertainty,
    },
    physics::{
        liquid::Property,
        quantity::{self, DEGREE, Quantity},
        separation::numbers::Regime,
        stream::Control,
    },
    service::{
        api::{
            notice::NoticeAnswer,
            property::{AngleAnswer, PropertyAnswer},
            quantity::Number,
        },
        fingerprint::ModelAnswer,
    },
};

/// What is said of one lip.
#[derive(Debug, Serialize, ToSchema)]
pub struct EvaluationAnswer<'a> {
    /// The verdict at the confidence asked for.
    pub verdict: VerdictAnswer,
    /// Degree of belief that this lip dribbles at this pour rate: Φ(−m/u) with the margin m = ln(safety factor) and its standard uncertainty u. Not a production rate.
    #[schema(value_type = f64, minimum = 0, maximum = 1)]
    pub dribble_probability: Number,
    /// Weber number over critical Weber number, with its two-sided interval at the confidence asked for.
    pub safety_factor: IntervalAnswer,
    /// The approach film: the stream on the floor just before the edge.
    pub stream: StreamAnswer,
    /// Where it changes sides.
    pub threshold: ThresholdAnswer,
    /// Deflection of the stream from the floor's direction, at the lip; null once attached.
    pub deflection_deg: Option<IntervalAnswer>,
    /// What the edge can hold statically; informative, it never softens a verdict.
    pub pinning: PinningAnswer,
    /// What hangs, stays and runs when the pour ends.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub last_drop: Option<LastDropAnswer>,
    /// Independent order-of-magnitude estimate; no verdict uses it.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub adhesion_estimate: Option<AdhesionAnswer>,
    /// Smallest single changes that reach clean; empty with a reason in `no_remedy_because` when none does.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub remedies: Option<Vec<RemedyAnswer<'a>>>,
    /// Why there are no remedies.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub no_remedy_because: Option<NoticeAnswer<'a>>,
    /// Shares of the variance of ln(safety factor), largest first.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub contributions: Option<Vec<ContributionAnswer>>,
    /// Where a number deserves less trust.
    pub warnings: Vec<NoticeAnswer<'a>>,
    /// Where the liquid can hurt someone. They defer to local codes and licensed practice.
    pub cautions: Vec<NoticeAnswer<'a>>,
    /// The numbers really used, each with its source.
    pub resolved: ResolvedAnswer,
    /// What computed this answer.
    pub model: ModelAnswer,
}

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

/// Fields of lip and pour that `resolved.lip` lists.
const LIP_FIELDS: [Field; 9] = [
    Field::SheetWidth,
    Field::VeeAngle,
    Field::TroughDiameter,
    Field::TubeBore,
    Field::EdgeRadius,
    Field::Turn,
    Field::Slope,
    Field::RunLength,
    Field::Flow,
];

impl<'a> EvaluationAnswer<'a> {
    /// Writes an evaluation in the caller's units.
    #[must_use]
    pub fn new(spec: &Spec, evaluation: &'a Evaluation, model: ModelAnswer) -> Self {
        let decision = &evaluation.decision;
        let case = &evaluation.resolved.case;
        let (low, high) = decision.safety_interval(case);
        let remedies = evaluation.remedies.as_ref();
        Self {
            verdict: decision.verdict.into(),
            dribble_probability: Number(decision.dribble_probability),
            safety_factor: IntervalAnswer {
                value: Number(decision.safety_factor()),
                low: Number(low),
                high: Number(high),
            },
            stream: stream(evaluation),
            threshold: threshold(evaluation),
            deflection_deg: deflection(evaluation, case.confidence),
            pinning: PinningAnswer {
                edge_holds: evaluation.pinning.edge_holds,
                limit_deg: degrees(evaluation.pinning.limit),
                sharp: evaluation.pinning.sharp,
            },
            last_drop: evaluation.last_drop.as_ref().map(|drop| LastDropAnswer {
                hanging_ul: microlitres(drop.hanging),
                left_on_lip_ul: microlitres(drop.left_on_lip),
                held_on_wall_ul: microlitres(drop.held_on_wall),
                runs_down: drop.runs_down,
            }),
            adhesion_estimate: evaluation.adhesion.map(|estimate| AdhesionAnswer {
                critical_weber: Number(estimate.critical_weber),
                deflection_deg: degrees(estimate.deflection),
            }),
            remedies: remedies.map(|r| r.found.iter().map(remedy).collect()),
            no_remedy_because: remedies.and_then(|r| r.none_because.as_ref()).map(NoticeAnswer::from),
            contributions: evaluation.contributions.as_ref().map(|shares| {
                let share = |c: &crate::analysis::evaluation::Contribution| ContributionAnswer {
                    source: c.source,
                    share: Number(c.share),
                };
                shares.iter().map(share).collect()
            }),
            warnings: notices(&evaluation.warnings),
            cautions: notices(&evaluation.cautions),
            resolved: resolved(spec, evaluation),
            model,
        }
    }
}

fn stream(evaluation: &Evaluation) -> StreamAnswer {
    let balance = &evaluation.decision.balance;
    let (stream, numbers) = (&balance.stream, &balance.numbers);
    StreamAnswer {
        flow_ml_s: Number(evaluation.resolved.case.flow / quantity::FLOW.to_si),
        thickness_mm: millimetres(stream.thickness),
        thickness_low_mm: millimetres(stream.thickness_low),
        thickness_high_mm: millimetres(stream.thickness_high),
        speed_m_s: Number(stream.speed),
        weber: Number(numbers.weber),
        reynolds: Number(numbers.reynolds),
        froude: Number(numbers.froude),
        bond: Number(numbers.bond),
        capillary: Number(numbers.capillary),
        brink_thickness_mm: millimetres(stream.brink_thickness),
        brink_speed_m_s: Number(stream.brink_speed),
        control: stream.control.into(),
        regime: numbers.regime().into(),
    }
}

fn threshold(evaluation: &Evaluation) -> ThresholdAnswer {
    let flow = |flow: f64| Number(flow / quantity::FLOW.to_si);
    let flows = &evaluation.flows;
    ThresholdAnswer {
        critical_weber: Number(libm::exp(evaluation.decision.balance.threshold.ln_critical_weber)),
        onset_flow_ml_s: flows.onset.map(flow),
        recovery_flow_ml_s: flows.recovery.map(|f| AtLeastAnswer { at_least: flow(f) }),
        free_sheet_flow_ml_s: flows.free_sheet.map(flow),
    }
}

fn deflection(evaluation: &Evaluation, confidence: Confidence) -> Option<IntervalAnswer> {
    let deflection = evaluation.deflection?;
    let half = confidence.two_sided * deflection.standard_uncertainty;
    let turn = evaluation.resolved.case.lip.edge.turn;
    // A stream is bent neither away from the wall nor through it.
    let (low, high) = ((deflection.angle - half).max(0.0), (deflection.angle + half).min(turn));
    Some(IntervalAnswer { value: degrees(deflection.angle), low: degrees(low), high: degrees(high) })
}

fn remedy(remedy: &Remedy) -> RemedyAnswer<'_> {
    RemedyAnswer {
        pointer: remedy.field.pointer(),
        from: Number(remedy.from),
        to: Number(remedy.to),
        unit: remedy.field.quantity().unit,
        reason: NoticeAnswer::from(&remedy.reason),
    }
}

fn resolved(spec: &Spec, evaluation: &Evaluation) -> ResolvedAnswer {
    let resolved = &evaluation.resolved;
    let property = |property: &Property, quantity: &Quantity, field: [Field; 2]| {
        let given = field.iter().find_map(|f| f.get(spec).map(|value| standard_uncertainty(spec, *f, value)));
        PropertyAnswer::new(property, quantity, given)
    };
    let lip = LIP_FIELDS
        .into_iter()
        .filter_map(|field| {
            let value = field.get(spec)?;
            let answer = GivenAnswer {
                value: Number(value),
                standard_uncertainty: Number(standard_uncertainty(spec, field, value)),
                uncertainty_from: if spec.uncertainty.get(field).is_some() { "given" } else { "default" },
            };
            Some((field.member(), answer))
        })
        .collect();
    ResolvedAnswer {
        liquid: LiquidProperties {
            density_kg_m3: property(
                &resolved.liquid.density,
                &quantity::DENSITY,
                [Field::DensityOverride, Field::MeasuredDensity],
            ),
            viscosity_mpa_s: property(
                &resolved.liquid.viscosity,
                &quantity::VISCOSITY,
                [Field::ViscosityOverride, Field::MeasuredViscosity],
            ),
            surface_tension_mn_m: property(
                &resolved.liquid.surface_tension,
                &quantity::SURFACE_TENSION,
                [Field::SurfaceTensionOverride, Field::MeasuredSurfaceTension],
            ),
        },
        surface: SurfaceAngles {
            contact_angle_deg: AngleAnswer::from(&resolved.angles.contact),
            advancing_deg: AngleAnswer::from(&resolved.angles.advancing),
            receding_deg: AngleAnswer::from(&resolved.angles.receding),
            counted: match spec.outer_face {
                crate::analysis::spec::OuterFace::Dry => "advancing_deg",
                crate::analysis::spec::OuterFace::Wet => "receding_deg",
            },
        },
        lip,
    }
}

fn notices(notices: &[Notice]) -> Vec<NoticeAnswer<'_>> {
    notices.iter().map(NoticeAnswer::from).collect()
}

fn degrees(radians: f64) -> Number {
    Number(radians / DEGREE)
}

fn millimetres(metres: f64) -> Number {
    Number(metres * 1e3)
}

fn microlitres(cubic_metres: f64) -> Number {
    Number(cubic_metres * 1e9)
}

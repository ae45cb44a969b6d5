//! The evaluation answer.

use serde::Serialize;
use utoipa::ToSchema;

use super::parts::{
    AdhesionAnswer, AtLeastAnswer, ContributionAnswer, GivenAnswer, IntervalAnswer, LastDropAnswer,
    LiquidProperties, PinningAnswer, RemedyAnswer, ResolvedAnswer, StreamAnswer, SurfaceAngles,
    ThresholdAnswer, VerdictAnswer,
};

use crate::{
    analysis::{
        case::Confidence, evaluation::Evaluation, field::Field, notice::Notice, remedy::Remedy, spec::Spec,
        uncertainty::standard_uncertainty,
    },
    physics::{
        liquid::Property,
        quantity::{self, DEGREE, Quantity},
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

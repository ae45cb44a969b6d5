//! The evaluation as a picture: the answer's numbers in words beside the lip.

use super::answer::EvaluationAnswer;
use super::parts::{IntervalAnswer, RegimeAnswer};
use crate::{
    analysis::{
        decision::Verdict,
        evaluation::Evaluation,
        spec::{LiquidSpec, OuterFace, Spec, SurfaceSpec},
    },
    service::{
        api::quantity::Number,
        render::{Between, Heading, LipPicture, lip, percent, significant, with_unit},
    },
};

/// Draws the evaluation.
pub(super) fn picture(spec: &Spec, evaluation: &Evaluation, answer: &EvaluationAnswer<'_>) -> String {
    let stream = &evaluation.decision.balance.stream;
    let verdict = evaluation.decision.verdict;
    let facts = facts(spec, answer);
    let note = format!(
        "dribble-risk {}, coefficients {}, fingerprint {}",
        answer.model.version, answer.model.coefficients, answer.model.fingerprint
    );
    lip(&LipPicture {
        heading: Heading { title: &title(verdict, answer), subtitle: &conditions(spec), note: &note },
        verdict,
        section: spec.section,
        radius_mm: spec.radius_mm,
        turn_deg: spec.turn_deg,
        slope_deg: spec.slope_deg,
        length_mm: spec.length_mm,
        depth_mm: stream.depth * 1e3,
        brink_mm: stream.brink_depth * 1e3,
        brink_speed_m_s: stream.brink_speed,
        deflection_deg: answer.deflection_deg.map(|d| Between {
            value: d.value.0,
            low: d.low.0,
            high: d.high.0,
        }),
        facts: &facts,
    })
}

fn title(verdict: Verdict, answer: &EvaluationAnswer<'_>) -> String {
    let says = match verdict {
        Verdict::Clean => "Clean: the stream leaves the lip",
        Verdict::Marginal => "Marginal: it may leave or dribble",
        Verdict::Dribbles => "Dribbles: the liquid runs down the outside",
    };
    // A degree of belief is never certainty, whatever the last digit says.
    let probability = answer.dribble_probability.0.clamp(1e-9, 1.0 - 1e-9);
    format!("{says}; dribble probability {}", percent(probability))
}

/// What is poured over what.
pub(in crate::service::api) fn materials(spec: &Spec) -> String {
    let liquid = match &spec.liquid {
        LiquidSpec::Catalogue { entry, conditions, .. } => {
            format!("{} at {}", entry.name, with_unit(conditions.temperature_c, "°C"))
        }
        LiquidSpec::Measured { .. } => "Measured liquid".to_owned(),
    };
    let surface = match &spec.surface {
        SurfaceSpec::Catalogue { material, state } => {
            format!("{} ({})", material.name, state.as_str().replace('_', " "))
        }
        SurfaceSpec::Measured { .. } => "measured contact angles".to_owned(),
        SurfaceSpec::Estimated { .. } => "angles estimated from surface energy".to_owned(),
    };
    let face = match spec.outer_face {
        OuterFace::Dry => "dry",
        OuterFace::Wet => "wet",
    };
    format!("{liquid} · {surface}, outer face {face}")
}

/// The conditions of a question in a line.
#[must_use]
pub fn conditions(spec: &Spec) -> String {
    format!(
        "{} · {} · verdict and intervals at {} confidence",
        materials(spec),
        with_unit(spec.flow_ml_s, "mL/s"),
        percent(spec.confidence)
    )
}

fn facts(spec: &Spec, answer: &EvaluationAnswer<'_>) -> Vec<(String, String)> {
    let stream = &answer.stream;
    let threshold = &answer.threshold;
    let words = |number: Number| significant(number.0, 3);
    let interval = |i: &IntervalAnswer| format!("{} ({} to {})", words(i.value), words(i.low), words(i.high));
    let flow = |flow: Option<Number>| {
        flow.map_or_else(|| "none in range".to_owned(), |flow| with_unit(flow.0, "mL/s"))
    };
    let regime = match stream.regime {
        RegimeAnswer::Inertial => "inertial",
        RegimeAnswer::Transitional => "transitional",
        RegimeAnswer::Capillary => "capillary",
        RegimeAnswer::Viscous => "viscous",
    };
    let surface = &answer.resolved.surface;
    let (counted, angle) = match spec.outer_face {
        OuterFace::Dry => ("advancing", &surface.advancing_deg),
        OuterFace::Wet => ("receding", &surface.receding_deg),
    };
    let mut facts = vec![
        ("Safety factor (Weber over critical)", interval(&answer.safety_factor)),
        ("Weber number; critical", format!("{}; {}", words(stream.weber), words(threshold.critical_weber))),
        (
            "Stream, as an equivalent sheet",
            format!(
                "{} thick, {}, {regime}",
                with_unit(stream.thickness_mm.0, "mm"),
                with_unit(stream.speed_m_s.0, "m/s")
            ),
        ),
        ("A slowing pour dribbles below", flow(threshold.onset_flow_ml_s)),
        ("Once wet, clears above at least", flow(threshold.recovery_flow_ml_s.as_ref().map(|f| f.at_least))),
    ];
    if let Some(deflection) = &answer.deflection_deg {
        facts.push(("Deflection, degrees", interval(deflection)));
    }
    facts.push((
        if counted == "advancing" { "Contact angle, advancing" } else { "Contact angle, receding" },
        format!("{} ± {}", with_unit(angle.value.0, "deg"), with_unit(angle.standard_uncertainty.0, "deg")),
    ));
    facts.push(("Floor before the edge", with_unit(spec.length_mm, "mm")));
    facts.into_iter().map(|(name, value)| (name.to_owned(), value)).collect()
}

//! Properties that hold for any request: an answer or a problem document, finite numbers, and the trends of the trade.

use dribble_risk::service::api::evaluations::evaluate_json;
use proptest::{prelude::*, test_runner::TestCaseError};
use serde_json::{Value, json};

use crate::evaluations::request;

/// Members that may be null in an answer.
const MAY_BE_NULL: [&str; 4] =
    ["deflection_deg", "onset_flow_ml_s", "recovery_flow_ml_s", "free_sheet_flow_ml_s"];

fn no_null(at: &Value, name: &str) -> Result<(), TestCaseError> {
    match at {
        Value::Null => {
            prop_assert!(MAY_BE_NULL.contains(&name), "{name} is null");
        }
        Value::Object(members) => {
            for (name, value) in members {
                no_null(value, name)?;
            }
        }
        Value::Array(items) => {
            for item in items {
                no_null(item, name)?;
            }
        }
        Value::Bool(_) | Value::Number(_) | Value::String(_) => {}
    }
    Ok(())
}

/// 200 with finite numbers, or a problem that says what is wrong and where.
fn answered(text: &str) -> Result<Option<Value>, TestCaseError> {
    match evaluate_json(text.as_bytes()) {
        Ok(bytes) => {
            let answer: Value = serde_json::from_slice(&bytes).unwrap();
            no_null(&answer, "")?;
            Ok(Some(answer))
        }
        Err(problem) => {
            let status = problem.kind.status().as_u16();
            prop_assert!([400, 422].contains(&status), "{problem:?}");
            if status == 422 {
                prop_assert!(!problem.errors.is_empty());
                prop_assert!(
                    problem.errors.iter().all(|e| e.code != "invalid" && e.code != "not_computable"),
                    "{problem:?}"
                );
            }
            Ok(None)
        }
    }
}

fn logarithmic(low: f64, high: f64) -> impl Strategy<Value = f64> {
    (libm::log(low)..libm::log(high)).prop_map(libm::exp)
}

fn section() -> impl Strategy<Value = Value> {
    prop_oneof![
        logarithmic(1.0, 2000.0).prop_map(|w| json!({"sheet": {"width_mm": w}})),
        (20.0..170.0).prop_map(|a| json!({"vee": {"included_angle_deg": a}})),
        logarithmic(1.0, 500.0).prop_map(|d| json!({"trough": {"diameter_mm": d}})),
        logarithmic(0.5, 200.0).prop_map(|d| json!({"tube": {"bore_mm": d}})),
    ]
}

fn lip() -> impl Strategy<Value = Value> {
    let radius = prop_oneof![Just(0.0), logarithmic(0.001, 50.0)];
    (section(), radius, 20.0..180.0, -19.0..85.0, prop_oneof![Just(0.0), 0.0..1000.0]).prop_map(
        |(section, radius, turn, slope, length)| {
            json!({"section": section, "edge": {"rounded": {"radius_mm": radius, "turn_deg": turn}},
                   "run": {"slope_deg": slope, "length_mm": length}})
        },
    )
}

fn measured_liquid() -> impl Strategy<Value = Value> {
    (500.0..4000.0, logarithmic(0.1, 1e6), 5.0..200.0).prop_map(|(density, viscosity, tension)| {
        json!({"measured": {"density_kg_m3": density, "viscosity_mpa_s": viscosity, "surface_tension_mn_m": tension}})
    })
}

fn liquid() -> impl Strategy<Value = Value> {
    let entries = dribble_risk::physics::liquid::catalogue();
    let shares = proptest::collection::vec(0.0..1.0_f64, 3);
    let catalogue = (0..entries.len(), -10.0..110.0, shares).prop_map(move |(i, temperature, shares)| {
        let mut liquid = json!({"id": entries[i].id, "temperature_c": temperature});
        for (parameter, share) in entries[i].parameters.iter().zip(shares) {
            let value = parameter.minimum + share * (parameter.maximum - parameter.minimum);
            liquid[parameter.component.field()] = json!(value);
        }
        json!({"catalogue": liquid})
    });
    prop_oneof![measured_liquid(), catalogue]
}

fn surface() -> impl Strategy<Value = Value> {
    let materials = dribble_risk::physics::surface::catalogue();
    let state = prop_oneof![Just("clean"), Just("in_use"), Just("worn")];
    prop_oneof![
        (0.0..180.0_f64, 0.0..1.0_f64, 0.0..1.0_f64).prop_map(|(contact, up, down)| {
            json!({"measured": {"contact_angle_deg": contact, "advancing_deg": contact + up * (180.0 - contact), "receding_deg": contact * down}})
        }),
        (0..materials.len(), state)
            .prop_map(move |(i, state)| json!({"catalogue": {"id": materials[i].id, "state": state}})),
        (0.0..80.0, 0.0..60.0, 1.0..3.0).prop_map(|(d, p, r)| {
            json!({"estimated": {"dispersive_mn_m": d, "polar_mn_m": p, "roughness_ratio": r}})
        }),
    ]
}

fn any_request() -> impl Strategy<Value = Value> {
    let face = prop_oneof![Just("dry"), Just("wet")];
    (lip(), surface(), liquid(), logarithmic(0.01, 20_000.0), face, 0.5..0.9999, any::<bool>()).prop_map(
        |(lip, surface, liquid, flow, face, confidence, all)| {
            let mut request = json!({"lip": lip, "surface": surface, "liquid": liquid, "pour": {"flow_ml_s": flow},
                                     "outer_face": face, "confidence": confidence});
            if !all {
                request["include"] = json!([]);
            }
            request
        },
    )
}

/// A value that may stand anywhere in a careless request.
fn any_value() -> impl Strategy<Value = Value> {
    prop_oneof![
        Just(Value::Null),
        any::<bool>().prop_map(Value::from),
        any::<f64>().prop_filter("JSON has no NaN", |x| x.is_finite()).prop_map(Value::from),
        any::<i64>().prop_map(Value::from),
        "\\PC{0,12}".prop_map(Value::from),
        Just(json!([])),
        Just(json!({})),
        Just(json!([{"lip": {}}])),
    ]
}

fn pointers(at: &Value, pointer: &str, found: &mut Vec<String>) {
    if let Value::Object(members) = at {
        for (name, value) in members {
            let pointer = format!("{pointer}/{}", name.replace('~', "~0").replace('/', "~1"));
            pointers(value, &pointer, found);
            found.push(pointer);
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 600, ..ProptestConfig::default() })]

    #[test]
    fn any_sound_request_is_answered_with_finite_numbers(request in any_request()) {
        let _ = answered(&request.to_string())?;
    }

    #[test]
    fn any_sound_request_with_a_calibration_is_answered_with_finite_numbers(mut request in any_request()) {
        request["calibration"] = crate::calibrations::example_calibration().clone();
        answered(&request.to_string())?;
    }

    #[test]
    fn any_careless_request_is_answered_or_explained(mut request in any_request(), changes in proptest::collection::vec((any::<prop::sample::Index>(), any_value(), "\\PC{0,8}"), 1..4)) {
        for (place, value, name) in changes {
            let mut found = Vec::new();
            pointers(&request, "", &mut found);
            let pointer = &found[place.index(found.len())];
            match request.pointer_mut(pointer) {
                Some(Value::Object(members)) if name.len() > 4 => { members.insert(name, value); }
                Some(there) => *there = value,
                None => {}
            }
        }
        let _ = answered(&request.to_string())?;
    }

    #[test]
    fn any_text_is_answered_or_explained(text in "\\PC{0,200}", cut in 0_usize..400) {
        let _ = answered(&text)?;
        let whole = request().to_string();
        let cut = whole.char_indices().map(|(i, _)| i).rfind(|i| *i <= cut).unwrap_or(0);
        let _ = answered(&whole[..cut])?;
    }
}

/// ln of the safety factor at a request.
fn margin(request: &Value) -> Option<f64> {
    let answer: Value = serde_json::from_slice(&evaluate_json(request.to_string().as_bytes()).ok()?).unwrap();
    Some(libm::log(answer["safety_factor"]["value"].as_f64()?))
}

/// A request in which the trends are looked at: measured liquid and angle.
fn plain() -> impl Strategy<Value = Value> {
    (lip(), measured_liquid(), 0.0..180.0, logarithmic(0.1, 2000.0)).prop_map(|(lip, liquid, angle, flow)| {
        json!({"lip": lip, "surface": {"measured": {"advancing_deg": angle}}, "liquid": liquid, "pour": {"flow_ml_s": flow}, "include": []})
    })
}

fn raised(request: &Value, pointer: &str, to: f64) -> Value {
    let mut request = request.clone();
    *request.pointer_mut(pointer).unwrap() = json!(to);
    request
}

/// Slack for rounding and for the root-finders.
const SLACK: f64 = 1e-7;

proptest! {
    #![proptest_config(ProptestConfig { cases: 1500, ..ProptestConfig::default() })]

    // Common practice, no source: faster, sharper, more hydrophobic is never riskier.
    #[test]
    fn faster_is_never_riskier(request in plain(), factor in 1.0..10.0_f64) {
        let flow = request["pour"]["flow_ml_s"].as_f64().unwrap();
        let (Some(slow), Some(fast)) = (margin(&request), margin(&raised(&request, "/pour/flow_ml_s", flow * factor))) else { return Ok(()) };
        prop_assert!(fast >= slow - SLACK, "{slow} → {fast}");
    }

    #[test]
    fn sharper_is_never_riskier(request in plain(), share in 0.0..1.0_f64) {
        let radius = request["lip"]["edge"]["rounded"]["radius_mm"].as_f64().unwrap();
        let (Some(blunt), Some(sharp)) = (margin(&request), margin(&raised(&request, "/lip/edge/rounded/radius_mm", radius * share))) else { return Ok(()) };
        prop_assert!(sharp >= blunt - SLACK, "{blunt} → {sharp}");
    }

    #[test]
    fn more_hydrophobic_is_never_riskier(request in plain(), share in 0.0..1.0_f64) {
        let angle = request["surface"]["measured"]["advancing_deg"].as_f64().unwrap();
        let (Some(before), Some(after)) = (margin(&request), margin(&raised(&request, "/surface/measured/advancing_deg", angle + share * (180.0 - angle)))) else { return Ok(()) };
        prop_assert!(after >= before - SLACK, "{before} → {after}");
    }

    #[test]
    fn turning_further_is_never_riskier(request in plain(), share in 0.0..1.0_f64) {
        let turn = request["lip"]["edge"]["rounded"]["turn_deg"].as_f64().unwrap();
        let (Some(before), Some(after)) = (margin(&request), margin(&raised(&request, "/lip/edge/rounded/turn_deg", turn + share * (180.0 - turn)))) else { return Ok(()) };
        prop_assert!(after >= before - SLACK, "{before} → {after}");
    }

    // A wet face is never safer than a dry one.
    #[test]
    fn a_wet_face_is_never_safer(mut request in plain()) {
        let dry = margin(&request);
        request["outer_face"] = "wet".into();
        let (Some(dry), Some(wet)) = (dry, margin(&request)) else { return Ok(()) };
        prop_assert!(wet <= dry + SLACK, "{dry} → {wet}");
    }
}

//! Contact angles by several models side by side.

use dribble_risk::service::{
    api::contact_angles::{EXAMPLE, contact_angles_json},
    openapi_json,
    problem::ProblemKind,
};
use http::StatusCode;
use proptest::prelude::{Just, Strategy, any, prop, prop_assert, prop_oneof, proptest};
use serde_json::{Value, json};

use crate::ask::{get_with, post_json, service, state};

fn water() -> Value {
    json!({"catalogue": {"id": "water"}})
}

/// A liquid of 72.8 mN/m of which nothing else is known.
fn like_water() -> Value {
    json!({"measured": {"density_kg_m3": 998, "viscosity_mpa_s": 1, "surface_tension_mn_m": 72.8}})
}

#[track_caller]
fn ask(request: &Value) -> Value {
    let answer = contact_angles_json(request.to_string().as_bytes());
    serde_json::from_slice(&answer.unwrap_or_else(|problem| panic!("{problem:?}"))).unwrap()
}

#[track_caller]
fn about(liquid: Value, solid: Value) -> Value {
    ask(&Value::Object([("liquid".into(), liquid), ("solid".into(), solid)].into_iter().collect()))
}

#[track_caller]
fn estimate<'a>(answer: &'a Value, model: &str) -> &'a Value {
    answer["estimates"].as_array().unwrap().iter().find(|e| e["model"] == model).unwrap()
}

#[track_caller]
fn near(value: &Value, wanted: f64, tolerance: f64) {
    let value = value.as_f64().unwrap_or_else(|| panic!("{value} is no number"));
    assert!((value - wanted).abs() <= tolerance, "{value} is not {wanted} ± {tolerance}");
}

fn probes(angles: &[(&str, f64)]) -> Value {
    let list = angles.iter().map(|(liquid, angle)| json!({"liquid": liquid, "contact_angle_deg": angle}));
    json!({"probe_angles": list.collect::<Vec<_>>()})
}

/// Owens & Wendt 1969, poly(methyl methacrylate): water 80°, diiodomethane 41° → 35.9 + 4.3 mN/m (published, from memory).
#[test]
fn components_from_two_probe_liquids() {
    let answer = about(water(), probes(&[("water", 80.0), ("diiodomethane", 41.0)]));
    let components = &answer["solid"]["components"];
    near(&components["dispersive_mn_m"]["value"], 35.9, 0.2);
    near(&components["polar_mn_m"]["value"], 4.3, 0.2);
    assert!(components["polar_mn_m"]["standard_uncertainty"].as_f64().unwrap() > 0.5);
    assert_eq!(answer["solid"]["basis"], "derived");
    assert_eq!(answer["solid"]["acid_base"], Value::Null);
    // Back to the probe's own angle; water here is 72.74 mN/m, the probe's 72.8.
    near(&estimate(&answer, "owens_wendt")["contact_angle_deg"], 80.0, 0.2);
    assert!(estimate(&answer, "van_oss")["detail"].as_str().unwrap().contains("3 needed"));
    let codes: Vec<&Value> = answer["warnings"].as_array().unwrap().iter().map(|w| &w["code"]).collect();
    assert_eq!(codes, ["one_equilibrium_angle", "measured_angle_at_hand"]);
}

/// Stainless steel in Foods 2021, 10:611, table 2: diiodomethane 41.4°, water 85.6°, formamide 55.7° → γ⁺ 0.5, γ⁻ 1.7, AB 1.8, total 40.7 mN/m (published).
#[test]
fn components_from_three_probe_liquids() {
    let solid = probes(&[("diiodomethane", 41.4), ("water", 85.6), ("formamide", 55.7)]);
    let answer = about(water(), solid);
    let found = &answer["solid"]["acid_base"];
    near(&found["plus_mn_m"]["value"], 0.5, 0.15);
    near(&found["minus_mn_m"]["value"], 1.7, 0.5);
    near(&found["acid_base_mn_m"]["value"], 1.8, 0.15);
    near(&found["total_mn_m"]["value"], 40.7, 0.15);
    near(&estimate(&answer, "van_oss")["contact_angle_deg"], 85.6, 0.2);
}

/// Each model forward: Owens & Wendt's own polymer; Neumann's 29.224 mN/m for 90° with 72.8 mN/m (derived from the formula); Young's right angle;
/// Wenzel's and Cassie & Baxter's 110° (derived from the formulas).
#[test]
fn models_forward() {
    let pmma = about(water(), json!({"components": {"dispersive_mn_m": 35.9, "polar_mn_m": 4.3}}));
    near(&estimate(&pmma, "owens_wendt")["contact_angle_deg"], 80.0, 0.5);
    assert_eq!(pmma["wettability"], "hydrophilic");
    let total = about(like_water(), json!({"total": {"total_mn_m": 29.2241595582}}));
    near(&estimate(&total, "neumann")["contact_angle_deg"], 90.0, 0.01);
    assert_eq!((&total["wettability"], &total["wettability_by"]), (&"neutral".into(), &"neumann".into()));
    let even = json!({"interfacial": {"solid_vapour_mn_m": 30, "solid_liquid_mn_m": 30}});
    near(&estimate(&about(like_water(), even), "young")["contact_angle_deg"], 90.0, 1e-9);
    // Teflon-like: no acid, no base. γ (1 + cos θ) = 2 √(γ_S^LW γ^LW) = 2 √(18 · 21.8): 117.2°.
    let apolar = json!({"acid_base": {"lw_mn_m": 18, "plus_mn_m": 0, "minus_mn_m": 0}});
    near(&estimate(&about(water(), apolar), "van_oss")["contact_angle_deg"], 117.2, 0.2);

    // cos 110° = −0.34202.
    let at_110 = json!({"interfacial": {"solid_vapour_mn_m": 20, "solid_liquid_mn_m": 44.89907}});
    let mut request = json!({"liquid": like_water(), "solid": at_110, "texture": {"roughness_ratio": 1.5}});
    let rough = ask(&request);
    near(&estimate(&rough, "young")["contact_angle_deg"], 110.0, 0.001);
    near(&estimate(&rough, "wenzel")["contact_angle_deg"], 120.8658824731, 0.05);
    assert_eq!(rough["wettability_by"], "wenzel");
    request["texture"] = json!({"solid_fraction": 0.1});
    let tips = ask(&request);
    near(&estimate(&tips, "cassie_baxter")["contact_angle_deg"], 159.0996049042, 0.05);
    assert_eq!(tips["wettability"], "superhydrophobic");
    assert_eq!(estimate(&tips, "wenzel")["applies"], false);
}

#[test]
fn every_model_stands_in_every_answer_with_its_uncertainty_or_its_reason() {
    for (name, solid) in solids() {
        for liquid in [water(), like_water(), json!({"catalogue": {"id": "coffee"}})] {
            let answer = about(liquid, solid.clone());
            let models: Vec<&Value> =
                answer["estimates"].as_array().unwrap().iter().map(|e| &e["model"]).collect();
            assert_eq!(
                models,
                ["young", "owens_wendt", "van_oss", "neumann", "wenzel", "cassie_baxter"],
                "{name}"
            );
            assert!(answer["estimates"].as_array().unwrap().iter().any(|e| e["applies"] == true), "{name}");
            for estimate in answer["estimates"].as_array().unwrap() {
                assert!(estimate["detail"].as_str().unwrap().len() > 10);
                let applies = estimate["applies"] == true;
                assert_eq!(applies, estimate["contact_angle_deg"].is_number(), "{estimate}");
                assert_eq!(applies, estimate["standard_uncertainty_deg"].is_number(), "{estimate}");
                if applies {
                    assert!(estimate["standard_uncertainty_deg"].as_f64().unwrap() > 0.0, "{estimate}");
                }
            }
        }
    }
}

#[test]
fn what_is_missing_is_said_not_filled_in() {
    let components = json!({"components": {"dispersive_mn_m": 30, "polar_mn_m": 5}});
    let unsplit = about(like_water(), components);
    let lacking = estimate(&unsplit, "owens_wendt");
    assert_eq!((&lacking["applies"], &lacking["contact_angle_deg"]), (&false.into(), &Value::Null));
    assert!(lacking["detail"].as_str().unwrap().contains("dispersive share"));
    assert_eq!(unsplit["wettability_by"], "neumann");

    let acid_base = json!({"acid_base": {"lw_mn_m": 40, "plus_mn_m": 0.1, "minus_mn_m": 10}});
    let applies = |liquid: Value| estimate(&about(liquid, acid_base.clone()), "van_oss")["applies"] == true;
    assert!(applies(water()) && applies(json!({"catalogue": {"id": "ethylene-glycol"}})));
    assert!(applies(json!({"catalogue": {"id": "glycerol-solution", "mass_fraction": 1}})));
    assert!(!applies(json!({"catalogue": {"id": "glycerol-solution", "mass_fraction": 0.9}})));
    assert!(!applies(json!({"catalogue": {"id": "water", "surface_tension_mn_m": 40}})));
    assert!(!applies(json!({"catalogue": {"id": "olive-oil"}})));

    let contradicting = about(water(), probes(&[("water", 125.0), ("diiodomethane", 20.0)]));
    let reason = estimate(&contradicting, "owens_wendt")["detail"].as_str().unwrap();
    assert!(reason.contains("negative"), "{reason}");
    assert_eq!(contradicting["solid"]["components"], Value::Null);

    let beyond = ask(
        &json!({"liquid": water(), "solid": {"components": {"dispersive_mn_m": 18.6, "polar_mn_m": 0.5}},
        "texture": {"roughness_ratio": 4}}),
    );
    assert_eq!(estimate(&beyond, "wenzel")["applies"], false);
    assert_eq!(beyond["warnings"][1]["code"], "texture_not_applied");
    assert_ne!(beyond["wettability_by"], "wenzel");
}

#[test]
fn same_request_same_bytes_and_the_fingerprint_follows_the_request() {
    let first = contact_angles_json(EXAMPLE.as_bytes()).unwrap();
    assert_eq!(first, contact_angles_json(EXAMPLE.as_bytes()).unwrap());
    let mut request: Value = serde_json::from_str(EXAMPLE).unwrap();
    let fingerprint = |request: &Value| ask(request)["model"]["fingerprint"].clone();
    let plain = fingerprint(&request);
    request["coefficients"] = "set-1".into();
    assert_eq!(fingerprint(&request), plain, "a default given is a default filled in");
    request["texture"]["roughness_ratio"] = json!(1.3);
    assert_ne!(fingerprint(&request), plain);
}

#[tokio::test]
async fn the_resource_answers_and_refuses() {
    let service = service(&state(|_| {}));
    let document: Value = serde_json::from_str(&openapi_json().unwrap()).unwrap();
    let operation = &document["paths"]["/v1/contact-angles"]["post"];
    let reference =
        operation["requestBody"]["content"]["application/json"]["schema"]["$ref"].as_str().unwrap();
    let examples = document.pointer(&reference[1..]).unwrap()["examples"].as_array().unwrap();
    assert!(!examples.is_empty());
    for example in examples {
        let answer = post_json(&service, "/v1/contact-angles", example.to_string()).await;
        assert_eq!(answer.status, StatusCode::OK, "{:?}", answer.body);
        assert_eq!(answer.header("content-type"), "application/json");
    }
    let wrong = post_json(&service, "/v1/contact-angles", "{}").await;
    assert_eq!(wrong.status, StatusCode::UNPROCESSABLE_ENTITY);
    assert_eq!(wrong.problem()["errors"].as_array().unwrap().len(), 2);
    assert_eq!(post_json(&service, "/v1/contact-angles", "{").await.status, StatusCode::BAD_REQUEST);
    let get = get_with(&service, "/v1/contact-angles", &[]).await;
    assert_eq!(get.status, StatusCode::METHOD_NOT_ALLOWED);
}

/// A request for each way of knowing a solid.
fn solids() -> [(&'static str, Value); 5] {
    [
        ("components", json!({"components": {"dispersive_mn_m": 30.0, "polar_mn_m": 5.0}})),
        ("acid_base", json!({"acid_base": {"lw_mn_m": 40.0, "minus_mn_m": 10.0, "plus_mn_m": 0.1}})),
        ("total", json!({"total": {"total_mn_m": 35.0}})),
        ("interfacial", json!({"interfacial": {"solid_liquid_mn_m": 25.0, "solid_vapour_mn_m": 40.0}})),
        ("probe_angles", probes(&[("water", 80.0), ("diiodomethane", 41.0), ("formamide", 58.0)])),
    ]
}

/// Pointers of all members, inner ones included.
fn members(at: &str, value: &Value, found: &mut Vec<String>) {
    match value {
        Value::Object(inner) => {
            for (name, value) in inner {
                let pointer = format!("{at}/{name}");
                members(&pointer, value, found);
                found.push(pointer);
            }
        }
        Value::Array(items) => {
            items.iter().enumerate().for_each(|(i, item)| members(&format!("{at}/{i}"), item, found));
        }
        _ => {}
    }
}

fn with(request: &Value, pointer: &str, value: Value) -> Value {
    let mut changed = request.clone();
    *changed.pointer_mut(pointer).unwrap() = value;
    changed
}

/// The pointers of the faults of this text; none if it is accepted.
#[track_caller]
fn faults(text: &str) -> Vec<String> {
    match contact_angles_json(text.as_bytes()) {
        Ok(_) => Vec::new(),
        Err(problem) => {
            assert_eq!(problem.kind, ProblemKind::InvalidRequest, "{text}: {problem:?}");
            assert!(!problem.errors.is_empty());
            problem.errors.into_iter().map(|fault| fault.pointer).collect()
        }
    }
}

#[test]
fn bad_input_is_pointed_at() {
    let optional = ["/coefficients", "/texture", "/liquid/catalogue/temperature_c"];
    for ((name, solid), texture) in solids()
        .into_iter()
        .zip([json!({"roughness_ratio": 1.5}), json!({"solid_fraction": 0.2})].iter().cycle())
    {
        let request = json!({"coefficients": "set-1", "liquid": {"catalogue": {"id": "sucrose-solution", "temperature_c": 20.0, "mass_fraction": 0.3}},
            "solid": solid, "texture": texture});
        assert!(faults(&request.to_string()).is_empty(), "{name}");
        let mut pointers = Vec::new();
        members("", &request, &mut pointers);
        for pointer in &pointers {
            let choice = ["/liquid", "/solid", "/texture"]
                .iter()
                .find(|at| pointer.strip_prefix(**at).is_some_and(|rest| rest.matches('/').count() == 1));
            // Missing: at the place where it would be; a choice that is not made, at the object that makes it.
            let (parent, member) = pointer.rsplit_once('/').unwrap();
            let mut without = request.clone();
            without.pointer_mut(parent).unwrap().as_object_mut().unwrap().remove(member);
            let found = faults(&without.to_string());
            if optional.contains(&pointer.as_str()) {
                assert!(found.is_empty(), "{pointer}: {found:?}");
            } else {
                assert_eq!(found, [choice.map_or(pointer.as_str(), |at| at)], "{name} without {pointer}");
            }
            for bad in
                [json!(null), json!(true), json!("x"), json!([[]]), json!({"x": 1}), json!(-1e9), json!(1e9)]
            {
                let text = with(&request, pointer, bad.clone()).to_string();
                let found = faults(&text);
                assert!(found.iter().any(|at| at.starts_with(pointer.as_str())), "{text}: {found:?}");
            }
            let huge = with(&request, pointer, json!("@")).to_string().replace("\"@\"", "1e999");
            assert!(faults(&huge).contains(pointer), "{huge}");
            if request.pointer(pointer).unwrap().is_number() {
                // Zero is a sound number for some fields.
                let zero = faults(&with(&request, pointer, json!(0)).to_string());
                assert!(zero.is_empty() || zero == [pointer.clone()], "{pointer}: {zero:?}");
            }
            let mut neighbour = request.clone();
            neighbour.pointer_mut(parent).unwrap()["neighbour"] = json!(1);
            let unknown = faults(&neighbour.to_string());
            assert!(unknown.contains(&format!("{parent}/neighbour")), "{neighbour}: {unknown:?}");
        }
    }
}

#[test]
fn all_faults_come_together() {
    let text = r#"{"coefficients": "set-0", "liquid": {"catalogue": {"id": "watr"}}, "solid": {"probe_angles": []}, "texture": {"roughness_ratio": 0.5}}"#;
    let mut found = faults(text);
    found.sort();
    assert_eq!(
        found,
        ["/coefficients", "/liquid/catalogue/id", "/solid/probe_angles", "/texture/roughness_ratio"]
    );
    let mut found = faults(
        r#"{"liquid": {"catalogue": {"id": "sucrose-solution", "temperature_c": -30}}, "solid": {"probe_angles": []}}"#,
    );
    found.sort();
    assert_eq!(found, ["/liquid/catalogue/mass_fraction", "/solid/probe_angles"]);
    let unknown = contact_angles_json(
        json!({"liquid": water(), "solid": probes(&[("benzene", 10.0)])}).to_string().as_bytes(),
    );
    let fault = unknown.unwrap_err().errors.remove(0);
    assert_eq!(fault.pointer, "/solid/probe_angles/0/liquid");
    assert!(fault.choices.contains(&"diiodomethane".to_owned()));
    let many = json!({"liquid": water(), "solid": probes(&[("water", 80.0); 33])}).to_string();
    assert_eq!(faults(&many), ["/solid/probe_angles"]);
}

fn energy() -> impl Strategy<Value = f64> {
    prop_oneof![Just(0.0), 0.0..=500.0, 0.0..=60.0]
}

fn solid() -> impl Strategy<Value = Value> {
    const NAMES: &[&str] =
        &["water", "diiodomethane", "formamide", "ethylene-glycol", "glycerol", "hexadecane"];
    prop_oneof![
        (energy(), energy())
            .prop_map(|(d, p)| json!({"components": {"dispersive_mn_m": d, "polar_mn_m": p}})),
        (energy(), energy(), energy())
            .prop_map(|(l, p, m)| json!({"acid_base": {"lw_mn_m": l, "plus_mn_m": p, "minus_mn_m": m}})),
        energy().prop_map(|t| json!({"total": {"total_mn_m": t}})),
        (energy(), energy())
            .prop_map(|(v, l)| json!({"interfacial": {"solid_vapour_mn_m": v, "solid_liquid_mn_m": l}})),
        prop::collection::vec((prop::sample::select(NAMES), prop_oneof![Just(0.0), 0.0..=180.0]), 1..6)
            .prop_map(|list| probes(&list)),
    ]
}

proptest! {
    #[test]
    fn any_request_in_range_has_a_finite_answer(
        solid in solid(), tension in 5.0..=200.0f64, known in any::<bool>(), temperature in 0.0..=100.0f64,
        texture in prop_oneof![
            (1.0..=20.0f64).prop_map(|r| json!({"roughness_ratio": r})),
            (0.001..=1.0f64).prop_map(|f| json!({"solid_fraction": f})),
        ],
    ) {
        let liquid = if known {
            json!({"catalogue": {"id": "water", "temperature_c": temperature}})
        } else {
            json!({"measured": {"density_kg_m3": 1000, "viscosity_mpa_s": 1, "surface_tension_mn_m": tension}})
        };
        let answer = ask(&json!({"liquid": liquid, "solid": solid, "texture": texture}));
        for estimate in answer["estimates"].as_array().unwrap() {
            if estimate["applies"] == true {
                let angle = estimate["contact_angle_deg"].as_f64().unwrap();
                let doubt = estimate["standard_uncertainty_deg"].as_f64().unwrap();
                prop_assert!((0.0..=180.0).contains(&angle) && (0.0..52.0).contains(&doubt), "{estimate}");
                prop_assert!(angle < 1e-6 || estimate["spreads"] == false, "{estimate}");
            }
        }
    }
}

//! `POST /v1/designs`: limits over many cases, verified on both sides, and what it does with bad input.

use axum::Router;
use axum::body::Body;
use http::StatusCode;
use serde_json::{Value, json};

use crate::ask::{call, post_json, service, state};

const PATH: &str = "/v1/designs";

fn request() -> Value {
    serde_json::from_str(include_str!("../../src/service/api/designs/example.json")).unwrap()
}

async fn ok(service: &Router, request: &Value) -> Value {
    let answer = post_json(service, PATH, request.to_string()).await;
    assert_eq!(answer.status, StatusCode::OK, "{:?}", answer.body);
    answer.json()
}

/// The verdict of one case with the field at a value, by the evaluations' resource.
async fn verdict(service: &Router, request: &Value, case: &Value, pointer: &str, value: f64) -> String {
    let mut single = request["base"].clone();
    for member in ["liquid", "surface", "pour"] {
        if let Some(own) = case.get(member) {
            single[member] = own.clone();
        }
    }
    if let Some(confidence) = request.pointer("/require/confidence") {
        single["confidence"] = confidence.clone();
    }
    single["include"] = json!([]);
    *single.pointer_mut(pointer).unwrap() = json!(value);
    let answer = post_json(service, "/v1/evaluations", single.to_string()).await;
    match answer.status {
        StatusCode::OK => answer.json()["verdict"].as_str().unwrap().to_owned(),
        _ => "impossible".to_owned(),
    }
}

/// Checks every claim of an answer with a limit by single evaluations.
async fn check_limit(service: &Router, request: &Value, answer: &Value) {
    let pointer = request["vary"]["pointer"].as_str().unwrap();
    let cases = request["cases"].as_array().unwrap();
    let value = answer["limit"]["value"].as_f64().unwrap();
    for case in cases {
        assert_eq!(verdict(service, request, case, pointer, value).await, "clean", "{case} at {value}");
    }
    if let Some(beyond) = answer["limit"]["not_clean_at"].as_f64() {
        let governing = cases.iter().find(|case| case["name"] == answer["governing_case"]).unwrap();
        assert_ne!(verdict(service, request, governing, pointer, beyond).await, "clean");
        assert!((beyond / value - 1.0).abs() < 1e-4, "{value} {beyond}");
        let outward = if answer["limit"]["sense"] == "at_most" { beyond > value } else { beyond < value };
        assert!(outward);
        assert_eq!(answer["limit"]["at_bracket_end"], false);
    } else {
        assert_eq!(answer["limit"]["at_bracket_end"], true);
        assert_eq!(answer["governing_case"], Value::Null);
    }
    for (case, said) in cases.iter().zip(answer["cases"].as_array().unwrap()) {
        assert_eq!(case["name"], said["name"]);
        assert_eq!(said["verdict_at_limit"], "clean");
        for interval in said["intervals"].as_array().unwrap() {
            let (low, high) = (interval[0].as_f64().unwrap(), interval[1].as_f64().unwrap());
            for share in [0.0, 0.31, 0.77, 1.0] {
                let x = low + share * (high - low);
                assert_eq!(verdict(service, request, case, pointer, x).await, "clean", "{case} at {x}");
            }
        }
    }
}

#[tokio::test]
async fn the_limit_of_a_radius_is_verified_on_both_sides() {
    let service = service(&state(|_| {}));
    let answer = ok(&service, &request()).await;
    assert_eq!(answer["limit"]["sense"], "at_most", "{answer}");
    assert_eq!(answer["limit"]["unit"], "mm");
    assert_eq!(answer["blocking_case"], Value::Null);
    check_limit(&service, &request(), &answer).await;
    // The common limit is the smallest of the cases' own.
    let smallest = answer["cases"]
        .as_array()
        .unwrap()
        .iter()
        .map(|case| case["limit"].as_f64().unwrap())
        .fold(f64::INFINITY, f64::min);
    assert!((answer["limit"]["value"].as_f64().unwrap() / smallest - 1.0).abs() < 1e-5);
    assert_eq!(ok(&service, &request()).await, answer, "same request, same answer");
}

#[tokio::test]
async fn limits_of_other_fields_are_verified_too() {
    let service = service(&state(|_| {}));
    for (pointer, between) in [
        ("/lip/edge/rounded/turn_deg", [40.0, 170.0]),
        ("/pour/flow_ml_s", [1.0, 500.0]),
        ("/lip/section/sheet/width_mm", [2.0, 300.0]),
        ("/lip/run/slope_deg", [0.0, 60.0]),
    ] {
        let mut request = request();
        request["vary"] = json!({"pointer": pointer, "between": between});
        let answer = ok(&service, &request).await;
        assert!(answer["limit"].is_object(), "{pointer}: {answer}");
        check_limit(&service, &request, &answer).await;
    }
}

#[tokio::test]
async fn a_field_that_helps_first_and_harms_then_has_an_interval() {
    let service = service(&state(|_| {}));
    // A solution that is thin when hot and freezes when cold; the temperature both thins it and wets the lip.
    let mut request = request();
    request["cases"] =
        json!([{"name": "brine", "liquid": {"catalogue": {"id": "water", "temperature_c": 20}}}]);
    request["vary"] = json!({"pointer": "/liquid/catalogue/temperature_c", "between": [-20, 120]});
    let answer = ok(&service, &request).await;
    let intervals = answer["cases"][0]["intervals"].as_array().unwrap().clone();
    assert!(!intervals.is_empty(), "{answer}");
    // Below freezing and above boiling there is nothing clean, and the ends are as close as can be.
    let (low, high) = (intervals[0][0].as_f64().unwrap(), intervals.last().unwrap()[1].as_f64().unwrap());
    assert!(low > -0.1 && high < 101.0, "{intervals:?}");
    let case = request["cases"][0].clone();
    for (inside, outside) in [(low, low - 1e-4), (high, high + 1e-4)] {
        let at = |x| verdict(&service, &request, &case, "/liquid/catalogue/temperature_c", x);
        assert_eq!(at(inside).await, "clean");
        assert_ne!(at(outside).await, "clean");
    }
}

#[tokio::test]
async fn no_clean_value_is_an_answer_that_says_why() {
    let service = service(&state(|_| {}));
    let mut request = request();
    request["cases"][1]["pour"] = json!({"flow_ml_s": 0.5});
    let answer = ok(&service, &request).await;
    assert_eq!(answer["limit"], Value::Null);
    assert_eq!(answer["governing_case"], Value::Null);
    assert_eq!(answer["intervals"], json!([]));
    assert_eq!(answer["blocking_case"], "syrup, slow");
    assert_eq!(answer["nearest"]["case"], "syrup, slow");
    let value = answer["nearest"]["value"].as_f64().unwrap();
    assert!((0.05..=5.0).contains(&value));
    assert_ne!(answer["nearest"]["verdict"], "clean");
    // No other value is better for the worst case.
    let best = answer["nearest"]["dribble_probability"].as_f64().unwrap();
    for other in [0.05, 0.1, 0.5, 1.0, 5.0] {
        let mut single = request["base"].clone();
        single["liquid"] = request["cases"][1]["liquid"].clone();
        single["pour"] = request["cases"][1]["pour"].clone();
        single["lip"]["edge"]["rounded"]["radius_mm"] = json!(other);
        let single = post_json(&service, "/v1/evaluations", single.to_string()).await.json();
        let free = single["stream"]["weber"].as_f64().unwrap() < 2.0;
        assert!(free || single["dribble_probability"].as_f64().unwrap() >= best - 1e-9);
    }
}

#[tokio::test]
async fn left_out_cases_mean_the_base_alone() {
    let service = service(&state(|_| {}));
    let mut request = request();
    request.as_object_mut().unwrap().remove("cases");
    let answer = ok(&service, &request).await;
    assert_eq!(answer["cases"].as_array().unwrap().len(), 1);
    assert_eq!(answer["cases"][0]["name"], "base");
}

#[tokio::test]
async fn events_end_with_the_same_answer() {
    let service = service(&state(|_| {}));
    let headers = [("content-type", "application/json"), ("accept", "text/event-stream")];
    let events = call(&service, "POST", PATH, &headers, Body::from(request().to_string())).await;
    let text = std::str::from_utf8(&events.body).unwrap();
    let result = text.trim_end().rsplit("\n\n").next().unwrap();
    let result = result.strip_prefix("event: result\ndata: ").unwrap();
    let plain = post_json(&service, PATH, request().to_string()).await;
    assert_eq!(result.as_bytes(), &plain.body[..]);
    assert!(text.contains("event: progress\ndata: {\"done\":3,\"total\":3,"));
}

#[tokio::test]
async fn every_kind_of_bad_input_is_named_all_at_once() {
    let service = service(&state(|_| {}));
    type Change = (&'static str, Value);
    let cases: Vec<(Change, &str, &str)> = vec![
        (("/vary/pointer", json!("/lip/edge/rounded/radius")), "/vary/pointer", "unknown_pointer"),
        (("/vary/pointer", json!("/liquid/catalogue/id")), "/vary/pointer", "not_a_field"),
        (("/vary/pointer", json!("/lip/section/tube/bore_mm")), "/vary/pointer", "not_applicable"),
        (("/vary/between", json!([1, 1])), "/vary/between", "empty_range"),
        (("/vary/between", json!([2, 1])), "/vary/between", "contradiction"),
        (("/vary/between", json!([1])), "/vary/between", "wrong_count"),
        (("/vary/between", json!([-1, 5])), "/vary/between/0", "out_of_range"),
        (("/cases", json!([])), "/cases", "wrong_count"),
        (("/cases/1/name", json!("cold water")), "/cases/1/name", "repeated"),
        (("/cases/1/name", json!("")), "/cases/1/name", "wrong_length"),
        (("/cases/1/liquid/catalogue/id", json!("syrop")), "/cases/1/liquid/catalogue/id", "unknown_id"),
        (
            ("/cases/0/liquid/catalogue/temperature_c", json!(-9)),
            "/cases/0/liquid/catalogue/temperature_c",
            "freezes",
        ),
        (("/require/confidence", json!(2)), "/require/confidence", "out_of_range"),
    ];
    for ((pointer, value), expected, code) in cases {
        let mut request = request();
        *request.pointer_mut(pointer).unwrap() = value.clone();
        let answer = post_json(&service, PATH, request.to_string()).await;
        assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY, "{pointer} {value}: {:?}", answer.body);
        let errors = answer.problem()["errors"].as_array().unwrap().clone();
        let found = errors.iter().any(|e| e["pointer"] == expected && e["code"] == code);
        assert!(found, "{pointer} {value}: {errors:?}");
    }
    let mut request = request();
    request["vary"]["between"] = json!([3, 3]);
    request["cases"][2]["liquid"]["catalogue"]["id"] = json!("oil of nothing");
    request["base"]["coefficients"] = json!("set-0");
    let problem = post_json(&service, PATH, request.to_string()).await.problem();
    let pointers: Vec<&str> =
        problem["errors"].as_array().unwrap().iter().map(|e| e["pointer"].as_str().unwrap()).collect();
    assert!(pointers.contains(&"/vary/between") && pointers.contains(&"/base/coefficients"), "{pointers:?}");
}

#[tokio::test]
async fn a_case_of_another_kind_is_named() {
    let service = service(&state(|_| {}));
    let mut request = request();
    request["vary"] = json!({"pointer": "/liquid/catalogue/temperature_c", "between": [5, 60]});
    request["cases"][1]["liquid"] =
        json!({"measured": {"density_kg_m3": 1000, "viscosity_mpa_s": 1, "surface_tension_mn_m": 70}});
    let problem = post_json(&service, PATH, request.to_string()).await.problem();
    assert_eq!(problem["errors"][0]["pointer"], "/cases/1");
    assert_eq!(problem["errors"][0]["code"], "not_applicable");
}

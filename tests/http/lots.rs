//! `POST /v1/lots`.

use http::StatusCode;
use serde_json::{Value, json};

use crate::ask::{post_json, service, state};

const PATH: &str = "/v1/lots";

fn request() -> Value {
    serde_json::from_str(include_str!("../../src/service/api/lots/example.json")).unwrap()
}

async fn answer(request: &Value) -> Value {
    let answer = post_json(&service(&state(|_| {})), PATH, request.to_string()).await;
    assert_eq!(answer.status, StatusCode::OK, "{:?}", answer.body);
    answer.json()
}

async fn faults(request: &Value) -> Vec<(String, String)> {
    let answer = post_json(&service(&state(|_| {})), PATH, request.to_string()).await;
    let problem = answer.problem();
    assert_eq!(problem["status"], 422, "{problem}");
    let text = |fault: &Value, name: &str| fault[name].as_str().unwrap().to_owned();
    let errors = problem["errors"].as_array().unwrap();
    errors.iter().map(|fault| (text(fault, "pointer"), text(fault, "code"))).collect()
}

fn near(found: &Value, pointer: &str, expected: f64, tolerance: f64) {
    let number =
        found.pointer(pointer).and_then(Value::as_f64).unwrap_or_else(|| panic!("{pointer}: {found}"));
    assert!((number - expected).abs() <= tolerance, "{pointer}: {number}, should be {expected}");
}

/// Reference values of the same lot and plan: see `tests/published/data/statistics.json`.
#[tokio::test]
async fn a_lot_of_measured_radii_is_accepted_with_its_risks() {
    let mut exact = request();
    exact["evidence"]["measured"]["standard_uncertainty"] = json!(0);
    let found = answer(&exact).await;
    assert_eq!((found["decision"].as_str(), found["method"].as_str()), (Some("accept"), Some("variables")));
    near(&found, "/statistic/mean", 0.42944, 1e-12);
    near(&found, "/performance/ppk", 1.545_313_741_856_512, 1e-10);
    near(&found, "/performance/ppk_low", 1.156_944_739_986_93, 1e-7);
    near(&found, "/plan/k_low", 1.897_562_271_015_562, 1e-6);
    near(&found, "/plan/k_high", 1.905_285_051_640_104_5, 1e-6);
    assert_eq!(found["plan"]["pieces"], 42);
    near(&found, "/guard_band/factor", 1.644_853_626_951_472, 1e-9);
    near(&found, "/normality/shapiro_wilk/statistic", 0.979_076_879_849_518, 1e-6);
    near(&found, "/normality/p_value", 0.866_214, 1e-5);
    assert_eq!(found["limit"], json!({"sense": "at_most", "unit": "mm", "value": 0.52}));
    let oc = found["operating_characteristic"].as_array().unwrap();
    let falls = |pair: &[Value]| {
        pair[0]["acceptance_probability"].as_f64() >= pair[1]["acceptance_probability"].as_f64()
    };
    assert!(oc.len() > 30 && oc.windows(2).all(falls));
    // Uncertainty of the gauge moves the limit that decides.
    let found = answer(&request()).await;
    near(&found, "/guard_band/limit_used", 0.52 - 1.644_853_626_951_472 * 0.008, 1e-12);
    assert!(found["guard_band"]["consumer_risk"].as_f64().unwrap() < 1e-3);
    assert_eq!(found["decision"], "accept");
}

#[tokio::test]
async fn bad_lots_are_rejected_and_small_ones_left_open() {
    let mut bad = request();
    bad["limit"]["upper"]["value"] = json!(0.44);
    let found = answer(&bad).await;
    assert_eq!(found["decision"], "reject");
    assert!(found["warnings"].to_string().contains("parts_beyond_limit"));
    let mut one = request();
    one["evidence"]["measured"]["values"] = json!([0.43]);
    let found = answer(&one).await;
    assert_eq!(found["decision"], "more_pieces_needed");
    assert!(found["performance"].is_null() && found["statistic"]["standard_deviation"].is_null());
    assert_eq!(found["reasons"][0]["code"], "too_few_pieces");
    let mut constant = request();
    constant["evidence"]["measured"]["values"] = json!(vec![0.43; 30]);
    let found = answer(&constant).await;
    assert_eq!(
        (found["decision"].as_str(), found["method"].as_str()),
        (Some("more_pieces_needed"), Some("attributes"))
    );
    assert!(found["warnings"].to_string().contains("no_spread"));
}

#[tokio::test]
async fn pour_tests_are_counted() {
    let test = |pieces: u64, dribbled: u64, lot: Option<u64>| {
        let mut evidence = json!({"pieces": pieces, "dribbled": dribbled});
        if let Some(lot) = lot {
            evidence["lot_size"] = json!(lot);
        }
        json!({"evidence": {"pour_test": evidence}})
    };
    let found = answer(&test(38, 0, None)).await;
    assert_eq!(found["decision"], "accept");
    assert_eq!(found["plan"]["zero_acceptance_pieces"], 38);
    near(&found, "/fraction_nonconforming/high", 1.0 - libm::pow(0.05, 1.0 / 38.0), 1e-12);
    assert_eq!(answer(&test(37, 0, None)).await["decision"], "more_pieces_needed");
    assert_eq!(answer(&test(37, 9, None)).await["decision"], "reject");
    assert_eq!(answer(&test(37, 0, Some(200))).await["decision"], "accept");
    assert!(found["limit"].is_null() && found["guard_band"].is_null());
}

#[tokio::test]
async fn the_limit_may_come_from_a_design() {
    let design: Value =
        serde_json::from_str(include_str!("../../src/service/api/designs/example.json")).unwrap();
    let service = service(&state(|_| {}));
    let limit = post_json(&service, "/v1/designs", design.to_string()).await.json()["limit"].clone();
    let mut lot = request();
    lot["limit"] = json!({"from_design": design});
    let found = answer(&lot).await;
    assert_eq!(found["limit"]["value"], limit["value"]);
    assert_eq!(found["limit"]["sense"], limit["sense"]);
    // The same limit in another unit than the values.
    lot["characteristic"]["unit"] = json!("in");
    assert_eq!(faults(&lot).await, [("/characteristic/unit".into(), "mixed_units".into())]);
    // A design that finds none.
    lot["characteristic"]["unit"] = json!("mm");
    lot["limit"]["from_design"]["vary"]["between"] = json!([40, 50]);
    assert_eq!(faults(&lot).await, [("/limit/from_design".into(), "no_limit".into())]);
    // Faults inside the design keep their place.
    lot["limit"]["from_design"]["vary"]["pointer"] = json!("/lip/edge/rounded/radius");
    let found = faults(&lot).await;
    assert!(
        found.contains(&("/limit/from_design/vary/pointer".into(), "unknown_pointer".into())),
        "{found:?}"
    );
}

#[tokio::test]
async fn every_fault_of_a_request_is_listed() {
    let bad = json!({
        "characteristic": {"name": "", "unit": "mm"},
        "evidence": {"measured": {
            "values": [0.4, "0.41 mm", {"part": "a", "value": 0.4}, {"part": "a", "value": 0.4}, {"value": true, "unit": "in"}, null],
            "standard_uncertainty": 0.001, "repeatability": 0.002}},
        "plan": {"producer": {"fraction": 0.06, "risk": 0.05}, "consumer": {"fraction": 0.01, "risk": 0.1}}
    });
    let found = faults(&bad).await;
    for (pointer, code) in [
        ("/limit", "missing"),
        ("/characteristic/name", "wrong_length"),
        ("/plan", "contradiction"),
        ("/evidence/measured/repeatability", "contradiction"),
        ("/evidence/measured/values/1", "wrong_type"),
        ("/evidence/measured/values/3/part", "repeated"),
        ("/evidence/measured/values/4/value", "wrong_type"),
        ("/evidence/measured/values/4/part", "missing"),
        ("/evidence/measured/values/4/unit", "unknown_field"),
        ("/evidence/measured/values/5", "wrong_type"),
    ] {
        assert!(found.contains(&(pointer.into(), code.into())), "{pointer} {code} in {found:?}");
    }
    let mut mixed = request();
    mixed["evidence"]["measured"]["values"] = json!([0.42, 0.44, 0.0165, 0.43, 0.41]);
    assert_eq!(faults(&mixed).await, [("/evidence/measured/values/2".into(), "mixed_units".into())]);
    let set = |evidence: Value| json!({"evidence": {"pour_test": evidence}});
    for (request, pointer, code) in [
        (set(json!({"pieces": 0, "dribbled": 0})), "/evidence/pour_test/pieces", "out_of_range"),
        (set(json!({"pieces": 5, "dribbled": 6})), "/evidence/pour_test/dribbled", "contradiction"),
        (
            set(json!({"pieces": 5, "dribbled": 0, "lot_size": 3})),
            "/evidence/pour_test/pieces",
            "contradiction",
        ),
        (set(json!({"pieces": 5})), "/evidence/pour_test/dribbled", "missing"),
        (json!({"evidence": {}}), "/evidence", "missing"),
    ] {
        let found = faults(&request).await;
        assert!(found.contains(&(pointer.into(), code.into())), "{pointer} {code} in {found:?}");
    }
    let mut close = request();
    close["plan"] =
        json!({"producer": {"fraction": 0.01, "risk": 0.05}, "consumer": {"fraction": 0.01001, "risk": 0.1}});
    assert_eq!(faults(&close).await, [("/plan".into(), "not_applicable".into())]);
}

#[tokio::test]
async fn a_lot_of_a_thousand_parts_is_quick_and_finite() {
    let mut large = request();
    let value =
        |i: u32| 0.43 + 0.01 * libm::sin(f64::from(i) * 0.37) + 0.006 * libm::cos(f64::from(i) * 1.91);
    large["evidence"]["measured"]["values"] = json!((0..1000).map(value).collect::<Vec<_>>());
    let found = answer(&large).await;
    assert!(found["decision"].is_string() && found["performance"]["ppk_low"].is_number());
}

#[tokio::test]
async fn lots_and_tolerances_come_as_pictures() {
    let service = service(&state(|_| {}));
    let tolerances = include_str!("../../src/service/api/tolerances/example.json");
    let pour_test = r#"{"evidence": {"pour_test": {"pieces": 45, "dribbled": 0}}}"#;
    let mut single = request();
    single["evidence"]["measured"]["values"] = json!([0.43]);
    for (path, body, shows) in [
        (
            "/v1/tolerances",
            tolerances.to_owned(),
            &["of a million pours dribble", "What drives the margin"][..],
        ),
        (PATH, request().to_string(), &["Accept: ", "limit", "Operating characteristic"]),
        (PATH, single.to_string(), &["More pieces needed"]),
        (PATH, pour_test.to_owned(), &["Operating characteristic with 45 pieces"]),
    ] {
        let headers = [("content-type", "application/json"), ("accept", "image/svg+xml")];
        let picture = crate::ask::call(&service, "POST", path, &headers, body.into()).await;
        assert_eq!((picture.status, picture.header("content-type")), (StatusCode::OK, "image/svg+xml"));
        let text = std::str::from_utf8(&picture.body).unwrap();
        assert!(
            text.starts_with("<svg ") && text.trim_end().ends_with("</svg>") && !text.contains("NaN"),
            "{path}"
        );
        for words in shows {
            assert!(text.contains(words), "{path}: {words}");
        }
    }
}

//! `POST /v1/tolerances`.

use http::StatusCode;
use serde_json::{Value, json};

use crate::ask::{call, post_json, service, state};

const PATH: &str = "/v1/tolerances";

fn request() -> Value {
    serde_json::from_str(include_str!("../../src/service/api/tolerances/example.json")).unwrap()
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

#[tokio::test]
async fn the_parts_of_an_answer_agree_with_one_another() {
    let found = answer(&request()).await;
    let number = |pointer: &str| found.pointer(pointer).unwrap().as_f64().unwrap();
    let (low, value, high) =
        (number("/dribble_ppm/low"), number("/dribble_ppm/value"), number("/dribble_ppm/high"));
    assert!(low <= value && value <= high && high < 1e6);
    let (doubt_low, doubt_high) =
        (number("/dribble_ppm_with_model_doubt/low"), number("/dribble_ppm_with_model_doubt/high"));
    assert!(doubt_low <= value && value <= doubt_high);
    assert!(number("/dribble_ppm_with_model_doubt/standard_uncertainty") > 0.3);
    let counts: u64 =
        found["histogram"]["counts"].as_array().unwrap().iter().map(|c| c.as_u64().unwrap()).sum();
    assert_eq!(counts, 100_000 - found["trials_left_out"].as_u64().unwrap());
    // Quantiles rise; the median is near the mean.
    let quantiles: Vec<f64> = found["margin"]["quantiles"]
        .as_array()
        .unwrap()
        .iter()
        .map(|q| q["value"].as_f64().unwrap())
        .collect();
    assert!(quantiles.windows(2).all(|pair| pair[0] < pair[1]));
    assert!((quantiles[4] - number("/margin/mean")).abs() < 0.2 * number("/margin/standard_deviation"));
    // Linear propagation, trials and indices tell one story for spreads this small.
    let sd = number("/margin/standard_deviation");
    assert!((number("/linear_check/standard_uncertainty") / sd - 1.0).abs() < 0.1);
    let drivers = found["drivers"].as_array().unwrap();
    let total: f64 = drivers.iter().map(|d| d["first_order"].as_f64().unwrap()).sum();
    assert!((0.9..1.1).contains(&total), "{drivers:?}");
    let flow = drivers.iter().find(|d| d["pointer"] == "/pour/flow_ml_s").unwrap();
    let slope = found["linear_check"]["sensitivities"]
        .as_array()
        .unwrap()
        .iter()
        .find(|s| s["pointer"] == "/pour/flow_ml_s")
        .unwrap()["value"]
        .as_f64()
        .unwrap();
    let by_slope = slope * 14.0 * 0.2 / sd;
    assert!((by_slope * by_slope - flow["first_order"].as_f64().unwrap()).abs() < 0.1);
}

#[tokio::test]
async fn a_seed_gives_the_same_bytes_and_another_seed_others_near_by() {
    let service = service(&state(|_| {}));
    let first = post_json(&service, PATH, request().to_string()).await.body;
    assert_eq!(first, post_json(&service, PATH, request().to_string()).await.body);
    let mut other = request();
    other["seed"] = json!(2.0);
    let other = answer(&other).await;
    let first: Value = serde_json::from_slice(&first).unwrap();
    assert_eq!(other["seed"], 2);
    let mean = |a: &Value| a["margin"]["mean"].as_f64().unwrap();
    let error = first["margin"]["standard_deviation"].as_f64().unwrap() / 100_000_f64.sqrt();
    let difference = (mean(&first) - mean(&other)).abs();
    assert!(difference > 0.0 && difference < 6.0 * error, "{difference} {error}");
}

#[tokio::test]
async fn the_margin_at_a_single_place_is_that_of_an_evaluation() {
    let mut narrow = request();
    narrow["varying"] =
        json!([{"pointer": "/pour/flow_ml_s", "spread": {"uniform": {"low": 13.999999, "high": 14.000001}}}]);
    narrow["trials"] = json!(1000);
    let narrow = answer(&narrow).await;
    let mut evaluation = request()["base"].clone();
    evaluation["uncertainty"] = json!({"/pour/flow_ml_s": 0});
    let service = service(&state(|_| {}));
    let single = post_json(&service, "/v1/evaluations", evaluation.to_string()).await.json();
    let factor = &single["safety_factor"];
    let ln = |name: &str| libm::log(factor[name].as_f64().unwrap());
    assert!((narrow["margin"]["mean"].as_f64().unwrap() - ln("value")).abs() < 1e-6);
    // What does not vary doubts the margin as an evaluation does.
    let doubt = narrow["dribble_ppm_with_model_doubt"]["standard_uncertainty"].as_f64().unwrap();
    assert!((doubt - (ln("high") - ln("low")) / 2.0 / 1.959_963_984_540_054).abs() < 1e-9);
}

/// Dribbling beyond a critical radius, so that the rate of a normal spread is known in closed form.
#[tokio::test]
async fn rare_dribbling_is_found_by_importance_sampling() {
    let service = service(&state(|_| {}));
    let mut base = request()["base"].clone();
    base["pour"]["flow_ml_s"] = json!(60);
    let design = json!({
        "base": base,
        "vary": {"pointer": "/lip/edge/rounded/radius_mm", "between": [0.01, 20]},
        "require": {"confidence": 0.5}
    });
    let design = post_json(&service, "/v1/designs", design.to_string()).await.json();
    // At a confidence of one half the limit is where the margin is 0, as long as a free sheet leaves.
    let critical = design["limit"]["value"].as_f64().unwrap_or_else(|| panic!("{design}"));
    let sd = 0.03 * critical;
    for (z, ppm) in [(4.0, 31.671_241_833), (5.2, 0.099_644_263)] {
        let mut rare = request();
        rare["base"] = base.clone();
        rare["varying"] = json!([{"pointer": "/lip/edge/rounded/radius_mm",
            "spread": {"normal": {"mean": critical - z * sd, "sd": sd}}}]);
        let found = answer(&rare).await;
        let rate = &found["dribble_ppm"];
        assert_eq!(rate["interval"], "importance_sampling", "{rate}");
        let (low, high) = (rate["low"].as_f64().unwrap(), rate["high"].as_f64().unwrap());
        assert!(0.98 * low < ppm && ppm < 1.02 * high && high < 1.1 * low, "{rate}");
    }
}

#[tokio::test]
async fn never_dribbling_is_bounded_by_the_number_of_trials() {
    let mut safe = request();
    safe["base"]["pour"]["flow_ml_s"] = json!(2000);
    safe["varying"] = json!([{"pointer": "/surface/measured/advancing_deg", "spread": {"uniform": {"low": 80, "high": 90}}}]);
    safe["trials"] = json!(1000);
    let found = answer(&safe).await;
    let rate = &found["dribble_ppm"];
    assert_eq!((rate["interval"].as_str(), rate["value"].as_f64()), (Some("zero_events"), Some(0.0)));
    let high = rate["high"].as_f64().unwrap();
    assert!((high - 1e6 * (1.0 - libm::pow(0.05, 1e-3))).abs() < 1e-6, "{high}");
}

#[tokio::test]
async fn what_leaves_the_range_is_told_or_refused() {
    let mut cut = request();
    cut["varying"] =
        json!([{"pointer": "/surface/measured/advancing_deg", "spread": {"normal": {"mean": 170, "sd": 4}}}]);
    cut["trials"] = json!(2000);
    let found = answer(&cut).await;
    let warnings = found["warnings"].as_array().unwrap();
    let told = warnings.iter().find(|w| w["code"] == "spread_cut").unwrap();
    assert!(told["detail"].as_str().unwrap().contains("0.6 %"), "{told}");
    assert_eq!(told["pointer"], "/surface/measured/advancing_deg");
    cut["varying"][0]["spread"]["normal"]["sd"] = json!(6);
    assert_eq!(faults(&cut).await, [("/varying/0/spread".into(), "outside_range".into())]);
    // Water that freezes makes no case: half a percent of the draws, then five percent.
    let mut cold = request();
    cold["varying"] = json!([{"pointer": "/liquid/catalogue/temperature_c", "spread": {"uniform": {"low": -0.1, "high": 19.9}}}]);
    cold["trials"] = json!(5000);
    let found = answer(&cold).await;
    let left_out = found["trials_left_out"].as_u64().unwrap();
    assert!((5..60).contains(&left_out), "{left_out}");
    assert!(found["warnings"].to_string().contains("trials_left_out"));
    cold["varying"][0]["spread"]["uniform"]["low"] = json!(-1);
    assert_eq!(faults(&cold).await, [("/varying".into(), "outside_range".into())]);
}

#[tokio::test]
async fn every_fault_of_a_request_is_listed() {
    let mut bad = request();
    bad["trials"] = json!(0);
    bad["base"]["surface"] = json!({"catalogue": {"id": "porcelan-glazed", "state": "in_use"}});
    bad["varying"] = json!([
        {"pointer": "/lip/edge/rounded/radius_mm", "spread": {"normal": {"mean": 0.5, "sd": -0.04}}},
        {"pointer": "/lip/edge/rounded/turn_deg", "spread": {"triangular": {"low": 121, "mode": 130, "high": 128}}},
        {"pointer": "/lip/run/slope_deg", "spread": {"uniform": {"low": 20, "high": 10}}},
        {"pointer": "/lip/run/length_mm", "spread": {"uniform": {"low": 20, "high": 20}}},
        {"pointer": "/pour/flow_ml_s", "spread": {"lognormal": {"median": 0, "sd_log": 0}}},
        {"pointer": "/lip/section/sheet/width_mm", "spread": {"sample": {"values": [24, 24]}}}
    ]);
    let mut found = faults(&bad).await;
    found.sort();
    let expected = [
        ("/base/surface/catalogue/id", "unknown_id"),
        ("/trials", "out_of_range"),
        ("/varying/0/spread/normal/sd", "out_of_range"),
        ("/varying/1/spread/triangular/mode", "contradiction"),
        ("/varying/2/spread/uniform", "contradiction"),
        ("/varying/3/spread/uniform", "empty_range"),
        ("/varying/4/spread/lognormal/median", "out_of_range"),
        ("/varying/4/spread/lognormal/sd_log", "out_of_range"),
        ("/varying/5/spread/sample/values", "no_spread"),
    ];
    let found: Vec<(&str, &str)> = found.iter().map(|(p, c)| (p.as_str(), c.as_str())).collect();
    for fault in expected {
        assert!(found.contains(&fault), "{fault:?} in {found:?}");
    }
}

#[tokio::test]
async fn pointers_and_counts_are_checked() {
    let set = |change: &dyn Fn(&mut Value)| {
        let mut request = request();
        change(&mut request);
        request
    };
    let flow = json!({"pointer": "/pour/flow_ml_s", "spread": {"normal": {"mean": 60, "sd": 1}}});
    for (request, pointer, code) in [
        (
            set(&|r| r["varying"][0]["pointer"] = json!("/lip/edge/rounded/radius")),
            "/varying/0/pointer",
            "unknown_pointer",
        ),
        (
            set(&|r| r["varying"][0]["pointer"] = json!("/lip/section/vee/included_angle_deg")),
            "/varying/0/pointer",
            "not_applicable",
        ),
        (set(&|r| r["varying"] = json!([flow, flow])), "/varying/1/pointer", "repeated"),
        (set(&|r| r["varying"] = json!([])), "/varying", "wrong_count"),
        (set(&|r| r["trials"] = json!(10_000_001)), "/trials", "out_of_range"),
        (set(&|r| r["trials"] = json!(1.5)), "/trials", "wrong_type"),
        (set(&|r| r["seed"] = json!(-1)), "/seed", "out_of_range"),
        (
            set(&|r| r["varying"][0]["spread"] = json!({"gauss": {}})),
            "/varying/0/spread/gauss",
            "unknown_choice",
        ),
        (
            set(&|r| r["varying"][0]["spread"] = json!({"normal": {"mean": 0.5}})),
            "/varying/0/spread/normal/sd",
            "missing",
        ),
        (set(&|r| r["base"]["pour"] = json!({})), "/base/pour/flow_ml_s", "missing"),
    ] {
        let found = faults(&request).await;
        assert!(found.contains(&(pointer.into(), code.into())), "{pointer} {code} in {found:?}");
    }
    // The operator's own limit.
    let small = service(&state(|s| s.max_points = 1000.try_into().unwrap()));
    let problem = post_json(&small, PATH, request().to_string()).await.problem();
    assert_eq!(problem["errors"][0]["maximum"], 1000.0);
}

#[tokio::test]
async fn progress_comes_as_events_and_the_last_is_the_answer() {
    let service = service(&state(|_| {}));
    let headers = [("content-type", "application/json"), ("accept", "text/event-stream")];
    let events = call(&service, "POST", PATH, &headers, request().to_string().into()).await;
    assert_eq!(events.header("content-type"), "text/event-stream");
    let text = std::str::from_utf8(&events.body).unwrap();
    assert!(text.starts_with("event: progress\ndata: {\"done\":"), "{text}");
    let result = text.split("event: result\ndata: ").nth(1).unwrap().trim_end();
    let plain = post_json(&service, PATH, request().to_string()).await;
    assert_eq!(result.as_bytes(), plain.body);
}

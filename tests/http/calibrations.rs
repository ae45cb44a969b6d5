//! `POST /v1/calibrations`, and calibrations passed back.

use std::sync::OnceLock;

use axum::Router;
use dribble_risk::service::api::calibrations::{EXAMPLE, calibrate_json};
use http::StatusCode;
use serde_json::{Value, json};

use crate::{
    ask::{call, post_json, service, state},
    evaluations::request,
};

const PATH: &str = "/v1/calibrations";

fn example() -> Value {
    serde_json::from_str(EXAMPLE).unwrap()
}

/// The calibration that the example makes.
pub fn example_calibration() -> &'static Value {
    static MADE: OnceLock<Value> = OnceLock::new();
    MADE.get_or_init(|| {
        let answer = calibrate_json(EXAMPLE.as_bytes()).unwrap();
        serde_json::from_slice::<Value>(&answer).unwrap()["calibration"].clone()
    })
}

async fn ok(service: &Router, path: &str, request: &Value) -> Value {
    let answer = post_json(service, path, request.to_string()).await;
    assert_eq!(answer.status, StatusCode::OK, "{:?}", answer.body);
    answer.json()
}

async fn faults(service: &Router, path: &str, request: &Value) -> Vec<(String, String)> {
    let answer = post_json(service, path, request.to_string()).await;
    assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY, "{:?}", answer.body);
    let problem = answer.problem();
    let text = |value: &Value| value.as_str().unwrap().to_owned();
    let mut found: Vec<_> = problem["errors"]
        .as_array()
        .unwrap()
        .iter()
        .map(|e| (text(&e["pointer"]), text(&e["code"])))
        .collect();
    found.sort();
    found
}

fn pairs(list: &[(&str, &str)]) -> Vec<(String, String)> {
    list.iter().map(|(pointer, code)| ((*pointer).to_owned(), (*code).to_owned())).collect()
}

fn codes(answer: &Value) -> Vec<&str> {
    answer["warnings"].as_array().unwrap().iter().map(|w| w["code"].as_str().unwrap()).collect()
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value}"))
}

/// A lip within what the example's rows covered.
fn covered() -> Value {
    let mut request = request();
    for part in ["lip", "surface", "liquid"] {
        request[part] = example()["observations"][8][part].clone();
    }
    request["lip"]["edge"]["rounded"]["radius_mm"] = 0.7.into();
    request["pour"]["flow_ml_s"] = 10.into();
    request["limits"] = json!({});
    request["uncertainty"] = json!({});
    request
}

#[tokio::test]
async fn the_example_teaches_what_its_rows_were_made_with() {
    let service = service(&state(|_| {}));
    let answer = ok(&service, PATH, &example()).await;
    for (coefficient, name) in answer["coefficients"].as_array().unwrap().iter().zip([
        "offset",
        "radius_ratio",
        "wetting",
        "ln_scatter",
    ]) {
        assert_eq!(coefficient["name"], name);
        assert_eq!(coefficient["learned"], true, "{coefficient}");
        let truth = if name == "ln_scatter" { libm::log(0.13) } else { 0.0 };
        let off = number(&coefficient["mean"]) - truth;
        assert!(off.abs() < 2.5 * number(&coefficient["standard_deviation"]), "{coefficient}");
    }
    let d = &answer["diagnostics"];
    assert_eq!(d["counts"], json!({"onset": 9, "bracket": 3, "clean": 2, "dribbled": 4}));
    assert!(number(&d["standard_uncertainty_at_centre"]) < 0.25);
    assert_eq!(number(&d["standard_uncertainty_without"]), 0.35);
    assert!((1.0..30.0).contains(&number(&d["condition_number"])));
    assert_eq!(answer["rows"].as_array().unwrap().len(), 18);
    assert!(answer["rows"].as_array().unwrap().iter().all(|row| row["flagged"] == false));
    assert!(codes(&answer).is_empty(), "{:?}", codes(&answer));
    let again = post_json(&service, PATH, EXAMPLE).await;
    assert_eq!(serde_json::from_slice::<Value>(&again.body).unwrap(), answer);
}

#[tokio::test]
async fn a_calibration_passed_back_moves_threshold_and_doubt() {
    let service = service(&state(|_| {}));
    // Every row's onset 1.3 times higher than the closed form has it.
    let mut bench = example();
    for row in bench["observations"].as_array_mut().unwrap() {
        let seen = row["seen"].as_object_mut().unwrap();
        for members in seen.values_mut() {
            for (name, value) in members.as_object_mut().unwrap() {
                if name.ends_with("ml_s") && !name.starts_with("standard") {
                    *value = json!(value.as_f64().unwrap() * 1.3);
                }
            }
        }
    }
    let made = ok(&service, PATH, &bench).await;
    assert!(number(&made["coefficients"][0]["mean"]) > 0.15, "{}", made["coefficients"]);
    let plain = ok(&service, "/v1/evaluations", &covered()).await;
    let mut asked = covered();
    asked["calibration"] = made["calibration"].clone();
    asked["pour"]["flow_ml_s"] = 12.into();
    let mut unasked = covered();
    unasked["pour"]["flow_ml_s"] = 12.into();
    let without = ok(&service, "/v1/evaluations", &unasked).await;
    let with = ok(&service, "/v1/evaluations", &asked).await;
    let share = |answer: &Value| {
        let shares = answer["contributions"].as_array().unwrap();
        number(&shares.iter().find(|c| c["source"] == "model").unwrap()["share"])
    };
    assert!(
        number(&with["threshold"]["critical_weber"]) > 1.1 * number(&without["threshold"]["critical_weber"])
    );
    assert!(
        number(&with["threshold"]["onset_flow_ml_s"]) > 1.1 * number(&plain["threshold"]["onset_flow_ml_s"])
    );
    assert!(share(&with) < share(&without));
    let width =
        |answer: &Value| number(&answer["safety_factor"]["high"]) / number(&answer["safety_factor"]["low"]);
    assert!(width(&with) < width(&without));
    assert!(codes(&with).contains(&"calibrated_by_caller"));
    assert!(!codes(&with).contains(&"not_compared_with_experiment"));
    assert!(!codes(&with).contains(&"beyond_calibration"), "{}", with["warnings"]);
    assert_ne!(with["model"]["fingerprint"], without["model"]["fingerprint"]);
    // The threshold is the formula of the contract: closed form, offset and the two covariates.
    let c = &made["calibration"];
    let mut mean = [0.0; 3];
    for point in c["grid"].as_array().unwrap() {
        for (j, sum) in mean.iter_mut().enumerate() {
            *sum += number(&point["weight"]) * number(&point["mean"][j]);
        }
    }
    let theta = number(&with["resolved"]["surface"]["advancing_deg"]["value"]).to_radians();
    let ratio = 0.7 / number(&with["stream"]["thickness_mm"]);
    let shift = mean[0]
        + mean[1] * (libm::log(ratio) - number(&c["centre"]["ln_radius_ratio"]))
        + mean[2] * (libm::log(1.0 + libm::cos(theta)) - number(&c["centre"]["ln_wetting"]));
    let seen = libm::log(
        number(&with["threshold"]["critical_weber"]) / number(&without["threshold"]["critical_weber"]),
    );
    assert!((seen - shift).abs() < 1e-9, "{seen} {shift}");
}

#[tokio::test]
async fn beyond_its_rows_a_calibration_says_so_and_doubt_comes_back() {
    let service = service(&state(|_| {}));
    let mut asked = covered();
    asked["calibration"] = example_calibration().clone();
    let inside = ok(&service, "/v1/evaluations", &asked).await;
    assert!(!codes(&inside).contains(&"beyond_calibration"), "{}", inside["warnings"]);
    for (pointer, value, name) in [
        ("/lip/edge/rounded/radius_mm", json!(8), "edge radius"),
        ("/surface/measured/advancing_deg", json!(150), "contact angle"),
        ("/lip/edge/rounded/turn_deg", json!(150), "turn"),
        ("/lip/run/slope_deg", json!(60), "Froude number"),
        ("/liquid", json!({"catalogue": {"id": "olive-oil", "temperature_c": 20}}), "Reynolds number"),
        ("/lip/edge/rounded/radius_mm", json!(0), "edge radius"),
        ("/surface/measured", json!({"advancing_deg": 180}), "contact angle"),
    ] {
        let mut far = asked.clone();
        *far.pointer_mut(pointer).unwrap() = value;
        let answer = ok(&service, "/v1/evaluations", &far).await;
        let warnings = answer["warnings"].as_array().unwrap();
        let warning = warnings.iter().find(|w| w["code"] == "beyond_calibration");
        let detail = warning.unwrap_or_else(|| panic!("{pointer}: {warnings:?}"))["detail"].as_str().unwrap();
        assert!(detail.contains(name), "{detail}");
    }
}

#[tokio::test]
async fn a_calibration_changed_on_its_way_is_refused() {
    let service = service(&state(|_| {}));
    let with = |change: &dyn Fn(&mut Value)| {
        let mut asked = covered();
        asked["calibration"] = example_calibration().clone();
        change(&mut asked["calibration"]);
        asked
    };
    let path = "/v1/evaluations";
    let corrupted = pairs(&[("/calibration/digest", "corrupted")]);
    let weight = |c: &mut Value| {
        let weight = number(&c["grid"][15]["weight"]);
        c["grid"][15]["weight"] = json!(weight + 1e-9);
    };
    assert_eq!(faults(&service, path, &with(&weight)).await, corrupted);
    assert_eq!(faults(&service, path, &with(&|c| c["digest"] = json!("0"))).await, corrupted);
    assert_eq!(
        faults(&service, path, &with(&|c| c["ranges"]["reynolds"]["high"] = json!(1e9))).await,
        corrupted
    );
    let shorter = |c: &mut Value| {
        c["grid"].as_array_mut().unwrap().pop();
    };
    assert_eq!(faults(&service, path, &with(&shorter)).await, corrupted);
    assert_eq!(
        faults(&service, path, &with(&|c| c["version"] = json!("calibration-0"))).await,
        pairs(&[("/calibration/version", "unknown_choice")])
    );
    assert_eq!(
        faults(&service, path, &with(&|c| c["coefficients"] = json!("set-0"))).await,
        pairs(&[("/calibration/coefficients", "contradiction"), ("/calibration/digest", "corrupted")])
    );
    let missing = |c: &mut Value| {
        c.as_object_mut().unwrap().remove("grid");
    };
    assert_eq!(faults(&service, path, &with(&missing)).await, pairs(&[("/calibration/grid", "missing")]));
    let misshapen = with(&|c| c["grid"][3]["mean"] = json!([1, 2]));
    assert_eq!(
        faults(&service, path, &misshapen).await,
        pairs(&[("/calibration/grid/3/mean", "wrong_count")])
    );
    let null = with(&|c| *c = Value::Null);
    assert_eq!(faults(&service, path, &null).await, pairs(&[("/calibration", "wrong_type")]));
    // A library that keeps 15 digits, or writes exponents its own way, changes nothing.
    let text = with(&|_| {}).to_string();
    let plain = post_json(&service, path, text.clone()).await;
    assert_eq!(plain.status, StatusCode::OK);
    let exponents = text.replace("e-", "E-0");
    assert_eq!(post_json(&service, path, exponents).await.body, plain.body);
    // In a batch only that case is refused.
    let batch = json!({"cases": [with(&weight), with(&|_| {})]});
    let answer = ok(&service, "/v1/evaluations/batch", &batch).await;
    assert_eq!(answer["results"][0]["problem"]["errors"][0]["pointer"], "/cases/0/calibration/digest");
    assert!(answer["results"][1]["result"]["verdict"].is_string());
}

#[tokio::test]
async fn all_faults_of_all_rows_come_together() {
    let service = service(&state(|_| {}));
    let mut bad = example();
    let rows = &mut bad["observations"];
    rows[0]["lip"]["edge"]["rounded"]["radius_mm"] = json!(0);
    rows[1]["liquid"]["catalogue"]["id"] = json!("watr");
    rows[1]["seen"] = json!({"outcome": {"flow_ml_s": -1, "dribbled": true}});
    rows[2]["surface"]["measured"] = json!({"advancing_deg": 40, "contact_angle_deg": 60});
    rows[3]["seen"] = json!({"bracket": {"clean_at_ml_s": 5, "dribbled_at_ml_s": 9}});
    rows[4]["seen"]["onset"]["standard_uncertainty_ml_s"] = json!(-1);
    rows[5]["name"] = json!("");
    rows[6]["surface"] = json!({"measured": {"advancing_deg": 180}});
    rows[7]["colour"] = json!("blue");
    rows[8] = json!(7);
    rows[9].as_object_mut().unwrap().remove("seen");
    rows[10]["seen"] = json!({"guess": {}});
    bad["prior"] = json!({"offset": {"mean": 0, "standard_deviation": 0}});
    bad["coefficients"] = json!("set-9");
    let mut wanted = pairs(&[
        ("/coefficients", "unknown_id"),
        ("/observations/0/lip/edge/rounded/radius_mm", "out_of_range"),
        ("/observations/1/liquid/catalogue/id", "unknown_id"),
        ("/observations/1/seen/outcome/flow_ml_s", "out_of_range"),
        ("/observations/2/surface/measured/advancing_deg", "contradiction"),
        ("/observations/3/seen/bracket", "contradiction"),
        ("/observations/4/seen/onset/standard_uncertainty_ml_s", "out_of_range"),
        ("/observations/5/name", "out_of_range"),
        ("/observations/6/surface", "out_of_range"),
        ("/observations/7/colour", "unknown_field"),
        ("/observations/8", "wrong_type"),
        ("/observations/9/seen", "missing"),
        ("/observations/10/seen/guess", "unknown_choice"),
        ("/prior/offset/standard_deviation", "out_of_range"),
    ]);
    wanted.sort();
    assert_eq!(faults(&service, PATH, &bad).await, wanted);
    assert_eq!(faults(&service, PATH, &json!({})).await, pairs(&[("/observations", "missing")]));
    let none = json!({"observations": []});
    assert_eq!(faults(&service, PATH, &none).await, pairs(&[("/observations", "wrong_count")]));
    let many = json!({"observations": vec![example()["observations"][0].clone(); 10_001]});
    let answer = post_json(&service, PATH, many.to_string()).await;
    assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY);
    assert_eq!(answer.json()["errors"][0]["code"], "wrong_count");
}

#[tokio::test]
async fn poor_data_have_a_finite_answer_that_says_so() {
    let service = service(&state(|_| {}));
    let first = example()["observations"][0].clone();
    // One pour far above the onset: as expected, so it teaches nothing.
    let mut clean = first.clone();
    clean["seen"] = json!({"outcome": {"flow_ml_s": 60, "dribbled": false}});
    let answer = ok(&service, PATH, &json!({"observations": [clean]})).await;
    assert!(codes(&answer).contains(&"nothing_learned"), "{:?}", codes(&answer));
    assert!(codes(&answer).contains(&"one_outcome_only"));
    assert!(answer["coefficients"].as_array().unwrap().iter().all(|c| c["learned"] == false));
    assert!(answer["diagnostics"]["condition_number"].is_null());
    // Its calibration is the prior, and is taken back all the same.
    let mut asked = covered();
    asked["calibration"] = answer["calibration"].clone();
    ok(&service, "/v1/evaluations", &asked).await;
    // All clean.
    let mut all = example();
    for row in all["observations"].as_array_mut().unwrap() {
        row["seen"] = json!({"outcome": {"flow_ml_s": 50, "dribbled": false}});
        row["name"] = json!(format!("{} clean", row["name"].as_str().unwrap()));
    }
    // Steps and pours of one jug are now alike, which is said; the names still differ.
    let answer = ok(&service, PATH, &all).await;
    assert!(codes(&answer).contains(&"nothing_learned"), "{:?}", codes(&answer));
    assert!(codes(&answer).contains(&"rows_alike"));
    // All clean just where the closed form expects the onset: that does teach something.
    for row in all["observations"].as_array_mut().unwrap() {
        row["seen"]["outcome"]["flow_ml_s"] = json!(6);
    }
    let answer = ok(&service, PATH, &all).await;
    assert!(!codes(&answer).contains(&"nothing_learned"));
    assert!(number(&answer["coefficients"][0]["mean"]) < -0.1);
    // One onset.
    let answer = ok(&service, PATH, &json!({"observations": [first]})).await;
    assert!(codes(&answer).contains(&"coefficients_not_learned"), "{:?}", codes(&answer));
    assert!(codes(&answer).contains(&"covariates_do_not_vary"));
}

#[tokio::test]
async fn rows_entered_twice_are_refused_or_pointed_out() {
    let service = service(&state(|_| {}));
    let mut twice = example();
    let copy = twice["observations"][2].clone();
    twice["observations"].as_array_mut().unwrap().push(copy.clone());
    assert_eq!(faults(&service, PATH, &twice).await, pairs(&[("/observations/18", "duplicate")]));
    twice["observations"][18]["name"] = json!("jug B, again");
    let answer = ok(&service, PATH, &twice).await;
    assert!(codes(&answer).contains(&"rows_alike"));
    assert_eq!(answer["rows"][2]["digest"], answer["rows"][18]["digest"]);
    assert_ne!(answer["rows"][2]["digest"], answer["rows"][3]["digest"]);
    // The order of the rows is no part of what they say.
    let mut reversed = example();
    reversed["observations"].as_array_mut().unwrap().reverse();
    let (there, back) = (ok(&service, PATH, &example()).await, ok(&service, PATH, &reversed).await);
    assert_eq!(there["calibration"]["rows_digest"], back["calibration"]["rows_digest"]);
}

#[tokio::test]
async fn an_outlier_is_flagged_and_kept() {
    let service = service(&state(|_| {}));
    let mut odd = example();
    odd["observations"][4]["seen"]["onset"]["flow_ml_s"] = json!(40);
    let answer = ok(&service, PATH, &odd).await;
    assert!(codes(&answer).contains(&"rows_flagged"), "{:?}", codes(&answer));
    let rows = answer["rows"].as_array().unwrap();
    assert_eq!(rows[4]["flagged"], true);
    assert!(number(&rows[4]["z"]) > 0.0);
    assert_eq!(rows.iter().filter(|row| row["flagged"] == true).count(), 1);
    assert_eq!(answer["diagnostics"]["counts"]["onset"], 9);
}

#[tokio::test]
async fn a_prior_of_the_callers_own() {
    let service = service(&state(|_| {}));
    let mut told = example();
    told["prior"] = json!({"offset": {"mean": 1, "standard_deviation": 0.01}});
    let answer = ok(&service, PATH, &told).await;
    assert!(number(&answer["coefficients"][0]["mean"]) > 0.8);
    assert_eq!(answer["coefficients"][1]["prior_standard_deviation"], 0.3);
    assert_eq!(answer["calibration"]["prior"]["offset"]["mean"].as_f64(), Some(1.0));
}

#[tokio::test]
async fn taken_back_wherever_a_verdict_is_given() {
    let service = service(&state(|_| {}));
    let mut base = covered();
    base["calibration"] = example_calibration().clone();
    let evaluated = ok(&service, "/v1/evaluations", &base).await;
    // A sweep says of a point what an evaluation says of it.
    let mut sweep = json!({
        "base": base,
        "axes": [{"pointer": "/lip/edge/rounded/radius_mm", "values": [0.5, 0.7, 3]}],
        "outputs": ["safety_factor", "dribble_probability", "critical_weber", "onset_flow_ml_s"]
    });
    let swept = ok(&service, "/v1/sweeps", &sweep).await;
    for (column, pointer) in [
        ("safety_factor", "/safety_factor/value"),
        ("dribble_probability", "/dribble_probability"),
        ("critical_weber", "/threshold/critical_weber"),
        ("onset_flow_ml_s", "/threshold/onset_flow_ml_s"),
    ] {
        let (there, here) =
            (number(&swept["columns"][column][1]), number(evaluated.pointer(pointer).unwrap()));
        assert!((there / here - 1.0).abs() < 1e-9, "{column}: {there} {here}");
    }
    sweep["base"]["calibration"]["digest"] = json!("none");
    let pointer = pairs(&[("/base/calibration/digest", "corrupted")]);
    assert_eq!(faults(&service, "/v1/sweeps", &sweep).await, pointer);
    // A design: a calibration that knows the scatter allows a blunter edge than the closed form's own doubt.
    let design = |calibration: Option<&Value>| {
        let mut base = covered();
        if let Some(calibration) = calibration {
            base["calibration"] = calibration.clone();
        }
        base["pour"]["flow_ml_s"] = json!(16);
        json!({
            "base": base,
            "vary": {"pointer": "/lip/edge/rounded/radius_mm", "between": [0.2, 3]},
            "cases": [{"name": "as poured"}]
        })
    };
    let with = ok(&service, "/v1/designs", &design(Some(example_calibration()))).await;
    let without = ok(&service, "/v1/designs", &design(None)).await;
    let limit = number(&with["limit"]["value"]);
    assert!(without["limit"].is_null() || limit > number(&without["limit"]["value"]), "{with} {without}");
    // A pour.
    let mut pour: Value = serde_json::from_str(dribble_risk::service::api::pours::EXAMPLE).unwrap();
    let plain = ok(&service, "/v1/pours", &pour).await;
    pour["calibration"] = example_calibration().clone();
    let answer = ok(&service, "/v1/pours", &pour).await;
    assert!(codes(&answer).contains(&"calibrated_by_caller"), "{:?}", codes(&answer));
    assert_ne!(answer["dribbled_ml"], plain["dribbled_ml"]);
    pour["calibration"]["rows_digest"] = json!("");
    assert_eq!(faults(&service, "/v1/pours", &pour).await, pairs(&[("/calibration/digest", "corrupted")]));
}

#[tokio::test]
async fn the_picture_shows_curve_and_rows() {
    let service = service(&state(|_| {}));
    let headers = [("content-type", "application/json"), ("accept", "image/svg+xml")];
    let answer = call(&service, "POST", PATH, &headers, EXAMPLE.into()).await;
    assert_eq!(answer.status, StatusCode::OK, "{:?}", answer.body);
    assert_eq!(answer.header("content-type"), "image/svg+xml");
    let text = String::from_utf8(answer.body.to_vec()).unwrap();
    let document = roxmltree::Document::parse(&text).unwrap();
    let words: String = document.descendants().filter_map(|node| node.text()).collect();
    assert!(
        words.contains("18 bench rows") && words.contains("2 pours clean, 4 dribbled, 12 onsets"),
        "{words}"
    );
    assert!(!text.contains("NaN") && !text.contains("inf"));
    let refused = call(&service, "POST", PATH, &[headers[0], ("accept", "text/csv")], EXAMPLE.into()).await;
    assert_eq!(refused.status, StatusCode::NOT_ACCEPTABLE);
}

#[tokio::test]
async fn two_hundred_rows() {
    let mut many = example();
    let rows = many["observations"].as_array().unwrap().clone();
    let more: Vec<Value> = (0..200)
        .map(|i| {
            let mut row = rows[i % rows.len()].clone();
            row["name"] = json!(format!("pour {i}"));
            row["liquid"]["catalogue"]["temperature_c"] = json!(15.0 + i as f64 * 0.05);
            row
        })
        .collect();
    many["observations"] = json!(more);
    let text = many.to_string();
    let begun = std::time::Instant::now();
    let answer: Value = serde_json::from_slice(&calibrate_json(text.as_bytes()).unwrap()).unwrap();
    // Unoptimised and beside other tests it takes tens of milliseconds; the benchmark has the figure.
    assert!(begun.elapsed().as_secs_f64() < 5.0);
    assert_eq!(answer["rows"].as_array().unwrap().len(), 200);
    println!("200 rows: {:?}", begun.elapsed());
}

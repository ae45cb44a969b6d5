//! `POST /v1/evaluations` as a picture.

use axum::{Router, body::Body};
use http::StatusCode;
use roxmltree::Document;
use serde_json::{Value, json};

use crate::{
    ask::{Answer, call, service, state},
    evaluations::{lip, request},
};

async fn ask(service: &Router, accept: &str, request: &Value) -> Answer {
    let headers = [("content-type", "application/json"), ("accept", accept)];
    call(service, "POST", "/v1/evaluations", &headers, Body::from(request.to_string())).await
}

async fn drawn(service: &Router, request: &Value) -> String {
    let answer = ask(service, "image/svg+xml", request).await;
    assert_eq!(answer.status, StatusCode::OK, "{request}\n{:?}", answer.body);
    assert_eq!(answer.header("content-type"), "image/svg+xml");
    String::from_utf8(answer.body.to_vec()).unwrap()
}

/// All words of the picture, in order.
fn words(svg: &str) -> String {
    let document = Document::parse(svg).unwrap();
    let texts = document.descendants().filter(|n| n.has_tag_name(("http://www.w3.org/2000/svg", "text")));
    texts.filter_map(|n| n.text()).collect::<Vec<_>>().join("\n")
}

/// A number to three significant digits, as plain pictures write it.
fn three(value: &Value) -> String {
    let value = value.as_f64().unwrap();
    let exponent = libm::log10(value.abs()).floor();
    let unit = libm::exp10(exponent - 2.0);
    format!("{}", ((value / unit).round() * unit * 1e6).round() / 1e6)
}

fn set(pointer: &str, value: Value) -> Value {
    let mut request = request();
    *request.pointer_mut(pointer).unwrap() = value;
    request
}

#[tokio::test]
async fn the_picture_is_sound_and_says_what_the_json_says() {
    let service = service(&state(|_| {}));
    let mut leaving = 0;
    for flow in [8, 20, 45, 150] {
        let request = set("/pour/flow_ml_s", json!(flow));
        let svg = drawn(&service, &request).await;
        let answer = ask(&service, "application/json", &request).await.json();
        let document = Document::parse(&svg).unwrap();
        let root = document.root_element();
        assert_eq!((root.tag_name().name(), root.attribute("role")), ("svg", Some("img")));
        let texts: Vec<_> =
            root.children().take(2).map(|n| (n.tag_name().name(), n.text().unwrap())).collect();
        assert_eq!((texts[0].0, texts[1].0), ("title", "desc"));
        let verdict = answer["verdict"].as_str().unwrap();
        assert!(texts[0].1.to_lowercase().starts_with(verdict), "{verdict}: {texts:?}");
        let words = words(&svg);
        for pointer in [
            "/safety_factor/value",
            "/safety_factor/low",
            "/safety_factor/high",
            "/stream/weber",
            "/stream/thickness_mm",
            "/stream/speed_m_s",
            "/threshold/critical_weber",
            "/threshold/onset_flow_ml_s",
            "/threshold/recovery_flow_ml_s/at_least",
            "/resolved/surface/advancing_deg/value",
        ] {
            let number = three(answer.pointer(pointer).unwrap());
            assert!(words.contains(&number), "{pointer} {number} is missing in\n{words}");
            assert!(texts[1].1.contains(&number), "{pointer} {number} is missing in\n{}", texts[1].1);
        }
        if answer["deflection_deg"].is_object() {
            leaving += 1;
            let number = three(&answer["deflection_deg"]["value"]);
            assert!(words.contains(&format!("{number}°")), "{number} {words}");
        } else {
            assert!(words.contains("clings, runs down the wall"), "{words}");
        }
        assert!(words.contains(answer["model"]["fingerprint"].as_str().unwrap()));
    }
    assert!((1..4).contains(&leaving), "both kinds of picture were looked at");
}

#[tokio::test]
async fn every_section_and_kind_of_surface_and_liquid_can_be_drawn() {
    let service = service(&state(|_| {}));
    for section in [
        json!({"sheet": {"width_mm": 2000}}),
        json!({"vee": {"included_angle_deg": 70}}),
        json!({"trough": {"diameter_mm": 16}}),
        json!({"tube": {"bore_mm": 9}}),
        json!({"tube": {"bore_mm": 0.5}}),
    ] {
        for flow in [0.01, 30.0, 20_000.0] {
            for (radius, turn, slope) in
                [(0.0, 90, 0), (50.0, 180, 85), (0.8, 20, 0), (0.8, 31, -30), (0.8, 180, -30)]
            {
                let mut request = set("/lip/section", section.clone());
                request["pour"]["flow_ml_s"] = json!(flow);
                request["lip"]["edge"]["rounded"] = json!({"radius_mm": radius, "turn_deg": turn});
                request["lip"]["run"] = json!({"slope_deg": slope, "length_mm": 1000});
                request["limits"] = json!({});
                let svg = drawn(&service, &request).await;
                Document::parse(&svg).unwrap();
                assert!(!svg.contains("NaN") && !words(&svg).contains('∞'), "{request}");
            }
        }
    }
    let mut other = set("/surface", json!({"catalogue": {"id": "porcelain-glazed", "state": "in_use"}}));
    other["uncertainty"] = json!({});
    other["liquid"] =
        json!({"measured": {"density_kg_m3": 1030, "viscosity_mpa_s": 2.1, "surface_tension_mn_m": 46}});
    let words = words(&drawn(&service, &other).await);
    assert!(words.contains("Measured liquid · ") && words.contains("(in use)"), "{words}");
}

#[tokio::test]
async fn same_request_same_bytes() {
    let [one, other] = [1, 2].map(|_| service(&state(|_| {})));
    let first = drawn(&one, &request()).await;
    assert_eq!(first, drawn(&one, &request()).await);
    assert_eq!(first, drawn(&other, &request()).await);
}

#[tokio::test]
async fn accept_decides_the_form() {
    let service = service(&state(|_| {}));
    for (accept, form) in [
        ("*/*", "application/json"),
        ("image/*", "image/svg+xml"),
        ("application/json;q=0.5, image/svg+xml", "image/svg+xml"),
        ("application/json, image/svg+xml", "application/json"),
    ] {
        assert_eq!(ask(&service, accept, &request()).await.header("content-type"), form, "{accept}");
    }
    let refused = ask(&service, "image/png", &request()).await;
    assert_eq!(refused.status, StatusCode::NOT_ACCEPTABLE);
    assert!(refused.problem()["detail"].as_str().unwrap().contains("image/svg+xml"));
}

#[tokio::test]
async fn bad_requests_are_problems_in_json_and_carry_no_markup_into_a_picture() {
    let service = service(&state(|_| {}));
    let markup = "\"/></svg><script>alert(1)</script><svg onload=\"x\">";
    let mut named = request();
    named["liquid"] = json!({"catalogue": {"id": markup, "temperature_c": 20}});
    let mut surfaced = request();
    surfaced["surface"] = json!({"catalogue": {"id": markup, "state": "clean"}});
    surfaced["uncertainty"] = json!({});
    let mut pointed = request();
    pointed["uncertainty"] = json!({markup: 1});
    let mut extra = request();
    extra["lip"] = lip();
    extra["lip"][markup] = json!(markup);
    for request in [named, surfaced, pointed, extra] {
        let answer = ask(&service, "image/svg+xml", &request).await;
        assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY, "{request}");
        answer.problem();
    }
}

#[tokio::test]
async fn a_sweep_is_drawn_as_curves_or_as_a_map() {
    let service = service(&state(|_| {}));
    let accept = [("content-type", "application/json"), ("accept", "image/svg+xml")];
    let radius = serde_json::json!({"pointer": "/lip/edge/rounded/radius_mm", "from": 0.1, "to": 3, "count": 30, "spacing": "log"});
    let flow = serde_json::json!({"pointer": "/pour/flow_ml_s", "from": 5, "to": 100, "count": 24, "spacing": "log"});
    let angle = serde_json::json!({"pointer": "/surface/measured/advancing_deg", "values": [70, 90]});
    for axes in
        [serde_json::json!([flow]), serde_json::json!([radius, flow]), serde_json::json!([flow, angle])]
    {
        let request = serde_json::json!({"base": crate::evaluations::request(), "axes": axes}).to_string();
        let answer = call(&service, "POST", "/v1/sweeps", &accept, request.clone().into()).await;
        assert_eq!(answer.status, http::StatusCode::OK, "{:?}", answer.body);
        assert_eq!(answer.header("content-type"), "image/svg+xml");
        let text = std::str::from_utf8(&answer.body).unwrap();
        let document = roxmltree::Document::parse(text).unwrap();
        for needed in ["title", "desc"] {
            assert!(
                document.descendants().any(|node| node.has_tag_name(("http://www.w3.org/2000/svg", needed))),
                "{needed}"
            );
        }
        let again = call(&service, "POST", "/v1/sweeps", &accept, request.into()).await;
        assert_eq!(again.body, answer.body, "same request, same bytes");
    }
    let third = serde_json::json!({"pointer": "/lip/edge/rounded/turn_deg", "values": [90, 120]});
    let request = serde_json::json!({"base": crate::evaluations::request(), "axes": [radius, flow, third], "part": {"index": 0, "of": 2}});
    let refused = call(&service, "POST", "/v1/sweeps", &accept, request.to_string().into()).await;
    let problem = refused.problem();
    assert_eq!(problem["status"], 422);
    let pointers: Vec<&str> =
        problem["errors"].as_array().unwrap().iter().map(|e| e["pointer"].as_str().unwrap()).collect();
    assert_eq!(pointers, ["/part", "/axes"]);
}

//! `POST /v1/evaluations/batch`.

use http::StatusCode;
use serde_json::{Value, json};

use crate::ask::{post_json, service, state};
use crate::evaluations::request;

const PATH: &str = "/v1/evaluations/batch";

#[tokio::test]
async fn each_case_is_judged_on_its_own_and_in_order() {
    let service = service(&state(|_| {}));
    let mut cases: Vec<Value> = (0..300)
        .map(|i| {
            let mut case = request();
            case["pour"]["flow_ml_s"] = json!(5 + i);
            case["include"] = json!([]);
            case
        })
        .collect();
    cases[7] = json!({"lip": 3});
    cases[130]["liquid"]["catalogue"]["id"] = "watr".into();
    cases[131]["pour"] = json!("fast");
    let text = json!({ "cases": cases }).to_string();
    let answer = post_json(&service, PATH, text.clone()).await;
    assert_eq!(answer.status, StatusCode::OK);
    let results = answer.json()["results"].as_array().unwrap().clone();
    assert_eq!(results.len(), 300);
    for (i, (item, case)) in results.iter().zip(&cases).enumerate() {
        if [7, 130, 131].contains(&i) {
            let problem = &item["problem"];
            assert_eq!(problem["status"], 422, "{item}");
            let pointers =
                problem["errors"].as_array().unwrap().iter().map(|e| e["pointer"].as_str().unwrap());
            assert!(pointers.into_iter().all(|p| p.starts_with(&format!("/cases/{i}/"))), "{problem}");
        } else {
            let single = post_json(&service, "/v1/evaluations", case.to_string()).await.json();
            assert_eq!(item["result"], single, "case {i}");
        }
    }
    assert_eq!(post_json(&service, PATH, text).await.body, answer.body, "same request, same bytes");
}

#[tokio::test]
async fn counts_are_limited_and_the_envelope_is_checked() {
    let service = service(&state(|_| {}));
    let many = format!("{{\"cases\":[{}]}}", vec!["{}"; 10_001].join(","));
    for (text, status, pointer) in [
        (many.as_str(), 422, Some("/cases")),
        (r#"{"cases":[]}"#, 422, Some("/cases")),
        (r#"{"cases":{}}"#, 422, Some("/cases")),
        (r#"{"case":[]}"#, 422, Some("/case")),
        ("[]", 422, Some("")),
        (r#"{"cases":[{]}"#, 400, None),
        ("", 400, None),
    ] {
        let answer = post_json(&service, PATH, text.to_owned()).await;
        let problem = answer.problem();
        assert_eq!(problem["status"], status, "{problem}");
        if let Some(pointer) = pointer {
            let named = problem["errors"].as_array().unwrap().iter().any(|e| e["pointer"] == pointer);
            assert!(named, "{pointer}: {problem}");
        }
    }
    let most = format!("{{\"cases\":[{}]}}", vec!["{}"; 10_000].join(","));
    let answer = post_json(&service, PATH, most).await;
    assert_eq!(answer.status, StatusCode::OK);
    assert_eq!(answer.json()["results"].as_array().unwrap().len(), 10_000);
}

#[tokio::test]
async fn more_batches_than_the_server_takes_on_are_told_to_come_back() {
    let state = state(|settings| settings.max_heavy = std::num::NonZeroUsize::new(1));
    let service = service(&state);
    let held = state.heavy.clone().acquire_owned().await.unwrap();
    let text = json!({ "cases": [request()] }).to_string();
    let refused = post_json(&service, PATH, text.clone()).await;
    assert_eq!(refused.status, StatusCode::SERVICE_UNAVAILABLE);
    assert_eq!(refused.header("retry-after"), "1");
    drop(held);
    assert_eq!(post_json(&service, PATH, text.clone()).await.status, StatusCode::OK);
    assert_eq!(post_json(&service, PATH, text).await.status, StatusCode::OK, "the permit came back");
}

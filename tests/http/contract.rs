//! The OpenAPI document is complete enough for client generators.

use dribble_risk::service::openapi_json;
use serde_json::Value;

fn operations(document: &Value) -> Vec<(String, &Value)> {
    let paths = document["paths"].as_object().unwrap();
    let mut found = Vec::new();
    for (path, item) in paths {
        for (method, operation) in item.as_object().unwrap() {
            if ["get", "post", "put", "delete", "patch", "head"].contains(&method.as_str()) {
                found.push((format!("{method} {path}"), operation));
            }
        }
    }
    found
}

#[test]
fn every_operation_is_described_and_tells_how_it_fails() {
    let document: Value = serde_json::from_str(&openapi_json().unwrap()).unwrap();
    assert!(document["openapi"].as_str().unwrap().starts_with("3.1"));
    let operations = operations(&document);
    assert!(operations.len() >= 6);
    let mut ids = std::collections::BTreeSet::new();
    for (name, operation) in &operations {
        assert!(ids.insert(operation["operationId"].as_str().unwrap()), "{name}: the id is taken");
        assert!(operation["summary"].as_str().is_some_and(|text| !text.is_empty()), "{name}");
        let responses = operation["responses"].as_object().unwrap();
        for needed in ["406", "500", "503", "504", "default"] {
            assert!(responses.contains_key(needed), "{name} lacks {needed}");
        }
        for (status, response) in responses {
            let response = match response["$ref"].as_str() {
                Some(reference) => document.pointer(&reference[1..]).unwrap(),
                None => response,
            };
            let description = response["description"].as_str().unwrap_or_default();
            assert!(!description.is_empty(), "{name} {status} has no description");
            if status.starts_with(['4', '5']) || status == "default" {
                assert!(response["content"]["application/problem+json"].is_object(), "{name} {status}");
            }
        }
    }
}

#[test]
fn every_reference_leads_somewhere() {
    fn walk(at: &Value, document: &Value) {
        match at {
            Value::Object(members) => {
                if let Some(Value::String(reference)) = members.get("$ref") {
                    assert!(document.pointer(&reference[1..]).is_some(), "{reference} leads nowhere");
                }
                members.values().for_each(|member| walk(member, document));
            }
            Value::Array(items) => items.iter().for_each(|item| walk(item, document)),
            Value::Null | Value::Bool(_) | Value::Number(_) | Value::String(_) => {}
        }
    }
    let document: Value = serde_json::from_str(&openapi_json().unwrap()).unwrap();
    walk(&document, &document);
}

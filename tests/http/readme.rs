//! Every call in the README is made, and its answer holds what the README shows.

use http::StatusCode;
use serde_json::Value;

use crate::ask::{call, service, state};

const README: &str = include_str!("../../README.md");

/// The fenced blocks of the README with their language.
fn blocks() -> Vec<(&'static str, String)> {
    let mut found: Vec<(&str, String)> = Vec::new();
    let mut inside = false;
    for line in README.lines() {
        match line.strip_prefix("```") {
            Some(language) if !inside => {
                found.push((language, String::new()));
                inside = true;
            }
            Some(_) => inside = false,
            None if inside => {
                if let Some((_, text)) = found.last_mut() {
                    text.push_str(line);
                    text.push('\n');
                }
            }
            None => {}
        }
    }
    found
}

/// Whether `answer` holds all that `shown` shows: members of objects, items of lists in order (others may stand between), words exactly, numbers as rounded.
fn holds(answer: &Value, shown: &Value) -> Result<(), String> {
    match (answer, shown) {
        (Value::Object(answer), Value::Object(shown)) => shown.iter().try_for_each(|(name, value)| {
            holds(answer.get(name).ok_or_else(|| format!("no {name}"))?, value)
                .map_err(|e| format!("{name}: {e}"))
        }),
        (Value::Array(answer), Value::Array(shown)) => {
            let mut rest = answer.iter();
            shown.iter().try_for_each(|item| {
                rest.any(|candidate| holds(candidate, item).is_ok())
                    .then_some(())
                    .ok_or_else(|| format!("no item {item}"))
            })
        }
        (Value::Number(a), Value::Number(s)) => {
            let (a, s) = (a.as_f64().unwrap(), s.as_f64().unwrap());
            if (a - s).abs() <= 5e-3 * s.abs() { Ok(()) } else { Err(format!("{a}, shown as {s}")) }
        }
        (a, s) if a == s => Ok(()),
        (a, s) => Err(format!("{a}, shown as {s}")),
    }
}

#[tokio::test]
async fn every_call_is_answered_as_shown() {
    let service = service(&state(|_| {}));
    let blocks = blocks();
    let mut calls = 0;
    for pair in blocks.windows(2) {
        let [(_, command), (language, shown)] = pair else { continue };
        if !command.starts_with("curl") || *language != "json" {
            continue;
        }
        let after = command.split_once("http://127.0.0.1:8080").unwrap().1;
        let path: String = after.chars().take_while(|c| !"' \n".contains(*c)).collect();
        let answer = match command.split_once(" -d '") {
            Some((_, rest)) => {
                let body = rest.trim_end().trim_end_matches('\'').to_owned();
                call(&service, "POST", &path, &[("content-type", "application/json")], body.into()).await
            }
            None => call(&service, "GET", &path, &[], axum::body::Body::empty()).await,
        };
        assert!([StatusCode::OK, StatusCode::UNPROCESSABLE_ENTITY].contains(&answer.status), "{path}");
        let shown: Value = serde_json::from_str(shown).unwrap();
        if let Err(difference) = holds(&answer.json(), &shown) {
            panic!("{path}: {difference}\n{}", answer.json());
        }
        calls += 1;
    }
    assert!(calls >= 5, "{calls}");
}

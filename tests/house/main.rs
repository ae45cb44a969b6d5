//! Three storeys, each knowing only what is below it.
#![allow(missing_docs, clippy::unwrap_used)]

use std::path::{Path, PathBuf};

fn sources(storey: &str) -> Vec<(PathBuf, String)> {
    fn walk(at: &Path, found: &mut Vec<(PathBuf, String)>) {
        for entry in std::fs::read_dir(at).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                walk(&path, found);
            } else if path.extension().is_some_and(|e| e == "rs") {
                let text = std::fs::read_to_string(&path).unwrap();
                found.push((path, text));
            }
        }
    }
    let mut found = Vec::new();
    walk(&Path::new(env!("CARGO_MANIFEST_DIR")).join("src").join(storey), &mut found);
    assert!(found.len() > 5, "{storey}");
    found
}

/// Names that code of a storey may not use. Comments may speak of them.
fn forbid(storey: &str, names: &[&str]) {
    for (path, text) in sources(storey) {
        for (number, line) in text.lines().enumerate() {
            let code = line.split("//").next().unwrap_or_default();
            for name in names {
                assert!(!code.contains(name), "{}:{}: {}", path.display(), number + 1, line.trim());
            }
        }
    }
}

#[test]
fn physics_knows_nothing_above_it() {
    forbid(
        "physics",
        &[
            "crate::analysis",
            "crate::service",
            "serde::",
            "axum",
            "tokio",
            "hyper::",
            "tracing",
            "std::time",
            "std::env",
            "std::fs",
            "static mut",
            "OnceLock",
            "thread_local",
        ],
    );
}

#[test]
fn analysis_knows_nothing_above_it() {
    forbid(
        "analysis",
        &[
            "crate::service",
            "serde",
            "axum",
            "tokio",
            "hyper::",
            "tracing",
            "std::time",
            "std::env",
            "std::fs",
        ],
    );
}

#[test]
fn only_one_place_computes_the_numbers_of_a_stream() {
    for storey in ["analysis", "service"] {
        for (path, text) in sources(storey) {
            let here = path.ends_with("analysis/balance.rs");
            assert!(here || !text.contains("Numbers::of("), "{}", path.display());
        }
    }
}

#[test]
fn only_one_place_asks_the_closed_form_for_a_threshold() {
    // Elsewhere a calibration would be forgotten.
    for storey in ["analysis", "service"] {
        for (path, text) in sources(storey) {
            let here = path.ends_with("analysis/balance.rs") || path.ends_with("calibration/correction.rs");
            let asks = text.contains(".threshold_for(") || text.contains(".threshold(");
            assert!(here || !asks, "{}", path.display());
        }
    }
}

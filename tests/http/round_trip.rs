//! From the bench to the release of a lot: each answer goes into the next request.

use dribble_risk::service::api::calibrations::EXAMPLE;
use http::StatusCode;
use serde_json::{Value, json};

use crate::ask::{post_json, service, state};

#[tokio::test]
async fn bench_to_design_to_tolerance_to_lot() {
    let service = service(&state(|_| {}));
    let ask = async |path: &str, request: &Value| -> Value {
        let answer = post_json(&service, path, request.to_string()).await;
        assert_eq!(answer.status, StatusCode::OK, "{path}: {:?}", answer.body);
        answer.json()
    };
    let number = |value: &Value| value.as_f64().unwrap_or_else(|| panic!("{value}"));

    // Bench pours, on jugs like the one to be released.
    let bench: Value = serde_json::from_str(EXAMPLE).unwrap();
    let calibration = ask("/v1/calibrations", &bench).await["calibration"].clone();

    // The largest edge radius that stays clean.
    let pour = &bench["observations"][8];
    let base = json!({
        "lip": pour["lip"], "surface": pour["surface"], "liquid": pour["liquid"],
        "pour": {"flow_ml_s": 17}, "calibration": calibration, "include": []
    });
    let design = json!({
        "base": base,
        "vary": {"pointer": "/lip/edge/rounded/radius_mm", "between": [0.1, 3]},
        "cases": [{"name": "water"}]
    });
    let limit = ask("/v1/designs", &design).await["limit"].clone();
    assert_eq!(limit["sense"], "at_most");
    let limit = number(&limit["value"]);
    assert!((0.2..2.5).contains(&limit), "{limit}");
    // Without the bench the closed form's own doubt leaves less room, or none.
    let mut alone = design.clone();
    alone["base"].as_object_mut().unwrap().remove("calibration");
    let alone = ask("/v1/designs", &alone).await;
    assert!(alone["limit"].is_null() || number(&alone["limit"]["value"]) < limit, "{alone}");

    // The dribble rate at the drawing's spread below that limit; the model's doubt stands apart.
    let mut drawn = base.clone();
    let nominal = 0.8 * limit;
    drawn["lip"]["edge"]["rounded"]["radius_mm"] = json!(nominal);
    let mut tolerance = json!({
        "base": drawn,
        "varying": [{"pointer": "/lip/edge/rounded/radius_mm", "spread": {"normal": {"mean": nominal, "sd": 0.05 * limit}}}],
        "trials": 20_000
    });
    let spread = ask("/v1/tolerances", &tolerance).await;
    let width = |answer: &Value| {
        let doubt = &answer["dribble_ppm_with_model_doubt"];
        number(&doubt["high"]) - number(&doubt["low"])
    };
    assert!(number(&spread["dribble_ppm"]["value"]) < 1000.0, "{}", spread["dribble_ppm"]);
    tolerance["base"].as_object_mut().unwrap().remove("calibration");
    let uncalibrated = ask("/v1/tolerances", &tolerance).await;
    assert!(width(&spread) < width(&uncalibrated), "{} {}", width(&spread), width(&uncalibrated));
    assert_ne!(spread["margin"]["mean"], uncalibrated["margin"]["mean"]);

    // Measured radii against the limit of that design.
    let lot = |mean: f64| {
        let values: Vec<f64> = (0..60)
            .map(|i| mean + 0.03 * limit * libm::sin(1.7 * f64::from(i)) * (1.0 + 0.1 * f64::from(i % 5)))
            .collect();
        json!({
            "characteristic": {"name": "edge radius", "unit": "mm"},
            "limit": {"from_design": design},
            "evidence": {"measured": {"values": values, "standard_uncertainty": 0.005 * limit, "bias": 0}},
            "plan": {"producer": {"fraction": 0.01, "risk": 0.05}, "consumer": {"fraction": 0.06, "risk": 0.10}}
        })
    };
    let good = ask("/v1/lots", &lot(nominal)).await;
    assert_eq!(good["decision"], "accept", "{good}");
    assert!((number(&good["limit"]["value"]) / limit - 1.0).abs() < 1e-9);
    assert_eq!(ask("/v1/lots", &lot(1.02 * limit)).await["decision"], "reject");
    // A calibration that went bad on its way is found wherever it hides.
    let mut bad = lot(nominal);
    bad["limit"]["from_design"]["base"]["calibration"]["centre"]["ln_wetting"] = json!(0);
    let answer = post_json(&service, "/v1/lots", bad.to_string()).await;
    assert_eq!(answer.status, StatusCode::UNPROCESSABLE_ENTITY);
    assert_eq!(answer.problem()["errors"][0]["pointer"], "/limit/from_design/base/calibration/digest");
}

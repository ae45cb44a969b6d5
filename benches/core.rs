//! The core in process: deciding, evaluating, with and without remedies. `cargo bench --bench core`.
#![allow(missing_docs, clippy::unwrap_used)]

use std::hint::black_box;

use criterion::{Criterion, criterion_group, criterion_main};
use dribble_risk::{
    analysis::{
        decision::decide,
        evaluation::{Include, evaluate},
        spec::{LiquidSpec, OuterFace, Overrides, SectionSpec, Spec, SurfaceSpec, Uncertainties},
    },
    physics::{
        liquid::{self, Conditions},
        separation::closed_form::DEFAULT_SET,
        surface::{self, State},
    },
    service::api::{
        calibrations,
        evaluations::{EXAMPLE, EvaluationRequest, evaluate_json},
    },
};

#[global_allocator]
static ALLOCATOR: mimalloc::MiMalloc = mimalloc::MiMalloc;

/// A level sheet lip with measured liquid and angles.
fn level() -> Spec {
    Spec {
        section: SectionSpec::Sheet { width_mm: 24.0 },
        radius_mm: 0.8,
        turn_deg: 110.0,
        slope_deg: 0.0,
        length_mm: 20.0,
        surface: SurfaceSpec::Measured {
            contact_angle_deg: Some(72.0),
            advancing_deg: Some(84.0),
            receding_deg: Some(41.0),
        },
        liquid: LiquidSpec::Measured {
            density_kg_m3: 1030.0,
            viscosity_mpa_s: 2.1,
            surface_tension_mn_m: 46.0,
        },
        flow_ml_s: 25.0,
        outer_face: OuterFace::Dry,
        confidence: 0.95,
        uncertainty: Uncertainties::default(),
        coefficients: DEFAULT_SET,
        calibration: None,
    }
}

fn catalogue() -> Spec {
    Spec {
        surface: SurfaceSpec::Catalogue {
            material: surface::find("porcelain-glazed").unwrap(),
            state: State::InUse,
        },
        liquid: LiquidSpec::Catalogue {
            entry: liquid::find("sucrose-solution").unwrap(),
            conditions: Conditions { temperature_c: 20.0, mass_fraction: Some(0.3), ..Conditions::default() },
            overrides: Overrides::default(),
        },
        ..level()
    }
}

fn core(c: &mut Criterion) {
    let sloped = Spec { slope_deg: 15.0, ..level() };
    let vee = Spec { section: SectionSpec::Vee { included_angle_deg: 70.0 }, ..sloped };
    let trough = Spec { section: SectionSpec::Trough { diameter_mm: 16.0 }, ..sloped };
    for (name, spec) in [
        ("level sheet, measured", level()),
        ("level sheet, catalogue", catalogue()),
        ("sloped sheet, measured", sloped),
        ("sloped vee, measured", vee),
        ("sloped trough, measured", trough),
    ] {
        let case = spec.resolve().unwrap().case;
        c.bench_function(&format!("decide: {name}"), |b| b.iter(|| decide(black_box(&case)).unwrap().margin));
        c.bench_function(&format!("evaluate, include []: {name}"), |b| {
            b.iter(|| evaluate(black_box(&spec), Include::NONE, &[]).unwrap().decision.margin);
        });
        c.bench_function(&format!("evaluate, everything: {name}"), |b| {
            b.iter(|| evaluate(black_box(&spec), Include::ALL, &[]).unwrap().decision.margin);
        });
    }
    let mut bench: serde_json::Value = serde_json::from_str(calibrations::EXAMPLE).unwrap();
    let rows = bench["observations"].as_array().unwrap().clone();
    let many = (0..200).map(|i| {
        let mut row = rows[i % rows.len()].clone();
        row["name"] = format!("pour {i}").into();
        row
    });
    bench["observations"] = many.collect();
    let bench = bench.to_string();
    c.bench_function("JSON to JSON: a calibration with 200 rows", |b| {
        b.iter(|| calibrations::calibrate_json(black_box(bench.as_bytes())).unwrap().len());
    });
    let calibration: serde_json::Value =
        serde_json::from_slice(&calibrations::calibrate_json(bench.as_bytes()).unwrap()).unwrap();
    let mut calibrated: serde_json::Value = serde_json::from_str(EXAMPLE).unwrap();
    calibrated["calibration"] = calibration["calibration"].clone();
    let calibrated_text = calibrated.to_string();
    c.bench_function("JSON to JSON: the example with a calibration, everything", |b| {
        b.iter(|| evaluate_json(black_box(calibrated_text.as_bytes())).unwrap().len());
    });
    let request: EvaluationRequest = serde_json::from_value(calibrated).unwrap();
    let case = request.question().unwrap().0.resolve().unwrap().case;
    c.bench_function("decide: the example with a calibration", |b| {
        b.iter(|| decide(black_box(&case)).unwrap().margin);
    });
    c.bench_function("JSON to JSON: the example, everything", |b| {
        b.iter(|| evaluate_json(black_box(EXAMPLE.as_bytes())).unwrap().len());
    });
}

criterion_group!(benches, core);
criterion_main!(benches);

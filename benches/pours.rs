//! Whole pours in process: one of 10 s of flow and tilt, and a thousand on every core.
#![allow(missing_docs, clippy::unwrap_used)]

use std::{
    hint::black_box,
    sync::atomic::{AtomicBool, AtomicUsize, Ordering},
    time::{Duration, Instant},
};

use criterion::{Criterion, criterion_group, criterion_main};
use dribble_risk::{
    analysis::pour::{PourSpec, pour},
    service::api::pours::{EXAMPLE, VesselPourRequest},
};
use serde_json::{Value, json};

static NEVER: AtomicBool = AtomicBool::new(false);

/// The example's jug with this section and liquid, 10 s from upright to upright.
fn jug(section: &Value, liquid: &Value) -> PourSpec {
    let mut request: Value = serde_json::from_str(EXAMPLE).unwrap();
    request["lip"]["section"] = section.clone();
    request["liquid"] = liquid.clone();
    request["tilt"] =
        json!({"steady": {"rate_deg_s": 12, "hold_deg": 48, "hold_s": 5.2, "return_rate_deg_s": 60}});
    request.as_object_mut().unwrap().remove("target_ml");
    serde_json::from_value::<VesselPourRequest>(request).unwrap().question().unwrap()
}

fn one(c: &mut Criterion) {
    let sections = [
        ("vee", json!({"vee": {"included_angle_deg": 80}})),
        ("sheet", json!({"sheet": {"width_mm": 24}})),
        ("trough", json!({"trough": {"diameter_mm": 20}})),
    ];
    let liquids = [
        ("milk", json!({"catalogue": {"id": "milk", "temperature_c": 6, "fat_percent": 3.5}})),
        ("oil", json!({"catalogue": {"id": "sunflower-oil", "temperature_c": 20}})),
    ];
    let mut group = c.benchmark_group("pour_10_s");
    for (section_name, section) in &sections {
        for (liquid_name, liquid) in &liquids {
            let spec = jug(section, liquid);
            group.bench_function(format!("{section_name}_{liquid_name}"), |b| {
                b.iter(|| pour(black_box(&spec), &NEVER).unwrap());
            });
        }
    }
    group.finish();
}

/// A thousand pours of different fills, shared out over the cores.
fn thousand(c: &mut Criterion) {
    let spec = jug(
        &json!({"vee": {"included_angle_deg": 80}}),
        &json!({"catalogue": {"id": "milk", "temperature_c": 6, "fat_percent": 3.5}}),
    );
    let mut group = c.benchmark_group("pours");
    group.sample_size(10).measurement_time(Duration::from_secs(20));
    group.bench_function("thousand", |b| {
        b.iter_custom(|times| {
            let start = Instant::now();
            for _ in 0..times {
                let next = AtomicUsize::new(0);
                let cores = std::thread::available_parallelism().map_or(1, usize::from);
                std::thread::scope(|scope| {
                    for _ in 0..cores {
                        scope.spawn(|| {
                            loop {
                                let index = next.fetch_add(1, Ordering::Relaxed);
                                if index >= 1000 {
                                    break;
                                }
                                let mut own = spec.clone();
                                own.fill_ml = 600.0 + 0.5 * index as f64;
                                black_box(pour(&own, &NEVER).unwrap());
                            }
                        });
                    }
                });
            }
            start.elapsed()
        });
    });
    group.finish();
}

criterion_group!(benches, one, thousand);
criterion_main!(benches);

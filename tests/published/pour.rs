//! The stream after the lip, and the tilt at which pours begin, against closed forms. Rows in `data/pour.json`.
// Helpers outside the test functions read a fixed data file.
#![allow(clippy::unwrap_used)]

use dribble_risk::physics::quantity::DEGREE;
use dribble_risk::physics::stream::{Launch, ballistic_distance};
use dribble_risk::physics::vessel::Vessel;
use serde_json::Value;

/// x = U cos a·t, drop = U sin a·t + gt²/2.
#[test]
fn where_a_ballistic_stream_lands() {
    let rows: Vec<Value> = serde_json::from_str(include_str!("data/pour.json")).unwrap();
    assert_eq!(rows.len(), 2);
    for row in rows {
        assert!(row["source"].is_string() && row["basis"] == "analytic", "{row}");
        let input = |name: &str| row["inputs"][name].as_f64().unwrap();
        let launch = Launch { speed: input("U"), angle: input("alpha_deg") * DEGREE };
        let distance = ballistic_distance(&launch, input("drop"));
        let (value, tolerance) = (row["value"].as_f64().unwrap(), row["tolerance"].as_f64().unwrap());
        assert!((distance - value).abs() <= tolerance, "{}: {distance}, should be {value}", row["name"]);
    }
}

/// A cylinder filled to πR²(H − R tan τ) begins to pour at τ, and a box at the tilt where its level's triangle is what is missing (analytic).
#[test]
fn the_tilt_at_which_a_pour_begins() {
    let (radius, height) = (0.05, 0.15);
    let cylinder = Vessel::cylinder(2.0 * radius, height).unwrap();
    let pi = core::f64::consts::PI;
    for degrees in [5.0, 20.0, 45.0] {
        let tilt = degrees * DEGREE;
        let fill = pi * radius * radius * (height - radius * libm::tan(tilt));
        assert!((cylinder.tilt_reaching(fill, 0.0).unwrap() - tilt).abs() < 1e-9, "{degrees}");
        let (length, width) = (0.1, 0.07);
        let fill = width * length * (height - 0.5 * length * libm::tan(tilt));
        let cuboid = Vessel::cuboid(length, width, height).unwrap();
        assert!((cuboid.tilt_reaching(fill, 0.0).unwrap() - tilt).abs() < 1e-9, "{degrees}");
    }
}

//! Liquid in a tilted vessel against closed forms: hoof, box, cone, frustum, spherical cap. Rows in `data/vessel.json`.
// Helpers outside the test functions read a fixed data file.
#![allow(clippy::unwrap_used)]

use core::f64::consts::FRAC_PI_2;

use dribble_risk::physics::quantity::DEGREE;
use dribble_risk::physics::vessel::Vessel;
use serde_json::Value;

/// Checks the rows whose name starts with `prefix`, to the row's tolerance in m³.
fn check(prefix: &str, expected_rows: usize, vessel: impl Fn(&dyn Fn(&str) -> f64) -> Vessel) {
    let rows: Vec<Value> = serde_json::from_str(include_str!("data/vessel.json")).unwrap();
    let rows: Vec<&Value> =
        rows.iter().filter(|row| row["name"].as_str().unwrap().starts_with(prefix)).collect();
    assert_eq!(rows.len(), expected_rows, "rows named {prefix}*");
    for row in rows {
        assert!(row["source"].is_string() && row["basis"] == "analytic", "{row}");
        let input = |name: &str| row["inputs"][name].as_f64().unwrap();
        let volume = vessel(&input).cut(input("phi_deg") * DEGREE, 0.0).volume;
        let (value, tolerance) = (row["value"].as_f64().unwrap(), row["tolerance"].as_f64().unwrap());
        assert!((volume - value).abs() <= tolerance, "{}: {volume}, should be {value}", row["name"]);
    }
}

/// πR²(H − R tan τ) while the base is covered; the hoof (2/3)R²H when the plane passes the base's far edge's middle; the hoof's general form beyond.
#[test]
fn a_tilted_cylinder_keeps_what_the_closed_forms_say() {
    check("cyl_tilt_", 6, |x| Vessel::cylinder(2.0 * x("R"), x("H")).unwrap());
}

#[test]
fn a_tilted_box() {
    check("box_tilt_", 3, |x| Vessel::cuboid(x("l"), x("w"), x("H")).unwrap());
}

/// (πR²H/3)((1 − k)/(1 + k))^1.5, k = (R/H) tan τ.
#[test]
fn a_tilted_cone_and_frustum() {
    check("cone_tilt_", 2, |x| Vessel::cone(2.0 * x("R"), 0.0, x("H")).unwrap());
    check("frustum_tilt_", 1, |x| Vessel::cone(2.0 * x("R"), 2.0 * x("r"), x("H")).unwrap());
}

/// A hemisphere keeps the spherical cap πh²(3R − h)/3, h = R(1 − sin τ). Its profile here is a polygon: the error falls with the square of the number of its pieces, so
/// two polygons extrapolate to the bowl itself.
#[test]
fn a_tilted_bowl_keeps_a_spherical_cap() {
    let bowl = |pieces: u32, radius: f64| {
        let point = |i: u32| {
            let angle = FRAC_PI_2 * f64::from(i) / f64::from(pieces);
            [radius * (1.0 - libm::cos(angle)), radius * libm::sin(angle)]
        };
        Vessel::revolved(&(0..=pieces).map(point).collect::<Vec<_>>()).unwrap()
    };
    let rows: Vec<Value> = serde_json::from_str(include_str!("data/vessel.json")).unwrap();
    let row = rows.iter().find(|row| row["name"] == "bowl_tilt_45").unwrap();
    let input = |name: &str| row["inputs"][name].as_f64().unwrap();
    let kept = |pieces| bowl(pieces, input("R")).cut(input("phi_deg") * DEGREE, 0.0).volume;
    let (coarse, fine) = (kept(400), kept(800));
    let value = row["value"].as_f64().unwrap();
    let ratio = (coarse - value) / (fine - value);
    assert!((ratio - 4.0).abs() < 0.05, "second order: {ratio}");
    let extrapolated = (4.0 * fine - coarse) / 3.0;
    assert!((extrapolated / value - 1.0).abs() < 1e-8, "{extrapolated} {value}");
}

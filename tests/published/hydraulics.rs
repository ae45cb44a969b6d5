//! The stream at the lip against textbook values, published correlations and closed forms.
//!
//! Data, each row with source, basis and tolerance: `data/hydraulics.json`. Left out are rows about things
//! the service does not compute (sharp-crested weirs, Manning, Chézy, a parabolic section, outflow through a
//! tube under a head) and rows whose basis is a regression.
// Helpers outside the test functions read a fixed data file.
#![allow(clippy::unwrap_used)]

use dribble_risk::physics::GRAVITY;
use dribble_risk::physics::lip::{Run, Section};
use dribble_risk::physics::liquid::Liquid;
use dribble_risk::physics::stream::{
    CAVITY_SPEED, approach_film, brink_ratio, critical_depth, critical_flow, end_depth_ratio, friction_slope,
    normal_depth, sheet_depth_after, start_head,
};
use serde_json::Value;

const DEGREE: f64 = core::f64::consts::PI / 180.0;
const WATER: Liquid = Liquid { density: 998.2, viscosity: 1.002e-3, surface_tension: 0.07275 };
const UNIT_SHEET: Section = Section::Sheet { width: 1.0 };

fn rows() -> Vec<Value> {
    serde_json::from_str(include_str!("data/hydraulics.json")).unwrap()
}

/// Checks the rows whose name starts with `prefix`: `compute` gets the inputs and must meet the value within
/// the row's tolerance. The tolerance is relative for analytic rows, absolute (in the row's unit) for the
/// others.
fn check(prefix: &str, expected_rows: usize, compute: impl Fn(&dyn Fn(&str) -> f64) -> f64) {
    let rows: Vec<Value> =
        rows().into_iter().filter(|row| row["name"].as_str().unwrap().starts_with(prefix)).collect();
    assert_eq!(rows.len(), expected_rows, "rows named {prefix}*");
    for row in rows {
        let name = row["name"].as_str().unwrap();
        assert!(row["source"].is_string() && row["basis"] != "regression", "{name}");
        let (value, tolerance) = (row["value"].as_f64().unwrap(), row["tolerance"].as_f64().unwrap());
        let computed = compute(&|input| row["inputs"][input].as_f64().unwrap());
        let scale = if row["basis"] == "analytic" { value.abs() } else { 1.0 };
        // 1e-12: rounding of the decimal fractions in the file.
        assert!(
            (computed - value).abs() <= tolerance * scale + 1e-12,
            "{name}: {computed}, should be {value} within {tolerance} ({})",
            row["source"]
        );
    }
}

fn vee(degrees: f64) -> Section {
    Section::Vee { included_angle: degrees * DEGREE }
}

#[test]
fn critical_depth_of_flat_and_vee_lips() {
    check("critical_depth_rect_rivr", 1, |x| {
        critical_depth(&Section::Sheet { width: x("B") }, x("Q"), 1.0, x("g")).unwrap()
    });
    check("yc_rect", 1, |x| critical_depth(&Section::Sheet { width: x("W") }, x("Q"), 1.0, GRAVITY).unwrap());
    check("yc_vee80", 1, |x| critical_depth(&vee(x("theta_deg")), x("Q"), 1.0, GRAVITY).unwrap());
}

#[test]
fn critical_flow_at_a_head() {
    check("Q_crit_rect", 1, |x| critical_flow(&Section::Sheet { width: x("W") }, x("H")).unwrap());
    check("Q_crit_vee90", 1, |x| critical_flow(&vee(x("theta_deg")), x("H")).unwrap());
}

#[test]
fn end_depth_ratios() {
    let (trough, tube) = (Section::Trough { diameter: 0.02 }, Section::Tube { bore: 0.02 });
    check("edr_rect_unconfined_nappe", 1, |_| end_depth_ratio(&UNIT_SHEET));
    check("edr_vee", 1, |_| end_depth_ratio(&vee(90.0)));
    check("edr_circular", 1, |_| end_depth_ratio(&trough));
    check("edr_circular", 1, |_| end_depth_ratio(&tube));
    // Momentum without pressure at the brink: r = 2/3 on a flat floor, and F²/(F² + ½) after a supercritical
    // run.
    check("edr_supercritical_F2_momentum", 1, |x| brink_ratio(x("F") * x("F"), 2.0 / 3.0));
}

/// The analytic lower bound of the vee's end-depth ratio, A ~ y²: critical flow loses all its pressure at the
/// brink.
#[test]
fn the_momentum_bound_of_a_vee_follows_from_its_geometry() {
    check("edr_momentum_Kp0_vee", 1, |_| {
        let section = vee(77.0);
        let flow = 2e-5;
        let depth = critical_depth(&section, flow, 1.0, GRAVITY).unwrap();
        let momentum = flow * flow / (GRAVITY * section.area(depth)) + section.first_moment(depth);
        let at_brink = section.depth_of_area(flow * flow / (GRAVITY * momentum)).unwrap() / depth;
        assert!(at_brink < end_depth_ratio(&section));
        at_brink
    });
}

/// The brink of a level lip is its critical depth times the ratio.
#[test]
fn brink_of_a_level_lip_in_water() {
    let run = Run { slope: 0.0, length: 0.02 };
    for section in [Section::Sheet { width: 0.024 }, vee(80.0), Section::Trough { diameter: 0.02 }] {
        let stream = approach_film(&section, &run, &WATER, 2e-5).unwrap();
        let ratio = stream.brink_depth / stream.critical_depth;
        assert!((ratio / end_depth_ratio(&section) - 1.0).abs() < 1e-9, "{ratio}");
    }
}

const FOOT: f64 = 0.3048;

/// California pipe method: flow, ft³/s, from the diameter `d` and the air gap `a` at the brink, ft.
fn california_pipe(gap: f64, diameter: f64) -> f64 {
    8.69 * libm::pow(1.0 - gap / diameter, 1.88) * libm::pow(diameter, 2.48)
}

/// End depths measured in level pipes imply critical depths that ours must meet.
#[test]
fn california_pipe_end_depths() {
    check("california_pipe", 1, |x| california_pipe(x("a_ft"), x("d_ft")));
    check("california_implied_edr_", 4, |x| {
        let (brink, diameter) = (x("yb_over_D"), x("D_ft"));
        let flow = california_pipe(diameter * (1.0 - brink), diameter) * FOOT * FOOT * FOOT;
        let tube = Section::Tube { bore: diameter * FOOT };
        let critical = critical_depth(&tube, flow, 1.0, GRAVITY).unwrap();
        let implied = brink * diameter * FOOT / critical;
        assert!((implied / end_depth_ratio(&tube) - 1.0).abs() < 0.05, "{implied}");
        implied
    });
}

#[test]
fn capillary_length_and_start_head() {
    check("lc_", 3, |x| {
        Liquid { density: x("rho"), viscosity: 1e-3, surface_tension: x("gamma") }.capillary_length()
    });
    check("start_head_psi180", 1, |_| start_head(&WATER, 120.0 * DEGREE, 100.0 * DEGREE));
    check("start_head_20_90", 1, |x| start_head(&WATER, x("theta_adv_deg") * DEGREE, x("turn_deg") * DEGREE));
}

/// Nusselt's film as the normal depth, and as what `approach_film` tends to on a long run.
#[test]
fn nusselt_film() {
    check("nusselt_oil", 1, |x| {
        normal_depth(&UNIT_SHEET, x("q"), x("nu"), libm::sin(x("alpha_deg") * DEGREE)).unwrap()
    });
    check("nusselt_oil", 1, |x| {
        let oil = Liquid { density: 1000.0, viscosity: 1000.0 * x("nu"), surface_tension: 0.03 };
        let run = Run { slope: x("alpha_deg") * DEGREE, length: 10.0 };
        approach_film(&UNIT_SHEET, &run, &oil, x("q")).unwrap().thickness
    });
}

/// Without friction the closed form of the film is Bernoulli's cubic; here, as in the row, plug flow that is
/// critical on the slope itself. (`approach_film` starts with the head of a level crest and β = 6/5; its own
/// Bernoulli limit is tested beside it.)
#[test]
fn inviscid_film() {
    check("film_inviscid", 1, |x| {
        let (sine, cosine) = libm::sincos(x("alpha_deg") * DEGREE);
        let critical_cubed = x("q") * x("q") / (GRAVITY * cosine);
        let normal = normal_depth(&UNIT_SHEET, x("q"), 1e-18, sine).unwrap();
        sheet_depth_after(x("L"), libm::cbrt(critical_cubed), normal, critical_cubed, cosine / sine).unwrap()
    });
}

/// f·Re on 4 R_h is 32 K.
#[test]
fn laminar_friction_constants() {
    check("fRe_circle", 1, |_| 32.0 * Section::Tube { bore: 0.01 }.friction_constant());
    // Hagen–Poiseuille: a tube whose friction uses up the head.
    check("hagen_poiseuille_limit", 1, |x| {
        let tube = Section::Tube { bore: x("D") };
        let per_flow = friction_slope(&tube, x("D"), 1.0, x("nu"));
        x("H") / x("L") / per_flow / tube.full_area()
    });
}

#[test]
fn cavity_in_an_emptying_tube() {
    check("benjamin_cavity_coeff", 1, |_| CAVITY_SPEED);
}

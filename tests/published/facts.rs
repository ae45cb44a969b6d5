//! Facts of the trade. Each is common practice, no source.
#![allow(clippy::unwrap_used)]

use dribble_risk::{
    analysis::{
        decision::{Decision, decide},
        spec::{LiquidSpec, OuterFace, SectionSpec, Spec, SurfaceSpec, Uncertainties},
    },
    physics::{
        quantity::DEGREE,
        separation::{closed_form::DEFAULT_SET, deflection::deflection, numbers::Regime},
        surface::wettability,
    },
};

fn water(flow_ml_s: f64, advancing: f64) -> Spec {
    Spec {
        section: SectionSpec::Sheet { width_mm: 24.0 },
        radius_mm: 0.5,
        turn_deg: 90.0,
        slope_deg: 15.0,
        length_mm: 20.0,
        surface: SurfaceSpec::Measured {
            contact_angle_deg: None,
            advancing_deg: Some(advancing),
            receding_deg: None,
        },
        liquid: LiquidSpec::Measured {
            density_kg_m3: 998.2,
            viscosity_mpa_s: 1.0016,
            surface_tension_mn_m: 72.74,
        },
        flow_ml_s,
        outer_face: OuterFace::Dry,
        confidence: 0.95,
        uncertainty: Uncertainties::default(),
        coefficients: DEFAULT_SET,
        calibration: None,
    }
}

fn decided(spec: &Spec) -> Decision {
    decide(&spec.resolve().unwrap().case).unwrap()
}

fn bent(spec: &Spec) -> Option<f64> {
    let d = decided(spec);
    let turn = spec.turn_deg * DEGREE;
    deflection(&d.balance.numbers, turn, d.safety_factor(), 0.0).map(|d| d.angle)
}

#[test]
fn inertia_dominates_when_weber_and_reynolds_numbers_are_far_above_one() {
    let fast = decided(&water(150.0, 70.0));
    assert!(fast.balance.numbers.weber > 10.0 && fast.balance.numbers.reynolds > 10.0);
    assert_eq!(fast.balance.numbers.regime(), Regime::Inertial);
    assert_eq!(decided(&water(0.5, 70.0)).balance.numbers.regime(), Regime::Capillary);
}

#[test]
fn below_a_right_angle_is_hydrophilic() {
    assert_eq!(wettability(60.0 * DEGREE), "hydrophilic");
    assert_eq!(wettability(110.0 * DEGREE), "hydrophobic");
}

#[test]
fn a_more_wettable_lip_deflects_the_stream_more() {
    for flow in [20.0, 40.0, 80.0] {
        let angles = [100.0, 80.0, 60.0, 40.0, 20.0].map(|angle| bent(&water(flow, angle)).unwrap());
        assert!(angles.windows(2).all(|pair| pair[1] > pair[0]), "{angles:?}");
    }
}

#[test]
fn a_superhydrophobic_lip_does_not_dribble_where_a_free_sheet_exists() {
    for slope in [0.0, 15.0, 40.0] {
        for turn in [75.0, 90.0, 135.0, 180.0] {
            for radius in [0.0, 0.2, 0.5, 1.0] {
                for i in 0..40 {
                    let flow = libm::exp(f64::from(i) * 0.2);
                    let spec =
                        Spec { slope_deg: slope, turn_deg: turn, radius_mm: radius, ..water(flow, 163.0) };
                    let d = decided(&spec);
                    assert!(
                        !d.free_sheet() || d.safety_factor() > 1.0,
                        "{slope} {turn} {radius} {flow} {}",
                        d.safety_factor()
                    );
                }
            }
        }
    }
}

#[test]
fn deflection_falls_as_the_pour_gets_faster_roughly_as_a_square_root_of_the_weber_number() {
    let mut last: Option<(f64, f64)> = None;
    for flow in [15.0, 30.0, 60.0, 120.0, 240.0] {
        let spec = water(flow, 70.0);
        let (weber, angle) = (decided(&spec).balance.numbers.weber, bent(&spec).unwrap());
        if let Some((weber_before, angle_before)) = last {
            let exponent = libm::log(angle / angle_before) / libm::log(weber / weber_before);
            assert!((-1.3..=-0.25).contains(&exponent), "{flow}: {exponent}");
        }
        last = Some((weber, angle));
    }
}

#[test]
fn a_stream_turned_by_a_right_angle_is_running_down_the_wall() {
    // On a vertical outer wall no leaving stream is bent by 90°, however slow; one that clings has no deflection.
    for i in 0..60 {
        let spec = water(0.5 * libm::exp(f64::from(i) * 0.1), 30.0);
        match bent(&spec) {
            Some(angle) => assert!(angle < 90.0 * DEGREE),
            None => assert!(decided(&spec).safety_factor() < 1.0),
        }
    }
}

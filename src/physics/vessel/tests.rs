use super::{LipPosition, Vessel, VesselFault};
use crate::physics::quantity::DEGREE;
use proptest::prelude::*;

fn jug() -> Vessel {
    let profile =
        [[0.0, 0.046], [0.01, 0.050], [0.05, 0.0565], [0.09, 0.0565], [0.13, 0.0505], [0.152, 0.050]];
    Vessel::revolved(&profile).unwrap().with_lip(LipPosition { radius: 0.072, height: 0.152 }).unwrap()
}

fn vessels() -> impl Strategy<Value = Vessel> {
    let size = || 0.01..0.5_f64;
    let body = prop_oneof![
        (size(), size()).prop_map(|(d, h)| Vessel::cylinder(d, h).unwrap()),
        (size(), 0.0..0.5_f64, size()).prop_map(|(t, b, h)| Vessel::cone(t, b, h).unwrap()),
        (size(), size(), size()).prop_map(|(l, w, h)| Vessel::cuboid(l, w, h).unwrap()),
        proptest::collection::vec((0.0..0.1_f64, 0.001..0.1_f64), 2..8).prop_map(|steps| {
            let mut height = -steps[0].0;
            let mut profile: Vec<[f64; 2]> = Vec::new();
            for (rise, radius) in steps {
                height += if profile.is_empty() { rise } else { rise + 1e-3 };
                profile.push([height, radius]);
            }
            Vessel::revolved(&profile).unwrap()
        }),
    ];
    (body, 0.0..0.1_f64, 0.0..0.05_f64).prop_map(|(vessel, out, up)| {
        let brim = vessel.lip();
        vessel.with_lip(LipPosition { radius: brim.radius + out, height: brim.height + up }).unwrap()
    })
}

#[test]
fn slopes_of_the_volume_are_the_surface_and_its_moment() {
    let vessel = jug();
    let (tilt, head, e) = (40.0 * DEGREE, 0.004, 1e-5);
    let cut = vessel.cut(tilt, head);
    let by_head = (vessel.cut(tilt, head + e).volume - vessel.cut(tilt, head - e).volume) / (2.0 * e);
    let by_tilt = (vessel.cut(tilt + e, head).volume - vessel.cut(tilt - e, head).volume) / (2.0 * e);
    assert!((by_head / cut.surface - 1.0).abs() < 1e-6, "{by_head} {cut:?}");
    assert!((by_tilt / -cut.moment - 1.0).abs() < 1e-6, "{by_tilt} {cut:?}");
}

#[test]
fn a_step_in_the_profile_is_a_flat_ring() {
    let stepped = Vessel::revolved(&[[0.0, 0.03], [0.05, 0.03], [0.05, 0.05], [0.1, 0.05]]).unwrap();
    let parts = core::f64::consts::PI * (0.03 * 0.03 * 0.05 + 0.05 * 0.05 * 0.05);
    assert!((stepped.capacity() / parts - 1.0).abs() < 1e-14);
    assert_eq!(stepped.half_width_at(0.05), 0.05);
}

#[test]
fn profiles_that_are_no_vessel() {
    let fault = |profile: &[[f64; 2]]| Vessel::revolved(profile).unwrap_err();
    assert_eq!(fault(&[[0.0, 0.05]]), VesselFault::TooFewPoints);
    assert_eq!(fault(&[[0.01, 0.05], [0.1, 0.05]]), VesselFault::NotAtBase);
    assert_eq!(fault(&[[0.0, 0.05], [0.1, 0.05], [0.05, 0.06]]), VesselFault::Backwards { index: 2 });
    assert_eq!(
        fault(&[[0.0, 0.05], [0.1, 0.05], [0.1, 0.06], [0.1, 0.04]]),
        VesselFault::CrossesItself { index: 3 }
    );
    assert_eq!(fault(&[[0.0, 0.05], [0.1, 0.05], [0.1, 0.05]]), VesselFault::CrossesItself { index: 2 });
    assert_eq!(fault(&[[0.0, 0.05], [0.1, 0.0]]), VesselFault::Closed { index: 1 });
    assert!(matches!(
        Vessel::cylinder(0.1, 0.2).unwrap().with_lip(LipPosition { radius: 0.02, height: 0.1 }),
        Err(VesselFault::LipInside { wall }) if wall == 0.05
    ));
}

#[test]
fn the_outline_holds_the_liquid_of_a_box() {
    let vessel = Vessel::cuboid(0.1, 0.07, 0.2).unwrap();
    for degrees in [0.0, 20.0, 70.0] {
        let tilt = degrees * DEGREE;
        let (head, _) = vessel.head(tilt, 3e-4, 0.0);
        let polygon = vessel.outline(tilt, head).liquid;
        let twice: f64 = (0..polygon.len())
            .map(|i| {
                let (a, b) = (polygon[i], polygon[(i + 1) % polygon.len()]);
                a[0] * b[1] - b[0] * a[1]
            })
            .sum();
        assert!((0.5 * twice.abs() * 0.07 / 3e-4 - 1.0).abs() < 1e-9, "{degrees}");
    }
}

/// Deep liquid in a cylinder of 94 mm: k = 39 m⁻¹, so 2π/√(9.81 · 39.2) = 0.32 s.
#[test]
fn a_jug_sloshes_three_times_a_second() {
    let period = Vessel::cylinder(0.094, 0.2).unwrap().slosh_period(1e-3);
    assert!((period - 0.3206).abs() < 1e-3, "{period}");
}

proptest! {
    #[test]
    fn the_head_holds_the_volume(vessel in vessels(), tilt in 0.0..core::f64::consts::PI, share in 0.001..0.999_f64, guess in -0.2..0.2_f64) {
        let volume = share * vessel.capacity();
        let (head, _) = vessel.head(tilt, volume, guess);
        let back = vessel.cut(tilt, head);
        prop_assert!(back.surface >= 0.0 && back.volume.is_finite() && back.moment.is_finite());
        prop_assert!((back.volume / volume - 1.0).abs() < 1e-7, "{} {}", back.volume, volume);
    }

    #[test]
    fn the_volume_grows_with_the_head_by_the_surface(vessel in vessels(), tilt in 0.0..core::f64::consts::PI, share in 0.02..0.98_f64) {
        let (head, _) = vessel.head(tilt, share * vessel.capacity(), 0.0);
        let step = 1e-6;
        let (below, here, above) = (vessel.cut(tilt, head - step), vessel.cut(tilt, head), vessel.cut(tilt, head + step));
        let slope = (above.volume - below.volume) / (2.0 * step);
        let low = below.surface.min(above.surface).min(here.surface);
        let high = below.surface.max(above.surface).max(here.surface);
        let slack = 1e-4 * high + 1e-9;
        prop_assert!(slope >= low - slack && slope <= high + slack, "{slope} {low} {high}");
    }

    #[test]
    fn no_plane_holds_more_than_the_vessel(vessel in vessels(), tilt in 0.0..core::f64::consts::PI, head in -1.0..1.0_f64) {
        let cut = vessel.cut(tilt, head);
        let capacity = vessel.capacity();
        prop_assert!(cut.volume >= -1e-9 * capacity && cut.volume <= capacity * (1.0 + 1e-9), "{cut:?} {capacity}");
    }
}

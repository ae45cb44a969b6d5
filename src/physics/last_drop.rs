//! The last drop: what hangs on the lip when the pour has ended, what stays there, and whether it runs down the wall.
//!
//! Everything here is static and slow: it tells how much *can* hang or stay, not what a jerk of the wrist shakes off.
//!
//! Conventions, all own judgement, because a lip does not say how thick its wall is:
//! * **Half thickness of the rim** a: half the chord of the rounding, r sin(turn/2), but at least 0.5 mm (a wall of 1 mm). The band halves and doubles it.
//! * **Where the drop sits**: on the part of the mouth that lies within a capillary length ℓ of its lowest point (a straight rim: on all of it).
//! * **Its radius**: that of the circle with the same perimeter, because surface tension pulls along the perimeter (Tate). The band takes a factor 1.3.
//! * **A straight rim** wider than 2πℓ carries a ridge; the ridge's law takes over between 2πℓ and 4πℓ.
//! * **The wall** below the lip is vertical, as when the vessel has been set down.

mod monotone_table;
mod pendant;
mod retention;
mod ridge;
mod rivulet;
mod wall_film;

pub use pendant::{
    PendantDrop, WIDEST_TIP, harkins_brown_fraction, pendant_drop, round_mouth_limit, tate_volume,
};
pub use retention::{ContourAngle, RETENTION_BAND, furmidge_volume, retained_volume};
pub use ridge::{WIDEST_RIM, ridge_area};
pub use rivulet::{WallSide, thin_rivulet_flow, thin_rivulet_integral};
pub use wall_film::{
    LANDAU_LEVICH_PREFACTOR, drained_thickness, drained_volume, film_breakup_flow, groenveld_thickness,
    hartley_murgatroyd_constant, landau_levich_thickness,
};

use core::f64::consts::{FRAC_PI_2, PI, SQRT_2, TAU};

use super::lip::{Edge, Lip, Section};
use super::liquid::Liquid;
use super::surface::WettingAngles;

/// Least half thickness of a rim, m: 0.5 mm (own judgement).
const LEAST_HALF_THICKNESS: f64 = 0.5e-3;
/// Factor by which the half thickness may be wrong either way (own judgement).
const THICKNESS_BAND: f64 = 2.0;
/// Factor by which the radius of the drop may be wrong either way (own judgement).
const RADIUS_BAND: f64 = 1.3;

/// What carries the liquid that hangs.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Support {
    /// One drop, as at a round tip of this radius.
    Drop {
        /// Radius, m.
        radius: f64,
    },
    /// A ridge along a straight rim.
    Ridge {
        /// Half thickness of the rim, m.
        half_thickness: f64,
        /// Length, m.
        length: f64,
    },
}

/// The last drop, m³. Every `_low` and `_high` is the end of a judged band, ± 2 standard uncertainties.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LastDrop {
    /// Largest volume that hangs on the lip.
    pub hanging: f64,
    /// Low end.
    pub hanging_low: f64,
    /// High end.
    pub hanging_high: f64,
    /// What stays on the lip when more than that has come and a drop has fallen.
    pub left_on_lip: f64,
    /// Low end.
    pub left_on_lip_low: f64,
    /// High end; along a ridge all of it may stay.
    pub left_on_lip_high: f64,
    /// What a vertical wall holds in place below this lip: one drop, or as many as a ridge breaks into.
    pub held_on_wall: f64,
    /// Low end (retention factor 0.64).
    pub held_on_wall_low: f64,
    /// High end (retention factor 1).
    pub held_on_wall_high: f64,
    /// More stays on the lip than the wall can hold: once it has slid over the edge it runs down.
    pub runs_down: bool,
    /// What carries it.
    pub support: Support,
}

/// What hangs, stays and runs down after a pour over this lip.
///
/// Drops by the largest static drop and Tate's law with Harkins & Brown's correction, ridges by the plane pinned ridge, the wall by Furmidge's law with
/// ElSherbini & Jacobi's factor. Conventions at the head of this file. A ridge leaves the same share behind as the drop at its narrow end, and breaks into drops
/// 2π√2 ℓ apart, the fastest growing wave under a soffit (Rayleigh–Taylor).
#[must_use]
pub fn last_drop(lip: &Lip, liquid: &Liquid, angles: &WettingAngles) -> LastDrop {
    let length = liquid.capillary_length();
    let half = half_thickness(&lip.edge);
    let central = hold(&lip.section, liquid, length, half, 1.0);
    let low = hold(&lip.section, liquid, length, half / THICKNESS_BAND, 1.0 / RADIUS_BAND);
    let high = hold(&lip.section, liquid, length, half * THICKNESS_BAND, RADIUS_BAND);
    let (support, drops) = match lip.section {
        Section::Sheet { width } if width > TAU * length => (
            Support::Ridge { half_thickness: half.min(WIDEST_RIM * length), length: width },
            (width / (SQRT_2 * TAU * length)).max(1.0),
        ),
        Section::Sheet { .. } | Section::Vee { .. } | Section::Trough { .. } | Section::Tube { .. } => {
            (Support::Drop { radius: central.radius }, 1.0)
        }
    };
    let is_ridge = matches!(support, Support::Ridge { .. });
    let held = |factor| drops * retained_volume(liquid, angles, factor, FRAC_PI_2);
    let held_on_wall = held(ContourAngle::Cubic.retention_factor());
    LastDrop {
        hanging: central.hanging,
        hanging_low: low.hanging,
        hanging_high: high.hanging,
        left_on_lip: central.left,
        // What stays does not always grow with the tip.
        left_on_lip_low: low.left.min(high.left).min(central.left),
        left_on_lip_high: if is_ridge { high.hanging } else { high.left.max(low.left).max(central.left) },
        held_on_wall,
        held_on_wall_low: held(RETENTION_BAND.0),
        held_on_wall_high: held(RETENTION_BAND.1),
        runs_down: central.left > held_on_wall,
        support,
    }
}

/// Half thickness of the rim by convention, m.
fn half_thickness(edge: &Edge) -> f64 {
    (edge.radius * libm::sin(0.5 * edge.turn)).max(LEAST_HALF_THICKNESS)
}

struct Hold {
    radius: f64,
    hanging: f64,
    left: f64,
}

fn hold(section: &Section, liquid: &Liquid, length: f64, half_thickness: f64, radius_factor: f64) -> Hold {
    let half = half_thickness.min(WIDEST_RIM * length);
    let widest = TAU * length;
    let radius = radius_factor * equal_perimeter_radius(section, length, half);
    let drop = pendant_drop(liquid, radius);
    let mut hanging = drop.largest;
    if let Section::Sheet { width } = *section
        && width > widest
    {
        let share = (width / widest - 1.0).min(1.0);
        // Written so that at share 1 the drop leaves no trace.
        hanging = (1.0 - share) * hanging + share * ridge_area(liquid, half) * width;
    }
    Hold { radius, hanging, left: hanging * (1.0 - drop.falls / drop.largest) }
}

/// Radius of the circle with the perimeter of the part of the mouth that carries the drop, m. No drop is wider than 2πℓ.
fn equal_perimeter_radius(section: &Section, length: f64, half: f64) -> f64 {
    let widest = TAU * length;
    match *section {
        // A rectangle, the rim's width by its thickness.
        Section::Sheet { width } => (width.min(widest) + 2.0 * half) / PI,
        // The triangle of depth ℓ in the notch, and the wall round it.
        Section::Vee { included_angle } => {
            let lean = 0.5 * included_angle;
            let perimeter = 2.0 * length * (libm::tan(lean) + 1.0 / libm::cos(lean));
            perimeter.min(2.0 * widest) / TAU + half
        }
        // The segment of depth ℓ, arc and chord, and the wall round it; a bore narrower than ℓ is filled and drips from all of its mouth.
        Section::Trough { diameter } | Section::Tube { bore: diameter } => {
            let depth = length.min(diameter);
            let arc = diameter * libm::acos(1.0 - 2.0 * depth / diameter);
            let chord = 2.0 * (depth * (diameter - depth)).sqrt();
            (arc + chord).min(2.0 * widest) / TAU + half
        }
    }
}

#[cfg(test)]
mod tests {
    use super::{Support, last_drop};
    use crate::physics::lip::{Edge, Lip, Run, Section};
    use crate::physics::liquid::Liquid;
    use crate::physics::quantity::DEGREE;
    use crate::physics::surface::{
        MeasuredAngles, MeasuredUncertainty, State, WATER, WettingAngles, find, from_measured,
    };
    use proptest::prelude::{Just, Strategy, prop_assert, prop_oneof, proptest};

    const LIQUID: Liquid = Liquid { density: 998.2, viscosity: 1.002e-3, surface_tension: 72.8e-3 };

    fn lip(section: Section, radius: f64, turn: f64) -> Lip {
        Lip { section, edge: Edge { radius, turn }, run: Run { slope: 0.0, length: 0.02 } }
    }

    fn angles(id: &str, state: State) -> WettingAngles {
        find(id).unwrap().angles(state, &WATER).unwrap()
    }

    fn sections() -> impl Strategy<Value = Section> {
        prop_oneof![
            (1e-3..2.0f64).prop_map(|width| Section::Sheet { width }),
            (20.0..170.0f64).prop_map(|d| Section::Vee { included_angle: d * DEGREE }),
            (1e-3..0.5f64).prop_map(|diameter| Section::Trough { diameter }),
            (0.5e-3..0.2f64).prop_map(|bore| Section::Tube { bore }),
            Just(Section::Tube { bore: 2e-3 }),
        ]
    }

    #[test]
    fn a_narrow_lip_carries_a_drop_and_a_wide_one_a_ridge() {
        let steel = angles("stainless-polished", State::InUse);
        let narrow = last_drop(&lip(Section::Sheet { width: 5e-3 }, 0.5e-3, 110.0 * DEGREE), &LIQUID, &steel);
        assert!(matches!(narrow.support, Support::Drop { .. }));
        // Drops from lips this size are 50 to 150 µL (common knowledge of the trade, no source).
        assert!((50e-9..150e-9).contains(&narrow.hanging), "{narrow:?}");
        let wide = last_drop(&lip(Section::Sheet { width: 0.1 }, 0.5e-3, 110.0 * DEGREE), &LIQUID, &steel);
        let length = LIQUID.capillary_length();
        let per_length = wide.hanging / 0.1 / (length * length);
        assert!(
            matches!(wide.support, Support::Ridge { .. }) && (2.1..2.6).contains(&per_length),
            "{per_length}"
        );
    }

    #[test]
    fn a_superhydrophobic_wall_holds_hardly_anything() {
        let lip = lip(Section::Tube { bore: 6e-3 }, 0.3e-3, 90.0 * DEGREE);
        let repellent = last_drop(&lip, &LIQUID, &angles("superhydrophobic-coating", State::Clean));
        let steel = last_drop(&lip, &LIQUID, &angles("stainless-brushed", State::InUse));
        assert!(repellent.held_on_wall < 0.1 * steel.held_on_wall && repellent.runs_down);
        assert!(steel.held_on_wall_low < steel.held_on_wall && steel.held_on_wall < steel.held_on_wall_high);
    }

    #[test]
    fn no_step_from_drop_to_ridge() {
        let steel = angles("stainless-polished", State::InUse);
        let hanging = |width| {
            last_drop(&lip(Section::Sheet { width }, 0.5e-3, 110.0 * DEGREE), &LIQUID, &steel).hanging
        };
        for i in 10..400 {
            // 0.1 mm carries at most 5 µL more (a cross-section of 50 mm²); a step would be tens.
            let more = hanging(f64::from(i + 1) * 1e-4) - hanging(f64::from(i) * 1e-4);
            assert!(more > 0.0 && more < 5e-9, "{i}: {more}");
        }
    }

    proptest! {
        #[test]
        fn finite_positive_and_within_its_bands(
            section in sections(), radius in 0.0..0.05f64, turn in 20.0..180.0f64,
            advancing in 0.0..180.0f64, share in 0.0..=1.0f64, tension in 0.005..0.2f64, density in 500.0..4000.0f64,
        ) {
            let measured = MeasuredAngles {
                contact: None,
                advancing: Some(advancing * DEGREE),
                receding: Some(share * advancing * DEGREE),
            };
            let (angles, _) = from_measured(&measured, &MeasuredUncertainty::default()).unwrap();
            let liquid = Liquid { density, viscosity: 1e-3, surface_tension: tension };
            let d = last_drop(&lip(section, radius, turn * DEGREE), &liquid, &angles);
            for (low, value, high) in [
                (d.hanging_low, d.hanging, d.hanging_high),
                (d.left_on_lip_low, d.left_on_lip, d.left_on_lip_high),
                (d.held_on_wall_low, d.held_on_wall, d.held_on_wall_high),
            ] {
                prop_assert!(low >= 0.0 && low <= value && value <= high && high.is_finite(), "{d:?}");
            }
            prop_assert!(d.left_on_lip > 0.0 && d.left_on_lip < d.hanging, "{d:?}");
        }
    }
}

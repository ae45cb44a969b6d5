//! The lip's rating: what flows over it from a head in the vessel.

use core::f64::consts::PI;

use super::critical::critical_flow;
use crate::physics::GRAVITY;
use crate::physics::lip::{Run, Section};

/// Exponent of the blend of inertial and viscous flow, Q⁻ᵐ = Q_i⁻ᵐ + Q_v⁻ᵐ: against the film equation on a level sheet it is within −4 to +13 %
/// (own computation).
const BLEND: f64 = 1.2;
/// Exponent of the blend of what drives a viscous film, its own surface slope and the floor's: against the lubrication equation within −4 to +7 % downhill; uphill
/// within −20 % on runs longer than five heads, less flow than true on shorter ones, where friction hardly counts (own computation).
const DRIVE: f64 = 1.4;

/// Height of the floor's highest point above the edge, m: its upper end where it falls, the edge itself where it rises. The head that drives a pour is measured
/// over that point.
#[must_use]
pub fn sill_height(run: &Run) -> f64 {
    (run.length * libm::sin(run.slope)).max(0.0)
}

/// The lip's rating, m³/s, at a total head `head` (m) above the highest point of the floor ([`sill_height`]); 0 for a head that is not positive.
///
/// Critical flow ([`critical_flow`]) blended with what a viscous film passes: Q_v = (g/(Kν)) Λ(h) s with the conveyance Λ = A R_h² ~ hⁿ (n = 3 sheet, 4 vee, 3½
/// round) and the driving slope s = [(h cos σ/((n+1)L))^p + (k sin σ)^p]^{1/p}, k = 1 downhill and (n sin(π/n)/π)ⁿ uphill: exact for a lubrication film that ends at a brink on a level floor (gh⁴/(12νL)
/// on a sheet), on a long falling floor (Nusselt) and on a long rising one. On very short runs only the critical flow is left. Heads below
/// [`SMALL_HEAD`](super::SMALL_HEAD) (10 mm): allow ±20 % (own judgement). No surface tension: a dry lip holds back [`start_head`](super::start_head) first. A
/// closed tube is taken as vented.
///
/// `None` only if an iteration fails, which no accepted input is known to cause.
#[must_use]
pub fn rated_flow(section: &Section, run: &Run, kinematic_viscosity: f64, head: f64) -> Option<f64> {
    if head <= 0.0 {
        return Some(0.0);
    }
    let inertial = critical_flow(section, head)?;
    if run.length == 0.0 {
        return Some(inertial);
    }
    let viscous = viscous_flow(section, run, kinematic_viscosity, head);
    let ratio = inertial / viscous;
    if ratio < 1e-9 {
        return Some(inertial);
    }
    Some(inertial * libm::pow(1.0 + libm::pow(ratio, BLEND), -1.0 / BLEND))
}

fn viscous_flow(section: &Section, run: &Run, kinematic_viscosity: f64, head: f64) -> f64 {
    let exponent = match section {
        Section::Sheet { .. } => 3.0,
        Section::Vee { .. } => 4.0,
        Section::Trough { .. } | Section::Tube { .. } => 3.5,
    };
    let (sine, cosine) = libm::sincos(run.slope);
    let wetted = section.wetted(head);
    let radius = match *section {
        // Exact half full and full; between, a part-full tube would carry more than a full one.
        Section::Tube { bore } if head > 0.5 * bore => 0.25 * bore,
        _ => wetted.hydraulic_radius(),
    };
    let conveyance = wetted.area * radius * radius;
    // ∫ Λ dy up to the head, over Λ: a power of the head, and a full tube above its bore.
    let reach = match *section {
        Section::Tube { bore } if head > bore => bore / (exponent + 1.0) + (head - bore),
        _ => head / (exponent + 1.0),
    };
    // Past the vertical the film's own weight no longer spreads it.
    let own = cosine.max(0.0) * reach / run.length;
    let share = if sine >= 0.0 { 1.0 } else { libm::pow(exponent * libm::sin(PI / exponent) / PI, exponent) };
    let drive = libm::pow(libm::pow(own, DRIVE) + libm::pow(share * sine.abs(), DRIVE), 1.0 / DRIVE);
    GRAVITY * conveyance * drive / (section.friction_constant() * kinematic_viscosity)
}

#[cfg(test)]
mod tests {
    use super::{rated_flow, sill_height};
    use crate::physics::GRAVITY;
    use crate::physics::lip::{Run, Section};
    use crate::physics::quantity::DEGREE;
    use crate::physics::stream::critical_flow;
    use proptest::prelude::*;

    const SHEET: Section = Section::Sheet { width: 0.024 };

    #[test]
    fn thin_liquids_and_short_runs_flow_critically() {
        let run = Run { slope: 0.0, length: 0.0 };
        let critical = critical_flow(&SHEET, 0.005).unwrap();
        assert_eq!(rated_flow(&SHEET, &run, 1e-3, 0.005), Some(critical));
        let water = rated_flow(&SHEET, &Run { slope: 0.0, length: 0.02 }, 1e-6, 0.008).unwrap();
        assert!((water / critical_flow(&SHEET, 0.008).unwrap() - 1.0).abs() < 0.02, "{water}");
        assert_eq!(rated_flow(&SHEET, &run, 1e-6, -0.001), Some(0.0));
    }

    #[test]
    fn thick_liquids_creep() {
        // Level: q = g h⁴/(12 ν L); a long falling floor: Nusselt, q = g sin σ h³/(3ν).
        let (head, nu) = (0.004, 0.5);
        let level = rated_flow(&SHEET, &Run { slope: 0.0, length: 0.1 }, nu, head).unwrap();
        let exact = 0.024 * GRAVITY * head * head * head * head / (12.0 * nu * 0.1);
        assert!((level / exact - 1.0).abs() < 0.01, "{level} {exact}");
        let run = Run { slope: 30.0 * DEGREE, length: 1.0 };
        let falling = rated_flow(&SHEET, &run, nu, head).unwrap();
        let exact = 0.024 * GRAVITY * 0.5 * head * head * head / (3.0 * nu);
        assert!((falling / exact - 1.0).abs() < 0.02, "{falling} {exact}");
        assert_eq!((sill_height(&run) * 1e6).round(), 500_000.0);
        assert_eq!(sill_height(&Run { slope: -0.3, length: 1.0 }), 0.0);
    }

    proptest! {
        #[test]
        fn more_head_gives_more_flow(
            slope in -30.0..85.0_f64, length in 0.0..0.2_f64, nu in 1e-7..1e-1_f64, head in 1e-5..0.1_f64, kind in 0..4_usize, size in 0.002..0.1_f64,
        ) {
            let section = [Section::Sheet { width: size }, Section::Vee { included_angle: 1.3 }, Section::Trough { diameter: size }, Section::Tube { bore: size }][kind];
            let run = Run { slope: slope * DEGREE, length };
            let low = rated_flow(&section, &run, nu, head).unwrap();
            let high = rated_flow(&section, &run, nu, head * 1.01).unwrap();
            prop_assert!(low > 0.0 && high > low && high.is_finite(), "{low} {high}");
        }
    }
}

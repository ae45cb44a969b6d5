//! Where the stream lands.

use core::f64::consts::{FRAC_PI_2, PI};

use crate::{
    analysis::{case::Case, decision::Decision},
    physics::{
        separation::deflection::deflection,
        stream::{Launch, ballistic_distance, jet_distance},
    },
};

/// Horizontal distance from the edge to where the stream lands, m: from the pull of surface tension on a round jet to ballistic flight.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Landing {
    /// As a round jet; 0 where it drips.
    pub near: f64,
    /// In ballistic flight.
    pub far: f64,
}

/// Where a stream that leaves lands, `drop` (m) below the lip. It leaves along the floor (`slope`, rad), bent by the deflection at the lip; negative distances are under
/// the vessel. `None` where there is no deflection to speak of: the stream clings.
pub(super) fn landing(decision: &Decision, slope: f64, case: &Case, drop: f64) -> Option<Landing> {
    let balance = &decision.balance;
    let doubt = decision.standard_uncertainty;
    let bend = deflection(&balance.numbers, case.lip.edge.turn, decision.safety_factor(), doubt)?;
    let angle = slope + bend.angle;
    let speed = balance.stream.brink_speed;
    let area = balance.stream.area * balance.stream.speed / speed;
    // Past the vertical the same flight, mirrored.
    let (launch, side) = if angle > FRAC_PI_2 {
        (Launch { speed, angle: (PI - angle).max(-FRAC_PI_2) }, -1.0)
    } else {
        (Launch { speed, angle }, 1.0)
    };
    let far = side * ballistic_distance(&launch, drop);
    let near = side * jet_distance(&launch, area, &case.liquid, drop).unwrap_or(0.0);
    Some(Landing { near, far })
}

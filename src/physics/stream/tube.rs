//! When a closed spout runs full.

use core::f64::consts::FRAC_PI_4;

use super::join::smoothstep;
use crate::physics::GRAVITY;
use crate::physics::liquid::Liquid;

/// Speed of the air cavity that creeps into an emptying tube, over √(gD) (Benjamin 1968, J. Fluid Mech. 31,
/// 209, doi:10.1017/S0022112068000133; coefficient from memory).
pub const CAVITY_SPEED: f64 = 0.542;

/// ρgD²/γ up to which a tube stays full whatever the flow: surface tension closes its mouth (common practice,
/// no source).
pub const FULL_BOND: f64 = 4.5;

/// Factor on [`FULL_BOND`] above which surface tension no longer helps to fill the tube; between them a
/// smooth join (own judgement).
const FREE_BOND: f64 = 1.5;

/// Flow, m³/s, above which the cavity is washed out of a tube of bore `bore`, m: 0.542 √(gD) · πD²/4.
pub(super) fn cavity_flow(bore: f64) -> f64 {
    CAVITY_SPEED * (GRAVITY * bore).sqrt() * FRAC_PI_4 * bore * bore
}

/// How far surface tension fills the tube: 1 up to [`FULL_BOND`], 0 from 1.5 times it.
pub(super) fn capillary_filling(liquid: &Liquid, bore: f64) -> f64 {
    let bond = liquid.density * GRAVITY * bore * bore / liquid.surface_tension;
    1.0 - smoothstep(libm::log(bond / FULL_BOND) / libm::log(FREE_BOND))
}

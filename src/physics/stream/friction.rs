//! Laminar friction on the floor, and the depth at which it balances the slope.

use crate::physics::GRAVITY;
use crate::physics::lip::Section;
use crate::physics::numerics::{Bracket, find_root};

/// Deepest normal depth looked for in a tube, in bores: beyond about 0.9 the conveyance of a part-full tube
/// falls again.
const DEEPEST_IN_TUBE: f64 = 0.85;

/// Slope of the energy line by laminar friction, S_f = K ν U/(g R_h²) = K ν Q P²/(g A³), dimensionless.
///
/// At a `depth` in m. K: [`Section::friction_constant`]; `kinematic_viscosity` ν, m²/s; `flow` Q, m³/s.
/// Analytic for a wide film and for a half-full or full circle (Hagen–Poiseuille: 32 ν U/(g D²)); fully
/// developed laminar flow.
#[must_use]
pub fn friction_slope(section: &Section, depth: f64, flow: f64, kinematic_viscosity: f64) -> f64 {
    let wetted = section.wetted(depth);
    let radius = wetted.hydraulic_radius();
    section.friction_constant() * kinematic_viscosity * flow / (GRAVITY * wetted.area * radius * radius)
}

/// Normal depth, m: the depth at which friction balances a driving slope `driving` (sin of the floor's
/// slope), S_f(y) = `driving` > 0.
///
/// Sheet (3νq/(g sin σ))^⅓ (Nusselt 1916); vee and circles from A R_h² = KνQ/(g sin σ). `None` where a tube
/// cannot carry the flow part full (above 0.85 of the bore), or if the iteration fails.
#[must_use]
pub fn normal_depth(section: &Section, flow: f64, kinematic_viscosity: f64, driving: f64) -> Option<f64> {
    let target = conveyance(section, flow, kinematic_viscosity, driving);
    match *section {
        Section::Sheet { width } => Some(libm::cbrt(target / width)),
        Section::Vee { included_angle } => {
            // A R_h² = tan³ϑ y⁴ / (4 (1 + tan²ϑ))
            let tangent = libm::tan(0.5 * included_angle);
            let square = tangent * tangent;
            Some((4.0 * target * (1.0 + square) / (square * tangent)).sqrt().sqrt())
        }
        Section::Trough { diameter } => in_circle(section, diameter, target, None),
        Section::Tube { bore } => in_circle(section, bore, target, Some(DEEPEST_IN_TUBE * bore)),
    }
}

/// A R_h², m⁴, at which friction equals the driving slope.
fn conveyance(section: &Section, flow: f64, kinematic_viscosity: f64, driving: f64) -> f64 {
    section.friction_constant() * kinematic_viscosity * flow / (GRAVITY * driving)
}

fn in_circle(section: &Section, diameter: f64, target: f64, deepest: Option<f64>) -> Option<f64> {
    let excess = |log_depth: f64| {
        let wetted = section.wetted(libm::exp(log_depth));
        let radius = wetted.hydraulic_radius();
        libm::log(wetted.area * radius * radius / target)
    };
    // Up to half depth 0.169 √D y^3.5 ≤ A R_h² ≤ 2 √D y^3.5; above it, in a trough, A R_h² ≥ 0.049 D³ y.
    let shallow = |factor: f64| libm::pow(target / (factor * diameter.sqrt()), 2.0 / 7.0);
    let low = libm::log(shallow(2.0).min(0.5 * diameter)) - 1e-9;
    let parabola = shallow(0.169);
    let high = if parabola < 0.5 * diameter {
        parabola
    } else {
        deepest.unwrap_or_else(|| (target / (0.049 * diameter * diameter * diameter)).max(diameter))
    };
    let high = libm::log(high);
    let bracket = Bracket { low: (low, excess(low)), high: (high, excess(high)) };
    find_root(excess, bracket, 1e-15).map(libm::exp)
}

/// Driving slope of a very viscous film one thickness before a brink (own estimate, ±30 % in thickness).
///
/// On a level floor that ends, lubrication theory (gh³h′ = −3νq, h → 0 at the brink) gives h³ = 12νq/g one
/// thickness upstream: the film falls as if driven by a quarter of gravity. On a vertical floor it is driven
/// by gravity whole. Between them a straight line in sin σ, (1 + 3 sin σ)/4, which is never below sin σ, so
/// the film it gives is never thicker than the normal depth. Uphill 1/(4(1 − 3 sin σ)), which joins it
/// without a kink.
pub(super) fn brink_driving(sine: f64) -> f64 {
    if sine >= 0.0 { 0.25 * (1.0 + 3.0 * sine) } else { 0.25 / (1.0 - 3.0 * sine) }
}

/// Whether [`viscous_area`] can exceed the area at `depth`, m: friction there is above the driving slope.
pub(super) fn may_creep(
    section: &Section,
    depth: f64,
    flow: f64,
    kinematic_viscosity: f64,
    driving: f64,
) -> bool {
    matches!(*section, Section::Tube { bore } if depth > 0.5 * bore)
        || friction_slope(section, depth, flow, kinematic_viscosity) > driving
}

/// Pour rate per width, m²/s, below which a film at its critical depth on a level or rising floor creeps, so that friction thickens it.
///
/// [`friction_slope`] at h³ = q²/g_n, 3νg_n/(gq), above the driving slope: `gravity` g_n normal to the floor, m/s²; `sine` of the floor's slope, at
/// most 0.
#[must_use]
pub fn creeps_below(kinematic_viscosity: f64, gravity: f64, sine: f64) -> f64 {
    const SHEET: Section = Section::Sheet { width: 1.0 };
    SHEET.friction_constant() * kinematic_viscosity * gravity / (GRAVITY * brink_driving(sine))
}

/// Flow area, m², of a viscous film under a driving slope; more than the bore where a tube cannot carry the
/// flow.
///
/// A tube above half depth takes R_h = D/4, which is exact half full and full, so that its area grows with
/// the flow without a jump from part full to full, and beyond.
pub(super) fn viscous_area(
    section: &Section,
    flow: f64,
    kinematic_viscosity: f64,
    driving: f64,
) -> Option<f64> {
    if let Section::Tube { bore } = *section {
        let quarter = 0.25 * bore;
        let area = conveyance(section, flow, kinematic_viscosity, driving) / (quarter * quarter);
        if area >= 0.5 * section.full_area() {
            return Some(area);
        }
    }
    normal_depth(section, flow, kinematic_viscosity, driving).map(|depth| section.area(depth))
}

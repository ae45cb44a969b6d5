//! Steady laminar flow down a constant slope in any section: depth after a length.

use super::newton::newton;
use crate::physics::GRAVITY;
use crate::physics::lip::Section;
use crate::physics::numerics::gauss_legendre_8;

/// Length of a panel of the quadrature, and where the depth counts as exponentially near normal, in
/// e-foldings of y − y_N.
const PANEL: f64 = 1.5;
const PANELS: u32 = 8;

/// What stays the same along the march.
#[derive(Debug, Clone, Copy)]
pub(super) struct Reach<'a> {
    pub section: &'a Section,
    /// m³/s.
    pub flow: f64,
    /// m²/s.
    pub kinematic_viscosity: f64,
    pub momentum_factor: f64,
    /// Sine and cosine of the slope.
    pub sine: f64,
    pub cosine: f64,
}

/// Depth, m, after `length`, m, of supercritical flow that starts at depth `start`, m; `normal` is the normal
/// depth, m.
///
/// x = ∫ (cos σ − βQ²T/(gA³))/(sin σ − S_f) dy. With y = y_N + (y₀ − y_N) e^−n the integrand in n is smooth
/// and positive, and tends to a constant: 8-point Gauss–Legendre on panels of 1.5 in n, Newton's method in
/// the last; from n = 12 on the limit is used.
pub(super) fn depth_after(reach: &Reach<'_>, length: f64, start: f64, normal: f64) -> Option<f64> {
    let gap = start - normal;
    if length <= 0.0 {
        return Some(start);
    }
    if gap.abs() <= 1e-9 * normal {
        return Some(normal);
    }
    let inertia = reach.momentum_factor * reach.flow * reach.flow / GRAVITY;
    let friction = reach.section.friction_constant() * reach.kinematic_viscosity * reach.flow / GRAVITY;
    let rate = |folds: f64| {
        let above = gap * libm::exp(-folds);
        let wetted = reach.section.wetted(normal + above);
        let cube = 1.0 / (wetted.area * wetted.area * wetted.area);
        let froude = inertia * wetted.top_width * cube;
        let slope = friction * wetted.perimeter * wetted.perimeter * cube;
        above * (froude - reach.cosine) / (reach.sine - slope)
    };
    let mut done = 0.0;
    for panel in 0..PANELS {
        let from = PANEL * f64::from(panel);
        let covered = gauss_legendre_8(rate, from, from + PANEL);
        let missing = length - done;
        if covered >= missing {
            let excess = |n: f64| (gauss_legendre_8(rate, from, from + n) - missing, rate(from + n));
            let n = newton(excess, 0.0, PANEL, PANEL * missing / covered)?;
            return Some(normal + gap * libm::exp(-(from + n)));
        }
        done += covered;
    }
    let end = PANEL * f64::from(PANELS);
    let folds = end + (length - done) / rate(end);
    Some(normal + gap * libm::exp(-folds))
}

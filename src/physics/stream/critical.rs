//! Critical flow: the control that sets depth and speed where the floor ends or begins to fall, and what a
//! lip passes at a head.

use core::f64::consts::PI;

use crate::physics::GRAVITY;
use crate::physics::lip::Section;
use crate::physics::liquid::Liquid;
use crate::physics::numerics::{Bracket, find_root};

/// Critical depth y_c, m: β Q² T = g A³.
///
/// `flow` Q, m³/s (> 0); `momentum_factor` β; `gravity` g normal to the floor, m/s². Flat (βq²/g)^⅓ with q =
/// Q/W; vee of full angle t (2βQ²/(g tan²(t/2)))^⅕; trough above half depth A = (βQ²D/g)^⅓; circle solved to
/// 1e-14. Units may be any consistent set. Source: Chow 1959, *Open-Channel Hydraulics*, ch. 4. `None` only
/// if the iteration fails, which no positive finite input is known to cause. A tube's critical depth tends to
/// the crown as the flow grows.
#[must_use]
pub fn critical_depth(section: &Section, flow: f64, momentum_factor: f64, gravity: f64) -> Option<f64> {
    let target = momentum_factor * flow * flow / gravity;
    match *section {
        Section::Sheet { width } => Some(libm::cbrt(target / (width * width))),
        Section::Vee { included_angle } => {
            let tangent = libm::tan(0.5 * included_angle);
            Some(libm::pow(2.0 * target / (tangent * tangent), 0.2))
        }
        Section::Trough { diameter } => {
            let area = libm::cbrt(target * diameter);
            let half_round = 0.125 * PI * diameter * diameter;
            if area >= half_round {
                Some(0.5 * diameter + (area - half_round) / diameter)
            } else {
                in_circle(section, diameter, target, 0.5 * diameter)
            }
        }
        Section::Tube { bore } => in_circle(section, bore, target, bore),
    }
}

/// Depth in a circle at which A³/T is `target`, m⁵, no deeper than `deepest`.
fn in_circle(section: &Section, diameter: f64, target: f64, deepest: f64) -> Option<f64> {
    let excess = |log_depth: f64| {
        let wetted = section.wetted(libm::exp(log_depth));
        let area = wetted.area;
        libm::log(area * area * area / (wetted.top_width * target))
    };
    // A segment lies between its parabola and its rectangle: (16/27) D y⁴ ≤ A³/T (up to half depth) and A³/T
    // ≤ 4 D y⁴.
    let fourth_root = |x: f64| x.sqrt().sqrt();
    let low = libm::log(fourth_root(target / (4.0 * diameter)).min(0.5 * diameter)) - 1e-9;
    let parabola = fourth_root(27.0 * target / (16.0 * diameter));
    let high = if parabola < 0.5 * diameter { parabola } else { deepest * (1.0 - 1e-12) };
    let high = libm::log(high) + if high < 0.5 * diameter { 1e-9 } else { 0.0 };
    let at_high = excess(high);
    if at_high <= 0.0 {
        return Some(deepest);
    }
    find_root(excess, Bracket { low: (low, excess(low)), high: (high, at_high) }, 1e-15).map(libm::exp)
}

/// Specific energy y + A/(2T) of critical flow at `depth`, m: the total head above the lowest point of the
/// lip.
#[must_use]
pub fn critical_head(section: &Section, depth: f64) -> f64 {
    depth + 0.5 * section.hydraulic_depth(depth)
}

/// The lip's rating: critical flow, m³/s, from a total head `head`, m, above the lowest point of the lip; no
/// losses, no surface tension.
///
/// Flat (2/3)^1.5 √g W h^1.5 (1.7046 W h^1.5); vee 0.8^2.5 √(g/2) tan(t/2) h^2.5 (1.2676 tan(t/2) h^2.5);
/// round sections solve y + A/(2T) = h for the critical depth, and Q = √(g A³/T). Below
/// [`SMALL_HEAD`](super::SMALL_HEAD) allow ±20 %. Analytic (Chow 1959, ch. 3–4). `None` only if the iteration
/// fails. 0 for a head that is not positive.
#[must_use]
pub fn critical_flow(section: &Section, head: f64) -> Option<f64> {
    if head <= 0.0 {
        return Some(0.0);
    }
    let depth = match *section {
        Section::Sheet { .. } => 2.0 / 3.0 * head,
        Section::Vee { .. } => 0.8 * head,
        Section::Trough { diameter } | Section::Tube { bore: diameter } => {
            let deepest = match section {
                Section::Tube { .. } => head.min(diameter * (1.0 - 1e-12)),
                Section::Sheet { .. } | Section::Vee { .. } | Section::Trough { .. } => head,
            };
            let excess = |depth: f64| critical_head(section, depth) - head;
            let bracket =
                Bracket { low: (0.5 * deepest, excess(0.5 * deepest)), high: (deepest, excess(deepest)) };
            find_root(excess, bracket, 1e-15)?
        }
    };
    let wetted = section.wetted(depth);
    Some((GRAVITY * wetted.area * wetted.area * wetted.area / wetted.top_width).sqrt())
}

/// Head that a dry straight edge holds back before liquid starts to run over it, m: 2ℓ sin(ψ/2), ψ =
/// min(180°, θ_A + turn).
///
/// ℓ capillary length; θ_A advancing angle on the outer wall and `turn` of the edge, rad. The largest static
/// level of a two-dimensional meniscus pinned at a sharp edge: analytic. So a dry lip starts suddenly, with
/// this head behind it.
#[must_use]
pub fn start_head(liquid: &Liquid, advancing_angle: f64, turn: f64) -> f64 {
    2.0 * liquid.capillary_length() * libm::sin(0.5 * (advancing_angle + turn).min(PI))
}

#[cfg(test)]
mod tests {
    use super::{critical_depth, critical_flow, critical_head};
    use crate::physics::GRAVITY;
    use crate::physics::lip::Section;

    #[test]
    fn rating_and_critical_depth_are_inverse() {
        for section in [
            Section::Sheet { width: 0.024 },
            Section::Vee { included_angle: 1.0 },
            Section::Trough { diameter: 0.02 },
            Section::Tube { bore: 0.02 },
        ] {
            for flow in [1e-8, 1e-6, 2e-5, 1e-4, 2.5e-4, 1e-3, 1e-2] {
                let depth = critical_depth(&section, flow, 1.0, GRAVITY).unwrap();
                let wetted = section.wetted(depth);
                if wetted.top_width > 0.1 * wetted.perimeter {
                    // Not near the crown of a tube, where the free surface is lost in rounding.
                    let back = critical_flow(&section, critical_head(&section, depth)).unwrap();
                    assert!((back / flow - 1.0).abs() < 1e-9, "{section:?} {flow} {back}");
                }
                assert!(depth > 0.0 && depth.is_finite());
            }
        }
        assert_eq!(critical_flow(&Section::Sheet { width: 0.024 }, -0.001), Some(0.0));
    }

    #[test]
    fn a_tube_fills_to_its_crown() {
        let depth = critical_depth(&Section::Tube { bore: 0.02 }, 0.02, 1.0, GRAVITY).unwrap();
        assert!(depth > 0.0199 && depth <= 0.02);
        assert!(critical_flow(&Section::Tube { bore: 0.02 }, 1.0).unwrap() > 1e-3);
    }
}

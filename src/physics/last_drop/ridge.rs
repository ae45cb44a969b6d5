//! Ridges that hang along a straight rim.

use super::monotone_table::MonotoneTable;
use crate::physics::liquid::Liquid;

/// Largest cross-section that hangs under a straight rim, A/ℓ² against the rim's half thickness a/ℓ, both lines pinned at its edges: own integration of the
/// plane Young–Laplace equation, A = 2ℓ² sin ψ − 2a(κ₀ℓ² − h) at its turning point (the stability rule of Pitts 1973, J. Fluid Mech. 59, 753). The
/// limit 2 at a = 0 is that of two vertical faces. A rim thicker than 4.4 ℓ is not filled: its lines would stand free at 0°.
static LARGEST_AREA: MonotoneTable<14> = MonotoneTable::new([
    (0.0, 2.0),
    (0.05, 2.09404),
    (0.1, 2.19081),
    (0.2, 2.39209),
    (0.37, 2.73690),
    (0.5, 2.99987),
    (0.75, 3.49619),
    (1.0, 3.96344),
    (1.25, 4.38338),
    (1.5, 4.73721),
    (1.75, 5.00597),
    (2.0, 5.16963),
    (2.1, 5.20109),
    (2.2, 5.21110),
]);

/// Largest half thickness, in capillary lengths, that a hanging ridge fills.
pub const WIDEST_RIM: f64 = 2.2;

/// Largest cross-section (m²) of a ridge under a rim of this half thickness (m). Rims thicker than 4.4 ℓ are taken as 4.4 ℓ: they hold no more.
#[must_use]
pub fn ridge_area(liquid: &Liquid, half_thickness: f64) -> f64 {
    let length = liquid.capillary_length();
    LARGEST_AREA.at((half_thickness / length).min(WIDEST_RIM)) * length * length
}

#[cfg(test)]
mod tests {
    use super::LARGEST_AREA;

    /// Largest area at which profiles of apex curvature `k0` (ℓ = 1) cross the half thickness, by Runge & Kutta. The area between the profile and the chord
    /// is also checked against the balance of forces.
    fn largest(half: f64) -> f64 {
        let mut best: f64 = 0.0;
        for i in 0..450 {
            let k0 = 1.0 + 0.002 * f64::from(i);
            let slope =
                |y: [f64; 4]| [libm::cos(y[2]), libm::sin(y[2]), k0 - y[1], 2.0 * y[0] * libm::sin(y[2])];
            let along =
                |y: [f64; 4], k: [f64; 4], h: f64| core::array::from_fn::<f64, 4, _>(|i| y[i] + h * k[i]);
            let mut y = [0.0; 4];
            let h = 0.005;
            for _ in 0..1600 {
                let k1 = slope(y);
                let k2 = slope(along(y, k1, 0.5 * h));
                let k3 = slope(along(y, k2, 0.5 * h));
                let k4 = slope(along(y, k3, h));
                let next: [f64; 4] =
                    core::array::from_fn(|i| y[i] + h / 6.0 * (k1[i] + 2.0 * k2[i] + 2.0 * k3[i] + k4[i]));
                // Past the neck the profile may lean out again; leaning in further than it began it crosses itself.
                if next[0] < 0.0 || next[0] > 6.0 {
                    break;
                }
                if (y[0] - half) * (next[0] - half) < 0.0 {
                    let t = (half - y[0]) / (next[0] - y[0]);
                    let at: [f64; 4] = core::array::from_fn(|i| y[i] + t * (next[i] - y[i]));
                    let balance = 2.0 * libm::sin(at[2]) - 2.0 * half * (k0 - at[1]);
                    assert!((balance - at[3]).abs() < 1e-3, "{balance} {}", at[3]);
                    best = best.max(at[3]);
                }
                y = next;
            }
        }
        best
    }

    #[test]
    fn largest_area_is_the_turning_point() {
        for half in [0.15, 0.3, 0.9, 1.6, 2.15] {
            let (table, found) = (LARGEST_AREA.at(half), largest(half));
            assert!((table / found - 1.0).abs() < 2e-3, "{half}: {table} {found}");
        }
    }
}

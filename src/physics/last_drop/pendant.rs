//! Drops that hang from a round tip.

use core::f64::consts::TAU;

use super::monotone_table::MonotoneTable;
use crate::physics::liquid::Liquid;
use crate::physics::numerics::{Bracket, find_root};

/// Harkins & Brown (1919), doi:10.1021/ja01461a003: fraction f of Tate's ideal volume that falls, against R/V^⅓ with the fallen volume V. Numbers of their table
/// from memory; they agree with the polynomial of Lee, Chan & Pogaku (2008, Chem. Eng. Commun. 195, 889, also from memory) within 0.009.
static FALLEN_FRACTION: MonotoneTable<28> = MonotoneTable::new([
    (0.0, 1.0),
    (0.30, 0.7256),
    (0.35, 0.7011),
    (0.40, 0.6828),
    (0.45, 0.6669),
    (0.50, 0.6515),
    (0.55, 0.6362),
    (0.60, 0.6250),
    (0.65, 0.6171),
    (0.70, 0.6093),
    (0.75, 0.6032),
    (0.80, 0.6000),
    (0.85, 0.5992),
    (0.90, 0.5998),
    (0.95, 0.6034),
    (1.00, 0.6098),
    (1.05, 0.6179),
    (1.10, 0.6280),
    (1.15, 0.6407),
    (1.20, 0.6535),
    (1.25, 0.6520),
    (1.30, 0.6400),
    (1.35, 0.6230),
    (1.40, 0.6030),
    (1.45, 0.5830),
    (1.50, 0.5670),
    (1.55, 0.5510),
    (1.60, 0.5350),
]);

/// Largest ratio R/V^⅓ of the table.
const LARGEST_RATIO: f64 = 1.6;
/// Smallest ratio R/V^⅓ that was measured; below it the table is a straight reach to the limit 1.
const SMALLEST_MEASURED: f64 = 0.3;

/// Largest volume that hangs in equilibrium from a horizontal tip, V/ℓ³ against R/ℓ, the line pinned at R: own integration of the axisymmetric Young–Laplace
/// equation, volume turning point (the method of Padday & Pitt 1973 and Boucher & Evans 1975). Wider than 3.22 ℓ the tip holds no more.
static LARGEST_STATIC: MonotoneTable<25> = MonotoneTable::new([
    (0.0, 0.0),
    (0.02, 0.117996),
    (0.05, 0.280813),
    (0.1, 0.531426),
    (0.15, 0.766501),
    (0.2, 0.994247),
    (0.3, 1.444272),
    (0.4, 1.904179),
    (0.5, 2.385886),
    (0.6, 2.895866),
    (0.7, 3.437540),
    (0.8, 4.012429),
    (0.9, 4.620752),
    (1.0, 5.261758),
    (1.2, 6.635047),
    (1.4, 8.112572),
    (1.6, 9.665830),
    (1.8, 11.258427),
    (2.0, 12.846452),
    (2.2, 14.378695),
    (2.4, 15.796900),
    (2.6, 17.036263),
    (2.8, 18.026417),
    (3.0, 18.693246),
    (3.2, 18.961952),
]);

/// Widest tip of the table, in capillary lengths; a wider tip holds no larger drop.
pub const WIDEST_TIP: f64 = 3.2;

/// Share of the largest static drop that stays when it falls from a tip smaller than any measured (R < 0.35 ℓ): what the table gives at its smallest measured tip,
/// where 4 % stay (own judgement; the straight reach of the table would have more fall than can hang).
const LEAST_SHARE_LEFT: f64 = 0.04;

/// Tate (1864): ideal volume 2π R γ/(ρ g), m³, that a tip of radius R (m) carries.
#[must_use]
pub fn tate_volume(liquid: &Liquid, radius: f64) -> f64 {
    let length = liquid.capillary_length();
    TAU * radius * length * length
}

/// Harkins & Brown's fraction f of Tate's volume that falls, at R/V^⅓ between 0 and 1.6 (`None` outside). Measured from 0.3 on.
#[must_use]
pub fn harkins_brown_fraction(ratio: f64) -> Option<f64> {
    (0.0..=LARGEST_RATIO).contains(&ratio).then(|| FALLEN_FRACTION.at(ratio))
}

/// Largest diameter (m) of a round mouth facing down that surface tension can close: 2 · 3.8317 ℓ, with the first zero of the Bessel function J₁ (a flat meniscus,
/// pinned at the mouth, first fails by tilting; Maxwell 1875, from memory).
#[must_use]
pub fn round_mouth_limit(liquid: &Liquid) -> f64 {
    2.0 * 3.831_705_970_207_512 * liquid.capillary_length()
}

/// A drop at a round tip: the largest that hangs, and the part of it that falls, m³.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PendantDrop {
    /// Largest volume in equilibrium.
    pub largest: f64,
    /// Volume that falls when it is exceeded slowly; the rest stays.
    pub falls: f64,
}

/// The drop at a tip of this radius (m), Tate with Harkins & Brown for the part that falls; tips wider than 3.2 ℓ are taken as 3.2 ℓ, the widest that one drop
/// can fill.
#[must_use]
pub fn pendant_drop(liquid: &Liquid, radius: f64) -> PendantDrop {
    let length = liquid.capillary_length();
    let cube = length * length * length;
    let relative = (radius / length).min(WIDEST_TIP);
    let largest = LARGEST_STATIC.at(relative);
    let falls = fallen(relative).min((1.0 - LEAST_SHARE_LEFT) * largest);
    PendantDrop { largest: largest * cube, falls: falls * cube }
}

/// Fallen volume over ℓ³ from a tip of R/ℓ up to 3.2. With ξ = R/V^⅓ Tate and Harkins & Brown read (R/ℓ)² = 2π ξ³ f(ξ), which grows with ξ, and
/// V = (R/ξ)³.
fn fallen(relative: f64) -> f64 {
    let miss = |ratio: f64| TAU * ratio * ratio * ratio * FALLEN_FRACTION.at(ratio) - relative * relative;
    let split = miss(SMALLEST_MEASURED);
    let bracket = if split > 0.0 {
        Bracket { low: (0.0, -relative * relative), high: (SMALLEST_MEASURED, split) }
    } else {
        Bracket { low: (SMALLEST_MEASURED, split), high: (LARGEST_RATIO, miss(LARGEST_RATIO)) }
    };
    match find_root(miss, bracket, 1e-9) {
        Some(ratio) if ratio > 0.0 => {
            let size = relative / ratio;
            size * size * size
        }
        // Only at a tip of no size.
        _ => 0.0,
    }
}

#[cfg(test)]
mod tests {
    use super::{FALLEN_FRACTION, LARGEST_STATIC, fallen, pendant_drop};
    use crate::physics::liquid::Liquid;
    use core::f64::consts::PI;

    /// Volumes at which profiles of apex curvature `b` (ℓ = 1) cross the radius, first and third time, by Runge & Kutta.
    fn volumes(b: f64, radius: f64) -> [f64; 2] {
        let slope = |y: [f64; 4]| {
            let hoop = if y[0] < 1e-9 { b } else { libm::sin(y[2]) / y[0] };
            [libm::cos(y[2]), libm::sin(y[2]), 2.0 * b - y[1] - hoop, PI * y[0] * y[0] * libm::sin(y[2])]
        };
        let along = |y: [f64; 4], k: [f64; 4], h: f64| core::array::from_fn::<f64, 4, _>(|i| y[i] + h * k[i]);
        let (mut y, mut found, mut crossings) = ([0.0; 4], [0.0; 2], 0);
        let h = 0.004;
        for _ in 0..2500 {
            let k1 = slope(y);
            let k2 = slope(along(y, k1, 0.5 * h));
            let k3 = slope(along(y, k2, 0.5 * h));
            let k4 = slope(along(y, k3, h));
            let next: [f64; 4] =
                core::array::from_fn(|i| y[i] + h / 6.0 * (k1[i] + 2.0 * k2[i] + 2.0 * k3[i] + k4[i]));
            if (y[0] - radius) * (next[0] - radius) < 0.0 {
                let t = (radius - y[0]) / (next[0] - y[0]);
                if crossings != 1 {
                    found[crossings / 2] = y[3] + t * (next[3] - y[3]);
                }
                crossings += 1;
                if crossings == 3 {
                    break;
                }
            }
            y = next;
            if y[0] < 0.0 || y[0] > 6.0 {
                break;
            }
        }
        found
    }

    #[test]
    fn largest_static_drop_is_the_turning_point_of_the_volume() {
        for radius in [0.37, 0.65, 1.1, 2.1, 2.9] {
            let largest = (0..300)
                .map(|i| 0.7 + 0.005 * f64::from(i))
                .flat_map(|b| volumes(b, radius))
                .fold(0.0, f64::max);
            let table = LARGEST_STATIC.at(radius);
            assert!((table / largest - 1.0).abs() < 0.01, "{radius}: {table} {largest}");
        }
    }

    #[test]
    fn fallen_volume_satisfies_tate_with_harkins_and_brown() {
        for radius in [0.05, 0.2, 0.5, 1.0, 2.0, 3.0, 3.2] {
            let volume = fallen(radius);
            let fraction = FALLEN_FRACTION.at(radius / libm::cbrt(volume));
            assert!((volume / (core::f64::consts::TAU * radius * fraction) - 1.0).abs() < 1e-6, "{radius}");
        }
    }

    #[test]
    fn something_falls_and_something_stays_at_every_tip() {
        let water = Liquid { density: 998.2, viscosity: 1e-3, surface_tension: 0.0728 };
        let mut last = 0.0;
        for i in 1..200 {
            let drop = pendant_drop(&water, f64::from(i) * 0.1e-3);
            assert!(drop.falls > 0.5 * drop.largest && drop.falls < 0.961 * drop.largest, "{i} {drop:?}");
            assert!(drop.largest >= last, "{i}");
            last = drop.largest;
        }
    }
}

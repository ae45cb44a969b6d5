//! The free stream after the lip: where it lands.
//!
//! Pressure in the stream is that of the air but for surface tension. A sheet of flux q per width obeys (ρU²e − 2γ) θ′ = ρ g e cos θ, a round jet of radius R
//! (ρU²R − γ) θ′ = ρ g R cos θ, with U² = U₀² + 2gz below the lip and θ the angle below the horizontal: surface tension pulls the stream back, so that it turns down
//! sooner than a stone would. Both integrate over the fall: cos θ = cos θ₀ (N₀/N)^k with N = ρqU − 2γ, k = 1 for the sheet and N = U^{3/2} − γ/(ρR₀√U₀), k = 2/3 for the
//! jet (own integration). The band from round jet to ballistic flight is what a lip's stream, which is neither, can be expected to keep to.

use crate::physics::GRAVITY;
use crate::physics::liquid::Liquid;
use crate::physics::numerics::gauss_legendre_8;

/// A stream as it leaves the lip.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Launch {
    /// Mean speed U₀, m/s.
    pub speed: f64,
    /// Angle below the horizontal, rad; negative: upwards. Within ±π/2.
    pub angle: f64,
}

/// Horizontal distance, m, at which a ballistic stream has fallen by `drop` (m, positive): x = U cos a·t, drop = U sin a·t + gt²/2.
#[must_use]
pub fn ballistic_distance(launch: &Launch, drop: f64) -> f64 {
    let (sine, cosine) = libm::sincos(launch.angle);
    let down = launch.speed * sine;
    let time = ((down * down + 2.0 * GRAVITY * drop).sqrt() - down) / GRAVITY;
    launch.speed * cosine * time
}

/// Horizontal distance, m, at which a sheet of thickness `thickness` (m) has fallen by `drop` (m). `None`: ρU²e ≤ 2γ, no sheet leaves.
#[must_use]
pub fn sheet_distance(launch: &Launch, thickness: f64, liquid: &Liquid, drop: f64) -> Option<f64> {
    let pull = 2.0 * liquid.surface_tension / (liquid.density * launch.speed * thickness);
    let net = |speed: f64| speed - pull;
    if net(launch.speed) <= 0.0 {
        return None;
    }
    Some(distance(launch, drop, net, |n| pull + n))
}

/// Horizontal distance, m, at which a round jet of cross-section `area` (m²) has fallen by `drop` (m). `None`: ρU²R ≤ γ, it drips.
#[must_use]
pub fn jet_distance(launch: &Launch, area: f64, liquid: &Liquid, drop: f64) -> Option<f64> {
    let radius = (area / core::f64::consts::PI).sqrt();
    let pull = liquid.surface_tension / (liquid.density * radius * launch.speed.sqrt());
    // (U^{3/2} − pull)^{2/3}
    let net = |speed: f64| {
        let root = libm::cbrt(speed * speed.sqrt() - pull);
        root * root
    };
    if launch.speed * launch.speed.sqrt() <= pull {
        return None;
    }
    let speed_of = |n: f64| {
        let root = libm::cbrt(pull + n * n.sqrt());
        root * root
    };
    Some(distance(launch, drop, net, speed_of))
}

/// ∫ cot θ dz over the fall, with cos θ · net(U) constant. `speed_of` is the inverse of `net`.
fn distance(launch: &Launch, drop: f64, net: impl Fn(f64) -> f64, speed_of: impl Fn(f64) -> f64) -> f64 {
    let speed = launch.speed;
    let horizontal = libm::cos(launch.angle) * net(speed);
    let fall = |speed_squared: f64, horizontal: f64, drop: f64| {
        // z = drop·t²: takes the square root's end away where the stream starts level.
        let integrand = |t: f64| {
            let now = (speed_squared + 2.0 * GRAVITY * drop * t * t).sqrt();
            let cosine = horizontal / net(now);
            let sine = (1.0 - cosine * cosine).max(0.0).sqrt();
            if sine > 0.0 { cosine / sine * 2.0 * drop * t } else { 0.0 }
        };
        // Two panels: near a level start the slope changes quickly.
        gauss_legendre_8(integrand, 0.0, 0.3) + gauss_legendre_8(integrand, 0.3, 1.0)
    };
    if launch.angle >= 0.0 {
        return fall(speed * speed, horizontal, drop);
    }
    // Up to the apex, where cos θ = 1, and down again.
    let apex = speed_of(horizontal).min(speed);
    let rise = (speed * speed - apex * apex) / (2.0 * GRAVITY);
    fall(apex * apex, horizontal, rise) + fall(apex * apex, horizontal, rise + drop)
}

#[cfg(test)]
mod tests {
    use super::{Launch, ballistic_distance, jet_distance, sheet_distance};
    use crate::physics::GRAVITY;
    use crate::physics::liquid::Liquid;

    const WATER: Liquid = Liquid { density: 998.2, viscosity: 1.002e-3, surface_tension: 0.07275 };

    /// The equation of the sheet or jet itself, step by step along the stream.
    fn march(launch: &Launch, drop: f64, turning: impl Fn(f64) -> f64) -> f64 {
        let (mut x, mut z, mut angle) = (0.0, 0.0, launch.angle);
        let step = 1e-5;
        let bend = |z: f64, angle: f64| {
            let speed = (launch.speed * launch.speed + 2.0 * GRAVITY * z).sqrt();
            turning(speed) * libm::cos(angle)
        };
        loop {
            let middle = angle + 0.5 * step * bend(z, angle);
            let (sine, cosine) = libm::sincos(middle);
            let next = z + step * sine;
            if next >= drop && sine > 0.0 {
                return x + (drop - z) / sine * cosine;
            }
            angle += step * bend(0.5 * (z + next), middle);
            (x, z) = (x + step * cosine, next);
        }
    }

    #[test]
    fn the_closed_forms_solve_their_equations() {
        for (speed, angle) in [(0.4, 0.0), (0.6, 0.5), (0.9, -0.4), (1.5, 1.2)] {
            let launch = Launch { speed, angle };
            let thickness = 0.002;
            let sheet = sheet_distance(&launch, thickness, &WATER, 0.2).unwrap();
            let marched = march(&launch, 0.2, |u| {
                let e = speed * thickness / u;
                WATER.density * GRAVITY * e / (WATER.density * u * u * e - 2.0 * WATER.surface_tension)
            });
            assert!((sheet / marched - 1.0).abs() < 1e-3, "sheet {speed} {angle}: {sheet} {marched}");
            let area = 5e-5;
            let jet = jet_distance(&launch, area, &WATER, 0.2).unwrap();
            let radius = (area / core::f64::consts::PI).sqrt();
            let marched = march(&launch, 0.2, |u| {
                let r = radius * (speed / u).sqrt();
                WATER.density * GRAVITY * r / (WATER.density * u * u * r - WATER.surface_tension)
            });
            assert!((jet / marched - 1.0).abs() < 1e-3, "jet {speed} {angle}: {jet} {marched}");
            assert!(sheet < jet && jet < ballistic_distance(&launch, 0.2));
        }
    }

    #[test]
    fn without_surface_tension_it_flies_like_a_stone() {
        let dry = Liquid { surface_tension: 1e-12, ..WATER };
        for angle in [-1.0, -0.2, 0.0, 0.3, 1.4] {
            let launch = Launch { speed: 0.5, angle };
            let stone = ballistic_distance(&launch, 0.15);
            let jet = jet_distance(&launch, 1e-5, &dry, 0.15).unwrap();
            assert!((jet / stone - 1.0).abs() < 1e-4, "{angle}: {jet} {stone}");
        }
    }

    #[test]
    fn a_trickle_drips() {
        let slow = Launch { speed: 0.05, angle: 0.0 };
        assert_eq!(sheet_distance(&slow, 0.001, &WATER, 0.1), None);
        assert_eq!(jet_distance(&slow, 1e-6, &WATER, 0.1), None);
    }
}

//! Films that a liquid leaves on a wall.

use crate::physics::GRAVITY;
use crate::physics::liquid::Liquid;

/// 1.3376/√2 of Landau & Levich: film against capillary length, from the curvature 1.3376/3^⅔ = 0.643 that their film equation tends to (from memory; the
/// curvature is recomputed in the tests).
pub const LANDAU_LEVICH_PREFACTOR: f64 = 1.3376 / core::f64::consts::SQRT_2;

/// T₀ of Groenveld (1970), from memory: film at high capillary number in units of √(μU/ρg).
const GROENVELD: f64 = 0.66;

/// Jeffreys (1930), doi:10.1017/S0305004100016339: thickness (m) of the film a time t (s) after draining began, at a distance z (m) below its upper end on a vertical
/// wall, h = √(μ z/(ρ g t)). For times long against μz/(ρ g h₀²) with the first thickness h₀; surface tension neglected.
#[must_use]
pub fn drained_thickness(liquid: &Liquid, distance: f64, time: f64) -> f64 {
    (liquid.viscosity * distance / (liquid.density * GRAVITY * time)).sqrt()
}

/// Volume (m³) still on a vertical wall of this length and width (m) a time (s) after draining began: (2/3) h(L) L w, the integral of [`drained_thickness`].
#[must_use]
pub fn drained_volume(liquid: &Liquid, length: f64, width: f64, time: f64) -> f64 {
    2.0 / 3.0 * drained_thickness(liquid, length, time) * length * width
}

/// Landau & Levich (1942), from memory: film (m) on a vertical wall drawn out of the liquid at speed U (m/s), h = 0.946 ℓ Ca^⅔ with Ca = μU/γ, for Ca up to about 0.01.
#[must_use]
pub fn landau_levich_thickness(liquid: &Liquid, speed: f64) -> f64 {
    let capillary = liquid.viscosity * speed / liquid.surface_tension;
    let root = libm::cbrt(capillary);
    LANDAU_LEVICH_PREFACTOR * liquid.capillary_length() * root * root
}

/// Groenveld (1970), Chem. Eng. Sci. 25, 33, constant from memory: the same film for Ca ≫ 1, h = 0.66 √(μU/(ρg)).
#[must_use]
pub fn groenveld_thickness(liquid: &Liquid, speed: f64) -> f64 {
    GROENVELD * (liquid.viscosity * speed / (liquid.density * GRAVITY)).sqrt()
}

/// Hartley & Murgatroyd (1964), doi:10.1016/0017-9310(64)90042-0: least mass flow per width, kg/(m·s), at which a film falling down a vertical wall stays whole against
/// a dry patch at this contact angle (rad): Γ_c = 1.69 (μρ/g)^⅕ [γ(1 − cos θ)]^⅗. The constant is 15^⅗/3, from their balance of the film's momentum flux
/// with surface tension at the patch's upper rim.
#[must_use]
pub fn film_breakup_flow(liquid: &Liquid, contact_angle: f64) -> f64 {
    let pull = liquid.surface_tension * (1.0 - libm::cos(contact_angle));
    hartley_murgatroyd_constant()
        * libm::pow(liquid.viscosity * liquid.density / GRAVITY, 0.2)
        * libm::pow(pull, 0.6)
}

/// 15^⅗/3.
#[must_use]
pub fn hartley_murgatroyd_constant() -> f64 {
    libm::pow(15.0, 0.6) / 3.0
}

#[cfg(test)]
mod tests {
    use super::LANDAU_LEVICH_PREFACTOR;

    /// The film equation η''' = (η − 1)/η³ from a flat film (growing as eˢ): η'' tends to 0.643, and the prefactor is that times 3^⅔/√2.
    #[test]
    fn landau_levichs_curvature_comes_out_of_their_film_equation() {
        let slope = |y: [f64; 3]| [y[1], y[2], (y[0] - 1.0) / (y[0] * y[0] * y[0])];
        let along = |y: [f64; 3], k: [f64; 3], h: f64| core::array::from_fn::<f64, 3, _>(|i| y[i] + h * k[i]);
        let mut y = [1.0 + 1e-6, 1e-6, 1e-6];
        let h = 0.005;
        for _ in 0..40_000 {
            let k1 = slope(y);
            let k2 = slope(along(y, k1, 0.5 * h));
            let k3 = slope(along(y, k2, 0.5 * h));
            let k4 = slope(along(y, k3, h));
            y = core::array::from_fn(|i| y[i] + h / 6.0 * (k1[i] + 2.0 * k2[i] + 2.0 * k3[i] + k4[i]));
        }
        let prefactor = y[2] * libm::cbrt(9.0) / core::f64::consts::SQRT_2;
        assert!((y[2] - 0.643).abs() < 1e-3, "{}", y[2]);
        assert!((prefactor - LANDAU_LEVICH_PREFACTOR).abs() < 1e-3, "{prefactor}");
    }
}

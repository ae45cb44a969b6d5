//! What a wall holds of a drop that sits on it.

use crate::physics::liquid::Liquid;
use crate::physics::surface::WettingAngles;

/// How cos θ goes along the contour of a drop on an inclined wall; it sets the factor k of Furmidge's equation.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ContourAngle {
    /// Cubic in the azimuth: ElSherbini & Jacobi (2006), doi:10.1016/j.jcis.2006.02.018, fitted to drops on metal.
    Cubic,
    /// Linear in the azimuth: Extrand & Gent (1990), doi:10.1016/0021-9797(90)90225-D.
    Linear,
    /// Cosine of the azimuth: exact at first order in the tilt or the Bond number (arXiv:1610.06725).
    Cosine,
}

impl ContourAngle {
    /// k = F / (w γ (cos θ_R − cos θ_A)) on a circular contour of diameter w: 24/π³, 2/π or π/4.
    #[must_use]
    pub const fn retention_factor(self) -> f64 {
        use core::f64::consts::PI;
        match self {
            Self::Cubic => 24.0 / (PI * PI * PI),
            Self::Linear => 2.0 / PI,
            Self::Cosine => PI / 4.0,
        }
    }
}

/// Lowest and highest retention factor used for the band: a linear contour (0.64) and Furmidge's own 1 (parallel-sided drops).
pub const RETENTION_BAND: (f64, f64) = (ContourAngle::Linear.retention_factor(), 1.0);

/// Furmidge (1962), doi:10.1016/0095-8522(62)90011-9: largest volume (m³) that a line of this width w (m) holds, ρ g V sin α = k w γ (cos θ_R − cos θ_A), on a wall
/// inclined by α (rad, 90° vertical). Zero without hysteresis; infinite on a level wall.
#[must_use]
pub fn furmidge_volume(
    liquid: &Liquid,
    angles: &WettingAngles,
    width: f64,
    factor: f64,
    inclination: f64,
) -> f64 {
    let length = liquid.capillary_length();
    factor * width * length * length * cosine_gap(angles) / libm::sin(inclination)
}

/// Largest drop (m³) that stays on a wall inclined by α (rad, 90° vertical), with this retention factor.
///
/// Furmidge's force at a width w that belongs to a spherical cap at the mean of the two angles, V = φ w³ with φ = π t(3 + t²)/48 and t = tan(θ/2):
/// V = φ^(−1/2) [k ℓ² (cos θ_R − cos θ_A)/sin α]^(3/2). ElSherbini & Jacobi use a volume of two circles instead; the cap is within the band of k.
#[must_use]
pub fn retained_volume(liquid: &Liquid, angles: &WettingAngles, factor: f64, inclination: f64) -> f64 {
    let gap = cosine_gap(angles);
    let half = libm::tan(0.25 * (angles.advancing.angle + angles.receding.angle));
    let shape = core::f64::consts::PI / 48.0 * half * (3.0 + half * half);
    if gap <= 0.0 || shape <= 0.0 {
        return 0.0;
    }
    let length = liquid.capillary_length();
    let square = factor * length * length * gap / libm::sin(inclination);
    square * (square / shape).sqrt()
}

/// cos θ_R − cos θ_A.
fn cosine_gap(angles: &WettingAngles) -> f64 {
    libm::cos(angles.receding.angle) - libm::cos(angles.advancing.angle)
}

#[cfg(test)]
mod tests {
    use super::ContourAngle;
    use core::f64::consts::PI;

    /// F/(R γ) = −∮ cos θ cos ω dω by the midpoint rule, with cos θ going from cos θ_A = −1 at ω = 0 to cos θ_R = 1 at π: twice 2k.
    fn by_quadrature(cosine: impl Fn(f64) -> f64) -> f64 {
        let steps = 20_000;
        let width = PI / f64::from(steps);
        let half_contour: f64 = (0..steps)
            .map(|i| {
                let azimuth = (f64::from(i) + 0.5) * width;
                -cosine(azimuth) * libm::cos(azimuth) * width
            })
            .sum();
        // Two halves; per diameter; per cos θ_R − cos θ_A = 2.
        2.0 * half_contour / 2.0 / 2.0
    }

    #[test]
    fn factors_are_the_integral_round_the_contour() {
        let cubic = |w: f64| -1.0 + 2.0 * (3.0 * w * w / (PI * PI) - 2.0 * w * w * w / (PI * PI * PI));
        for (contour, found) in [
            (ContourAngle::Cubic, by_quadrature(cubic)),
            (ContourAngle::Linear, by_quadrature(|w| -1.0 + 2.0 * w / PI)),
            (ContourAngle::Cosine, by_quadrature(|w| -libm::cos(w))),
        ] {
            assert!((contour.retention_factor() - found).abs() < 1e-8, "{contour:?} {found}");
        }
    }
}

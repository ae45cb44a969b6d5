//! How far the stream that leaves is bent towards the wall.

use super::numbers::Numbers;

/// Deflection of a separated stream at the lip.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Deflection {
    /// Angle ψ from the floor's direction, rad.
    pub angle: f64,
    /// Standard uncertainty, rad.
    pub standard_uncertainty: f64,
}

/// ψ = α tanh(ψ₀/α), ψ₀ = exp(c₀ + c₁ ln(r/h + 0.1) + c₂ ln S + c₃/S + c₄ ln(1 − cos α) + c₅ ln(Re/100)) in degrees, S = We/We_c.
///
/// Own regression on the 394 readings of the 58 gravity-free separated runs behind coefficient set 1 (r/h 0.1–10, θ 20–120°, α 45–145°): scatter 7.5°,
/// relative 0.28. It falls roughly as a square root of the Weber number, rises with wettability (through We_c) and with r/h, and never exceeds the turn α,
/// where the stream would lie along the wall.
const COEFFICIENTS: [f64; 6] = [3.231, 0.423, -0.457, 0.875, 1.026, -0.201];
/// Offset of r/h that keeps an ideally sharp edge finite: the smallest r/h of the runs.
const RADIUS_OFFSET: f64 = 0.1;
/// Relative scatter of the regression.
const RELATIVE_SCATTER: f64 = 0.28;
/// Scatter at small deflections, rad (2°: readings of the runs).
const ABSOLUTE_SCATTER: f64 = 2.0 * crate::physics::quantity::DEGREE;

/// Deflection of the stream by a wall that turns away by `turn` (rad), `safety_factor` = We/We_c. `None` below 1: the stream is attached.
///
/// `doubt` is the standard uncertainty of ln `safety_factor`; it is carried over through the regression's slope.
#[must_use]
pub fn deflection(numbers: &Numbers, turn: f64, safety_factor: f64, doubt: f64) -> Option<Deflection> {
    if safety_factor.is_nan() || safety_factor < 1.0 {
        return None;
    }
    let [c0, c1, c2, c3, c4, c5] = COEFFICIENTS;
    let exponent = c0
        + c1 * libm::log(numbers.radius_ratio + RADIUS_OFFSET)
        + c2 * libm::log(safety_factor)
        + c3 / safety_factor
        + c4 * libm::log(1.0 - libm::cos(turn))
        + c5 * libm::log(numbers.reynolds / 100.0);
    let free = libm::exp(exponent) * crate::physics::quantity::DEGREE;
    let bend = libm::tanh(free / turn);
    let angle = turn * bend;
    // dψ/dψ₀ = 1 − tanh²
    let along = (1.0 - bend * bend) * free;
    let slope = c2 - c3 / safety_factor;
    let square = |x: f64| x * x;
    let variance =
        square(ABSOLUTE_SCATTER) + square(RELATIVE_SCATTER * angle) + square(along * slope * doubt);
    Some(Deflection { angle, standard_uncertainty: variance.sqrt() })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physics::quantity::DEGREE;

    fn numbers(radius_ratio: f64) -> Numbers {
        Numbers { weber: 10.0, reynolds: 200.0, froude: 5.0, capillary: 0.01, bond: 0.1, radius_ratio }
    }

    #[test]
    fn falls_as_the_pour_gets_faster_roughly_as_a_square_root() {
        // Common practice, no source: deflection falls as the pour gets faster, roughly as a square root of the Weber number.
        let at = |s: f64| deflection(&numbers(1.0), 90.0 * DEGREE, s, 0.4).unwrap().angle;
        let exponent = libm::log(at(40.0) / at(10.0)) / libm::log(4.0);
        assert!((-0.65..-0.35).contains(&exponent), "{exponent}");
        assert!(at(1.0) > at(2.0) && at(2.0) > at(4.0));
    }

    #[test]
    fn never_beyond_the_wall_and_null_once_attached() {
        assert!(deflection(&numbers(1.0), 90.0 * DEGREE, 0.99, 0.4).is_none());
        assert!(deflection(&numbers(1.0), 90.0 * DEGREE, f64::NAN, 0.4).is_none());
        for r in [0.0, 0.1, 1.0, 1e6] {
            let d = deflection(&numbers(r), 90.0 * DEGREE, 1.0, 0.4).unwrap();
            assert!(d.angle > 0.0 && d.angle <= 90.0 * DEGREE && d.standard_uncertainty > 0.0);
        }
    }

    #[test]
    fn sharper_edges_bend_the_stream_less() {
        let at = |r: f64| deflection(&numbers(r), 90.0 * DEGREE, 3.0, 0.4).unwrap().angle;
        assert!(at(0.0) < at(0.1) && at(0.1) < at(1.0) && at(1.0) < at(3.0));
    }
}

//! The uncertainty of a question, gathered by what it moves, so that the variance of ln(safety factor) takes a few products whatever the number
//! of inputs.

use super::{
    balance::{Pair, StreamSlopes, by_film},
    case::{Primary, Shift},
};
use crate::physics::separation::closed_form::Threshold;

/// Variance that liquid and surface bring in: a quadratic form in the slopes by ln density and ln viscosity, and the variance of the angle.
///
/// An input shifts ln density by d, ln viscosity by v and ln surface tension by s at once (temperature does); ln(safety factor) has slope −1 in the last, so
/// its effect is a·d + b·v − s with slopes a and b, and the squares of all effects add up to a²Σd² + 2abΣdv + b²Σv² − 2aΣds − 2bΣvs + Σs².
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Doubt {
    density: f64,
    density_and_viscosity: f64,
    viscosity: f64,
    density_and_tension: f64,
    viscosity_and_tension: f64,
    tension: f64,
    contact_angle: f64,
}

impl Doubt {
    /// Adds one standard uncertainty, if it is of liquid or surface.
    pub fn add(&mut self, shift: &Shift) {
        let [d, v, s] = match *shift {
            Shift::Liquid(shift) => shift,
            Shift::One(Primary::Density, by) => [by, 0.0, 0.0],
            Shift::One(Primary::Viscosity, by) => [0.0, by, 0.0],
            Shift::One(Primary::SurfaceTension, by) => [0.0, 0.0, by],
            Shift::One(Primary::ContactAngle, by) => {
                self.contact_angle += by * by;
                return;
            }
            Shift::One(..) => return,
        };
        self.density += d * d;
        self.density_and_viscosity += d * v;
        self.viscosity += v * v;
        self.density_and_tension += d * s;
        self.viscosity_and_tension += v * s;
        self.tension += s * s;
    }

    /// Variance of ln(safety factor), the separation model's own left out: the sum of the squares of slope × standard uncertainty.
    #[inline(always)]
    #[must_use]
    pub fn variance(&self, t: &Threshold, edge: EdgeDoubt, stream: &StreamDoubt) -> f64 {
        let by = by_film(t);
        let by_kinematic_viscosity = by.through(stream.kinematic_viscosity);
        let a = 1.0 - t.by_ln_reynolds - by_kinematic_viscosity;
        let b = t.by_ln_reynolds + by_kinematic_viscosity;
        let squares = a * a * self.density + b * b * self.viscosity + self.tension;
        let products = a * b * self.density_and_viscosity
            - a * self.density_and_tension
            - b * self.viscosity_and_tension;
        squares
            + 2.0 * products
            + t.by_contact_angle * t.by_contact_angle * self.contact_angle
            + t.by_turn * t.by_turn * edge.turn
            + t.by_ln_radius_ratio * t.by_ln_radius_ratio * edge.radius
            + stream.variance(by)
    }
}

/// Variances of the turn (rad²) and of ln r.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct EdgeDoubt {
    /// Of the turn.
    pub turn: f64,
    /// Of ln r; none at an ideally sharp edge, where nothing answers to ln r.
    pub radius: f64,
}

impl EdgeDoubt {
    /// Adds one standard uncertainty, if it is of the edge. `radius`: edge radius, m.
    pub fn add(&mut self, shift: &Shift, radius: f64) {
        match *shift {
            Shift::One(Primary::Turn, by) => self.turn += by * by,
            Shift::One(Primary::EdgeRadius, by) if radius > 0.0 => {
                self.radius += (by / radius) * (by / radius);
            }
            _ => {}
        }
    }
}

/// Covariance of ln thickness and ln speed that the uncertain inputs of the stream make.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StreamDoubt {
    thickness: f64,
    speed: f64,
    both: f64,
    kinematic_viscosity: Pair,
}

impl StreamDoubt {
    /// No doubt yet of a stream with these slopes.
    #[must_use]
    pub const fn new(slopes: &StreamSlopes) -> Self {
        Self { thickness: 0.0, speed: 0.0, both: 0.0, kinematic_viscosity: slopes.kinematic_viscosity }
    }

    /// As numbers, for many streams side by side.
    #[must_use]
    pub const fn to_array(&self) -> [f64; 5] {
        let Pair { thickness, speed } = self.kinematic_viscosity;
        [self.thickness, self.speed, self.both, thickness, speed]
    }

    /// From the numbers of [`StreamDoubt::to_array`].
    #[inline(always)]
    #[must_use]
    pub const fn from_array(numbers: [f64; 5]) -> Self {
        let [thickness, speed, both, by_viscosity, speed_by_viscosity] = numbers;
        let kinematic_viscosity = Pair { thickness: by_viscosity, speed: speed_by_viscosity };
        Self { thickness, speed, both, kinematic_viscosity }
    }

    /// Adds one standard uncertainty, if it is of the stream.
    pub fn add(&mut self, shift: &Shift, slopes: &StreamSlopes) {
        if let Shift::One(primary, by) = *shift {
            let change = slopes.of_primary(primary);
            let (thickness, speed) = (change.thickness * by, change.speed * by);
            self.thickness += thickness * thickness;
            self.speed += speed * speed;
            self.both += thickness * speed;
        }
    }

    #[inline(always)]
    fn variance(&self, by: Pair) -> f64 {
        by.thickness * by.thickness * self.thickness
            + 2.0 * by.thickness * by.speed * self.both
            + by.speed * by.speed * self.speed
    }
}

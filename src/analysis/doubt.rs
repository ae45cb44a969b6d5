//! The uncertainty of a question, gathered by what it moves, so that the variance of ln(safety factor) takes a few products whatever the number
//! of inputs.

use arrayvec::ArrayVec;

use super::{
    balance::{Pair, StreamSlopes, by_film},
    case::{Primary, Shift},
};
use crate::physics::separation::closed_form::Threshold;

/// The most inputs that shift the liquid as a whole: temperature and every component there is.
const MOST_LIQUID: usize = 7;

/// Variances of what the threshold or the liquid's properties answer to, in the units of [`Primary`].
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Doubt {
    density: f64,
    viscosity: f64,
    surface_tension: f64,
    contact_angle: f64,
    /// Shifts of ln density, ln viscosity and ln surface tension together.
    liquid: ArrayVec<[f64; 3], MOST_LIQUID>,
}

impl Doubt {
    /// Adds one standard uncertainty, if it is of liquid or surface.
    pub fn add(&mut self, shift: &Shift) {
        match *shift {
            Shift::Liquid(shift) => {
                // There are places for as many as a liquid has conditions.
                let _ = self.liquid.try_push(shift);
            }
            Shift::One(primary, by) => {
                let square = by * by;
                match primary {
                    Primary::Density => self.density += square,
                    Primary::Viscosity => self.viscosity += square,
                    Primary::SurfaceTension => self.surface_tension += square,
                    Primary::ContactAngle => self.contact_angle += square,
                    Primary::Turn
                    | Primary::EdgeRadius
                    | Primary::Section
                    | Primary::Slope
                    | Primary::RunLength
                    | Primary::Flow
                    | Primary::Thickness
                    | Primary::Equivalence => {}
                }
            }
        }
    }

    /// Variance of ln(safety factor), the separation model's own left out: the sum of the squares of slope × standard uncertainty.
    #[inline]
    #[must_use]
    pub fn variance(&self, t: &Threshold, edge: EdgeDoubt, stream: &StreamDoubt) -> f64 {
        let by = by_film(t);
        let by_kinematic_viscosity = by.through(stream.kinematic_viscosity);
        let by_density = 1.0 - t.by_ln_reynolds - by_kinematic_viscosity;
        let by_viscosity = t.by_ln_reynolds + by_kinematic_viscosity;
        let mut sum = by_density * by_density * self.density
            + by_viscosity * by_viscosity * self.viscosity
            + self.surface_tension
            + t.by_contact_angle * t.by_contact_angle * self.contact_angle
            + t.by_turn * t.by_turn * edge.turn
            + t.by_ln_radius_ratio * t.by_ln_radius_ratio * edge.radius
            + stream.variance(by);
        for [density, viscosity, tension] in &self.liquid {
            let effect = by_density * density + by_viscosity * viscosity - tension;
            sum += effect * effect;
        }
        sum
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

    fn variance(&self, by: Pair) -> f64 {
        by.thickness * by.thickness * self.thickness
            + 2.0 * by.thickness * by.speed * self.both
            + by.speed * by.speed * self.speed
    }
}

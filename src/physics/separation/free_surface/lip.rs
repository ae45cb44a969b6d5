//! The lip on the lattice: a level floor, a rounded edge, an outer wall. The floor lies along x; a slope turns gravity instead.

use core::f64::consts::PI;

/// Section of a lip, lengths in cells. The body lies below the floor and behind the outer wall.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Lip {
    /// Column where the arc starts.
    pub arc_start: f64,
    /// Height of the floor.
    pub floor: f64,
    /// Radius of the edge.
    pub radius: f64,
    /// Turn from the floor to the outer wall, rad.
    pub turn: f64,
}

impl Lip {
    /// Point relative to the centre of the arc.
    fn off_centre(&self, x: f64, y: f64) -> (f64, f64) {
        (x - self.arc_start, y - (self.floor - self.radius))
    }

    /// Signed distance from the surface, positive outside the body.
    #[must_use]
    pub fn distance(&self, x: f64, y: f64) -> f64 {
        let (dx, dy) = self.off_centre(x, y);
        let around = libm::atan2(dx, dy);
        if (0.0..=self.turn).contains(&around) {
            return libm::hypot(dx, dy) - self.radius;
        }
        let (sine, cosine) = libm::sincos(self.turn);
        (y - self.floor).max(sine * dx + cosine * dy - self.radius)
    }

    /// Length along the surface from the start of the arc, positive downstream.
    #[must_use]
    pub fn along(&self, x: f64, y: f64) -> f64 {
        let (dx, dy) = self.off_centre(x, y);
        let around = libm::atan2(dx, dy);
        let (sine, cosine) = libm::sincos(self.turn);
        if (0.0..=self.turn).contains(&around) {
            return around * self.radius;
        }
        // Beyond the arc: nearer the outer wall or the floor?
        let below_floor = y - self.floor;
        let behind_wall = sine * dx + cosine * dy - self.radius;
        if behind_wall >= below_floor || (self.turn > 0.75 * PI && dy < 0.0) {
            self.arc_length() + (cosine * dx - sine * dy)
        } else {
            dx
        }
    }

    /// Length of the arc.
    #[must_use]
    pub fn arc_length(&self) -> f64 {
        self.radius * self.turn
    }

    /// Distance of a point from the centre of the arc.
    #[must_use]
    pub fn reach(&self, x: f64, y: f64) -> f64 {
        let (dx, dy) = self.off_centre(x, y);
        libm::hypot(dx, dy)
    }
}

#[cfg(test)]
mod tests {
    use super::Lip;
    use core::f64::consts::PI;

    #[test]
    fn distance_and_arc_of_a_right_angle() {
        let lip = Lip { arc_start: 20.0, floor: 30.0, radius: 5.0, turn: PI / 2.0 };
        assert!((lip.distance(10.0, 33.0) - 3.0).abs() < 1e-12);
        assert!((lip.distance(27.0, 10.0) - 2.0).abs() < 1e-12);
        assert!((lip.distance(20.0 + 6.0, 25.0 + 6.0) - (libm::sqrt(72.0) - 5.0)).abs() < 1e-12);
        assert!(lip.distance(22.0, 26.0) < 0.0);
        assert!((lip.along(12.0, 30.5) + 8.0).abs() < 1e-12);
        assert!((lip.along(25.5, 15.0) - (lip.arc_length() + 10.0)).abs() < 1e-12);
    }

    #[test]
    fn a_turn_of_half_a_circle_is_a_strip() {
        let lip = Lip { arc_start: 20.0, floor: 30.0, radius: 5.0, turn: PI };
        assert!((lip.distance(10.0, 18.0) - 2.0).abs() < 1e-9);
        assert!((lip.distance(10.0, 25.0) + 5.0).abs() < 1e-9);
        assert!((lip.along(10.0, 19.0) - (lip.arc_length() + 10.0)).abs() < 1e-9);
    }
}

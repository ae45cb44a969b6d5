//! A box.

use super::{Cut, Plane, VesselFault};

/// A box, m: length along the pour, width across it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Cuboid {
    pub length: f64,
    pub width: f64,
    pub height: f64,
}

impl Cuboid {
    pub fn new(length: f64, width: f64, height: f64) -> Result<Self, VesselFault> {
        for (value, what) in [(length, "the length"), (width, "the width"), (height, "the height")] {
            if value.is_nan() || value <= 0.0 {
                return Err(VesselFault::NotPositive { what });
            }
        }
        Ok(Self { length, width, height })
    }

    /// Volume below a height of the upright box, and its area there.
    pub fn below(&self, height: f64) -> (f64, f64) {
        let area = self.length * self.width;
        let inside = height > 0.0 && height < self.height;
        (area * height.clamp(0.0, self.height), if inside { area } else { 0.0 })
    }

    /// Exact: the liquid's outline in the plane of the pour is a polygon.
    pub fn cut(&self, plane: &Plane) -> Cut {
        let half = 0.5 * self.length;
        let mut cut = Cut::default();
        // Heights at which the plane passes the two walls.
        let slope = plane.cosine / plane.sine;
        let start = plane.x_at(0.0);
        let mut heights = [0.0, self.height, self.height, self.height];
        if slope != 0.0 {
            let passes = |x: f64| ((x - start) / slope).clamp(0.0, self.height);
            let (a, b) = (passes(-half), passes(half));
            heights = [0.0, a.min(b), a.max(b), self.height];
        }
        for pair in heights.windows(2) {
            let (from, to) = (pair[0], pair[1]);
            let rise = to - from;
            if rise <= 0.0 {
                continue;
            }
            let middle = 0.5 * (from + to);
            let x = plane.x_at(middle);
            if x <= -half {
                cut.volume += rise * self.length * self.width;
            } else if x < half {
                let surface = self.width * rise / plane.sine;
                cut.add(&Cut {
                    volume: rise * (half - x) * self.width,
                    surface,
                    moment: surface * plane.lever(x, middle),
                });
            }
        }
        cut
    }
}

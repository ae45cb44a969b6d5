//! The vessel cut open in the plane of the pour: for drawings.

use super::{Shape, Vessel};

/// The vessel and its liquid cut open in the plane of the pour, at one tilt. World axes: x towards the pour, y up, m, from the middle of the base.
#[derive(Debug, Clone, PartialEq)]
pub struct Outline {
    /// The wall, from the brim beside the lip round the base to the far brim.
    pub wall: Vec<[f64; 2]>,
    /// The liquid, a closed polygon; empty where there is none.
    pub liquid: Vec<[f64; 2]>,
    /// The lip.
    pub lip: [f64; 2],
    /// Height of the free surface.
    pub level: f64,
}

impl Vessel {
    /// The vessel cut open, at this tilt (rad) and head (m).
    #[must_use]
    pub fn outline(&self, tilt: f64, head: f64) -> Outline {
        let (sine, cosine) = libm::sincos(tilt);
        let world = |[x, z]: [f64; 2]| [x * cosine + z * sine, z * cosine - x * sine];
        let half: Vec<[f64; 2]> = match &self.shape {
            Shape::Revolved(body) => body.profile().iter().map(|[z, r]| [*r, *z]).collect(),
            Shape::Cuboid(body) => vec![[0.5 * body.length, 0.0], [0.5 * body.length, body.height]],
        };
        let near = half.iter().rev().copied();
        let far = half.iter().map(|[x, z]| [-x, *z]);
        let wall: Vec<[f64; 2]> = near.chain(far).map(world).collect();
        let level = self.lip_level(tilt) + head;
        let liquid = below(&wall, level);
        Outline { wall, liquid, lip: world([self.lip.radius, self.lip.height]), level }
    }
}

/// The part of a closed polygon below a level (Sutherland & Hodgman 1974).
fn below(polygon: &[[f64; 2]], level: f64) -> Vec<[f64; 2]> {
    let mut kept = Vec::with_capacity(polygon.len() + 2);
    for (i, &to) in polygon.iter().enumerate() {
        let from = polygon[if i == 0 { polygon.len() - 1 } else { i - 1 }];
        if (from[1] > level) != (to[1] > level) {
            let share = (level - from[1]) / (to[1] - from[1]);
            kept.push([from[0] + share * (to[0] - from[0]), level]);
        }
        if to[1] <= level {
            kept.push(to);
        }
    }
    kept
}

//! Liquid in a tilted vessel: how much is below a level plane, how large its free surface is, how high it stands above the lip.
//!
//! Body axes: z up the vessel's axis from its base, x towards the lip. Tilting by τ turns the lip downwards; the world height of a body point is z cos τ − x sin τ.
//! The free surface is level: the plane of world height c = z_l cos τ − x_l sin τ + h with the lip at (x_l, z_l) and the head h above it. Everything here is
//! hydrostatics in a vented vessel; the volume of the spout is neglected, and liquid below the plane counts as connected to the lip.
//!
//! Analytic: ∂V/∂h = S, the area of the free surface, and ∂V/∂τ at fixed head = −S x_b, where x_b is the horizontal distance from the lip back to the centroid
//! of the free surface.

mod cuboid;
mod outline;
mod revolved;

use core::f64::consts::PI;

use cuboid::Cuboid;
pub use outline::Outline;
use revolved::Revolved;

use super::GRAVITY;
use super::numerics::{Bracket, find_root};

/// Sine of the tilt below which the vessel counts as upright (or upside down): the free surface is then a horizontal section.
const UPRIGHT: f64 = 1e-9;
/// A Newton step on the head below which the next one would be lost in rounding, m.
const LAST_STEP: f64 = 1e-7;

/// Where the liquid leaves a vessel, in body axes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LipPosition {
    /// Distance from the axis, m.
    pub radius: f64,
    /// Height above the base, m.
    pub height: f64,
}

/// Why there is no such vessel.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum VesselFault {
    /// A length is not positive.
    #[error("{what} must be positive")]
    NotPositive {
        /// Which length.
        what: &'static str,
    },
    /// Fewer than two points.
    #[error("a profile needs two points at least")]
    TooFewPoints,
    /// The first point is not at the base.
    #[error("a profile starts at the base, height 0")]
    NotAtBase,
    /// A point lies below the one before it.
    #[error("the profile goes backwards: its heights must not fall")]
    Backwards {
        /// Index of the point.
        index: usize,
    },
    /// A third point at one height, or a point given twice.
    #[error(
        "the profile crosses itself: a flat step has two points of different radius at one height, no more"
    )]
    CrossesItself {
        /// Index of the point.
        index: usize,
    },
    /// The profile closes above its base.
    #[error("the profile closes on its axis above the base: there is no way out")]
    Closed {
        /// Index of the point.
        index: usize,
    },
    /// The lip would be inside the vessel.
    #[error("the lip lies inside the vessel: at its height the wall is {wall} m from the axis")]
    LipInside {
        /// Distance of the wall from the axis at the lip's height, m.
        wall: f64,
    },
}

/// What a level plane cuts off: the liquid below it.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Cut {
    /// Volume V below the plane, m³.
    pub volume: f64,
    /// Area S of the free surface, m².
    pub surface: f64,
    /// S x_b: first moment of the free surface about the lip, m³; x_b is the horizontal distance from the lip back to the centroid.
    pub moment: f64,
}

impl Cut {
    /// x_b, m.
    #[must_use]
    pub fn centroid_distance(&self) -> f64 {
        self.moment / self.surface
    }

    fn add(&mut self, other: &Self) {
        self.volume += other.volume;
        self.surface += other.surface;
        self.moment += other.moment;
    }
}

/// The level plane in body axes: z cos τ − x sin τ = c, and the lip that levers are measured from.
#[derive(Debug, Clone, Copy)]
struct Plane {
    sine: f64,
    cosine: f64,
    /// World height c, m.
    level: f64,
    lip: LipPosition,
}

impl Plane {
    /// Body x of the plane at body height `z`, m.
    fn x_at(&self, z: f64) -> f64 {
        (z * self.cosine - self.level) / self.sine
    }

    /// Horizontal distance back from the lip of the plane's point at (x, z), m.
    fn lever(&self, x: f64, z: f64) -> f64 {
        (self.lip.radius - x) * self.cosine + (self.lip.height - z) * self.sine
    }
}

#[derive(Debug, Clone, PartialEq)]
enum Shape {
    Revolved(Box<Revolved>),
    Cuboid(Cuboid),
}

/// A vessel with its lip.
#[derive(Debug, Clone, PartialEq)]
pub struct Vessel {
    shape: Shape,
    lip: LipPosition,
}

impl Vessel {
    /// A cylinder, m.
    ///
    /// # Errors
    /// A length that is not positive.
    pub fn cylinder(diameter: f64, height: f64) -> Result<Self, VesselFault> {
        Self::cone(diameter, diameter, height)
    }

    /// A cone or frustum, m; one of its diameters may be 0, the top's may not.
    ///
    /// # Errors
    /// A length that is not positive.
    pub fn cone(top_diameter: f64, bottom_diameter: f64, height: f64) -> Result<Self, VesselFault> {
        if top_diameter.is_nan() || top_diameter <= 0.0 {
            return Err(VesselFault::NotPositive { what: "the diameter at the top" });
        }
        Self::revolved(&[[0.0, 0.5 * bottom_diameter], [height, 0.5 * top_diameter]])
    }

    /// A body of revolution by its profile, points [height, radius] from the base up to the brim, m, straight between them. The first point is at height 0;
    /// two points may share a height (a flat step).
    ///
    /// # Errors
    /// What is wrong with the profile.
    pub fn revolved(profile: &[[f64; 2]]) -> Result<Self, VesselFault> {
        let body = Revolved::new(profile)?;
        let lip = LipPosition { radius: body.brim_radius(), height: body.height() };
        Ok(Self { shape: Shape::Revolved(Box::new(body)), lip })
    }

    /// A box, m: `length` along the pour, `width` across it.
    ///
    /// # Errors
    /// A length that is not positive.
    pub fn cuboid(length: f64, width: f64, height: f64) -> Result<Self, VesselFault> {
        let body = Cuboid::new(length, width, height)?;
        let lip = LipPosition { radius: 0.5 * length, height };
        Ok(Self { shape: Shape::Cuboid(body), lip })
    }

    /// The same with its lip elsewhere than on the brim: a spout that stands out, or a spout below the brim.
    ///
    /// # Errors
    /// A lip inside the vessel.
    pub fn with_lip(mut self, lip: LipPosition) -> Result<Self, VesselFault> {
        if lip.height < self.height() {
            let wall = self.half_width_at(lip.height);
            // Lengths come in millimetres; a lip on the wall may be off by rounding.
            if lip.radius < wall - 1e-9 {
                return Err(VesselFault::LipInside { wall });
            }
        }
        self.lip = lip;
        Ok(self)
    }

    /// The lip.
    #[must_use]
    pub fn lip(&self) -> LipPosition {
        self.lip
    }

    /// Height of the brim above the base, m.
    #[must_use]
    pub fn height(&self) -> f64 {
        match &self.shape {
            Shape::Revolved(body) => body.height(),
            Shape::Cuboid(body) => body.height,
        }
    }

    /// Distance of the wall from the axis, towards the lip, at a height above the base, m.
    #[must_use]
    pub fn half_width_at(&self, height: f64) -> f64 {
        match &self.shape {
            Shape::Revolved(body) => body.radius_at(height),
            Shape::Cuboid(body) => 0.5 * body.length,
        }
    }

    /// Volume up to the brim of the upright vessel, m³.
    #[must_use]
    pub fn capacity(&self) -> f64 {
        match &self.shape {
            Shape::Revolved(body) => body.below(body.height()).0,
            Shape::Cuboid(body) => body.length * body.width * body.height,
        }
    }

    /// World height of the lip over the base's middle at this tilt (rad), m.
    #[must_use]
    pub fn lip_level(&self, tilt: f64) -> f64 {
        let (sine, cosine) = libm::sincos(tilt);
        self.lip.height * cosine - self.lip.radius * sine
    }

    /// What the level plane at `head` (m, above the lip; negative: below it) cuts off at `tilt` (rad, 0 to π).
    #[must_use]
    pub fn cut(&self, tilt: f64, head: f64) -> Cut {
        let plane = self.plane(tilt, head);
        if plane.sine < UPRIGHT {
            return self.upright_cut(&plane);
        }
        match &self.shape {
            Shape::Revolved(body) => body.cut(&plane),
            Shape::Cuboid(body) => body.cut(&plane),
        }
    }

    fn plane(&self, tilt: f64, head: f64) -> Plane {
        let (sine, cosine) = libm::sincos(tilt);
        let level = self.lip.height * cosine - self.lip.radius * sine + head;
        Plane { sine, cosine, level, lip: self.lip }
    }

    /// Upright, or upside down: the plane is a horizontal section.
    fn upright_cut(&self, plane: &Plane) -> Cut {
        let (below, area) = match &self.shape {
            Shape::Revolved(body) => body.below(plane.level * plane.cosine),
            Shape::Cuboid(body) => body.below(plane.level * plane.cosine),
        };
        let volume = if plane.cosine > 0.0 { below } else { self.capacity() - below };
        Cut { volume, surface: area, moment: area * plane.lip.radius * plane.cosine }
    }

    /// World heights of the lowest and the highest point of the body at this tilt, relative to the lip: all heads at which there is a free surface, m.
    fn reach(&self, tilt: f64) -> (f64, f64) {
        let (sine, cosine) = libm::sincos(tilt);
        let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
        let mut point = |half_width: f64, z: f64| {
            low = low.min(z * cosine - half_width * sine);
            high = high.max(z * cosine + half_width * sine);
        };
        match &self.shape {
            Shape::Revolved(body) => body.profile().iter().for_each(|[z, r]| point(*r, *z)),
            Shape::Cuboid(body) => {
                point(0.5 * body.length, 0.0);
                point(0.5 * body.length, body.height);
            }
        }
        let lip = self.lip_level(tilt);
        (low - lip, high - lip)
    }

    /// Head above the lip (m, negative below it) at which `volume` (m³, up to the capacity) is in the vessel at `tilt` (rad), and the cut there.
    ///
    /// Newton with slope S from `guess`, inside a bracket. The cut is that of the last step but one, whose head is within 0.1 µm.
    #[must_use]
    pub fn head(&self, tilt: f64, volume: f64, guess: f64) -> (f64, Cut) {
        let (mut low, mut high) = self.reach(tilt);
        let mut head = if guess > low && guess < high { guess } else { 0.5 * (low + high) };
        let mut cut = self.cut(tilt, head);
        for _ in 0..80 {
            let excess = cut.volume - volume;
            if excess > 0.0 {
                high = head;
            } else {
                low = head;
            }
            let newton = head - excess / cut.surface;
            if (newton - head).abs() < LAST_STEP && newton >= low && newton <= high {
                return (newton, cut);
            }
            let inside = newton > low && newton < high;
            head = if inside { newton } else { 0.5 * (low + high) };
            if high - low < 1e-15 {
                break;
            }
            cut = self.cut(tilt, head);
        }
        (head, cut)
    }

    /// Least tilt, rad, at which `volume` (m³) stands `head` (m) above the lip; `None` if it never does up to upside down.
    #[must_use]
    pub fn tilt_reaching(&self, volume: f64, head: f64) -> Option<f64> {
        let surplus = |tilt: f64| volume - self.cut(tilt, head).volume;
        let step = PI / 180.0;
        let mut before = (0.0, surplus(0.0));
        if before.1 >= 0.0 {
            return Some(0.0);
        }
        for i in 1..=180 {
            let tilt = step * f64::from(i);
            let now = (tilt, surplus(tilt));
            if now.1 >= 0.0 {
                return find_root(surplus, Bracket { low: before, high: now }, 1e-12);
            }
            before = now;
        }
        None
    }

    /// How far the brim beside the lip stands above the lip (m, may be negative) at this tilt (rad); `half_mouth` (m): half the width that the lip takes of
    /// the brim. `None` when the lip takes the whole brim.
    #[must_use]
    pub fn brim_above_lip(&self, tilt: f64, half_mouth: f64) -> Option<f64> {
        let (sine, cosine) = libm::sincos(tilt);
        let forward = match &self.shape {
            Shape::Revolved(body) => {
                let radius = body.brim_radius();
                if half_mouth >= radius {
                    return None;
                }
                (radius * radius - half_mouth * half_mouth).sqrt()
            }
            Shape::Cuboid(body) if 2.0 * half_mouth >= body.width - 1e-9 => return None,
            Shape::Cuboid(body) => 0.5 * body.length,
        };
        Some(self.height() * cosine - forward * sine - self.lip_level(tilt))
    }

    /// How far the highest point of the brim stands above the lip at this tilt (rad), m: above that level no air gets in.
    #[must_use]
    pub fn brim_top_above_lip(&self, tilt: f64) -> f64 {
        let (sine, cosine) = libm::sincos(tilt);
        self.height() * cosine + self.half_width_at(self.height()) * sine - self.lip_level(tilt)
    }

    /// Period of the first sloshing mode along the pour, s, for this volume (m³) in the upright vessel.
    ///
    /// 2π/√(g k tanh(k d)) with the depth d; k = 1.841/R in a round vessel (first root of J₁′), π/length in a box (Lamb 1932, *Hydrodynamics*, §§ 190, 257; linear, no
    /// damping; walls taken as vertical at the level).
    #[must_use]
    pub fn slosh_period(&self, volume: f64) -> f64 {
        let depth = self.head(0.0, volume, 0.0).0 + self.lip.height;
        let wavenumber = match &self.shape {
            Shape::Revolved(body) => 1.841_183_8 / body.radius_at(depth),
            Shape::Cuboid(body) => PI / body.length,
        };
        2.0 * PI / (GRAVITY * wavenumber * libm::tanh(wavenumber * depth)).sqrt()
    }

    /// Area of the wall, m², between two levels of the upright vessel, and the mean length down it, m.
    #[must_use]
    pub fn wall_between(&self, low: f64, high: f64) -> (f64, f64) {
        match &self.shape {
            Shape::Revolved(body) => body.wall_between(low, high),
            Shape::Cuboid(body) => (2.0 * (body.length + body.width) * (high - low), high - low),
        }
    }
}

#[cfg(test)]
mod tests;

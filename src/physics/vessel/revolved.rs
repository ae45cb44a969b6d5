//! A body of revolution: a stack of cones.
//!
//! Each cone piece is split where the plane passes its wall, x₀(z) = ± r(z). Between, the liquid's section at a height is a segment of a disc, and the free surface's
//! chord is 2√(r² − x₀²); their integrals over z = mid − half·cos t, t from 0 to π, by Gauss–Legendre give volume, area and moment (the substitution takes the
//! square roots' ends away). Nearly tangent planes are the worst: volumes good to 1e-9 there, areas to 1e-6. (Sums over the faces seen from a cone's apex would be
//! exact in principle, but a nearly straight wall has its apex far off and magnifies whatever error the area has.)

use core::f64::consts::PI;

use super::{Cut, Plane, VesselFault};

/// Nodes on [−1, 1] of the 16-point rule, positive half, with weights (Abramowitz & Stegun 1964, table 25.4).
const HALF_RULE: [(f64, f64); 8] = [
    (0.095_012_509_837_637_44, 0.189_450_610_455_068_5),
    (0.281_603_550_779_258_9, 0.182_603_415_044_923_6),
    (0.458_016_777_657_227_4, 0.169_156_519_395_002_5),
    (0.617_876_244_402_643_7, 0.149_595_988_816_576_7),
    (0.755_404_408_355_003_0, 0.124_628_971_255_533_9),
    (0.865_631_202_387_831_7, 0.095_158_511_682_492_8),
    (0.944_575_023_073_232_6, 0.062_253_523_938_647_9),
    (0.989_400_934_991_649_9, 0.027_152_459_411_754_1),
];
const NODES: usize = 16;

/// A body of revolution.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Revolved {
    /// [height, radius], m, from the base up.
    profile: Vec<[f64; 2]>,
    /// −cos t and half π sin t·w of the rule in t.
    rule: [(f64, f64); NODES],
}

/// A piece of a cone between two heights.
#[derive(Clone, Copy)]
struct Piece {
    from: f64,
    to: f64,
    /// Radius at `from`.
    radius: f64,
    /// dr/dz.
    slope: f64,
}

impl Piece {
    fn radius_at(&self, z: f64) -> f64 {
        self.radius + self.slope * (z - self.from)
    }

    fn frustum(&self) -> f64 {
        let (a, b) = (self.radius, self.radius_at(self.to));
        PI * (self.to - self.from) * (a * a + a * b + b * b) / 3.0
    }
}

impl Revolved {
    pub fn new(profile: &[[f64; 2]]) -> Result<Self, VesselFault> {
        let (Some(first), true) = (profile.first(), profile.len() >= 2) else {
            return Err(VesselFault::TooFewPoints);
        };
        if first[0] != 0.0 {
            return Err(VesselFault::NotAtBase);
        }
        for (index, [height, radius]) in profile.iter().copied().enumerate() {
            if !(height.is_finite() && radius.is_finite() && radius >= 0.0) {
                return Err(VesselFault::NotPositive { what: "every radius" });
            }
            if index == 0 {
                continue;
            }
            if radius == 0.0 {
                return Err(VesselFault::Closed { index });
            }
            let before = profile[index - 1];
            if height < before[0] {
                return Err(VesselFault::Backwards { index });
            }
            let level = height == before[0];
            if level && (radius == before[1] || (index >= 2 && profile[index - 2][0] == height)) {
                return Err(VesselFault::CrossesItself { index });
            }
        }
        let mut rule = [(0.0, 0.0); NODES];
        for (i, (node, weight)) in HALF_RULE.iter().enumerate() {
            for (place, sign) in [(2 * i, 1.0), (2 * i + 1, -1.0)] {
                let (sine, cosine) = libm::sincos(0.5 * PI * (1.0 + sign * node));
                rule[place] = (-cosine, 0.5 * PI * sine * weight);
            }
        }
        let body = Self { profile: profile.to_vec(), rule };
        if body.height() <= 0.0 {
            return Err(VesselFault::NotPositive { what: "the height" });
        }
        Ok(body)
    }

    pub fn profile(&self) -> &[[f64; 2]] {
        &self.profile
    }

    pub fn height(&self) -> f64 {
        self.profile.last().map_or(0.0, |p| p[0])
    }

    pub fn brim_radius(&self) -> f64 {
        self.profile.last().map_or(0.0, |p| p[1])
    }

    fn pieces(&self) -> impl Iterator<Item = Piece> + '_ {
        self.profile.windows(2).filter_map(|pair| {
            let ([from, radius], [to, upper]) = (pair[0], pair[1]);
            (to > from).then(|| Piece { from, to, radius, slope: (upper - radius) / (to - from) })
        })
    }

    /// Radius at a height; that of the base below it, of the brim above it. At a step the wider.
    pub fn radius_at(&self, height: f64) -> f64 {
        let mut widest: Option<f64> = None;
        for piece in self.pieces() {
            if height >= piece.from && height <= piece.to {
                widest = Some(widest.unwrap_or(0.0).max(piece.radius_at(height)));
            }
        }
        let end = if height < 0.0 { self.profile.first().map_or(0.0, |p| p[1]) } else { self.brim_radius() };
        widest.unwrap_or(end)
    }

    /// Volume below a height of the upright body, and its area there.
    pub fn below(&self, height: f64) -> (f64, f64) {
        let mut volume = 0.0;
        let mut area = 0.0;
        for piece in self.pieces() {
            if height > piece.from {
                let part = Piece { to: height.min(piece.to), ..piece };
                volume += part.frustum();
                if height <= piece.to {
                    let radius = piece.radius_at(height);
                    area = PI * radius * radius;
                }
            }
        }
        (volume, area)
    }

    /// Area of the wall between two heights, and the length down it.
    pub fn wall_between(&self, low: f64, high: f64) -> (f64, f64) {
        let (mut area, mut length) = (0.0, 0.0);
        for piece in self.pieces() {
            let (from, to) = (piece.from.max(low), piece.to.min(high));
            if to > from {
                let down = libm::hypot(to - from, piece.slope * (to - from));
                area += PI * (piece.radius_at(from) + piece.radius_at(to)) * down;
                length += down;
            }
        }
        (area, length)
    }

    pub fn cut(&self, plane: &Plane) -> Cut {
        let slope = plane.cosine / plane.sine;
        let mut cut = Cut::default();
        for piece in self.pieces() {
            let rise = piece.to - piece.from;
            let x = plane.x_at(piece.from);
            // x₀ + m ζ = ± (r + k ζ)
            let pass = |side: f64| {
                let zeta = (side * piece.radius - x) / (slope - side * piece.slope);
                if zeta > 0.0 && zeta < rise { zeta } else { 0.0 }
            };
            let (a, b) = (pass(1.0), pass(-1.0));
            let mut from = piece.from;
            for to in [piece.from + a.min(b), piece.from + a.max(b), piece.to] {
                if to > from {
                    let part = Piece { from, to, radius: piece.radius_at(from), slope: piece.slope };
                    self.add_part(&part, plane, &mut cut);
                    from = to;
                }
            }
        }
        cut
    }

    /// A part of a piece that the plane either passes all along, or leaves wet or dry.
    fn add_part(&self, part: &Piece, plane: &Plane, cut: &mut Cut) {
        let middle = 0.5 * (part.from + part.to);
        let (x, radius) = (plane.x_at(middle), part.radius_at(middle));
        if x <= -radius {
            cut.volume += part.frustum();
        }
        if x.abs() >= radius {
            return;
        }
        let half = 0.5 * (part.to - part.from);
        let (mut surface, mut moment, mut volume) = (0.0, 0.0, 0.0);
        for (node, weight) in &self.rule {
            let z = middle + half * node;
            let (x, radius) = (plane.x_at(z), part.radius_at(z));
            let root = ((radius - x) * (radius + x)).max(0.0).sqrt();
            let chord = weight * root;
            surface += chord;
            moment += chord * plane.lever(x, z);
            volume += weight * segment(radius, x, root);
        }
        let scale = 2.0 * half / plane.sine;
        cut.add(&Cut { volume: volume * half, surface: surface * scale, moment: moment * scale });
    }
}

/// Area of the part of a disc beyond a chord at distance `x` from its centre, m²; `root`: half the chord.
fn segment(radius: f64, x: f64, root: f64) -> f64 {
    let ratio = (x / radius).clamp(-1.0, 1.0);
    radius * radius * libm::acos(ratio) - x * root
}

//! Cross-sections of a lip, seen against the stream, and their geometry.

use core::f64::consts::{FRAC_PI_4, PI};

use crate::physics::numerics::{Bracket, find_root};

/// Cross-section of the lip.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Section {
    /// Wide straight lip of this width, m. Side-wall friction is neglected.
    Sheet {
        /// Width, m.
        width: f64,
    },
    /// Pinched lip: a V with this full included angle, rad.
    Vee {
        /// Full included angle, rad.
        included_angle: f64,
    },
    /// Open half-round channel of this diameter, m; above half depth its walls go on vertically.
    Trough {
        /// Diameter, m.
        diameter: f64,
    },
    /// Closed round spout of this bore, m.
    Tube {
        /// Bore, m.
        bore: f64,
    },
}

/// What a stream of some depth wets of a section.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wetted {
    /// Flow area A, m².
    pub area: f64,
    /// Width of the free surface T, m; 0 in a full tube.
    pub top_width: f64,
    /// Length of wetted wall P, m.
    pub perimeter: f64,
}

impl Wetted {
    /// Hydraulic depth A/T, m (infinite in a full tube).
    #[must_use]
    pub fn hydraulic_depth(&self) -> f64 {
        self.area / self.top_width
    }

    /// Hydraulic radius A/P, m.
    #[must_use]
    pub fn hydraulic_radius(&self) -> f64 {
        self.area / self.perimeter
    }
}

impl Section {
    /// What a stream of depth `depth` (m, normal to the floor, above the lowest point) wets.
    ///
    /// Sheet A = Wy; vee, half-angle ϑ, A = y² tan ϑ; circle of half-angle φ = 2 asin √(y/D), A = D²(φ − sin
    /// φ cos φ)/4, T = D sin φ, P = Dφ; trough above half depth A = πD²/8 + D(y − D/2), T = D. A depth beyond
    /// a tube's bore is the full bore.
    #[must_use]
    pub fn wetted(&self, depth: f64) -> Wetted {
        match *self {
            Self::Sheet { width } => Wetted { area: width * depth, top_width: width, perimeter: width },
            Self::Vee { included_angle } => {
                let tangent = libm::tan(0.5 * included_angle);
                Wetted {
                    area: tangent * depth * depth,
                    top_width: 2.0 * tangent * depth,
                    perimeter: 2.0 * depth * (1.0 + tangent * tangent).sqrt(),
                }
            }
            Self::Trough { diameter } if depth > 0.5 * diameter => {
                let wall = depth - 0.5 * diameter;
                Wetted {
                    area: 0.125 * PI * diameter * diameter + diameter * wall,
                    top_width: diameter,
                    perimeter: 0.5 * PI * diameter + 2.0 * wall,
                }
            }
            Self::Trough { diameter } => circle(diameter, depth),
            Self::Tube { bore } => circle(bore, depth.min(bore)),
        }
    }

    /// Flow area A, m², at a depth in m.
    #[must_use]
    pub fn area(&self, depth: f64) -> f64 {
        self.wetted(depth).area
    }

    /// Width of the free surface T, m, at a depth in m.
    #[must_use]
    pub fn top_width(&self, depth: f64) -> f64 {
        self.wetted(depth).top_width
    }

    /// Wetted perimeter P, m, at a depth in m.
    #[must_use]
    pub fn wetted_perimeter(&self, depth: f64) -> f64 {
        self.wetted(depth).perimeter
    }

    /// Hydraulic depth A/T, m, at a depth in m.
    #[must_use]
    pub fn hydraulic_depth(&self, depth: f64) -> f64 {
        self.wetted(depth).hydraulic_depth()
    }

    /// First moment of the area about the free surface, ∫₀^y A dy, m³, at a depth in m.
    #[must_use]
    pub fn first_moment(&self, depth: f64) -> f64 {
        match *self {
            Self::Sheet { width } => 0.5 * width * depth * depth,
            Self::Vee { included_angle } => libm::tan(0.5 * included_angle) * depth * depth * depth / 3.0,
            Self::Trough { diameter } if depth > 0.5 * diameter => {
                let wall = depth - 0.5 * diameter;
                let half_round = diameter * diameter * diameter / 12.0;
                half_round + wall * (0.125 * PI * diameter * diameter + 0.5 * diameter * wall)
            }
            Self::Trough { diameter } => circle_moment(diameter, depth),
            Self::Tube { bore } => circle_moment(bore, depth.min(bore)),
        }
    }

    /// Constant K of laminar friction, S_f = K ν U/(g R_h²): a 32nd of the Darcy f·Re on 4R_h.
    ///
    /// Wide film 3, circle 2 (both analytic; the circle exactly so half full and full, used at every depth
    /// and for a trough above half depth too, where a deep slot would tend to 3), vee 1.78 (half of a square
    /// duct, so a 90° vee; 1.66–1.78 at other angles; Shah & London 1978, from memory).
    #[must_use]
    pub fn friction_constant(&self) -> f64 {
        match self {
            Self::Sheet { .. } => 3.0,
            Self::Vee { .. } => 1.78,
            Self::Trough { .. } | Self::Tube { .. } => 2.0,
        }
    }

    /// Largest area that the section can carry, m²: the bore of a tube, unbounded for open sections.
    #[must_use]
    pub fn full_area(&self) -> f64 {
        match *self {
            Self::Tube { bore } => FRAC_PI_4 * bore * bore,
            Self::Sheet { .. } | Self::Vee { .. } | Self::Trough { .. } => f64::INFINITY,
        }
    }

    /// Depth, m, at which the flow area is `area`, m²; the bore for any area from the full bore up.
    #[must_use]
    pub fn depth_of_area(&self, area: f64) -> Option<f64> {
        match *self {
            Self::Sheet { width } => Some(area / width),
            Self::Vee { included_angle } => Some((area / libm::tan(0.5 * included_angle)).sqrt()),
            Self::Trough { diameter } => {
                let surplus = area - 0.125 * PI * diameter * diameter;
                if surplus >= 0.0 {
                    Some(0.5 * diameter + surplus / diameter)
                } else {
                    circle_depth(diameter, area, 0.5 * diameter)
                }
            }
            Self::Tube { bore } if area >= self.full_area() => Some(bore),
            Self::Tube { bore } => circle_depth(bore, area, bore),
        }
    }
}

/// Half-angle φ subtended by the free surface at the centre of a circle, rad; 0 when empty, π when full.
fn half_angle(diameter: f64, depth: f64) -> f64 {
    2.0 * libm::asin((depth / diameter).min(1.0).sqrt())
}

/// φ − sin φ cos φ, without cancellation at small angles.
fn segment(angle: f64, sine: f64, cosine: f64) -> f64 {
    if angle < 0.2 {
        let square = angle * angle;
        // Taylor series of φ − ½ sin 2φ; the first term left out is below 1e-15 of the sum at 0.2.
        let tail = 4.0 / 315.0 - square * (2.0 / 2835.0 - square * (4.0 / 155_925.0));
        square * angle * (2.0 / 3.0 - square * (2.0 / 15.0 - square * tail))
    } else {
        angle - sine * cosine
    }
}

fn circle(diameter: f64, depth: f64) -> Wetted {
    let angle = half_angle(diameter, depth);
    let top_width = 2.0 * (depth * (diameter - depth)).max(0.0).sqrt();
    let (sine, cosine) = (top_width / diameter, 1.0 - 2.0 * depth / diameter);
    Wetted {
        area: 0.25 * diameter * diameter * segment(angle, sine, cosine),
        top_width,
        perimeter: diameter * angle,
    }
}

fn circle_moment(diameter: f64, depth: f64) -> f64 {
    // ∫ A dy = A (depth of the centroid below the surface) = T³/12 − A (D/2 − y).
    let wetted = circle(diameter, depth);
    let width = wetted.top_width;
    if depth < 0.01 * diameter {
        // Shallow segment: T³/12 and A (D/2 − y) nearly cancel; leading terms of the series in y/D, 1e-5 at
        // worst.
        return 0.4 * wetted.area * depth * (1.0 + 3.0 / 35.0 * depth / diameter);
    }
    width * width * width / 12.0 - wetted.area * (0.5 * diameter - depth)
}

fn circle_depth(diameter: f64, area: f64, highest: f64) -> Option<f64> {
    let fraction = 4.0 * area / (diameter * diameter);
    let excess = |angle: f64| {
        let (sine, cosine) = libm::sincos(angle);
        libm::cbrt(segment(angle, sine, cosine)) - libm::cbrt(fraction)
    };
    let high = half_angle(diameter, highest);
    let bracket = Bracket { low: (0.0, -libm::cbrt(fraction)), high: (high, excess(high).max(0.0)) };
    let half = libm::sin(0.5 * find_root(excess, bracket, 1e-15)?);
    Some(diameter * half * half)
}

#[cfg(test)]
mod tests {
    use core::f64::consts::{FRAC_PI_2, PI};

    use super::{Section, segment};

    const SECTIONS: [Section; 4] = [
        Section::Sheet { width: 0.024 },
        Section::Vee { included_angle: FRAC_PI_2 },
        Section::Trough { diameter: 0.02 },
        Section::Tube { bore: 0.02 },
    ];

    #[test]
    fn area_grows_by_the_top_width_and_moment_by_the_area() {
        for section in SECTIONS {
            for i in 1..100 {
                let depth = 0.0002 * f64::from(i) - 0.000_05;
                let step = 1e-6 * depth;
                let slope = |f: &dyn Fn(f64) -> f64| (f(depth + step) - f(depth - step)) / (2.0 * step);
                let top_width = slope(&|y| section.area(y));
                assert!((top_width / section.top_width(depth) - 1.0).abs() < 1e-7, "{section:?} {depth}");
                let area = slope(&|y| section.first_moment(y));
                assert!((area / section.area(depth) - 1.0).abs() < 1e-4, "{section:?} {depth} {area}");
            }
        }
    }

    #[test]
    fn depth_and_area_are_inverse() {
        for section in SECTIONS {
            for depth in [1e-6, 1e-4, 3e-3, 0.0099, 0.0101, 0.0195] {
                let back = section.depth_of_area(section.area(depth)).unwrap();
                assert!((back / depth - 1.0).abs() < 1e-11, "{section:?} {depth} {back}");
            }
        }
    }

    #[test]
    fn half_full_and_full_bore() {
        let tube = Section::Tube { bore: 0.02 };
        let half = tube.wetted(0.01);
        assert!((half.area / (PI * 1e-4 / 2.0) - 1.0).abs() < 1e-14);
        assert!((half.top_width - 0.02).abs() < 1e-17 && (half.hydraulic_radius() - 0.005).abs() < 1e-16);
        let full = tube.wetted(1.0);
        assert!(
            (full.area / tube.full_area() - 1.0).abs() < 1e-14
                && (full.hydraulic_radius() - 0.005).abs() < 1e-16
        );
        assert_eq!(Section::Trough { diameter: 0.02 }.wetted(0.01).top_width, half.top_width);
    }

    #[test]
    fn small_segments_join_the_closed_form() {
        let (sine, cosine) = libm::sincos(0.2);
        let closed = 0.2 - sine * cosine;
        let (sine, cosine) = libm::sincos(0.2 - 1e-15);
        assert!((segment(0.2 - 1e-15, sine, cosine) / closed - 1.0).abs() < 1e-13);
    }
}

//! The lip and its stream along the stream's mid-plane, to scale, in millimetres: x to the right, y up, the end of the floor at the origin.

use crate::physics::{GRAVITY, quantity::DEGREE};

pub(super) type Point = [f64; 2];

/// What the shape is made from; see [`super::LipPicture`].
#[derive(Debug, Clone, Copy)]
pub(super) struct Outline {
    /// Radius of the rounding, mm.
    pub radius: f64,
    /// Turn, rad.
    pub turn: f64,
    /// Slope of the floor, rad, downhill positive.
    pub slope: f64,
    /// Depth of the approaching stream, mm.
    pub depth: f64,
    /// Depth at the brink, mm.
    pub brink: f64,
    /// How far from the edge things are drawn, mm.
    pub reach: f64,
}

/// The approach is drawn down to the brink over this many depths (own judgement: a level overfall does it in three to four).
const DRAW_DOWN: f64 = 4.0;
/// A film on a face that points up more than this cannot run along it: it drips from where the face turned up.
const OVERHANG: f64 = 172.0 * DEGREE;

impl Outline {
    /// How far things are drawn about a stream and a rounding of these sizes.
    pub(super) fn reach(depth: f64, radius: f64) -> f64 {
        (6.5 * depth).max(2.6 * radius)
    }

    /// The floor's direction turned by `s` towards the wall.
    fn along(&self, s: f64) -> Point {
        let (sine, cosine) = libm::sincos(self.slope + s);
        [cosine, -sine]
    }

    /// The direction out of the solid where the surface has turned by `s`.
    fn out(&self, s: f64) -> Point {
        let (sine, cosine) = libm::sincos(self.slope + s);
        [sine, cosine]
    }

    /// A point of the rounding.
    fn rounding(&self, s: f64) -> Point {
        let (first, here) = (self.out(0.0), self.out(s));
        [self.radius * (here[0] - first[0]), self.radius * (here[1] - first[1])]
    }

    /// A point of the floor, so far before the edge.
    pub(super) fn floor(&self, before: f64) -> Point {
        moved([0.0; 2], self.along(0.0), -before)
    }

    /// The same raised by the height above the floor.
    pub(super) fn above(&self, before: f64, height: f64) -> Point {
        moved(self.floor(before), self.out(0.0), height)
    }

    /// A point `distance` from the end of the floor, at the angle `s` from the floor's direction towards the wall.
    pub(super) fn about(&self, s: f64, distance: f64) -> Point {
        moved([0.0; 2], self.along(s), distance)
    }

    /// The middle of the rounding, and a point that far inside the solid from it.
    pub(super) fn middle_of_rounding(&self, inside: f64) -> [Point; 2] {
        let half = 0.5 * self.turn;
        let at = self.rounding(half);
        [at, moved(at, self.out(half), -inside)]
    }

    fn wall(&self, down: f64) -> Point {
        moved(self.rounding(self.turn), self.along(self.turn), down)
    }

    /// Length of wall that is drawn.
    fn wall_length(&self) -> f64 {
        (self.reach - 0.5 * self.radius).max(0.6 * self.reach)
    }

    /// Floor from far to near, rounding, wall.
    pub(super) fn surface(&self) -> Vec<Point> {
        let mut points = vec![self.floor(self.reach)];
        points.extend(self.arc(0.0, self.turn));
        points.push(self.wall(self.wall_length()));
        points
    }

    fn arc(&self, from: f64, to: f64) -> Vec<Point> {
        (0..=24).map(|i| self.rounding(from + (to - from) * f64::from(i) / 24.0)).collect()
    }

    /// The waved line along which the drawing breaks the solid off, from the wall's end to the floor's.
    pub(super) fn break_line(&self) -> Vec<Point> {
        let end = self.wall(self.wall_length());
        let (along, out) = (self.along(0.0), self.out(0.0));
        let angle = libm::atan2(-dot(end, out), dot(end, along));
        // A wall folded right back ends below the floor, a hair before half a turn.
        let first = if angle < 0.0 { core::f64::consts::PI } else { angle };
        let distance = libm::hypot(end[0], end[1]);
        // Fewer and flatter waves across a thin solid.
        let length = (core::f64::consts::PI - first) * self.reach + (self.reach - distance).abs();
        let count = (length / (0.5 * self.reach)).round().max(1.0);
        let amplitude = 0.018 * self.reach.min(length);
        (0..=60)
            .map(|i| {
                let share = f64::from(i) / 60.0;
                let s = first + (core::f64::consts::PI - first) * share;
                let waves = libm::sin(share * count * core::f64::consts::TAU) * amplitude;
                let r = distance + (self.reach - distance) * share + waves;
                self.about(s, r)
            })
            .collect()
    }

    /// The upper face of the stream on the floor, from far to the end of the floor.
    fn free_surface(&self) -> Vec<Point> {
        let length = DRAW_DOWN * self.depth;
        let height = |before: f64| {
            let share = (before / length).clamp(0.0, 1.0);
            self.brink + (self.depth - self.brink) * share * share * (3.0 - 2.0 * share)
        };
        let near = (0..=20).map(|i| length.min(self.reach) * (1.0 - f64::from(i) / 20.0));
        core::iter::once(self.reach).chain(near).map(|before| self.above(before, height(before))).collect()
    }

    /// The whole stream: on the floor, round the edge as far as the turn `s`, and on along `end`.
    pub(super) fn stream(&self, s: f64, end: &End<'_>) -> Vec<Point> {
        let mut outline = vec![self.floor(self.reach)];
        let arc = self.arc(0.0, s);
        outline.extend(&arc);
        match end {
            End::Flight(flight) => outline.extend(jet(flight)),
            End::Wall => outline.extend(self.wall_film()),
            End::Drip => {
                // A rounded front.
                let (inner, along, out) = (self.rounding(s), self.along(s), self.out(s));
                outline.extend((0..=16).map(|i| {
                    let (sine, cosine) = libm::sincos(core::f64::consts::PI * f64::from(i) / 16.0);
                    moved(
                        moved(inner, out, 0.5 * self.brink * (1.0 - cosine)),
                        along,
                        0.9 * self.brink * sine,
                    )
                }));
            }
        }
        let outer = |i: usize| {
            let turned = s * i as f64 / (arc.len() - 1) as f64;
            moved(arc[i], self.out(turned), self.brink)
        };
        outline.extend((0..arc.len()).rev().map(outer));
        outline.extend(self.free_surface().into_iter().rev());
        outline
    }

    /// How far round the edge a film that clings goes before it drips, rad.
    pub(super) fn clings_to(&self) -> f64 {
        self.turn.min((OVERHANG - self.slope).max(0.0))
    }

    /// Whether a film that clings runs along the wall, rather than dripping from an edge whose wall turns up again.
    pub(super) fn runs_along_wall(&self) -> bool {
        self.clings_to() >= self.turn
    }

    /// A point beside the wall film, half way down, and whether the open side is to the right.
    pub(super) fn beside_wall(&self, gap: f64) -> (Point, bool) {
        let out = self.out(self.turn);
        (moved(self.wall(0.55 * self.wall_length()), out, self.brink + gap), out[0] >= 0.0)
    }

    /// The film on the wall.
    pub(super) fn wall_film(&self) -> Vec<Point> {
        let out = self.out(self.turn);
        let (near, far) = (self.wall(0.0), self.wall(self.wall_length()));
        vec![near, far, moved(far, out, self.brink), moved(near, out, self.brink)]
    }

    /// Where a film that cannot run along the wall drips from.
    pub(super) fn drip(&self) -> Point {
        let s = self.clings_to();
        moved(self.rounding(s), self.out(s), self.brink)
    }

    /// Whether a point lies in the solid below the wall: a slow stream can fall on a wall that hardly turns away.
    fn behind_wall(&self, at: Point) -> bool {
        let foot = self.wall(0.0);
        let from = [at[0] - foot[0], at[1] - foot[1]];
        self.turn + self.slope < core::f64::consts::FRAC_PI_2
            && dot(from, self.along(self.turn)) > 0.0
            && dot(from, self.out(self.turn)) < -0.3 * self.brink
    }

    /// Middle of a stream that leaves with the turn `s` at this speed (m/s) and falls freely: points and thickness.
    pub(super) fn flight(&self, s: f64, speed: f64) -> Vec<(Point, f64)> {
        let start = moved(self.rounding(s), self.out(s), 0.5 * self.brink);
        let direction = self.along(s);
        let (vx, vy) = (direction[0] * speed, direction[1] * speed);
        let mut points = Vec::with_capacity(80);
        let mut time = 0.0;
        for _ in 0..400 {
            let fallen = 0.5 * GRAVITY * time * time;
            let at = [start[0] + 1e3 * vx * time, start[1] + 1e3 * (vy * time - fallen)];
            let now = libm::hypot(vx, vy - GRAVITY * time);
            points.push((at, self.brink * speed / now));
            if libm::hypot(at[0], at[1]) > 1.15 * self.reach || self.behind_wall(at) {
                break;
            }
            time += 1e-3 * self.reach / (40.0 * now.max(1e-4));
        }
        points
    }
}

/// How a stream goes on after the edge.
pub(super) enum End<'a> {
    /// It leaves: points and thickness.
    Flight(&'a [(Point, f64)]),
    /// It runs along the wall.
    Wall,
    /// It hangs and drips.
    Drip,
}

/// The outline of a stream in flight: along its lower side, back along its upper one.
fn jet(flight: &[(Point, f64)]) -> Vec<Point> {
    let count = flight.len();
    if count < 2 {
        return Vec::new();
    }
    let side = |sign: f64| {
        move |i: usize| {
            let (a, b) = (flight[i.saturating_sub(1)].0, flight[(i + 1).min(count - 1)].0);
            let length = libm::hypot(b[0] - a[0], b[1] - a[1]).max(1e-12);
            let (at, thickness) = flight[i];
            let half = 0.5 * sign * thickness / length;
            [at[0] - (b[1] - a[1]) * half, at[1] + (b[0] - a[0]) * half]
        }
    };
    (0..count).map(side(-1.0)).chain((0..count).rev().map(side(1.0))).collect()
}

fn moved(at: Point, direction: Point, by: f64) -> Point {
    [at[0] + by * direction[0], at[1] + by * direction[1]]
}

fn dot(a: Point, b: Point) -> f64 {
    a[0] * b[0] + a[1] * b[1]
}

#[cfg(test)]
mod tests {
    use super::*;

    fn outline(turn: f64, slope: f64) -> Outline {
        Outline {
            radius: 0.8,
            turn: turn * DEGREE,
            slope: slope * DEGREE,
            depth: 2.0,
            brink: 1.4,
            reach: 13.0,
        }
    }

    #[test]
    fn wall_stands_at_the_turn_and_the_rounding_joins_it() {
        for (turn, slope) in [(90.0, 0.0), (180.0, 20.0), (20.0, -10.0), (135.0, 45.0)] {
            let lip = outline(turn, slope);
            let (a, b) = (lip.wall(0.0), lip.wall(1.0));
            let down = libm::atan2(a[1] - b[1], b[0] - a[0]) / DEGREE;
            let expected = turn + slope;
            assert!(((down - expected) % 360.0).abs() < 1e-9, "{turn} {slope} {down}");
            let end = lip.rounding(lip.turn);
            assert!(libm::hypot(end[0] - a[0], end[1] - a[1]) < 1e-12);
        }
        // A right angle on a level floor: the rounding ends one radius out and one down.
        let end = outline(90.0, 0.0).rounding(90.0 * DEGREE);
        assert!((end[0] - 0.8).abs() < 1e-12 && (end[1] + 0.8).abs() < 1e-12);
    }

    #[test]
    fn a_level_stream_falls_by_its_parabola() {
        let lip = outline(90.0, 0.0);
        let flight = lip.flight(0.0, 0.5);
        let ([x, y], thickness) = flight[flight.len() - 1];
        // Start at half the brink depth; x = Ut, y = −gt²/2, in mm.
        let time = x * 1e-3 / 0.5;
        assert!((y - (0.7 - 0.5 * GRAVITY * time * time * 1e3)).abs() < 1e-9);
        assert!(thickness < lip.brink && thickness > 0.5 * lip.brink);
    }

    #[test]
    fn film_has_the_depth_of_approach_and_brink() {
        let lip = outline(110.0, 8.0);
        let film = lip.stream(0.3, &End::Drip);
        let height = |p: Point| dot(p, lip.out(0.0));
        let highest = film.iter().map(|p| height(*p)).fold(0.0, f64::max);
        assert!((highest - 2.0).abs() < 1e-9, "{highest}");
        assert!((lip.free_surface().last().map_or(0.0, |p| height(*p)) - 1.4).abs() < 1e-9);
    }

    #[test]
    fn an_edge_folded_back_drips_where_it_turns_up() {
        assert!(!outline(180.0, 8.0).runs_along_wall());
        assert!(outline(110.0, 8.0).runs_along_wall());
    }
}

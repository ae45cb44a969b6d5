//! The lip drawn to scale along the stream, with the stream leaving or running down, and a small section across it.

mod section;
mod shape;

use self::shape::{End, Outline, Point};
use super::{
    number::{significant, with_unit},
    page::{Heading, MARGIN, Page},
    svg::{Fill, INK, LIQUID_EDGE, Letters, QUIET, Stroke, Svg},
    text,
};
use crate::{
    analysis::{decision::Verdict, spec::SectionSpec},
    physics::quantity::DEGREE,
};

/// A lip with its stream.
#[derive(Debug, Clone, Copy)]
pub struct LipPicture<'a> {
    /// The words: the verdict, and of what.
    pub heading: Heading<'a>,
    /// The verdict.
    pub verdict: Verdict,
    /// Cross-section.
    pub section: SectionSpec,
    /// Radius of the rounding, mm.
    pub radius_mm: f64,
    /// Turn of the edge, degrees.
    pub turn_deg: f64,
    /// Slope of the floor, degrees, downhill positive.
    pub slope_deg: f64,
    /// Length of the floor before the edge, mm.
    pub length_mm: f64,
    /// Depth of the approaching stream along its middle, mm.
    pub depth_mm: f64,
    /// Depth at the brink, mm.
    pub brink_mm: f64,
    /// Mean speed at the brink, m/s.
    pub brink_speed_m_s: f64,
    /// Deflection of the stream that leaves; none once attached.
    pub deflection_deg: Option<Between>,
    /// What else is to be said: name and value.
    pub facts: &'a [(String, String)],
}

/// A value between its low and high, degrees.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Between {
    /// Best estimate.
    pub value: f64,
    /// Lower end.
    pub low: f64,
    /// Upper end.
    pub high: f64,
}

const WIDTH: f64 = 840.0;
const BODY: f64 = 480.0;
/// Width of the drawing; what is left is for the section across and the numbers.
const DRAWING: f64 = 560.0;
const SMALL: Letters = Letters::new(11.0);
/// A film thinner than this on the sheet is drawn this thick, and the picture says so.
const THINNEST: f64 = 1.5;

/// From millimetres to the sheet.
struct View {
    scale: f64,
    origin: Point,
}

impl View {
    /// The view that shows these points in this box.
    fn of<'p>(points: impl Iterator<Item = &'p Point>, [left, top, right, bottom]: [f64; 4]) -> Self {
        let start = [f64::INFINITY, f64::INFINITY, f64::NEG_INFINITY, f64::NEG_INFINITY];
        let [x0, y0, x1, y1] =
            points.fold(start, |[a, b, c, d], p| [a.min(p[0]), b.min(p[1]), c.max(p[0]), d.max(p[1])]);
        let scale = ((right - left) / (x1 - x0)).min((bottom - top) / (y1 - y0));
        let middle = |low: f64, high: f64| 0.5 * (low + high);
        let origin =
            [middle(left, right) - scale * middle(x0, x1), middle(top, bottom) + scale * middle(y0, y1)];
        Self { scale, origin }
    }

    fn at(&self, [x, y]: Point) -> Point {
        [self.origin[0] + self.scale * x, self.origin[1] - self.scale * y]
    }

    fn all(&self, points: &[Point]) -> Vec<Point> {
        points.iter().map(|p| self.at(*p)).collect()
    }
}

/// Draws the lip.
#[must_use]
pub fn lip(picture: &LipPicture<'_>) -> String {
    let reach = Outline::reach(picture.depth_mm, picture.radius_mm);
    let outline = Outline {
        radius: picture.radius_mm,
        turn: picture.turn_deg * DEGREE,
        slope: picture.slope_deg * DEGREE,
        depth: picture.depth_mm,
        brink: picture.brink_mm,
        reach,
    };
    let mut page = Page::new(WIDTH, BODY, &picture.heading);
    let solid: Vec<Point> = [outline.surface(), outline.break_line()].concat();
    let flight = |degrees: f64| outline.flight(degrees * DEGREE, picture.brink_speed_m_s);
    let leaving = picture.deflection_deg.map(|d| (d.value * DEGREE, flight(d.value)));
    let stream = match &leaving {
        Some((turned, flight)) => outline.stream(*turned, &End::Flight(flight)),
        None if outline.runs_along_wall() => outline.stream(outline.turn, &End::Wall),
        None => outline.stream(outline.clings_to(), &End::Drip),
    };
    // Room for a drop below the edge, and for the line of the floor carried on.
    let drip = outline.drip();
    let below = [drip[0], drip[1] - 5.0 * outline.brink.max(0.04 * reach)];
    let more = if leaving.is_none() && !outline.runs_along_wall() { vec![drip, below] } else { Vec::new() };
    let onward = [outline.about(0.0, 0.45 * reach)];
    let limits = [MARGIN + 4.0, page.top + 42.0, MARGIN + DRAWING, page.bottom - 50.0];
    let view = View::of(solid.iter().chain(&stream).chain(&more).chain(&onward), limits);
    let thin = picture.brink_mm * view.scale < THINNEST;
    let (top, bottom) = (page.top, page.bottom);
    let svg = &mut page.svg;
    svg.clipped([0.0, top], [MARGIN + DRAWING + 8.0, BODY - 34.0], |svg| {
        let line = Stroke::new(LIQUID_EDGE, if thin { 2.0 * THINNEST } else { 1.2 });
        svg.polygon(&view.all(&stream), Fill::Liquid, Some(line));
        svg.polygon(&view.all(&solid), Fill::White, None);
        svg.polygon(&view.all(&solid), Fill::Solid, None);
        if leaving.is_some() && picture.verdict != Verdict::Clean && outline.runs_along_wall() {
            // It may also cling: shown broken.
            svg.polyline(&view.all(&outline.wall_film()), Stroke::new(LIQUID_EDGE, 1.2).dashed("4 3"));
        }
        if let Some(deflection) = picture.deflection_deg {
            for end in [deflection.low, deflection.high] {
                let path: Vec<Point> = flight(end).iter().map(|p| p.0).collect();
                svg.polyline(&view.all(&path), Stroke::new(INK, 1.1).dashed("7 4"));
            }
        } else if !outline.runs_along_wall() {
            let size = drop_size(&view, &outline);
            let [x, y] = view.at(drip);
            drop(svg, [x, y + 0.9 * size], size);
        }
        svg.polyline(&view.all(&outline.surface()), Stroke::new(INK, 2.0));
        svg.polyline(&view.all(&outline.break_line()), Stroke::new(INK, 0.7));
        angles(svg, &view, &outline, picture);
    });
    labels(svg, &view, &outline, picture);
    scale_bar(svg, &view, bottom - 16.0, thin);
    section::draw(svg, picture, [MARGIN + DRAWING + 22.0, top + 4.0, WIDTH - MARGIN, top + 166.0]);
    facts(svg, picture.facts, [MARGIN + DRAWING + 22.0, top + 190.0, WIDTH - MARGIN, bottom]);
    page.svg.finish(picture.heading.title, &description(picture))
}

/// Size of the drop on the sheet: its length is twice that.
fn drop_size(view: &View, outline: &Outline) -> f64 {
    (outline.brink * view.scale).clamp(5.0, 22.0)
}

/// A drop with its top at `at`.
fn drop(svg: &mut Svg, [x, y]: Point, size: f64) {
    let outline: Vec<Point> = (0..40)
        .map(|i| {
            let s = f64::from(i) / 40.0 * core::f64::consts::TAU;
            let (sine, cosine) = libm::sincos(s);
            let pull = (0.5 * (1.0 - cosine)).sqrt();
            [x + 0.8 * size * sine * pull, y + size * (1.0 - cosine)]
        })
        .collect();
    svg.polygon(&outline, Fill::Liquid, Some(Stroke::new(LIQUID_EDGE, 1.1)));
}

/// The floor's direction carried on, and the angles from it: the turn, and the deflection of the stream.
fn angles(svg: &mut Svg, view: &View, outline: &Outline, picture: &LipPicture<'_>) {
    let reach = outline.reach;
    let onward = |distance: f64| view.at(outline.about(0.0, distance));
    svg.line(onward(0.0), onward(0.92 * reach), Stroke::new(QUIET, 0.8).dashed("12 3 2 3"));
    let arc = |svg: &mut Svg, to: f64, distance: f64, words: &str, at: f64| {
        let point = |s: f64| view.at(outline.about(s, distance));
        let points: Vec<Point> = (0..=30).map(|i| point(to * f64::from(i) / 30.0)).collect();
        svg.polyline(&points, Stroke::new(INK, 0.8));
        let [x, y] = view.at(outline.about(at * to, distance + 9.0 / view.scale));
        svg.text(kept([x, y + 4.0], words), words, SMALL.middle().halo());
    };
    let turn = format!("turn {}", with_unit(picture.turn_deg, "deg"));
    match picture.deflection_deg {
        Some(d) => {
            // Between the stream and the wall.
            let share = 0.5 * (d.value + picture.turn_deg) / picture.turn_deg;
            arc(svg, outline.turn, 0.34 * reach, &turn, share.min(0.8));
            arc(svg, d.value * DEGREE, 0.6 * reach, &with_unit(d.value, "deg"), 0.5);
        }
        None => arc(svg, outline.turn, (0.3 * reach).max(1.8 * outline.radius), &turn, 0.25),
    }
}

fn labels(svg: &mut Svg, view: &View, outline: &Outline, picture: &LipPicture<'_>) {
    let reach = outline.reach;
    let thin = Stroke::new(INK, 0.8);
    if let Some(d) = picture.deflection_deg {
        // A little before its end, so that the words stay on the sheet.
        let place = |end: f64| {
            let flight = outline.flight(end * DEGREE, picture.brink_speed_m_s);
            flight.get(flight.len() * 9 / 10).map(|(at, _)| view.at(*at))
        };
        if let (Some(low), Some(high)) = (place(d.low), place(d.high)) {
            if libm::hypot(low[0] - high[0], low[1] - high[1]) < 64.0 {
                let words = format!("{} to {}", significant(d.low, 3), with_unit(d.high, "deg"));
                let at = [0.5 * (low[0] + high[0]), low[1].max(high[1])];
                svg.text(kept(at, &words), &words, SMALL.middle().halo());
            } else {
                for (name, at, end) in [("low", low, d.low), ("high", high, d.high)] {
                    let words = format!("{name} {}", with_unit(end, "deg"));
                    svg.text(kept(at, &words), &words, SMALL.middle().halo());
                }
            }
        }
    }
    // Depths, measured across the film.
    depth(svg, view, outline, 0.78 * reach, picture.depth_mm, "depth");
    let brink = view.at(outline.above(0.0, picture.brink_mm));
    let words = format!("brink {}", with_unit(picture.brink_mm, "mm"));
    let [x, y] = view.at(outline.above(0.0, picture.brink_mm + 26.0 / view.scale));
    svg.line([brink[0], brink[1]], [x, y + 3.0], thin);
    svg.text(kept([x, y], &words), &words, SMALL.middle().halo());
    // The rounding.
    let [on, inside] = outline.middle_of_rounding(0.3 * reach).map(|p| view.at(p));
    let words = if picture.radius_mm > 0.0 {
        format!("r = {}", with_unit(picture.radius_mm, "mm"))
    } else {
        "sharp edge".to_owned()
    };
    svg.arrow(inside, on, thin);
    svg.text(kept([inside[0], inside[1] + 4.0], &words), &words, SMALL.middle().halo());
    slope(svg, view, outline, picture.slope_deg);
    if picture.length_mm > 0.0 && picture.length_mm < reach {
        // Where the floor begins; its length stands among the numbers.
        let [from, to] =
            [0.0, 9.0 / view.scale].map(|below| view.at(outline.above(picture.length_mm, -below)));
        svg.line(from, to, Stroke::new(INK, 1.6));
        // Where the solid is thick enough for the words.
        if picture.length_mm > 0.45 * reach && picture.turn_deg < 140.0 {
            let words = format!("floor begins, {}", with_unit(picture.length_mm, "mm"));
            let [x, y] = view.at(outline.above(picture.length_mm, -46.0 / view.scale));
            svg.line(to, [x, y - 6.0], thin);
            svg.text(kept([x, y + 6.0], &words), &words, SMALL.middle().halo());
        }
    }
    if picture.deflection_deg.is_none() {
        let (words, [x, y]) = if outline.runs_along_wall() {
            let words = "clings, runs down the wall";
            let (at, right) = outline.beside_wall(10.0 / view.scale);
            let half = 0.5 * text::bold_width(words, SMALL.size);
            let [x, y] = view.at(at);
            (words, [if right { x + half } else { x - half }, y + 4.0])
        } else {
            // Below the drop.
            let [x, y] = view.at(outline.drip());
            ("clings, drips from the underside", [x, y + 3.4 * drop_size(view, outline) + 14.0])
        };
        svg.text(kept([x, y], words), words, SMALL.bold().halo().middle());
    }
}

/// The depth of the film at a place, with its number.
fn depth(svg: &mut Svg, view: &View, outline: &Outline, before: f64, depth: f64, name: &str) {
    let [floor, top] = [0.0, depth].map(|height| view.at(outline.above(before, height)));
    let [far, label] = [24.0, 34.0].map(|px| view.at(outline.above(before, depth + px / view.scale)));
    let line = Stroke::new(INK, 0.8);
    svg.arrow(far, top, line);
    if view.scale * depth > 16.0 {
        svg.arrow(floor_out(floor, top), floor, line);
    }
    let words = format!("{name} {}", with_unit(depth, "mm"));
    svg.text(kept([label[0], label[1] + 4.0], &words), &words, SMALL.middle().halo());
}

/// The point from which the arrow to the floor starts: inside the film.
fn floor_out(floor: Point, top: Point) -> Point {
    [0.5 * (floor[0] + top[0]), 0.5 * (floor[1] + top[1])]
}

/// The slope of the floor against the level, where there is one.
fn slope(svg: &mut Svg, view: &View, outline: &Outline, degrees: f64) {
    let reach = outline.reach;
    let words = match degrees {
        d if d > 0.0 => format!("slopes down {}", with_unit(d, "deg")),
        d if d < 0.0 => format!("rises {}", with_unit(-d, "deg")),
        _ => "level floor".to_owned(),
    };
    // The level line stands in the solid: from the near end for a falling floor, from the far one for a rising floor.
    let (start, sign) = if degrees >= 0.0 { (0.36, -1.0) } else { (0.95, 1.0) };
    let foot = outline.floor(start * reach);
    let end = [foot[0] + sign * 0.42 * reach, foot[1]];
    let place = [foot[0] + sign * 0.34 * reach, foot[1] - 13.0 / view.scale];
    if degrees != 0.0 {
        svg.line(view.at(foot), view.at(end), Stroke::new(INK, 0.8));
    }
    let at = view.at(place);
    svg.text(kept(at, &words), &words, SMALL.middle().halo());
}

/// A place for words about a point, moved so that they stay in the drawing.
fn kept([x, y]: Point, words: &str) -> Point {
    let half = 0.5 * text::bold_width(words, SMALL.size) + 2.0;
    [x.min(MARGIN + DRAWING + 6.0 - half).max(MARGIN + half), y]
}

fn scale_bar(svg: &mut Svg, view: &View, y: f64, thin: bool) {
    let most = 130.0 / view.scale;
    let unit = libm::exp10(libm::log10(most).floor());
    let length = [5.0, 2.0, 1.0].into_iter().find(|m| m * unit <= most).unwrap_or(1.0) * unit;
    let (left, right) = (MARGIN + 6.0, MARGIN + 6.0 + length * view.scale);
    let middle = 0.5 * (left + right);
    let line = Stroke::new(INK, 1.0);
    svg.rect([left, y - 5.0], [middle - left, 5.0], Fill::Colour(INK), Some(line));
    svg.rect([middle, y - 5.0], [right - middle, 5.0], Fill::White, Some(line));
    svg.text([left, y - 10.0], "0", SMALL.middle());
    svg.text([right, y - 10.0], &with_unit(length, "mm"), SMALL.middle());
    let words = if thin {
        "To scale but for the film, too thin to see. Hatched: solid, broken off at the waved line."
    } else {
        "To scale. Hatched: solid, broken off at the waved line."
    };
    let left = right + 0.5 * text::width(&with_unit(length, "mm"), SMALL.size) + 12.0;
    for (index, words) in text::wrapped(words, 10.0, MARGIN + DRAWING - left, 2).iter().enumerate() {
        svg.text([left, y - 8.0 + 13.0 * index as f64], words, Letters::new(10.0).colour(QUIET));
    }
}

/// Names with values, one below the other.
fn facts(svg: &mut Svg, facts: &[(String, String)], [left, top, right, bottom]: [f64; 4]) {
    let mut y = top;
    for (name, value) in facts {
        let values = text::wrapped(value, 12.0, (right - left) / 1.14, 2);
        if y + 14.0 + 15.0 * values.len() as f64 > bottom + 4.0 {
            break;
        }
        svg.text([left, y], &text::fitted(name, 10.5, right - left), Letters::new(10.5).colour(QUIET));
        for line in &values {
            y += 15.0;
            svg.text([left, y], line, Letters::new(12.0).bold());
        }
        y += 19.0;
    }
}

fn description(picture: &LipPicture<'_>) -> String {
    let mut out = format!(
        "Section along the stream, to scale: a floor ({}), an edge of {} radius that turns by {}, a stream {} deep, {} at the brink.",
        match picture.slope_deg {
            d if d > 0.0 => format!("sloping down by {}", with_unit(d, "deg")),
            d if d < 0.0 => format!("rising by {}", with_unit(-d, "deg")),
            _ => "level".to_owned(),
        },
        with_unit(picture.radius_mm, "mm"),
        with_unit(picture.turn_deg, "deg"),
        with_unit(picture.depth_mm, "mm"),
        with_unit(picture.brink_mm, "mm")
    );
    match picture.deflection_deg {
        Some(d) => out.push_str(&format!(
            " The stream leaves, bent by {} ({} to {}) from the floor's direction, and falls freely.",
            with_unit(d.value, "deg"),
            significant(d.low, 3),
            with_unit(d.high, "deg")
        )),
        None => out.push_str(" The stream clings to the outside."),
    }
    for (name, value) in picture.facts {
        out.push_str(&format!(" {name}: {value}."));
    }
    out
}

//! The small section across the stream, with its depth filled.

use super::{LipPicture, Point};
use crate::{
    analysis::spec::SectionSpec,
    physics::quantity::DEGREE,
    service::render::{
        number::with_unit,
        svg::{Fill, INK, LIQUID_EDGE, Letters, QUIET, Stroke, Svg},
        text,
    },
};

/// The wall and the liquid in it, in millimetres: x across, y up from the lowest point.
struct Across {
    wall: Vec<Point>,
    closed: bool,
    liquid: Vec<Point>,
    words: String,
}

/// Draws the section across the stream in this box.
pub(super) fn draw(svg: &mut Svg, picture: &LipPicture<'_>, [left, top, right, bottom]: [f64; 4]) {
    let across = across(picture.section, picture.depth_mm);
    svg.rect(
        [left - 8.0, top],
        [right - left + 16.0, bottom - top],
        Fill::None,
        Some(Stroke::new(QUIET, 0.7)),
    );
    svg.text([left, top + 15.0], "Across the stream", Letters::new(11.0).colour(QUIET));
    let ends = |axis: usize| {
        let all = across.wall.iter().chain(&across.liquid).map(|p| p[axis]);
        all.fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(v), b.max(v)))
    };
    let ((x0, x1), (y0, y1)) = (ends(0), ends(1));
    let (low, high) = (bottom - 42.0, top + 28.0);
    let scale = ((right - left - 20.0) / (x1 - x0)).min((low - high) / (y1 - y0));
    let at = |p: &Point| {
        [
            0.5 * (left + right) + scale * (p[0] - 0.5 * (x0 + x1)),
            0.5 * (low + high) - scale * (p[1] - 0.5 * (y0 + y1)),
        ]
    };
    let place = |points: &[Point]| points.iter().map(at).collect::<Vec<_>>();
    svg.polygon(&place(&across.liquid), Fill::Liquid, Some(Stroke::new(LIQUID_EDGE, 1.0)));
    let line = Stroke::new(INK, 2.0);
    if across.closed {
        svg.polygon(&place(&across.wall), Fill::None, Some(line));
    } else {
        svg.polyline(&place(&across.wall), line);
    }
    let room = right - left;
    svg.text([left, bottom - 22.0], &text::fitted(&across.words, 11.0, room), Letters::new(11.0));
    let words = format!("{} deep", with_unit(picture.depth_mm, "mm"));
    svg.text([left, bottom - 8.0], &text::fitted(&words, 11.0, room), Letters::new(11.0));
}

fn across(section: SectionSpec, depth: f64) -> Across {
    match section {
        SectionSpec::Sheet { width_mm } => {
            let half = 0.5 * width_mm;
            // Side walls only hint at where the lip ends.
            let wall = (1.6 * depth).min(0.25 * width_mm);
            Across {
                wall: vec![[-half, wall], [-half, 0.0], [half, 0.0], [half, wall]],
                closed: false,
                liquid: vec![[-half, 0.0], [half, 0.0], [half, depth], [-half, depth]],
                words: format!("sheet, {} wide", with_unit(width_mm, "mm")),
            }
        }
        SectionSpec::Vee { included_angle_deg } => {
            let slant = libm::tan(0.5 * included_angle_deg * DEGREE);
            let rim = 1.5 * depth;
            Across {
                wall: vec![[-slant * rim, rim], [0.0, 0.0], [slant * rim, rim]],
                closed: false,
                liquid: vec![[-slant * depth, depth], [0.0, 0.0], [slant * depth, depth]],
                words: format!("vee, {} included", with_unit(included_angle_deg, "deg")),
            }
        }
        SectionSpec::Trough { diameter_mm } => {
            let half = 0.5 * diameter_mm;
            let rim = half.max(1.2 * depth);
            let mut wall = vec![[-half, rim]];
            wall.extend(circle(half, half));
            wall.push([half, rim]);
            let mut liquid = circle(half, depth.min(half));
            if depth > half {
                liquid.insert(0, [-half, depth]);
                liquid.push([half, depth]);
            }
            Across {
                wall,
                closed: false,
                liquid,
                words: format!("trough, {} across", with_unit(diameter_mm, "mm")),
            }
        }
        SectionSpec::Tube { bore_mm } => {
            let half = 0.5 * bore_mm;
            Across {
                wall: circle(half, bore_mm),
                closed: true,
                liquid: circle(half, depth.min(bore_mm)),
                words: format!("tube, bore {}", with_unit(bore_mm, "mm")),
            }
        }
    }
}

/// The part of a circle up to a height above its lowest point, from the left end round the bottom to the right end.
fn circle(radius: f64, height: f64) -> Vec<Point> {
    let half = libm::acos((1.0 - height / radius).clamp(-1.0, 1.0));
    (0..=48)
        .map(|i| {
            let (sine, cosine) = libm::sincos(half * (f64::from(i) / 24.0 - 1.0));
            [radius * sine, radius * (1.0 - cosine)]
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::physics::lip::Section;

    fn area(points: &[Point]) -> f64 {
        let turn = |i: usize| {
            let (a, b) = (points[i], points[(i + 1) % points.len()]);
            a[0] * b[1] - b[0] * a[1]
        };
        0.5 * (0..points.len()).map(turn).sum::<f64>().abs()
    }

    #[test]
    fn the_filled_area_is_the_flow_area() {
        for depth in [0.5, 3.0, 7.0] {
            for (drawn, meant) in [
                (SectionSpec::Sheet { width_mm: 24.0 }, Section::Sheet { width: 24.0 }),
                (
                    SectionSpec::Vee { included_angle_deg: 70.0 },
                    Section::Vee { included_angle: 70.0 * DEGREE },
                ),
                (SectionSpec::Trough { diameter_mm: 9.0 }, Section::Trough { diameter: 9.0 }),
                (SectionSpec::Tube { bore_mm: 9.0 }, Section::Tube { bore: 9.0 }),
            ] {
                let (drawn, meant) = (area(&across(drawn, depth).liquid), meant.area(depth));
                assert!((drawn / meant - 1.0).abs() < 0.01, "{depth} {drawn} {meant}");
            }
        }
    }
}

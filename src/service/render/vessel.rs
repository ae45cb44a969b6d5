//! A tilted vessel with its level, at one or several moments, all to one scale.

use super::{
    number::with_unit,
    page::{Heading, MARGIN, Page},
    svg::{Fill, INK, LIQUID_EDGE, Letters, QUIET, Stroke, Svg},
    text,
};

/// A vessel at several moments.
#[derive(Debug, Clone, Copy)]
pub struct VesselPicture<'a> {
    /// The words.
    pub heading: Heading<'a>,
    /// The moments, in order; more than [`MOST_MOMENTS`] are not drawn, and the note says so.
    pub moments: &'a [VesselMoment<'a>],
}

/// A vessel at one moment, in millimetres: x to the right, y up.
#[derive(Debug, Clone, Copy)]
pub struct VesselMoment<'a> {
    /// When, and how far tilted.
    pub caption: &'a str,
    /// The inner wall as it stands now, from one brim round the bottom to the other; the mouth between the ends is open.
    pub wall: &'a [[f64; 2]],
    /// Height of the level; none when empty.
    pub level: Option<f64>,
    /// The lip.
    pub lip: Option<[f64; 2]>,
    /// Whether liquid leaves, and how.
    pub stream: VesselStream,
}

/// What leaves the lip.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum VesselStream {
    /// Nothing.
    #[default]
    None,
    /// It leaves cleanly.
    Leaves,
    /// It runs down the outside.
    Dribbles,
}

/// The most moments of one picture.
pub const MOST_MOMENTS: usize = 12;

pub(super) const WIDTH: f64 = 820.0;
const ACROSS: usize = 4;
const CAPTION: f64 = 40.0;
/// How far outside the wall a dribble is drawn.
const OUTSIDE: f64 = 4.5;

/// Draws the vessel.
#[must_use]
pub fn vessel(picture: &VesselPicture<'_>) -> String {
    let shown = &picture.moments[..picture.moments.len().min(MOST_MOMENTS)];
    let beyond = picture.moments.len() - shown.len();
    let note = if beyond > 0 {
        format!("{} · {beyond} more moments are not drawn", picture.heading.note)
    } else {
        picture.heading.note.to_owned()
    };
    let mut page = Page::new(WIDTH, height(shown), &Heading { note: &note, ..picture.heading });
    let (top, bottom) = (page.top, page.bottom);
    draw(&mut page.svg, shown, top, bottom);
    page.svg.finish(picture.heading.title, &description(picture.moments))
}

fn across(shown: &[VesselMoment<'_>]) -> usize {
    shown.len().clamp(1, ACROSS)
}

/// A moment's place, without its caption.
fn cell(shown: &[VesselMoment<'_>]) -> [f64; 2] {
    let across = across(shown);
    [(WIDTH - 2.0 * MARGIN) / across as f64, if across < 3 { 330.0 } else { 230.0 }]
}

/// How high these moments are.
pub(super) fn height(shown: &[VesselMoment<'_>]) -> f64 {
    let rows = shown.len().div_ceil(across(shown)).max(1);
    (cell(shown)[1] + CAPTION) * rows as f64 + 34.0
}

/// Draws the moments between these heights, on a sheet [`WIDTH`] wide.
pub(super) fn draw(svg: &mut Svg, shown: &[VesselMoment<'_>], top: f64, bottom: f64) {
    let (across, cell) = (across(shown), cell(shown));
    let size = |axis: usize| {
        let one = |m: &VesselMoment<'_>| {
            let [low, high] = ends(m, axis);
            if high > low { high - low } else { 0.0 }
        };
        shown.iter().map(one).fold(1e-9, f64::max)
    };
    // Room for what leaves.
    let scale = ((cell[0] - 56.0) / size(0)).min((cell[1] - 44.0) / size(1));
    for (index, moment) in shown.iter().enumerate() {
        let corner =
            [MARGIN + cell[0] * (index % across) as f64, top + (cell[1] + CAPTION) * (index / across) as f64];
        one(svg, moment, corner, cell, scale);
    }
    if shown.is_empty() {
        let middle = [0.5 * WIDTH, 0.5 * (top + bottom)];
        svg.text(middle, "no moment to show", Letters::new(12.0).middle());
    } else {
        scale_bar(svg, scale, bottom - 8.0);
    }
}

fn ends(moment: &VesselMoment<'_>, axis: usize) -> [f64; 2] {
    let all = moment.wall.iter().chain(&moment.lip).map(|p| p[axis]).filter(|v| v.is_finite());
    all.fold([f64::INFINITY, f64::NEG_INFINITY], |[a, b], v| [a.min(v), b.max(v)])
}

fn one(svg: &mut Svg, moment: &VesselMoment<'_>, corner: [f64; 2], cell: [f64; 2], scale: f64) {
    let [x, y] = [0, 1].map(|axis| {
        let [low, high] = ends(moment, axis);
        if low <= high { 0.5 * (low + high) } else { 0.0 }
    });
    let at = |p: &[f64; 2]| {
        [corner[0] + 0.5 * cell[0] + scale * (p[0] - x), corner[1] + 0.5 * cell[1] - scale * (p[1] - y)]
    };
    let wall: Vec<[f64; 2]> = moment.wall.iter().map(at).collect();
    if let Some(level) = moment.level {
        let place = at(&[x, level])[1];
        svg.polygon(&below(&wall, place), Fill::Liquid, Some(Stroke::new(LIQUID_EDGE, 1.2)));
        // The mark of a free level.
        let mut crossings: Vec<f64> = wall.windows(2).filter_map(|w| crossing(w[0], w[1], place)).collect();
        crossings.sort_by(f64::total_cmp);
        if let (Some(left), Some(right)) = (crossings.first(), crossings.last()) {
            let middle = 0.5 * (left + right);
            svg.polygon(
                &[[middle, place], [middle - 5.0, place - 8.0], [middle + 5.0, place - 8.0]],
                Fill::None,
                Some(Stroke::new(INK, 1.0)),
            );
        }
    }
    svg.polyline(&wall, Stroke::new(INK, 2.6));
    if let Some(lip) = &moment.lip {
        let [px, py] = at(lip);
        let side = if lip[0] >= x { 1.0 } else { -1.0 };
        let line = Stroke::new(LIQUID_EDGE, 2.4);
        match moment.stream {
            VesselStream::None => {}
            VesselStream::Leaves => {
                let fall: Vec<[f64; 2]> = (0..=12)
                    .map(|i| [px + side * 1.6 * f64::from(i), py + 0.22 * f64::from(i * i)])
                    .collect();
                svg.polyline(&fall, line);
            }
            VesselStream::Dribbles => {
                // Down the outer wall, for a while.
                let run = outside(&wall, [px, py], 60.0);
                svg.polyline(&run, line);
            }
        }
        svg.circle([px, py], 3.4, Fill::White, Some(Stroke::new(INK, 1.4)));
    }
    let middle = corner[0] + 0.5 * cell[0];
    for (index, line) in text::wrapped(moment.caption, 11.0, cell[0] - 12.0, 2).iter().enumerate() {
        svg.text(
            [middle, corner[1] + cell[1] + 8.0 + 14.0 * index as f64],
            line,
            Letters::new(11.0).middle(),
        );
    }
}

/// The part of an outline below a height on the sheet (closed over the mouth).
fn below(outline: &[[f64; 2]], level: f64) -> Vec<[f64; 2]> {
    let mut kept = Vec::with_capacity(outline.len() + 2);
    for (index, &here) in outline.iter().enumerate() {
        let next = outline[(index + 1) % outline.len()];
        if here[1] >= level {
            kept.push(here);
        }
        if let Some(x) = crossing(here, next, level) {
            kept.push([x, level]);
        }
    }
    kept
}

/// Where a side meets a height.
fn crossing(a: [f64; 2], b: [f64; 2], level: f64) -> Option<f64> {
    ((a[1] >= level) != (b[1] >= level)).then(|| a[0] + (b[0] - a[0]) * (level - a[1]) / (b[1] - a[1]))
}

/// Twice the area inside an outline, by its sense of turning.
fn turning(outline: &[[f64; 2]]) -> f64 {
    let pair = |i: usize| {
        let (a, b) = (outline[i], outline[(i + 1) % outline.len()]);
        a[0] * b[1] - b[0] * a[1]
    };
    (0..outline.len()).map(pair).sum()
}

/// A line along the outside of the wall from the lip on, for `length`.
fn outside(wall: &[[f64; 2]], lip: [f64; 2], length: f64) -> Vec<[f64; 2]> {
    let distance = |p: &[f64; 2]| libm::hypot(p[0] - lip[0], p[1] - lip[1]);
    let (Some(first), Some(last)) = (wall.first(), wall.last()) else { return Vec::new() };
    let mut sense = if turning(wall) < 0.0 { -OUTSIDE } else { OUTSIDE };
    let mut along = wall.to_vec();
    if distance(first) > distance(last) {
        along.reverse();
        sense = -sense;
    }
    let mut run = vec![lip];
    let mut left = length;
    for pair in along.windows(2) {
        let [dx, dy] = [pair[1][0] - pair[0][0], pair[1][1] - pair[0][1]];
        let step = libm::hypot(dx, dy);
        if step <= 0.0 {
            continue;
        }
        let share = (left / step).min(1.0);
        let off = [sense * dy / step, -sense * dx / step];
        let [from, to] = [0.0, share].map(|s| [pair[0][0] + s * dx + off[0], pair[0][1] + s * dy + off[1]]);
        // In an inner corner the two lines cross: the way goes over where they do.
        if let [.., before, end] = run[..]
            && run.len() > 2
            && let Some(corner) = crossing_point([before, end], [from, to])
        {
            run.pop();
            run.extend([corner, to]);
        } else {
            run.extend([from, to]);
        }
        left -= step;
        if left <= 0.0 {
            break;
        }
    }
    run
}

/// Where two stretches cross.
fn crossing_point([a, b]: [[f64; 2]; 2], [c, d]: [[f64; 2]; 2]) -> Option<[f64; 2]> {
    let (first, second) = ([b[0] - a[0], b[1] - a[1]], [d[0] - c[0], d[1] - c[1]]);
    let product = |u: [f64; 2], v: [f64; 2]| u[0] * v[1] - u[1] * v[0];
    let between = [c[0] - a[0], c[1] - a[1]];
    let across = product(first, second);
    let (s, t) = (product(between, second) / across, product(between, first) / across);
    let inside = |share: f64| (0.0..=1.0).contains(&share);
    (inside(s) && inside(t)).then(|| [a[0] + s * first[0], a[1] + s * first[1]])
}

fn scale_bar(svg: &mut Svg, scale: f64, y: f64) {
    let most = 120.0 / scale;
    let unit = libm::exp10(libm::log10(most).floor());
    let length = [5.0, 2.0, 1.0].into_iter().find(|m| m * unit <= most).unwrap_or(1.0) * unit;
    let (left, right) = (MARGIN + 6.0, MARGIN + 6.0 + scale * length);
    let line = Stroke::new(INK, 1.2);
    svg.line([left, y - 4.0], [right, y - 4.0], line);
    for x in [left, right] {
        svg.line([x, y - 8.0], [x, y], line);
    }
    svg.text([right + 8.0, y], &with_unit(length, "mm"), Letters::new(11.0));
    let words = "To scale; the stream is only indicated. Ring: the lip.";
    svg.text([WIDTH - MARGIN, y], words, Letters::new(10.0).colour(QUIET).end());
}

pub(super) fn description(moments: &[VesselMoment<'_>]) -> String {
    let mut out = format!("A tilted vessel at {} moments, to scale.", moments.len());
    for moment in moments.iter().take(MOST_MOMENTS) {
        let level = match (moment.level, moment.lip) {
            (None, _) => "empty".to_owned(),
            (Some(level), Some(lip)) => {
                let over = level - lip[1];
                let side = if over >= 0.0 { "above" } else { "below" };
                format!("level {} {side} the lip", with_unit(over.abs(), "mm"))
            }
            (Some(level), None) => format!("level at {}", with_unit(level, "mm")),
        };
        let stream = match moment.stream {
            VesselStream::None => "",
            VesselStream::Leaves => ", pouring",
            VesselStream::Dribbles => ", dribbling",
        };
        out.push_str(&format!(" {}: {level}{stream}.", moment.caption));
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn liquid_fills_the_outline_up_to_its_level() {
        // On the sheet y grows downwards: a square from 0 to 10, filled from 4 down.
        let square = [[0.0, 0.0], [0.0, 10.0], [10.0, 10.0], [10.0, 0.0]];
        let filled = below(&square, 4.0);
        assert_eq!(filled, [[0.0, 4.0], [0.0, 10.0], [10.0, 10.0], [10.0, 4.0]]);
        assert!(below(&square, 20.0).is_empty());
        assert_eq!(below(&square, -5.0).len(), 4);
    }

    #[test]
    fn a_dribble_cuts_inner_corners() {
        // A shelf that reaches out to the right, and the wall below it; inside is to the left and above.
        let wall = [[30.0, 0.0], [10.0, 0.0], [10.0, 50.0], [-10.0, 50.0], [-10.0, 0.0]];
        let run = outside(&wall, wall[0], 40.0);
        let corner = [10.0 + OUTSIDE, OUTSIDE];
        assert_eq!(run, [wall[0], [30.0, OUTSIDE], corner, [10.0 + OUTSIDE, 20.0]]);
    }

    #[test]
    fn a_dribble_runs_outside_whichever_way_the_wall_is_given() {
        let square = [[0.0, 0.0], [0.0, 10.0], [10.0, 10.0], [10.0, 0.0]];
        let mut other = square;
        other.reverse();
        for wall in [square, other] {
            let run = outside(&wall, [10.0, 0.0], 8.0);
            assert_eq!(run, [[10.0, 0.0], [10.0 + OUTSIDE, 0.0], [10.0 + OUTSIDE, 8.0]]);
        }
    }
}

//! A quantity over two fields: greys by steps, labelled lines, verdict boundaries, and the names of the zones.

mod names;

use self::names::{overlaps, zone_names};
use super::{
    axis::{Axis, Ruler, Scale},
    contour::Grid,
    number::{significant, with_unit},
    page::{BELOW, Extent, Heading, MARGIN, Page, Plot, SIZE, label_width},
    svg::{ASKED, Fill, INK, Letters, Stroke, Svg},
    text,
    zone::word,
};
use crate::analysis::decision::Verdict;

/// A quantity over two fields.
#[derive(Debug, Clone, Copy)]
pub struct MapChart<'a> {
    /// The words.
    pub heading: Heading<'a>,
    /// The field along the sheet.
    pub x: Axis<'a>,
    /// The field up the sheet.
    pub y: Axis<'a>,
    /// Values of the first field, ascending.
    pub xs: &'a [f64],
    /// Values of the second field, ascending.
    pub ys: &'a [f64],
    /// The quantity.
    pub quantity: Axis<'a>,
    /// Its values: `values[row * xs.len() + column]`; not finite where there is no answer.
    pub values: &'a [f64],
    /// Where its lines are drawn; see [`round_levels`].
    pub levels: &'a [f64],
    /// Whether large values are the dark ones (probabilities), or the small ones (safety factors).
    pub dark: Dark,
    /// Boundaries drawn bold, each the line of a quantity of its own.
    pub boundaries: &'a [Boundary<'a>],
    /// Verdicts at the same points, for the names of the zones; may be empty.
    pub verdicts: &'a [Option<Verdict>],
    /// The point that was asked about.
    pub asked: Option<[f64; 2]>,
}

/// Which end of a quantity is drawn dark.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Dark {
    /// Large values.
    High,
    /// Small values.
    Low,
}

/// A boundary: where `values` (at the points of the map) cross `level`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Boundary<'a> {
    /// What it parts.
    pub label: &'a str,
    /// The quantity that it is a line of.
    pub values: &'a [f64],
    /// Its value there.
    pub level: f64,
}

/// The most points of a map: more would make a file too large to be looked at.
pub const MOST_MAP_POINTS: usize = 40_000;

const WIDTH: f64 = 820.0;
const HEIGHT: f64 = 440.0;
/// Size of the zones' names.
const NAME: f64 = 15.0;
/// Room right of the map for the key.
const KEY: f64 = 196.0;
const BOUNDARY_DASHES: [&str; 4] = ["", "11 4", "3 3", "12 3 3 3"];

/// Draws the map.
#[must_use]
pub fn map(chart: &MapChart<'_>) -> String {
    let key_labels: Vec<String> = chart.levels.iter().map(|l| with_unit(*l, chart.quantity.unit)).collect();
    let mut page = Page::new(WIDTH, HEIGHT + BELOW, &chart.heading);
    let asked = |i: usize| chart.asked.map(|a| a[i]);
    let xs: Vec<f64> = chart.xs.iter().copied().chain(asked(0)).collect();
    let ys: Vec<f64> = chart.ys.iter().copied().chain(asked(1)).collect();
    let y = Ruler::over(ys.iter().copied(), chart.y.scale, [page.top + HEIGHT, page.top], false);
    let left = MARGIN + 24.0 + label_width(&y);
    let x = Extent { axis: chart.x, values: &xs, round: false };
    let plot = Plot::placed(&x, y, [left, WIDTH - KEY - MARGIN]);
    let grid = laid(chart, &plot, chart.values, chart.quantity.scale);
    let levels: Vec<f64> = chart.levels.iter().map(|l| scaled(*l, chart.quantity.scale)).collect();
    let svg = &mut page.svg;
    greys(svg, &grid, &levels, chart.dark);
    let missing = grid.missing();
    svg.polygons(&missing, Fill::Missing, None);
    let mut taken: Vec<[f64; 4]> = Vec::new();
    if let Some(at) = asked_place(chart, &plot) {
        taken.push([at[0] - 14.0, at[1] - 14.0, at[0] + 14.0, at[1] + 14.0]);
    }
    let names = zone_names(chart, &plot, &mut taken);
    let lines: Vec<_> = levels.iter().map(|level| grid.lines(*level)).collect();
    lines.iter().flatten().for_each(|line| svg.polyline(line, Stroke::new("#3a3a3a", 0.9)));
    for (index, boundary) in chart.boundaries.iter().enumerate() {
        let grid = laid(chart, &plot, boundary.values, Scale::Linear);
        for line in grid.lines(boundary.level) {
            svg.polyline(&line, Stroke::new("#fff", 5.0));
            svg.polyline(&line, boundary_stroke(index));
        }
    }
    for (lines, label) in lines.iter().zip(&key_labels) {
        line_label(svg, &plot, lines, label, &mut taken);
    }
    for (at, name) in &names {
        svg.text([at[0], at[1] + 5.0], name, Letters::new(NAME).bold().middle().halo());
    }
    if grid.values.iter().all(|v| !v.is_finite()) {
        let middle = [0.5 * (plot.left() + plot.right()), 0.5 * (plot.top() + plot.bottom())];
        svg.text(middle, "no point of this map has an answer", Letters::new(SIZE).bold().middle().halo());
    }
    plot.frame(svg, Some(&chart.x), &chart.y);
    if let Some(at) = asked_place(chart, &plot) {
        plot.asked(svg, at);
    }
    key(svg, &plot, chart, &key_labels, !missing.is_empty());
    page.svg.finish(chart.heading.title, &description(chart))
}

/// Round values inside the range of `values`, to draw lines at: at most about `most`.
#[must_use]
pub fn round_levels(values: &[f64], scale: Scale, most: usize) -> Vec<f64> {
    let known = || values.iter().copied().filter(|v| v.is_finite() && (scale == Scale::Linear || *v > 0.0));
    let (low, high) = known().fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(v), b.max(v)));
    if low >= high {
        return Vec::new();
    }
    if scale == Scale::Log {
        let (first, last) = (libm::log10(low).floor() as i32, libm::log10(high).ceil() as i32);
        for mantissas in [&[1.0, 1.5, 2.0, 3.0, 5.0, 7.0][..], &[1.0, 2.0, 5.0], &[1.0, 3.0], &[1.0]] {
            let inside: Vec<f64> = (first..=last)
                .flat_map(|e| mantissas.iter().map(move |m| m * libm::exp10(f64::from(e))))
                .filter(|level| *level > low && *level < high)
                .collect();
            if inside.len() <= most {
                return if inside.len() < 2 { even_levels(low, high, most) } else { inside };
            }
        }
        let every = (last - first) as usize / most.max(1) + 1;
        return (first..=last)
            .step_by(every)
            .map(|e| libm::exp10(f64::from(e)))
            .filter(|l| *l > low && *l < high)
            .collect();
    }
    even_levels(low, high, most)
}

fn even_levels(low: f64, high: f64, most: usize) -> Vec<f64> {
    let raw = (high - low) / most.max(1) as f64;
    let unit = libm::exp10(libm::log10(raw).floor());
    let step = [1.0, 2.0, 5.0].into_iter().find(|m| m * unit >= raw).unwrap_or(10.0) * unit;
    let first = (low / step).floor() as i64 + 1;
    (0..=most as i64)
        .map(|i| (first + i) as f64 * step)
        .filter(|level| *level > low && *level < high)
        .collect()
}

fn scaled(value: f64, scale: Scale) -> f64 {
    match scale {
        Scale::Linear => value,
        Scale::Log if value > 0.0 => libm::log(value),
        Scale::Log => f64::NAN,
    }
}

/// A grid on the sheet. A field with a single value fills the sheet from side to side.
fn laid(chart: &MapChart<'_>, plot: &Plot, values: &[f64], scale: Scale) -> Grid {
    let width = chart.xs.len();
    let mut columns: Vec<f64> = chart.xs.iter().map(|v| plot.x.place(*v).unwrap_or(f64::NAN)).collect();
    let mut rows: Vec<f64> = chart.ys.iter().map(|v| plot.y.place(*v).unwrap_or(f64::NAN)).collect();
    let value = |row: usize, column: usize| {
        scaled(values.get(row * width + column).copied().unwrap_or(f64::NAN), scale)
    };
    let (mut across, mut up): (Vec<usize>, Vec<usize>) = ((0..width).collect(), (0..rows.len()).collect());
    if width == 1 {
        (columns, across) = (vec![plot.left(), plot.right()], vec![0, 0]);
    }
    if rows.len() == 1 {
        (rows, up) = (vec![plot.bottom(), plot.top()], vec![0, 0]);
    }
    let values =
        up.iter().flat_map(|row| across.iter().map(|column| value(*row, *column)).collect::<Vec<_>>());
    Grid { values: values.collect(), columns, rows }
}

/// The grey of a step: from nearly white to a grey that black letters can still be read on.
fn grey(index: usize, count: usize, dark: Dark) -> u8 {
    if count < 2 {
        return 240;
    }
    let share = index as f64 / (count - 1) as f64;
    let darkness = match dark {
        Dark::High => share,
        Dark::Low => 1.0 - share,
    };
    (250.0 - 100.0 * darkness).round() as u8
}

fn greys(svg: &mut Svg, grid: &Grid, levels: &[f64], dark: Dark) {
    for index in 0..=levels.len() {
        let low = if index == 0 { f64::NEG_INFINITY } else { levels[index - 1] };
        let high = levels.get(index).copied().unwrap_or(f64::INFINITY);
        svg.polygons(&grid.area(low, high), Fill::Grey(grey(index, levels.len() + 1, dark)), None);
    }
}

fn boundary_stroke(index: usize) -> Stroke {
    Stroke::new("#000", 2.6).dashed(BOUNDARY_DASHES[index % BOUNDARY_DASHES.len()])
}

fn asked_place(chart: &MapChart<'_>, plot: &Plot) -> Option<[f64; 2]> {
    let [x, y] = chart.asked?;
    Some([plot.x.inside(x)?, plot.y.inside(y)?])
}

/// One label on the longest of these lines, where it stands free.
fn line_label(svg: &mut Svg, plot: &Plot, lines: &[Vec<[f64; 2]>], label: &str, taken: &mut Vec<[f64; 4]>) {
    let reach = |line: &[[f64; 2]]| -> f64 {
        line.windows(2).map(|w| (w[1][0] - w[0][0]).abs() + (w[1][1] - w[0][1]).abs()).sum()
    };
    let Some(line) = lines.iter().max_by(|a, b| reach(a).total_cmp(&reach(b))) else { return };
    let half = 0.5 * text::width(label, 11.0) + 3.0;
    if reach(line) < 3.0 * half {
        return;
    }
    let count = line.len();
    // From the middle outwards.
    let order = (0..count)
        .map(|i| if i % 2 == 0 { count / 2 + i / 2 } else { count / 2 - i.div_ceil(2).min(count / 2) });
    for at in order.filter_map(|i| line.get(i)) {
        let bounds = [at[0] - half, at[1] - 9.0, at[0] + half, at[1] + 9.0];
        let inside = bounds[0] > plot.left()
            && bounds[2] < plot.right()
            && bounds[1] > plot.top()
            && bounds[3] < plot.bottom();
        if inside && !taken.iter().any(|other| overlaps(other, &bounds)) {
            svg.text([at[0], at[1] + 4.0], label, Letters::new(11.0).middle().halo());
            taken.push(bounds);
            return;
        }
    }
}

/// The key: greys with the values between them, boundaries, the asked point, what is missing.
fn key(svg: &mut Svg, plot: &Plot, chart: &MapChart<'_>, labels: &[String], missing: bool) {
    let left = plot.right() + 18.0;
    let room = KEY - 22.0;
    let mut y = plot.top() + 10.0;
    for line in text::wrapped(chart.quantity.name, SIZE, room, 2) {
        svg.text([left, y], &line, Letters::new(SIZE).bold());
        y += 15.0;
    }
    let steps = labels.len() + 1;
    let height = (190.0 / steps as f64).clamp(9.0, 20.0);
    // Large values stand above.
    for index in 0..steps {
        let top = y + height * (steps - 1 - index) as f64;
        svg.rect(
            [left, top],
            [26.0, height],
            Fill::Grey(grey(index, steps, chart.dark)),
            Some(Stroke::new(INK, 0.7)),
        );
    }
    let every = (13.0 / height).ceil() as usize;
    for (index, label) in labels.iter().enumerate().filter(|(index, _)| index.is_multiple_of(every)) {
        let at = y + height * (steps - 1 - index) as f64;
        svg.line([left + 26.0, at], [left + 30.0, at], Stroke::new(INK, 0.7));
        svg.text([left + 34.0, at + 4.0], label, Letters::new(11.0));
    }
    if labels.is_empty() {
        // No line: one value, or so little between them that none is round.
        let [low, high] = known_range(chart);
        let unit = chart.quantity.unit;
        let words = match (low <= high, low < high) {
            (false, _) => "none",
            (true, false) => &with_unit(low, unit),
            (true, true) => &format!("{} to {}", significant(low, 4), with_unit(high, unit)),
        };
        svg.text(
            [left + 34.0, y + 0.5 * height + 4.0],
            &text::fitted(words, 11.0, room - 34.0),
            Letters::new(11.0),
        );
    }
    y += height * steps as f64 + 24.0;
    for (index, boundary) in chart.boundaries.iter().enumerate() {
        svg.line([left, y], [left + 40.0, y], boundary_stroke(index));
        y += 4.0;
        for line in text::wrapped(boundary.label, 11.0, room - 46.0, 3) {
            svg.text([left + 46.0, y], &line, Letters::new(11.0));
            y += 13.0;
        }
        y += 7.0;
    }
    if missing {
        svg.rect([left, y - 6.0], [26.0, 12.0], Fill::Missing, Some(Stroke::new(INK, 0.7)));
        svg.text([left + 34.0, y + 4.0], "no answer", Letters::new(11.0));
        y += 24.0;
    }
    if let Some([x, value]) = chart.asked {
        plot.asked(svg, [left + 13.0, y + 3.0]);
        let words = format!("asked: {}, {}", with_unit(x, chart.x.unit), with_unit(value, chart.y.unit));
        for line in text::wrapped(&words, 11.0, room - 34.0, 3) {
            svg.text([left + 34.0, y + 7.0], &line, Letters::new(11.0).colour(ASKED));
            y += 13.0;
        }
    }
}

fn known_range(chart: &MapChart<'_>) -> [f64; 2] {
    let known = chart.values.iter().copied().filter(|v| v.is_finite());
    known.fold([f64::INFINITY, f64::NEG_INFINITY], |[low, high], v| [low.min(v), high.max(v)])
}

fn description(chart: &MapChart<'_>) -> String {
    let ends = |values: &[f64], unit: &str| {
        let [first, last] = [values.first(), values.last()].map(|v| v.copied().unwrap_or(f64::NAN));
        format!("{} to {}", significant(first, 3), with_unit(last, unit))
    };
    let [low, high] = known_range(chart);
    let mut out = format!(
        "Map of {} over {} ({}) and {} ({}).",
        chart.quantity.name,
        chart.x.name,
        ends(chart.xs, chart.x.unit),
        chart.y.name,
        ends(chart.ys, chart.y.unit)
    );
    if low <= high {
        out.push_str(&format!(
            " It runs from {} to {}.",
            significant(low, 3),
            with_unit(high, chart.quantity.unit)
        ));
    }
    for boundary in chart.boundaries {
        out.push_str(&format!(" Boundary: {}.", boundary.label));
    }
    let total = chart.verdicts.len();
    for verdict in [Some(Verdict::Clean), Some(Verdict::Marginal), Some(Verdict::Dribbles), None] {
        let count = chart.verdicts.iter().filter(|v| **v == verdict).count();
        if count > 0 {
            out.push_str(&format!(" {count} of {total} points: {}.", word(verdict)));
        }
    }
    if let Some([x, y]) = chart.asked {
        out.push_str(&format!(" Asked: {}, {}.", with_unit(x, chart.x.unit), with_unit(y, chart.y.unit)));
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn levels_are_round_and_inside() {
        assert_eq!(round_levels(&[0.2, 30.0], Scale::Log, 9), [0.5, 1.0, 2.0, 5.0, 10.0, 20.0]);
        assert_eq!(round_levels(&[0.0, 1.0], Scale::Linear, 5), [0.2, 0.4, 0.6000000000000001, 0.8]);
        assert!(round_levels(&[3.0, f64::NAN], Scale::Log, 9).is_empty());
        for values in [[1e-12, 1e12], [1.0, 1.01], [1e-3, 5.0]] {
            let levels = round_levels(&values, Scale::Log, 9);
            assert!((2..=10).contains(&levels.len()), "{levels:?}");
            assert!(levels.iter().all(|l| *l > values[0] && *l < values[1]));
        }
    }
}

//! A histogram with a limit and its guard band.

use super::{
    axis::{Axis, Scale},
    number::with_unit,
    page::{BELOW, Extent, Heading, MARGIN, Page, Plot, bare},
    pen::apart,
    svg::{Fill, INK, Letters, QUIET, Stroke, Svg},
    text,
};

/// A histogram.
#[derive(Debug, Clone, Copy)]
pub struct Histogram<'a> {
    /// The words.
    pub heading: Heading<'a>,
    /// The quantity.
    pub axis: Axis<'a>,
    /// Edges of the classes, ascending: one more than there are counts.
    pub edges: &'a [f64],
    /// How many in each class.
    pub counts: &'a [f64],
    /// What a count counts.
    pub count_name: &'a str,
    /// The limit.
    pub limit: Option<Limit<'a>>,
    /// Other values that mean something, such as the mean.
    pub marks: &'a [super::Mark<'a>],
}

/// A limit on a quantity.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limit<'a> {
    /// The limit.
    pub at: f64,
    /// Which side of it is good.
    pub good: Side,
    /// Its meaning.
    pub label: &'a str,
    /// The limit really used, with the guard band taken off.
    pub guarded: Option<f64>,
}

/// A side of a limit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Side {
    /// Values up to the limit.
    Below,
    /// Values from the limit on.
    Above,
}

const WIDTH: f64 = 760.0;
const HEIGHT: f64 = 290.0;
/// Room above the plot for the labels of limits and marks.
const LABELS: f64 = 44.0;

/// Draws the histogram.
#[must_use]
pub fn histogram(chart: &Histogram<'_>) -> String {
    let labels = if chart.limit.is_none() && chart.marks.is_empty() { 4.0 } else { LABELS };
    let mut page = Page::new(WIDTH, labels + HEIGHT + BELOW, &chart.heading);
    let limits = chart.limit.iter().flat_map(|l| [Some(l.at), l.guarded]).flatten();
    let values: Vec<f64> =
        chart.edges.iter().copied().chain(limits).chain(chart.marks.iter().map(|m| m.at)).collect();
    let most = chart.counts.iter().copied().filter(|c| c.is_finite()).fold(0.0, f64::max);
    let top = page.top + labels;
    let axis = Axis { scale: Scale::Linear, ..chart.axis };
    let counts = bare(chart.count_name);
    let plot = Plot::new(
        &page,
        [top, top + HEIGHT],
        MARGIN + 12.0,
        &Extent { axis, values: &padded(&values), round: false },
        &Extent { axis: counts, values: &[0.0, if most > 0.0 { most * 1.04 } else { 1.0 }], round: true },
    );
    let svg = &mut page.svg;
    if let Some(limit) = &chart.limit {
        beyond(svg, &plot, limit);
    }
    plot.grid(svg);
    for (edges, count) in chart.edges.windows(2).zip(chart.counts) {
        let corners = plot.at(edges[0], *count).zip(plot.at(edges[1], 0.0));
        if let Some(([left, top], [right, bottom])) = corners.filter(|_| *count > 0.0) {
            // A class of no width is drawn as a line.
            let size = [(right - left).max(2.0), bottom - top];
            svg.rect([left, top], size, Fill::Grey(0xb4), Some(Stroke::new(INK, 0.8)));
        }
    }
    if let Some(limit) = &chart.limit {
        guard(svg, &plot, limit);
    }
    lines(svg, &plot, chart);
    plot.frame(svg, Some(&axis), &counts);
    page.svg.finish(chart.heading.title, &description(chart))
}

/// A little room at both ends.
fn padded(values: &[f64]) -> Vec<f64> {
    let known = values.iter().copied().filter(|v| v.is_finite());
    let [low, high] = known.fold([f64::INFINITY, f64::NEG_INFINITY], |[a, b], v| [a.min(v), b.max(v)]);
    let room = 0.03 * (high - low);
    vec![low - room, high + room]
}

/// The bad side of the limit.
fn beyond(svg: &mut Svg, plot: &Plot, limit: &Limit<'_>) {
    let Some(at) = plot.x.inside(limit.at) else { return };
    let [left, right] = match limit.good {
        Side::Below => [at, plot.right()],
        Side::Above => [plot.left(), at],
    };
    svg.rect([left, plot.top()], [right - left, plot.size()[1]], Fill::Dribbles, None);
}

/// The guard band between the limit and the limit used.
fn guard(svg: &mut Svg, plot: &Plot, limit: &Limit<'_>) {
    let places = limit.guarded.and_then(|guarded| Some((plot.x.inside(limit.at)?, plot.x.inside(guarded)?)));
    if let Some((at, guarded)) = places {
        let (left, right) = (at.min(guarded), at.max(guarded));
        svg.rect([left, plot.top()], [right - left, plot.size()[1]], Fill::Marginal, None);
    }
}

/// Lines of limit, guarded limit and marks, their labels above the plot, moved apart.
fn lines(svg: &mut Svg, plot: &Plot, chart: &Histogram<'_>) {
    let unit = chart.axis.unit;
    let mut found: Vec<(f64, String, Stroke)> = Vec::new();
    let mut add = |value: f64, label: &str, stroke: Stroke| {
        if let Some(place) = plot.x.inside(value) {
            let number = with_unit(value, unit);
            let label = text::fitted(label, 11.0, 250.0 - text::width(&number, 11.0));
            found.push((place, format!("{label} {number}"), stroke));
        }
    };
    if let Some(limit) = &chart.limit {
        add(limit.at, limit.label, Stroke::new(INK, 2.4));
        if let Some(guarded) = limit.guarded {
            add(guarded, "limit used", Stroke::new(INK, 1.6).dashed("8 4"));
        }
    }
    for mark in chart.marks {
        add(mark.at, mark.label, Stroke::new(QUIET, 1.4).dashed("2 3"));
    }
    found.sort_by(|a, b| a.0.total_cmp(&b.0));
    // Three rows in turn, so that neighbours do not overlap.
    let mut free = [f64::NEG_INFINITY; 3];
    let mut placed = Vec::with_capacity(found.len());
    for (place, words, stroke) in &found {
        let half = 0.5 * text::width(words, 11.0);
        let middle =
            apart(&[*place], 0.0, [plot.left() + half, (plot.right() - half).max(plot.left() + half)])[0];
        let row = (0..3).find(|row| free[*row] < middle - half).unwrap_or(2);
        free[row] = middle + half + 10.0;
        let y = plot.top() - 8.0 - 14.0 * row as f64;
        svg.line([*place, y + 3.0], [*place, plot.bottom()], *stroke);
        placed.push(([middle, y], words));
    }
    for (at, words) in placed {
        svg.text(at, words, Letters::new(11.0).middle().halo());
    }
}

fn description(chart: &Histogram<'_>) -> String {
    let unit = chart.axis.unit;
    let total: f64 = chart.counts.iter().sum();
    let mut out = format!(
        "Histogram of {}: {} {} in {} classes.",
        chart.axis.name,
        with_unit(total, ""),
        chart.count_name,
        chart.counts.len()
    );
    let fullest = (0..chart.counts.len()).max_by(|a, b| chart.counts[*a].total_cmp(&chart.counts[*b]));
    if let Some(edges) = fullest.and_then(|i| chart.edges.get(i..i + 2)) {
        out.push_str(&format!(
            " Most lie from {} to {}.",
            with_unit(edges[0], unit),
            with_unit(edges[1], unit)
        ));
    }
    if let Some(limit) = &chart.limit {
        let side = match limit.good {
            Side::Below => "at most",
            Side::Above => "at least",
        };
        out.push_str(&format!(" {}: {side} {}.", limit.label, with_unit(limit.at, unit)));
        if let Some(guarded) = limit.guarded {
            out.push_str(&format!(" With its guard band: {side} {}.", with_unit(guarded, unit)));
        }
    }
    for mark in chart.marks {
        out.push_str(&format!(" {}: {}.", mark.label, with_unit(mark.at, unit)));
    }
    out
}

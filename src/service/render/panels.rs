//! Panels one above the other that share the time axis, with shaded spans.

use super::{
    axis::{Axis, Ruler},
    curve::{CurvePoint, Mark},
    number::{significant, with_unit},
    page::{BELOW, Extent, Heading, MARGIN, Page, Plot, label_width},
    pen::runs,
    svg::{Fill, INK, Letters, Stroke, Svg},
    text, zone,
};

/// Panels over one axis.
#[derive(Debug, Clone, Copy)]
pub struct Panels<'a> {
    /// The words.
    pub heading: Heading<'a>,
    /// The shared axis: time.
    pub x: Axis<'a>,
    /// The panels, from above.
    pub panels: &'a [Panel<'a>],
    /// Spans of the shared axis that are shaded through all panels.
    pub spans: &'a [Span<'a>],
    /// Moments of the shared axis that mean something.
    pub moments: &'a [Mark<'a>],
}

/// One panel. The verdicts of its points are not drawn: spans show them.
#[derive(Debug, Clone, Copy)]
pub struct Panel<'a> {
    /// What it shows.
    pub axis: Axis<'a>,
    /// The curve by ascending x; what is not finite makes a gap.
    pub points: &'a [CurvePoint],
    /// A height that means something.
    pub level: Option<Mark<'a>>,
}

/// A span of the shared axis.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Span<'a> {
    /// From.
    pub from: f64,
    /// To.
    pub to: f64,
    /// What happens in it.
    pub label: &'a str,
}

const WIDTH: f64 = 800.0;
const HEIGHT: f64 = 150.0;
const GAP: f64 = 14.0;
const KEY: f64 = 22.0;

/// Draws the panels.
#[must_use]
pub fn panels(chart: &Panels<'_>) -> String {
    let mut page = Page::new(WIDTH, height(chart), &chart.heading);
    let top = page.top;
    draw(&mut page.svg, chart, top, WIDTH);
    page.svg.finish(chart.heading.title, &description(chart))
}

/// How high they are.
pub(super) fn height(chart: &Panels<'_>) -> f64 {
    let count = chart.panels.len();
    key(chart) + HEIGHT * count as f64 + GAP * count.saturating_sub(1) as f64 + BELOW
}

fn key(chart: &Panels<'_>) -> f64 {
    if chart.spans.is_empty() { 0.0 } else { KEY }
}

/// Draws the panels from this height down, on a sheet of this width.
pub(super) fn draw(svg: &mut Svg, chart: &Panels<'_>, from: f64, width: f64) {
    let count = chart.panels.len();
    let top = from + key(chart);
    let rulers: Vec<Ruler> = chart
        .panels
        .iter()
        .enumerate()
        .map(|(index, panel)| {
            let from = top + (HEIGHT + GAP) * index as f64;
            let values =
                panel.points.iter().flat_map(|p| [p.y, p.low, p.high]).chain(panel.level.map(|l| l.at));
            Ruler::over(values, panel.axis.scale, [from + HEIGHT, from], true)
        })
        .collect();
    let left = MARGIN + 24.0 + rulers.iter().map(label_width).fold(0.0, f64::max);
    let xs: Vec<f64> = chart.panels.iter().flat_map(|p| p.points.iter().map(|p| p.x)).collect();
    let x = Extent { axis: chart.x, values: &xs, round: false };
    for (index, (panel, ruler)) in chart.panels.iter().zip(rulers).enumerate() {
        let plot = Plot::placed(&x, ruler, [left, width - MARGIN - 12.0]);
        spans(svg, &plot, chart.spans);
        plot.grid(svg);
        one(svg, &plot, panel);
        for (number, moment) in chart.moments.iter().enumerate() {
            moment_line(svg, &plot, moment, (index == 0).then_some(number));
        }
        let last = index + 1 == count;
        plot.frame(svg, last.then_some(&chart.x), &panel.axis);
        if index == 0 && !chart.spans.is_empty() {
            legend(svg, chart.spans, [left, from]);
        }
    }
}

fn spans(svg: &mut Svg, plot: &Plot, spans: &[Span<'_>]) {
    for span in spans {
        let places = plot.x.place(span.from).zip(plot.x.place(span.to));
        if let Some((from, to)) = places {
            let (from, to) = (from.clamp(plot.left(), plot.right()), to.clamp(plot.left(), plot.right()));
            // A span too short to see is still shown.
            svg.rect([from, plot.top()], [(to - from).max(1.5), plot.size()[1]], Fill::Dribbles, None);
        }
    }
}

fn one(svg: &mut Svg, plot: &Plot, panel: &Panel<'_>) {
    svg.clipped(plot.corner(), plot.size(), |svg| {
        let band: Vec<Option<([f64; 2], [f64; 2])>> =
            panel.points.iter().map(|p| plot.at(p.x, p.low).zip(plot.at(p.x, p.high))).collect();
        for piece in band.split(Option::is_none).filter(|piece| piece.len() > 1) {
            let lows = piece.iter().flatten().map(|b| b.0);
            let outline: Vec<_> = lows.chain(piece.iter().rev().flatten().map(|b| b.1)).collect();
            svg.polygon(&outline, Fill::Band, None);
        }
        for run in runs(panel.points.iter().map(|p| plot.at(p.x, p.y))) {
            svg.polyline(&run, Stroke::new("#fff", 4.4));
            svg.polyline(&run, Stroke::new(INK, 2.0));
            if let [only] = run[..] {
                svg.circle(only, 3.0, Fill::Colour(INK), None);
            }
        }
    });
    if let Some(level) = panel.level
        && let Some(y) = plot.y.inside(level.at)
    {
        svg.line([plot.left(), y], [plot.right(), y], Stroke::new(INK, 1.3).dashed("8 4"));
        let words = text::fitted(level.label, 11.0, 0.6 * plot.size()[0]);
        let y = if y - plot.top() > 18.0 { y - 5.0 } else { y + 14.0 };
        svg.text([plot.right() - 8.0, y], &words, Letters::new(11.0).end().halo());
    }
}

/// A vertical line; in the first panel with its words, each a row lower.
fn moment_line(svg: &mut Svg, plot: &Plot, moment: &Mark<'_>, number: Option<usize>) {
    let Some(x) = plot.x.inside(moment.at) else { return };
    svg.line([x, plot.top()], [x, plot.bottom()], Stroke::new(INK, 1.0).dashed("3 3"));
    if let Some(number) = number {
        let words = text::fitted(moment.label, 11.0, 220.0);
        let y = plot.top() + 14.0 + 14.0 * (number % 4) as f64;
        if x + 8.0 + text::width(&words, 11.0) < plot.right() {
            svg.text([x + 5.0, y], &words, Letters::new(11.0).halo());
        } else {
            svg.text([x - 5.0, y], &words, Letters::new(11.0).end().halo());
        }
    }
}

/// What the shading means, once for each word.
fn legend(svg: &mut Svg, spans: &[Span<'_>], [left, top]: [f64; 2]) {
    let mut words: Vec<&str> = Vec::new();
    for span in spans {
        if !words.contains(&span.label) {
            words.push(span.label);
        }
    }
    svg.rect(
        [left, top],
        [22.0, 12.0],
        zone::fill(Some(crate::analysis::decision::Verdict::Dribbles)),
        Some(Stroke::new(INK, 0.8)),
    );
    let words = text::fitted(&words.join(", "), 11.0, 600.0);
    svg.text([left + 28.0, top + 10.0], &words, Letters::new(11.0));
}

pub(super) fn description(chart: &Panels<'_>) -> String {
    let mut out = format!("{} panels over {}.", chart.panels.len(), chart.x.name);
    for panel in chart.panels {
        let known = || panel.points.iter().filter(|p| p.y.is_finite());
        let highest = known().max_by(|a, b| a.y.total_cmp(&b.y));
        let lowest = known().min_by(|a, b| a.y.total_cmp(&b.y));
        if let (Some(low), Some(high)) = (lowest, highest) {
            out.push_str(&format!(
                " {}: from {} to {}, highest at {}.",
                panel.axis.name,
                significant(low.y, 3),
                with_unit(high.y, panel.axis.unit),
                with_unit(high.x, chart.x.unit)
            ));
        } else {
            out.push_str(&format!(" {}: nothing known.", panel.axis.name));
        }
    }
    for span in chart.spans.iter().take(20) {
        out.push_str(&format!(
            " {} from {} to {}.",
            span.label,
            significant(span.from, 3),
            with_unit(span.to, chart.x.unit)
        ));
    }
    for moment in chart.moments.iter().take(20) {
        out.push_str(&format!(" {} at {}.", moment.label, with_unit(moment.at, chart.x.unit)));
    }
    out
}

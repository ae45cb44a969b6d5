//! Curves of a quantity against one field, each with its uncertainty band and the verdicts along it.

use super::{
    axis::{Axis, Scale},
    number::{significant, with_unit},
    page::{BELOW, Extent, Heading, Page, Plot, SIZE},
    pen::{EndLabel, Pen, end_labels, label_height, label_room, runs},
    svg::{Fill, INK, Letters, QUIET, Stroke, Svg},
    text,
    zone::{self, Stretch, stretches},
};
use crate::analysis::decision::Verdict;

/// Curves against one field.
#[derive(Debug, Clone, Copy)]
pub struct CurveChart<'a> {
    /// The words.
    pub heading: Heading<'a>,
    /// The field.
    pub x: Axis<'a>,
    /// The quantity.
    pub y: Axis<'a>,
    /// The curves; more than [`MOST_CURVES`] are not drawn, and the note says so.
    pub curves: &'a [Curve<'a>],
    /// Heights that mean something, such as safety factor 1.
    pub levels: &'a [Mark<'a>],
    /// Values of the field that mean something, such as a limit.
    pub limits: &'a [Mark<'a>],
    /// The point that was asked about.
    pub asked: Option<[f64; 2]>,
}

/// One curve.
#[derive(Debug, Clone, Copy)]
pub struct Curve<'a> {
    /// What tells it from the others; may be empty when it is alone.
    pub label: &'a str,
    /// Its points by ascending x. A value that is not finite makes a gap.
    pub points: &'a [CurvePoint],
}

/// A point of a curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurvePoint {
    /// The field.
    pub x: f64,
    /// The quantity; not finite where there is no answer.
    pub y: f64,
    /// Lower end of its interval; not finite where there is none.
    pub low: f64,
    /// Upper end.
    pub high: f64,
    /// The verdict here, where one was given.
    pub verdict: Option<Verdict>,
}

/// A value with its meaning.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Mark<'a> {
    /// The value.
    pub at: f64,
    /// Its meaning.
    pub label: &'a str,
}

/// The most curves of one picture.
pub const MOST_CURVES: usize = 24;
/// The most curves that are drawn with a band; beyond, whiskers show the intervals.
const MOST_BANDS: usize = 3;
const WIDTH: f64 = 820.0;
const HEIGHT: f64 = 340.0;

/// Draws the curves.
#[must_use]
pub fn curve(chart: &CurveChart<'_>) -> String {
    let curves = &chart.curves[..chart.curves.len().min(MOST_CURVES)];
    let judged = curves.iter().any(|c| c.points.iter().any(|p| p.verdict.is_some()));
    let strips = if judged { (zone::STRIP + 4.0) * curves.len() as f64 + 22.0 } else { 0.0 };
    let height = HEIGHT.max(label_height(curves.len()) + 20.0);
    let [core, cut] = vertical_extent(chart, curves);
    let note = note(chart, cut[0] < core[0] || cut[1] > core[1]);
    let heading = Heading { note: &note, ..chart.heading };
    let mut page = Page::new(WIDTH, strips + height + BELOW, &heading);
    let right = label_room(curves.iter().map(|c| c.label));
    let xs: Vec<f64> =
        curves.iter().flat_map(|c| c.points.iter().map(|p| p.x)).chain(chart.asked.map(|a| a[0])).collect();
    let top = page.top + strips;
    let plot = Plot::new(
        &page,
        [top, top + height],
        right,
        &Extent { axis: chart.x, values: &xs, round: false },
        &Extent { axis: chart.y, values: &core, round: true },
    );
    let svg = &mut page.svg;
    plot.grid(svg);
    if judged {
        verdicts(svg, &plot, curves, page.top);
    }
    svg.clipped(plot.corner(), plot.size(), |svg| {
        for (index, curve) in curves.iter().enumerate() {
            intervals(svg, &plot, curve, Pen(index), curves.len());
        }
        marks(svg, &plot, chart);
    });
    let mut labels = Vec::new();
    svg.clipped(plot.corner(), plot.size(), |svg| {
        for (index, curve) in curves.iter().enumerate() {
            let pen = Pen(index);
            let runs = runs(curve.points.iter().map(|p| plot.at(p.x, p.y)));
            runs.iter().for_each(|run| svg.polyline(run, pen.stroke(2.0)));
            if curves.len() > 1 || curve.points.len() <= 14 {
                pen.markers(svg, &runs);
            } else {
                runs.iter().filter(|run| run.len() == 1).for_each(|run| pen.marker(svg, run[0]));
            }
            if let Some(end) = runs.iter().flatten().next_back()
                && !curve.label.is_empty()
            {
                labels.push(EndLabel { text: curve.label, pen, end: *end });
            }
        }
    });
    end_labels(svg, &plot, labels);
    mark_labels(svg, &plot, chart);
    plot.frame(svg, Some(&chart.x), &chart.y);
    if let Some([x, y]) = chart.asked
        && let Some(at) = plot.x.inside(x).zip(plot.y.inside(y))
    {
        asked(svg, &plot, [at.0, at.1], chart);
    }
    if curves.iter().all(|c| c.points.iter().all(|p| !p.y.is_finite())) {
        let middle = [0.5 * (plot.left() + plot.right()), 0.75 * plot.top() + 0.25 * plot.bottom()];
        svg.text(middle, "no point of this range has an answer", Letters::new(SIZE).middle().halo());
    }
    page.svg.finish(chart.heading.title, &description(chart, curves))
}

/// What the vertical axis must show, and how far the intervals reach beyond it. Intervals widen it only so far: else an endless one would press the curves flat.
fn vertical_extent(chart: &CurveChart<'_>, curves: &[Curve<'_>]) -> [[f64; 2]; 2] {
    let log = chart.y.scale == Scale::Log;
    let usable = |v: &f64| v.is_finite() && (!log || *v > 0.0);
    let span = |values: &mut dyn Iterator<Item = f64>| {
        values.filter(usable).fold([f64::INFINITY, f64::NEG_INFINITY], |[a, b], v| [a.min(v), b.max(v)])
    };
    let points = || curves.iter().flat_map(|c| c.points.iter()).filter(|p| usable(&p.y));
    // A level stands a little inside the frame.
    let beside = |m: &Mark<'_>| if log { [m.at / 1.3, m.at * 1.3] } else { [m.at; 2] };
    let others = chart.levels.iter().flat_map(beside).chain(chart.asked.map(|a| a[1]));
    let [low, high] = span(&mut points().map(|p| p.y).chain(others));
    let [lowest, highest] = span(&mut points().flat_map(|p| [p.low, p.high]));
    if low > high {
        return [[low, high]; 2];
    }
    let [least, most] = if log {
        [low / 8.0, high * 8.0]
    } else {
        let room = if high > low { high - low } else { high.abs().max(1.0) };
        [low - room, high + room]
    };
    let core = [low.min(lowest.max(least)), high.max(highest.min(most))];
    [core, [lowest.min(core[0]), highest.max(core[1])]]
}

fn note(chart: &CurveChart<'_>, cut: bool) -> String {
    let mut parts = vec![chart.heading.note.to_owned()];
    parts.extend(cut.then(|| "intervals go on beyond the frame".to_owned()));
    let beyond = chart.curves.len().saturating_sub(MOST_CURVES);
    parts.extend((beyond > 0).then(|| format!("{beyond} more curves are not drawn")));
    parts.retain(|part| !part.is_empty());
    parts.join(" · ")
}

fn curve_stretches(plot: &Plot, curve: &Curve<'_>) -> Vec<Stretch> {
    let judged = curve.points.iter().filter_map(|p| Some((plot.x.place(p.x)?, p.verdict)));
    stretches(&judged.collect::<Vec<_>>())
}

/// A strip of verdicts for each curve, and for a single one its changes drawn down through the plot.
fn verdicts(svg: &mut Svg, plot: &Plot, curves: &[Curve<'_>], top: f64) {
    let occurs = |verdict| curves.iter().any(|c| c.points.iter().any(|p| p.verdict == verdict));
    let words = "verdict";
    svg.text([plot.left(), top + 10.0], words, Letters::new(11.0).colour(QUIET));
    zone::key(svg, plot.left() + text::width(words, 11.0) + 16.0, top, occurs);
    let mut y = top + 18.0;
    for (index, curve) in curves.iter().enumerate() {
        let found = curve_stretches(plot, curve);
        zone::strip(svg, y, &found);
        if curves.len() > 1 {
            let start = plot.right() + 14.0;
            svg.line([start, y + 7.5], [start + 26.0, y + 7.5], Pen(index).stroke(1.8));
            Pen(index).marker(svg, [start + 13.0, y + 7.5]);
        } else {
            for stretch in found.iter().skip(1) {
                let line = Stroke::new(INK, 0.9).dashed("6 3");
                svg.line([stretch.from, y + zone::STRIP], [stretch.from, plot.bottom()], line);
            }
        }
        y += zone::STRIP + 4.0;
    }
}

/// The band of one curve; whiskers where there are many curves or no neighbours.
fn intervals(svg: &mut Svg, plot: &Plot, curve: &Curve<'_>, pen: Pen, count: usize) {
    let at = |p: &CurvePoint, value: f64| p.y.is_finite().then(|| plot.at(p.x, value)).flatten();
    // An interval that reaches zero has no place on a logarithmic axis, but its band reaches the frame.
    let low = |p: &CurvePoint| {
        let value = if plot.y.is_log() && p.low <= 0.0 { 0.1 * plot.y.range()[0] } else { p.low };
        at(p, value)
    };
    let both = |p: &CurvePoint| low(p).zip(at(p, p.high));
    let pairs: Vec<Option<([f64; 2], [f64; 2])>> = curve.points.iter().map(both).collect();
    let whiskers = count > MOST_BANDS;
    let mut next = f64::NEG_INFINITY;
    for piece in pairs.split(Option::is_none).filter(|piece| !piece.is_empty()) {
        let piece: Vec<_> = piece.iter().flatten().copied().collect();
        if piece.len() > 1 && !whiskers {
            let lows: Vec<_> = piece.iter().map(|pair| pair.0).collect();
            let highs: Vec<_> = piece.iter().map(|pair| pair.1).collect();
            let outline: Vec<_> = lows.iter().copied().chain(highs.iter().rev().copied()).collect();
            svg.polygon(&outline, Fill::Band, None);
            for edge in [&lows, &highs] {
                svg.polyline(edge, pen.stroke(0.7));
            }
            continue;
        }
        for (low, high) in &piece {
            let first = 40.0 + 23.0 * (pen.0 % 6) as f64;
            if piece.len() > 14 && low[0] < next.max(piece[0].0[0] + first) {
                continue;
            }
            next = low[0] + 160.0;
            let line = Stroke::new(pen.colour(), 1.0);
            svg.line(*low, *high, line);
            for end in [low, high] {
                svg.line([end[0] - 4.0, end[1]], [end[0] + 4.0, end[1]], line);
            }
        }
    }
}

fn marks(svg: &mut Svg, plot: &Plot, chart: &CurveChart<'_>) {
    for mark in chart.levels {
        if let Some(y) = plot.y.inside(mark.at) {
            svg.line([plot.left(), y], [plot.right(), y], Stroke::new(INK, 1.6));
        }
    }
    for mark in chart.limits {
        if let Some(x) = plot.x.inside(mark.at) {
            svg.line([x, plot.top()], [x, plot.bottom()], Stroke::new(INK, 1.3).dashed("10 3 2 3"));
        }
    }
}

fn mark_labels(svg: &mut Svg, plot: &Plot, chart: &CurveChart<'_>) {
    let [width, height] = plot.size();
    for mark in chart.levels {
        if let Some(y) = plot.y.inside(mark.at) {
            let above = y - plot.top() > 20.0;
            let words = text::fitted(mark.label, 11.0, 0.8 * width);
            let y = if above { y - 5.0 } else { y + 14.0 };
            svg.text([plot.left() + 10.0, y], &words, Letters::new(11.0).halo());
        }
    }
    for mark in chart.limits {
        if let Some(x) = plot.x.inside(mark.at) {
            let words = text::fitted(mark.label, 11.0, 0.9 * height);
            let x = if x - plot.left() > 18.0 { x - 5.0 } else { x + 13.0 };
            svg.text([x, plot.bottom() - 8.0], &words, Letters::new(11.0).upwards().halo());
        }
    }
}

/// The asked point and its numbers, on the side where there is room.
fn asked(svg: &mut Svg, plot: &Plot, at: [f64; 2], chart: &CurveChart<'_>) {
    plot.asked(svg, at);
    let Some([x, y]) = chart.asked else { return };
    let words = format!("asked: {} → {}", with_unit(x, chart.x.unit), with_unit(y, chart.y.unit));
    let letters = Letters::new(11.5).bold().halo().colour(super::svg::ASKED);
    let up = if at[1] - plot.top() > 34.0 { -13.0 } else { 22.0 };
    if at[0] + text::bold_width(&words, 11.5) + 16.0 < plot.right() {
        svg.text([at[0] + 9.0, at[1] + up], &words, letters);
    } else {
        svg.text([(at[0] - 9.0).max(plot.left() + 8.0), at[1] + up], &words, letters.end());
    }
}

fn description(chart: &CurveChart<'_>, curves: &[Curve<'_>]) -> String {
    let mut out = format!("{} against {}.", chart.y.name, chart.x.name);
    for level in chart.levels {
        out.push_str(&format!(" A line at {}: {}.", with_unit(level.at, chart.y.unit), level.label));
    }
    for curve in curves {
        if !curve.label.is_empty() {
            out.push_str(&format!(" {}:", text::fitted(curve.label, SIZE, 400.0)));
        }
        let known: Vec<&CurvePoint> = curve.points.iter().filter(|p| p.y.is_finite()).collect();
        if let (Some(first), Some(last)) = (known.first(), known.last()) {
            let [first, last] = [first, last].map(|p| {
                let interval = if p.low.is_finite() && p.high.is_finite() {
                    format!(" ({} to {})", significant(p.low, 3), significant(p.high, 3))
                } else {
                    String::new()
                };
                format!("{}{interval} at {}", significant(p.y, 3), with_unit(p.x, chart.x.unit))
            });
            out.push_str(&format!(" from {first} to {last}."));
        } else {
            out.push_str(" no point has an answer.");
        }
        let judged: Vec<_> = curve.points.iter().enumerate().map(|(i, p)| (i as f64, p.verdict)).collect();
        if judged.iter().any(|(_, verdict)| verdict.is_some()) {
            for stretch in stretches(&judged).iter().take(12) {
                let [first, last] = stretch.points.map(|i| with_unit(curve.points[i].x, chart.x.unit));
                out.push_str(&format!(" {} from {first} to {last};", zone::word(stretch.verdict)));
            }
        }
    }
    if let Some([x, y]) = chart.asked {
        out.push_str(&format!(" Asked: {} at {}.", with_unit(y, chart.y.unit), with_unit(x, chart.x.unit)));
    }
    out
}

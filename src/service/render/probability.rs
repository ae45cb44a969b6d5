//! Curves of a probability: an operating characteristic with its two points, and the probability of a clean pour with what the bench saw.

use super::{
    axis::Axis,
    curve::Mark,
    number::{percent, with_unit},
    page::{BELOW, Extent, Heading, MARGIN, Page, Plot, bare},
    svg::{Fill, INK, Letters, QUIET, Stroke, Svg},
    text,
};

/// A probability against a quantity.
#[derive(Debug, Clone, Copy)]
pub struct ProbabilityChart<'a> {
    /// The words.
    pub heading: Heading<'a>,
    /// The quantity.
    pub x: Axis<'a>,
    /// What the probability is of.
    pub of: &'a str,
    /// The curve by ascending x: x, probability, low, high; ends not finite where there is no band.
    pub points: &'a [[f64; 4]],
    /// Points of the plan or the like, marked with guide lines: x, probability, meaning.
    pub marked: &'a [(f64, f64, &'a str)],
    /// Values of the quantity that mean something.
    pub limits: &'a [Mark<'a>],
    /// What the bench saw.
    pub seen: &'a [Seen],
}

/// A row of bench data.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Seen {
    /// One pour that stayed clean, at this value.
    Clean(f64),
    /// One pour that dribbled.
    Dribbled(f64),
    /// The onset lies between a pour that dribbled and one that stayed clean.
    Bracket {
        /// Dribbled here.
        dribbled: f64,
        /// Clean here.
        clean: f64,
    },
    /// Onset read off directly, give or take.
    Onset {
        /// The onset.
        at: f64,
        /// Its standard uncertainty.
        standard_uncertainty: f64,
    },
}

const WIDTH: f64 = 760.0;
const HEIGHT: f64 = 330.0;
/// Heights used for rows seen as clean (above), as dribbled (below), and in between.
const STRIP: f64 = 26.0;

/// Draws the curve.
#[must_use]
pub fn probability(chart: &ProbabilityChart<'_>) -> String {
    let key = if chart.seen.is_empty() { 0.0 } else { 22.0 };
    let mut page = Page::new(WIDTH, key + HEIGHT + BELOW, &chart.heading);
    let ends = |seen: &Seen| match *seen {
        Seen::Clean(at) | Seen::Dribbled(at) => [at; 2],
        Seen::Bracket { dribbled, clean } => [dribbled, clean],
        Seen::Onset { at, standard_uncertainty: u } => [at - 2.0 * u, at + 2.0 * u],
    };
    let xs: Vec<f64> = (chart.points.iter().map(|p| p[0]))
        .chain(chart.marked.iter().map(|m| m.0))
        .chain(chart.seen.iter().flat_map(ends))
        .collect();
    let y = bare(chart.of);
    let top = page.top + key;
    let plot = Plot::new(
        &page,
        [top, top + HEIGHT],
        MARGIN + 12.0,
        &Extent { axis: chart.x, values: &xs, round: false },
        // Room above 1 and below 0 for the rows.
        &Extent {
            axis: y,
            values: if chart.seen.is_empty() { &[0.0, 1.0] } else { &[-0.14, 1.14] },
            round: false,
        },
    );
    let svg = &mut page.svg;
    plot.grid(svg);
    svg.clipped(plot.corner(), plot.size(), |svg| {
        curve(svg, &plot, chart);
        for (index, row) in chart.seen.iter().enumerate() {
            seen(svg, &plot, row, index);
        }
    });
    for mark in chart.limits {
        if let Some(x) = plot.x.inside(mark.at) {
            svg.line([x, plot.top()], [x, plot.bottom()], Stroke::new(INK, 1.3).dashed("10 3 2 3"));
            let words = text::fitted(mark.label, 11.0, 0.8 * HEIGHT);
            let x = if x - plot.left() > 18.0 { x - 5.0 } else { x + 13.0 };
            svg.text([x, plot.bottom() - 10.0], &words, Letters::new(11.0).upwards().halo());
        }
    }
    for (index, marked) in chart.marked.iter().enumerate() {
        point(svg, &plot, *marked, &chart.x, index);
    }
    if key > 0.0 {
        legend(svg, [plot.left(), page.top], chart.seen);
    }
    plot.frame(svg, Some(&chart.x), &y);
    page.svg.finish(chart.heading.title, &description(chart))
}

fn curve(svg: &mut Svg, plot: &Plot, chart: &ProbabilityChart<'_>) {
    let at = |x: f64, y: f64| plot.at(x, y);
    let band: Vec<([f64; 2], [f64; 2])> =
        chart.points.iter().filter_map(|p| at(p[0], p[2]).zip(at(p[0], p[3]))).collect();
    if band.len() > 1 {
        let outline: Vec<_> = band.iter().map(|b| b.0).chain(band.iter().rev().map(|b| b.1)).collect();
        svg.polygon(&outline, Fill::Band, None);
        for edge in [band.iter().map(|b| b.0).collect::<Vec<_>>(), band.iter().map(|b| b.1).collect()] {
            svg.polyline(&edge, Stroke::new(INK, 0.7));
        }
    }
    for run in super::pen::runs(chart.points.iter().map(|p| at(p[0], p[1]))) {
        svg.polyline(&run, Stroke::new(INK, 2.2));
        if let [only] = run[..] {
            svg.circle(only, 3.5, Fill::Colour(INK), None);
        }
    }
}

/// A marked point with guide lines to both axes.
fn point(svg: &mut Svg, plot: &Plot, (x, y, label): (f64, f64, &str), axis: &Axis<'_>, index: usize) {
    let Some((px, py)) = plot.x.inside(x).zip(plot.y.inside(y)) else { return };
    let guide = Stroke::new(QUIET, 1.0).dashed("4 3");
    svg.line([plot.left(), py], [px, py], guide);
    svg.line([px, py], [px, plot.bottom()], guide);
    let fill = if index.is_multiple_of(2) { Fill::Colour(INK) } else { Fill::White };
    svg.rect([px - 4.0, py - 4.0], [8.0, 8.0], fill, Some(Stroke::new(INK, 1.5)));
    let words = format!("{label}: {} at {}", percent(y), with_unit(x, axis.unit));
    let words = text::fitted(&words, 11.0, 0.7 * plot.size()[0]);
    let up = if py - plot.top() > 26.0 { -10.0 } else { 18.0 };
    if px + 12.0 + text::width(&words, 11.0) < plot.right() {
        svg.text([px + 9.0, py + up], &words, Letters::new(11.0).halo());
    } else {
        svg.text([px - 9.0, py + up], &words, Letters::new(11.0).end().halo());
    }
}

/// One row of bench data: single pours above and below the curve, brackets and onsets about one half. Rows are set off from each other a little.
fn seen(svg: &mut Svg, plot: &Plot, row: &Seen, index: usize) {
    let place = |value: f64| plot.x.inside(value);
    let shift = STRIP * ((index * 7 % 10) as f64 / 10.0 - 0.45);
    let height = |p: f64| plot.y.place(p).unwrap_or(plot.bottom());
    let line = Some(Stroke::new(INK, 1.2));
    match *row {
        Seen::Clean(at) => {
            if let Some(x) = place(at) {
                svg.circle([x, height(1.07) + shift], 3.4, Fill::White, line);
            }
        }
        Seen::Dribbled(at) => {
            if let Some(x) = place(at) {
                let y = height(-0.07) + shift;
                svg.polygon(&[[x, y + 4.2], [x - 4.0, y - 3.0], [x + 4.0, y - 3.0]], Fill::Colour(INK), None);
            }
        }
        Seen::Bracket { dribbled, clean } => {
            let y = height(0.5) + 2.4 * shift;
            if let Some((from, to)) = place(dribbled).zip(place(clean)) {
                svg.line([from, y], [to, y], Stroke::new(INK, 1.3));
                svg.polygon(
                    &[[from, y + 4.2], [from - 4.0, y - 3.0], [from + 4.0, y - 3.0]],
                    Fill::Colour(INK),
                    None,
                );
                svg.circle([to, y], 3.4, Fill::White, line);
            }
        }
        Seen::Onset { at, standard_uncertainty } => {
            let y = height(0.5) + 2.4 * shift;
            if let Some(x) = place(at) {
                let ends = [at - standard_uncertainty, at + standard_uncertainty]
                    .map(|v| plot.x.place(v).unwrap_or(x));
                svg.line([ends[0], y], [ends[1], y], Stroke::new(INK, 1.3));
                let diamond = [[x, y - 4.8], [x + 4.8, y], [x, y + 4.8], [x - 4.8, y]];
                svg.polygon(&diamond, Fill::Grey(0x9a), line);
            }
        }
    }
}

fn legend(svg: &mut Svg, [left, top]: [f64; 2], rows: &[Seen]) {
    let mut x = left + 6.0;
    let y = top + 8.0;
    let has = |test: fn(&Seen) -> bool| rows.iter().any(test);
    let line = Some(Stroke::new(INK, 1.2));
    let down = |x: f64| [[x, y + 4.2], [x - 4.0, y - 3.0], [x + 4.0, y - 3.0]];
    let words = |svg: &mut Svg, from: f64, words: &str| {
        svg.text([from, y + 4.0], words, Letters::new(11.0));
        from + text::width(words, 11.0) + 24.0
    };
    if has(|s| matches!(s, Seen::Clean(_))) {
        svg.circle([x, y], 3.4, Fill::White, line);
        x = words(svg, x + 10.0, "poured clean");
    }
    if has(|s| matches!(s, Seen::Dribbled(_))) {
        svg.polygon(&down(x), Fill::Colour(INK), None);
        x = words(svg, x + 10.0, "dribbled");
    }
    if has(|s| matches!(s, Seen::Bracket { .. })) {
        svg.line([x, y], [x + 24.0, y], Stroke::new(INK, 1.3));
        svg.polygon(&down(x), Fill::Colour(INK), None);
        svg.circle([x + 24.0, y], 3.4, Fill::White, line);
        x = words(svg, x + 34.0, "onset between");
    }
    if has(|s| matches!(s, Seen::Onset { .. })) {
        svg.line([x - 8.0, y], [x + 8.0, y], Stroke::new(INK, 1.3));
        svg.polygon(&[[x, y - 4.8], [x + 4.8, y], [x, y + 4.8], [x - 4.8, y]], Fill::Grey(0x9a), line);
        words(svg, x + 14.0, "onset, ± its standard uncertainty");
    }
}

fn description(chart: &ProbabilityChart<'_>) -> String {
    let mut out = format!("{} against {}.", chart.of, chart.x.name);
    if let (Some(first), Some(last)) = (chart.points.first(), chart.points.last()) {
        out.push_str(&format!(
            " From {} at {} to {} at {}.",
            percent(first[1]),
            with_unit(first[0], chart.x.unit),
            percent(last[1]),
            with_unit(last[0], chart.x.unit)
        ));
    }
    for (x, p, label) in chart.marked {
        out.push_str(&format!(" {label}: {} at {}.", percent(*p), with_unit(*x, chart.x.unit)));
    }
    if !chart.seen.is_empty() {
        let clean = chart.seen.iter().filter(|s| matches!(s, Seen::Clean(_))).count();
        let dribbled = chart.seen.iter().filter(|s| matches!(s, Seen::Dribbled(_))).count();
        let others = chart.seen.len() - clean - dribbled;
        out.push_str(&format!(" Bench: {clean} pours clean, {dribbled} dribbled, {others} onsets."));
    }
    out
}

//! Bars of sensitivity: one or two shares for each input, with their intervals.

use super::{
    axis::{Axis, Ruler},
    number::{significant, with_unit},
    page::{BELOW, Extent, Heading, MARGIN, Page, Plot, SIZE, bare},
    svg::{Fill, INK, Letters, Stroke, Svg},
    text,
};

/// Bars, one below the other.
#[derive(Debug, Clone, Copy)]
pub struct BarChart<'a> {
    /// The words.
    pub heading: Heading<'a>,
    /// What the bars measure.
    pub axis: Axis<'a>,
    /// What the first and the second bar of each input are.
    pub series: &'a [&'a str],
    /// The inputs, in the order in which they are drawn; more than [`MOST_BARS`] are not, and the note says so.
    pub bars: &'a [Bar<'a>],
}

/// One input.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bar<'a> {
    /// Its name.
    pub label: &'a str,
    /// One value for each series: value, low, high; ends not finite where there is no interval.
    pub values: &'a [[f64; 3]],
}

/// The most inputs of one picture.
pub const MOST_BARS: usize = 30;

const WIDTH: f64 = 760.0;
const THICK: f64 = 12.0;
const GAP: f64 = 12.0;
const FILLS: [Fill; 3] = [Fill::Grey(0x5a), Fill::White, Fill::Dribbles];

/// Draws the bars.
#[must_use]
pub fn bars(chart: &BarChart<'_>) -> String {
    let shown = &chart.bars[..chart.bars.len().min(MOST_BARS)];
    let beyond = chart.bars.len() - shown.len();
    let note = if beyond > 0 {
        format!("{} · {beyond} more are not drawn", chart.heading.note)
    } else {
        chart.heading.note.to_owned()
    };
    let series = chart.series.len().clamp(1, FILLS.len());
    let row = THICK * series as f64 + GAP;
    let key = if chart.series.len() > 1 { 24.0 } else { 0.0 };
    let height = row * shown.len().max(1) as f64 + GAP;
    let mut page = Page::new(WIDTH, key + height + BELOW, &Heading { note: &note, ..chart.heading });
    let names = shown.iter().map(|b| text::width(b.label, SIZE)).fold(0.0, f64::max).min(280.0);
    let top = page.top + key;
    let values: Vec<f64> =
        shown.iter().flat_map(|b| b.values.iter().flatten().copied()).chain([0.0]).collect();
    // The vertical axis only places the box.
    let y = Ruler::over([0.0, 1.0], bare("").scale, [top + height, top], false);
    let x = Extent { axis: chart.axis, values: &values, round: true };
    let plot = Plot::placed(&x, y, [MARGIN + names + 12.0, WIDTH - MARGIN - 64.0]);
    let svg = &mut page.svg;
    if key > 0.0 {
        legend(svg, chart.series, [plot.left(), page.top]);
    }
    let line = Stroke::new(INK, 1.0);
    for tick in plot.x.ticks.iter().filter(|t| !t.label.is_empty()) {
        svg.line([tick.place, top], [tick.place, top + height], Stroke::new(super::svg::GRID, 0.8));
        svg.text([tick.place, top + height + 16.0], &tick.label, Letters::new(SIZE).middle());
    }
    let zero = plot.x.place(0.0).unwrap_or(plot.left());
    for (index, bar) in shown.iter().enumerate() {
        let y = top + GAP + row * index as f64;
        let words = text::fitted(bar.label, SIZE, names);
        svg.text(
            [plot.left() - 8.0, y + 0.5 * THICK * series as f64 + 4.0],
            &words,
            Letters::new(SIZE).end(),
        );
        for (at, value) in bar.values.iter().take(series).enumerate() {
            one(svg, &plot, zero, y + THICK * at as f64, FILLS[at], *value);
        }
    }
    svg.line([zero, top], [zero, top + height], Stroke::new(INK, 1.4));
    svg.rect(plot.corner(), plot.size(), Fill::None, Some(line));
    let title = plot.x.title(&chart.axis, SIZE, plot.size()[0]);
    svg.text([0.5 * (plot.left() + plot.right()), top + height + 35.0], &title, Letters::new(SIZE).middle());
    page.svg.finish(chart.heading.title, &description(chart, shown))
}

/// One bar with its interval and its number.
fn one(svg: &mut Svg, plot: &Plot, zero: f64, y: f64, fill: Fill, [value, low, high]: [f64; 3]) {
    let Some(end) = plot.x.place(value) else { return };
    svg.rect([zero.min(end), y], [(end - zero).abs(), THICK - 2.0], fill, Some(Stroke::new(INK, 0.9)));
    let middle = y + 0.5 * THICK - 1.0;
    let mut far = end;
    if let Some((low, high)) = plot.x.place(low).zip(plot.x.place(high)) {
        for (width, colour) in [(3.4, "#fff"), (1.2, INK)] {
            svg.line([low, middle], [high, middle], Stroke::new(colour, width));
        }
        for place in [low, high] {
            svg.line([place, middle - 3.5], [place, middle + 3.5], Stroke::new(INK, 1.2));
        }
        far = if value < 0.0 { far.min(low) } else { far.max(high) };
    }
    let words = significant(value, 2);
    let letters = Letters::new(10.5).halo();
    if value < 0.0 && far - 6.0 - text::width(&words, 10.5) > plot.left() {
        svg.text([far - 6.0, middle + 3.8], &words, letters.end());
    } else {
        svg.text([far.max(zero) + 6.0, middle + 3.8], &words, letters);
    }
}

fn legend(svg: &mut Svg, series: &[&str], [left, top]: [f64; 2]) {
    let mut x = left;
    for (name, fill) in series.iter().zip(FILLS) {
        let words = text::fitted(name, 11.0, 200.0);
        svg.rect([x, top + 2.0], [22.0, 11.0], fill, Some(Stroke::new(INK, 0.9)));
        svg.text([x + 28.0, top + 11.5], &words, Letters::new(11.0));
        x += 28.0 + text::width(&words, 11.0) + 22.0;
    }
}

fn description(chart: &BarChart<'_>, shown: &[Bar<'_>]) -> String {
    let mut out = format!("Bars of {}.", chart.axis.name);
    for bar in shown {
        out.push_str(&format!(" {}:", bar.label));
        for (index, [value, low, high]) in bar.values.iter().enumerate() {
            let name = chart.series.get(index).copied().unwrap_or_default();
            out.push_str(&format!(" {name} {}", with_unit(*value, chart.axis.unit)));
            if low.is_finite() && high.is_finite() {
                out.push_str(&format!(" ({} to {})", significant(*low, 3), significant(*high, 3)));
            }
            out.push(if index + 1 < bar.values.len() { ',' } else { '.' });
        }
    }
    out
}

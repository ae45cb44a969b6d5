//! The sheet of a picture: heading above, note below, and the box of a plot with its grid and axes.

use super::{
    axis::{Axis, Ruler, Scale},
    svg::{Fill, GRID, INK, Letters, QUIET, Stroke, Svg},
    text,
};

/// The words above and below a picture.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Heading<'a> {
    /// What the picture says or shows.
    pub title: &'a str,
    /// Under which conditions.
    pub subtitle: &'a str,
    /// Small print below: model, fingerprint, what was left out.
    pub note: &'a str,
}

/// Margin round everything.
pub(super) const MARGIN: f64 = 18.0;
/// Size of ordinary letters.
pub(super) const SIZE: f64 = 12.0;
const TITLE: f64 = 16.0;
const NOTE: f64 = 10.0;
const PLAIN: Letters = Letters::new(SIZE);

/// A sheet with its heading set, and what is left of it.
pub(super) struct Page {
    pub svg: Svg,
    pub width: f64,
    /// Where the body begins.
    pub top: f64,
    /// Where the body ends.
    pub bottom: f64,
}

impl Page {
    /// A sheet of this width with a body of this height.
    pub(super) fn new(width: f64, body: f64, heading: &Heading<'_>) -> Self {
        let room = width - 2.0 * MARGIN;
        // Bold letters are wider.
        let titles = text::wrapped(heading.title, TITLE, room / 1.14, 3);
        let subtitles = text::wrapped(heading.subtitle, SIZE, room, 3);
        let notes = text::wrapped(heading.note, NOTE, room, 3);
        let top = MARGIN + 20.0 * titles.len() as f64 + 16.0 * subtitles.len() as f64 + 8.0;
        let bottom = top + body;
        let mut svg = Svg::new(width, bottom + 14.0 * notes.len() as f64 + MARGIN * 0.7);
        let mut y = MARGIN - 4.0;
        for line in &titles {
            y += 20.0;
            svg.text([MARGIN, y], line, Letters::new(TITLE).bold());
        }
        for line in &subtitles {
            y += 16.0;
            svg.text([MARGIN, y], line, PLAIN.colour("#3d3d3d"));
        }
        for (index, line) in notes.iter().enumerate() {
            svg.text([MARGIN, bottom + 11.0 + 14.0 * index as f64], line, Letters::new(NOTE).colour(QUIET));
        }
        Self { svg, width, top, bottom }
    }
}

/// The box of a plot.
#[derive(Debug, Clone)]
pub(super) struct Plot {
    pub x: Ruler,
    pub y: Ruler,
}

/// What a plot spans.
pub(super) struct Extent<'a> {
    pub axis: Axis<'a>,
    pub values: &'a [f64],
    /// Widen to full ticks.
    pub round: bool,
}

/// Room below the box for tick labels and the axis title.
pub(super) const BELOW: f64 = 46.0;

impl Plot {
    /// A plot between these heights; on the left room is left for the labels, on the right `right`.
    pub(super) fn new(
        page: &Page,
        [top, bottom]: [f64; 2],
        right: f64,
        x: &Extent<'_>,
        y: &Extent<'_>,
    ) -> Self {
        let y = Ruler::over(y.values.iter().copied(), y.axis.scale, [bottom, top], y.round);
        let left = MARGIN + 24.0 + label_width(&y);
        Self::placed(x, y, [left, page.width - right])
    }

    /// A plot with this vertical axis, between these sides.
    pub(super) fn placed(x: &Extent<'_>, y: Ruler, sides: [f64; 2]) -> Self {
        Self { x: Ruler::over(x.values.iter().copied(), x.axis.scale, sides, x.round), y }
    }

    pub(super) fn left(&self) -> f64 {
        self.x.start()
    }
    pub(super) fn right(&self) -> f64 {
        self.x.end()
    }
    pub(super) fn top(&self) -> f64 {
        self.y.end()
    }
    pub(super) fn bottom(&self) -> f64 {
        self.y.start()
    }
    pub(super) fn corner(&self) -> [f64; 2] {
        [self.left(), self.top()]
    }
    pub(super) fn size(&self) -> [f64; 2] {
        [self.right() - self.left(), self.bottom() - self.top()]
    }

    /// A point of the plot; `None` where either value has no place.
    pub(super) fn at(&self, x: f64, y: f64) -> Option<[f64; 2]> {
        Some([self.x.place(x)?, self.y.place(y)?])
    }

    /// Grid lines at the labelled ticks; to be drawn first.
    pub(super) fn grid(&self, svg: &mut Svg) {
        let line = Stroke::new(GRID, 0.8);
        for tick in self.x.ticks.iter().filter(|t| !t.label.is_empty()) {
            svg.line([tick.place, self.top()], [tick.place, self.bottom()], line);
        }
        for tick in self.y.ticks.iter().filter(|t| !t.label.is_empty()) {
            svg.line([self.left(), tick.place], [self.right(), tick.place], line);
        }
    }

    /// The frame with ticks, labels and titles; to be drawn last. Without a title for x, its labels are left out too: panels share the lowest one's.
    pub(super) fn frame(&self, svg: &mut Svg, x: Option<&Axis<'_>>, y: &Axis<'_>) {
        let line = Stroke::new(INK, 1.0);
        svg.rect(self.corner(), self.size(), Fill::None, Some(line));
        let mut free = f64::NEG_INFINITY;
        for tick in &self.x.ticks {
            let length = if tick.label.is_empty() { 3.0 } else { 5.5 };
            svg.line([tick.place, self.bottom()], [tick.place, self.bottom() - length], line);
            let half = 0.5 * text::width(&tick.label, SIZE);
            if x.is_some() && tick.place - half > free {
                svg.text([tick.place, self.bottom() + 16.0], &tick.label, PLAIN.middle());
                free = if tick.label.is_empty() { free } else { tick.place + half + 6.0 };
            }
        }
        for tick in &self.y.ticks {
            let length = if tick.label.is_empty() { 3.0 } else { 5.5 };
            svg.line([self.left(), tick.place], [self.left() + length, tick.place], line);
            svg.text([self.left() - 6.0, tick.place + 4.0], &tick.label, PLAIN.end());
        }
        let [width, height] = self.size();
        if let Some(axis) = x {
            let title = self.x.title(axis, SIZE, width.max(200.0));
            svg.text([self.left() + 0.5 * width, self.bottom() + 35.0], &title, PLAIN.middle());
        }
        let title = self.y.title(y, SIZE, height);
        svg.text([MARGIN + 10.0, self.top() + 0.5 * height], &title, PLAIN.middle().upwards());
    }

    /// A cross in a ring: the point that was asked about.
    pub(super) fn asked(&self, svg: &mut Svg, at: [f64; 2]) {
        let [x, y] = at;
        let colour = super::svg::ASKED;
        svg.circle(at, 6.5, Fill::None, Some(Stroke::new("#fff", 4.5)));
        svg.circle(at, 6.5, Fill::None, Some(Stroke::new(colour, 2.0)));
        for [dx, dy] in [[1.0, 0.0], [-1.0, 0.0], [0.0, 1.0], [0.0, -1.0]] {
            svg.line([x + 3.0 * dx, y + 3.0 * dy], [x + 11.0 * dx, y + 11.0 * dy], Stroke::new(colour, 2.0));
        }
    }
}

/// The widest tick label.
pub(super) fn label_width(ruler: &Ruler) -> f64 {
    ruler.ticks.iter().map(|tick| text::width(&tick.label, SIZE)).fold(0.0, f64::max)
}

/// An axis without unit, linear: shares, probabilities, counts.
pub(super) const fn bare(name: &str) -> Axis<'_> {
    Axis { name, unit: "", scale: Scale::Linear }
}

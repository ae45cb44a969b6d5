//! Pens: line styles and markers by which curves are told apart without colour, and labels that stand beside what they name.

use super::{
    page::{Plot, SIZE},
    svg::{Fill, INK, Letters, QUIET, Stroke, Svg},
    text,
};

/// Dash, colour and marker of the first, second … curve. Colours differ in lightness as well as hue; dash and marker alone suffice.
const DASHES: [&str; 6] = ["", "9 4", "2.5 3", "11 3 2.5 3", "5 3", "14 3 2.5 3 2.5 3"];
const COLOURS: [&str; 6] = [INK, "#1d5c85", "#8a3d00", "#5b3a8c", "#35693a", "#6b6b6b"];

/// The pen of one curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Pen(pub usize);

impl Pen {
    pub(super) fn stroke(self, width: f64) -> Stroke {
        Stroke::new(self.colour(), width).dashed(DASHES[self.0 % DASHES.len()])
    }

    pub(super) fn colour(self) -> &'static str {
        COLOURS[self.0 % COLOURS.len()]
    }

    /// One of six markers; the second six curves have them filled the other way.
    pub(super) fn marker(self, svg: &mut Svg, [x, y]: [f64; 2]) {
        let turn = self.0 % 6;
        let filled = (turn.is_multiple_of(2)) != (self.0 / 6 % 2 == 1);
        let fill = if filled { Fill::Colour(self.colour()) } else { Fill::White };
        let stroke = Some(Stroke::new(self.colour(), 1.4));
        match turn {
            0 | 1 => svg.circle([x, y], 3.4, fill, stroke),
            2 | 3 => svg.polygon(
                &[[x - 3.2, y - 3.2], [x + 3.2, y - 3.2], [x + 3.2, y + 3.2], [x - 3.2, y + 3.2]],
                fill,
                stroke,
            ),
            4 => svg.polygon(&[[x, y - 4.4], [x + 4.2, y + 3.2], [x - 4.2, y + 3.2]], fill, stroke),
            _ => svg.polygon(&[[x, y - 4.6], [x + 4.6, y], [x, y + 4.6], [x - 4.6, y]], fill, stroke),
        }
    }

    /// Markers along a curve: at every point of a short one, else spread out, each pen starting elsewhere.
    pub(super) fn markers(self, svg: &mut Svg, runs: &[Vec<[f64; 2]>]) {
        let count: usize = runs.iter().map(Vec::len).sum();
        let first = 28.0 + 17.0 * (self.0 % 6) as f64;
        let mut next = f64::NEG_INFINITY;
        let mut begun = false;
        for point in runs.iter().flatten() {
            if !begun {
                next = point[0] + first;
                begun = true;
            }
            if count <= 14 || point[0] >= next {
                self.marker(svg, *point);
                next = point[0] + 105.0;
            }
        }
    }
}

/// The unbroken runs of a row of points, where a point may have no place.
pub(super) fn runs(points: impl IntoIterator<Item = Option<[f64; 2]>>) -> Vec<Vec<[f64; 2]>> {
    let mut runs: Vec<Vec<[f64; 2]>> = Vec::new();
    let mut open = false;
    for point in points {
        match point {
            Some(point) if open => {
                if let Some(run) = runs.last_mut() {
                    run.push(point);
                }
            }
            Some(point) => runs.push(vec![point]),
            None => {}
        }
        open = point.is_some();
    }
    runs
}

/// A label in the margin right of a plot, for a curve that ends at `end`.
pub(super) struct EndLabel<'a> {
    pub text: &'a str,
    pub pen: Pen,
    pub end: [f64; 2],
}

/// Gap between lines of labels.
const LINE: f64 = 15.0;
/// Length of the piece of line that stands before a label.
const SAMPLE: f64 = 26.0;
/// Widest label.
const WIDEST: f64 = 190.0;

/// Room to leave right of a plot for these labels.
pub(super) fn label_room<'a>(labels: impl Iterator<Item = &'a str>) -> f64 {
    let widest = labels.map(|label| text::width(label, SIZE)).fold(0.0, f64::max);
    if widest > 0.0 { widest.min(WIDEST) + SAMPLE + 34.0 } else { 26.0 }
}

/// Height that so many labels need.
pub(super) fn label_height(count: usize) -> f64 {
    LINE * count as f64
}

/// Writes the labels in the right margin, moved apart where they would overlap.
pub(super) fn end_labels(svg: &mut Svg, plot: &Plot, mut labels: Vec<EndLabel<'_>>) {
    labels.sort_by(|a, b| a.end[1].total_cmp(&b.end[1]));
    let wanted: Vec<f64> = labels.iter().map(|label| label.end[1]).collect();
    let heights = apart(&wanted, LINE, [plot.top() + 6.0, plot.bottom() - 6.0]);
    for (label, y) in labels.iter().zip(heights) {
        let start = plot.right() + 14.0;
        let near = [(label.end[0] + 3.0).min(plot.right()), label.end[1].clamp(plot.top(), plot.bottom())];
        svg.line(near, [start, y], Stroke::new(QUIET, 0.7).dashed("1.5 2"));
        svg.line([start, y], [start + SAMPLE, y], label.pen.stroke(1.8));
        label.pen.marker(svg, [start + 0.5 * SAMPLE, y]);
        let words = text::fitted(label.text, SIZE, WIDEST);
        svg.text([start + SAMPLE + 5.0, y + 4.0], &words, Letters::new(SIZE));
    }
}

/// Heights near the wanted ones (ascending), at least `gap` apart and between the limits while there is room.
pub(super) fn apart(wanted: &[f64], gap: f64, [low, high]: [f64; 2]) -> Vec<f64> {
    let mut places: Vec<f64> = Vec::with_capacity(wanted.len());
    for &at in wanted {
        let least = places.last().map_or(low, |last| last + gap);
        places.push(at.min(high).max(least));
    }
    let mut most = high;
    for place in places.iter_mut().rev() {
        *place = place.min(most);
        most = *place - gap;
    }
    places
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn labels_are_moved_apart_within_the_limits() {
        let places = apart(&[10.0, 11.0, 95.0, 99.0, 200.0], 15.0, [0.0, 100.0]);
        assert!(places.windows(2).all(|pair| pair[1] - pair[0] >= 15.0 - 1e-9), "{places:?}");
        assert!(places[0] >= 0.0 && places[4] <= 100.0, "{places:?}");
        assert_eq!(apart(&[50.0], 15.0, [0.0, 100.0]), [50.0]);
    }

    #[test]
    fn gaps_break_a_curve() {
        let points = [Some([0.0, 0.0]), Some([1.0, 0.0]), None, Some([3.0, 0.0])];
        let found = runs(points);
        assert_eq!(found.iter().map(Vec::len).collect::<Vec<_>>(), [2, 1]);
    }
}

//! Verdict zones: how each verdict is filled, and strips that show which verdict holds where along an axis.

use super::{
    svg::{Fill, INK, Letters, Stroke, Svg},
    text,
};
use crate::analysis::decision::Verdict;

/// The fill of a verdict; none where nothing was decided.
pub(super) const fn fill(verdict: Option<Verdict>) -> Fill {
    match verdict {
        Some(Verdict::Clean) => Fill::White,
        Some(Verdict::Marginal) => Fill::Marginal,
        Some(Verdict::Dribbles) => Fill::Dribbles,
        None => Fill::Missing,
    }
}

/// The word for it.
pub(super) const fn word(verdict: Option<Verdict>) -> &'static str {
    match verdict {
        Some(verdict) => verdict.as_str(),
        None => "no answer",
    }
}

/// A stretch of an axis with one verdict, from place to place on the sheet.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Stretch {
    pub from: f64,
    pub to: f64,
    pub verdict: Option<Verdict>,
    /// First and last index of the points in it.
    pub points: [usize; 2],
}

/// The stretches of a row of points, given by place (ascending) and verdict. The change is drawn half way between two points.
pub(super) fn stretches(points: &[(f64, Option<Verdict>)]) -> Vec<Stretch> {
    let mut found: Vec<Stretch> = Vec::new();
    for (index, &(place, verdict)) in points.iter().enumerate() {
        match found.last_mut() {
            Some(last) if last.verdict == verdict => {
                last.to = place;
                last.points[1] = index;
            }
            Some(last) => {
                let middle = 0.5 * (points[index - 1].0 + place);
                last.to = middle;
                found.push(Stretch { from: middle, to: place, verdict, points: [index, index] });
            }
            None => found.push(Stretch { from: place, to: place, verdict, points: [index, index] }),
        }
    }
    if let [only] = found.as_mut_slice()
        && only.to - only.from < 12.0
    {
        (only.from, only.to) = (only.from - 6.0, only.to + 6.0);
    }
    found
}

/// Height of a strip.
pub(super) const STRIP: f64 = 15.0;

/// Draws a strip of verdicts, named where there is room for the word.
pub(super) fn strip(svg: &mut Svg, top: f64, stretches: &[Stretch]) {
    for stretch in stretches {
        let width = stretch.to - stretch.from;
        svg.rect([stretch.from, top], [width, STRIP], fill(stretch.verdict), Some(Stroke::new(INK, 0.8)));
        let word = word(stretch.verdict);
        if text::width(word, 11.0) + 8.0 < width {
            let middle = 0.5 * (stretch.from + stretch.to);
            svg.text([middle, top + 11.5], word, Letters::new(11.0).middle().halo());
        }
    }
}

/// The key to the fills, from `left` on; only those that occur.
pub(super) fn key(svg: &mut Svg, left: f64, top: f64, occurring: impl Fn(Option<Verdict>) -> bool) {
    let mut x = left;
    for verdict in [Some(Verdict::Clean), Some(Verdict::Marginal), Some(Verdict::Dribbles), None] {
        if occurring(verdict) {
            svg.rect([x, top], [22.0, 12.0], fill(verdict), Some(Stroke::new(INK, 0.8)));
            let word = word(verdict);
            svg.text([x + 27.0, top + 10.0], word, Letters::new(11.0));
            x += 27.0 + text::width(word, 11.0) + 20.0;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn neighbours_with_one_verdict_make_one_stretch() {
        use Verdict::{Clean, Marginal};
        let points =
            [(0.0, Some(Clean)), (10.0, Some(Clean)), (20.0, Some(Marginal)), (30.0, None), (40.0, None)];
        let found = stretches(&points);
        let ends: Vec<_> = found.iter().map(|s| (s.from, s.to, s.verdict)).collect();
        assert_eq!(ends, [(0.0, 15.0, Some(Clean)), (15.0, 25.0, Some(Marginal)), (25.0, 40.0, None)]);
        assert_eq!(found[2].points, [3, 4]);
        assert!(stretches(&[]).is_empty());
    }
}

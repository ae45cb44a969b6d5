//! Where the names of the verdict zones stand: at the widest place of each, clear of everything else.

use super::{MapChart, NAME, asked_place};
use crate::{
    analysis::decision::Verdict,
    service::render::{page::Plot, text, zone::word},
};

/// The name of each zone at its widest place.
pub(super) fn zone_names(
    chart: &MapChart<'_>,
    plot: &Plot,
    taken: &mut Vec<[f64; 4]>,
) -> Vec<([f64; 2], &'static str)> {
    let (width, height) = (chart.xs.len(), chart.ys.len());
    if chart.verdicts.len() != width * height || width == 0 {
        return Vec::new();
    }
    let place = |i: usize| Some([plot.x.place(chart.xs[i % width])?, plot.y.place(chart.ys[i / width])?]);
    let places: Vec<[f64; 2]> = (0..width * height).filter_map(place).collect();
    if places.len() != width * height {
        return Vec::new();
    }
    let mut names: Vec<([f64; 2], &'static str)> = Vec::new();
    for verdict in [Verdict::Clean, Verdict::Marginal, Verdict::Dribbles] {
        let name = word(Some(verdict));
        let clear = clearance(
            &places,
            width,
            |i| chart.verdicts[i] == Some(verdict),
            plot,
            chart.asked.and_then(|_| asked_place(chart, plot)),
        );
        let mut order: Vec<usize> = (0..places.len()).filter(|i| clear[*i] > 12.0).collect();
        order.sort_by(|a, b| clear[*b].total_cmp(&clear[*a]));
        // Moved in from the frame; the first place that overlaps nothing.
        let half = 0.5 * text::bold_width(name, NAME) + 6.0;
        let within = |at: f64, low: f64, high: f64| at.min(high).max(low);
        let moved = |i: &usize| {
            let [x, y] = places[*i];
            [
                within(x, plot.left() + half, plot.right() - half),
                within(y, plot.top() + 14.0, plot.bottom() - 14.0),
            ]
        };
        let free = |at: &[f64; 2]| {
            let here = around(*at, name, NAME);
            !taken.iter().any(|other| overlaps(other, &here))
        };
        if let Some(at) = order.iter().map(moved).find(free) {
            taken.push(around(at, name, NAME));
            names.push((at, name));
        }
    }
    names
}

/// Distance on the sheet, roughly, from each point to the nearest one that does not belong, to the frame or to the asked point: two sweeps over the grid.
fn clearance(
    places: &[[f64; 2]],
    width: usize,
    belongs: impl Fn(usize) -> bool,
    plot: &Plot,
    asked: Option<[f64; 2]>,
) -> Vec<f64> {
    let edge = |[x, y]: [f64; 2]| {
        // Words are wide: sideways counts a third.
        let sideways = (x - plot.left()).min(plot.right() - x) / 3.0;
        let frame = sideways.min(y - plot.top()).min(plot.bottom() - y).max(0.0) + 13.0;
        asked.map_or(frame, |a| frame.min(libm::hypot((x - a[0]) / 3.0, y - a[1])))
    };
    let mut clear: Vec<f64> =
        (0..places.len()).map(|i| if belongs(i) { edge(places[i]) } else { 0.0 }).collect();
    let step =
        |a: usize, b: usize| libm::hypot((places[a][0] - places[b][0]) / 3.0, places[a][1] - places[b][1]);
    let mut relax = |i: usize, neighbours: [Option<usize>; 4]| {
        for other in neighbours.into_iter().flatten().filter(|o| *o < places.len()) {
            clear[i] = clear[i].min(clear[other] + step(i, other));
        }
    };
    for i in 0..places.len() {
        let (left, right) = (i % width > 0, i % width + 1 < width);
        let up = i.checked_sub(width);
        relax(
            i,
            [
                left.then(|| i - 1),
                up,
                up.filter(|_| left).map(|u| u - 1),
                up.filter(|_| right).map(|u| u + 1),
            ],
        );
    }
    for i in (0..places.len()).rev() {
        let (left, right) = (i % width > 0, i % width + 1 < width);
        let down = i + width;
        relax(i, [right.then(|| i + 1), Some(down), left.then(|| down - 1), right.then(|| down + 1)]);
    }
    clear
}

pub(super) fn around(at: [f64; 2], words: &str, size: f64) -> [f64; 4] {
    let half = 0.5 * text::bold_width(words, size) + 4.0;
    [at[0] - half, at[1] - 0.5 * size - 4.0, at[0] + half, at[1] + 0.5 * size + 4.0]
}

pub(super) fn overlaps(a: &[f64; 4], b: &[f64; 4]) -> bool {
    a[0] < b[2] && b[0] < a[2] && a[1] < b[3] && b[1] < a[3]
}

//! Lines and areas of equal value over a grid, by marching over triangles: each cell is cut into four at its centre, so no case is ambiguous, and lines and
//! areas agree.

use std::collections::BTreeMap;

type Point = [f64; 2];

/// Values at the nodes of a rectangular grid, laid on the sheet.
#[derive(Debug, Clone)]
pub(super) struct Grid {
    /// Places of the columns.
    pub columns: Vec<f64>,
    /// Places of the rows.
    pub rows: Vec<f64>,
    /// Row by row; not finite where nothing is known.
    pub values: Vec<f64>,
}

/// A corner of a triangle with its value.
type Node = (Point, f64);

impl Grid {
    fn node(&self, column: usize, row: usize) -> Node {
        let value = self.values.get(row * self.columns.len() + column).copied().unwrap_or(f64::NAN);
        ([self.columns[column], self.rows[row]], value)
    }

    fn cells(&self) -> impl Iterator<Item = (usize, usize)> + '_ {
        let (columns, rows) = (self.columns.len().saturating_sub(1), self.rows.len().saturating_sub(1));
        (0..rows).flat_map(move |row| (0..columns).map(move |column| (column, row)))
    }

    /// The corners of a cell, in turn; `None` where one of them is unknown.
    fn corners(&self, column: usize, row: usize) -> Option<[Node; 4]> {
        let corners = [(0, 0), (1, 0), (1, 1), (0, 1)].map(|(c, r)| self.node(column + c, row + r));
        corners.iter().all(|(_, value)| value.is_finite()).then_some(corners)
    }

    /// The cells without a value at one of their corners, as rectangles.
    pub(super) fn missing(&self) -> Vec<Vec<Point>> {
        self.joined(|column, row| self.corners(column, row).is_none())
    }

    /// The area with values from `low` up to `high`, as polygons.
    pub(super) fn area(&self, low: f64, high: f64) -> Vec<Vec<Point>> {
        let range = |column, row| {
            self.corners(column, row).map(|corners| {
                corners.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), n| (a.min(n.1), b.max(n.1)))
            })
        };
        let whole = |column, row| range(column, row).is_some_and(|(least, most)| least >= low && most < high);
        let mut polygons = self.joined(whole);
        for (column, row) in self.cells() {
            let Some((least, most)) = range(column, row) else { continue };
            if whole(column, row) || least >= high || most < low {
                continue;
            }
            let Some(corners) = self.corners(column, row) else { continue };
            for triangle in triangles(&corners) {
                let above = clipped(&triangle, |value| value - low);
                let between = clipped(&above, |value| high - value);
                if between.len() > 2 {
                    polygons.push(between.iter().map(|node| node.0).collect());
                }
            }
        }
        polygons
    }

    /// The lines at `level`, as long as they go.
    pub(super) fn lines(&self, level: f64) -> Vec<Vec<Point>> {
        let mut segments = Vec::new();
        for (column, row) in self.cells() {
            let Some(corners) = self.corners(column, row) else { continue };
            for triangle in triangles(&corners) {
                let sides = [(0, 1), (1, 2), (2, 0)];
                let cuts: Vec<Point> =
                    sides.iter().filter_map(|&(a, b)| crossing(triangle[a], triangle[b], level)).collect();
                if let [from, to] = cuts[..] {
                    segments.push([from, to]);
                }
            }
        }
        chained(&segments)
    }

    /// Cells for which `belongs` holds, neighbours in a row joined into one rectangle.
    fn joined(&self, belongs: impl Fn(usize, usize) -> bool) -> Vec<Vec<Point>> {
        let mut found = Vec::new();
        let columns = self.columns.len().saturating_sub(1);
        for row in 0..self.rows.len().saturating_sub(1) {
            let mut column = 0;
            while column < columns {
                let start = column;
                while column < columns && belongs(column, row) {
                    column += 1;
                }
                if column > start {
                    let (left, right) = (self.columns[start], self.columns[column]);
                    let (top, bottom) = (self.rows[row], self.rows[row + 1]);
                    found.push(vec![[left, top], [right, top], [right, bottom], [left, bottom]]);
                } else {
                    column += 1;
                }
            }
        }
        found
    }
}

fn triangles(corners: &[Node; 4]) -> [[Node; 3]; 4] {
    let mean = |pick: fn(&Node) -> f64| 0.25 * corners.iter().map(pick).sum::<f64>();
    let centre = ([mean(|n| n.0[0]), mean(|n| n.0[1])], mean(|n| n.1));
    [0, 1, 2, 3].map(|i| [corners[i], corners[(i + 1) % 4], centre])
}

/// Where the side from `a` to `b` meets the level. Both triangles of a side find the same point: the lower end counts first.
fn crossing(a: Node, b: Node, level: f64) -> Option<Point> {
    let (low, high) = if a.1 <= b.1 { (a, b) } else { (b, a) };
    (low.1 < level && high.1 >= level).then(|| between(low, high, level))
}

fn between(low: Node, high: Node, level: f64) -> Point {
    let share = ((level - low.1) / (high.1 - low.1)).clamp(0.0, 1.0);
    [low.0[0] + share * (high.0[0] - low.0[0]), low.0[1] + share * (high.0[1] - low.0[1])]
}

/// The part of a convex polygon where `excess` of the value is not negative (Sutherland and Hodgman 1974).
fn clipped(polygon: &[Node], excess: impl Fn(f64) -> f64) -> Vec<Node> {
    let mut kept = Vec::with_capacity(polygon.len() + 1);
    for (index, &node) in polygon.iter().enumerate() {
        let next = polygon[(index + 1) % polygon.len()];
        let (here, there) = (excess(node.1), excess(next.1));
        if here >= 0.0 {
            kept.push(node);
        }
        if (here >= 0.0) != (there >= 0.0) {
            let share = here / (here - there);
            let mix = |a: f64, b: f64| a + share * (b - a);
            kept.push(([mix(node.0[0], next.0[0]), mix(node.0[1], next.0[1])], mix(node.1, next.1)));
        }
    }
    kept
}

/// Segments joined end to end into lines.
fn chained(segments: &[[Point; 2]]) -> Vec<Vec<Point>> {
    // Ends that are the same to a thousandth are the same.
    let key = |p: Point| ((p[0] * 1000.0).round() as i64, (p[1] * 1000.0).round() as i64);
    let mut ends: BTreeMap<(i64, i64), Vec<usize>> = BTreeMap::new();
    let segments: Vec<_> = segments.iter().filter(|s| key(s[0]) != key(s[1])).collect();
    for (index, segment) in segments.iter().enumerate() {
        segment.iter().for_each(|end| ends.entry(key(*end)).or_default().push(index));
    }
    let mut used = vec![false; segments.len()];
    let follow = |line: &mut Vec<Point>, used: &mut Vec<bool>| {
        while let Some(&end) = line.last() {
            let next = ends.get(&key(end)).and_then(|at| at.iter().copied().find(|i| !used[*i]));
            let Some(next) = next else { break };
            used[next] = true;
            let [a, b] = *segments[next];
            line.push(if key(a) == key(end) { b } else { a });
        }
    };
    let mut lines = Vec::new();
    for index in 0..segments.len() {
        if used[index] {
            continue;
        }
        used[index] = true;
        let mut line = segments[index].to_vec();
        follow(&mut line, &mut used);
        line.reverse();
        follow(&mut line, &mut used);
        lines.push(line);
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    fn grid(count: usize, value: impl Fn(f64, f64) -> f64) -> Grid {
        let places: Vec<f64> = (0..count).map(|i| i as f64).collect();
        let values = places.iter().flat_map(|y| places.iter().map(|x| value(*x, *y)).collect::<Vec<_>>());
        Grid { values: values.collect(), rows: places.clone(), columns: places.clone() }
    }

    fn size(polygons: &[Vec<Point>]) -> f64 {
        let one = |p: &Vec<Point>| {
            let turn = |i: usize| {
                let (a, b) = (p[i], p[(i + 1) % p.len()]);
                a[0] * b[1] - b[0] * a[1]
            };
            0.5 * (0..p.len()).map(turn).sum::<f64>().abs()
        };
        polygons.iter().map(one).sum()
    }

    #[test]
    fn a_plane_has_straight_lines_and_exact_areas() {
        let plane = grid(11, |x, y| x + 2.0 * y);
        let lines = plane.lines(7.3);
        assert_eq!(lines.len(), 1);
        assert!(lines[0].iter().all(|[x, y]| (x + 2.0 * y - 7.3).abs() < 1e-12));
        // Triangle cut off at the corner, 7.3 wide and 3.65 high.
        assert!((size(&plane.area(f64::NEG_INFINITY, 7.3)) - 0.5 * 7.3 * 3.65).abs() < 1e-9);
    }

    #[test]
    fn areas_of_all_bands_fill_the_sheet() {
        let hills = grid(14, |x, y| libm::sin(x) * libm::cos(0.7 * y));
        let levels = [f64::NEG_INFINITY, -0.6, -0.1, 0.0, 0.3, 0.8, f64::INFINITY];
        let sum: f64 = levels.windows(2).map(|w| size(&hills.area(w[0], w[1]))).sum();
        assert!((sum - 169.0).abs() < 1e-9, "{sum}");
    }

    #[test]
    fn a_ring_is_one_closed_line() {
        let cone = grid(21, |x, y| (x - 10.0) * (x - 10.0) + (y - 10.0) * (y - 10.0));
        let lines = cone.lines(36.3);
        assert_eq!(lines.len(), 1);
        let (first, last) = (lines[0][0], lines[0][lines[0].len() - 1]);
        assert!((first[0] - last[0]).abs() < 1e-3 && (first[1] - last[1]).abs() < 1e-3);
        // 2π √36.3, drawn as a polygon.
        let length: f64 =
            lines[0].windows(2).map(|w| libm::hypot(w[1][0] - w[0][0], w[1][1] - w[0][1])).sum();
        assert!((length - 37.86).abs() < 0.5, "{length}");
    }

    #[test]
    fn unknown_nodes_leave_their_cells_out() {
        let holed = grid(5, |x, y| if x == 2.0 && y == 2.0 { f64::NAN } else { x });
        assert!((size(&holed.missing()) - 4.0).abs() < 1e-12);
        assert!((size(&holed.area(f64::NEG_INFINITY, f64::INFINITY)) - 12.0).abs() < 1e-12);
    }
}

//! The course of the tilt: straight between corners.

/// A course of the tilt.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Programme {
    /// [time s, tilt rad], times rising, from time 0.
    corners: Vec<[f64; 2]>,
    return_rate: Option<f64>,
}

impl Programme {
    /// A course through these corners; legs without duration are left out. Before the first corner the tilt is the first corner's. `return_rate`, rad/s: of tilting
    /// back early; `None`: that of the last falling leg.
    pub fn new(points: impl IntoIterator<Item = [f64; 2]>, return_rate: Option<f64>) -> Self {
        let mut corners: Vec<[f64; 2]> = Vec::new();
        for point in points {
            match corners.last() {
                None if point[0] > 0.0 => corners.extend([[0.0, point[1]], point]),
                Some(last) if point[0] <= last[0] => {}
                _ => corners.push(point),
            }
        }
        let falling = corners.windows(2).rev().find(|pair| pair[1][1] < pair[0][1]);
        let own = falling.map(|pair| (pair[0][1] - pair[1][1]) / (pair[1][0] - pair[0][0]));
        Self { corners, return_rate: return_rate.or(own) }
    }

    /// Rate of tilting back early, rad/s.
    pub fn return_rate(&self) -> Option<f64> {
        self.return_rate
    }

    pub fn end(&self) -> f64 {
        self.corners.last().map_or(0.0, |corner| corner[0])
    }

    /// The largest tilt.
    pub fn steepest(&self) -> f64 {
        self.corners.iter().map(|corner| corner[1]).fold(0.0, f64::max)
    }

    /// Legs as (start, end) corners.
    pub fn legs(&self) -> impl Iterator<Item = ([f64; 2], [f64; 2])> + '_ {
        self.corners.windows(2).map(|pair| (pair[0], pair[1]))
    }

    /// The tilt at a time.
    pub fn tilt(&self, time: f64) -> f64 {
        let after = self.corners.partition_point(|corner| corner[0] <= time);
        let (Some(from), Some(to)) = (self.corners.get(after.wrapping_sub(1)), self.corners.get(after))
        else {
            let edge = if after == 0 { self.corners.first() } else { self.corners.last() };
            return edge.map_or(0.0, |corner| corner[1]);
        };
        from[1] + (to[1] - from[1]) * ((time - from[0]) / (to[0] - from[0]))
    }

    /// The next corner after a time, or the end.
    pub fn next_corner(&self, time: f64) -> f64 {
        let after = self.corners.partition_point(|corner| corner[0] <= time);
        self.corners.get(after).map_or(self.end(), |corner| corner[0])
    }

    /// From `time` on, back to upright at `rate` (rad/s).
    pub fn turn_back(&mut self, time: f64, rate: f64) {
        let tilt = self.tilt(time);
        self.corners.retain(|corner| corner[0] < time);
        self.corners.push([time, tilt]);
        if tilt > 0.0 {
            self.corners.push([time + tilt / rate, 0.0]);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::Programme;

    #[test]
    fn straight_between_corners() {
        let course = Programme::new([[1.0, 0.0], [3.0, 1.0], [4.0, 1.0], [4.0, 1.0], [6.0, 0.5]], None);
        assert_eq!(
            (course.tilt(0.5), course.tilt(2.0), course.tilt(3.5), course.tilt(5.0)),
            (0.0, 0.5, 1.0, 0.75)
        );
        assert_eq!((course.tilt(9.0), course.end(), course.steepest()), (0.5, 6.0, 1.0));
        assert_eq!(
            (course.next_corner(0.0), course.next_corner(3.0), course.next_corner(7.0)),
            (1.0, 4.0, 6.0)
        );
        assert_eq!(course.return_rate(), Some(0.25));
        assert_eq!(course.legs().count(), 4);
    }

    #[test]
    fn turns_back_early() {
        let mut course = Programme::new([[0.0, 0.0], [4.0, 2.0]], Some(2.0));
        course.turn_back(2.0, 2.0);
        assert_eq!((course.tilt(2.0), course.tilt(2.25), course.end()), (1.0, 0.5, 2.5));
        assert_eq!(Programme::new([[0.0, 0.0], [4.0, 2.0]], None).return_rate(), None);
    }
}

//! Rare events in the space of independent standard normal variables: the most probable point of failure, and
//! importance sampling around it.
//!
//! A limit state g is negative where the event happens. The distance β of the nearest such point from the origin
//! (Hasofer & Lind 1974, J. Eng. Mech. Div. 100, 111) is only where sampling is centred: Φ(−β) misses curvature and
//! further branches, so it is never reported as the probability.

use super::{normal::quick_quantile, random::Sequence};

/// A point on the limit state that is nearer to the origin than its neighbours.
#[derive(Debug, Clone, PartialEq)]
pub struct ProbablePoint {
    /// Where it is.
    pub at: Vec<f64>,
    /// Its distance from the origin: β.
    pub distance: f64,
}

/// Step of the central differences, in standard deviations.
const STEP: f64 = 1e-4;

/// Beyond this distance nothing is looked for: the probability is below 1e-19.
const FARTHEST: f64 = 9.0;

/// The most probable point from `start`, by the iteration of Hasofer–Lind and Rackwitz–Fiessler with the line search of
/// Zhang & Der Kiureghian 1995 (merit ½|u|² + c|g|). `None` where it does not settle or lies beyond nine standard deviations.
pub fn probable_point(
    limit_state: &mut impl FnMut(&[f64]) -> Option<f64>,
    start: &[f64],
) -> Option<ProbablePoint> {
    let mut u = start.to_vec();
    let mut value = limit_state(&u)?;
    let scale = limit_state(&vec![0.0; u.len()])?.abs().max(value.abs()).max(f64::MIN_POSITIVE);
    for _ in 0..100 {
        let gradient = gradient(limit_state, &u)?;
        let steepness = dot(&gradient, &gradient);
        if steepness.is_nan() || steepness <= 0.0 {
            return None;
        }
        // Projection of the linearised limit state: the direction is from u to it.
        let along = (dot(&gradient, &u) - value) / steepness;
        let direction: Vec<f64> = gradient.iter().zip(&u).map(|(g, x)| along * g - x).collect();
        let length = dot(&direction, &direction).sqrt();
        if length < 1e-7 && value.abs() < 1e-7 * scale {
            let distance = dot(&u, &u).sqrt();
            return (distance < FARTHEST).then_some(ProbablePoint { at: u, distance });
        }
        // The penalty makes the direction one of descent.
        let penalty = 2.0 * dot(&u, &u).sqrt() / steepness.sqrt() + 1.0 / steepness.sqrt();
        let merit = |u: &[f64], value: f64| 0.5 * dot(u, u) + penalty * value.abs();
        let now = merit(&u, value);
        let mut share = if length > 4.0 { 4.0 / length } else { 1.0 };
        let mut moved = false;
        for _ in 0..30 {
            let next: Vec<f64> = u.iter().zip(&direction).map(|(x, d)| x + share * d).collect();
            if let Some(there) = limit_state(&next)
                && merit(&next, there) < now
            {
                (u, value) = (next, there);
                moved = true;
                break;
            }
            share *= 0.5;
        }
        if !moved {
            // No descent beyond rounding: settled if on the limit state and along the gradient.
            let distance = dot(&u, &u).sqrt();
            let settled =
                length < 1e-3 * (1.0 + distance) && value.abs() < 1e-6 * scale && distance < FARTHEST;
            return settled.then_some(ProbablePoint { at: u, distance });
        }
    }
    None
}

fn gradient(limit_state: &mut impl FnMut(&[f64]) -> Option<f64>, at: &[f64]) -> Option<Vec<f64>> {
    let mut u = at.to_vec();
    (0..u.len())
        .map(|i| {
            let kept = u[i];
            u[i] = kept + STEP;
            let up = limit_state(&u);
            u[i] = kept - STEP;
            let down = limit_state(&u);
            u[i] = kept;
            Some((up? - down?) / (2.0 * STEP))
        })
        .collect()
}

/// The most probable points found from the origin, from ±3 standard deviations along every axis and from as far in
/// sixteen random directions, nearest first; points nearer than half a standard deviation to one already known are the
/// same.
///
/// Several branches need several starts; no number of starts makes sure that all are found, so whoever samples around
/// these points must not exclude the rest of the space.
pub fn probable_points(
    limit_state: &mut impl FnMut(&[f64]) -> Option<f64>,
    inputs: usize,
) -> Vec<ProbablePoint> {
    let mut starts = vec![vec![0.0; inputs]];
    for i in 0..inputs {
        for side in [3.0, -3.0] {
            let mut start = vec![0.0; inputs];
            start[i] = side;
            starts.push(start);
        }
    }
    let mut numbers = Sequence::new(0, u64::MAX).from(0);
    for _ in 0..16 {
        let direction: Vec<f64> = (0..inputs).map(|_| quick_quantile(numbers.next_open())).collect();
        let length = dot(&direction, &direction).sqrt();
        starts.push(direction.iter().map(|x| 3.0 * x / length).collect());
    }
    let mut found: Vec<ProbablePoint> = Vec::new();
    for start in &starts {
        let Some(point) = probable_point(limit_state, start) else { continue };
        let apart = |other: &ProbablePoint| {
            let difference: Vec<f64> = other.at.iter().zip(&point.at).map(|(a, b)| a - b).collect();
            dot(&difference, &difference) > 0.25
        };
        if found.iter().all(apart) {
            found.push(point);
        }
    }
    found.sort_by(|a, b| a.distance.total_cmp(&b.distance));
    found
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

/// A mixture of unit normal densities: one at the origin, so that no weight is above the reciprocal of its share
/// (defensive; Hesterberg 1995, doi 10.1080/00401706.1995.10484303), the others at the most probable points.
#[derive(Debug, Clone, PartialEq)]
pub struct Mixture {
    centres: Vec<Vec<f64>>,
    shares: Vec<f64>,
}

/// Share of the draws around the origin (own judgement).
const AT_ORIGIN: f64 = 0.1;

impl Mixture {
    /// The mixture around these points, which get shares by their likelihood exp(−β²/2), none below a tenth of the
    /// largest.
    #[must_use]
    pub fn around(points: &[ProbablePoint], inputs: usize) -> Self {
        let nearest = points.first().map_or(0.0, |p| p.distance);
        let weight =
            |p: &ProbablePoint| libm::exp(0.5 * (nearest * nearest - p.distance * p.distance)).max(0.1);
        let total: f64 = points.iter().map(weight).sum();
        let mut mixture = Self { centres: vec![vec![0.0; inputs]], shares: vec![AT_ORIGIN] };
        for point in points {
            mixture.centres.push(point.at.clone());
            mixture.shares.push((1.0 - AT_ORIGIN) * weight(point) / total);
        }
        if points.is_empty() {
            mixture.shares[0] = 1.0;
        }
        mixture
    }

    /// Turns standard normal numbers `z` into a draw of the mixture, in place; `pick` (0 to 1) chooses the part. Gives
    /// the draw's weight: density of the standard normal over that of the mixture.
    pub fn draw(&self, pick: f64, z: &mut [f64]) -> f64 {
        let mut part = 0;
        let mut below = self.shares[0];
        while pick >= below && part + 1 < self.shares.len() {
            part += 1;
            below += self.shares[part];
        }
        for (x, c) in z.iter_mut().zip(&self.centres[part]) {
            *x += c;
        }
        // φ(z − c)/φ(z) = exp(z·c − ½|c|²).
        let mixed: f64 = self
            .centres
            .iter()
            .zip(&self.shares)
            .map(|(c, share)| share * libm::exp(dot(z, c) - 0.5 * dot(c, c)))
            .sum();
        1.0 / mixed
    }
}

/// Sums over weighted draws: of the weights of those that are events, and of their squares.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct WeightedCount {
    /// Draws.
    pub draws: u64,
    /// Draws that were events.
    pub events: u64,
    /// Sum of the weights of the events.
    pub sum: f64,
    /// Sum of their squares.
    pub squares: f64,
}

impl WeightedCount {
    /// Counts one draw.
    pub fn add(&mut self, weight: f64, event: bool) {
        self.draws += 1;
        if event {
            self.events += 1;
            self.sum += weight;
            self.squares += weight * weight;
        }
    }

    /// Both counts together.
    #[must_use]
    pub fn and(self, other: Self) -> Self {
        Self {
            draws: self.draws + other.draws,
            events: self.events + other.events,
            sum: self.sum + other.sum,
            squares: self.squares + other.squares,
        }
    }

    /// The probability of the event.
    #[must_use]
    pub fn probability(&self) -> f64 {
        if self.draws == 0 { 0.0 } else { self.sum / self.draws as f64 }
    }

    /// Standard error of the probability.
    #[must_use]
    pub fn standard_error(&self) -> f64 {
        let n = self.draws as f64;
        let p = self.probability();
        if self.draws < 2 { 0.0 } else { ((self.squares / n - p * p).max(0.0) / (n - 1.0)).sqrt() }
    }

    /// Two-sided interval at ± `z` standard errors of the logarithm of the probability, which stays positive. `None`
    /// with fewer events than a normal interval needs (own judgement: 50).
    #[must_use]
    pub fn interval(&self, z: f64) -> Option<(f64, f64)> {
        let p = self.probability();
        if self.events < 50 || p <= 0.0 {
            return None;
        }
        let factor = libm::exp(z * self.standard_error() / p);
        Some((p / factor, (p * factor).min(1.0)))
    }
}

#[cfg(test)]
mod tests {
    use super::super::normal::normal_cdf;
    use super::*;

    fn sample(g: &mut impl FnMut(&[f64]) -> Option<f64>, inputs: usize, draws: u64) -> WeightedCount {
        let points = probable_points(g, inputs);
        let mixture = Mixture::around(&points, inputs);
        let mut numbers = Sequence::new(1, 9).from(0);
        let mut count = WeightedCount::default();
        let mut z = vec![0.0; inputs];
        for _ in 0..draws {
            let pick = numbers.next_open();
            z.iter_mut().for_each(|x| *x = quick_quantile(numbers.next_open()));
            let weight = mixture.draw(pick, &mut z);
            count.add(weight, g(&z).is_some_and(|value| value < 0.0));
        }
        count
    }

    #[test]
    fn a_plane_is_found_and_its_probability_met() {
        let mut g = |u: &[f64]| Some(5.0 - 0.6 * u[0] - 0.8 * u[1]);
        let point = probable_point(&mut g, &[0.0, 0.0]).unwrap();
        assert!((point.distance - 5.0).abs() < 1e-6, "{point:?}");
        let count = sample(&mut g, 2, 40_000);
        let exact = normal_cdf(-5.0);
        let (low, high) = count.interval(4.0).unwrap();
        assert!(low < exact && exact < high && high / low < 1.3, "{count:?}");
    }

    #[test]
    fn two_branches_are_both_met() {
        let mut g = |u: &[f64]| Some((4.0 - u[0]).min(4.2 + u[0]));
        assert_eq!(probable_points(&mut g, 1).len(), 2);
        let count = sample(&mut g, 1, 40_000);
        let exact = normal_cdf(-4.0) + normal_cdf(-4.2);
        let (low, high) = count.interval(4.0).unwrap();
        assert!(low < exact && exact < high, "{count:?}");
    }

    #[test]
    fn what_never_fails_or_does_not_vary_gives_no_point() {
        assert!(probable_points(&mut |_: &[f64]| Some(1.0), 2).is_empty());
        assert!(probable_points(&mut |u: &[f64]| Some(20.0 + u[0]), 1).is_empty());
        let count = sample(&mut |_: &[f64]| Some(1.0), 2, 1000);
        assert_eq!(count.interval(2.0), None);
    }
}

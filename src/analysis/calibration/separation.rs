//! Can the clean and the dribbled rows be told apart without error? Then their likelihood alone has no finite peak, and only the prior bounds the fit.

use super::row::{Row, Seen};

/// Directions: y − offset and the three covariates.
const D: usize = 4;
/// Their number and the row of ones.
const M: usize = D + 1;

/// Whether some c has cᵀ(y − offset, x) > 0 for every clean row and < 0 for every dribbled one (a bracket is one of each). `false` where there are no such rows.
///
/// By Gordan's theorem either there is such a c, or some convex combination of the signed rows is zero. That combination is sought by non-negative least
/// squares (Lawson & Hanson 1974, Solving Least Squares Problems, ch. 23); what it leaves over, if not zero, is the direction.
#[must_use]
pub fn separable(rows: &[Row]) -> bool {
    let mut signed: Vec<[f64; D]> = Vec::with_capacity(rows.len());
    for row in rows {
        let [a, b, c] = row.covariates;
        let mut push = |at: f64, sign: f64| signed.push([at, a, b, c].map(|v| sign * v));
        match row.seen {
            Seen::Clean { at } => push(at, 1.0),
            Seen::Dribbled { at } => push(at, -1.0),
            Seen::Bracket { low, high } => {
                push(high, 1.0);
                push(low, -1.0);
            }
            Seen::Onset { .. } => {}
        }
    }
    if signed.is_empty() {
        return false;
    }
    // Columns of like size; scaling a direction changes nothing.
    for j in 0..D {
        let size = signed.iter().fold(0.0_f64, |size, row| size.max(row[j].abs()));
        if size > 0.0 {
            signed.iter_mut().for_each(|row| row[j] /= size);
        }
    }
    rest_of_combination(&signed) > 1e-6
}

/// Length of what the best non-negative combination of (row, 1) leaves of (0, 1).
fn rest_of_combination(rows: &[[f64; D]]) -> f64 {
    let column = |i: usize| -> [f64; M] {
        let [a, b, c, d] = rows[i];
        [a, b, c, d, 1.0]
    };
    let target = [0.0, 0.0, 0.0, 0.0, 1.0];
    let product = |a: &[f64; M], b: &[f64; M]| -> f64 { a.iter().zip(b).map(|(x, y)| x * y).sum() };
    let mut chosen: Vec<(usize, f64)> = Vec::with_capacity(M);
    let mut rest = target;
    for _ in 0..10 * (rows.len() + M) {
        let gain = |i: usize| product(&column(i), &rest);
        let best = (0..rows.len()).filter(|i| chosen.iter().all(|(c, _)| c != i)).map(|i| (i, gain(i))).fold(
            None,
            |best: Option<(usize, f64)>, next| match best {
                Some(best) if best.1 >= next.1 => Some(best),
                _ => Some(next),
            },
        );
        let Some((next, _)) = best.filter(|(_, gain)| *gain > 1e-10) else { break };
        if chosen.len() == M {
            break;
        }
        chosen.push((next, 0.0));
        loop {
            let columns: Vec<[f64; M]> = chosen.iter().map(|(i, _)| column(*i)).collect();
            let Some(wanted) = least_squares(&columns, &target) else {
                // The new row hangs on the chosen ones: there is nothing left to gain.
                return product(&rest, &rest).sqrt();
            };
            if wanted.iter().all(|w| *w > 0.0) {
                for (chosen, wanted) in chosen.iter_mut().zip(&wanted) {
                    chosen.1 = *wanted;
                }
                break;
            }
            let share = chosen
                .iter()
                .zip(&wanted)
                .filter(|(_, wanted)| **wanted <= 0.0)
                .map(|((_, has), wanted)| has / (has - wanted))
                .fold(1.0, f64::min);
            for (chosen, wanted) in chosen.iter_mut().zip(&wanted) {
                chosen.1 += share * (wanted - chosen.1);
            }
            chosen.retain(|(_, has)| *has > 1e-14);
            if chosen.is_empty() {
                break;
            }
        }
        rest = target;
        for (i, has) in &chosen {
            for (left, value) in rest.iter_mut().zip(column(*i)) {
                *left -= has * value;
            }
        }
        if product(&rest, &rest) < 1e-16 {
            break;
        }
    }
    product(&rest, &rest).sqrt()
}

/// The combination of at most five columns nearest to `target`, by orthogonal steps (modified Gram–Schmidt); `None` where they hang on each other.
fn least_squares(columns: &[[f64; M]], target: &[f64; M]) -> Option<Vec<f64>> {
    let n = columns.len();
    let mut q: Vec<[f64; M]> = Vec::with_capacity(n);
    let mut r = [[0.0; M]; M];
    for (j, column) in columns.iter().enumerate() {
        let mut v = *column;
        let size = v.iter().map(|x| x * x).sum::<f64>().sqrt();
        // Twice is enough.
        for _ in 0..2 {
            for (i, q) in q.iter().enumerate() {
                let share: f64 = q.iter().zip(&v).map(|(a, b)| a * b).sum();
                r[i][j] += share;
                v.iter_mut().zip(q).for_each(|(v, q)| *v -= share * q);
            }
        }
        let left = v.iter().map(|x| x * x).sum::<f64>().sqrt();
        if left < 1e-10 * size {
            return None;
        }
        r[j][j] = left;
        q.push(v.map(|x| x / left));
    }
    let mut solution = vec![0.0; n];
    for j in (0..n).rev() {
        let right: f64 = q[j].iter().zip(target).map(|(a, b)| a * b).sum();
        let known: f64 = (j + 1..n).map(|k| r[j][k] * solution[k]).sum();
        solution[j] = (right - known) / r[j][j];
    }
    Some(solution)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn row(x: f64, y: f64, clean: bool) -> Row {
        let seen = if clean { Seen::Clean { at: y } } else { Seen::Dribbled { at: y } };
        Row { covariates: [1.0, x, x * x], seen }
    }

    #[test]
    fn tells_separable_rows_from_mixed_ones() {
        let apart = [row(0.1, 1.0, true), row(0.5, 1.2, true), row(0.2, 0.4, false), row(0.7, 0.5, false)];
        assert!(separable(&apart));
        let mut mixed = apart.to_vec();
        mixed.extend([row(0.3, 0.3, true), row(0.3, 1.5, false), row(0.3, 0.9, true), row(0.3, 0.1, false)]);
        assert!(!separable(&mixed));
        assert!(separable(&[row(0.1, 1.0, true)]) && !separable(&[]));
        // The same pour, once clean and once not.
        assert!(!separable(&[row(0.1, 1.0, true), row(0.1, 1.0, false)]));
    }

    #[test]
    fn agrees_with_the_plane_that_made_the_rows() {
        let mut seed = 7_u64;
        let mut random = || {
            seed = seed.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
            (seed >> 33) as f64 / f64::from(u32::MAX >> 1) - 0.5
        };
        for round in 0..50 {
            let mut rows = Vec::new();
            for _ in 0..60 {
                let (x1, x2, y) = (random(), random(), random());
                let side = y - 0.3 * x1 + 0.2 * x2 - 0.05;
                if side.abs() > 0.01 {
                    let seen = if side > 0.0 { Seen::Clean { at: y } } else { Seen::Dribbled { at: y } };
                    rows.push(Row { covariates: [1.0, x1, x2], seen });
                }
            }
            assert!(separable(&rows), "{round}");
            // A row deep on the wrong side, surrounded by right ones.
            rows.push(Row { covariates: [1.0, 0.0, 0.0], seen: Seen::Dribbled { at: 0.3 } });
            assert!(!separable(&rows), "{round}");
        }
    }
}

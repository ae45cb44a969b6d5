//! Known coefficients come back from simulated bench pours, and intervals cover as often as they say.

use super::{Prior, Row, Seen, dot, posterior};
use crate::physics::numerics::normal_quantile;

/// A 64-bit congruential generator (Knuth's multiplier), its upper half used: enough for a test.
struct Random(u64);

impl Random {
    fn uniform(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
        ((self.0 >> 32) as f64 + 0.5) / 4294967296.0
    }

    fn normal(&mut self) -> f64 {
        normal_quantile(self.uniform())
    }
}

/// 12 onsets with an uncertainty of their own, 6 brackets, 12 single pours.
fn bench(random: &mut Random, b: &[f64; 3], s: f64) -> Vec<Row> {
    (0..30)
        .map(|i| {
            let covariates = [1.0, 0.6 * random.normal(), 0.4 * random.normal()];
            let onset = dot(&covariates, b) + s * random.normal();
            let seen = if i < 12 {
                let u = 0.05;
                Seen::Onset { at: onset + u * random.normal(), standard_uncertainty: u }
            } else if i < 18 {
                let step = 0.2;
                let low = step * libm::floor(onset / step);
                Seen::Bracket { low, high: low + step }
            } else {
                let at = dot(&covariates, b) + 0.3 * random.normal();
                if at > onset { Seen::Clean { at } } else { Seen::Dribbled { at } }
            };
            Row { covariates, seen }
        })
        .collect()
}

/// Hits out of 200 trials at 95 %: mean 190, standard deviation 3.08; beyond 3.3 of them one in a thousand.
fn within_binomial_error(hits: usize) -> bool {
    (180..=199).contains(&hits)
}

#[test]
fn intervals_cover_the_coefficients_that_made_the_rows() {
    let prior = Prior::of_the_closed_form();
    for fixed in [true, false] {
        let (mut hits, mut new_pours, mut sum) = ([0; 4], 0, [0.0; 3]);
        for seed in 0..200 {
            let mut random = Random((seed + 1_u64).wrapping_mul(0x9e37_79b9_7f4a_7c15));
            // Once the same coefficients in every bench, once drawn from the prior.
            let (b, ln_s) = if fixed {
                ([0.2, -0.15, 0.1], libm::log(0.15))
            } else {
                let draw = [0.35, 0.3, 0.3].map(|sd| sd * random.normal());
                (draw, libm::log(0.15) + 0.5 * random.normal())
            };
            let s = libm::exp(ln_s);
            let rows = bench(&mut random, &b, s);
            let mixture = posterior(&rows, &prior).unwrap();
            let moments = mixture.moments();
            let sd = moments.covariance.on_diagonal().map(f64::sqrt);
            for i in 0..3 {
                sum[i] += moments.mean[i];
                hits[i] += usize::from((moments.mean[i] - b[i]).abs() < 1.96 * sd[i]);
            }
            hits[3] += usize::from((moments.ln_scatter - ln_s).abs() < 1.96 * moments.ln_scatter_sd);
            // A new pour, by the mixture.
            let x = [1.0, 0.6 * random.normal(), 0.4 * random.normal()];
            let p = mixture.clean_probability(&x, dot(&x, &b) + s * random.normal());
            new_pours += usize::from((0.025..0.975).contains(&p));
        }
        assert!(hits.iter().all(|hits| within_binomial_error(*hits)), "{fixed} {hits:?}");
        assert!(within_binomial_error(new_pours), "{fixed} {new_pours}");
        if fixed {
            let mean = sum.map(|sum| sum / 200.0);
            for (mean, truth) in mean.iter().zip([0.2, -0.15, 0.1]) {
                assert!((mean - truth).abs() < 0.03, "{mean} {truth}");
            }
        }
    }
}

#[test]
fn a_hundred_like_rows_say_what_their_average_says() {
    let rows: Vec<Row> = (0..400)
        .map(|i| {
            let z = normal_quantile((f64::from(i) + 0.5) / 400.0);
            Row {
                covariates: [1.0, 0.0, 0.0],
                seen: Seen::Onset { at: 0.3 + 0.1 * z, standard_uncertainty: 0.0 },
            }
        })
        .collect();
    let moments = posterior(&rows, &Prior::of_the_closed_form()).unwrap().moments();
    assert!((moments.mean[0] - 0.3).abs() < 1e-3);
    assert!((moments.ln_scatter - libm::log(0.1)).abs() < 0.02);
    assert!((moments.ln_scatter_sd - (0.5_f64 / 400.0).sqrt()).abs() < 2e-3);
    // What no row speaks of stays as the prior has it.
    assert!((moments.covariance.on_diagonal()[1].sqrt() - 0.3).abs() < 1e-12);
}

#[test]
fn extreme_rows_still_have_a_posterior() {
    let prior = Prior::of_the_closed_form();
    let onset = |at: f64| Seen::Onset { at, standard_uncertainty: 0.0 };
    let cases: Vec<Vec<Seen>> = vec![
        vec![Seen::Clean { at: 12.0 }],
        vec![Seen::Clean { at: -12.0 }],
        vec![Seen::Dribbled { at: 9.0 }, Seen::Clean { at: -9.0 }],
        vec![onset(30.0)],
        vec![onset(-5.0), onset(5.0), onset(0.0)],
        vec![onset(0.1); 2000],
        vec![Seen::Bracket { low: 0.1, high: 0.1 + 1e-7 }; 50],
        vec![Seen::Bracket { low: -30.0, high: 30.0 }],
    ];
    for seen in cases {
        let rows: Vec<Row> =
            seen.iter().map(|seen| Row { covariates: [1.0, 2.0, -1.0], seen: *seen }).collect();
        let mixture = posterior(&rows, &prior).unwrap_or_else(|fault| panic!("{fault}: {:?}", seen[0]));
        let moments = mixture.moments();
        assert!(moments.scatter_variance.is_finite() && moments.scatter_variance > 0.0);
        assert!(moments.covariance.factor().is_some(), "{:?}", seen[0]);
        assert!((mixture.clean_probability(&[1.0, 2.0, -1.0], 1e3) - 1.0).abs() < 1e-9);
    }
}

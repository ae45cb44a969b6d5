//! The hypergeometric distribution: pieces drawn from a finite lot.

use super::beta::ln_beta;

/// ln of the binomial coefficient.
fn ln_choose(n: u64, k: u64) -> f64 {
    // C(n, k) = 1/((n + 1) B(n − k + 1, k + 1)).
    let (n, k) = (n as f64, k as f64);
    -libm::log(n + 1.0) - ln_beta(n - k + 1.0, k + 1.0)
}

/// P(X ≤ `events`): `drawn` pieces out of a lot of `lot`, of which `marked` are events. `marked` and `drawn` are at
/// most `lot`.
#[must_use]
pub fn hypergeometric_cdf(events: u64, lot: u64, marked: u64, drawn: u64) -> f64 {
    let most = marked.min(drawn);
    let least = (marked + drawn).saturating_sub(lot);
    if events >= most {
        return 1.0;
    }
    if events < least {
        return 0.0;
    }
    let probability =
        |x: u64| libm::exp(ln_choose(marked, x) + ln_choose(lot - marked, drawn - x) - ln_choose(lot, drawn));
    // P(x + 1)/P(x).
    let ratio = |x: u64| {
        let above = (marked - x) as f64 * (drawn - x) as f64;
        let below = (x + 1) as f64 * ((lot + x + 1) - marked - drawn) as f64;
        above / below
    };
    let mean = drawn as f64 * (marked as f64 / lot as f64);
    // The smaller tail, outward from its largest term.
    if (events as f64) < mean {
        let mut term = probability(events);
        let mut sum = term;
        for x in (least..events).rev() {
            term /= ratio(x);
            sum += term;
            if term < 1e-18 * sum {
                break;
            }
        }
        sum.min(1.0)
    } else {
        let mut term = probability(events + 1);
        let mut sum = term;
        for x in events + 1..most {
            term *= ratio(x);
            sum += term;
            if term < 1e-18 * sum {
                break;
            }
        }
        (1.0 - sum).max(0.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn small_lots_by_hand() {
        // 2 of 5 marked, 2 drawn: none 3/10, one at most 9/10.
        assert!((hypergeometric_cdf(0, 5, 2, 2) - 0.3).abs() < 1e-14);
        assert!((hypergeometric_cdf(1, 5, 2, 2) - 0.9).abs() < 1e-14);
        assert_eq!(hypergeometric_cdf(2, 5, 2, 2), 1.0);
        // 4 of 5 marked, 3 drawn: at least two are.
        assert_eq!(hypergeometric_cdf(1, 5, 4, 3), 0.0);
        assert!((hypergeometric_cdf(2, 5, 4, 3) - 0.6).abs() < 1e-14);
        assert_eq!(hypergeometric_cdf(0, 50, 0, 10), 1.0);
    }

    #[test]
    fn tends_to_the_binomial_in_a_large_lot() {
        let finite = hypergeometric_cdf(3, 10_000_000, 300_000, 52);
        let infinite = super::super::beta::binomial_cdf(3, 52, 0.03);
        assert!((finite - infinite).abs() < 1e-5);
    }
}

//! One bench row, as the fitter sees it.

use super::matrix::{Vector, dot};
use crate::physics::numerics::{ln_normal_cdf, normal_hazard_below};

/// What was seen of one row, on the scale of y − offset.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Seen {
    /// The onset itself, with its standard uncertainty u.
    Onset {
        /// Its value.
        at: f64,
        /// Its standard uncertainty.
        standard_uncertainty: f64,
    },
    /// The onset lies between two values.
    Bracket {
        /// The lower one, where it dribbled.
        low: f64,
        /// The higher one, where it was clean.
        high: f64,
    },
    /// Clean at this value: the onset lies below it.
    Clean {
        /// The value.
        at: f64,
    },
    /// Dribbled at this value: the onset lies above it.
    Dribbled {
        /// The value.
        at: f64,
    },
}

/// One row of the model y = offset + xᵀb + e with e ~ N(0, s²).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Row {
    /// Covariates x.
    pub covariates: Vector,
    /// What was seen, less the row's offset.
    pub seen: Seen,
}

/// −ln likelihood of a row with its first and second derivative in the prediction xᵀb.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Misfit {
    /// −ln L.
    pub value: f64,
    /// ∂(−ln L)/∂(xᵀb).
    pub slope: f64,
    /// ∂²(−ln L)/∂(xᵀb)², never negative.
    pub curvature: f64,
}

const LN_2_PI: f64 = 1.837_877_066_409_345_5;

impl Row {
    /// The misfit at coefficients `b` and scatter `s`.
    ///
    /// Onset: y ~ N(xᵀb, s² + u²). Clean at y: P = Φ(z), z = (y − xᵀb)/s; dribbled: P = Φ(−z). Bracket: P = Φ(z_high) − Φ(z_low).
    #[must_use]
    pub fn misfit(&self, b: &Vector, s: f64) -> Misfit {
        let prediction = dot(&self.covariates, b);
        match self.seen {
            Seen::Onset { at, standard_uncertainty: u } => {
                let variance = s * s + u * u;
                let residual = prediction - at;
                Misfit {
                    value: 0.5 * (LN_2_PI + libm::log(variance) + residual * residual / variance),
                    slope: residual / variance,
                    curvature: 1.0 / variance,
                }
            }
            Seen::Clean { at } => one_sided((at - prediction) / s, s),
            Seen::Dribbled { at } => {
                let mirrored = one_sided((prediction - at) / s, s);
                Misfit { slope: -mirrored.slope, ..mirrored }
            }
            Seen::Bracket { low, high } => between((low - prediction) / s, (high - prediction) / s, s),
        }
    }

    /// Probability below and above which what was seen lies, of an onset predicted as N(mean, variance): the two ends coincide for an onset row.
    /// `variance`: of the onset, s² included, u² not.
    #[must_use]
    pub fn probabilities(&self, mean: f64, variance: f64) -> (f64, f64) {
        let below =
            |at: f64, more: f64| crate::physics::numerics::normal_cdf((at - mean) / (variance + more).sqrt());
        match self.seen {
            Seen::Onset { at, standard_uncertainty: u } => {
                let p = below(at, u * u);
                (p, p)
            }
            Seen::Bracket { low, high } => (below(low, 0.0), below(high, 0.0)),
            Seen::Clean { at } => (0.0, below(at, 0.0)),
            Seen::Dribbled { at } => (below(at, 0.0), 1.0),
        }
    }
}

/// −ln Φ(z) with z = (y − m)/s, and its derivatives in m.
fn one_sided(z: f64, s: f64) -> Misfit {
    let hazard = normal_hazard_below(z);
    Misfit {
        value: -ln_normal_cdf(z),
        slope: hazard / s,
        curvature: (hazard * (hazard + z)).max(0.0) / (s * s),
    }
}

/// −ln(Φ(b) − Φ(a)) with a = (low − m)/s and b = (high − m)/s, and its derivatives in m.
fn between(a: f64, b: f64, s: f64) -> Misfit {
    if a + b > 0.0 {
        // In the lower tail Φ keeps its relative accuracy.
        let mirrored = between(-b, -a, s);
        return Misfit { slope: -mirrored.slope, ..mirrored };
    }
    let (ln_a, ln_b) = (ln_normal_cdf(a), ln_normal_cdf(b));
    let ln_p = ln_b + libm::log(-libm::expm1(ln_a - ln_b));
    let density = |z: f64| libm::exp(-0.5 * (LN_2_PI + z * z) - ln_p);
    let (at_a, at_b) = (density(a), density(b));
    let slope = at_b - at_a;
    Misfit {
        value: -ln_p,
        slope: slope / s,
        curvature: (b * at_b - a * at_a + slope * slope).max(0.0) / (s * s),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn derivatives_agree_with_differences_far_into_the_tails() {
        let kinds = [
            Seen::Onset { at: 0.3, standard_uncertainty: 0.1 },
            Seen::Clean { at: 0.2 },
            Seen::Dribbled { at: 0.2 },
            Seen::Bracket { low: -0.1, high: 0.25 },
        ];
        for seen in kinds {
            for m in [-9.0, -1.0, -0.2, 0.0, 0.3, 1.0, 2.5, 9.0] {
                for s in [0.05, 0.3] {
                    let at = |m: f64| Row { covariates: [1.0, 0.0, 0.0], seen }.misfit(&[m, 0.0, 0.0], s);
                    let (here, up, down) = (at(m), at(m + 1e-5), at(m - 1e-5));
                    let slope = (up.value - down.value) / 2e-5;
                    let curvature = (up.slope - down.slope) / 2e-5;
                    let close = |x: f64, y: f64| (x - y).abs() < 1e-4 + 1e-5 * x.abs();
                    assert!(here.value.is_finite() && here.curvature >= 0.0);
                    assert!(close(here.slope, slope), "{seen:?} {m} {s}: {} {slope}", here.slope);
                    assert!(
                        close(here.curvature, curvature),
                        "{seen:?} {m} {s}: {} {curvature}",
                        here.curvature
                    );
                }
            }
        }
    }

    #[test]
    fn a_narrow_bracket_is_an_onset() {
        let row = |seen| Row { covariates: [1.0, 0.0, 0.0], seen };
        let width = 1e-4;
        let bracket = row(Seen::Bracket { low: 0.2 - width / 2.0, high: 0.2 + width / 2.0 });
        let onset = row(Seen::Onset { at: 0.2, standard_uncertainty: 0.0 });
        for m in [-0.5, 0.1, 0.2, 0.9] {
            let (b, o) = (bracket.misfit(&[m, 0.0, 0.0], 0.2), onset.misfit(&[m, 0.0, 0.0], 0.2));
            assert!((b.value + libm::log(width) - o.value).abs() < 1e-6);
            assert!((b.slope - o.slope).abs() < 1e-4 && (b.curvature - o.curvature).abs() < 1e-3);
        }
    }
}

//! The nested posterior: at each of a grid of values of ln s the normal approximation in b about its mode, weighted by what that value is worth.
//!
//! A plain joint mode with its curvature takes ln s too low and the intervals too narrow (the scatter is bounded below by nothing but the prior);
//! at fixed s the posterior of b is log-concave and nearly normal, so the nested form is close to exact.

use super::{
    matrix::{Factor, Symmetric, Vector, dot},
    mixture::{GridPoint, Mixture},
    prior::Prior,
    row::Row,
};

/// Values of ln s in the grid.
pub const GRID: usize = 31;

/// The grid ends where the posterior density of ln s has fallen to exp(−18) of its peak: six standard deviations of a normal one.
const ENDS: f64 = 18.0;

/// ln of the smallest scatter looked at: no bench reproduces We_c to two parts in a thousand (own judgement). Without it, equal readings that claim to be exact
/// would send the scatter to zero.
pub const LEAST_LN_SCATTER: f64 = -6.214_608_098_422_191;

/// Most steps of any search. Newton's method on these functions needs a handful.
const MOST_STEPS: usize = 60;

/// Why there is no posterior.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum FitFault {
    /// Rows and prior together leave a coefficient open.
    #[error("rows and prior together leave a coefficient open")]
    Unbounded,
    /// The search for the mode did not settle.
    #[error("the search for the most probable coefficients did not settle")]
    NotConverged,
}

/// The mode of b at one value of ln s.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Mode {
    /// b.
    pub b: Vector,
    /// −ln posterior there, without the prior's constant.
    pub misfit: f64,
    /// Factor of the Hessian in b.
    pub hessian: Factor,
}

impl Mode {
    /// −ln of what this value of ln s is worth: f + ½ ln |H|.
    fn nested(&self) -> f64 {
        self.misfit + 0.5 * self.hessian.ln_determinant()
    }
}

struct Local {
    value: f64,
    gradient: Vector,
    hessian: Symmetric,
}

fn local(rows: &[Row], prior: &Prior, b: &Vector, ln_s: f64) -> Local {
    let s = libm::exp(ln_s);
    let mut value = prior.misfit(b, ln_s);
    let mut gradient = prior.precision.times(&prior.away(b));
    let mut hessian = prior.precision;
    for row in rows {
        let misfit = row.misfit(b, s);
        value += misfit.value;
        for (sum, x) in gradient.iter_mut().zip(row.covariates) {
            *sum += misfit.slope * x;
        }
        hessian.add_outer(misfit.curvature, &row.covariates);
    }
    Local { value, gradient, hessian }
}

/// −ln posterior of b and ln s, without the prior's constant.
#[must_use]
pub fn misfit(rows: &[Row], prior: &Prior, b: &Vector, ln_s: f64) -> f64 {
    local(rows, prior, b, ln_s).value
}

/// The mode of b at this ln s by Newton's method from `start`, steps halved until they descend, stopped on the Newton decrement.
///
/// # Errors
/// When rows and prior leave a coefficient open, or the search does not settle.
pub fn mode_at(rows: &[Row], prior: &Prior, ln_s: f64, start: &Vector) -> Result<Mode, FitFault> {
    let mut b = *start;
    let mut here = local(rows, prior, &b, ln_s);
    for _ in 0..MOST_STEPS {
        let hessian = here.hessian.factor().ok_or(FitFault::Unbounded)?;
        let step = hessian.solve(&here.gradient);
        // Twice what a quadratic would still gain.
        let decrement = dot(&step, &here.gradient);
        if !decrement.is_finite() {
            return Err(FitFault::NotConverged);
        }
        if decrement < 1e-18 * (1.0 + here.value.abs()) {
            return Ok(Mode { b, misfit: here.value, hessian });
        }
        let mut share = 1.0;
        loop {
            let next = [b[0] - share * step[0], b[1] - share * step[1], b[2] - share * step[2]];
            let there = local(rows, prior, &next, ln_s);
            // So close to the mode that values differ by rounding only, the full step is right.
            let descends = there.value <= here.value - 1e-4 * share * decrement;
            if descends || decrement < 1e-7 {
                (b, here) = (next, there);
                break;
            }
            share *= 0.5;
            if share < 1e-12 {
                return Err(FitFault::NotConverged);
            }
        }
    }
    Err(FitFault::NotConverged)
}

/// The posterior of b and s given the rows.
///
/// # Errors
/// When rows and prior leave a coefficient open, or the search does not settle.
pub fn posterior(rows: &[Row], prior: &Prior) -> Result<Mixture, FitFault> {
    let (peak, width, mode) = peak(rows, prior)?;
    let lowest = mode.nested();
    let end = |direction: f64| -> Result<f64, FitFault> {
        let mut start = mode.b;
        for steps in 1..=MOST_STEPS {
            let ln_s = peak + direction * 0.5 * width * steps as f64;
            if ln_s <= LEAST_LN_SCATTER {
                return Ok(LEAST_LN_SCATTER);
            }
            let there = mode_at(rows, prior, ln_s, &start)?;
            if there.nested() - lowest > ENDS {
                return Ok(ln_s);
            }
            start = there.b;
        }
        Err(FitFault::NotConverged)
    };
    let (low, high) = (end(-1.0)?, end(1.0)?);
    let mut grid = Vec::with_capacity(GRID);
    let mut start = mode.b;
    for i in 0..GRID {
        let ln_scatter = low + (high - low) * i as f64 / (GRID - 1) as f64;
        let at = mode_at(rows, prior, ln_scatter, &start)?;
        // Trapezoidal rule.
        let share = if i == 0 || i == GRID - 1 { 0.5 } else { 1.0 };
        let weight = share * libm::exp(lowest - at.nested());
        grid.push(GridPoint { ln_scatter, weight, mean: at.b, covariance: at.hessian.inverse() });
        start = at.b;
    }
    let total: f64 = grid.iter().map(|point| point.weight).sum();
    for point in &mut grid {
        point.weight /= total;
    }
    Ok(Mixture { grid })
}

/// The ln s of highest nested posterior density, the width of the density there (its standard deviation; at the least scatter the length over which it falls), and the
/// mode of b.
fn peak(rows: &[Row], prior: &Prior) -> Result<(f64, f64, Mode), FitFault> {
    const STEP: f64 = 1e-3;
    let mut ln_s = prior.ln_scatter.max(LEAST_LN_SCATTER);
    let mut here = mode_at(rows, prior, ln_s, &prior.mean)?;
    for _ in 0..MOST_STEPS {
        let nested = |ln_s: f64| mode_at(rows, prior, ln_s, &here.b).map(|mode| mode.nested());
        let (up, middle, down) = (nested(ln_s + STEP)?, here.nested(), nested(ln_s - STEP)?);
        let slope = (up - down) / (2.0 * STEP);
        let curvature = (up - 2.0 * middle + down) / (STEP * STEP);
        let newton = if curvature > 0.0 { -slope / curvature } else { -slope.signum() };
        let mut step = newton.clamp(-1.0, 1.0).max(LEAST_LN_SCATTER - ln_s);
        if ln_s <= LEAST_LN_SCATTER + 1e-6 && slope >= 0.0 {
            let fall = slope + curvature.max(0.0).sqrt();
            return Ok((ln_s, 1.0 / fall, here));
        }
        if curvature > 0.0 && slope * slope / curvature < 1e-6 {
            return Ok((ln_s, 1.0 / curvature.sqrt(), here));
        }
        loop {
            let there = mode_at(rows, prior, ln_s + step, &here.b)?;
            if there.nested() < middle {
                ln_s += step;
                here = there;
                break;
            }
            step *= 0.5;
            if step.abs() < 1e-9 {
                return Err(FitFault::NotConverged);
            }
        }
    }
    Err(FitFault::NotConverged)
}

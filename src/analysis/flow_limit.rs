//! The pour rate at which a lip changes sides.

use super::{
    balance::{balance, film_numbers, prepare},
    case::Case,
};
use crate::physics::{
    numerics::{Bracket, find_root},
    quantity,
    separation::numbers::FREE_SHEET_WEBER,
    stream::StreamFault,
};

/// Pour rates at which the lip of a case changes sides, m³/s. `None`: none in the accepted range.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FlowLimits {
    /// A slowing pour starts to dribble here: advancing angle, dry outer face.
    pub onset: Option<f64>,
    /// A wetted lip clears above this at the earliest: receding angle.
    pub recovery: Option<f64>,
    /// Below this no free sheet can leave (We < 2), whatever the edge.
    pub free_sheet: Option<f64>,
}

/// The limits of a case. `slope_hint`: ∂ ln(safety factor)/∂ ln flow near its pour rate.
///
/// # Errors
/// When the stream cannot be computed at a pour rate on the way.
pub fn flow_limits(case: &Case, slope_hint: f64) -> Result<FlowLimits, StreamFault> {
    let onset = separation_limit(case, case.advancing, slope_hint)?;
    let recovery = if case.receding == case.advancing {
        onset
    } else {
        separation_limit(case, case.receding, slope_hint)?
    };
    // We rises with flow to the power 4/3 on a critical section.
    let weber = |flow| film_numbers(case, flow).map(|numbers| libm::log(numbers.weber / FREE_SHEET_WEBER));
    let free_sheet = limit(case, 4.0 / 3.0, weber)?;
    Ok(FlowLimits { onset, recovery, free_sheet })
}

/// Lowest pour rate above which We ≥ We_c at this contact angle.
fn separation_limit(case: &Case, contact_angle: f64, slope_hint: f64) -> Result<Option<f64>, StreamFault> {
    let edge = prepare(case, contact_angle);
    limit(case, slope_hint, |flow| balance(case, &edge, flow).map(|b| b.ln_safety_factor))
}

fn limit(
    case: &Case,
    slope_hint: f64,
    excess: impl Fn(f64) -> Result<f64, StreamFault>,
) -> Result<Option<f64>, StreamFault> {
    let mut fault = None;
    let mut excess = |ln_flow: f64| {
        excess(libm::exp(ln_flow)).unwrap_or_else(|e| {
            fault = Some(e);
            f64::NAN
        })
    };
    let root = rising_root(&mut excess, libm::log(case.flow), slope_hint);
    match fault {
        Some(e) => Err(e),
        None => Ok(root.map(libm::exp)),
    }
}

/// Root of a rising function of ln flow in the accepted range, looked for outward from `start` by its slope: secant steps, which settle in a few on
/// functions that are nearly powers of the flow; a bracketing method where they do not.
fn rising_root(f: &mut impl FnMut(f64) -> f64, start: f64, slope: f64) -> Option<f64> {
    let low_end = libm::log(quantity::FLOW.minimum * quantity::FLOW.to_si);
    let high_end = libm::log(quantity::FLOW.maximum * quantity::FLOW.to_si);
    let usable = |slope: f64| slope > 0.05 && slope < 50.0;
    let mut slope = if usable(slope) { slope } else { 1.0 };
    let (mut x, mut y) = (start, f(start));
    let (mut below, mut above) = (None, None);
    for _ in 0..60 {
        if !y.is_finite() {
            return None;
        }
        if y == 0.0 {
            return Some(x);
        }
        let side = if y < 0.0 { &mut below } else { &mut above };
        *side = Some((x, y));
        let guess = x - y / slope;
        if let (Some(low), Some(high)) = (below, above)
            && !(low.0 < guess && guess < high.0)
        {
            return find_root(f, Bracket { low, high }, SETTLED);
        }
        let next = guess.clamp(low_end, high_end);
        let step = next - x;
        if step == 0.0 {
            return None;
        }
        let value = f(next);
        let secant = (value - y) / step;
        if usable(secant) {
            slope = secant;
        }
        if value.abs() < EXACT {
            return Some(next);
        }
        if step.abs() < CLOSE && usable(secant) {
            // One more secant step is exact to rounding; its value need not be looked at.
            let root = next - value / secant;
            return (low_end <= root && root <= high_end).then_some(root);
        }
        (x, y) = (next, value);
    }
    match (below, above) {
        (Some(low), Some(high)) if low.0 < high.0 => find_root(f, Bracket { low, high }, SETTLED),
        _ => None,
    }
}

/// Tolerance of the bracketing method, in ln flow.
const SETTLED: f64 = 1e-10;
/// A function value this small is rounding.
const EXACT: f64 = 1e-14;
/// A step this small, in ln flow, is followed by one last secant step, whose error is near its square.
const CLOSE: f64 = 1e-5;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_a_root_far_away_with_a_poor_hint() {
        let root = libm::log(3e-5);
        let mut f = |x: f64| 1.7 * (x - root) + 0.3 * libm::tanh(x - root);
        for start in [1e-8, 2.9e-5, 3e-5, 1e-2] {
            for hint in [0.5, 1.7, 4.0, -1.0] {
                let x = rising_root(&mut f, libm::log(start), hint).unwrap();
                assert!((x - root).abs() < 1e-8, "{start} {hint} {x}");
            }
        }
    }

    #[test]
    fn no_root_in_the_accepted_range() {
        assert_eq!(rising_root(&mut |x| x + 100.0, libm::log(1e-5), 1.0), None);
        assert_eq!(rising_root(&mut |x| x - 100.0, libm::log(1e-5), 1.0), None);
        assert_eq!(rising_root(&mut |_| f64::NAN, libm::log(1e-5), 1.0), None);
    }
}

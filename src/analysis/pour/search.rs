//! Which way of pouring dribbles least.

use std::sync::atomic::AtomicBool;

use super::{PourSpec, TiltSpec, pour};
use crate::{
    analysis::fault::Fault,
    physics::quantity::{self, Quantity},
};

/// A way of pouring that a search came to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Found {
    /// The field's value, in its unit.
    pub value: f64,
    /// What runs down outside then, m³, best estimate.
    pub dribbled: f64,
}

/// Least rate of tilting back, °/s, at which no more than `most` (m³) runs down outside; `None` when even the quickest accepted is not quick enough (or the course is a
/// programme, which has no such rate).
///
/// Takes the dribbled volume to fall with the rate; it does so wherever the flow of the whole pour stays the same. To 1 %.
///
/// # Errors
/// Those of [`pour`].
pub fn least_return_rate(
    spec: &PourSpec,
    most: f64,
    cancel: &AtomicBool,
) -> Result<Option<Found>, Vec<Fault>> {
    let TiltSpec::Steady { rate_deg_s, hold_deg, hold_s, .. } = spec.tilt else { return Ok(None) };
    let at = |return_rate_deg_s: f64| {
        let tilt = TiltSpec::Steady { rate_deg_s, hold_deg, hold_s, return_rate_deg_s };
        let tried = pour(&PourSpec { tilt, ..spec.clone() }, cancel)?;
        Ok::<_, Vec<Fault>>(Found { value: return_rate_deg_s, dribbled: tried.dribbled.value })
    };
    let Quantity { minimum, maximum, .. } = quantity::TILT_RATE;
    let slowest = at(minimum)?;
    if slowest.dribbled <= most {
        return Ok(Some(slowest));
    }
    let mut enough = at(maximum)?;
    if enough.dribbled > most {
        return Ok(None);
    }
    let mut too_slow = minimum;
    while enough.value > 1.01 * too_slow {
        let tried = at((enough.value * too_slow).sqrt())?;
        if tried.dribbled <= most {
            enough = tried;
        } else {
            too_slow = tried.value;
        }
    }
    Ok(Some(enough))
}

/// Tilts tried by [`least_dribbling_hold`] in its first round, and rounds.
const TRIED: u32 = 12;
const ROUNDS: u32 = 3;

/// The tilt to hold, degrees, at which the target is reached with the least running down outside; `None` when no accepted tilt reaches it (or there is no target, or the
/// course is a programme).
///
/// Tries tilts from where the level reaches the lip up to upside down, then closer and closer about the best, to about 0.3°.
///
/// # Errors
/// Those of [`pour`].
pub fn least_dribbling_hold(spec: &PourSpec, cancel: &AtomicBool) -> Result<Option<Found>, Vec<Fault>> {
    let (TiltSpec::Steady { rate_deg_s, hold_s, return_rate_deg_s, .. }, Some(target_ml)) =
        (&spec.tilt, spec.target_ml)
    else {
        return Ok(None);
    };
    let target = target_ml * quantity::FILL.to_si;
    let at = |hold_deg: f64| {
        let tilt = TiltSpec::Steady {
            rate_deg_s: *rate_deg_s,
            hold_deg,
            hold_s: *hold_s,
            return_rate_deg_s: *return_rate_deg_s,
        };
        pour(&PourSpec { tilt, ..spec.clone() }, cancel)
    };
    let highest = quantity::TILT.maximum;
    let Some(lowest) = at(0.0)?.start_tilt.map(|tilt| tilt / quantity::TILT.to_si) else { return Ok(None) };
    let mut best: Option<Found> = None;
    let (mut low, mut high) = (lowest, highest);
    for _ in 0..ROUNDS {
        let step = (high - low) / f64::from(TRIED);
        for i in 0..=TRIED {
            let value = low + step * f64::from(i);
            let tried = at(value)?;
            let reached = tried.served + tried.dribbled.value >= target * (1.0 - 1e-6);
            if reached && best.is_none_or(|known| tried.dribbled.value < known.dribbled) {
                best = Some(Found { value, dribbled: tried.dribbled.value });
            }
        }
        let Some(found) = best else { return Ok(None) };
        (low, high) = ((found.value - step).max(lowest), (found.value + step).min(highest));
    }
    Ok(best)
}

//! One bench pour on a lip, as a row of the model.

use super::{
    correction::Place,
    row::{Row, Seen},
};
use crate::analysis::{
    balance::{Balance, balance, prepare},
    case::Case,
};
use crate::physics::{separation::numbers::FREE_SHEET_WEBER, stream::StreamFault};

/// What was seen at the bench; pour rates in m³/s.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Pour {
    /// A slowing pour began to dribble at this rate.
    Onset {
        /// The rate.
        flow: f64,
        /// Its standard uncertainty.
        standard_uncertainty: f64,
    },
    /// It was still clean at one rate and dribbled at a lower one.
    Bracket {
        /// Clean at this rate.
        clean_at: f64,
        /// Dribbled at this rate.
        dribbled_at: f64,
    },
    /// One pour at this rate, clean or not.
    Outcome {
        /// The rate.
        flow: f64,
        /// Whether it dribbled.
        dribbled: bool,
    },
}

/// A bench pour, weighed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BenchRow {
    /// Where on the closed form it lies; for a bracket at the geometric mean of its two rates.
    pub place: Place,
    /// ln We there.
    pub ln_weber: f64,
    /// ln We_c of the closed form there.
    pub ln_critical_weber: f64,
    /// What was seen, less the closed form.
    pub seen: Seen,
    /// Whether it was clean although no free sheet exists at its Weber number.
    pub clean_without_free_sheet: bool,
}

/// Why a pour says nothing of the model.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum BenchFault {
    /// An ideally sharp edge: ln(r/h) has no value.
    #[error("an ideally sharp edge has no ln(r/h); give the radius that was measured")]
    SharpEdge,
    /// A lip that is not wetted at all: ln E has no value.
    #[error("at a contact angle of 180° nothing wets the lip, and ln(1 + cos θ) has no value")]
    NotWetted,
    /// The safety factor does not rise from the dribbling to the clean rate.
    #[error("the safety factor does not rise from the rate that dribbled to the one that was clean")]
    NotRising,
    /// The stream cannot be computed.
    #[error("the stream at this lip cannot be computed: {0}")]
    Stream(#[from] StreamFault),
}

/// Weighs a bench pour by the closed form alone: `case` must have no calibration of its own.
///
/// # Errors
/// When the pour says nothing of the model.
pub fn bench_row(case: &Case, pour: &Pour) -> Result<BenchRow, BenchFault> {
    let edge = prepare(case, case.contact_angle);
    let at = |flow: f64| balance(case, &edge, flow);
    let (middle, seen, clean_weber) = match *pour {
        Pour::Onset { flow, standard_uncertainty } => {
            let here = at(flow)?;
            // u of y − offset by the slope of ln S in ln flow, central.
            const STEP: f64 = 1e-3;
            let (up, down) = (at(flow * libm::exp(STEP))?, at(flow * libm::exp(-STEP))?);
            let slope = (up.ln_safety_factor - down.ln_safety_factor) / (2.0 * STEP);
            let u = slope.abs() * standard_uncertainty / flow;
            (here, Seen::Onset { at: here.ln_safety_factor, standard_uncertainty: u }, None)
        }
        Pour::Outcome { flow, dribbled } => {
            let here = at(flow)?;
            let value = here.ln_safety_factor;
            let seen = if dribbled { Seen::Dribbled { at: value } } else { Seen::Clean { at: value } };
            (here, seen, (!dribbled).then_some(here.numbers.weber))
        }
        Pour::Bracket { clean_at, dribbled_at } => {
            let (clean, dribbled) = (at(clean_at)?, at(dribbled_at)?);
            let (low, high) = (dribbled.ln_safety_factor, clean.ln_safety_factor);
            if low >= high {
                return Err(BenchFault::NotRising);
            }
            (at((clean_at * dribbled_at).sqrt())?, Seen::Bracket { low, high }, Some(clean.numbers.weber))
        }
    };
    let Balance { numbers, threshold, .. } = middle;
    let place = Place::of(&numbers, case.contact_angle, case.lip.edge.turn);
    let scales = place.scales();
    if !scales[0].is_finite() {
        return Err(BenchFault::SharpEdge);
    }
    if !scales[1].is_finite() {
        return Err(BenchFault::NotWetted);
    }
    Ok(BenchRow {
        place,
        ln_weber: libm::log(numbers.weber),
        ln_critical_weber: threshold.ln_critical_weber,
        seen,
        clean_without_free_sheet: clean_weber.is_some_and(|weber| weber < FREE_SHEET_WEBER),
    })
}

impl BenchRow {
    /// The row of the model, its covariates centred.
    #[must_use]
    pub fn row(&self, centre: &[f64; 2]) -> Row {
        let [radius, wetting, ..] = self.place.scales();
        Row { covariates: [1.0, radius - centre[0], wetting - centre[1]], seen: self.seen }
    }
}

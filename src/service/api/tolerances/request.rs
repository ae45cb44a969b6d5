//! The request for tolerances. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::sync::OnceLock;

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

use super::spread::SpreadRequest;
use crate::{
    analysis::{
        fault::Fault,
        field::Field,
        tolerance::{MOST_INPUTS, Study, Varying},
    },
    service::{
        api::{
            evaluations::EvaluationRequest,
            inside::{Touched, field_at, within},
            quantity::whole_number,
        },
        explain::{Contract, Request},
    },
};

/// The most trials of one request, whatever the server's own limit.
pub const MOST_TRIALS: u64 = 10_000_000;

/// Given spreads on the inputs: how many of a million pours dribble, and which input drives it?
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct TolerancesRequest {
    /// The lip as drawn, and everything that does not vary. Its `confidence` is that of every interval.
    pub base: EvaluationRequest,
    /// Seed of the random numbers; the same seed gives the same answer on any machine and number of threads. Default 1.
    #[serde(default = "first_seed", deserialize_with = "whole_number")]
    #[schema(minimum = 0, maximum = 9007199254740991_u64, example = 1)]
    pub seed: u64,
    /// Random trials; default 100 000. The server may set a lower limit.
    #[serde(default = "usual_trials", deserialize_with = "whole_number")]
    #[schema(minimum = 1, maximum = 10_000_000, example = 100_000)]
    pub trials: u64,
    /// What varies, each number of the base once. They vary independently of one another.
    #[schema(min_items = 1, max_items = 28)]
    pub varying: Vec<VaryingRequest>,
}

/// A number of the base that varies.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct VaryingRequest {
    /// JSON Pointer of a number in the base.
    #[schema(example = "/lip/edge/rounded/radius_mm")]
    pub pointer: String,
    /// How it varies. Up to 1 % of it may lie outside what the number may be: it is cut there, and a warning says how much. More is refused.
    pub spread: SpreadRequest,
}

const fn first_seed() -> u64 {
    1
}

const fn usual_trials() -> u64 {
    100_000
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

impl TolerancesRequest {
    /// The study asked for, with no more than `most` trials.
    ///
    /// # Errors
    /// Every fault of the request.
    pub fn study(&self, most: u64) -> Result<Study, Vec<Fault>> {
        let mut faults = Vec::new();
        let most = most.min(MOST_TRIALS);
        if self.trials == 0 || self.trials > most {
            let detail = format!("{} trials are asked for; accepted: 1 to {most}", self.trials);
            faults.push(Fault::new("/trials", "out_of_range", detail).within(1.0, most as f64));
        }
        if self.seed > LARGEST_SEED {
            let fault = Fault::new("/seed", "out_of_range", format!("must be at most {LARGEST_SEED}"));
            faults.push(fault.within(0.0, LARGEST_SEED as f64));
        }
        let count = self.varying.len();
        let most_varying = Field::COUNT.min(MOST_INPUTS);
        if count == 0 || count > most_varying {
            let detail = format!("{count} numbers vary; accepted: 1 to {most_varying}");
            faults.push(Fault::new("/varying", "wrong_count", detail).within(1.0, most_varying as f64));
        }
        let base = self.base.question().map(|(spec, _)| spec);
        let base = base.map_err(|found| faults.extend(within("/base", found))).ok();
        let mut varying: Vec<Varying> = Vec::with_capacity(count.min(most_varying));
        for (i, item) in self.varying.iter().enumerate().take(most_varying) {
            let at = format!("/varying/{i}");
            let spread = item.spread.spread(&format!("{at}/spread"));
            let spread = spread.map_err(|found| faults.extend(found)).ok();
            match field_at(&self.base, base.as_ref(), &item.pointer, format!("{at}/pointer")) {
                Err(fault) => faults.push(fault),
                Ok(field) if varying.iter().any(|known| known.field == field) => {
                    let detail = format!("{} varies already; give it one spread", item.pointer);
                    faults.push(Fault::new(format!("{at}/pointer"), "repeated", detail));
                }
                Ok(field) => {
                    if let Some(spread) = spread {
                        let item = Varying { field, spread };
                        faults.extend(item.fault(i));
                        varying.push(item);
                    }
                }
            }
        }
        let Some(base) = base else { return Err(faults) };
        faults.extend(Touched::by(varying.iter().map(|v| v.field)).lasting_faults(&base));
        if faults.is_empty() {
            Ok(Study { base, varying, trials: self.trials, seed: self.seed })
        } else {
            Err(faults)
        }
    }
}

/// The largest whole number that every JSON reader keeps.
const LARGEST_SEED: u64 = (1 << 53) - 1;

impl Request for TolerancesRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        self.study(MOST_TRIALS).err().unwrap_or_default()
    }
}

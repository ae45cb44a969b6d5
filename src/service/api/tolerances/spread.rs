//! Spreads in a request.

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

use crate::analysis::{fault::Fault, tolerance::Spread};

/// How a number varies, in its own unit: exactly one member names the distribution.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SpreadRequest {
    /// Normal: a process in control.
    Normal(NormalSpread),
    /// Uniform: anything between two limits.
    Uniform(UniformSpread),
    /// Triangular: between two limits, with a most frequent value.
    Triangular(TriangularSpread),
    /// Lognormal: what varies by factors, such as a pour rate by hand.
    Lognormal(LognormalSpread),
    /// A measured sample: each of its values is as likely as any other.
    Sample(SampleSpread),
}

/// A normal spread.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct NormalSpread {
    /// Mean.
    #[schema(example = 0.8)]
    pub mean: f64,
    /// Standard deviation, above 0.
    #[schema(example = 0.03)]
    pub sd: f64,
}

/// A uniform spread.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct UniformSpread {
    /// Upper limit.
    #[schema(example = 25)]
    pub high: f64,
    /// Lower limit.
    #[schema(example = 5)]
    pub low: f64,
}

/// A triangular spread.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct TriangularSpread {
    /// Upper limit.
    #[schema(example = 113)]
    pub high: f64,
    /// Lower limit.
    #[schema(example = 106)]
    pub low: f64,
    /// Most frequent value, from the lower to the upper limit.
    #[schema(example = 110)]
    pub mode: f64,
}

/// A lognormal spread.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct LognormalSpread {
    /// Median, above 0.
    #[schema(example = 60)]
    pub median: f64,
    /// Standard deviation of the natural logarithm, above 0.
    #[schema(example = 0.2)]
    pub sd_log: f64,
}

/// A measured sample.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct SampleSpread {
    /// Its values.
    #[schema(min_items = 2, max_items = 100_000, example = json!([0.78, 0.81, 0.8, 0.83]))]
    pub values: Vec<f64>,
}

/// The most values of a sample.
const MOST_VALUES: usize = 100_000;

/// Numbers beyond this are no quantity of the service.
const LARGEST: f64 = 1e9;

/// The largest standard deviation of a logarithm (own judgement: a factor of 20 at one standard deviation).
const LARGEST_SD_LOG: f64 = 3.0;

impl SpreadRequest {
    /// The spread meant; `at` is where it stands in the request.
    ///
    /// # Errors
    /// Every fault of its numbers.
    pub fn spread(&self, at: &str) -> Result<Spread, Vec<Fault>> {
        let mut check = Check { at, faults: Vec::new() };
        let spread = match self {
            Self::Normal(NormalSpread { mean, sd }) => {
                check.number("normal/mean", *mean);
                check.above_zero("normal/sd", *sd, LARGEST);
                Spread::Normal { mean: *mean, sd: *sd }
            }
            Self::Uniform(UniformSpread { high, low }) => {
                check.between("uniform", *low, *high);
                Spread::Uniform { low: *low, high: *high }
            }
            Self::Triangular(TriangularSpread { high, low, mode }) => {
                check.between("triangular", *low, *high);
                check.number("triangular/mode", *mode);
                if low < high && !(low <= mode && mode <= high) {
                    let detail = format!("the most frequent value lies outside {low} to {high}");
                    check.fault("triangular/mode", "contradiction", detail, (*low, *high));
                }
                Spread::Triangular { low: *low, mode: *mode, high: *high }
            }
            Self::Lognormal(LognormalSpread { median, sd_log }) => {
                check.above_zero("lognormal/median", *median, LARGEST);
                check.above_zero("lognormal/sd_log", *sd_log, LARGEST_SD_LOG);
                Spread::Lognormal { median: *median, sd_log: *sd_log }
            }
            Self::Sample(SampleSpread { values }) => {
                check.sample(values);
                let mut values = values.clone();
                values.sort_by(f64::total_cmp);
                Spread::Sample(values)
            }
        };
        if check.faults.is_empty() { Ok(spread) } else { Err(check.faults) }
    }
}

struct Check<'a> {
    at: &'a str,
    faults: Vec<Fault>,
}

impl Check<'_> {
    fn fault(&mut self, member: &str, code: &'static str, detail: impl Into<String>, range: (f64, f64)) {
        let fault = Fault::new(format!("{}/{member}", self.at), code, detail);
        self.faults.push(fault.within(range.0, range.1));
    }

    fn number(&mut self, member: &str, value: f64) {
        if value.is_nan() || value.abs() > LARGEST {
            let detail = format!("must be between {} and {LARGEST}", -LARGEST);
            self.fault(member, "out_of_range", detail, (-LARGEST, LARGEST));
        }
    }

    fn above_zero(&mut self, member: &str, value: f64, most: f64) {
        if !(value > 0.0 && value <= most) {
            let detail =
                format!("must be above 0 and at most {most}; what does not vary belongs in the base");
            self.fault(member, "out_of_range", detail, (0.0, most));
        }
    }

    fn between(&mut self, kind: &str, low: f64, high: f64) {
        self.number(&format!("{kind}/low"), low);
        self.number(&format!("{kind}/high"), high);
        let at = format!("{}/{kind}", self.at);
        if low == high {
            let detail = "the limits are equal; what does not vary belongs in the base";
            self.faults.push(Fault::new(at, "empty_range", detail));
        } else if low > high {
            let detail = format!("the lower limit {low} is above the upper limit {high}");
            self.faults.push(Fault::new(at, "contradiction", detail));
        }
    }

    fn sample(&mut self, values: &[f64]) {
        let count = values.len();
        if !(2..=MOST_VALUES).contains(&count) {
            let detail = format!("{count} values are given; accepted: 2 to {MOST_VALUES}");
            self.fault("sample/values", "wrong_count", detail, (2.0, MOST_VALUES as f64));
        } else if values.iter().all(|x| *x == values[0]) {
            let detail = "all values are equal; what does not vary belongs in the base";
            self.faults.push(Fault::new(format!("{}/sample/values", self.at), "no_spread", detail));
        }
        for (i, value) in values.iter().enumerate().take(MOST_VALUES) {
            self.number(&format!("sample/values/{i}"), *value);
        }
    }
}

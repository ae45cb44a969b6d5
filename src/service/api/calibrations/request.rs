//! The calibration request. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::{
    collections::{BTreeMap, BTreeSet},
    sync::OnceLock,
};

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

use crate::{
    analysis::{
        calibration::{BenchFault, BenchRow, Pour, Prior, bench_row},
        fault::Fault,
        field::Field,
        uncertainty::default_rule,
    },
    physics::{
        quantity,
        separation::closed_form::{CoefficientSet, DEFAULT_SET, SETS},
    },
    service::{
        api::{
            calibration::PriorPart,
            evaluations::{EvaluationRequest, MethodRequest, OuterFaceRequest, PourRequest},
            lip::LipRequest,
            liquid::LiquidRequest,
            quantity::{Confidence, Flow, given},
            surface::SurfaceRequest,
        },
        explain::{Contract, Request},
        fingerprint::digest_of,
        nearest::quoted,
    },
};

/// What do these bench pours say of the critical Weber number?
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct CalibrationsRequest {
    /// Coefficient set of the closed form to be calibrated, by name; default the newest.
    #[serde(default = "default_coefficients")]
    #[schema(example = "set-1")]
    pub coefficients: String,
    /// Bench pours, 1 to 10 000. The same pour twice, name and all, is refused; pours repeated on purpose have names of their own.
    #[schema(min_items = 1, max_items = 10_000)]
    pub observations: Vec<ObservationRequest>,
    /// What is held of the coefficients before any row; default as stated there. Sending earlier rows again beats entering an earlier posterior here.
    #[serde(default)]
    pub prior: PriorPart,
}

/// One bench pour.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct ObservationRequest {
    /// Where the liquid left the vessel; an edge radius above 0.
    pub lip: LipRequest,
    /// What was poured.
    pub liquid: LiquidRequest,
    /// Its name in the bench book.
    #[schema(example = "jug 3, pour 2")]
    pub name: String,
    /// Whether the outer face below the edge was dry (default) or already wet.
    #[serde(default)]
    pub outer_face: OuterFaceRequest,
    /// What was seen.
    pub seen: SeenRequest,
    /// What the lip is made of.
    pub surface: SurfaceRequest,
}

/// What was seen: exactly one member names its kind.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SeenRequest {
    /// A slowing pour began to dribble at this rate.
    Onset(OnsetRequest),
    /// Clean at one rate, dribbled at a lower one: the onset lies between.
    Bracket(BracketRequest),
    /// One pour at one rate, clean or not.
    Outcome(OutcomeRequest),
}

/// An onset.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct OnsetRequest {
    /// Pour rate at which it began to dribble.
    pub flow_ml_s: Flow,
    /// Standard uncertainty of that rate; default 3 % of it.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false, minimum = 0, maximum = 20000)]
    pub standard_uncertainty_ml_s: Option<f64>,
}

/// An onset between two rates.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct BracketRequest {
    /// Still clean at this rate.
    pub clean_at_ml_s: Flow,
    /// Dribbled at this rate, below the clean one.
    pub dribbled_at_ml_s: Flow,
}

/// One pour.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct OutcomeRequest {
    /// Whether it dribbled.
    pub dribbled: bool,
    /// Pour rate.
    pub flow_ml_s: Flow,
}

/// The most rows of one calibration.
pub const MOST_ROWS: usize = 10_000;

/// The longest name of a row, in bytes.
const LONGEST_NAME: usize = 200;

/// The most faults that are listed.
const MOST_FAULTS: usize = 200;

fn default_coefficients() -> String {
    DEFAULT_SET.id.to_owned()
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

/// The rows of a request, weighed.
pub struct Observed {
    /// The rows, in the order of the request.
    pub rows: Vec<BenchRow>,
    /// Digest of each, its name left out.
    pub digests: Vec<String>,
    /// The prior.
    pub prior: Prior,
    /// The coefficient set.
    pub coefficients: &'static CoefficientSet,
}

/// A row without its name: two that agree in this may be one pour entered twice.
#[derive(Serialize)]
struct Content<'a> {
    lip: &'a LipRequest,
    liquid: &'a LiquidRequest,
    outer_face: OuterFaceRequest,
    seen: SeenRequest,
    surface: &'a SurfaceRequest,
}

impl ObservationRequest {
    fn digest(&self) -> String {
        let Self { lip, liquid, outer_face, seen, surface, .. } = self;
        digest_of(&Content { lip, liquid, outer_face: *outer_face, seen: *seen, surface })
    }

    /// The pour, or why it is none; pointers from the row on.
    fn pour(&self) -> Result<(Flow, Pour), Fault> {
        let si = |flow: Flow| flow.get() * quantity::FLOW.to_si;
        Ok(match self.seen {
            SeenRequest::Onset(OnsetRequest { flow_ml_s, standard_uncertainty_ml_s }) => {
                let u = standard_uncertainty_ml_s
                    .unwrap_or_else(|| default_rule(Field::Flow).relative * flow_ml_s.get());
                let most = quantity::FLOW.maximum;
                if !(u >= 0.0 && u <= most) {
                    let detail = format!("a standard uncertainty must be between 0 and {most} mL/s");
                    let at = "/seen/onset/standard_uncertainty_ml_s";
                    return Err(Fault::new(at, "out_of_range", detail).within(0.0, most));
                }
                let standard_uncertainty = u * quantity::FLOW.to_si;
                (flow_ml_s, Pour::Onset { flow: si(flow_ml_s), standard_uncertainty })
            }
            SeenRequest::Bracket(BracketRequest { clean_at_ml_s, dribbled_at_ml_s }) => {
                if clean_at_ml_s.get() <= dribbled_at_ml_s.get() {
                    let detail = "a slowing pour dribbles below the rates at which it is clean: the clean rate must be the higher one";
                    return Err(Fault::new("/seen/bracket", "contradiction", detail));
                }
                let pour = Pour::Bracket { clean_at: si(clean_at_ml_s), dribbled_at: si(dribbled_at_ml_s) };
                (clean_at_ml_s, pour)
            }
            SeenRequest::Outcome(OutcomeRequest { dribbled, flow_ml_s }) => {
                (flow_ml_s, Pour::Outcome { flow: si(flow_ml_s), dribbled })
            }
        })
    }

    /// The row of the model; pointers from the row on.
    fn weighed(&self, coefficients: &'static CoefficientSet) -> Result<BenchRow, Vec<Fault>> {
        let mut faults = Vec::new();
        if self.name.is_empty() || self.name.len() > LONGEST_NAME {
            let detail = format!("a name has 1 to {LONGEST_NAME} bytes");
            faults.push(Fault::new("/name", "out_of_range", detail));
        }
        let pour = self.pour().map_err(|fault| faults.push(fault)).ok();
        let question = EvaluationRequest {
            calibration: None,
            coefficients: coefficients.id.to_owned(),
            confidence: Confidence::known(0.95),
            include: Vec::new(),
            limits: BTreeMap::new(),
            lip: self.lip,
            liquid: self.liquid.clone(),
            method: MethodRequest::default(),
            outer_face: self.outer_face,
            pour: PourRequest { flow_ml_s: pour.map_or(Flow::known(1.0), |(flow, _)| flow) },
            surface: self.surface.clone(),
            uncertainty: BTreeMap::new(),
        };
        let resolved = question.question().and_then(|(spec, _)| spec.resolve());
        let resolved = resolved.map_err(|found| faults.extend(found)).ok();
        let row = resolved.zip(pour).and_then(|(resolved, (_, pour))| {
            let weighed = bench_row(&resolved.case, &pour);
            weighed.map_err(|fault| faults.push(bench_fault(fault))).ok()
        });
        match row {
            Some(row) if faults.is_empty() => Ok(row),
            _ => Err(faults),
        }
    }
}

fn bench_fault(fault: BenchFault) -> Fault {
    let detail = fault.to_string();
    match fault {
        BenchFault::SharpEdge => Fault::new(Field::EdgeRadius.pointer(), "out_of_range", detail),
        BenchFault::NotWetted => Fault::new("/surface", "out_of_range", detail),
        BenchFault::NotRising => Fault::new("/seen/bracket", "contradiction", detail),
        BenchFault::Stream(_) => Fault::new("/lip", "not_computable", detail),
    }
}

impl CalibrationsRequest {
    /// The rows, weighed by the closed form.
    ///
    /// # Errors
    /// Every fault of every row, and of what stands beside them.
    pub fn observed(&self) -> Result<Observed, Vec<Fault>> {
        let mut faults = Vec::new();
        let coefficients = CoefficientSet::named(&self.coefficients);
        if coefficients.is_none() {
            let detail = format!("there is no coefficient set {}", quoted(&self.coefficients));
            let fault = Fault::new("/coefficients", "unknown_id", detail);
            faults.push(fault.choices(SETS.iter().map(|set| set.id)));
        }
        let coefficients = coefficients.unwrap_or(DEFAULT_SET);
        let prior = self.prior.prior("/prior", &mut faults);
        let count = self.observations.len();
        if count == 0 || count > MOST_ROWS {
            let detail = format!("{count} are given; accepted: 1 to {MOST_ROWS}");
            let fault = Fault::new("/observations", "wrong_count", detail);
            faults.push(fault.within(1.0, MOST_ROWS as f64));
            return Err(faults);
        }
        let mut known = BTreeSet::new();
        let mut rows = Vec::with_capacity(count);
        let mut digests = Vec::with_capacity(count);
        for (i, observation) in self.observations.iter().enumerate() {
            let digest = observation.digest();
            if !known.insert((observation.name.as_str(), digest.clone())) {
                let detail = format!(
                    "{} stands here twice, word for word: it would count double; pours repeated on purpose need names of their own",
                    quoted(&observation.name)
                );
                faults.push(Fault::new(format!("/observations/{i}"), "duplicate", detail));
            }
            digests.push(digest);
            match observation.weighed(coefficients) {
                Ok(row) => rows.push(row),
                Err(found) => faults.extend(found.into_iter().map(|mut fault| {
                    fault.pointer = format!("/observations/{i}{}", fault.pointer).into();
                    fault
                })),
            }
            if faults.len() >= MOST_FAULTS {
                break;
            }
        }
        if faults.is_empty() {
            Ok(Observed { rows, digests, prior, coefficients })
        } else {
            faults.truncate(MOST_FAULTS);
            Err(faults)
        }
    }
}

impl Request for CalibrationsRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        self.observed().err().unwrap_or_default()
    }
}

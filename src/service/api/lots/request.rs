//! The lot request. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::sync::OnceLock;

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

use super::{
    evidence::EvidenceRequest,
    limit::{LimitRequest, LimitSought},
};
use crate::{
    analysis::{
        fault::Fault,
        lot::{Points, PourTest},
        statistics::variables_plan::{RiskPoint, VariablesPlan},
    },
    service::{
        api::quantity::{Confidence, given},
        explain::{Contract, Request},
    },
};

/// Are these parts, or this pour test, good enough for the lot?
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct LotRequest {
    /// What was measured; needed with measured parts.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub characteristic: Option<CharacteristicRequest>,
    /// Confidence of the guard band and of every bound; default 0.95.
    #[serde(default = "default_confidence")]
    pub confidence: Confidence,
    /// What is known of the lot.
    pub evidence: EvidenceRequest,
    /// The limit of the characteristic; needed with measured parts, and of no meaning to a pour test.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub limit: Option<LimitRequest>,
    /// The risks to keep; default 5 % of rejecting 1 % nonconforming, 10 % of accepting 6 %.
    #[serde(default)]
    pub plan: PlanRequest,
}

/// What was measured.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct CharacteristicRequest {
    /// Its name.
    #[schema(min_length = 1, max_length = 200, example = "edge radius")]
    pub name: String,
    /// Unit of every value and limit of this request.
    #[schema(min_length = 1, max_length = 40, example = "mm")]
    pub unit: String,
}

/// The two points of the operating characteristic that the plan keeps.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct PlanRequest {
    /// Quality that is not to be accepted, and the risk of accepting it.
    #[serde(default = "usual_consumer")]
    pub consumer: PointRequest,
    /// Quality that is to be accepted, and the risk of rejecting it.
    #[serde(default = "usual_producer")]
    pub producer: PointRequest,
}

/// A point of an operating characteristic.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct PointRequest {
    /// Fraction nonconforming.
    #[schema(minimum = 0.000001, maximum = 0.5, example = 0.01)]
    pub fraction: f64,
    /// The risk.
    #[schema(minimum = 0.0001, maximum = 0.5, example = 0.05)]
    pub risk: f64,
}

/// Fractions and risks that a plan may have.
const FRACTION: (f64, f64) = (1e-6, 0.5);
const RISK: (f64, f64) = (1e-4, 0.5);

const fn default_confidence() -> Confidence {
    Confidence::known(0.95)
}

const fn usual_producer() -> PointRequest {
    PointRequest { fraction: 0.01, risk: 0.05 }
}

const fn usual_consumer() -> PointRequest {
    PointRequest { fraction: 0.06, risk: 0.10 }
}

impl Default for PlanRequest {
    fn default() -> Self {
        Self { consumer: usual_consumer(), producer: usual_producer() }
    }
}

impl From<PointRequest> for RiskPoint {
    fn from(point: PointRequest) -> Self {
        Self { fraction: point.fraction, risk: point.risk }
    }
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

/// What is asked of a lot.
#[derive(Debug, Clone)]
pub enum Question {
    /// Measured parts against a limit.
    Measured {
        /// The values.
        values: Vec<f64>,
        /// Standard uncertainty, repeatability and bias.
        gauge: [f64; 3],
        /// The limit, or where it comes from.
        limit: Box<LimitSought>,
        /// The risks.
        points: Points,
        /// Unit of the values.
        unit: String,
    },
    /// A pour test.
    Poured(PourTest),
}

impl LotRequest {
    /// What is asked.
    ///
    /// # Errors
    /// Every fault of the request.
    pub fn question(&self) -> Result<Question, Vec<Fault>> {
        let mut faults = Vec::new();
        let points = self.points(&mut faults);
        self.characteristic_faults(&mut faults);
        let limit = self.limit.as_ref().map(|limit| limit.sought());
        let limit = match limit {
            Some(Ok(limit)) => Some(limit),
            Some(Err(found)) => {
                faults.extend(found);
                None
            }
            None => None,
        };
        match &self.evidence {
            EvidenceRequest::PourTest(test) => {
                faults.extend(test.faults());
                if !faults.is_empty() {
                    return Err(faults);
                }
                Ok(Question::Poured(PourTest {
                    pieces: test.pieces,
                    dribbled: test.dribbled,
                    lot_size: test.lot_size,
                    points,
                    confidence: self.confidence.get(),
                }))
            }
            EvidenceRequest::Measured(measured) => {
                if self.limit.is_none() {
                    faults.push(Fault::new("/limit", "missing", "is needed with measured parts"));
                }
                if self.characteristic.is_none() {
                    faults.push(Fault::new("/characteristic", "missing", "is needed with measured parts"));
                }
                let values = measured.values(&mut faults);
                let unit = self.characteristic.as_ref().map(|c| c.unit.clone()).unwrap_or_default();
                if let (Some(limit), Some(_)) = (&limit, &self.characteristic) {
                    faults.extend(limit.unit_fault(&unit));
                }
                match limit {
                    Some(limit) if faults.is_empty() => Ok(Question::Measured {
                        values,
                        gauge: measured.gauge(),
                        limit: Box::new(limit),
                        points,
                        unit,
                    }),
                    _ => Err(faults),
                }
            }
        }
    }

    fn points(&self, faults: &mut Vec<Fault>) -> Points {
        let PlanRequest { producer, consumer } = self.plan;
        let before = faults.len();
        for (name, point) in [("producer", producer), ("consumer", consumer)] {
            for (member, value, (low, high)) in
                [("fraction", point.fraction, FRACTION), ("risk", point.risk, RISK)]
            {
                if !(value >= low && value <= high) {
                    let detail = format!("must be between {low} and {high}");
                    let fault = Fault::new(format!("/plan/{name}/{member}"), "out_of_range", detail);
                    faults.push(fault.within(low, high));
                }
            }
        }
        let points = Points { producer: producer.into(), consumer: consumer.into() };
        if faults.len() == before {
            if producer.fraction >= consumer.fraction {
                let detail = format!(
                    "the producer's fraction {} must be below the consumer's {}",
                    producer.fraction, consumer.fraction
                );
                faults.push(Fault::new("/plan", "contradiction", detail));
            } else if let Err(fault) = VariablesPlan::between(points.producer, points.consumer) {
                faults.push(Fault::new("/plan", "not_applicable", fault.to_string()));
            }
        }
        points
    }

    fn characteristic_faults(&self, faults: &mut Vec<Fault>) {
        let Some(CharacteristicRequest { name, unit }) = &self.characteristic else { return };
        for (member, text, most) in [("name", name, 200), ("unit", unit, 40)] {
            let length = text.chars().count();
            if length == 0 || length > most {
                let detail = format!("{length} characters are given; accepted: 1 to {most}");
                let fault = Fault::new(format!("/characteristic/{member}"), "wrong_length", detail);
                faults.push(fault.within(1.0, f64::from(most as u32)));
            }
        }
    }
}

impl Request for LotRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        self.question().err().unwrap_or_default()
    }
}

//! The limit of a characteristic: given, or found by a design.

use std::sync::atomic::AtomicBool;

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

use crate::{
    analysis::{
        design::{self, Design},
        fault::Fault,
        lot::{Limit, Sense},
    },
    physics::separation::closed_form::DEFAULT_SET,
    service::api::{
        designs::{DesignRequest, Plan},
        inside::within,
    },
};

/// The limit: exactly one member names which.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum LimitRequest {
    /// The limit that a design finds: the field it varies is the characteristic.
    FromDesign(Box<DesignRequest>),
    /// Values at least this large conform.
    Lower(BoundRequest),
    /// Values at most this large conform.
    Upper(BoundRequest),
}

/// A limit that is given.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct BoundRequest {
    /// Its value, in the characteristic's unit.
    #[schema(example = 0.52)]
    pub value: f64,
}

/// A limit, or what finds it.
#[derive(Debug, Clone)]
pub enum LimitSought {
    /// Given.
    Given(Limit),
    /// To be found.
    Design(Plan),
}

/// The largest value of a limit.
const LARGEST: f64 = 1e9;

impl LimitRequest {
    pub(super) fn sought(&self) -> Result<LimitSought, Vec<Fault>> {
        let (kind, value, sense) = match self {
            Self::FromDesign(request) => {
                let plan = request.as_ref().clone().filled().plan();
                return plan.map(LimitSought::Design).map_err(|faults| within("/limit/from_design", faults));
            }
            Self::Upper(bound) => ("upper", bound.value, Sense::AtMost),
            Self::Lower(bound) => ("lower", bound.value, Sense::AtLeast),
        };
        if value.abs() <= LARGEST {
            return Ok(LimitSought::Given(Limit { value, sense }));
        }
        let detail = format!("must be between {} and {LARGEST}", -LARGEST);
        let fault = Fault::new(format!("/limit/{kind}/value"), "out_of_range", detail);
        Err(vec![fault.within(-LARGEST, LARGEST)])
    }
}

impl LimitSought {
    /// Whether values in `unit` cannot be held against this limit.
    pub(super) fn unit_fault(&self, unit: &str) -> Option<Fault> {
        let Self::Design(plan) = self else { return None };
        let quantity = plan.field.quantity();
        (quantity.unit != unit).then(|| {
            let detail = format!(
                "the design limits the {} in {}, so the values must be in it too",
                quantity.name,
                if quantity.unit.is_empty() { "no unit" } else { quantity.unit }
            );
            Fault::new("/characteristic/unit", "mixed_units", detail).choices([quantity.unit])
        })
    }

    /// The name of the coefficient set that the limit rests on; the default's where it is given.
    pub(super) fn coefficients(&self) -> &'static str {
        match self {
            Self::Given(_) => DEFAULT_SET.id,
            Self::Design(plan) => plan.cases.first().map_or(DEFAULT_SET.id, |case| case.coefficients.id),
        }
    }

    /// The limit.
    ///
    /// # Errors
    /// A fault when the design finds none; `Ok(None)` when cancelled.
    pub(super) fn find(&self, cancelled: &AtomicBool) -> Result<Option<Limit>, Fault> {
        let plan = match self {
            Self::Given(limit) => return Ok(Some(*limit)),
            Self::Design(plan) => plan,
        };
        let question = Design { field: plan.field, between: plan.between, cases: &plan.cases };
        let Ok(outcome) = design::design(&question, cancelled, &|| {}) else { return Ok(None) };
        let Some(found) = outcome.limit else {
            let detail = "the design finds no value in the bracket at which every case is clean; POST /v1/designs says which case is in the way";
            return Err(Fault::new("/limit/from_design", "no_limit", detail));
        };
        let sense = match found.sense {
            design::Sense::AtMost => Sense::AtMost,
            design::Sense::AtLeast => Sense::AtLeast,
        };
        Ok(Some(Limit { value: found.value, sense }))
    }
}

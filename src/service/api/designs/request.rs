//! The design request. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::sync::OnceLock;

use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

use crate::{
    analysis::{
        fault::Fault,
        field::Field,
        spec::{Spec, Uncertainties},
    },
    service::{
        api::{
            evaluations::{EvaluationRequest, PourRequest},
            inside::{Touched, field_at, within},
            liquid::LiquidRequest,
            quantity::{Confidence, given},
            surface::SurfaceRequest,
        },
        explain::{Contract, Request},
        nearest::quoted,
    },
};

/// The most cases of one design.
pub const MOST_CASES: usize = 10_000;

/// The longest name of a case.
const LONGEST_NAME: usize = 200;

/// Between which values of one field does a whole list of liquids and pours stay clean?
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct DesignRequest {
    /// The lip, and whatever the cases do not give themselves.
    pub base: EvaluationRequest,
    /// What the lip has to stand; default the base alone.
    #[serde(default = "base_alone")]
    #[schema(min_items = 1, max_items = 10_000)]
    pub cases: Vec<CaseRequest>,
    /// What counts as clean; default the base's confidence.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub require: Option<RequireRequest>,
    /// The field to be limited.
    pub vary: VaryRequest,
}

/// One case: the base with another liquid, surface or pour.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct CaseRequest {
    /// What is poured; default the base's.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub liquid: Option<LiquidRequest>,
    /// Its name in the answer; no two may be the same.
    #[schema(min_length = 1, max_length = 200, example = "cold water")]
    pub name: String,
    /// How fast it is poured; default the base's.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub pour: Option<PourRequest>,
    /// What the lip is made of, as this liquid meets it; default the base's.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub surface: Option<SurfaceRequest>,
}

/// What counts as clean.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RequireRequest {
    /// Confidence of the clean verdict.
    pub confidence: Confidence,
}

/// The field to be limited.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct VaryRequest {
    /// The bracket to look in, in the field's unit: the smaller end first.
    #[schema(value_type = Vec<f64>, min_items = 2, max_items = 2, example = json!([0.05, 5.0]))]
    pub between: Vec<f64>,
    /// JSON Pointer of a number in the base.
    #[schema(example = "/lip/edge/rounded/radius_mm")]
    pub pointer: String,
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

fn base_alone() -> Vec<CaseRequest> {
    vec![CaseRequest { liquid: None, name: "base".to_owned(), pour: None, surface: None }]
}

/// What is to be found.
#[derive(Debug, Clone)]
pub struct Plan {
    /// The field.
    pub field: Field,
    /// The bracket.
    pub between: [f64; 2],
    /// The cases.
    pub cases: Vec<Spec>,
}

impl DesignRequest {
    /// The request with every default filled in.
    #[must_use]
    pub fn filled(mut self) -> Self {
        let confidence = self.base.confidence;
        self.require.get_or_insert(RequireRequest { confidence });
        self
    }

    /// What is to be found.
    ///
    /// # Errors
    /// Every fault of the request.
    pub fn plan(&self) -> Result<Plan, Vec<Fault>> {
        let mut faults = Vec::new();
        let base = match self.base.question() {
            Ok((spec, _)) => Some(spec),
            Err(found) => {
                faults.extend(within("/base", found));
                None
            }
        };
        let at = "/vary/pointer".to_owned();
        let field = field_at(&self.base, base.as_ref(), &self.vary.pointer, at);
        let field = field.map_err(|fault| faults.push(fault)).ok();
        let between = self.between(field, &mut faults);
        let count = self.cases.len();
        if count == 0 || count > MOST_CASES {
            let detail = format!("{count} cases are given; accepted: 1 to {MOST_CASES}");
            faults.push(Fault::new("/cases", "wrong_count", detail).within(1.0, MOST_CASES as f64));
        }
        self.check_names(&mut faults);
        let mut cases = Vec::with_capacity(count.min(MOST_CASES));
        if let (Some(base), Some(field)) = (&base, field) {
            let touched = Touched::by([field]);
            if self.cases.iter().any(|case| case.liquid.is_none() && case.surface.is_none()) {
                faults.extend(touched.lasting_faults(base));
            }
            for (i, case) in self.cases.iter().enumerate().take(MOST_CASES) {
                let at = format!("/cases/{i}");
                match self.case(case, base, field) {
                    Ok(spec) => {
                        // What the case gives itself is the case's fault.
                        let own = touched.lasting_faults(&spec).into_iter().filter_map(|mut fault| {
                            let inner = fault.pointer.strip_prefix("/base")?;
                            let given = (inner.starts_with("/liquid") && case.liquid.is_some())
                                || (inner.starts_with("/surface")
                                    && (case.surface.is_some() || case.liquid.is_some()));
                            fault.pointer = format!("{at}{inner}").into();
                            given.then_some(fault)
                        });
                        faults.extend(own);
                        cases.push(spec);
                    }
                    Err(found) => faults.extend(within(&at, found)),
                }
            }
        }
        match (field, between) {
            (Some(field), Some(between)) if faults.is_empty() => Ok(Plan { field, between, cases }),
            _ => Err(faults),
        }
    }

    /// The question of one case.
    fn case(&self, case: &CaseRequest, base: &Spec, field: Field) -> Result<Spec, Vec<Fault>> {
        let mut spec = *base;
        let mut faults = Vec::new();
        let mut note = |fault: Fault| faults.push(fault);
        if let Some(liquid) = &case.liquid {
            spec.liquid = liquid.spec("/liquid").map_err(&mut note).unwrap_or(base.liquid);
        }
        if let Some(surface) = &case.surface {
            spec.surface = surface.spec("/surface").map_err(&mut note).unwrap_or(base.surface);
        }
        if let Some(pour) = &case.pour {
            spec.flow_ml_s = pour.flow_ml_s.get();
        }
        if let Some(require) = self.require {
            spec.confidence = require.confidence.get();
        }
        // Uncertainties of numbers that this case does not have fall away.
        spec.uncertainty = Uncertainties::default();
        for field in Field::all() {
            if let (Some(u), Some(_)) = (base.uncertainty.get(field), field.get(&spec)) {
                spec.uncertainty.set(field, u);
            }
        }
        if field_at(&self.base, Some(&spec), field.pointer(), String::new()).is_err() {
            let detail = format!("this case has no {}, which is to be varied", field.pointer());
            faults.push(Fault::new("", "not_applicable", detail));
        }
        if faults.is_empty() { Ok(spec) } else { Err(faults) }
    }

    fn check_names(&self, faults: &mut Vec<Fault>) {
        let mut known = std::collections::BTreeSet::new();
        for (i, case) in self.cases.iter().enumerate().take(MOST_CASES) {
            let length = case.name.chars().count();
            let pointer = format!("/cases/{i}/name");
            if length == 0 || length > LONGEST_NAME {
                let detail = format!("{length} characters are given; accepted: 1 to {LONGEST_NAME}");
                faults.push(Fault::new(pointer, "wrong_length", detail).within(1.0, LONGEST_NAME as f64));
            } else if !known.insert(case.name.as_str()) {
                let detail = format!("an earlier case is named {} already", quoted(&case.name));
                faults.push(Fault::new(pointer, "repeated", detail));
            }
        }
    }

    fn between(&self, field: Option<Field>, faults: &mut Vec<Fault>) -> Option<[f64; 2]> {
        const AT: &str = "/vary/between";
        let &[low, high] = self.vary.between.as_slice() else {
            let detail = format!("{} numbers are given; 2 are needed", self.vary.between.len());
            faults.push(Fault::new(AT, "wrong_count", detail).within(2.0, 2.0));
            return None;
        };
        let before = faults.len();
        if let Some(quantity) = field.map(Field::quantity) {
            for (i, value) in [low, high].into_iter().enumerate() {
                if !quantity.accepts(value) {
                    let (low, high) = (quantity.minimum, quantity.maximum);
                    let detail = format!("must be between {low} and {high} {}", quantity.unit);
                    let fault = Fault::new(format!("{AT}/{i}"), "out_of_range", detail.trim_end());
                    faults.push(fault.within(low, high));
                }
            }
        }
        if low == high {
            faults.push(Fault::new(AT, "empty_range", "the ends of the bracket are equal"));
        } else if low > high {
            faults.push(Fault::new(AT, "contradiction", "the first end is above the second"));
        }
        (faults.len() == before).then_some([low, high])
    }
}

impl Request for DesignRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        self.plan().err().unwrap_or_default()
    }
}

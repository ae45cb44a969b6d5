//! The sweep request. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::{borrow::Cow, ops::Range, sync::OnceLock};

use serde::{Deserialize, Deserializer, Serialize, Serializer, de};
use utoipa::{
    PartialSchema, ToSchema,
    openapi::{ObjectBuilder, RefOr, Type, schema::Schema},
};

use crate::{
    analysis::{
        fault::Fault,
        spec::Spec,
        sweep::{Axis, MOST_AXES, Output, Values},
    },
    service::{
        api::{
            evaluations::EvaluationRequest,
            inside::{Touched, field_at, within},
            quantity::given,
        },
        explain::{Contract, Request},
        nearest::quoted,
    },
};

/// One question at many points: a table over one to four of its fields.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct SweepRequest {
    /// One to four fields to vary; the first is the slowest.
    #[schema(min_items = 1, max_items = 4)]
    pub axes: Vec<AxisRequest>,
    /// The question; each point is this with other values in the fields that the axes name.
    pub base: EvaluationRequest,
    /// What is asked of each point, in the order of the columns; default safety factor with its interval, dribble probability and verdict.
    #[serde(default = "default_outputs")]
    #[schema(min_items = 1)]
    pub outputs: Vec<OutputRequest>,
    /// A slice of the rows, so that a sweep can be spread over many replicas; default all of them.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub part: Option<SliceRequest>,
}

/// One field and its values, in the field's unit: either `values`, or `from`, `to` and `count`.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct AxisRequest {
    /// How many values, both ends included.
    #[serde(default, deserialize_with = "whole", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false, minimum = 2, example = 60)]
    pub count: Option<u64>,
    /// First value.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false, example = 0.1)]
    pub from: Option<f64>,
    /// JSON Pointer of a number in the base, e.g. `/liquid/catalogue/temperature_c`.
    #[schema(example = "/lip/edge/rounded/radius_mm")]
    pub pointer: String,
    /// How the values lie between the ends; default linear.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub spacing: Option<SpacingRequest>,
    /// Last value.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false, example = 3.0)]
    pub to: Option<f64>,
    /// The values themselves.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false, min_items = 1)]
    pub values: Option<Vec<f64>>,
}

/// How the values of an axis lie between its ends.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SpacingRequest {
    /// Equal steps.
    #[default]
    Linear,
    /// Equal ratios.
    Log,
}

/// A slice of the rows: rows ⌊N·index/of⌋ up to ⌊N·(index + 1)/of⌋.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct SliceRequest {
    /// Which slice, from 0.
    #[serde(deserialize_with = "needed")]
    #[schema(minimum = 0, example = 3)]
    pub index: u64,
    /// How many slices there are.
    #[serde(deserialize_with = "needed")]
    #[schema(minimum = 1, maximum = 1_000_000, example = 16)]
    pub of: u64,
}

/// The name of an output.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct OutputRequest(pub Output);

impl<'de> Deserialize<'de> for OutputRequest {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let name = Cow::<'de, str>::deserialize(deserializer)?;
        Output::named(&name).map(Self).ok_or_else(|| de::Error::custom("no output has this name"))
    }
}

impl Serialize for OutputRequest {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.0.name())
    }
}

impl PartialSchema for OutputRequest {
    fn schema() -> RefOr<Schema> {
        let meanings: Vec<String> =
            Output::all().map(|output| format!("`{}`: {}", output.name(), output.meaning())).collect();
        ObjectBuilder::new()
            .schema_type(Type::String)
            .description(Some(format!("An output of a sweep. {}.", meanings.join("; "))))
            .enum_values(Some(Output::all().map(Output::name)))
            .examples(["safety_factor"])
            .into()
    }
}

impl ToSchema for OutputRequest {
    fn name() -> Cow<'static, str> {
        Cow::Borrowed("OutputRequest")
    }
}

fn default_outputs() -> Vec<OutputRequest> {
    [
        Output::SafetyFactor,
        Output::SafetyFactorLow,
        Output::SafetyFactorHigh,
        Output::DribbleProbability,
        Output::Verdict,
    ]
    .map(OutputRequest)
    .to_vec()
}

/// A whole number, written as such or as `2.0`.
fn needed<'de, D: Deserializer<'de>>(deserializer: D) -> Result<u64, D::Error> {
    let number = f64::deserialize(deserializer)?;
    // Up to here doubles hold every whole number.
    if (0.0..=9_007_199_254_740_992.0).contains(&number) && number == libm::trunc(number) {
        Ok(number as u64)
    } else {
        Err(de::Error::custom("a whole number is needed"))
    }
}

fn whole<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<u64>, D::Error> {
    needed(deserializer).map(Some)
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

/// What is to be computed.
#[derive(Debug, Clone)]
pub struct Plan {
    /// The question.
    pub spec: Spec,
    /// Its axes.
    pub axes: Vec<Axis>,
    /// What is asked of each point.
    pub outputs: Vec<Output>,
    /// Which of the rows.
    pub rows: Range<usize>,
}

impl SweepRequest {
    /// The request with every default filled in.
    #[must_use]
    pub fn filled(mut self) -> Self {
        for axis in &mut self.axes {
            if axis.values.is_none() {
                axis.spacing.get_or_insert_default();
            }
        }
        self
    }

    /// What is to be computed, of at most `most` points.
    ///
    /// # Errors
    /// Every fault of the request.
    pub fn plan(&self, most: usize) -> Result<Plan, Vec<Fault>> {
        let mut faults = Vec::new();
        let spec = match self.base.question() {
            Ok((spec, _)) => Some(spec),
            Err(found) => {
                faults.extend(within("/base", found));
                None
            }
        };
        let count = self.axes.len();
        if count == 0 || count > MOST_AXES {
            let detail = format!("{count} axes are given; accepted: 1 to {MOST_AXES}");
            faults.push(Fault::new("/axes", "wrong_count", detail).within(1.0, MOST_AXES as f64));
        }
        let axes: Vec<Axis> = self
            .axes
            .iter()
            .enumerate()
            .filter_map(|(i, axis)| self.axis(i, axis, spec.as_ref(), &mut faults))
            .collect();
        self.check_outputs(&axes, &mut faults);
        let rows = self.rows(&axes, most, &mut faults);
        if let Some(spec) = &spec {
            let touched = Touched::by(axes.iter().map(Axis::field));
            faults.extend(touched.lasting_faults(spec));
        }
        match spec {
            Some(spec) if faults.is_empty() => {
                Ok(Plan { spec, axes, outputs: self.outputs.iter().map(|o| o.0).collect(), rows })
            }
            _ => Err(faults),
        }
    }

    fn axis(
        &self,
        index: usize,
        axis: &AxisRequest,
        spec: Option<&Spec>,
        faults: &mut Vec<Fault>,
    ) -> Option<Axis> {
        let at = |member: &str| format!("/axes/{index}/{member}");
        if self.axes.iter().take(index).any(|other| other.pointer == axis.pointer) {
            let detail = format!("{} is varied by an earlier axis already", quoted(&axis.pointer));
            faults.push(Fault::new(at("pointer"), "repeated", detail));
        }
        let field =
            field_at(&self.base, spec, &axis.pointer, at("pointer")).map_err(|fault| faults.push(fault)).ok();
        let values = axis.values(&at, faults);
        let field = field?;
        let quantity = field.quantity();
        let mut check = |value: f64, pointer: String| {
            if !quantity.accepts(value) {
                let (low, high) = (quantity.minimum, quantity.maximum);
                let detail = format!("must be between {low} and {high} {}", quantity.unit);
                faults.push(Fault::new(pointer, "out_of_range", detail.trim_end()).within(low, high));
            }
        };
        for (value, member) in [(axis.from, "from"), (axis.to, "to")] {
            if let Some(value) = value {
                check(value, at(member));
            }
        }
        for (i, value) in axis.values.iter().flatten().enumerate().take(MOST_LISTED_FAULTS) {
            check(*value, at(&format!("values/{i}")));
        }
        let late = axis.values.iter().flatten().enumerate().skip(MOST_LISTED_FAULTS);
        if let Some((i, value)) = late.into_iter().find(|(_, value)| !quantity.accepts(**value)) {
            check(*value, at(&format!("values/{i}")));
        }
        values.map(|values| Axis::new(field, values))
    }

    fn check_outputs(&self, axes: &[Axis], faults: &mut Vec<Fault>) {
        if self.outputs.is_empty() {
            let detail = "0 outputs are given; one at least is needed";
            faults.push(Fault::new("/outputs", "wrong_count", detail).within(1.0, None));
        }
        for (i, output) in self.outputs.iter().enumerate() {
            let name = output.0.name();
            let earlier = self.outputs.iter().take(i).any(|other| other == output);
            if earlier || axes.iter().any(|axis| axis.field().member() == name) {
                let detail = format!("there is a column {} already", quoted(name));
                faults.push(Fault::new(format!("/outputs/{i}"), "repeated", detail));
            }
        }
    }

    /// Which of the rows are asked for.
    fn rows(&self, axes: &[Axis], most: usize, faults: &mut Vec<Fault>) -> Range<usize> {
        let all = axes.iter().map(Axis::len).fold(1_usize, usize::saturating_mul);
        let Some(SliceRequest { index, of }) = self.part else {
            if all > most {
                faults.push(too_many(all, most));
            }
            return 0..all;
        };
        if !(1..=MOST_SLICES).contains(&of) {
            let detail = format!("{of} slices are asked for; accepted: 1 to {MOST_SLICES}");
            faults.push(Fault::new("/part/of", "out_of_range", detail).within(1.0, MOST_SLICES as f64));
            return 0..0;
        }
        if index >= of {
            let detail = format!("the slices are numbered from 0 to {}", of - 1);
            let fault = Fault::new("/part/index", "out_of_range", detail);
            faults.push(fault.within(0.0, (of - 1) as f64));
            return 0..0;
        }
        let edge = |i: u64| (all as u128 * u128::from(i) / u128::from(of)) as usize;
        let rows = edge(index)..edge(index + 1);
        if rows.len() > most {
            faults.push(too_many(rows.len(), most));
        }
        rows
    }
}

/// The most slices that a sweep can be cut into.
const MOST_SLICES: u64 = 1_000_000;

/// Of so many listed values each is checked; of the rest the first bad one is named.
const MOST_LISTED_FAULTS: usize = 64;

fn too_many(points: usize, most: usize) -> Fault {
    let detail = format!(
        "{points} points are asked for; this server computes {most} in one request at most; `part` cuts a larger sweep into slices"
    );
    Fault::new("/axes", "too_many_points", detail).within(1.0, most as f64)
}

impl AxisRequest {
    /// How the values lie; what is wrong with that goes to `faults`.
    fn values(&self, at: &impl Fn(&str) -> String, faults: &mut Vec<Fault>) -> Option<Values> {
        if let Some(values) = &self.values {
            let before = faults.len();
            let others = [
                ("from", self.from.is_some()),
                ("to", self.to.is_some()),
                ("count", self.count.is_some()),
                ("spacing", self.spacing.is_some()),
            ];
            for (member, given) in others {
                if given {
                    let detail = "an axis with listed values takes no other description of them";
                    faults.push(Fault::new(at(member), "contradiction", detail));
                }
            }
            if values.is_empty() {
                let detail = "0 values are given; one at least is needed";
                faults.push(Fault::new(at("values"), "wrong_count", detail).within(1.0, None));
            }
            return (faults.len() == before).then(|| Values::Listed(values.clone()));
        }
        let before = faults.len();
        for (member, missing) in
            [("from", self.from.is_none()), ("to", self.to.is_none()), ("count", self.count.is_none())]
        {
            if missing {
                let detail = "is needed where the values are not listed";
                faults.push(Fault::new(at(member), "missing", detail));
            }
        }
        if let Some(count @ 0..2) = self.count {
            let detail = format!(
                "{count} values are asked for; an axis from one end to the other has 2 at least; to keep a field fixed, set it in the base"
            );
            faults.push(Fault::new(at("count"), "out_of_range", detail).within(2.0, None));
        }
        let (from, to) = (self.from?, self.to?);
        if from == to {
            let detail = "the ends of the axis are equal; to keep a field fixed, set it in the base";
            faults.push(Fault::new(at("to"), "empty_range", detail));
        }
        let spacing = self.spacing.unwrap_or_default();
        if spacing == SpacingRequest::Log {
            for (member, value) in [("from", from), ("to", to)] {
                let opposite = from.signum() != to.signum() && member == "from" && from != 0.0 && to != 0.0;
                if value == 0.0 || opposite {
                    let detail = "logarithmic spacing cannot start at, end at or pass through zero; use linear spacing or listed values";
                    faults.push(Fault::new(at(member), "log_through_zero", detail));
                }
            }
        }
        let count = usize::try_from(self.count?).unwrap_or(usize::MAX);
        (faults.len() == before).then_some(match spacing {
            SpacingRequest::Linear => Values::Linear { from, to, count },
            SpacingRequest::Log => Values::Logarithmic { from, to, count },
        })
    }
}

impl Request for SweepRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        self.plan(usize::MAX).err().unwrap_or_default()
    }
}

//! What is known of a lot: measured parts, or a pour test.

use std::{borrow::Cow, collections::BTreeSet};

use serde::{Deserialize, Serialize};
use serde_json::{Value, json};
use utoipa::{
    PartialSchema, ToSchema,
    openapi::{
        RefOr,
        schema::{AnyOfBuilder, ObjectBuilder, Schema, Type},
    },
};

use crate::{
    analysis::{fault::Fault, lot::mixed_units},
    service::{api::quantity::whole_number, nearest::quoted},
};

/// What is known of the lot: exactly one member names it.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum EvidenceRequest {
    /// Parts drawn at random and measured.
    Measured(MeasuredEvidence),
    /// Pieces drawn at random and poured.
    PourTest(PourTestEvidence),
}

/// Measured parts.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct MeasuredEvidence {
    /// By how much the gauge reads too high, in the characteristic's unit; default 0. Values are freed of it.
    #[serde(default)]
    #[schema(example = 0)]
    pub bias: f64,
    /// Standard deviation of repeated measurements of one part; default 0. It is a part of `standard_uncertainty` that already widens the spread of the values, so
    /// only the rest moves the limit.
    #[serde(default)]
    #[schema(minimum = 0, example = 0.003)]
    pub repeatability: f64,
    /// Standard uncertainty of one measurement, freed of the bias; default 0. What of it is common to all parts shows nowhere in the values: it moves the limit that
    /// decides inwards.
    #[serde(default)]
    #[schema(minimum = 0, example = 0.008)]
    pub standard_uncertainty: f64,
    /// The values, each a number or `{"part", "value"}`.
    #[schema(min_items = 1, max_items = 100_000)]
    pub values: Vec<ValueRequest>,
}

/// A measured value: a number, or an object with the part's name beside it.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize)]
#[serde(transparent)]
pub struct ValueRequest(Value);

impl PartialSchema for ValueRequest {
    fn schema() -> RefOr<Schema> {
        let number = || ObjectBuilder::new().schema_type(Type::Number);
        let named = ObjectBuilder::new()
            .property(
                "part",
                ObjectBuilder::new().schema_type(Type::String).description(Some("Name of the part.")),
            )
            .property("value", number().description(Some("Its value.")))
            .required("part")
            .required("value")
            .additional_properties(Some(utoipa::openapi::schema::AdditionalProperties::FreeForm(false)));
        AnyOfBuilder::new()
            .item(number())
            .item(named)
            .description(Some("A measured value: a number, or an object with the part's name beside it."))
            .examples([json!(0.412), json!({"part": "cavity 4", "value": 0.412})])
            .into()
    }
}

impl ToSchema for ValueRequest {
    fn name() -> Cow<'static, str> {
        Cow::Borrowed("MeasuredValue")
    }
}

/// A pour test.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct PourTestEvidence {
    /// Pieces that dribbled.
    #[serde(deserialize_with = "whole_number")]
    #[schema(minimum = 0, maximum = 1_000_000, example = 0)]
    pub dribbled: u64,
    /// Size of the lot; default a stream of production without end.
    #[serde(default, deserialize_with = "lot_size", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false, minimum = 1, maximum = 1_000_000_000, example = 2000)]
    pub lot_size: Option<u64>,
    /// Pieces poured.
    #[serde(deserialize_with = "whole_number")]
    #[schema(minimum = 1, maximum = 1_000_000, example = 45)]
    pub pieces: u64,
}

fn lot_size<'de, D: serde::Deserializer<'de>>(deserializer: D) -> Result<Option<u64>, D::Error> {
    whole_number(deserializer).map(Some)
}

/// The most parts of one lot.
const MOST_VALUES: usize = 100_000;
/// The most pieces poured, and the largest lot.
const MOST_PIECES: u64 = 1_000_000;
const LARGEST_LOT: u64 = 1_000_000_000;
/// The largest number (own judgement: far beyond any characteristic in any unit).
const LARGEST: f64 = 1e9;
/// The most faults of values that are listed.
const MOST_LISTED: usize = 64;

impl MeasuredEvidence {
    /// Standard uncertainty, repeatability and bias.
    #[must_use]
    pub fn gauge(&self) -> [f64; 3] {
        [self.standard_uncertainty, self.repeatability, self.bias]
    }

    /// The values as numbers; what is wrong with them and with the gauge goes to `faults`.
    pub(super) fn values(&self, faults: &mut Vec<Fault>) -> Vec<f64> {
        const AT: &str = "/evidence/measured";
        let range = |member: &str, low: f64, high: f64| {
            let detail = format!("must be between {low} and {high}");
            Fault::new(format!("{AT}/{member}"), "out_of_range", detail).within(low, high)
        };
        for (member, value) in
            [("standard_uncertainty", self.standard_uncertainty), ("repeatability", self.repeatability)]
        {
            if !(0.0..=LARGEST).contains(&value) {
                faults.push(range(member, 0.0, LARGEST));
            }
        }
        if self.bias.abs() > LARGEST {
            faults.push(range("bias", -LARGEST, LARGEST));
        }
        if self.repeatability > self.standard_uncertainty {
            let detail = "the repeatability is a part of the standard uncertainty and cannot be above it";
            faults.push(Fault::new(format!("{AT}/repeatability"), "contradiction", detail));
        }
        let count = self.values.len();
        if count == 0 || count > MOST_VALUES {
            let detail = format!("{count} values are given; accepted: 1 to {MOST_VALUES}");
            let fault = Fault::new(format!("{AT}/values"), "wrong_count", detail);
            faults.push(fault.within(1.0, MOST_VALUES as f64));
            return Vec::new();
        }
        let before = faults.len();
        let mut names = BTreeSet::new();
        let mut values = Vec::with_capacity(count);
        for (i, value) in self.values.iter().enumerate() {
            if faults.len() - before >= MOST_LISTED {
                break;
            }
            let at = format!("{AT}/values/{i}");
            match value.read(&at) {
                Ok((number, name)) => {
                    values.push(number);
                    if let Some(name) = name
                        && !names.insert(name)
                    {
                        let detail = format!("an earlier part is named {} already", quoted(name));
                        faults.push(Fault::new(format!("{at}/part"), "repeated", detail));
                    }
                }
                Err(found) => faults.extend(found),
            }
        }
        if faults.len() == before
            && let Some(mixed) = mixed_units(&values)
        {
            let some = mixed.places.iter().take(8).map(usize::to_string).collect::<Vec<_>>().join(", ");
            let detail = format!(
                "{} of {count} values (places {some}) are about {:.3} times the others, as if given in another unit; give all in the characteristic's",
                mixed.places.len(),
                mixed.factor
            );
            let place = mixed.places.first().copied().unwrap_or_default();
            faults.push(Fault::new(format!("{AT}/values/{place}"), "mixed_units", detail));
        }
        values
    }
}

impl ValueRequest {
    /// The number and the part's name.
    fn read(&self, at: &str) -> Result<(f64, Option<&str>), Vec<Fault>> {
        let wrong = |member: &str, detail: String| Fault::new(format!("{at}{member}"), "wrong_type", detail);
        let number = |member: &str, value: &Value| match value.as_f64() {
            Some(x) if x.abs() <= LARGEST => Ok(x),
            Some(_) => {
                let detail = format!("must be between {} and {LARGEST}", -LARGEST);
                Err(Fault::new(format!("{at}{member}"), "out_of_range", detail).within(-LARGEST, LARGEST))
            }
            None => Err(wrong(member, "must be a number, in the characteristic's unit".to_owned())),
        };
        let Value::Object(members) = &self.0 else {
            return number("", &self.0).map(|x| (x, None)).map_err(|fault| match &self.0 {
                Value::Number(_) => vec![fault],
                _ => vec![wrong("", "must be a number or an object with \"part\" and \"value\"".to_owned())],
            });
        };
        let mut faults = Vec::new();
        let mut found = (0.0, None);
        match members.get("value").map(|value| number("/value", value)) {
            Some(Ok(x)) => found.0 = x,
            Some(Err(fault)) => faults.push(fault),
            None => faults.push(Fault::new(format!("{at}/value"), "missing", "is needed")),
        }
        match members.get("part") {
            Some(Value::String(name)) => found.1 = Some(name.as_str()),
            Some(_) => faults.push(wrong("/part", "must be a string".to_owned())),
            None => faults.push(Fault::new(format!("{at}/part"), "missing", "is needed")),
        }
        for name in members.keys().filter(|name| !["part", "value"].contains(&name.as_str())) {
            let pointer = format!("{at}/{}", crate::service::explain::escaped(name));
            let fault = Fault::new(pointer, "unknown_field", format!("{} is not known here", quoted(name)));
            faults.push(fault.choices(["part", "value"]));
        }
        if faults.is_empty() { Ok(found) } else { Err(faults) }
    }
}

impl PourTestEvidence {
    pub(super) fn faults(&self) -> Vec<Fault> {
        const AT: &str = "/evidence/pour_test";
        let mut faults = Vec::new();
        let Self { dribbled, lot_size, pieces } = *self;
        let mut range = |member: &str, value: u64, low: u64, high: u64| {
            if value < low || value > high {
                let detail = format!("must be between {low} and {high}");
                let fault = Fault::new(format!("{AT}/{member}"), "out_of_range", detail);
                faults.push(fault.within(low as f64, high as f64));
            }
        };
        range("pieces", pieces, 1, MOST_PIECES);
        if let Some(lot) = lot_size {
            range("lot_size", lot, 1, LARGEST_LOT);
        }
        if dribbled > pieces {
            let detail = format!("{dribbled} of {pieces} pieces cannot have dribbled");
            let fault = Fault::new(format!("{AT}/dribbled"), "contradiction", detail);
            faults.push(fault.within(0.0, pieces as f64));
        }
        if let Some(lot) = lot_size.filter(|lot| pieces > *lot) {
            let detail = format!("{pieces} pieces were poured out of a lot of {lot}");
            let fault = Fault::new(format!("{AT}/pieces"), "contradiction", detail);
            faults.push(fault.within(1.0, lot as f64));
        }
        faults
    }
}

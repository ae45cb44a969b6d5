//! What requests share that hold an evaluation request and point into it.

use serde_json::Value;

use super::evaluations::EvaluationRequest;
use crate::{
    analysis::{
        fault::Fault,
        field::Field,
        spec::{LiquidSpec, Spec},
    },
    service::{
        explain::read,
        nearest::{nearest, quoted},
        problem::Problem,
    },
};

/// The field that `pointer` names in the base, to be given values. `at`: where the pointer stands in the request. Without `spec`, where the base has faults
/// of its own, it is any field of an evaluation request.
pub(super) fn field_at(
    base: &EvaluationRequest,
    spec: Option<&Spec>,
    pointer: &str,
    at: String,
) -> Result<Field, Fault> {
    let is_there = |field: Field| spec.is_none_or(|spec| has(spec, field));
    let own = || Field::all().filter(|field| is_there(*field)).map(Field::pointer);
    let Some(field) = Field::at(pointer) else {
        let there = serde_json::to_value(base).ok().and_then(|value| value.pointer(pointer).cloned());
        let fault = match there {
            Some(found) => {
                let what = match found {
                    Value::String(_) => "text",
                    Value::Number(_) => "a number that does not describe lip, surface, liquid or pour",
                    _ => "no number",
                };
                let detail = format!("{} is {what}; a number of the base is needed", quoted(pointer));
                Fault::new(at, "not_a_field", detail)
            }
            None => {
                let detail = format!("{} names no number of an evaluation request", quoted(pointer));
                Fault::new(at, "unknown_pointer", detail)
            }
        };
        return Err(fault.choices(nearest(pointer, own())));
    };
    if is_there(field) {
        return Ok(field);
    }
    let detail = format!("this base has no {pointer}: its lip, surface or liquid is of another kind");
    Err(Fault::new(at, "not_applicable", detail).choices(nearest(pointer, own())))
}

/// Whether this question has a place for the field, given or left out.
fn has(spec: &Spec, field: Field) -> bool {
    if let LiquidSpec::Catalogue { entry, .. } = &spec.liquid
        && is_composition(field)
    {
        return entry.parameters.iter().any(|parameter| Field::of(parameter.component) == field);
    }
    let mut copy = *spec;
    field.set(&mut copy, 0.0)
}

const fn is_composition(field: Field) -> bool {
    matches!(
        field,
        Field::MassFraction
            | Field::Salinity
            | Field::Fat
            | Field::Viscosity40
            | Field::Viscosity100
            | Field::Density15
    )
}

/// Which parts of a question change when these fields do.
pub(super) struct Touched {
    lip: bool,
    surface: bool,
    liquid: bool,
}

impl Touched {
    pub(super) fn by(fields: impl IntoIterator<Item = Field>) -> Self {
        let mut touched = Self { lip: false, surface: false, liquid: false };
        for field in fields {
            touched.lip |= field.pointer().starts_with("/lip/");
            touched.surface |= field.pointer().starts_with("/surface/");
            touched.liquid |= field.pointer().starts_with("/liquid/");
        }
        touched
    }

    /// The faults of the base that no value of these fields can mend, each with its pointer in the request.
    pub(super) fn lasting_faults(&self, spec: &Spec) -> Vec<Fault> {
        let mut faults = spec.resolve().err().unwrap_or_default();
        faults.retain(|fault| {
            let of = |part: &str| fault.pointer.starts_with(part);
            (of("/lip") && !self.lip)
                || (of("/surface") && !self.surface && !self.liquid)
                || (of("/liquid") && !self.liquid)
        });
        within("/base", faults)
    }
}

/// The same faults with `outer` before their pointers.
pub(super) fn within(outer: &str, mut faults: Vec<Fault>) -> Vec<Fault> {
    for fault in &mut faults {
        fault.pointer = format!("{outer}{}", fault.pointer).into();
    }
    faults
}

/// Adds what else is wrong with the base: a walk over the whole request takes a broken base for one thing and does not look at its sound parts.
pub(super) fn look_into_base(mut problem: Problem, bytes: &[u8]) -> Problem {
    let Ok(document) = serde_json::from_slice::<Value>(bytes) else { return problem };
    let Some(base) = document.get("base").filter(|base| base.is_object()) else { return problem };
    if let Err(inner) = read::<EvaluationRequest>(base.to_string().as_bytes()) {
        for mut fault in inner.errors {
            fault.pointer.insert_str(0, "/base");
            if !problem.errors.iter().any(|known| known.pointer == fault.pointer) {
                problem.errors.push(fault);
            }
        }
        let count = problem.errors.len();
        if count > 1 {
            problem.detail = format!("The request has {count} faults; see errors.");
        }
    }
    problem
}

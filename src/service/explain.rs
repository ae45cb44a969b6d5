//! Why a JSON document is not a valid request: all its faults, each with its pointer.
//!
//! The short way in is plain serde. Only when that fails is the document walked along the request's own schema, the one the OpenAPI document shows,
//! so that types, bounds and choices stand in one place. Whatever part of the document is sound is then looked at for what else is wrong with it
//! (unknown identifiers, impossible states), with sound values in place of the broken parts.

use std::{borrow::Cow, collections::BTreeMap, sync::OnceLock};

use serde::de::DeserializeOwned;
use serde_json::{Map, Value};
use utoipa::ToSchema;

use super::{
    body::{Document, Unread, read_json},
    nearest::{nearest, quoted},
    problem::{self, Problem},
};
use crate::analysis::fault::Fault;

/// A request that can tell what is wrong with it.
pub trait Request: DeserializeOwned + ToSchema {
    /// A sound request, as JSON: its members stand in for broken ones while the others are looked at.
    fn sound() -> &'static str;

    /// What is wrong with a request that has the right form.
    fn faults(&self) -> Vec<Fault>;

    /// Members that a fault of this code rests on besides its own: it is not told while one of them is a stand-in.
    fn rests_on(_code: &str) -> &'static [&'static str] {
        &[]
    }

    /// Where the schema of this request is kept once it has been written.
    fn contract() -> &'static OnceLock<Contract>;
}

/// A schema with the components that it refers to.
#[derive(Debug)]
pub struct Contract {
    root: Value,
    components: BTreeMap<String, Value>,
}

impl Contract {
    fn of<T: ToSchema>() -> Self {
        let mut components = Vec::new();
        T::schemas(&mut components);
        let json = |schema| serde_json::to_value(schema).unwrap_or(Value::Null);
        Self {
            root: json(T::schema()),
            components: components.into_iter().map(|(name, schema)| (name, json(schema))).collect(),
        }
    }

    fn resolve<'a>(&'a self, schema: &'a Value) -> &'a Value {
        schema["$ref"]
            .as_str()
            .and_then(|reference| self.components.get(reference.rsplit('/').next()?))
            .unwrap_or(schema)
    }
}

/// Reads a request.
///
/// # Errors
/// 400 for what is not JSON, 422 with every fault for what is no valid request.
pub fn read<T: Request>(bytes: &[u8]) -> Result<T, Problem> {
    read_json(bytes).map_err(|unread| match unread {
        Unread::NotJson(problem) => problem,
        Unread::Invalid(document) => invalid(explain::<T>(document)),
    })
}

/// 422 with these faults.
#[must_use]
pub fn invalid(faults: Vec<Fault>) -> Problem {
    Problem::invalid(faults.into_iter().map(problem::Fault::from).collect())
}

impl From<Fault> for problem::Fault {
    fn from(fault: Fault) -> Self {
        Self {
            pointer: fault.pointer.into_owned(),
            code: fault.code,
            detail: fault.detail,
            minimum: fault.minimum,
            maximum: fault.maximum,
            choices: fault.choices.into_iter().map(Cow::into_owned).collect(),
        }
    }
}

/// All faults of a document that did not become a `T`.
fn explain<T: Request>(document: Document) -> Vec<Fault> {
    let contract = T::contract().get_or_init(Contract::of::<T>);
    let mut walk = Walk { contract, pointer: String::new(), faults: Vec::new() };
    // A number too large stands as null in the document; it has its fault already.
    let huge: Vec<Fault> = document.faults.into_iter().map(own).collect();
    walk.value(&contract.root, &document.value);
    let mut faults = huge;
    for fault in walk.faults {
        if faults.len() < MOST_FAULTS && !faults.iter().any(|known| known.pointer == fault.pointer) {
            faults.push(fault);
        }
    }
    if faults.is_empty() {
        // Schema and type disagree; a test with arbitrary documents holds that they do not.
        let reason =
            serde_json::from_value::<T>(document.value).err().map(|e| e.to_string()).unwrap_or_default();
        return vec![Fault::new("", "invalid", reason)];
    }
    faults.extend(faults_elsewhere::<T>(&document.value, &faults));
    faults
}

/// The most faults that are listed.
const MOST_FAULTS: usize = 200;

fn own(fault: problem::Fault) -> Fault {
    Fault::new(fault.pointer, fault.code, fault.detail)
}

/// What is wrong with the parts of the document that are sound in form.
fn faults_elsewhere<T: Request>(document: &Value, known: &[Fault]) -> Vec<Fault> {
    let (Value::Object(given), Ok(Value::Object(mut filled))) = (document, serde_json::from_str(T::sound()))
    else {
        return Vec::new();
    };
    let broken = Broken(known);
    filled.retain(|name, _| given.contains_key(name) || broken.within(&format!("/{}", escaped(name))));
    for (name, value) in given {
        let at = format!("/{}", escaped(name));
        if !broken.within(&at) {
            filled.insert(name.clone(), value.clone());
        } else if let (Value::Array(items), Some(Value::Array(sound))) = (value, filled.get(name))
            && !broken.exactly(&at)
            && let Some(sound) = sound.first()
        {
            let mended =
                items.iter().enumerate().map(|(i, item)| broken.mended(&format!("{at}/{i}"), item, sound));
            filled.insert(name.clone(), Value::Array(mended.collect()));
        }
    }
    let Ok(request) = serde_json::from_value::<T>(Value::Object(filled)) else { return Vec::new() };
    let mut found = request.faults();
    // A verdict on two parts together means nothing when one of them is a stand-in.
    found.retain(|fault| {
        let stands = !T::rests_on(fault.code).iter().any(|part| broken.within(&format!("/{part}")));
        stands && !broken.speaks_of(&fault.pointer) && fault.code != "not_applicable"
    });
    found
}

/// The parts of a document that have faults of form. A part is a member of the document, or of an item of a list that is one.
struct Broken<'a>(&'a [Fault]);

impl Broken<'_> {
    fn exactly(&self, at: &str) -> bool {
        self.0.iter().any(|fault| fault.pointer == at)
    }

    /// Whether there is a fault at this place or in it.
    fn within(&self, at: &str) -> bool {
        let inside = |pointer: &str| {
            pointer.strip_prefix(at).is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
        };
        self.0.iter().any(|fault| inside(&fault.pointer))
    }

    /// An item of a list with its broken members, or all of it, replaced by those of a sound one.
    fn mended(&self, at: &str, item: &Value, sound: &Value) -> Value {
        if !self.within(at) {
            return item.clone();
        }
        let (Value::Object(given), Value::Object(sound)) = (item, sound) else { return sound.clone() };
        let member = |name: &str| format!("{at}/{}", escaped(name));
        let mut mended = sound.clone();
        mended.retain(|name, _| given.contains_key(name) || self.within(&member(name)));
        for (name, value) in given {
            if !self.within(&member(name)) {
                mended.insert(name.clone(), value.clone());
            }
        }
        Value::Object(mended)
    }

    /// Whether a fault found elsewhere speaks of a broken part, and so of its stand-in.
    fn speaks_of(&self, pointer: &str) -> bool {
        let mut parts = pointer.split('/').skip(1);
        let name = parts.next().unwrap_or_default();
        let at = format!("/{name}");
        let Some(second) = parts.next() else { return self.within(&at) };
        // A member that is itself a pointer speaks of the part that it points into.
        let of = second.strip_prefix("~1").and_then(|rest| rest.split("~1").next());
        if of.is_some_and(|name| self.within(&format!("/{name}"))) {
            return true;
        }
        if second.parse::<usize>().is_err() {
            return self.within(&at);
        }
        let item = format!("{at}/{second}");
        let part = parts.next().map_or_else(|| item.clone(), |member| format!("{item}/{member}"));
        self.exactly(&at) || self.exactly(&item) || self.within(&part)
    }
}

/// A member's name as a part of a JSON Pointer.
#[must_use]
pub fn escaped(name: &str) -> Cow<'_, str> {
    if name.contains(['~', '/']) { name.replace('~', "~0").replace('/', "~1").into() } else { name.into() }
}

struct Walk<'a> {
    contract: &'a Contract,
    pointer: String,
    faults: Vec<Fault>,
}

impl<'a> Walk<'a> {
    fn fault(&mut self, code: &'static str, detail: impl Into<String>) {
        self.faults.push(Fault::new(self.pointer.clone(), code, detail));
    }

    fn inside(&mut self, name: &str, look: impl FnOnce(&mut Self)) {
        let outside = self.pointer.len();
        self.pointer.push('/');
        self.pointer.push_str(&escaped(name));
        look(self);
        self.pointer.truncate(outside);
    }

    fn value(&mut self, schema: &'a Value, value: &Value) {
        let schema = self.contract.resolve(schema);
        if let Some(variants) = schema["oneOf"].as_array() {
            return self.choice(variants, value);
        }
        if let Some(words) = schema["enum"].as_array() {
            return self.word(words, value);
        }
        match (schema["type"].as_str(), value) {
            (Some("object"), Value::Object(members)) => self.object(schema, members),
            (Some("array"), Value::Array(items)) => self.array(schema, items),
            (Some("number"), Value::Number(number)) => self.number(schema, number.as_f64()),
            (Some("integer"), Value::Number(number)) => {
                // 2.0 is a whole number too.
                let whole = number.as_f64().filter(|x| *x == libm::trunc(*x));
                match whole {
                    Some(_) => self.number(schema, whole),
                    None => self.fault("wrong_type", "must be a whole number"),
                }
            }
            (Some("string"), Value::String(_)) | (Some("boolean"), Value::Bool(_)) | (None, _) => {}
            (Some(wanted), other) => {
                let detail = format!("must be {}, not {}", article(wanted), kind(other));
                self.fault("wrong_type", detail);
                self.add_bounds(schema);
            }
        }
    }

    fn add_bounds(&mut self, schema: &Value) {
        if let Some(fault) = self.faults.last_mut() {
            fault.minimum = schema["minimum"].as_f64();
            fault.maximum = schema["maximum"].as_f64();
        }
    }

    fn number(&mut self, schema: &Value, value: Option<f64>) {
        let (minimum, maximum) = (schema["minimum"].as_f64(), schema["maximum"].as_f64());
        let fits = value.is_some_and(|x| minimum.is_none_or(|m| x >= m) && maximum.is_none_or(|m| x <= m));
        if fits {
            return;
        }
        let unit = schema["x-unit"].as_str().unwrap_or_default();
        let detail = match (minimum, maximum) {
            (Some(low), Some(high)) => format!("must be between {low} and {high} {unit}"),
            (Some(low), None) => format!("must be at least {low} {unit}"),
            (None, Some(high)) => format!("must be at most {high} {unit}"),
            (None, None) => "must be a number".into(),
        };
        self.fault("out_of_range", detail.trim_end());
        self.add_bounds(schema);
    }

    fn word(&mut self, words: &[Value], value: &Value) {
        if words.contains(value) {
            return;
        }
        let choices: Vec<String> = words.iter().filter_map(|w| w.as_str().map(str::to_owned)).collect();
        let (code, detail) = match value {
            Value::String(word) => {
                ("unknown_choice", format!("{} is not one of: {}", quoted(word), choices.join(", ")))
            }
            other => ("wrong_type", format!("must be one of: {}; not {}", choices.join(", "), kind(other))),
        };
        self.fault(code, detail);
        if let Some(fault) = self.faults.last_mut() {
            fault.choices = choices.into_iter().map(Cow::Owned).collect();
        }
    }

    /// An object with exactly one member, whose name makes the choice.
    fn choice(&mut self, variants: &'a [Value], value: &Value) {
        let contract = self.contract;
        let named = |variant: &'a Value| {
            let variant = contract.resolve(variant);
            let (name, schema) = variant["properties"].as_object()?.iter().next()?;
            Some((name.as_str(), schema))
        };
        let known: Vec<(&str, &'a Value)> = variants.iter().filter_map(named).collect();
        let choices = || known.iter().map(|(name, _)| (*name).to_owned());
        let list = choices().collect::<Vec<_>>().join(", ");
        let Value::Object(members) = value else {
            let detail = format!("must be an object with one member out of: {list}; not {}", kind(value));
            self.fault("wrong_type", detail);
            return self.add_choices(choices());
        };
        if members.is_empty() {
            self.fault("missing", format!("needs one member out of: {list}"));
            return self.add_choices(choices());
        }
        for (name, inner) in members {
            match known.iter().find(|(known, _)| known == name) {
                Some((_, schema)) => self.inside(name, |walk| walk.value(schema, inner)),
                None => self.inside(name, |walk| {
                    walk.fault("unknown_choice", format!("{} is not one of: {list}", quoted(name)));
                    walk.add_choices(choices());
                }),
            }
        }
        if members.len() > 1 {
            self.fault(
                "one_choice",
                format!("takes exactly one member out of: {list}; {} are given", members.len()),
            );
            self.add_choices(choices());
        }
    }

    fn add_choices(&mut self, choices: impl Iterator<Item = String>) {
        if let Some(fault) = self.faults.last_mut() {
            fault.choices = choices.map(Cow::Owned).collect();
        }
    }

    fn object(&mut self, schema: &'a Value, members: &Map<String, Value>) {
        let properties = schema["properties"].as_object();
        let required = schema["required"].as_array().into_iter().flatten().filter_map(Value::as_str);
        for name in required.filter(|name| !members.contains_key(*name)) {
            let wanted = properties.and_then(|p| p.get(name)).map(|s| self.contract.resolve(s));
            self.inside(name, |walk| {
                walk.fault("missing", "is needed");
                if let Some(wanted) = wanted {
                    walk.add_bounds(wanted);
                }
            });
        }
        for (name, value) in members {
            if let Some(known) = properties.and_then(|p| p.get(name)) {
                self.inside(name, |walk| walk.value(known, value));
            } else if schema["additionalProperties"].is_object() {
                let each = &schema["additionalProperties"];
                self.inside(name, |walk| walk.value(each, value));
            } else {
                let known: Vec<&str> =
                    properties.into_iter().flat_map(|p| p.keys().map(String::as_str)).collect();
                let choices =
                    nearest(name, known.into_iter()).into_iter().map(str::to_owned).collect::<Vec<_>>();
                self.inside(name, |walk| {
                    walk.fault("unknown_field", format!("{} is not known here", quoted(name)));
                    walk.add_choices(choices.into_iter());
                });
            }
        }
    }

    fn array(&mut self, schema: &'a Value, items: &[Value]) {
        let bound = |name: &str| schema[name].as_f64();
        let count = items.len() as f64;
        let (least, most) = (bound("minItems"), bound("maxItems"));
        if least.is_some_and(|n| count < n) || most.is_some_and(|n| count > n) {
            let detail = format!(
                "{count} are given; accepted: {} to {}",
                least.unwrap_or(0.0),
                most.unwrap_or(f64::INFINITY)
            );
            self.fault("wrong_count", detail);
            if let Some(fault) = self.faults.last_mut() {
                (fault.minimum, fault.maximum) = (least, most);
            }
        }
        for (i, item) in items.iter().enumerate() {
            if self.faults.len() >= MOST_FAULTS {
                return;
            }
            self.inside(&i.to_string(), |walk| walk.value(&schema["items"], item));
        }
    }
}

fn article(kind: &str) -> &'static str {
    match kind {
        "object" => "an object",
        "array" => "an array",
        "integer" => "a whole number",
        "number" => "a number",
        "string" => "a string",
        _ => "true or false",
    }
}

fn kind(value: &Value) -> &'static str {
    match value {
        Value::Null => "null",
        Value::Bool(_) => "true or false",
        Value::Number(_) => "a number",
        Value::String(_) => "a string",
        Value::Array(_) => "an array",
        Value::Object(_) => "an object",
    }
}

//! Reading a request's body: the bytes, and what of them is JSON. Whether the JSON is a valid request is for the
//! resource to say.

use std::borrow::Cow;
use std::collections::BTreeSet;
use std::error::Error;
use std::fmt;

use axum::body::Body;
use axum::extract::{FromRequest, Request};
use bytes::Bytes;
use http_body_util::BodyExt;
use serde::de::{DeserializeOwned, DeserializeSeed, Deserializer, MapAccess, SeqAccess, Visitor};
use serde_json::{Map, Value};

use super::layers::BodyFault;
use super::negotiation::require_json;
use super::problem::{Fault, Problem, ProblemKind};

/// The body of a request that is declared to be JSON. The size limit and the deadline are the outer layer's.
#[derive(Debug)]
pub struct JsonBytes(pub Bytes);

impl<S: Send + Sync> FromRequest<S> for JsonBytes {
    type Rejection = Problem;

    async fn from_request(request: Request, _: &S) -> Result<Self, Problem> {
        require_json(request.headers())?;
        collect(request.into_body()).await.map(Self)
    }
}

async fn collect(body: Body) -> Result<Bytes, Problem> {
    match body.collect().await {
        Ok(collected) => Ok(collected.to_bytes()),
        Err(error) => match error.source().and_then(|source| source.downcast_ref::<BodyFault>()) {
            Some(fault @ BodyFault::TooLarge { .. }) => {
                Err(Problem::new(ProblemKind::TooLarge, fault.to_string()))
            }
            Some(BodyFault::BrokeOff(_)) | None => {
                Err(Problem::new(ProblemKind::MalformedRequest, "The body broke off before its end."))
            }
        },
    }
}

/// Why a body did not become a request.
#[derive(Debug)]
pub enum Unread {
    /// It is not JSON: nothing more to find out.
    NotJson(Problem),
    /// It is JSON but not a `T`: to be walked for all its faults.
    Invalid(Document),
}

/// A JSON document that was read with care, for finding faults in it.
#[derive(Debug, Clone, PartialEq)]
pub struct Document {
    /// The document; a number too large for a double stands as null.
    pub value: Value,
    /// Faults of single values found while reading: numbers too large for a double (`not_finite`).
    pub faults: Vec<Fault>,
}

/// Reads `bytes` as a `T` by the shortest way; only if that fails, reads them again as a [`Document`].
///
/// Members named twice are found by `T` itself if it is a struct; a `T` with maps should refuse them as well.
///
/// # Errors
/// [`Unread::NotJson`] (400) or [`Unread::Invalid`].
pub fn read_json<T: DeserializeOwned>(bytes: &[u8]) -> Result<T, Unread> {
    serde_json::from_slice(bytes).map_err(|_| match read_document(bytes) {
        Ok(document) => Unread::Invalid(document),
        Err(problem) => Unread::NotJson(problem),
    })
}

/// The most numbers too large for a double that are looked for.
const MOST_HUGE_NUMBERS: usize = 32;

/// Reads `bytes` as a JSON document.
///
/// # Errors
/// 400 where they are not UTF-8, not JSON, nested more than 127 deep, or name a member of an object twice.
pub fn read_document(bytes: &[u8]) -> Result<Document, Problem> {
    let text = std::str::from_utf8(bytes).map_err(|error| {
        not_json(format!("The body is not UTF-8: byte {} does not fit.", error.valid_up_to()))
    })?;
    if text.trim_ascii().is_empty() {
        return Err(not_json("The body is empty; one JSON value is expected.".into()));
    }
    if text.starts_with('\u{feff}') {
        return Err(not_json("The body starts with a byte order mark; send the JSON text alone.".into()));
    }
    let mut text = Cow::Borrowed(text);
    let mut faults: Vec<Fault> = Vec::new();
    loop {
        let mut reader = Reader::default();
        let mut source = serde_json::Deserializer::from_str(&text);
        let read = Node(&mut reader).deserialize(&mut source).and_then(|value| source.end().map(|()| value));
        match read {
            Ok(value) => {
                return match reader.repeated.is_empty() {
                    true => Ok(Document { value, faults }),
                    false => Err(repeated(&reader.repeated)),
                };
            }
            Err(error) => {
                let number = huge_number(&text, &error);
                let Some(number) = number.filter(|_| faults.len() < MOST_HUGE_NUMBERS) else {
                    return Err(not_json(describe(&error)));
                };
                faults.push(Fault::new(
                    reader.pointer,
                    "not_finite",
                    format!("{} is too large for a number", abridged(&text[number.clone()])),
                ));
                let blank = format!("null{}", " ".repeat(number.len().saturating_sub(4)));
                text.to_mut().replace_range(number, &blank);
            }
        }
    }
}

fn not_json(detail: String) -> Problem {
    Problem::new(ProblemKind::NotJson, detail)
}

fn describe(error: &serde_json::Error) -> String {
    let text = error.to_string();
    let what = text.split(" at line ").next().unwrap_or(&text);
    format!("Line {}, column {}: {what}.", error.line(), error.column())
}

fn abridged(number: &str) -> String {
    number.char_indices().nth(24).map_or_else(|| number.into(), |(end, _)| format!("{}…", &number[..end]))
}

fn repeated(pointers: &[String]) -> Problem {
    let mut problem = not_json(format!("{} is named twice in its object.", pointers.join(", ")));
    problem.errors = pointers
        .iter()
        .map(|pointer| Fault::new(pointer.clone(), "repeated_member", "a member may be named only once"))
        .collect();
    problem
}

/// Where the number stands that `error` finds out of range; none if it complains of something else.
fn huge_number(text: &str, error: &serde_json::Error) -> Option<std::ops::Range<usize>> {
    if !error.to_string().starts_with("number out of range") {
        return None;
    }
    let line: usize = text.split_inclusive('\n').take(error.line().saturating_sub(1)).map(str::len).sum();
    let near = (line + error.column()).min(text.len());
    let in_number = |byte: &u8| byte.is_ascii_digit() || b"+-.eE".contains(byte);
    let bytes = text.as_bytes();
    // The error stands on the number's last character read, or just after it.
    let mut start = near;
    while start > 0 && bytes.get(start - 1).is_some_and(in_number) {
        start -= 1;
    }
    let mut end = near;
    while bytes.get(end).is_some_and(in_number) {
        end += 1;
    }
    (end > start + 3).then_some(start..end)
}

/// Keeps the place while a document is read.
#[derive(Default)]
struct Reader {
    pointer: String,
    repeated: Vec<String>,
}

impl Reader {
    fn enter(&mut self, token: &str) -> usize {
        let outside = self.pointer.len();
        self.pointer.push('/');
        for character in token.chars() {
            match character {
                '~' => self.pointer.push_str("~0"),
                '/' => self.pointer.push_str("~1"),
                other => self.pointer.push(other),
            }
        }
        outside
    }
}

struct Node<'a>(&'a mut Reader);

impl<'de> DeserializeSeed<'de> for Node<'_> {
    type Value = Value;

    fn deserialize<D: Deserializer<'de>>(self, source: D) -> Result<Value, D::Error> {
        source.deserialize_any(self)
    }
}

impl<'de> Visitor<'de> for Node<'_> {
    type Value = Value;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a JSON value")
    }

    fn visit_unit<E>(self) -> Result<Value, E> {
        Ok(Value::Null)
    }

    fn visit_bool<E>(self, value: bool) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_u64<E>(self, value: u64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_i64<E>(self, value: i64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_f64<E>(self, value: f64) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_str<E>(self, value: &str) -> Result<Value, E> {
        Ok(value.into())
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<Value, A::Error> {
        let mut values = Vec::new();
        loop {
            let outside = self.0.enter(&values.len().to_string());
            let Some(value) = items.next_element_seed(Node(self.0))? else {
                self.0.pointer.truncate(outside);
                return Ok(Value::Array(values));
            };
            self.0.pointer.truncate(outside);
            values.push(value);
        }
    }

    fn visit_map<A: MapAccess<'de>>(self, mut members: A) -> Result<Value, A::Error> {
        let mut object = Map::new();
        let mut seen = BTreeSet::new();
        while let Some(name) = members.next_key::<String>()? {
            let outside = self.0.enter(&name);
            if !seen.insert(name.clone()) && self.0.repeated.len() < MOST_HUGE_NUMBERS {
                self.0.repeated.push(self.0.pointer.clone());
            }
            let value = members.next_value_seed(Node(self.0))?;
            self.0.pointer.truncate(outside);
            object.insert(name, value);
        }
        Ok(Value::Object(object))
    }
}

#[cfg(test)]
mod tests {
    use serde_json::json;

    use super::*;

    fn refused(bytes: &[u8]) -> String {
        let problem = read_document(bytes).unwrap_err();
        assert_eq!(problem.kind, ProblemKind::NotJson);
        problem.detail
    }

    #[test]
    fn reads_what_serde_json_reads() {
        let text = br#"{"a":[1,-2,2.5,1e3,true,null,"\u00e4",{}],"b":{"c":18446744073709551615}}"#;
        let document = read_document(text).unwrap();
        assert_eq!(document.value, serde_json::from_slice::<Value>(text).unwrap());
        assert!(document.faults.is_empty());
    }

    #[test]
    fn tells_where_it_is_not_json() {
        assert_eq!(refused(b"{\n  \"a\": 1,\n  \"b\" 2\n}"), "Line 3, column 7: expected `:`.");
        assert!(refused(b"").contains("empty") && refused(b" \n").contains("empty"));
        assert!(refused(b"{} {}").contains("Line 1, column 4: trailing characters"));
        assert!(refused(b"{\"a\":NaN}").starts_with("Line 1, column 6"));
        assert!(refused(b"\xef\xbb\xbf{}").contains("byte order mark"));
        assert!(refused(b"{\"a\":\"\xff\"}").contains("byte 6"));
        assert!(refused(br#"{"a":"\ud800"}"#).starts_with("Line 1"));
        assert!(refused("[".repeat(100_000).as_bytes()).contains("recursion limit"));
    }

    #[test]
    fn members_named_twice_are_pointed_at() {
        let problem = read_document(br#"{"a":{"x/y":1,"x/y":2},"b":[{"c":1,"c":1}]}"#).unwrap_err();
        let pointers: Vec<_> = problem.errors.iter().map(|fault| fault.pointer.as_str()).collect();
        assert_eq!(pointers, ["/a/x~1y", "/b/0/c"]);
    }

    #[test]
    fn numbers_too_large_are_faults_of_their_field() {
        let document = read_document(b"{\"a\":\n [1, 1e999,\n2], \"b\": -4e400 }").unwrap();
        assert_eq!(document.value, json!({"a": [1, null, 2], "b": null}));
        let pointers: Vec<_> = document.faults.iter().map(|fault| fault.pointer.as_str()).collect();
        assert_eq!(pointers, ["/a/1", "/b"]);
        let bare = read_document(b"1e999").unwrap();
        assert_eq!(bare.faults[0].pointer, "");
    }
}

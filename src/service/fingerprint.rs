//! The fingerprint of a result: which request, answered by which model, from which catalogue.

use std::{io, sync::OnceLock};

use serde::Serialize;
use serde_json::ser::Formatter;
use sha2::{Digest, Sha256};
use utoipa::ToSchema;

use crate::physics::{liquid, surface};

/// What computed an answer.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, ToSchema)]
pub struct ModelAnswer {
    /// Version of the service and its models.
    #[schema(example = "0.1.0")]
    pub version: &'static str,
    /// Coefficient set of the closed form.
    #[schema(example = "set-1")]
    pub coefficients: &'static str,
    /// SHA-256 over the canonical request (RFC 8785, defaults filled in), the model version and the catalogue's digest.
    pub fingerprint: String,
}

/// The version of the service and its models.
pub const VERSION: &str = env!("CARGO_PKG_VERSION");

impl ModelAnswer {
    /// The model that answered `request`, a request with its defaults filled in and its members in canonical order.
    #[must_use]
    pub fn of<T: Serialize>(request: &T, coefficients: &'static str) -> Self {
        let mut bytes = canonical_bytes(request);
        let mut hash = Sha256::new();
        bytes.push(0);
        bytes.extend_from_slice(VERSION.as_bytes());
        bytes.push(0);
        bytes.extend_from_slice(catalogue_digest().as_bytes());
        hash.update(&bytes);
        Self { version: VERSION, coefficients, fingerprint: hexadecimal(&hash.finalize()) }
    }

    /// The same as a dictionary (RFC 9651), for the head of an answer that has no other place for it.
    #[must_use]
    pub fn dictionary(&self) -> String {
        let Self { version, coefficients, fingerprint } = self;
        format!("version=\"{version}\", coefficients=\"{coefficients}\", fingerprint=\"{fingerprint}\"")
    }
}

/// SHA-256 over the canonical form (RFC 8785) of `value`, whose members stand in canonical order.
pub(super) fn digest_of<T: Serialize>(value: &T) -> String {
    hexadecimal(&Sha256::digest(canonical_bytes(value)))
}

fn canonical_bytes<T: Serialize>(value: &T) -> Vec<u8> {
    let mut bytes = Vec::with_capacity(1024);
    // Writing into memory cannot fail, and a request is made of strings, lists and finite numbers.
    let _ = value.serialize(&mut serde_json::Serializer::with_formatter(&mut bytes, Canonical));
    bytes
}

/// SHA-256 over everything the catalogue says of liquids and surfaces.
pub fn catalogue_digest() -> &'static str {
    static DIGEST: OnceLock<String> = OnceLock::new();
    DIGEST.get_or_init(|| {
        let mut hash = Sha256::new();
        for entry in liquid::catalogue() {
            hash.update(entry.id);
            // Correlations are code: what they give at the corners and the middle of their region stands for them.
            for sample in super::api::liquids::samples(entry) {
                for number in sample {
                    hash.update(number.to_bits().to_be_bytes());
                }
            }
        }
        for material in surface::catalogue() {
            hash.update(format!("{material:?}"));
        }
        hexadecimal(&hash.finalize())
    })
}

pub(super) fn hexadecimal(bytes: &[u8]) -> String {
    const DIGITS: [char; 16] =
        ['0', '1', '2', '3', '4', '5', '6', '7', '8', '9', 'a', 'b', 'c', 'd', 'e', 'f'];
    let digit = |nibble: u8| DIGITS[usize::from(nibble & 15)];
    bytes.iter().flat_map(|byte| [digit(byte >> 4), digit(*byte)]).collect()
}

/// Numbers as RFC 8785 wants them: as ECMAScript writes them. (Strings already are: serde_json escapes what it must, in lower case, and no more.)
struct Canonical;

impl Formatter for Canonical {
    fn write_f64<W: ?Sized + io::Write>(&mut self, writer: &mut W, value: f64) -> io::Result<()> {
        writer.write_all(ryu_js::Buffer::new().format_finite(value).as_bytes())
    }
}

/// The canonical form (RFC 8785) of what serde writes in canonical order.
#[cfg(test)]
fn canonical<T: Serialize>(value: &T) -> String {
    String::from_utf8(canonical_bytes(value)).unwrap()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::service::{api::evaluations::EvaluationRequest, explain::Request as _};

    #[test]
    fn requests_serialise_in_canonical_form() {
        let request: EvaluationRequest = serde_json::from_str(EvaluationRequest::sound()).unwrap();
        let ours = canonical(&request);
        let theirs = serde_json_canonicalizer::to_string(&serde_json::to_value(&request).unwrap()).unwrap();
        assert_eq!(ours, theirs);
        assert!(ours.starts_with(r#"{"coefficients":"set-1","confidence":0.95,"include":["#), "{ours}");
    }

    #[test]
    fn calibration_requests_and_calibrations_serialise_in_canonical_form() {
        use crate::service::api::calibrations::{CalibrationsRequest, calibrate_json};
        let request: CalibrationsRequest = serde_json::from_str(CalibrationsRequest::sound()).unwrap();
        let answer = calibrate_json(CalibrationsRequest::sound().as_bytes()).unwrap();
        let answer: serde_json::Value = serde_json::from_slice(&answer).unwrap();
        let mut evaluation: serde_json::Value = serde_json::from_str(EvaluationRequest::sound()).unwrap();
        evaluation["calibration"] = answer["calibration"].clone();
        let evaluation: EvaluationRequest = serde_json::from_value(evaluation).unwrap();
        let theirs = |value| serde_json_canonicalizer::to_string(&value).unwrap();
        assert_eq!(canonical(&request), theirs(serde_json::to_value(&request).unwrap()));
        assert_eq!(canonical(&evaluation), theirs(serde_json::to_value(&evaluation).unwrap()));
    }

    #[test]
    fn defaults_filled_in_or_given_make_the_same_fingerprint() {
        let text = EvaluationRequest::sound();
        let plain: EvaluationRequest = serde_json::from_str(text).unwrap();
        let spelled =
            text.replacen('{', r#"{"method": "closed_form", "outer_face": "dry", "confidence": 0.950,"#, 1);
        let spelled: EvaluationRequest = serde_json::from_str(&spelled).unwrap();
        let of = |request: &EvaluationRequest| ModelAnswer::of(request, "set-1").fingerprint;
        assert_eq!(of(&plain), of(&spelled));
        assert_eq!(of(&plain).len(), 64);
        let other: EvaluationRequest = serde_json::from_str(&text.replace("25}", "26}")).unwrap();
        assert_ne!(of(&plain), of(&other));
    }
}

//! A name for each request, so that an answer and its log line can be brought together.

use std::hash::{BuildHasher, Hasher, RandomState};
use std::sync::OnceLock;
use std::sync::atomic::{AtomicU64, Ordering};

use bytes::Bytes;
use http::{HeaderMap, HeaderName, HeaderValue};

/// The header that carries it.
pub(super) const X_REQUEST_ID: HeaderName = HeaderName::from_static("x-request-id");

/// The caller's own id if it is one of 1 to 128 characters safe in a log line, else a new one.
pub(super) fn of(headers: &HeaderMap) -> HeaderValue {
    match headers.get(X_REQUEST_ID) {
        Some(sent) if is_safe(sent.as_bytes()) => sent.clone(),
        _ => fresh(),
    }
}

fn is_safe(id: &[u8]) -> bool {
    (1..=128).contains(&id.len())
        && id.iter().all(|byte| byte.is_ascii_alphanumeric() || b"-._~:/+=@".contains(byte))
}

/// 16 digits drawn when the process started, and a running number.
fn fresh() -> HeaderValue {
    static PROCESS: OnceLock<u64> = OnceLock::new();
    static NUMBER: AtomicU64 = AtomicU64::new(1);
    let process = *PROCESS.get_or_init(|| RandomState::new().build_hasher().finish());
    let number = NUMBER.fetch_add(1, Ordering::Relaxed);
    let mut text = Vec::with_capacity(27);
    push_hex(&mut text, process, 16);
    text.push(b'-');
    push_hex(&mut text, number, 10);
    HeaderValue::from_maybe_shared(Bytes::from(text)).unwrap_or(HeaderValue::from_static("unknown"))
}

fn push_hex(text: &mut Vec<u8>, number: u64, digits: u32) {
    for place in (0..digits).rev() {
        let digit = (number >> (4 * place)) & 0xf;
        text.push(b"0123456789abcdef"[digit as usize]);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn safe_ids_are_echoed_and_others_replaced() {
        let with = |value: &str| {
            of(&HeaderMap::from_iter([(X_REQUEST_ID, HeaderValue::from_bytes(value.as_bytes()).unwrap())]))
        };
        assert_eq!(with("batch-7/3"), "batch-7/3");
        for bad in ["", "a b", "quote\"", "ä", &"x".repeat(129)] {
            assert_ne!(with(bad).as_bytes(), bad.as_bytes());
        }
        assert_ne!(fresh(), fresh());
        assert_eq!(fresh().len(), 27);
    }
}

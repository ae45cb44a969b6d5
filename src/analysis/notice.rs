//! What is said beside a number: warnings, reasons and cautions.

use std::borrow::Cow;

/// A stable code that callers can translate, the field it is about, and the sentence in plain words.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Notice {
    /// Stable code.
    pub code: &'static str,
    /// JSON Pointer to the field it is about, if to one.
    pub pointer: Option<&'static str>,
    /// The sentence.
    pub detail: Cow<'static, str>,
}

impl Notice {
    /// A notice about the whole question.
    pub fn new(code: &'static str, detail: impl Into<Cow<'static, str>>) -> Self {
        Self { code, pointer: None, detail: detail.into() }
    }

    /// A notice about one field.
    pub fn at(code: &'static str, pointer: &'static str, detail: impl Into<Cow<'static, str>>) -> Self {
        Self { code, pointer: Some(pointer), detail: detail.into() }
    }
}

//! A fault in a question: where it is, what it is, and what would be accepted.

use std::borrow::Cow;

/// One fault. All faults of a question are collected and returned together.
#[derive(Debug, Clone, PartialEq)]
pub struct Fault {
    /// RFC 6901 JSON Pointer to the field, or to where a missing field would be.
    pub pointer: Cow<'static, str>,
    /// Stable code.
    pub code: &'static str,
    /// What is wrong, in plain words.
    pub detail: String,
    /// Smallest accepted value, in the field's unit.
    pub minimum: Option<f64>,
    /// Largest accepted value, in the field's unit.
    pub maximum: Option<f64>,
    /// Accepted words, where there is a list of them.
    pub choices: Vec<Cow<'static, str>>,
}

impl Fault {
    /// A fault without bounds or choices.
    pub fn new(pointer: impl Into<Cow<'static, str>>, code: &'static str, detail: impl Into<String>) -> Self {
        Self {
            pointer: pointer.into(),
            code,
            detail: detail.into(),
            minimum: None,
            maximum: None,
            choices: Vec::new(),
        }
    }

    /// Adds the accepted range.
    #[must_use]
    pub fn within(mut self, minimum: impl Into<Option<f64>>, maximum: impl Into<Option<f64>>) -> Self {
        self.minimum = minimum.into();
        self.maximum = maximum.into();
        self
    }

    /// Adds the accepted words.
    #[must_use]
    pub fn choices(mut self, choices: impl IntoIterator<Item = impl Into<Cow<'static, str>>>) -> Self {
        self.choices = choices.into_iter().map(Into::into).collect();
        self
    }
}

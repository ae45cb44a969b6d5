//! Warnings, reasons and cautions in an answer.

use serde::Serialize;
use utoipa::ToSchema;

use crate::analysis::notice::Notice;

/// A warning, reason or caution: the code is stable and can be translated by the caller.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct NoticeAnswer<'a> {
    /// Stable code.
    #[schema(example = "angle_assumed")]
    pub code: &'static str,
    /// JSON Pointer to the field it is about, if to one.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false, example = "/surface/measured/receding_deg")]
    pub pointer: Option<&'static str>,
    /// The sentence in plain words.
    pub detail: &'a str,
}

impl<'a> From<&'a Notice> for NoticeAnswer<'a> {
    fn from(notice: &'a Notice) -> Self {
        Self { code: notice.code, pointer: notice.pointer, detail: &notice.detail }
    }
}

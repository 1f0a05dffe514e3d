//! What is wrong with a text, and where in it.

use std::ops::Range as Bytes;

/// What is wrong with a text, and where in it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct TextFault {
    /// The bytes of the text that are wrong.
    pub place: Bytes<usize>,
    /// What is wrong.
    pub message: String,
    /// What stands there.
    pub label: String,
    /// What to do.
    pub help: String,
}

impl TextFault {
    pub(crate) fn new(
        place: Bytes<usize>,
        message: impl Into<String>,
        label: impl Into<String>,
        help: impl Into<String>,
    ) -> Self {
        Self { place, message: message.into(), label: label.into(), help: help.into() }
    }

    /// The same fault of a text that holds this one from `offset` on.
    #[must_use]
    pub(crate) fn shifted(mut self, offset: usize) -> Self {
        self.place = self.place.start + offset..self.place.end + offset;
        self
    }
}

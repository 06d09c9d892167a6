//! Reader for pdf.
use super::Unreadable;
use crate::manuscript::{Builder, Format, Manuscript};

/// Reads the document.
pub fn read(_bytes: &[u8]) -> Result<Manuscript, Unreadable> {
    Ok(Builder::new(Format::Text).finish())
}

//! Reader for html.
pub mod entities;

use super::Unreadable;
use crate::manuscript::{Builder, Format, Manuscript};

/// Reads the document.
pub fn read(source: &str) -> Result<Manuscript, Unreadable> {
    let mut b = Builder::new(Format::Text);
    b.text(source);
    Ok(b.finish())
}

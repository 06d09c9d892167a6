//! Reader for LaTeX.
use super::Unreadable;
use crate::manuscript::{Builder, Format, Manuscript};
use std::path::Path;

/// Reads the document; `folder` is where `\input` files are looked for.
pub fn read(source: &str, _folder: Option<&Path>) -> Result<Manuscript, Unreadable> {
    let mut b = Builder::new(Format::Latex);
    b.text(source);
    Ok(b.finish())
}

//! *LaTeX* is read in two steps. First its source is made flat: comments and code go, files that
//! `\input` names come in, and the author's own macros are replaced by what they stand for. Then
//! the flat source is walked from end to end and handed to the builder. Nothing is typeset: what a
//! macro nobody knows does to its arguments is not asked, they are simply read.

mod accents;
mod arguments;
mod code;
mod definitions;
mod expand;
mod glyphs;
mod include;
mod structure;
mod tables;
mod walk;

use super::Unreadable;
use crate::manuscript::{Builder, Format, Manuscript};
use std::path::Path;

/// Reads the document; `folder` is where `\input` files are looked for, in it or below it.
///
/// # Errors
/// None at present; the signature is that of all readers. Files that cannot be found or followed
/// become remarks.
pub fn read(source: &str, folder: Option<&Path>) -> Result<Manuscript, Unreadable> {
    let flat = expand::flatten(source, folder);
    let mut b = Builder::new(Format::Latex);
    walk::walk_into(&mut b, &flat);
    Ok(b.finish())
}

/// Reads a piece of LaTeX that stands in a document of another format, beginning on line `first`.
pub(super) fn read_within(b: &mut Builder, source: &str, first: u32) {
    let mut flat = expand::flatten(source, None);
    for (_, line) in &mut flat.lines {
        *line += first - 1;
    }
    walk::walk_into(b, &flat);
}

#[cfg(test)]
mod tests;

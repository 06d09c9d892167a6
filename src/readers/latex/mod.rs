//! *LaTeX* is read in two steps. First its source is made flat: comments and code go, files that
//! `\input` names come in, and the author's own macros are replaced by what they stand for. Then
//! the flat source is walked from end to end and handed to the builder. Nothing is typeset: what a
//! macro nobody knows does to its arguments is not asked, they are simply read.

mod accents;
mod arguments;
mod expand;
mod include;
mod structure;
mod tables;
mod walk;

use super::Unreadable;
use crate::manuscript::Manuscript;
use std::path::Path;

/// Reads the document; `folder` is where `\input` files are looked for, in it or below it.
///
/// # Errors
/// None at present; the signature is that of all readers. Files that cannot be found or followed
/// become remarks.
pub fn read(source: &str, folder: Option<&Path>) -> Result<Manuscript, Unreadable> {
    let flat = expand::flatten(source, folder);
    Ok(walk::walk(&flat))
}

#[cfg(test)]
mod tests;

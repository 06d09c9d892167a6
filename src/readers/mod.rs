//! A *reader* knows how one format stores text, tables and positions, and fills a
//! [`Builder`](crate::manuscript::Builder). It knows nothing of statistics.

pub mod decode;
pub mod detect;
pub mod docx;
pub mod entities;
pub mod headings;
pub mod html;
pub mod jats;
pub mod latex;
pub mod markdown;
pub mod mathml;
pub mod odt;
pub mod office;
pub mod package;
pub mod pdf;
pub mod plain;
pub mod tex_math;
mod tex_symbols;
#[cfg(test)]
mod trial;

use crate::manuscript::{Format, Manuscript};
use std::fmt;
use std::path::Path;

/// The largest file that is read, in bytes.
pub const LARGEST_FILE: u64 = 256 * 1024 * 1024;

/// Why an input could not be read: one line for the person, saying what is wrong and what to do.
/// The file's name is added by whoever shows it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Unreadable(pub String);

impl Unreadable {
    pub fn new(reason: impl Into<String>) -> Unreadable {
        Unreadable(reason.into())
    }
}

impl fmt::Display for Unreadable {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.0)
    }
}

impl std::error::Error for Unreadable {}

/// Reads the file at `path`.
pub fn read_file(path: &Path) -> Result<Manuscript, Unreadable> {
    let about = std::fs::metadata(path).map_err(|e| cannot_open(&e))?;
    if about.is_dir() {
        return Err(Unreadable::new("is a folder; name the files in it"));
    }
    if about.len() > LARGEST_FILE {
        return Err(Unreadable::new(format!(
            "is larger than {} MB; split it or export the text",
            LARGEST_FILE >> 20
        )));
    }
    let bytes = std::fs::read(path).map_err(|e| cannot_open(&e))?;
    read_bytes(&bytes, path)
}

fn cannot_open(error: &std::io::Error) -> Unreadable {
    Unreadable::new(match error.kind() {
        std::io::ErrorKind::NotFound => "no such file; check the path".to_string(),
        std::io::ErrorKind::PermissionDenied => "may not be read; check its permissions".to_string(),
        _ => format!("cannot be opened ({error}); check the file and its folder"),
    })
}

/// Reads a document already in memory; `path` gives its extension and, for LaTeX, the folder in
/// which `\input` files are looked for.
pub fn read_bytes(bytes: &[u8], path: &Path) -> Result<Manuscript, Unreadable> {
    let format = detect::format(bytes, path)?;
    let mut manuscript = match format {
        Format::Docx => docx::read(bytes),
        Format::Odt => odt::read(bytes),
        Format::Pdf => pdf::read(bytes),
        Format::Jats => jats::read(&decode::xml(bytes)?),
        Format::Html => html::read(&decode::text(bytes)?),
        Format::Latex => latex::read(&decode::text(bytes)?, path.parent()),
        Format::Markdown => markdown::read(&decode::text(bytes)?),
        Format::Text => plain::read(&decode::text(bytes)?),
    }?;
    if manuscript.text.is_empty() {
        return Err(Unreadable::new("contains no text; is it the right file?"));
    }
    manuscript.remarks.extend(detect::misnamed(format, path));
    Ok(manuscript)
}

//! A *reader* knows how one format stores text, tables and positions, and fills a
//! [`Builder`](crate::manuscript::Builder). It knows nothing of statistics.

pub mod contained;
pub mod decode;
pub mod detect;
pub mod docx;
pub mod entities;
pub mod guard;
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
use serde::{Deserialize, Serialize};
use std::fmt;
use std::io::Read;
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

/// Which way a document is to be read.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub enum Way {
    Usual,
    /// By other means, after the usual way has failed; only PDF has any.
    Rescue,
}

/// Why one way has failed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Failure {
    /// No way will lead to a manuscript.
    Unreadable(Unreadable),
    /// [`Way::Rescue`] may.
    TryRescue,
}

impl From<Unreadable> for Failure {
    fn from(reason: Unreadable) -> Failure {
        Failure::Unreadable(reason)
    }
}

/// Reads the file at `path` in this process; see [`read_bytes`].
pub fn read_file(path: &Path) -> Result<Manuscript, Unreadable> {
    read_bytes(&load(path)?, path)
}

/// The bytes of the file at `path`, if it is not larger than [`LARGEST_FILE`].
///
/// # Errors
/// Folders, large files and files that cannot be opened, each with one line for the person.
pub fn load(path: &Path) -> Result<Vec<u8>, Unreadable> {
    let file = std::fs::File::open(path).map_err(|e| cannot_open(&e))?;
    let about = file.metadata().map_err(|e| cannot_open(&e))?;
    if about.is_dir() {
        return Err(Unreadable::new("is a folder; name the files in it"));
    }
    // Not believed, as devices claim to be empty.
    let claimed = about.len().min(LARGEST_FILE);
    let mut bytes = Vec::with_capacity(claimed as usize + 1);
    let read = file.take(LARGEST_FILE + 1).read_to_end(&mut bytes);
    read.map_err(|e| cannot_open(&e))?;
    if bytes.len() as u64 > LARGEST_FILE {
        return Err(Unreadable::new(format!(
            "is larger than {} MB; split it or export the text",
            LARGEST_FILE >> 20
        )));
    }
    Ok(bytes)
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
///
/// Everything happens in this process. Documents from strangers are better read by a
/// [`contained::Pool`], which comes to the same result: a damaged PDF can end the process.
pub fn read_bytes(bytes: &[u8], path: &Path) -> Result<Manuscript, Unreadable> {
    let usual = read_this_way(bytes, path, Way::Usual);
    let result = match usual {
        Err(Failure::TryRescue) => read_this_way(bytes, path, Way::Rescue),
        other => other,
    };
    result.map_err(|failure| match failure {
        Failure::Unreadable(reason) => reason,
        Failure::TryRescue => pdf::hopeless(bytes),
    })
}

/// Reads a document one way, in this process.
pub fn read_this_way(bytes: &[u8], path: &Path, way: Way) -> Result<Manuscript, Failure> {
    let format = detect::format(bytes, path)?;
    let mut manuscript = match format {
        Format::Docx => docx::read(bytes)?,
        Format::Odt => odt::read(bytes)?,
        Format::Pdf => match way {
            Way::Usual => pdf::read(bytes)?,
            Way::Rescue => pdf::rescue(bytes)?,
        },
        Format::Jats => jats::read(&decode::xml(bytes)?)?,
        Format::Html => html::read(&decode::text(bytes)?)?,
        Format::Latex => latex::read(&decode::text(bytes)?, path.parent())?,
        Format::Markdown => markdown::read(&decode::text(bytes)?)?,
        Format::Text => plain::read(&decode::text(bytes)?)?,
    };
    if manuscript.text.is_empty() {
        return Err(Unreadable::new("contains no text; is it the right file?").into());
    }
    manuscript.remarks.extend(detect::misnamed(format, path));
    Ok(manuscript)
}

//! Files that the source *includes*: looked for in the manuscript's folder and below it, nowhere else.

use crate::readers::decode;
use std::path::{Component, Path, PathBuf};

/// A larger included file is not a chapter.
const LARGEST_INCLUDED: u64 = 32 * 1024 * 1024;
/// Files within files, at most.
const DEEPEST: usize = 12;
/// Files in all, at most.
const MOST: usize = 300;

/// Finds and reads included files.
pub(super) struct Includes {
    folder: Option<PathBuf>,
    /// The files being read, outermost first.
    open: Vec<PathBuf>,
    count: usize,
}

impl Includes {
    pub(super) fn in_folder(folder: Option<&Path>) -> Includes {
        let folder = folder.map(|f| {
            if f.as_os_str().is_empty() {
                Path::new(".")
            } else {
                f
            }
        });
        Includes {
            folder: folder.and_then(|f| f.canonicalize().ok()),
            open: Vec::new(),
            count: 0,
        }
    }

    /// The text of the named file, or a remark saying why it is missing. After reading it,
    /// [`Includes::leave`] must be called.
    pub(super) fn enter(&mut self, name: &str) -> Result<String, String> {
        let missing = |why: &str| format!("\\input{{{name}}} {why}; its text is missing");
        let folder = self
            .folder
            .as_ref()
            .ok_or_else(|| missing("cannot be followed without a folder"))?;
        let path = Path::new(name);
        let inside = path
            .components()
            .all(|c| matches!(c, Component::Normal(_) | Component::CurDir));
        if !inside || name.is_empty() {
            return Err(missing("leads out of the manuscript's folder"));
        }
        if self.open.len() >= DEEPEST || self.count >= MOST {
            return Err(missing("is one file too many"));
        }
        // TeX adds the ending first, so that `\input{results.v2}` finds `results.v2.tex`.
        let with_ending = folder.join(format!("{name}.tex"));
        let found = [with_ending, folder.join(path)]
            .into_iter()
            .find(|p| p.is_file())
            .and_then(|p| p.canonicalize().ok())
            .ok_or_else(|| missing("was not found"))?;
        if !found.starts_with(folder) {
            return Err(missing("leads out of the manuscript's folder"));
        }
        if self.open.contains(&found) {
            return Err(missing("includes itself"));
        }
        if found.metadata().map_or(0, |m| m.len()) > LARGEST_INCLUDED {
            return Err(missing("is too large"));
        }
        let bytes = std::fs::read(&found).map_err(|_| missing("cannot be opened"))?;
        let text = decode::text(&bytes)
            .map_err(|_| missing("is not text"))?
            .into_owned();
        self.open.push(found);
        self.count += 1;
        Ok(text)
    }

    pub(super) fn leave(&mut self) {
        self.open.pop();
    }
}

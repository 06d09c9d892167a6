//! An *input* is one thing to read: a file, standard input, or text typed on the command line.
//! Folders are looked through here and become the files in them.

use crate::manuscript::Manuscript;
use crate::readers::contained::Pool;
use crate::readers::{self, LARGEST_FILE, Unreadable};
use std::io::Read;
use std::path::{Path, PathBuf};

/// Files with these extensions are taken from folders; a file that is named is read whatever it
/// is called.
const EXTENSIONS: [&str; 14] = [
    "txt", "md", "qmd", "rmd", "html", "htm", "xhtml", "xml", "nxml", "docx", "docm", "odt", "tex", "pdf",
];

/// Folders within folders beyond this are not looked through.
const DEEPEST: usize = 64;

/// One thing to read.
pub enum Input {
    /// A file by its path.
    File(PathBuf),
    /// A document on standard input.
    Piped,
    /// A statement on the command line.
    Typed(String),
    /// A statement on standard input.
    PipedText,
    /// A folder that gives no files, with the reason.
    Nothing(PathBuf, Unreadable),
}

impl Input {
    /// The name by which reports call it.
    pub fn name(&self) -> String {
        match self {
            Input::File(path) | Input::Nothing(path, _) => path.display().to_string(),
            Input::Piped | Input::Typed(_) | Input::PipedText => "-".into(),
        }
    }

    /// Reads it, files of binary formats in a worker of the pool.
    pub fn read(&self, pool: &Pool) -> Result<Manuscript, Unreadable> {
        match self {
            Input::File(path) => pool.read_file(path),
            Input::Piped => pool.read_bytes(standard_input()?, Path::new("")),
            Input::Typed(text) => typed(text),
            Input::PipedText => typed(&readers::decode::text(&standard_input()?)?),
            Input::Nothing(_, reason) => Err(reason.clone()),
        }
    }
}

/// Text typed by hand is never taken for markup.
fn typed(text: &str) -> Result<Manuscript, Unreadable> {
    let manuscript = readers::plain::read(text)?;
    if manuscript.text.trim().is_empty() {
        return Err(Unreadable::new(
            "is empty; type a statement, e.g. 't(28) = 2.20, p = .036'",
        ));
    }
    Ok(manuscript)
}

fn standard_input() -> Result<Vec<u8>, Unreadable> {
    let mut bytes = Vec::new();
    let mut input = std::io::stdin().lock().take(LARGEST_FILE + 1);
    input
        .read_to_end(&mut bytes)
        .map_err(|e| Unreadable::new(format!("cannot be read ({e}); check what is piped in")))?;
    if bytes.len() as u64 > LARGEST_FILE {
        return Err(Unreadable::new(format!(
            "is larger than {} MB; split it or export the text",
            LARGEST_FILE >> 20
        )));
    }
    Ok(bytes)
}

/// What was named on the command line, with folders replaced by the manuscripts in them, in the
/// order of their paths.
pub fn expand(named: &[PathBuf]) -> Vec<Input> {
    let mut inputs = Vec::new();
    for path in named {
        if path.as_os_str() == "-" {
            inputs.push(Input::Piped);
        } else if path.is_dir() {
            let mut found = Vec::new();
            look_through(path, 0, &mut found);
            found.sort_by(|a, b| a.path().cmp(b.path()));
            if found.is_empty() {
                found.push(Found::Failed(
                    path.clone(),
                    Unreadable::new(format!(
                        "no manuscript in this folder; files ending in {} are looked for",
                        EXTENSIONS.join(", ")
                    )),
                ));
            }
            inputs.extend(found.into_iter().map(|f| match f {
                Found::File(path) => Input::File(path),
                Found::Failed(path, reason) => Input::Nothing(path, reason),
            }));
        } else {
            inputs.push(Input::File(path.clone()));
        }
    }
    inputs
}

enum Found {
    File(PathBuf),
    Failed(PathBuf, Unreadable),
}

impl Found {
    fn path(&self) -> &Path {
        match self {
            Found::File(path) | Found::Failed(path, _) => path,
        }
    }
}

fn look_through(folder: &Path, depth: usize, found: &mut Vec<Found>) {
    let entries = match std::fs::read_dir(folder) {
        Ok(entries) => entries,
        Err(e) => {
            let reason = format!("folder cannot be opened ({e}); check its permissions");
            found.push(Found::Failed(folder.to_path_buf(), Unreadable::new(reason)));
            return;
        }
    };
    for entry in entries.flatten() {
        let name = entry.file_name();
        let name = name.to_string_lossy();
        // Hidden files, and the lock files that Word leaves beside an open document.
        if name.starts_with('.') || name.starts_with("~$") {
            continue;
        }
        let path = entry.path();
        // Links to folders are not followed, so that no folder is looked through twice or forever.
        let is_folder = entry.file_type().is_ok_and(|t| t.is_dir());
        if is_folder && depth < DEEPEST {
            look_through(&path, depth + 1, found);
        } else if has_known_extension(&path) && path.is_file() {
            found.push(Found::File(path));
        }
    }
}

fn has_known_extension(path: &Path) -> bool {
    path.extension()
        .is_some_and(|e| EXTENSIONS.iter().any(|known| e.eq_ignore_ascii_case(known)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn extensions_count_in_any_case() {
        assert!(has_known_extension(Path::new("plots/Draft.DOCX")));
        assert!(has_known_extension(Path::new("a.b.md")));
        assert!(!has_known_extension(Path::new("diary.csv")));
        assert!(!has_known_extension(Path::new("README")));
    }

    #[test]
    fn what_is_named_is_kept_in_order() {
        let names: Vec<String> = expand(&["b.xyz".into(), "-".into(), "a.txt".into()])
            .iter()
            .map(Input::name)
            .collect();
        assert_eq!(names, ["b.xyz", "-", "a.txt"]);
    }

    #[test]
    fn typed_text_is_plain_and_not_empty() {
        assert!(typed(" \n").is_err());
        let m = typed("<p>t(28) = 2.20").expect("plain text");
        assert!(m.text.starts_with("<p>t(28)"));
    }
}

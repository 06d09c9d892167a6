//! `tieout boxes`, hidden: shows where on the pages statements and quantities were found. Any
//! program that turns pages into images can make the images; the boxes are drawn over them.

use super::inputs::Input;
use super::{Judging, Refused, Status, grammar, run};
use crate::judge::Document;
use crate::readers::guard::guarded;
use crate::reports;
use clap::Args;
use std::fmt::Write;
use std::path::{Path, PathBuf};

/// Draws the boxes of what was found over images of the pages
///
/// The images may be of any resolution, but each must show the whole page as it is displayed.
/// Without --images, one line is printed for every word: page, line, box and the word.
#[derive(Args)]
pub struct Boxes {
    /// A manuscript with pages
    #[arg(value_name = "FILE")]
    file: PathBuf,
    /// Images of the pages (PNG or JPEG), with {} for the page number, e.g. images/page-{}.png
    #[arg(long, value_name = "PATTERN", requires = "out")]
    images: Option<String>,
    /// Folder for the pictures, page-1.svg and so on
    #[arg(long, value_name = "FOLDER", requires = "images")]
    out: Option<PathBuf>,
    #[command(flatten)]
    judging: Judging,
}

impl Boxes {
    pub(super) fn run(self) -> Result<Status, Refused> {
        let options = self.judging.options()?;
        let grammar = grammar(&self.judging.grammar)?;
        let readers = run::readers(1);
        let name = self.file.display();
        let input = Input::File(self.file.clone());
        let document = guarded(|| Ok(crate::examine(input.read(&readers)?, grammar, &options)))
            .map_err(|reason| Refused(format!("{name}: {reason}")))?;
        if document.manuscript.drawn_pages().is_empty() {
            return Err(Refused(format!(
                "{name}: nothing in it has a place on a page; boxes are known for PDF only"
            )));
        }
        match (&self.images, &self.out) {
            (Some(images), Some(out)) => draw(&document, images, out)?,
            _ => run::write(words(&document).as_bytes())?,
        }
        Ok(Status::Clean)
    }
}

/// Writes a picture of every page that has an image.
fn draw(document: &Document, images: &str, out: &Path) -> Result<(), Refused> {
    let images = Images::named(images)?;
    let trouble = |path: &Path, e: std::io::Error| Refused(format!("{}: {e}", path.display()));
    std::fs::create_dir_all(out).map_err(|e| trouble(out, e))?;
    for page in document.manuscript.drawn_pages() {
        let (Some(path), Some(size)) = (images.of(page), document.manuscript.page_size(page)) else {
            continue;
        };
        let image = std::fs::read(path).map_err(|e| trouble(path, e))?;
        let picture = reports::page_svg(document, page, size, &image)
            .ok_or_else(|| Refused(format!("{}: is neither PNG nor JPEG; convert it", path.display())))?;
        let path = out.join(format!("page-{page}.svg"));
        std::fs::write(&path, picture).map_err(|e| trouble(&path, e))?;
    }
    Ok(())
}

/// The files that show pages, by the number of the page.
struct Images(Vec<(u32, PathBuf)>);

impl Images {
    /// The files named like the pattern. The number may have zeros before it.
    fn named(pattern: &str) -> Result<Images, Refused> {
        let path = Path::new(pattern);
        let (Some((before, after)), Some(folder)) = (
            path.file_name()
                .and_then(|n| n.to_str())
                .and_then(|n| n.split_once("{}")),
            path.parent(),
        ) else {
            return Err(Refused(format!(
                "\"{pattern}\" must name files with {{}} for the page number, e.g. images/page-{{}}.png"
            )));
        };
        let folder = if folder.as_os_str().is_empty() {
            Path::new(".")
        } else {
            folder
        };
        let entries = std::fs::read_dir(folder).map_err(|e| Refused(format!("{}: {e}", folder.display())))?;
        let mut found: Vec<(u32, PathBuf)> = entries
            .flatten()
            .filter_map(|entry| {
                let name = entry.file_name();
                let number = name.to_str()?.strip_prefix(before)?.strip_suffix(after)?;
                Some((number.parse().ok()?, entry.path()))
            })
            .collect();
        if found.is_empty() {
            return Err(Refused(format!("there is no file like {pattern}")));
        }
        found.sort();
        Ok(Images(found))
    }

    fn of(&self, page: u32) -> Option<&Path> {
        self.0.iter().find(|i| i.0 == page).map(|i| i.1.as_path())
    }
}

/// Every word of the text as read with its place, between tabs. A word that goes over two lines has
/// two places.
fn words(document: &Document) -> String {
    let m = &document.manuscript;
    let mut out = String::new();
    for block in &m.blocks {
        let text = m.block_text(block);
        for word in text.split_whitespace() {
            // The word is part of the text.
            let start = block.range.start + (word.as_ptr() as usize - text.as_ptr() as usize);
            for a in m.areas(start..start + word.len()) {
                let [left, top, right, bottom] = a.area;
                // A string takes whatever is written.
                let _ = writeln!(
                    out,
                    "{}\t{}\t{left}\t{top}\t{right}\t{bottom}\t{word}",
                    a.page,
                    a.line.unwrap_or(0)
                );
            }
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_pattern_without_a_place_for_the_number_is_refused() {
        let Err(Refused(reason)) = Images::named("pages/page-1.png") else {
            panic!("must be refused");
        };
        assert!(reason.contains("{} for the page number"), "{reason}");
    }
}

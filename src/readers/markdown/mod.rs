//! *Markdown*, as pandoc, Quarto and R Markdown write it. Blocks are told by their first line;
//! what stands inside a block is read by [`inline`].

mod blocks;
mod inline;
mod lines;
mod links;
mod tables;
mod tags;
mod yaml;

use super::Unreadable;
use super::headings::Parts;
use crate::manuscript::{BlockKind, Builder, Format, Manuscript, Part};
use inline::{Note, Source};
use std::collections::{HashMap, HashSet};

/// Reads a Markdown file.
///
/// # Errors
/// None at present; the signature is that of all readers.
pub fn read(source: &str) -> Result<Manuscript, Unreadable> {
    let unix;
    let source = if source.contains('\r') && !source.contains('\n') {
        unix = source.replace('\r', "\n");
        unix.as_str()
    } else {
        source
    };
    let lines: Vec<&str> = source.lines().collect();
    let mut reader = Reader {
        b: Builder::new(Format::Markdown),
        parts: Parts::new(),
        references: lines::references(&lines),
        defined: lines::notes(&lines),
        read_notes: HashMap::new(),
        lines,
        at: 0,
        in_list: false,
        divisions: Vec::new(),
        caption: None,
        table: None,
    };
    reader.front_matter();
    reader.document();
    Ok(reader.b.finish())
}

struct Reader<'a> {
    b: Builder,
    parts: Parts,
    lines: Vec<&'a str>,
    /// Index of the next line.
    at: usize,
    references: HashSet<String>,
    /// Lines at which notes are defined, by name.
    defined: HashMap<String, usize>,
    /// Lines at which notes already read begin, and where they end.
    read_notes: HashMap<usize, usize>,
    /// The last block was a list item, so that indented text belongs to it.
    in_list: bool,
    /// For each open division, the part to go back to.
    divisions: Vec<Option<Part>>,
    /// Block of a caption that waits for its table, and the label in it.
    caption: Option<(usize, Option<String>)>,
    /// The last block was this table, or a note or caption of it.
    table: Option<usize>,
}

impl<'a> Reader<'a> {
    /// Title and abstract in the YAML header.
    fn front_matter(&mut self) {
        let Some(header) = yaml::header(&self.lines) else {
            return;
        };
        self.at = header.lines;
        if let Some(title) = header.title {
            self.b.part(Part::Front);
            self.heading_text(1, &title, Some(Part::Front));
        }
        if !header.abstract_paragraphs.is_empty() {
            self.parts.enter(Part::Abstract);
            for paragraph in header.abstract_paragraphs {
                self.block(BlockKind::Paragraph, &paragraph);
            }
        }
        self.parts.enter(Part::Body);
    }

    fn document(&mut self) {
        while self.at < self.lines.len() {
            self.next_block();
        }
    }

    /// One block with its text, and behind it the notes written in it.
    fn block(&mut self, kind: BlockKind, source: &Source) {
        let notes = self.single_block(kind, source);
        self.notes(notes);
    }

    /// The notes of a block, and those in them.
    fn notes(&mut self, notes: Vec<Note>) {
        let mut waiting: Vec<Note> = notes.into_iter().rev().collect();
        while let Some(note) = waiting.pop() {
            let more = match note {
                Note::Here(source) => self.single_block(BlockKind::Footnote, &source),
                Note::Named(name) => self.defined_note(&name),
            };
            waiting.extend(more.into_iter().rev());
        }
    }

    fn single_block(&mut self, kind: BlockKind, source: &Source) -> Vec<Note> {
        let bare: String = source
            .text
            .chars()
            .take(120)
            .filter(|c| !matches!(c, '*' | '_'))
            .collect();
        let part = self.parts.paragraph(&bare);
        self.b.part(part);
        self.b.line(source.first_line());
        self.b.open(kind);
        let notes = inline::push(&mut self.b, source, &self.references);
        self.b.close();
        notes
    }

    fn heading_text(&mut self, level: u8, source: &Source, part: Option<Part>) {
        // Which part a heading opens is asked of its text as read.
        let mut alone = Builder::new(Format::Markdown);
        alone.open(BlockKind::Paragraph);
        let notes = inline::push(&mut alone, source, &self.references);
        let title = alone.finish().text.trim_end().replace("\n\n", " ");
        let part = part.unwrap_or_else(|| self.parts.heading(level, &title));
        self.b.close();
        self.b.part(part);
        self.b.line(source.first_line());
        self.b.heading(level, &title);
        self.notes(notes);
    }
}

#[cfg(test)]
mod tests;

//! A *manuscript* is one input document after reading: one normalised text, cut into blocks
//! (paragraphs, headings, captions, table cells …), and for every character of it the place
//! where it stands in the document.
//!
//! Readers fill a [`Builder`]; everything downstream only ever sees the finished [`Manuscript`].
//! Neither side knows what the numbers in the text mean.

mod builder;
mod characters;
mod ink;
mod place;

pub use builder::{Builder, CellShape, Description};
pub use ink::{Area, LineArea, union};
pub use place::Place;
pub(crate) use place::is_one_line;

use ink::Ink;
use serde::{Deserialize, Serialize};
use std::ops::Range;

/// The file formats that can be read.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Format {
    Text,
    Markdown,
    Html,
    Jats,
    Docx,
    Odt,
    Latex,
    Pdf,
}

impl Format {
    /// The name used in JSON and on screen.
    pub fn name(self) -> &'static str {
        match self {
            Format::Text => "text",
            Format::Markdown => "markdown",
            Format::Html => "html",
            Format::Jats => "jats",
            Format::Docx => "docx",
            Format::Odt => "odt",
            Format::Latex => "latex",
            Format::Pdf => "pdf",
        }
    }
}

/// Which part of the document a block belongs to. Results are looked for in [`Part::Abstract`]
/// and [`Part::Body`] only: a p-value in a reference list is somebody else's.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub enum Part {
    /// Title page, authors, affiliations, keywords, dates.
    Front,
    Abstract,
    /// Everything the authors report: running text, floats, footnotes, appendices.
    Body,
    /// Acknowledgements, funding, conflicts of interest, author contributions.
    Back,
    References,
}

/// What a block is on the page.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub enum BlockKind {
    /// Level 1 is the highest heading below the title.
    Heading(u8),
    Paragraph,
    ListItem,
    /// Caption or title of a figure or table.
    Caption,
    /// Note below a table or figure.
    TableNote,
    /// Footnote or endnote.
    Footnote,
    /// One cell of a table; `Block::cell` says which.
    Cell,
    /// Words quoted from elsewhere and set off as a block.
    Quote,
}

/// Where a cell block belongs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
pub struct CellAt {
    /// Index into [`Manuscript::tables`].
    pub table: usize,
    /// Index into [`Table::cells`].
    pub cell: usize,
}

/// A run of text that belongs together. No statement ever crosses the border of a block.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Block {
    pub kind: BlockKind,
    pub part: Part,
    /// Byte range in [`Manuscript::text`].
    pub range: Range<usize>,
    /// Index into [`Manuscript::sections`].
    pub section: Option<usize>,
    /// Running number, from 1, of paragraphs, list items, notes and captions; headings and cells
    /// carry the number of the paragraph before them.
    pub paragraph: u32,
    pub cell: Option<CellAt>,
}

impl Block {
    /// Whether the authors themselves say here what they found: the abstract and the body, without
    /// words quoted from elsewhere.
    pub fn is_authors_own(&self) -> bool {
        matches!(self.part, Part::Abstract | Part::Body) && self.kind != BlockKind::Quote
    }
}

/// A heading and its depth, in document order.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Section {
    pub title: String,
    pub level: u8,
}

/// One cell of a table grid.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Cell {
    /// Row and column of its upper left corner in the grid, from 0.
    pub row: u32,
    pub column: u32,
    pub rowspan: u32,
    pub colspan: u32,
    /// Marked as a header by the document itself.
    pub header: bool,
    /// Index into [`Manuscript::blocks`].
    pub block: usize,
}

/// A table as a grid: merged cells stand once, with their spans.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Table {
    /// Its label as printed, e.g. `Table 2`.
    pub label: Option<String>,
    /// Indexes into [`Manuscript::blocks`] of caption and note blocks.
    pub captions: Vec<usize>,
    pub notes: Vec<usize>,
    pub cells: Vec<Cell>,
    pub rows: u32,
    pub columns: u32,
}

/// Text that was read otherwise than the file's text layer has it, because the page shows so.
#[derive(Clone, Debug, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
pub struct Correction {
    /// Byte range of what is shown, in [`Manuscript::text`].
    pub range: Range<usize>,
    /// What the text layer says there; empty if it says nothing.
    pub layer: String,
}

/// What a text layer says, for people: in quotes, control characters by their number, or `nothing`.
pub fn nothing_or(layer: &str) -> String {
    if layer.trim().is_empty() {
        return "nothing".into();
    }
    let mut shown = String::from("`");
    for c in layer.chars() {
        if c.is_control()
            || matches!(c, '\u{ad}' | '\u{e000}'..='\u{f8ff}' | '\u{200b}'..='\u{200f}' | '\u{fff0}'..)
        {
            shown += &format!("U+{:04X}", c as u32);
        } else {
            shown.push(c);
        }
    }
    shown + "`"
}

/// From this byte of the text on, characters stand on this page and line.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
struct Mark {
    at: usize,
    page: Option<u32>,
    line: Option<u32>,
}

/// One input document after reading. It is read in a process of its own where the format is not to be
/// trusted, and handed over whole: every type in it can be serialised.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
pub struct Manuscript {
    pub format: Format,
    /// The text as read. Blocks are separated by blank lines, cells of a row by tabs.
    pub text: String,
    pub blocks: Vec<Block>,
    pub sections: Vec<Section>,
    pub tables: Vec<Table>,
    /// What the reader wants the person to know, e.g. `page 3 has no text`.
    pub remarks: Vec<String>,
    /// Where the page shows something else than the file's text layer says, in the order of the text.
    pub corrections: Vec<Correction>,
    marks: Vec<Mark>,
    ink: Ink,
    /// Number of characters before each multiple of [`STRIDE`] bytes.
    char_index: Vec<usize>,
}

const STRIDE: usize = 4096;

impl Manuscript {
    /// The text of a block.
    pub fn block_text(&self, block: &Block) -> &str {
        &self.text[block.range.clone()]
    }

    /// The number of Unicode scalar values before a byte offset of the text.
    pub fn char_offset(&self, byte: usize) -> usize {
        let slot = byte / STRIDE;
        let from = slot * STRIDE;
        // The stride may fall inside a character; counting non-continuation bytes is right even so.
        let rest = &self.text.as_bytes()[from..byte];
        self.char_index[slot] + rest.iter().filter(|b| (**b as i8) >= -0x40).count()
    }

    /// The place of a byte range of the text, which must lie inside the block.
    pub fn place(&self, block: &Block, bytes: Range<usize>) -> Place {
        let mark = self.mark(bytes.start);
        let areas = self.areas(bytes.clone());
        let cell = block.cell.map(|at| {
            (
                &self.tables[at.table],
                &self.tables[at.table].cells[at.cell],
                at.table,
            )
        });
        Place {
            page: mark.and_then(|m| m.page),
            section: block.section.map(|s| self.sections[s].title.clone()),
            // A table may stand before the first paragraph.
            paragraph: (block.paragraph > 0).then_some(block.paragraph),
            line: mark.and_then(|m| m.line),
            table: cell.map(|(table, _, index)| {
                table
                    .label
                    .clone()
                    .unwrap_or_else(|| format!("table {} in the file", index + 1))
            }),
            row: cell.map(|(_, cell, _)| cell.row + 1),
            column: cell.map(|(_, cell, _)| cell.column + 1),
            start: self.char_offset(bytes.start),
            end: self.char_offset(bytes.end),
            area: areas.first().map(|a| a.area),
            areas,
        }
    }

    fn mark(&self, byte: usize) -> Option<Mark> {
        let after = self.marks.partition_point(|m| m.at <= byte);
        after.checked_sub(1).map(|at| self.marks[at])
    }

    /// What a byte range of the text covers on the pages: one area for each printed line, in the
    /// order of the text. Empty for formats without pages.
    pub fn areas(&self, bytes: Range<usize>) -> Vec<LineArea> {
        if self.ink.is_empty() {
            return Vec::new();
        }
        // Spaces are not drawn.
        let text = &self.text[bytes.clone()];
        let start = bytes.start + (text.len() - text.trim_start().len());
        let end = bytes.start + text.trim_end().len();
        self.ink
            .areas(start..end.max(start), |at| self.mark(at).and_then(|m| m.line))
    }

    /// Width and height in points of a page on which something of the text is drawn.
    pub fn page_size(&self, page: u32) -> Option<[f32; 2]> {
        self.ink.page_size(page)
    }

    /// The pages on which something of the text is drawn.
    pub fn drawn_pages(&self) -> Vec<u32> {
        self.ink.pages()
    }

    /// The corrections inside a byte range of the text.
    pub fn corrections_in(&self, range: &Range<usize>) -> &[Correction] {
        let from = self.corrections.partition_point(|c| c.range.end <= range.start);
        let to = self.corrections.partition_point(|c| c.range.start < range.end);
        &self.corrections[from..to.max(from)]
    }

    /// A byte range of the text as the file's text layer has it, if that is different.
    pub fn layer_text(&self, range: &Range<usize>) -> Option<String> {
        let corrections = self.corrections_in(range);
        if corrections.is_empty() {
            return None;
        }
        let (mut text, mut done) = (String::new(), range.start);
        for c in corrections {
            text.push_str(&self.text[done..c.range.start.max(done)]);
            text.push_str(&c.layer);
            done = c.range.end;
        }
        text.push_str(&self.text[done.min(range.end)..range.end]);
        Some(text)
    }

    /// The section titles above a block, outermost first.
    pub fn section_path(&self, block: &Block) -> Vec<&str> {
        let mut path = Vec::new();
        let Some(mut at) = block.section else { return path };
        let mut level = u8::MAX;
        loop {
            let section = &self.sections[at];
            if section.level < level {
                level = section.level;
                path.push(section.title.as_str());
            }
            if at == 0 || level <= 1 {
                break;
            }
            at -= 1;
        }
        path.reverse();
        path
    }
}

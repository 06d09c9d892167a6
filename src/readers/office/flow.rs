//! The *flow* of a word-processor document: its paragraphs, notes and tables in reading order,
//! with what the file says about each. [`write`] turns the flow into a manuscript: it finds the
//! headings that are only dressed as such, the parts, and which caption and notes belong to which
//! table. Both Word and OpenDocument files go through it, so both are read alike.

use super::labels::{self, Label};
use super::line::{Line, Page, joined};
use crate::manuscript::{BlockKind, Builder, CellShape, Description, Part};
use crate::readers::headings::{self, Parts};

/// What the file says a paragraph is.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Role {
    #[default]
    Body,
    Title,
    /// From 1.
    Heading(u8),
    ListItem,
    Caption,
    TableNote,
    Quote,
    /// A line of a table of contents.
    Contents,
}

/// A paragraph.
#[derive(Clone, Debug, Default)]
pub struct Paragraph {
    pub line: Line,
    pub role: Role,
    /// The part the file itself puts it in, by its style or by the field it came from.
    pub part: Option<Part>,
    pub centred: bool,
}

/// A cell of a table.
#[derive(Clone, Debug, Default)]
pub struct Cell {
    pub line: Line,
    pub shape: CellShape,
}

/// Something in the flow.
#[derive(Clone, Debug)]
pub enum Item {
    Paragraph(Paragraph),
    /// A footnote or endnote, after the paragraph that refers to it.
    Note(Line),
    /// Rows of cells.
    Table(Vec<Vec<Cell>>),
}

/// The text of blocks as lines: paragraphs as they are, tables row by row.
pub fn lines(items: Vec<Item>) -> Vec<Line> {
    let mut lines = Vec::new();
    for item in items {
        match item {
            Item::Paragraph(p) => lines.push(p.line),
            Item::Note(line) => lines.push(line),
            Item::Table(rows) => {
                for row in rows {
                    lines.push(joined(row.into_iter().map(|c| c.line)));
                }
            }
        }
    }
    lines
}

/// Merged cells make no row wider than this; Word itself stops at 63 columns.
const WIDEST_ROW: u32 = 4096;
/// Headers of more rows than this are columns of their own.
const DEEPEST_HEADER: usize = 4;

/// Running text is not searched for titles and labels beyond this many bytes.
const START: usize = 400;
/// A "heading" longer than this many bytes is a paragraph in the wrong style.
const LONGEST_HEADING: usize = 250;
/// An abstract that has not begun after this many items is none.
const TITLE_PAGE: usize = 100;

/// A header cell that reaches down makes headers of the rows it reaches: `M` and `SD` below `Litres`
/// and beside `Plot`, which spans both rows.
pub fn deepen_header(rows: &mut [Vec<Cell>]) {
    let reach = |row: &Vec<Cell>| {
        row.iter()
            .filter(|c| c.shape.header)
            .map(|c| c.shape.rowspan)
            .max()
    };
    let depth = rows.first().and_then(reach).unwrap_or(0) as usize;
    if depth <= DEEPEST_HEADER && depth < rows.len() {
        for cell in rows[..depth].iter_mut().flatten() {
            cell.shape.header = true;
        }
    }
}

/// What a paragraph is to a table nearby.
#[derive(Clone, Copy, PartialEq)]
enum Tie {
    None,
    /// Index of the table in the flow.
    CaptionOf(usize),
    NoteOf(usize),
}

/// Writes the flow into the builder. `paged` if the file records where its pages end.
pub fn write(items: &[Item], b: &mut Builder, paged: bool) {
    let starts: Vec<String> = items
        .iter()
        .map(|item| match item {
            Item::Paragraph(p) => p.line.start(START),
            _ => String::new(),
        })
        .collect();
    let ties = tie(items, &starts);
    let mut page = paged.then(Page::default);
    if let Some(page) = page {
        b.page(page.number);
    }
    Writer {
        items,
        starts: &starts,
        ties: &ties,
        b,
        parts: Parts::new(),
        study: None,
        found: vec![Found::default(); items.len()],
    }
    .run(&mut page);
}

/// The blocks of a table, by its index in the flow.
#[derive(Clone, Default)]
struct Found {
    table: Option<usize>,
    about: Description,
}

struct Writer<'a> {
    items: &'a [Item],
    starts: &'a [String],
    ties: &'a [Tie],
    b: &'a mut Builder,
    parts: Parts,
    /// Level of the heading of the study that is being reported, if there are several.
    study: Option<u8>,
    found: Vec<Found>,
}

impl Writer<'_> {
    fn run(mut self, page: &mut Option<Page>) {
        let front = self.title_page();
        if front > 0 {
            self.parts.enter(Part::Front);
        }
        for (at, item) in self.items.iter().enumerate() {
            if at == front && front > 0 {
                self.parts.enter(Part::Body);
            }
            match item {
                Item::Paragraph(p) => self.paragraph(at, p, at < front, page),
                Item::Note(line) => {
                    self.b.part(self.parts.current());
                    self.b.open(BlockKind::Footnote);
                    line.write(self.b, &mut None);
                    self.b.close();
                }
                Item::Table(rows) => self.table(at, rows, page),
            }
        }
        for found in &self.found {
            if let Some(table) = found.table {
                self.b.describe(table, &found.about);
            }
        }
    }

    /// How many items stand before the abstract, which are the title page; none without an abstract.
    fn title_page(&self) -> usize {
        for (at, item) in self.items.iter().enumerate().take(TITLE_PAGE) {
            let Item::Paragraph(p) = item else { continue };
            if p.part == Some(Part::Abstract) || Parts::new().paragraph(&self.starts[at]) == Part::Abstract {
                return at;
            }
            match self.heading_level(at, p).and(headings::known(&self.starts[at])) {
                Some(known) if known.part == Part::Abstract => return at,
                Some(known) if known.part != Part::Front => return 0,
                _ => {}
            }
        }
        0
    }

    /// The level of a heading, whether the file says so or it only looks like one.
    fn heading_level(&self, at: usize, p: &Paragraph) -> Option<u8> {
        let start = self.starts[at].as_str();
        if start.is_empty() || p.line.size() > LONGEST_HEADING || self.ties[at] != Tie::None {
            return None;
        }
        match p.role {
            Role::Heading(level) => {
                let caption = labels::label(start).is_some_and(|l| l.sure);
                return (!caption).then_some(level.clamp(1, 9));
            }
            Role::Title => return Some(1),
            Role::Body | Role::ListItem => {}
            _ => return None,
        }
        let known = headings::known(start)?;
        let dressed = p.line.is_strong() || p.centred;
        let bare = start.split(' ').count() <= 3 && p.role == Role::Body && !start.ends_with(['.', ',', ';']);
        match known.level {
            1 if dressed || bare => {
                let name = headings::plain(start);
                let below = [
                    "method",
                    "methods",
                    "results",
                    "discussion",
                    "results and discussion",
                    "introduction",
                ];
                match self.study {
                    Some(level) if below.contains(&name.as_str()) => Some(level + 1),
                    _ => Some(1),
                }
            }
            2 if dressed => Some(self.study.map_or(2, |level| level + 2)),
            _ => None,
        }
    }

    fn paragraph(&mut self, at: usize, p: &Paragraph, front: bool, page: &mut Option<Page>) {
        let start = self.starts[at].as_str();
        let (kind, part) = match self.ties[at] {
            Tie::CaptionOf(_) | Tie::NoteOf(_) => {
                let caption = matches!(self.ties[at], Tie::CaptionOf(_));
                let kind = if caption {
                    BlockKind::Caption
                } else {
                    BlockKind::TableNote
                };
                (kind, self.float())
            }
            Tie::None => match self.heading_level(at, p) {
                Some(level) => (BlockKind::Heading(level), self.heading(p, level, start, front)),
                None => self.plain(p, start),
            },
        };
        self.b.part(part);
        let block = self.b.next_block();
        self.b.open(kind);
        p.line.write(self.b, page);
        self.b.close();
        if self.b.next_block() == block {
            return;
        }
        match self.ties[at] {
            Tie::CaptionOf(table) => {
                self.found[table].about.captions.push(block);
                if let Some(label) = labels::label(start) {
                    self.found[table].about.label.get_or_insert(label.label);
                }
            }
            Tie::NoteOf(table) => self.found[table].about.notes.push(block),
            Tie::None => {}
        }
    }

    fn heading(&mut self, p: &Paragraph, level: u8, start: &str, front: bool) -> Part {
        if front || p.role == Role::Title {
            return Part::Front;
        }
        if p.part == Some(Part::Front) {
            self.parts.enter(Part::Front);
            return Part::Front;
        }
        let below = self.study.is_some_and(|study| level > study);
        if headings::is_study(start) {
            self.study = Some(level);
        } else if !below {
            self.study = None;
        }
        self.parts.heading(level, start)
    }

    /// A float with a caption belongs to the body even if it stands behind the references.
    fn float(&mut self) -> Part {
        if matches!(self.parts.current(), Part::References | Part::Back) {
            self.parts.enter(Part::Body);
        }
        self.parts.current()
    }

    /// Kind and part of a paragraph that is neither a heading nor tied to a table.
    fn plain(&mut self, p: &Paragraph, start: &str) -> (BlockKind, Part) {
        let label = labels::label(start).filter(|l| l.sure);
        let caption = p.role == Role::Caption
            || label.is_some()
                && matches!(p.role, Role::Body | Role::Heading(_))
                && p.part != Some(Part::References);
        let kind = match p.role {
            _ if caption => BlockKind::Caption,
            Role::ListItem => BlockKind::ListItem,
            Role::TableNote => BlockKind::TableNote,
            Role::Quote => BlockKind::Quote,
            _ => BlockKind::Paragraph,
        };
        let part = match p.part {
            _ if p.role == Role::Contents => Part::Front,
            Some(part) => part,
            None if caption => self.float(),
            None => self.parts.paragraph(start),
        };
        (kind, part)
    }

    fn table(&mut self, at: usize, rows: &[Vec<Cell>], page: &mut Option<Page>) {
        let inner = inner_label(rows);
        let part = match inner.is_some() || !self.found[at].about.captions.is_empty() {
            true => self.float(),
            false => self.parts.current(),
        };
        self.b.part(part);
        let table = self.b.table_count();
        self.b.open_table();
        let last = rows.len().saturating_sub(1);
        for (r, row) in rows.iter().enumerate() {
            self.b.row();
            // The cells of a row begin on the same page; the next row begins where the longest ends.
            let begin = *page;
            let mut end = *page;
            let mut width = 0u32;
            for cell in row {
                *page = begin;
                if let Some(page) = page {
                    self.b.page(page.number);
                }
                let block = self.b.next_block();
                let mut shape = cell.shape;
                shape.colspan = shape.colspan.min(WIDEST_ROW.saturating_sub(width)).max(1);
                width = width.saturating_add(shape.colspan);
                self.b.cell(shape);
                cell.line.write(self.b, page);
                self.b.close();
                if page.map(|p| p.number) >= end.map(|p| p.number) {
                    end = *page;
                }
                if row.len() == 1 && rows.len() > 1 {
                    if r == 0 && inner.is_some() {
                        self.found[at].about.captions.push(block);
                    } else if r == last && is_note(&cell.line) {
                        self.found[at].about.notes.push(block);
                    }
                }
            }
            *page = end;
            if let Some(page) = page {
                self.b.page(page.number);
            }
        }
        self.b.close_table();
        self.found[at].table = Some(table);
        if let Some(label) = inner {
            self.found[at].about.label.get_or_insert(label.label);
        }
    }
}

/// The label of a table that carries its caption in a first row of one cell.
fn inner_label(rows: &[Vec<Cell>]) -> Option<Label> {
    match rows.first().map(Vec::as_slice) {
        Some([only]) if rows.len() > 1 => labels::label(&only.line.start(START)).filter(|l| l.table),
        _ => None,
    }
}

fn is_note(line: &Line) -> bool {
    line.starts_with_raised_mark() || labels::is_note(&line.start(START))
}

/// Finds the captions and notes of each table among the paragraphs around it.
fn tie(items: &[Item], starts: &[String]) -> Vec<Tie> {
    let mut ties = vec![Tie::None; items.len()];
    for (at, item) in items.iter().enumerate() {
        let Item::Table(rows) = item else { continue };
        let mut captioned = inner_label(rows).is_some();
        if !captioned {
            for caption in caption_above(items, starts, &ties, at) {
                ties[caption] = Tie::CaptionOf(at);
                captioned = true;
            }
        }
        let mut next = at + 1;
        while let Some(item) = items.get(next) {
            match item {
                Item::Paragraph(_) if starts[next].is_empty() => {}
                Item::Note(_) => {}
                Item::Paragraph(p) => {
                    let below =
                        !captioned && is_caption(p, &starts[next]) && !table_follows(items, starts, next);
                    if below {
                        ties[next] = Tie::CaptionOf(at);
                        captioned = true;
                    } else if p.role == Role::TableNote || is_note(&p.line) && p.role == Role::Body {
                        ties[next] = Tie::NoteOf(at);
                    } else {
                        break;
                    }
                }
                Item::Table(_) => break,
            }
            next += 1;
        }
    }
    ties
}

/// Whether a paragraph next to a table is its caption.
fn is_caption(p: &Paragraph, start: &str) -> bool {
    match labels::label(start) {
        Some(label) => label.table && !matches!(p.role, Role::Contents | Role::ListItem),
        None => p.role == Role::Caption,
    }
}

fn caption_above(items: &[Item], starts: &[String], ties: &[Tie], at: usize) -> Vec<usize> {
    let mut above = (0..at).rev().filter(|i| match items[*i] {
        Item::Paragraph(_) => !starts[*i].is_empty(),
        Item::Table(_) => true,
        Item::Note(_) => false,
    });
    let paragraph = |i: usize| match &items[i] {
        Item::Paragraph(p) if ties[i] == Tie::None => Some(p),
        _ => None,
    };
    let Some(first) = above.next() else {
        return Vec::new();
    };
    let Some(p) = paragraph(first) else {
        return Vec::new();
    };
    // A label of its own and the title in the next paragraph.
    if labels::label(&starts[first]).is_none()
        && p.line.size() < START
        && !matches!(p.role, Role::ListItem | Role::Contents)
        && let Some(second) = above.next()
        && paragraph(second).is_some()
        && labels::label(&starts[second]).is_some_and(|l| l.table && l.alone)
    {
        return vec![second, first];
    }
    if is_caption(p, &starts[first]) {
        return vec![first];
    }
    Vec::new()
}

fn table_follows(items: &[Item], starts: &[String], at: usize) -> bool {
    for next in at + 1..items.len() {
        match items[next] {
            Item::Table(_) => return true,
            Item::Paragraph(_) if !starts[next].is_empty() => return false,
            _ => {}
        }
    }
    false
}

//! The builder that every reader fills: it takes text as the document stores it and makes the
//! text as read, with blocks, sections, tables and places.
//!
//! ```
//! use tieout::manuscript::{BlockKind, Builder, Format, Part};
//! let mut b = Builder::new(Format::Jats);
//! b.part(Part::Body);
//! b.heading(1, "Results");
//! b.open(BlockKind::Paragraph);
//! b.text("Watering differed, ");
//! b.text("χ");
//! b.superscript("2");
//! b.text("(1) = 4.10,\u{a0}\n  p = .043.");
//! b.close();
//! let m = b.finish();
//! assert_eq!(m.text, "Results\n\nWatering differed, χ²(1) = 4.10, p = .043.\n");
//! ```

mod settle;
mod tables;

pub use tables::{CellShape, Description};

use super::characters::{self, Read};
use super::ink::{Area, Ink};
use super::{Block, BlockKind, Correction, Format, Manuscript, Mark, Part, STRIDE, Section, Table};
use std::collections::HashMap;
use tables::OpenTable;

/// Collects a document block by block. See the module text for an example.
pub struct Builder {
    format: Format,
    text: String,
    blocks: Vec<Block>,
    sections: Vec<Section>,
    tables: Vec<Table>,
    remarks: Vec<String>,
    corrections: Vec<Correction>,
    marks: Vec<Mark>,
    ink: Ink,
    page_sizes: HashMap<u32, [f32; 2]>,
    /// Where the characters of the next text are drawn, by their byte in it.
    drawn: Vec<(usize, Area)>,
    part: Part,
    section: Option<usize>,
    paragraph: u32,
    page: Option<u32>,
    line: Option<u32>,
    open: Option<(BlockKind, usize)>,
    table: Option<OpenTable>,
    /// The open block contains characters whose reading depends on their neighbours.
    settle: bool,
}

impl Builder {
    pub fn new(format: Format) -> Builder {
        Builder {
            format,
            text: String::new(),
            blocks: Vec::new(),
            sections: Vec::new(),
            tables: Vec::new(),
            remarks: Vec::new(),
            corrections: Vec::new(),
            marks: Vec::new(),
            ink: Ink::default(),
            page_sizes: HashMap::new(),
            drawn: Vec::new(),
            part: Part::Body,
            section: None,
            paragraph: 0,
            page: None,
            line: None,
            open: None,
            table: None,
            settle: false,
        }
    }

    /// The part that the following blocks belong to.
    pub fn part(&mut self, part: Part) {
        self.part = part;
    }

    pub fn current_part(&self) -> Part {
        self.part
    }

    /// The following text stands on this page (from 1).
    pub fn page(&mut self, page: u32) {
        self.page = Some(page);
        if let Some(size) = self.page_sizes.get(&page) {
            self.ink.sheet(page, *size);
        }
        self.mark();
    }

    /// Width and height in points of a page, for [`Builder::drawn`]; known before the page is.
    pub fn page_size(&mut self, page: u32, size: [f32; 2]) {
        self.page_sizes.insert(page, size);
    }

    /// The characters from byte `at` of the next text on are drawn in this area of the page, whose size
    /// must be known. Calls for one text go in its order.
    pub fn drawn(&mut self, at: usize, area: Area) {
        self.drawn.push((at, area));
    }

    /// The following text stands on this line (from 1).
    pub fn line(&mut self, line: u32) {
        self.line = Some(line);
        self.mark();
    }

    fn mark(&mut self) {
        let mark = Mark {
            at: self.text.len(),
            page: self.page,
            line: self.line,
        };
        match self.marks.last_mut() {
            Some(last) if last.at == mark.at => *last = mark,
            Some(last) if last.page == mark.page && last.line == mark.line => {}
            _ => self.marks.push(mark),
        }
    }

    /// Something the reader wants the person to know about the reading.
    pub fn remark(&mut self, remark: impl Into<String>) {
        let remark = remark.into();
        if !self.remarks.contains(&remark) {
            self.remarks.push(remark);
        }
    }

    /// A heading: closes whatever block is open, starts a new section.
    pub fn heading(&mut self, level: u8, title: &str) {
        self.open(BlockKind::Heading(level));
        self.text(title);
        self.close();
    }

    /// Opens a block; an open one is closed first.
    pub fn open(&mut self, kind: BlockKind) {
        self.close();
        if matches!(
            kind,
            BlockKind::Paragraph
                | BlockKind::ListItem
                | BlockKind::Caption
                | BlockKind::TableNote
                | BlockKind::Footnote
                | BlockKind::Quote
        ) {
            self.paragraph += 1;
        }
        self.open = Some((kind, self.text.len()));
        self.settle = false;
        self.mark();
    }

    pub fn is_open(&self) -> bool {
        self.open.is_some()
    }

    /// The kind of the open block.
    pub fn open_kind(&self) -> Option<BlockKind> {
        self.open.as_ref().map(|o| o.0)
    }

    /// The text of the open block so far; empty without one.
    pub fn open_text(&self) -> &str {
        self.open.as_ref().map_or("", |o| &self.text[o.1..])
    }

    /// The section that the next block will belong to, for [`Builder::return_to_section`].
    pub fn section(&self) -> Option<usize> {
        self.section
    }

    /// The following blocks belong to this section again (or to none): where a document says that
    /// a section has ended, text behind it must not be placed in it.
    pub fn return_to_section(&mut self, section: Option<usize>) {
        self.close();
        self.section = section.filter(|s| *s < self.sections.len());
    }

    /// Text as the document stores it. Runs of white space become one space; line breaks count as
    /// white space. Without an open block a paragraph is opened, unless the text is blank.
    pub fn text(&mut self, raw: &str) {
        if self.open.is_none() {
            if raw.trim().is_empty() {
                self.drawn.clear();
                return;
            }
            self.open(BlockKind::Paragraph);
        }
        if self.drawn.is_empty() {
            return self.add(raw);
        }
        let mut from = 0;
        for (at, area) in std::mem::take(&mut self.drawn) {
            let Some(before) = raw.get(from..at) else { continue };
            self.add(before);
            self.ink.add(self.text.len(), area);
            from = at;
        }
        self.add(&raw[from..]);
    }

    fn add(&mut self, raw: &str) {
        let mut rest = raw;
        while !rest.is_empty() {
            // Most text is plain words with single spaces, which are taken over in one go.
            let plain = plain_words(rest.as_bytes(), self.takes_space());
            if plain > 0 {
                self.text.push_str(&rest[..plain]);
                rest = &rest[plain..];
                continue;
            }
            let Some(c) = rest.chars().next() else { break };
            rest = &rest[c.len_utf8()..];
            if c.is_ascii() {
                // Space, control characters, delete.
                self.space();
                continue;
            }
            match characters::read(c) {
                Read::As(c) => {
                    self.settle |= c == '–' || c == '—';
                    self.text.push(c);
                }
                Read::Many(s) => self.text.push_str(s),
                Read::Space => self.space(),
                Read::Nothing => {}
            }
        }
    }

    /// Raised text. Digits, signs and single letters become superscript characters; anything with
    /// a character that has no superscript form (`***`, words) stays on the line.
    pub fn superscript(&mut self, raw: &str) {
        let bare = raw.trim();
        let single_or_number = bare.chars().count() == 1 || bare.chars().all(|c| !c.is_alphabetic());
        let keeps = |c: char| c == ',' || c.is_whitespace();
        let form = |c: char| characters::superscript(characters::bare(c));
        if single_or_number && bare.chars().all(|c| keeps(c) || form(c).is_some()) {
            self.shifted(raw, |c| form(c).unwrap_or(c));
        } else {
            self.text(raw);
        }
    }

    /// Lowered text. Digits become subscript characters, the rest stays on the line.
    pub fn subscript(&mut self, raw: &str) {
        self.shifted(raw, |c| characters::subscript(characters::bare(c)).unwrap_or(c));
    }

    /// Adds the text with its characters in another form.
    fn shifted(&mut self, raw: &str, form: impl Fn(char) -> char) {
        let mut shifted = String::with_capacity(raw.len() * 2);
        let mut drawn = self.drawn.iter_mut().peekable();
        for (at, c) in raw.char_indices() {
            while let Some(d) = drawn.next_if(|d| d.0 <= at) {
                d.0 = shifted.len();
            }
            shifted.push(form(c));
        }
        for d in drawn {
            d.0 = shifted.len();
        }
        self.text(&shifted);
    }

    /// Text that the page shows where the file's text layer says `layer`, which is kept beside it
    /// (empty if the layer says nothing). `write` writes what is shown.
    pub fn corrected(&mut self, layer: &str, write: impl FnOnce(&mut Builder)) {
        if self.open.is_none() {
            self.open(BlockKind::Paragraph);
        }
        let start = self.text.len();
        write(self);
        if self.text.len() > start {
            self.corrections.push(Correction {
                range: start..self.text.len(),
                layer: layer.to_string(),
            });
        }
    }

    /// What was corrected in the blocks closed so far: what is shown, what the layer says, and how
    /// often, the most frequent first.
    pub fn corrections(&self) -> Vec<(&str, &str, usize)> {
        let mut kinds: Vec<(&str, &str, usize)> = Vec::new();
        for c in &self.corrections {
            let shown = &self.text[c.range.clone()];
            match kinds.iter_mut().find(|k| k.0 == shown && k.1 == c.layer) {
                Some(kind) => kind.2 += 1,
                None => kinds.push((shown, &c.layer, 1)),
            }
        }
        kinds.sort_by_key(|k| std::cmp::Reverse(k.2));
        kinds
    }

    /// The end of a printed line inside a block, where a word may be hyphenated.
    pub fn line_break(&mut self) {
        if let Some((_, start)) = self.open {
            while self.text.len() > start && self.text.ends_with(' ') {
                self.text.pop();
            }
            if self.text.len() > start && !self.text.ends_with('\n') {
                self.text.push('\n');
                self.settle = true;
            }
        }
    }

    /// Whether a space would stand between words, not after another one or at the beginning.
    fn takes_space(&self) -> bool {
        let start = self.open.as_ref().map_or(0, |o| o.1);
        self.text.len() > start && !matches!(self.text.as_bytes().last(), Some(b' ' | b'\n'))
    }

    fn space(&mut self) {
        if self.takes_space() {
            self.text.push(' ');
        }
    }

    /// Closes the open block; an empty one leaves no trace.
    pub fn close(&mut self) {
        let Some((kind, start)) = self.open.take() else {
            return;
        };
        if self.settle {
            let (settled, moved) = settle::settle(&self.text[start..]);
            self.settle_corrections(start, &settled, &moved);
            self.text.truncate(start);
            self.text.push_str(&settled);
            for mark in self.marks.iter_mut().rev().take_while(|m| m.at >= start) {
                mark.at = start + settle::carried(mark.at - start, &moved);
            }
            self.ink
                .carry(start, |at| start + settle::carried(at - start, &moved));
        }
        while self.text.len() > start && self.text.ends_with([' ', '\n']) {
            self.text.pop();
        }
        if let BlockKind::Heading(level) = kind
            && self.text.len() > start
        {
            self.sections.push(Section {
                title: self.text[start..].to_string(),
                level,
            });
            self.section = Some(self.sections.len() - 1);
        }
        let cell = if kind == BlockKind::Cell {
            self.cell_at()
        } else {
            None
        };
        if self.text.len() == start && cell.is_none() {
            if !matches!(kind, BlockKind::Heading(_) | BlockKind::Cell) {
                self.paragraph -= 1;
            }
            self.trim_marks();
            return;
        }
        self.blocks.push(Block {
            kind,
            part: self.part,
            range: start..self.text.len(),
            section: self.section,
            paragraph: self.paragraph,
            cell,
        });
        match (&mut self.table, cell) {
            (Some(table), Some(_)) => {
                table.row_has_text = true;
                self.text.push('\t');
            }
            _ => self.text.push_str("\n\n"),
        }
        self.mark();
    }

    /// Corrections follow the settled text of the block that begins at `start`; one whose character is
    /// gone (the hyphen of a joined word) is dropped.
    fn settle_corrections(&mut self, start: usize, settled: &str, moved: &settle::Moved) {
        let first = self.corrections.partition_point(|c| c.range.start < start);
        let mut kept = Vec::new();
        for mut c in self.corrections.drain(first..) {
            let shown = &self.text[c.range.clone()];
            let range =
                settle::carried(c.range.start - start, moved)..settle::carried(c.range.end - start, moved);
            let now = settled.get(range.clone()).unwrap_or_default();
            if now == shown || now == "-" && matches!(shown, "–" | "—") {
                c.range = start + range.start..start + range.end;
                kept.push(c);
            }
        }
        self.corrections.extend(kept);
    }

    /// Marks beyond the end of the text (their block was empty) fall back to the end.
    fn trim_marks(&mut self) {
        let end = self.text.len();
        while self.marks.last().is_some_and(|m| m.at > end) {
            self.marks.pop();
        }
        self.ink.truncate(end);
        self.mark();
    }

    /// The index that the next block to be closed will get.
    pub fn next_block(&self) -> usize {
        self.blocks.len()
    }

    /// True when nothing readable has been added so far.
    pub fn is_blank(&self) -> bool {
        self.text.trim().is_empty()
    }

    /// The finished manuscript.
    pub fn finish(mut self) -> Manuscript {
        self.close();
        self.close_table();
        while self.text.ends_with(['\n', '\t', ' ']) {
            self.text.pop();
        }
        // Empty cells at the very end of the document stood in what was just cut off.
        let end = self.text.len();
        for block in &mut self.blocks {
            block.range = block.range.start.min(end)..block.range.end.min(end);
        }
        if !self.text.is_empty() {
            self.text.push('\n');
        }
        let mut char_index = Vec::with_capacity(self.text.len() / STRIDE + 1);
        let mut count = 0;
        for chunk in self.text.as_bytes().chunks(STRIDE) {
            char_index.push(count);
            count += chunk.iter().filter(|b| (**b as i8) >= -0x40).count();
        }
        char_index.push(count);
        Manuscript {
            format: self.format,
            text: self.text,
            blocks: self.blocks,
            sections: self.sections,
            tables: self.tables,
            remarks: self.remarks,
            corrections: self.corrections,
            marks: self.marks,
            ink: self.ink,
            char_index,
        }
    }
}

/// How many bytes at the beginning are printable ASCII with no two spaces in a row; `space` says
/// whether one may stand first.
fn plain_words(text: &[u8], space: bool) -> usize {
    const STEP: usize = 16;
    let fits = |before: u8, byte: u8| (0x20..0x7f).contains(&byte) && (byte, before) != (b' ', b' ');
    match text.first() {
        Some(first) if fits(if space { b'x' } else { b' ' }, *first) => {}
        _ => return 0,
    }
    let mut at = 1;
    // A step at a time without a way out in between, which the compiler turns into vectors.
    while at + STEP <= text.len() {
        let pairs = text[at - 1..at - 1 + STEP].iter().zip(&text[at..at + STEP]);
        if !pairs.fold(true, |all, (before, byte)| all & fits(*before, *byte)) {
            break;
        }
        at += STEP;
    }
    let rest = text[at - 1..].windows(2);
    at + rest.take_while(|pair| fits(pair[0], pair[1])).count()
}

#[cfg(test)]
mod tests {
    use super::super::LineArea;
    use super::*;

    #[test]
    fn marks_follow_the_text_through_joined_lines() {
        let mut b = Builder::new(Format::Text);
        b.open(BlockKind::Paragraph);
        b.line(7);
        b.text("a differ-");
        b.line_break();
        b.line(8);
        b.text("ence, p = .03");
        let m = b.finish();
        let at = m.text.find("p =").expect("the text holds it");
        assert_eq!(m.place(&m.blocks[0], at..at + 7).line, Some(8));
        assert_eq!(m.place(&m.blocks[0], 0..3).line, Some(7));
    }

    #[test]
    fn areas_follow_the_text_through_forms_and_joined_lines() {
        let mut b = Builder::new(Format::Pdf);
        b.open(BlockKind::Paragraph);
        b.page_size(3, [600.0, 800.0]);
        b.page(3);
        b.line(1);
        let area = |n: usize| [10.0 * n as f32, 100.0, 10.0 * n as f32 + 8.0, 110.0];
        for (at, n) in [(0, 1), (1, 2), (2, 3)] {
            b.drawn(at, area(n));
        }
        b.text("xﬁ-");
        b.line_break();
        b.line(2);
        b.drawn(0, area(4));
        b.drawn(2, area(5));
        b.text("ne");
        b.drawn(0, area(6));
        b.drawn(4, area(7));
        b.drawn(5, area(8));
        b.superscript("𝟐,3");
        let m = b.finish();
        assert_eq!(m.text, "xfine²,³\n");
        let at = |part: &str| {
            let from = m.text.find(part).expect("it is there");
            m.areas(from..from + part.len())
        };
        let near = |a: LineArea, line, n: usize| {
            let close = a.area.iter().zip(area(n)).all(|(a, b)| (a - b).abs() < 0.02);
            assert!(close && a.page == 3 && a.line == Some(line), "{a:?} is not {n}");
        };
        near(at("fi")[0], 1, 2);
        let word = at("fine");
        assert_eq!(word.len(), 2);
        // Without the hyphen that is gone.
        near(word[0], 1, 2);
        near(word[1], 2, 4);
        near(at("²")[0], 2, 6);
        near(at("³")[0], 2, 8);
        assert_eq!(m.page_size(3), Some([600.0, 800.0]));
        // A place that is known by nothing is no place.
        let mut b = Builder::new(Format::Pdf);
        b.drawn(7, area(1));
        b.text("x");
        assert!(b.finish().areas(0..1).is_empty());
    }

    #[test]
    fn white_space_of_any_kind_is_one_space() {
        let mut b = Builder::new(Format::Text);
        for text in [
            " \n two  cans ",
            " ",
            "\tof \u{a0} water ",
            "\u{2009}",
            "a day",
            " \n",
        ] {
            b.text(text);
        }
        assert_eq!(b.finish().text, "two cans of water a day\n");
    }

    #[test]
    fn offsets_count_characters_not_bytes() {
        let mut b = Builder::new(Format::Text);
        b.text(&"χ² = 4, η² = .1 ".repeat(1000));
        let m = b.finish();
        let byte = m.text.rfind("η").expect("the text holds it");
        assert_eq!(m.char_offset(byte), m.text[..byte].chars().count());
        assert_eq!(m.char_offset(m.text.len()), m.text.chars().count());
    }

    #[test]
    fn raised_marks_that_are_not_numbers_stay_on_the_line() {
        let mut b = Builder::new(Format::Docx);
        b.text("0.45");
        b.superscript("***");
        b.text(" 3.1");
        b.superscript("a");
        b.text(" p = .03");
        b.superscript("12,13");
        b.text(" η");
        b.subscript("p");
        b.superscript("2");
        b.text(" F");
        b.subscript("1,63");
        assert_eq!(b.finish().text, "0.45*** 3.1ᵃ p = .03¹²,¹³ ηp² F₁,₆₃\n");
    }
}

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

use super::characters::{self, Read};
use super::{Block, BlockKind, Cell, CellAt, Format, Manuscript, Mark, Part, STRIDE, Section, Table};

/// Position and extent of a cell, as the reader knows it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct CellShape {
    pub rowspan: u32,
    pub colspan: u32,
    pub header: bool,
}

impl Default for CellShape {
    fn default() -> Self {
        CellShape {
            rowspan: 1,
            colspan: 1,
            header: false,
        }
    }
}

/// Spans beyond this are taken for a mistake in the file, not for a table this large.
const LARGEST_SPAN: u32 = 1000;

/// Cells beyond this column share it: no page is that wide, and a damaged file may claim it.
const LAST_COLUMN: u32 = 4095;

struct OpenTable {
    index: usize,
    row: u32,
    column: u32,
    /// For each column, the first row below the cells that reach down into it.
    free_from: Vec<u32>,
    row_has_text: bool,
}

/// Collects a document block by block. See the module text for an example.
pub struct Builder {
    format: Format,
    text: String,
    blocks: Vec<Block>,
    sections: Vec<Section>,
    tables: Vec<Table>,
    remarks: Vec<String>,
    marks: Vec<Mark>,
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
            marks: Vec::new(),
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
        self.mark();
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
                return;
            }
            self.open(BlockKind::Paragraph);
        }
        let mut rest = raw;
        while !rest.is_empty() {
            let plain = rest.bytes().take_while(|b| (0x21..0x7f).contains(b)).count();
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
        self.shifted(raw, characters::superscript);
    }

    /// Lowered text. Digits become subscript characters, the rest stays on the line.
    pub fn subscript(&mut self, raw: &str) {
        if raw.chars().any(|c| c.is_ascii_digit()) {
            let lowered: String = raw
                .chars()
                .map(|c| characters::subscript(c).unwrap_or(c))
                .collect();
            self.text(&lowered);
        } else {
            self.text(raw);
        }
    }

    fn shifted(&mut self, raw: &str, form: fn(char) -> Option<char>) {
        let bare = raw.trim();
        let single_or_number = bare.chars().count() == 1 || bare.chars().all(|c| !c.is_alphabetic());
        let shifted: Option<String> = bare
            .chars()
            .map(|c| if c == ',' || c == ' ' { Some(c) } else { form(c) })
            .collect();
        match shifted {
            Some(shifted) if single_or_number => self.text(&shifted),
            _ => self.text(raw),
        }
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

    fn space(&mut self) {
        let start = self.open.as_ref().map_or(0, |o| o.1);
        if self.text.len() > start && !self.text.ends_with([' ', '\n']) {
            self.text.push(' ');
        }
    }

    /// Closes the open block; an empty one leaves no trace.
    pub fn close(&mut self) {
        let Some((kind, start)) = self.open.take() else {
            return;
        };
        if self.settle {
            self.settle_block(start);
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

    /// Decides what depends on neighbours: an en dash before a number is a minus unless a number
    /// stands before it; a hyphen at a line end joins the two halves of a word.
    fn settle_block(&mut self, start: usize) {
        let old: Vec<char> = self.text[start..].chars().collect();
        let mut new = String::with_capacity(self.text.len() - start);
        // Byte offsets, old and new, at which the text shrank, to carry the marks along.
        let mut moved: Vec<(usize, usize)> = Vec::new();
        let mut old_byte = start;
        let mut i = 0;
        while i < old.len() {
            let c = old[i];
            let mut taken = 1;
            match c {
                '–' | '—' if is_minus(&old, i) => new.push('-'),
                '-' if old.get(i + 1) == Some(&'\n')
                    && i > 0
                    && old[i - 1].is_lowercase()
                    && old.get(i + 2).is_some_and(|n| n.is_lowercase()) =>
                {
                    taken = 2;
                }
                // A range or compound broken after its dash keeps the dash, not the break.
                '\n' if matches!(old.get(i.wrapping_sub(1)), Some('-' | '–' | '/')) => {}
                '\n' => new.push(' '),
                c => new.push(c),
            }
            for d in &old[i..i + taken] {
                old_byte += d.len_utf8();
            }
            i += taken;
            if old_byte != start + new.len() {
                moved.push((old_byte, start + new.len()));
            }
        }
        self.text.truncate(start);
        self.text.push_str(&new);
        for mark in self.marks.iter_mut().rev().take_while(|m| m.at >= start) {
            let k = moved.partition_point(|(o, _)| *o <= mark.at);
            if k > 0 {
                let (o, n) = moved[k - 1];
                mark.at = n + (mark.at - o);
            }
        }
    }

    /// Marks beyond the end of the text (their block was empty) fall back to the end.
    fn trim_marks(&mut self) {
        let end = self.text.len();
        while self.marks.last().is_some_and(|m| m.at > end) {
            self.marks.pop();
        }
        self.mark();
    }

    /// Opens a table; nested tables are read as text of the outer cell.
    pub fn open_table(&mut self) {
        self.close();
        self.tables.push(Table {
            label: None,
            captions: Vec::new(),
            notes: Vec::new(),
            cells: Vec::new(),
            rows: 0,
            columns: 0,
        });
        self.table = Some(OpenTable {
            index: self.tables.len() - 1,
            row: 0,
            column: 0,
            free_from: Vec::new(),
            row_has_text: false,
        });
    }

    pub fn in_table(&self) -> bool {
        self.table.is_some()
    }

    /// Starts the next row. The first call starts the first row.
    pub fn row(&mut self) {
        self.close();
        if let Some(table) = &mut self.table {
            let first = self.tables[table.index].rows == 0;
            if !first {
                table.row += 1;
            }
            table.column = 0;
            self.tables[table.index].rows = table.row + 1;
            if table.row_has_text && self.text.ends_with('\t') {
                self.text.pop();
                self.text.push('\n');
            }
            table.row_has_text = false;
        }
    }

    /// Opens the next free cell of the row; the text that follows is its text until [`Builder::close`].
    pub fn cell(&mut self, shape: CellShape) {
        self.close();
        let Some(table) = &mut self.table else {
            self.open(BlockKind::Paragraph);
            return;
        };
        while table
            .free_from
            .get(table.column as usize)
            .is_some_and(|free| *free > table.row)
        {
            table.column += 1;
        }
        table.column = table.column.min(LAST_COLUMN);
        let (rowspan, colspan) = (
            shape.rowspan.clamp(1, LARGEST_SPAN),
            shape.colspan.clamp(1, LARGEST_SPAN),
        );
        let end = (table.column + colspan) as usize;
        if table.free_from.len() < end {
            table.free_from.resize(end, 0);
        }
        for free in &mut table.free_from[table.column as usize..end] {
            *free = table.row + rowspan;
        }
        let grid = &mut self.tables[table.index];
        grid.columns = grid.columns.max(end as u32);
        grid.cells.push(Cell {
            row: table.row,
            column: table.column,
            rowspan,
            colspan,
            header: shape.header,
            block: self.blocks.len(),
        });
        table.column += colspan;
        self.open(BlockKind::Cell);
    }

    fn cell_at(&self) -> Option<CellAt> {
        let table = self.table.as_ref()?;
        let cell = self.tables[table.index].cells.len().checked_sub(1)?;
        Some(CellAt {
            table: table.index,
            cell,
        })
    }

    /// Closes the table and gives it its label, e.g. `Table 2`, and the blocks of its captions
    /// and notes (see [`Builder::next_block`]).
    pub fn close_table(&mut self) {
        self.close();
        if self.table.take().is_some() {
            while self.text.ends_with('\t') {
                self.text.pop();
            }
            // Empty cells at the end of the table stood in what was just cut off; left where they
            // were, they would come to lie inside the characters of the next block.
            let end = self.text.len();
            for block in self.blocks.iter_mut().rev().take_while(|b| b.range.end > end) {
                block.range = end..end;
            }
            if !self.text.is_empty() && !self.text.ends_with("\n\n") {
                self.text
                    .push_str(if self.text.ends_with('\n') { "\n" } else { "\n\n" });
            }
            self.trim_marks();
        }
    }

    /// The index that the next block to be closed will get.
    pub fn next_block(&self) -> usize {
        self.blocks.len()
    }

    /// The number of tables opened so far.
    pub fn table_count(&self) -> usize {
        self.tables.len()
    }

    /// Describes a table already opened: its label and the indexes of its caption and note blocks.
    pub fn describe_table(&mut self, table: usize, label: Option<&str>, captions: &[usize], notes: &[usize]) {
        let count = self.blocks.len();
        if let Some(table) = self.tables.get_mut(table) {
            if let Some(label) = label.map(str::trim).filter(|l| !l.is_empty()) {
                table.label = Some(label.trim_end_matches(['.', ':']).to_string());
            }
            table.captions.extend(captions.iter().filter(|b| **b < count));
            table.notes.extend(notes.iter().filter(|b| **b < count));
        }
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
            marks: self.marks,
            char_index,
        }
    }
}

/// Whether the dash at `at` is the sign of the number behind it.
fn is_minus(text: &[char], at: usize) -> bool {
    let mut next = at + 1;
    // Some typesetters put a space between sign and number, but only after a comparator or bracket.
    let spaced = text.get(next) == Some(&' ');
    if spaced {
        next += 1;
    }
    let number = match text.get(next) {
        Some(c) if c.is_ascii_digit() => true,
        Some('.') | Some('·') => text.get(next + 1).is_some_and(char::is_ascii_digit),
        _ => false,
    };
    if !number {
        return false;
    }
    let before = text[..at].iter().rev().find(|c| !matches!(c, ' ' | '\n'));
    let tight = at == 0 || !matches!(text[at - 1], ' ' | '\n');
    match before {
        None => !spaced,
        Some('=' | '<' | '>' | '≤' | '≥' | '≈' | '(' | '[' | '{' | '±') => true,
        _ if text[at] == '—' || spaced => false,
        // `−31–12` and `.02 – .03` are ranges; `, –.31` and `to –.31` are signs.
        Some(c) if tight => !(c.is_alphanumeric() || matches!(c, ')' | ']' | '%' | '*' | '.' | '"' | '\'')),
        Some(c) => !c.is_ascii_digit(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn paragraph(parts: &[&str]) -> String {
        let mut b = Builder::new(Format::Text);
        b.open(BlockKind::Paragraph);
        for (i, part) in parts.iter().enumerate() {
            if i > 0 {
                b.line_break();
            }
            b.text(part);
        }
        b.finish().text.trim_end().to_string()
    }

    #[test]
    fn en_dash_is_a_minus_only_where_it_is_a_sign() {
        assert_eq!(
            paragraph(&["b = –0.31, 95% CI [–0.5, –.1]"]),
            "b = -0.31, 95% CI [-0.5, -.1]"
        );
        assert_eq!(paragraph(&["95%CI: −31–12"]), "95%CI: -31–12");
        assert_eq!(
            paragraph(&["0.66 – 1.21 and pp. 12–18"]),
            "0.66 – 1.21 and pp. 12–18"
        );
        assert_eq!(paragraph(&["r = — .35"]), "r = - .35");
        assert_eq!(paragraph(&["from –3 to –1"]), "from -3 to -1");
        assert_eq!(paragraph(&["Greenhouse–Geisser, p<–"]), "Greenhouse–Geisser, p<–");
    }

    #[test]
    fn hyphenated_line_ends_are_joined() {
        assert_eq!(
            paragraph(&["the differ-", "ence was p =", ".03"]),
            "the difference was p = .03"
        );
        assert_eq!(
            paragraph(&["post-", "Hoc and 0.66–", "1.21"]),
            "post-Hoc and 0.66–1.21"
        );
    }

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
    fn offsets_count_characters_not_bytes() {
        let mut b = Builder::new(Format::Text);
        b.text(&"χ² = 4, η² = .1 ".repeat(1000));
        let m = b.finish();
        let byte = m.text.rfind("η").expect("the text holds it");
        assert_eq!(m.char_offset(byte), m.text[..byte].chars().count());
        assert_eq!(m.char_offset(m.text.len()), m.text.chars().count());
    }

    #[test]
    fn merged_cells_push_their_neighbours_aside() {
        let mut b = Builder::new(Format::Html);
        b.open_table();
        b.row();
        for (text, rowspan, colspan) in [("Plot", 2, 1), ("Litres", 1, 2)] {
            b.cell(CellShape {
                rowspan,
                colspan,
                header: true,
            });
            b.text(text);
        }
        b.row();
        for text in ["M", "SD"] {
            b.cell(CellShape::default());
            b.text(text);
        }
        b.close_table();
        b.describe_table(0, Some("Table 1."), &[], &[]);
        let m = b.finish();
        assert_eq!(m.text, "Plot\tLitres\nM\tSD\n");
        let at: Vec<_> = m.tables[0].cells.iter().map(|c| (c.row, c.column)).collect();
        assert_eq!(at, [(0, 0), (0, 1), (1, 1), (1, 2)]);
        assert_eq!((m.tables[0].rows, m.tables[0].columns), (2, 3));
        let sd = &m.blocks[3];
        let place = m.place(sd, sd.range.clone());
        assert_eq!(
            (place.table.as_deref(), place.row, place.column),
            (Some("Table 1"), Some(2), Some(3))
        );
    }

    #[test]
    fn empty_cells_at_the_end_of_a_table_do_not_reach_into_the_next_block() {
        let mut b = Builder::new(Format::Html);
        b.open_table();
        for row in [["a", "", "", "", ""], ["", "", "", "", ""]] {
            b.row();
            for text in row {
                b.cell(CellShape::default());
                b.text(text);
            }
        }
        b.close_table();
        b.text("ηηηη");
        let m = b.finish();
        assert_eq!(m.text, "a\t\t\t\t\n\nηηηη\n");
        let cells: Vec<&str> = m.tables[0]
            .cells
            .iter()
            .map(|c| m.block_text(&m.blocks[c.block]))
            .collect();
        assert_eq!(cells.concat(), "a");
        let after = m.text.find('η').expect("the text holds it");
        assert!(
            m.tables[0]
                .cells
                .iter()
                .all(|c| m.blocks[c.block].range.end < after)
        );
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

//! Blocks, tables and raised text of a web page.

use super::*;
use crate::manuscript::CellShape;

impl<'a> Reading<'a> {
    /// Text, its character references resolved.
    pub(super) fn text(&mut self, text: &str) {
        if self.context.silent {
            return;
        }
        let blank = text.bytes().all(|b| b.is_ascii_whitespace());
        self.formula_read &= blank;
        if !self.shifts.is_empty() {
            self.shifted.push_str(text);
        } else if self.ready(blank) {
            self.b.text(text);
        }
    }

    /// Makes sure that a block is open for text; false if the text has no place.
    pub(super) fn ready(&mut self, blank: bool) -> bool {
        if self.b.is_open() {
            return true;
        }
        // Between the cells of a table nothing is shown.
        if blank || self.b.in_table() {
            return false;
        }
        self.open_block(self.context.kind);
        true
    }

    pub(super) fn open_block(&mut self, kind: BlockKind) {
        self.close_block();
        if !self.context.joined {
            self.b.open(kind);
        }
    }

    pub(super) fn close_block_in(&mut self, inside: Context) {
        let outside = std::mem::replace(&mut self.context, inside);
        self.close_block();
        self.context = outside;
    }

    pub(super) fn close_block(&mut self) {
        self.flush_shift();
        if self.context.joined {
            if self.b.is_open() {
                self.b.text(" ");
            }
            return;
        }
        let Some(kind) = self.b.open_kind() else { return };
        let text = self.b.open_text();
        let label = (kind == BlockKind::Caption).then(|| table_label(text)).flatten();
        let part = match self.context.part {
            Some(part) => part,
            None if kind == BlockKind::Paragraph => self.parts.paragraph(text),
            None => self.parts.current(),
        };
        self.b.part(part);
        let block = self.b.next_block();
        self.b.close();
        if self.b.next_block() == block {
            return;
        }
        self.waiting_caption = None;
        match (kind, self.groups.last_mut()) {
            (_, Some(group)) => {
                group.about.add(kind, block);
                group.about.label = group.about.label.take().or(label);
            }
            (BlockKind::Caption, None) => self.waiting_caption = Some((block, label)),
            (BlockKind::TableNote, None) => {
                if let Some(last) = self.b.table_count().checked_sub(1) {
                    self.b.describe_table(last, None, &[], &[block]);
                }
            }
            _ => {}
        }
    }

    pub(super) fn close_heading(&mut self, level: u8, inside: Context) {
        self.flush_shift();
        if inside.joined {
            return self.close_block_in(inside);
        }
        let part = match inside.part {
            // A heading that is marked itself (`<h1 id=references>`) speaks for what follows it.
            Some(part) => {
                if self.context.part.is_none() && part != Part::Front {
                    self.parts.enter(part);
                }
                part
            }
            None => self.parts.heading(level, self.b.open_text().trim()),
        };
        self.b.part(part);
        self.b.close();
    }

    /// A sectioning element ends: what follows is in the section and part from before it.
    pub(super) fn leave_section(&mut self, open: &Open<'a>) {
        self.b.return_to_section(open.section);
        if self.parts.current() != open.part {
            self.parts.enter(open.part);
        }
    }

    pub(super) fn open_shift(&mut self, raised: bool) {
        self.flush_shift();
        self.shifts.push(raised);
    }

    pub(super) fn flush_shift(&mut self) {
        let shifted = std::mem::take(&mut self.shifted);
        let blank = shifted.trim().is_empty();
        if shifted.is_empty() || !self.ready(blank) {
            return;
        }
        match self.shifts.last() {
            Some(true) => self.b.superscript(&shifted),
            Some(false) => self.b.subscript(&shifted),
            None => self.b.text(&shifted),
        }
    }

    /// The title in the head of the file, for pages that show none.
    pub(super) fn document_title(&mut self) {
        let title = self.tokens.raw_until_end_of("title");
        let source = self.source.as_bytes();
        let shown = |h1: &[u8]| memchr::memmem::find(source, h1).is_some();
        if !self.context.silent && self.b.is_blank() && !shown(b"<h1") && !shown(b"<H1") {
            self.b.part(Part::Front);
            self.b.heading(1, &decode(title));
        }
    }

    /// Whether preformatted text is program code or its output rather than part of the paper.
    pub(super) fn is_program(&self, start: &Start<'_>) -> bool {
        let content = self.tokens.rest().trim_start();
        let tag = content.as_bytes().get(..5).unwrap_or_default();
        tag.eq_ignore_ascii_case(b"<code")
            || start
                .raw("class")
                .is_some_and(|c| c.to_ascii_lowercase().contains("code"))
    }

    /// Begins a table; true if it is read as a table of its own.
    pub(super) fn open_table(&mut self, marks: &Marks) -> bool {
        self.context.head = false;
        self.context.foot = false;
        if self.context.joined || self.b.in_table() {
            self.text(" ");
            return false;
        }
        let caption = self.waiting_caption.take();
        self.close_block();
        let caption = caption.or(self.waiting_caption.take());
        if marks.layout || self.arranges_the_page() {
            self.context.layout = true;
            self.context.table = false;
            return false;
        }
        self.context.layout = false;
        self.context.table = true;
        let mut group = Group {
            first_table: self.b.table_count(),
            ..Group::default()
        };
        if let Some((block, label)) = caption
            && block + 1 == self.b.next_block()
            && label.is_some()
        {
            group.about.add(BlockKind::Caption, block);
            group.about.label = label;
        }
        self.groups.push(group);
        true
    }

    /// Whether the table that has just begun holds headings or another table.
    fn arranges_the_page(&self) -> bool {
        let rest = self.tokens.rest().as_bytes();
        for at in memchr::memchr_iter(b'<', rest) {
            let tag = &rest[at + 1..];
            let is = |name: &[u8]| {
                tag.len() > name.len()
                    && tag[..name.len()].eq_ignore_ascii_case(name)
                    && !tag[name.len()].is_ascii_alphanumeric()
            };
            if is(b"/table") {
                return false;
            }
            if is(b"table") || is(b"h1") || is(b"h2") || is(b"h3") {
                return true;
            }
        }
        false
    }

    pub(super) fn open_row(&mut self) {
        if self.context.joined {
            self.text(" ");
        } else if !self.context.table || self.groups.last().is_some_and(|g| g.ended) {
            self.close_block();
        } else if self.context.foot {
            self.row_due = true;
        } else {
            self.begin_table();
            self.b.row();
        }
    }

    /// The table begins with its first row, so that its caption stands before it.
    fn begin_table(&mut self) {
        if !self.b.in_table() {
            self.close_block();
            self.b.open_table();
        }
    }

    /// Begins a cell; true if it is a cell of the table's own.
    pub(super) fn open_cell(&mut self, start: &Start<'_>) -> bool {
        if self.context.joined {
            self.text(" ");
            return false;
        }
        if !self.context.table {
            self.close_block();
            return false;
        }
        let rowspan = start.number("rowspan").unwrap_or(1);
        let colspan = start.number("colspan").unwrap_or(1);
        let ended = self.groups.last().is_some_and(|g| g.ended);
        if ended || (self.context.foot && colspan > 1) {
            // Notes are often set as the last rows of the table.
            self.b.close_table();
            self.row_due = false;
            if let Some(group) = self.groups.last_mut() {
                group.ended = true;
            }
            self.context.kind = BlockKind::TableNote;
            self.context.table = false;
            self.close_block();
            return false;
        }
        if !self.b.in_table() || self.row_due {
            self.begin_table();
            self.b.row();
            self.row_due = false;
        }
        self.b.part(self.context.part.unwrap_or(self.parts.current()));
        let th = start.name.eq_ignore_ascii_case("th");
        self.b.cell(CellShape {
            rowspan,
            colspan,
            header: th || self.context.head,
        });
        self.context.joined = true;
        true
    }

    pub(super) fn close_table(&mut self) {
        self.flush_shift();
        self.b.close_table();
        self.describe_group();
    }

    /// Hands captions, notes and label over to the tables of a group.
    pub(super) fn describe_group(&mut self) {
        let Some(group) = self.groups.pop() else { return };
        let tables = group.first_table..self.b.table_count();
        // A figure with more tables than this is no figure, but a page without end tags.
        for table in tables.take(100) {
            self.b.describe(table, &group.about);
        }
    }
}

/// The label at the start of a table's caption: `Table 2`, `Tab. S1`, `Table A.3`.
fn table_label(caption: &str) -> Option<String> {
    let mut words = caption.split_whitespace();
    let (name, number) = (words.next()?, words.next()?);
    let known = [
        "table", "tab.", "tabelle", "tabla", "tableau", "tabela", "tabella", "tabel",
    ];
    let number = number.trim_end_matches([':', '.', '-', '–', '|', ',', ')']);
    let numbered = number.len() <= 6
        && (number.bytes().any(|b| b.is_ascii_digit())
            || number.bytes().all(|b| matches!(b, b'I' | b'V' | b'X')))
        && number
            .bytes()
            .all(|b| b.is_ascii_alphanumeric() || matches!(b, b'.' | b'-'));
    (numbered && !number.is_empty() && known.contains(&name.to_lowercase().as_str()))
        .then(|| format!("{name} {number}"))
}

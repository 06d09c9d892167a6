//! Blocks, tables, formulas and raised text of a JATS file: what the events lead to.

use super::*;
use crate::readers::{entities, headings};

impl<'a> Reading<'a> {
    /// Text at the place reached.
    pub(super) fn text(&mut self, raw: &str) {
        match self.sink {
            Sink::Block => {}
            Sink::Label => return self.label.push_str(raw),
            Sink::Tex => {
                if let Some(formula) = self.formulas.last_mut() {
                    formula.tex.push_str(raw);
                }
                return;
            }
            Sink::Textual => {
                if let Some(formula) = self.formulas.last_mut() {
                    formula.textual.push_str(raw);
                }
                return;
            }
        }
        if self.context.silent {
            return;
        }
        if !self.shifts.is_empty() {
            return self.shifted.push_str(raw);
        }
        if !self.b.is_open() {
            if is_blank(raw) {
                return;
            }
            self.open_block(self.context.kind);
        } else if self.context.joined
            && is_blank(raw)
            && self.frames.last().is_some_and(|f| f.tag == Tag::DefItem)
        {
            // The indentation between a term and its definition.
            return;
        }
        if self.space_due {
            self.space_due = false;
            if !raw.starts_with([',', '.', ';', ':', ')', ']']) {
                self.b.text(" ");
            }
        }
        let glued = self.in_citation && is_number_list(raw) && glued(self.last);
        if glued && !in_brackets(self.b.open_text()) {
            // Citation numbers without brackets are raised on the page.
            self.b.superscript(raw);
            return;
        }
        self.b.text(raw);
        if let Some(last) = raw.as_bytes().last() {
            self.last = *last;
        }
    }

    /// A character or entity reference.
    pub(super) fn entity(&mut self, name: &str) {
        if let Some(text) = entities::predefined(name) {
            return self.text(text);
        }
        if let Some(number) = name.strip_prefix('#') {
            if let Some(c) = entities::numbered(number) {
                self.text(c.encode_utf8(&mut [0; 4]));
            }
            return;
        }
        if let Some(text) = self.declared.text(name) {
            self.text(&text);
        } else if let Some(text) = entities::named(name) {
            self.text(text);
        } else {
            self.declared.unknown(name);
        }
    }

    /// Begins a block, or, where blocks are joined, a new stretch of the block around.
    pub(super) fn open_block(&mut self, kind: BlockKind) {
        self.flush_shift();
        if self.context.silent {
            return;
        }
        if self.context.joined {
            if self.b.is_open() {
                self.b.text(" ");
            }
        } else {
            self.close_block();
            if let Some(title) = self.due_heading.take() {
                self.b.part(self.context.part);
                self.b.heading(1, title);
            }
            self.b.part(self.context.part);
            self.b.open(kind);
        }
        self.last = b' ';
        self.space_due = false;
        self.write_label();
    }

    pub(super) fn close_block(&mut self) {
        self.flush_shift();
        if self.context.joined {
            if self.b.is_open() {
                self.b.text(" ");
            }
            return;
        }
        let block = self.b.next_block();
        let kind = self.b.open_kind();
        self.b.close();
        if self.b.next_block() > block
            && let (Some(wrap), Some(kind)) = (self.wraps.last_mut(), kind)
        {
            wrap.about.add(kind, block);
        }
    }

    /// A block begins inside whatever block is open: the text around it goes on in a new one.
    pub(super) fn split(&mut self) {
        self.close_block();
    }

    /// Reads what was put off. Only between blocks.
    pub(super) fn flush_put_off(&mut self) -> Result<(), Unreadable> {
        if self.put_off.is_empty() || self.b.is_open() || self.b.in_table() {
            return Ok(());
        }
        self.nesting += 1;
        let outside = self.context;
        let label = std::mem::take(&mut self.label);
        for put_off in std::mem::take(&mut self.put_off) {
            self.context = put_off.context;
            let tag = tags::tag(put_off.start.local_name().as_ref());
            self.open(tag, &put_off.start);
            self.run(put_off.content)?;
            self.end()?;
        }
        self.label = label;
        self.context = outside;
        self.nesting -= 1;
        Ok(())
    }

    /// Enters a division of the document; returns what [`Builder::return_to_section`] needs at
    /// its end, plus one.
    pub(super) fn enter_division(&mut self, part: Part) -> usize {
        self.close_block();
        self.context.part = part;
        self.context.silent = false;
        self.context.front = false;
        if !self.context.joined {
            self.context.kind = BlockKind::Paragraph;
        }
        self.label.clear();
        self.b.section().map_or(0, |s| s + 1)
    }

    pub(super) fn open_title(&mut self, parent: Tag) {
        let heading = matches!(
            parent,
            Tag::Section | Tag::Abstract | Tag::BackMatter | Tag::NoteGroup | Tag::Appendix | Tag::Back
        );
        if !heading {
            return self.open_block(self.context.kind);
        }
        if parent == Tag::Abstract {
            self.due_heading = None;
        }
        self.open_block(BlockKind::Heading(self.context.level.max(1)));
    }

    /// The end of a title. Some journals keep acknowledgements and the like among the sections of
    /// the body, where only their titles tell them apart.
    pub(super) fn close_title(&mut self) {
        let section = self.frames.last().is_some_and(|f| f.tag == Tag::Section);
        if section && self.context.level == 1 && self.context.part == Part::Body {
            self.flush_shift();
            let part = headings::known(self.b.open_text()).map(|known| known.part);
            if let Some(part @ (Part::Back | Part::References)) = part {
                self.context.part = part;
                self.b.part(part);
            }
        }
        self.close_block();
    }

    pub(super) fn close_label(&mut self) {
        self.sink = Sink::Block;
        let bare = self.label.trim();
        if bare.is_empty() || self.label_of == Tag::DisplayFormula || self.context.silent {
            self.label.clear();
            return;
        }
        if self.label_of == Tag::TableWrap
            && let Some(wrap) = self.wraps.last_mut()
            && wrap.about.label.is_none()
        {
            wrap.about.label = Some(bare.to_string());
        }
        if self.b.is_open() {
            // A label in running text, as of a reference or a cell.
            self.write_label();
        }
    }

    fn write_label(&mut self) {
        if self.label.is_empty() || self.sink == Sink::Label {
            return;
        }
        let label = std::mem::take(&mut self.label);
        let bare = label.trim();
        match self.label_of {
            Tag::Note | Tag::TableFoot => self.b.superscript(bare),
            _ => self.b.text(bare),
        }
        let stop = matches!(self.label_of, Tag::Float | Tag::TableWrap) && !bare.ends_with(['.', ':']);
        self.b.text(if stop { ". " } else { " " });
    }

    /// The label of a float without a caption.
    pub(super) fn write_lonely_label(&mut self) {
        if !self.label.is_empty() {
            self.open_block(BlockKind::Caption);
            self.close_block();
        }
    }

    pub(super) fn open_note(&mut self, e: &BytesStart<'_>) {
        let about_authors = attribute(e, "fn-type").is_some_and(|t| tags::is_about_authors(&t));
        if self.context.part == Part::Back {
            // The notes of an article often stand at its end: they belong to its text.
            if self.context.note_group && !about_authors {
                self.context.part = Part::Body;
            }
        } else if about_authors && self.context.part == Part::Body && self.wraps.is_empty() {
            self.context.part = Part::Back;
        }
        self.context.kind = if self.wraps.is_empty() {
            BlockKind::Footnote
        } else {
            BlockKind::TableNote
        };
    }

    /// Begins a table; returns 1 if it is a table of its own.
    pub(super) fn open_table(&mut self) -> usize {
        let second = self.formulas.last().is_some_and(|f| f.read) && !self.wraps.is_empty();
        if self.context.joined || self.b.in_table() {
            self.text(" ");
            return 0;
        }
        if second {
            // The same table once more in another form.
            self.context.silent = true;
            self.context.joined = true;
            return 0;
        }
        self.write_lonely_label();
        self.close_block();
        self.b.part(self.context.part);
        self.b.open_table();
        self.context.silent = true;
        self.context.kind = BlockKind::Cell;
        1
    }

    /// Begins a cell; returns 1 if it is a cell of the table's own.
    pub(super) fn open_cell(&mut self, tag: Tag, e: &BytesStart<'_>) -> usize {
        if self.context.joined || !self.b.in_table() {
            self.text(" ");
            return 0;
        }
        let span = |name| {
            attribute(e, name)
                .and_then(|v| v.trim().parse().ok())
                .unwrap_or(1)
        };
        self.b.cell(CellShape {
            rowspan: span("rowspan"),
            colspan: span("colspan"),
            header: tag == Tag::HeaderCell || self.context.head,
        });
        self.context.silent = false;
        self.context.joined = true;
        self.last = b' ';
        1
    }

    pub(super) fn describe_tables(&mut self) {
        let Some(wrap) = self.wraps.pop() else { return };
        let tables = wrap.first_table..self.b.table_count();
        if tables.is_empty() && wrap.picture {
            const NAMED_AT_MOST: usize = 12;
            self.table_picture_count += 1;
            let name = wrap.about.label.as_deref().unwrap_or("a table");
            match self.table_pictures.len() {
                NAMED_AT_MOST => self.table_pictures.push("…".into()),
                few if few < NAMED_AT_MOST => self.table_pictures.push(name.into()),
                _ => {}
            }
        }
        for table in tables {
            self.b.describe(table, &wrap.about);
        }
    }

    pub(super) fn open_shift(&mut self, shift: Shift) {
        self.flush_shift();
        self.shifts.push(shift);
    }

    pub(super) fn close_shift(&mut self) {
        self.flush_shift();
        self.shifts.pop();
    }

    /// Writes the raised or lowered text collected so far.
    pub(super) fn flush_shift(&mut self) {
        if self.shifted.is_empty() {
            return;
        }
        let Some(shift) = self.shifts.last().copied() else {
            self.shifted.clear();
            return;
        };
        let mut shifted = std::mem::take(&mut self.shifted);
        if !self.context.silent && (self.b.is_open() || !is_blank(&shifted)) {
            if std::mem::take(&mut self.space_due) {
                self.b.text(" ");
            }
            if !self.b.is_open() {
                // The block must not find the text that it is opened for.
                self.open_block(self.context.kind);
            }
            match shift {
                Shift::Raised => self.b.superscript(&shifted),
                Shift::Lowered => self.b.subscript(&shifted),
            }
            self.last = shifted.bytes().last().unwrap_or(b' ');
        }
        shifted.clear();
        self.shifted = shifted;
    }

    /// Begins a cross-reference: 1 for a raised one, 2 for a citation.
    pub(super) fn open_xref(&mut self, e: &BytesStart<'_>) -> usize {
        match attribute(e, "ref-type").as_deref() {
            Some("fn" | "table-fn") if self.shifts.is_empty() => {
                self.open_shift(Shift::Raised);
                1
            }
            Some("bibr") => {
                self.in_citation = true;
                2
            }
            _ => 0,
        }
    }

    /// Reads a MathML formula up to its end.
    pub(super) fn math(&mut self, reader: &mut Reader<&'a [u8]>) -> Result<(), Trouble> {
        let mut math = Math::new();
        let mut depth = 0u32;
        loop {
            match reader.read_event()? {
                Event::Start(e) => {
                    depth += 1;
                    math.start(e.local_name().as_ref(), |name| attribute(&e, name));
                }
                Event::Empty(e) => {
                    math.start(e.local_name().as_ref(), |name| attribute(&e, name));
                    math.end();
                }
                Event::End(_) if depth == 0 => break,
                Event::End(_) => {
                    depth -= 1;
                    math.end();
                }
                Event::Text(t) => math.text(&t),
                Event::CData(t) => math.text(&t),
                Event::GeneralRef(name) => {
                    // Entities resolve to text; it is caught on its way and given to the formula.
                    let text = self.entity_text(&name);
                    math.text(&text);
                }
                Event::Eof => {
                    return Err(Trouble::Xml(quick_xml::Error::IllFormed(
                        quick_xml::errors::IllFormedError::MissingEndTag("math".into()),
                    )));
                }
                _ => {}
            }
        }
        let again = self.formulas.last().is_some_and(|f| f.read);
        if math.is_blank() || self.context.silent || again {
            return Ok(());
        }
        if let Some(formula) = self.formulas.last_mut() {
            formula.read = true;
        }
        self.flush_shift();
        if !self.b.is_open() {
            self.open_block(self.context.kind);
        }
        if std::mem::take(&mut self.space_due) {
            self.b.text(" ");
        }
        math.finish(&mut self.b);
        self.last = b'x';
        Ok(())
    }

    fn entity_text(&mut self, name: &str) -> String {
        let sink = std::mem::replace(&mut self.sink, Sink::Label);
        let label = std::mem::take(&mut self.label);
        self.entity(name);
        let text = std::mem::replace(&mut self.label, label);
        self.sink = sink;
        text
    }

    /// The end of a formula: what has not been read as MathML is read from its TeX source or its
    /// description.
    pub(super) fn close_formula(&mut self) {
        self.flush_shift();
        let Some(formula) = self.formulas.pop() else {
            return;
        };
        let mut read = formula.read;
        if !read && !self.context.silent {
            let tex = tex_body(&formula.tex);
            if !tex.is_empty() || !is_blank(&formula.textual) {
                if !self.b.is_open() {
                    self.open_block(self.context.kind);
                }
                if tex.is_empty() {
                    self.b.text(&formula.textual);
                } else {
                    crate::readers::tex_math::push_math(&mut self.b, tex);
                }
                self.last = b'x';
                read = true;
            }
        }
        match self.formulas.last_mut() {
            Some(outer) => {
                outer.read |= read;
                outer.picture |= formula.picture;
            }
            None if formula.picture && !read && self.wraps.last().is_none() => self.formula_pictures += 1,
            None => {}
        }
    }
}

/// The value of an attribute, with references to the characters that XML itself names resolved.
pub(super) fn attribute(e: &BytesStart<'_>, name: &str) -> Option<String> {
    for attribute in e.attributes().with_checks(false).flatten() {
        if attribute.key.local_name().as_ref() == name {
            let raw: &str = &attribute.value;
            return Some(match quick_xml::escape::unescape(raw) {
                Ok(value) => value.into_owned(),
                Err(_) => raw.to_string(),
            });
        }
    }
    None
}

pub(super) fn local_is(e: &BytesStart<'_>, name: &str) -> bool {
    e.local_name().as_ref() == name
}

fn is_blank(text: &str) -> bool {
    text.bytes().all(|b| b.is_ascii_whitespace())
}

/// `12`, `3,4`, `5–8`.
fn is_number_list(text: &str) -> bool {
    text.starts_with(|c: char| c.is_ascii_digit())
        && text.len() < 16
        && text
            .chars()
            .all(|c| c.is_ascii_digit() || matches!(c, ',' | '-' | '–'))
}

/// Whether a number right behind this byte would be taken for a part of what stands before it.
fn glued(last: u8) -> bool {
    last.is_ascii_alphanumeric() || matches!(last, b'.' | b',' | b')' | b'%' | b'"')
}

/// Whether a bracket is still open a few words before the end of a text.
fn in_brackets(text: &str) -> bool {
    const WITHIN: usize = 80;
    let tail = &text.as_bytes()[text.len().saturating_sub(WITHIN)..];
    let last = |marks: [u8; 2]| tail.iter().rposition(|b| marks.contains(b));
    last([b'[', b'(']) > last([b']', b')'])
}

/// The formula in a TeX document that holds nothing else.
fn tex_body(tex: &str) -> &str {
    let body = match tex.split_once("\\begin{document}") {
        Some((_, body)) => body.split("\\end{document}").next().unwrap_or(body),
        None => tex,
    };
    let body = body.trim();
    for (open, close) in [("$$", "$$"), ("$", "$"), ("\\(", "\\)"), ("\\[", "\\]")] {
        if let Some(inner) = body.strip_prefix(open).and_then(|b| b.strip_suffix(close)) {
            return inner.trim();
        }
    }
    body
}

//! *Blocks* of Markdown: paragraphs, headings, lists, quotations, tables, notes, and what is no
//! text at all (code, comments, divisions).

use super::Reader;
use super::inline::{Note, Source};
use super::lines::{
    atx, definition, fence, is_code, is_rule, label, list_marker, opens_formula, strip_marks, without_prefix,
};
use super::links::attributes;
use super::tables::{self, Found};
use crate::manuscript::{BlockKind, CellShape, Part};

impl Reader<'_> {
    /// Reads the next block, or passes over what is none.
    pub(super) fn next_block(&mut self) {
        let line = self.lines[self.at];
        let bare = line.trim();
        if bare.is_empty() {
            self.at += 1;
            return;
        }
        if let Some((mark, run)) = fence(line) {
            self.code(mark, run);
            return;
        }
        if bare.starts_with(":::") {
            self.division(bare);
            return;
        }
        if bare.starts_with("<!--") {
            self.comment();
            return;
        }
        if let Some((level, title)) = atx(line) {
            let source = Source::one(title, self.number());
            self.heading_text(level, &source, None);
            self.at += 1;
            self.after_text();
            return;
        }
        if let Some(found) = tables::table(&self.lines[self.at..]) {
            self.table(found);
            return;
        }
        if is_rule(line) {
            self.at += 1;
            self.after_text();
            return;
        }
        if let Some((name, rest)) = definition(line) {
            if name.starts_with('^') {
                // Usually it was read where the text calls for it.
                match self.read_notes.get(&self.at) {
                    Some(end) => self.at = *end,
                    None => {
                        let notes = self.note(line.len() - rest.len());
                        self.notes(notes);
                    }
                }
            } else {
                self.at += 1;
            }
            return;
        }
        if self.caption_line(bare) {
            return;
        }
        if bare.starts_with("\\begin{") {
            self.latex(bare);
            return;
        }
        if bare.starts_with('>') {
            self.quotation();
            return;
        }
        let indent = line.len() - line.trim_start_matches(' ').len();
        let deep = indent >= 4 || line.starts_with('\t');
        if (!deep || self.in_list)
            && let Some(skip) = list_marker(line)
        {
            self.item(skip);
            return;
        }
        if deep && !self.in_list && is_code(bare) {
            while self.at < self.lines.len()
                && (self.lines[self.at].starts_with("    ") || self.lines[self.at].starts_with('\t'))
            {
                self.at += 1;
            }
            return;
        }
        if indent < 2 && !line.starts_with('\t') {
            self.in_list = false;
        }
        self.paragraph();
    }

    /// The number of the line that is next.
    fn number(&self) -> u32 {
        self.at as u32 + 1
    }

    /// Whatever is read now does not belong to the list, quotation or table before.
    fn after_text(&mut self) {
        self.in_list = false;
        self.caption = None;
        self.table = None;
    }

    fn code(&mut self, mark: u8, run: usize) {
        self.at += 1;
        while self.at < self.lines.len() {
            let bare = self.lines[self.at].trim();
            self.at += 1;
            if bare.len() >= run && bare.bytes().all(|b| b == mark) {
                break;
            }
        }
    }

    /// `::: {.class}` opens a division, `:::` closes it.
    fn division(&mut self, bare: &str) {
        self.at += 1;
        self.b.close();
        let about = bare.trim_matches(':').trim();
        if about.is_empty() {
            if let Some(Some(part)) = self.divisions.pop() {
                self.parts.enter(part);
            }
            return;
        }
        let part = if about.contains("#refs") || about.contains("references") {
            Some(Part::References)
        } else if about.contains("abstract") {
            Some(Part::Abstract)
        } else {
            None
        };
        // What follows the reference list or the abstract is body again.
        self.divisions.push(part.map(|_| Part::Body));
        if let Some(part) = part {
            self.parts.enter(part);
        }
    }

    fn comment(&mut self) {
        while self.at < self.lines.len() {
            let line = self.lines[self.at];
            match line.find("-->") {
                Some(end) if line[end + 3..].trim().is_empty() => {
                    self.at += 1;
                    return;
                }
                Some(_) => {
                    // Text behind the comment on its last line.
                    self.paragraph();
                    return;
                }
                None => self.at += 1,
            }
        }
    }

    /// Takes lines up to the end of the paragraph. The first line is taken from byte `skip` on.
    fn gather(&mut self, skip: usize, item: bool) -> Source {
        let mut source = Source::default();
        let first = self.lines[self.at];
        source.push(first[skip..].trim(), self.number());
        let mut formula = opens_formula(first, false);
        self.at += 1;
        while self.at < self.lines.len() {
            let line = self.lines[self.at];
            let bare = line.trim();
            if bare.is_empty() || (!formula && self.interrupts(line, bare, &source, item)) {
                break;
            }
            formula = opens_formula(line, formula);
            source.push(bare, self.number());
            self.at += 1;
        }
        source
    }

    /// Whether a line begins something else although no empty line stands before it.
    fn interrupts(&self, line: &str, bare: &str, before: &Source, item: bool) -> bool {
        if fence(line).is_some() || bare.starts_with(":::") || atx(line).is_some() || is_rule(line) {
            return true;
        }
        if (bare.starts_with("<!--") && !bare.contains("-->"))
            || definition(line).is_some_and(|(n, _)| n.starts_with('^'))
        {
            return true;
        }
        if bare.starts_with('+') || bare.contains('|') {
            return tables::table(&self.lines[self.at..]).is_some();
        }
        if list_marker(line).is_some() {
            let introduced = before.text.ends_with(':') && !bare.starts_with(|c: char| c.is_alphabetic());
            return item || introduced;
        }
        false
    }

    fn paragraph(&mut self) {
        let line = self.lines[self.at];
        // `Title` over `=====` or `-----`.
        if let Some(below) = self.lines.get(self.at + 1).map(|l| l.trim())
            && below.len() >= 2
            && (below.bytes().all(|b| b == b'=') || below.bytes().all(|b| b == b'-'))
            && !line.trim().starts_with('|')
        {
            let level = if below.starts_with('=') { 1 } else { 2 };
            let source = Source::one(line.trim(), self.number());
            self.heading_text(level, &source, None);
            self.at += 2;
            self.after_text();
            return;
        }
        let line_block = line.trim_start().starts_with("| ");
        let start = self.at;
        let source = self.gather(0, false);
        let source = if line_block {
            without_prefix(&source, "|")
        } else {
            source
        };
        let text = source.text.trim_start_matches(['*', '_', ' ']);
        let image = self.lone_image(&source);
        let is_note = self.table.is_some() && text.starts_with("Note");
        let kind = if let Some(alt) = &image {
            let alt = alt.clone();
            self.caption = None;
            self.block(BlockKind::Caption, &alt);
            self.table = None;
            return;
        } else if is_note {
            BlockKind::TableNote
        } else if label(&source.text).is_some() && self.before_table() {
            BlockKind::Caption
        } else {
            BlockKind::Paragraph
        };
        let index = self.b.next_block();
        self.block(kind, &source);
        debug_assert!(self.at > start);
        match (kind, self.table) {
            (BlockKind::TableNote, Some(table)) => self.b.describe_table(table, None, &[], &[index]),
            (BlockKind::Caption, _) => {
                self.caption = Some((index, label(&source.text)));
                self.table = None;
            }
            _ => {
                self.caption = None;
                self.table = None;
            }
        }
    }

    /// Whether the next block is a table.
    fn before_table(&self) -> bool {
        let next = self.lines[self.at..]
            .iter()
            .take(4)
            .position(|l| !l.trim().is_empty());
        next.is_some_and(|n| tables::table(&self.lines[self.at + n..]).is_some())
    }

    /// The words of an image that is a paragraph of its own: a figure's caption.
    fn lone_image(&self, source: &Source) -> Option<Source> {
        let inner = source.text.strip_prefix("![")?;
        let close = inner.rfind("](")?;
        let end = close + inner[close..].find(')')? + 1;
        let rest = &inner[end..];
        (rest.is_empty() || attributes(rest) == Some(rest.len())).then(|| Source {
            text: inner[..close].to_string(),
            lines: source.lines.clone(),
        })
    }

    fn item(&mut self, skip: usize) {
        self.after_text();
        self.in_list = true;
        let mut source = self.gather(skip, true);
        for done in ["[ ] ", "[x] ", "[X] "] {
            if let Some(rest) = source.text.strip_prefix(done) {
                source.text = rest.to_string();
            }
        }
        self.block(BlockKind::ListItem, &source);
    }

    fn quotation(&mut self) {
        self.after_text();
        let mut source = Source::default();
        while self.at < self.lines.len() {
            let bare = self.lines[self.at].trim();
            let (quoted, text) = match bare.strip_prefix('>') {
                Some(rest) => (true, rest.trim_start_matches(['>', ' '])),
                None => (false, bare),
            };
            if bare.is_empty() || (!quoted && self.interrupts(self.lines[self.at], bare, &source, false)) {
                break;
            }
            if text.is_empty() {
                if !source.is_empty() {
                    self.block(BlockKind::Quote, &source);
                    source = Source::default();
                }
            } else {
                source.push(text, self.number());
            }
            self.at += 1;
        }
        if !source.is_empty() {
            self.block(BlockKind::Quote, &source);
        }
    }

    /// The note that the text calls for by name, unless it was read before.
    pub(super) fn defined_note(&mut self, name: &str) -> Vec<Note> {
        let Some(&start) = self.defined.get(name) else {
            return Vec::new();
        };
        if self.read_notes.contains_key(&start) {
            return Vec::new();
        }
        let line = self.lines[start];
        let skip = definition(line).map_or(0, |(_, rest)| line.len() - rest.len());
        let back = std::mem::replace(&mut self.at, start);
        let notes = self.note(skip);
        self.at = back;
        notes
    }

    /// A note defined by itself: `[^1]: text`, with indented text below.
    fn note(&mut self, skip: usize) -> Vec<Note> {
        let start = self.at;
        let source = self.gather(skip, false);
        let mut notes = self.single_block(BlockKind::Footnote, &source);
        while self.at + 1 < self.lines.len()
            && self.lines[self.at].trim().is_empty()
            && (self.lines[self.at + 1].starts_with("    ") || self.lines[self.at + 1].starts_with('\t'))
            && !self.lines[self.at + 1].trim().is_empty()
        {
            self.at += 1;
            if let Some((mark, run)) = fence(self.lines[self.at]) {
                self.code(mark, run);
                continue;
            }
            let source = self.gather(0, false);
            notes.extend(self.single_block(BlockKind::Footnote, &source));
        }
        self.read_notes.insert(start, self.at);
        notes
    }

    /// `: caption`, `Table: caption`, before or after a table.
    fn caption_line(&mut self, bare: &str) -> bool {
        let line = self.lines[self.at];
        let marker = ["Table:", "table:", ":"]
            .iter()
            .find(|m| bare.strip_prefix(**m).is_some_and(|rest| rest.starts_with(' ')));
        let Some(marker) = marker else { return false };
        let skip = line.len() - line.trim_start().len() + marker.len();
        let index = self.b.next_block();
        let start = self.at;
        let mut source = self.gather(skip, false);
        strip_marks(&mut source.text);
        let of = self.table;
        if of.is_none() && !self.before_table() {
            // The text of a definition.
            self.at = start;
            let source = self.gather(if *marker == ":" { skip } else { 0 }, false);
            self.block(BlockKind::Paragraph, &source);
            return true;
        }
        self.block(BlockKind::Caption, &source);
        let label = label(&source.text);
        match of {
            Some(table) => self.b.describe_table(table, label.as_deref(), &[index], &[]),
            None => self.caption = Some((index, label)),
        }
        true
    }

    fn table(&mut self, found: Found) {
        let first = self.number();
        self.b.close();
        if self.parts.current() == Part::References {
            self.parts.enter(Part::Body);
        }
        let part = self.parts.current();
        self.b.part(part);
        let index = self.b.table_count();
        self.b.open_table();
        let mut notes = Vec::new();
        for row in &found.rows {
            self.b.row();
            for (text, span) in &row.cells {
                let line = first + row.line as u32;
                self.b.line(line);
                self.b.cell(CellShape {
                    rowspan: 1,
                    colspan: *span,
                    header: row.header,
                });
                let mut source = Source::default();
                for (i, text) in text.split('\n').enumerate() {
                    source.push(text, line + i as u32);
                }
                notes.extend(super::inline::push(&mut self.b, &source, &self.references));
                self.b.close();
            }
        }
        self.b.close_table();
        self.at += found.lines;
        if let Some((caption, label)) = self.caption.take() {
            self.b.describe_table(index, label.as_deref(), &[caption], &[]);
        }
        self.notes(notes);
        self.in_list = false;
        self.table = Some(index);
    }

    /// A LaTeX environment between paragraphs, read as LaTeX.
    fn latex(&mut self, bare: &str) {
        let inner = &bare["\\begin{".len()..];
        let name = inner[..inner.find('}').unwrap_or(inner.len())].to_string();
        let close = format!("\\end{{{name}}}");
        let first = self.number();
        let mut text = String::new();
        let mut ended = false;
        let start = self.at;
        while self.at < self.lines.len() && self.at < start + 3000 {
            let line = self.lines[self.at];
            self.at += 1;
            text.push_str(line);
            text.push('\n');
            if line.contains(&close) {
                ended = true;
                break;
            }
        }
        if !ended {
            self.at = start;
            self.paragraph();
            return;
        }
        self.after_text();
        let part = self.parts.current();
        self.b.part(part);
        self.b.close();
        crate::readers::latex::read_within(&mut self.b, &text, first);
    }
}

//! *Walking* the flat source from end to end. Groups and formatting need no structure of their own:
//! braces and the names of formatting macros are passed over and what they contain is read as it
//! comes. Only what leaves the line (footnotes, captions, titles) is cut out and walked by itself.

use super::accents::accent;
use super::arguments::{self, Braces, bracket_end, name_at, skip_space};
use super::expand::{Flat, UNKNOWN};
use super::tables::Tabular;
use crate::manuscript::{BlockKind, Builder, Description, Format, Part};
use crate::readers::headings::Parts;
use crate::readers::tex_math::push_math;
use crate::readers::tex_symbols::symbol;
use std::collections::{HashSet, VecDeque};

/// Pieces within pieces (a footnote in a caption …) walked by themselves, at most.
const DEEPEST: usize = 16;
/// A formula ends within this many bytes.
const LONGEST_FORMULA: usize = 20_000;

/// Reads flat source into the builder, in the part that it is in.
pub(super) fn walk_into(b: &mut Builder, flat: &Flat) {
    let mut parts = Parts::new();
    parts.enter(b.current_part());
    let mut walker = Walker {
        text: &flat.text,
        lines: &flat.lines,
        braces: Braces::of(&flat.text),
        // Lent for the walk and given back at its end.
        b: std::mem::replace(b, Builder::new(Format::Latex)),
        parts,
        footnotes: VecDeque::new(),
        kinds: Vec::new(),
        floats: Vec::new(),
        tabular: None,
        tables: 0,
        figures: 0,
        within: 0,
        missing: HashSet::new(),
        german: flat.text[..flat.start].contains("german"),
        inline: false,
    };
    walker.preamble(flat.start);
    walker.range(flat.start, flat.text.len());
    walker.end_tabular(flat.text.len());
    walker.end_paragraph();
    for remark in &flat.remarks {
        walker.b.remark(remark.clone());
    }
    *b = walker.b;
}

/// A float or what else holds tables with their captions and notes.
pub(super) struct Float {
    pub(super) is_table: bool,
    /// Opened by a `threeparttable` outside any other float.
    pub(super) own: bool,
    /// Made for a tabular that stands in no float.
    pub(super) bare: bool,
    pub(super) about: Description,
    pub(super) tables: Vec<usize>,
}

pub(super) struct Walker<'a> {
    pub(super) text: &'a str,
    lines: &'a [(usize, u32)],
    pub(super) braces: Braces,
    pub(super) b: Builder,
    pub(super) parts: Parts,
    /// Footnotes of the paragraph, as ranges of the source.
    footnotes: VecDeque<(usize, usize)>,
    /// What blocks are called in the environments that are open, e.g. quotes.
    pub(super) kinds: Vec<(String, BlockKind)>,
    pub(super) floats: Vec<Float>,
    pub(super) tabular: Option<Tabular>,
    pub(super) tables: u32,
    pub(super) figures: u32,
    within: usize,
    /// Environment ends that do not come any more, so that they are not looked for again.
    missing: HashSet<String>,
    pub(super) german: bool,
    /// The text being walked stays in the block that is open.
    pub(super) inline: bool,
}

impl<'a> Walker<'a> {
    /// Title and abstract may stand before the document begins.
    fn preamble(&mut self, end: usize) {
        for name in ["\\title", "\\abstract"] {
            let mut from = 0;
            while let Some(n) = memchr::memmem::find(&self.text.as_bytes()[from..end], name.as_bytes()) {
                let at = from + n;
                from = at + name.len();
                if name_at(self.text, at) == &name[1..] {
                    self.control(at, end);
                    self.end_paragraph();
                    break;
                }
            }
        }
    }

    fn line_of(&self, at: usize) -> u32 {
        let k = self.lines.partition_point(|(start, _)| *start <= at);
        self.lines[k.saturating_sub(1)].1
    }

    /// Makes sure that there is a block for text written at `at`.
    pub(super) fn ensure(&mut self, at: usize) {
        if let Some(tabular) = &mut self.tabular {
            if !tabular.in_cell() {
                tabular.ensure_cell(&mut self.b, at);
                let line = self.line_of(at);
                self.b.line(line);
            }
        } else if !self.b.is_open() {
            let kind = self.kind();
            self.open(kind, at);
        }
    }

    fn kind(&self) -> BlockKind {
        if let Some((_, kind)) = self.kinds.last() {
            return *kind;
        }
        match self.floats.last() {
            Some(float) if float.is_table && !float.tables.is_empty() => BlockKind::TableNote,
            Some(float) if !float.about.captions.is_empty() => BlockKind::TableNote,
            _ => BlockKind::Paragraph,
        }
    }

    pub(super) fn open(&mut self, kind: BlockKind, at: usize) {
        self.end_block();
        let end = self.text.floor_char_boundary((at + 160).min(self.text.len()));
        let start: String = self.text[at..end]
            .replace(['{', '}'], "")
            .replace("\\textbf", "")
            .replace("\\textit", "");
        let part = self.parts.paragraph(&start);
        self.b.part(part);
        let line = self.line_of(at);
        self.b.line(line);
        self.b.open(kind);
        if kind == BlockKind::TableNote
            && let Some(float) = self.floats.last_mut()
        {
            float.about.add(kind, self.b.next_block());
        }
    }

    /// Closes the open block, unless it is a cell or the text stays in one block.
    pub(super) fn end_block(&mut self) {
        if self.tabular.is_none() && !self.inline {
            self.b.close();
        }
    }

    /// Closes the open block and lets the footnotes of the paragraph follow.
    pub(super) fn end_paragraph(&mut self) {
        if self.inline || self.tabular.is_some() {
            self.b.text(" ");
            return;
        }
        self.b.close();
        // Footnotes of footnotes join the end of the queue.
        while let Some((from, to)) = self.footnotes.pop_front() {
            let line = self.line_of(from);
            self.b.part(self.parts.current());
            self.b.line(line);
            self.b.open(BlockKind::Footnote);
            self.inside(from, to);
            self.b.close();
        }
    }

    /// Walks a range whose text goes into the block that is open.
    pub(super) fn inside(&mut self, from: usize, to: usize) {
        if self.within >= DEEPEST {
            return;
        }
        self.within += 1;
        let inline = std::mem::replace(&mut self.inline, true);
        self.range(from, to);
        self.inline = inline;
        self.within -= 1;
    }

    /// The text of a range by itself.
    pub(super) fn text_of(&mut self, from: usize, to: usize) -> String {
        let b = std::mem::replace(&mut self.b, Builder::new(Format::Latex));
        let tabular = self.tabular.take();
        self.b.open(BlockKind::Paragraph);
        self.inside(from, to);
        self.tabular = tabular;
        let alone = std::mem::replace(&mut self.b, b).finish();
        alone.text.trim_end().to_string()
    }

    pub(super) fn push(&mut self, at: usize, text: &str) {
        if !text.trim().is_empty() {
            self.ensure(at);
        }
        self.b.text(text);
    }

    pub(super) fn range(&mut self, from: usize, to: usize) {
        let bytes = self.text.as_bytes();
        let mut at = from;
        while at < to {
            match bytes[at] {
                b'\\' => at = self.control(at, to).max(at + 1),
                b'\n' => at = self.newline(at, to),
                b'$' => at = self.dollar(at, to),
                b'{' | b'}' | b'#' => at += 1,
                b'&' => {
                    match &mut self.tabular {
                        Some(tabular) if tabular.nested == 0 => tabular.next_cell(&mut self.b, at),
                        _ => self.b.text(" "),
                    }
                    at += 1;
                }
                b'~' => {
                    self.b.text(" ");
                    at += 1;
                }
                b'-' | b'`' | b'\'' | b'"' => at = self.ligature(at, to),
                _ => {
                    let plain = bytes[at..to]
                        .iter()
                        .position(|b| {
                            matches!(
                                b,
                                b'\\'
                                    | b'\n'
                                    | b'$'
                                    | b'{'
                                    | b'}'
                                    | b'#'
                                    | b'&'
                                    | b'~'
                                    | b'-'
                                    | b'`'
                                    | b'\''
                                    | b'"'
                            )
                        })
                        .map_or(to, |n| at + n);
                    self.push(at, &self.text[at..plain]);
                    at = plain;
                }
            }
        }
    }

    /// One line end is a space, two end the paragraph.
    fn newline(&mut self, at: usize, to: usize) -> usize {
        let run = self.text.as_bytes()[at..to]
            .iter()
            .take_while(|b| b.is_ascii_whitespace())
            .count();
        let end = at + run;
        if memchr::memchr(b'\n', &self.text.as_bytes()[at + 1..end]).is_some() {
            self.end_paragraph();
        } else {
            self.b.text(" ");
        }
        if self.b.is_open() {
            let line = self.line_of(end);
            self.b.line(line);
        }
        end
    }

    fn dollar(&mut self, at: usize, to: usize) -> usize {
        let display = self.text[at..to].starts_with("$$");
        let start = at + if display { 2 } else { 1 };
        let bytes = self.text.as_bytes();
        let limit = to.min(start + LONGEST_FORMULA);
        let mut i = start;
        let mut depth = 0;
        while i < limit {
            match bytes[i] {
                b'\\' => i += 1,
                b'{' => depth += 1,
                b'}' => depth -= 1,
                b'$' if depth <= 0 => {
                    self.math(start, i);
                    let both = display && bytes.get(i + 1) == Some(&b'$');
                    return i + if both { 2 } else { 1 };
                }
                b'\n'
                    if bytes[i + 1..limit]
                        .iter()
                        .find(|b| !matches!(b, b' ' | b'\t' | b'\r'))
                        == Some(&b'\n') =>
                {
                    break;
                }
                _ => {}
            }
            i += 1;
        }
        // No partner in this paragraph.
        start
    }

    pub(super) fn math(&mut self, from: usize, to: usize) {
        let tex = &self.text[from..to];
        if tex.trim().is_empty() {
            self.b.text(" ");
            return;
        }
        let start = from + (tex.len() - tex.trim_start().len());
        self.ensure(start);
        let several = memchr::memchr(b'\n', tex.as_bytes()).is_some();
        if several {
            let line = self.line_of(start);
            self.b.line(line);
        }
        push_math(&mut self.b, tex);
        if several {
            let line = self.line_of(to);
            self.b.line(line);
        }
    }

    /// The position behind the optional argument at `at`, if there is one.
    pub(super) fn skip_option(&self, at: usize) -> usize {
        let open = skip_space(self.text, at);
        if self.text[open..].starts_with('[')
            && let Some(end) = bracket_end(self.text, &self.braces, open)
        {
            end + 1
        } else {
            at
        }
    }

    /// The range inside the braces at or after `at`, and the position behind them.
    pub(super) fn group(&self, at: usize) -> Option<(usize, usize, usize)> {
        let open = skip_space(self.text, at);
        if !self.text[open..].starts_with('{') {
            return None;
        }
        let close = self.braces.close(open)?;
        Some((open + 1, close, close + 1))
    }

    /// Passes over settings: brackets and `count` groups.
    pub(super) fn skip(&self, at: usize, count: usize) -> usize {
        let mut at = self.skip_option(at);
        for _ in 0..count {
            match self.group(at) {
                Some((_, _, end)) => at = end,
                None => break,
            }
            at = self.skip_option(at);
        }
        at
    }

    /// Looks for `needle` from `at` to `to`, but not too far; what does not come any more is not
    /// looked for again.
    pub(super) fn find(&mut self, needle: &str, at: usize, to: usize, furthest: usize) -> Option<usize> {
        if self.missing.contains(needle) {
            return None;
        }
        let end = to.min(at + furthest);
        let found = memchr::memmem::find(&self.text.as_bytes()[at..end], needle.as_bytes());
        if found.is_none() && end == self.text.len() {
            self.missing.insert(needle.to_string());
        }
        found.map(|n| at + n)
    }

    /// Reads the macro at `at` and returns the position behind it.
    fn control(&mut self, at: usize, to: usize) -> usize {
        let name: &'a str = name_at(self.text, at);
        let mut after = at + 1 + name.len();
        if after > to {
            return to;
        }
        if let Some((letter, length)) = accent(name, &self.text[after..to]) {
            self.push(at, &letter);
            return after + length;
        }
        let word = name.starts_with(|c: char| c.is_ascii_alphabetic());
        if word && self.text[after..to].starts_with('*') {
            after += 1;
        }
        if !word {
            return self.control_symbol(at, name, after, to);
        }
        if let Some(end) = self.structure(at, name, after, to) {
            return end.clamp(after, to);
        }
        if let Some(text) = symbol(name) {
            self.push(at, text);
            return self.after_word(after, to);
        }
        if arguments::is_citation(name) {
            let end = self.skip(after, 1);
            return end.min(to);
        }
        if arguments::is_reference(name) {
            self.push(at, UNKNOWN);
            return self.skip(after, 1).min(to);
        }
        match arguments::settings(name) {
            0 => {}
            count => {
                if name.ends_with("space") || name == "url" {
                    self.b.text(" ");
                }
                return self.skip(after, count).min(to);
            }
        }
        // An unknown macro: its brackets are settings if an argument in braces follows them.
        let option = self.skip_option(after);
        if option > after && self.text[option..to].starts_with('{') {
            return option;
        }
        self.after_word(after, to)
    }

    /// TeX takes the space behind a name for its end.
    fn after_word(&self, after: usize, to: usize) -> usize {
        let rest = &self.text[after..to];
        if let Some(rest) = rest.strip_prefix("{}") {
            return to - rest.len();
        }
        to - rest.trim_start_matches([' ', '\t']).len()
    }

    fn control_symbol(&mut self, at: usize, name: &str, after: usize, to: usize) -> usize {
        match name {
            "\\" => {
                let after = after + usize::from(self.text[after..to].starts_with('*'));
                let after = self.skip_length(after);
                self.line_end(at);
                after.min(to)
            }
            "(" | "[" => {
                let close = if name == "(" { "\\)" } else { "\\]" };
                match self.find(close, after, to, LONGEST_FORMULA) {
                    Some(end) => {
                        if name == "[" {
                            self.b.text(" ");
                        }
                        self.math(after, end);
                        if name == "[" {
                            self.b.text(" ");
                        }
                        end + 2
                    }
                    _ => after,
                }
            }
            "%" | "$" | "&" | "#" | "_" | "{" | "}" => {
                self.push(at, name);
                after
            }
            " " | "\n" | "," | ";" | ":" | "~" | "\t" => {
                self.b.text(" ");
                after
            }
            _ => after,
        }
    }

    /// `\\` ends a row in tables and is a space elsewhere.
    pub(super) fn line_end(&mut self, at: usize) {
        match &mut self.tabular {
            Some(tabular) if tabular.nested == 0 => tabular.end_row(&mut self.b, at),
            _ => self.b.text(" "),
        }
    }

    /// `[2pt]` behind `\\`: a length, not a confidence interval that begins the next row.
    fn skip_length(&self, at: usize) -> usize {
        let open = skip_space(self.text, at);
        let Some(inner) = self.text[open..].strip_prefix('[') else {
            return at;
        };
        let Some(end) = inner.bytes().take(30).position(|b| b == b']') else {
            return at;
        };
        let length = inner[..end].trim().trim_start_matches('-');
        let unit = length
            .trim_start_matches(|c: char| c.is_ascii_digit() || c == '.')
            .trim_start();
        let is_length = ["pt", "ex", "em", "mm", "cm", "in", "bp", "sp", "pc", "px", "\\"]
            .iter()
            .any(|u| unit.starts_with(u));
        if is_length { open + 1 + end + 1 } else { at }
    }

    /// A footnote, read after the paragraph it belongs to.
    pub(super) fn footnote(&mut self, after: usize) -> usize {
        let after = self.skip_option(after);
        match self.group(after) {
            Some((from, to, end)) => {
                self.footnotes.push_back((from, to));
                end
            }
            None => after,
        }
    }

    /// A heading; its footnotes follow it.
    pub(super) fn title(&mut self, level: u8, part: Option<Part>, after: usize) -> usize {
        let after = self.skip_option(after);
        let Some((from, to, end)) = self.group(after) else {
            return after;
        };
        if self.inline || self.tabular.is_some() {
            return from;
        }
        self.end_paragraph();
        let title = self.text_of(from, to);
        let line = self.line_of(from);
        self.b.line(line);
        let part = part.unwrap_or_else(|| self.parts.heading(level, &title));
        self.b.part(part);
        self.b.heading(level, &title);
        end
    }
}

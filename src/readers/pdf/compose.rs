//! From blocks to the manuscript: parts, headings, and the text with its raised and lowered
//! characters, page by page and line by line.

use super::lines::{Ink, Shift, Word};
use super::paragraphs::{Block, Body};
use super::roles;
use super::tables::Table;
use super::tables::compose::Tables;
use crate::manuscript::{BlockKind, Builder, Part};
use crate::readers::headings::{self, Parts};

/// What the composer knows of a page.
#[derive(Clone, Copy, Debug)]
pub struct Sheet {
    pub number: u32,
    pub width: f32,
    pub height: f32,
}

/// Fills the builder.
pub fn compose(b: &mut Builder, blocks: &[Block], tables: &[Table], body: Body, sheets: &[Sheet]) {
    for sheet in sheets {
        b.page_size(sheet.number, [sheet.width, sheet.height]);
    }
    let mut state = State::new(blocks, body);
    let mut tables = Tables::new(tables, blocks);
    for (index, block) in blocks.iter().enumerate() {
        if let Some(table) = block.first().table {
            b.part(state.part(index, block, BlockKind::Caption));
            tables.write(b, table);
            continue;
        }
        let height = sheets
            .iter()
            .find(|s| s.number == block.first().page)
            .map_or(800.0, |s| s.height);
        let depth = if Some(index) == state.title {
            None
        } else {
            roles::heading(block, body)
        };
        let kind = depth.map_or_else(|| roles::kind(block, body, height), BlockKind::Heading);
        b.part(state.part(index, block, kind));
        b.open(kind);
        write(b, block);
        b.close();
    }
}

/// Follows the parts, as [`Parts`] does for every format, with what only the look of pages tells.
struct State {
    parts: Parts,
    /// Block that is the title.
    title: Option<usize>,
    /// Block that begins the abstract.
    abstract_at: Option<usize>,
    /// Where the references are interrupted by tables and figures at the end of the manuscript.
    float_page: Option<u32>,
    /// Whether the references number their entries with raised digits, once the first is known.
    entries_raised: Option<bool>,
}

impl State {
    fn new(blocks: &[Block], body: Body) -> State {
        let early = |b: &&Block| b.first().page <= blocks[0].first().page + 2;
        let abstract_at = blocks.iter().take_while(early).position(|b| {
            let text = b.text();
            let named = headings::known(&text).map(|k| k.part);
            named == Some(Part::Abstract) || headings::run_in(&text) == Some(Part::Abstract)
        });
        let intro_at = blocks.iter().position(|b| {
            let text = b.text();
            let begins = |k: headings::Known| k.part == Part::Body && k.level == 1;
            !b.row && headings::known(&text).is_some_and(begins) && !headings::is_appended(&text)
        });
        let first_page = blocks.first().map_or(1, |b| b.first().page);
        let title = blocks
            .iter()
            .enumerate()
            .take_while(|(i, b)| {
                b.first().page == first_page && Some(*i) != abstract_at && Some(*i) != intro_at
            })
            .filter(|(_, b)| !b.row && !b.aside && b.text().chars().filter(|c| c.is_alphabetic()).count() > 8)
            .filter(|(_, b)| b.size() > 1.15 * body.size && b.lines.len() <= 6)
            .max_by(|a, b| a.1.size().total_cmp(&b.1.size()).then(b.0.cmp(&a.0)))
            .map(|(i, _)| i);
        // An abstract after the introduction is no abstract.
        let abstract_at = abstract_at.filter(|a| intro_at.is_none_or(|i| *a < i));
        let mut parts = Parts::new();
        if abstract_at.is_some() {
            parts.enter(Part::Front);
        }
        State {
            parts,
            title,
            abstract_at,
            float_page: None,
            entries_raised: None,
        }
    }

    /// The part that the next block belongs to.
    fn part(&mut self, index: usize, block: &Block, kind: BlockKind) -> Part {
        let part = self.parts.current();
        if self.title == Some(index) && part == Part::Body {
            // Without an abstract to end the front matter only the title is surely front matter.
            return part;
        }
        let page = block.first().page;
        if self.float_page.is_some_and(|p| p != page) {
            self.float_page = None;
        }
        if part == Part::References && kind == BlockKind::Caption {
            self.float_page = Some(page);
        }
        let text = block.text();
        if self.abstract_at == Some(index) {
            self.parts.enter(Part::Abstract);
        } else if let BlockKind::Heading(depth) = kind {
            return self.heading(index, depth, &text);
        }
        let begun = self.abstract_at.is_none_or(|a| index > a);
        match self.parts.current() {
            Part::References => self.among_references(block, kind),
            Part::Abstract if begun && headings::is_keyword_line(&text) => {
                self.parts.enter(Part::Front);
                Part::Front
            }
            // A paper whose introduction has no heading: running text on a later page is the body.
            Part::Front if begun && text.len() > 250 => {
                self.parts.enter(Part::Body);
                Part::Body
            }
            _ if matches!(kind, BlockKind::Paragraph) => self.parts.paragraph(&text),
            part => part,
        }
    }

    fn heading(&mut self, index: usize, depth: u8, title: &str) -> Part {
        let known = headings::known(title);
        let part = self.parts.current();
        let before_abstract = self.abstract_at.is_some_and(|a| index < a);
        if part == Part::Abstract && headings::is_keyword_line(title) {
            self.parts.enter(Part::Front);
            return Part::Front;
        }
        match part {
            // Names of authors, journals and the like, set large.
            Part::Front if known.is_none() && before_abstract => part,
            Part::References if known.is_none() && !headings::is_appended(title) => part,
            // Depths are guessed from the type, which is less sure than a name.
            _ => self
                .parts
                .heading(known.map_or(depth, |k| depth.min(k.level)), title),
        }
    }

    /// What stands among the references without belonging to them.
    fn among_references(&mut self, block: &Block, kind: BlockKind) -> Part {
        let raised = roles::begins_raised(block);
        let entries_raised = *self.entries_raised.get_or_insert(raised);
        // Not numbered like the entries: a footnote to the text above the references on this page.
        let leads_back = roles::leads_back(&block.last().text());
        let note = kind == BlockKind::Footnote && (raised && !entries_raised || leads_back);
        if note || self.float_page.is_some() {
            Part::Body
        } else {
            Part::References
        }
    }
}

/// Writes the lines of a block, marking where each stands.
fn write(b: &mut Builder, block: &Block) {
    for (i, (number, line)) in block.lines.iter().enumerate() {
        if i > 0 {
            b.line_break();
        }
        b.page(line.page);
        b.line(*number);
        write_words(b, &line.words);
    }
}

/// Writes words with spaces between.
pub fn write_words(b: &mut Builder, words: &[Word]) {
    for (w, word) in words.iter().enumerate() {
        if w > 0 {
            b.text(" ");
        }
        write_word(b, word);
    }
}

fn write_word(b: &mut Builder, word: &Word) {
    let mut pen = Pen {
        inks: word.inks.iter(),
        drawn: 0,
    };
    let mut from = 0;
    for (shift, text) in &word.parts {
        let to = from + text.len();
        let inside = word
            .corrected
            .iter()
            .filter(|c| (from..to).contains(&c.range.start));
        // Raised and lowered parts are read as a whole, so they are corrected as a whole.
        let (mut done, mut layer) = (from, String::new());
        for c in inside {
            let before = &text[done - from..c.range.start - from];
            if *shift == Shift::None {
                let shown = &text[c.range.start - from..c.range.end - from];
                pen.write(b, done, before);
                b.corrected(&c.layer, |b| pen.write(b, c.range.start, shown));
            } else {
                layer.push_str(before);
                layer.push_str(&c.layer);
            }
            done = c.range.end;
        }
        let rest = &text[done - from..];
        if *shift == Shift::None {
            pen.write(b, done, rest);
        } else {
            pen.draw(b, from, to);
            layer.push_str(rest);
            let write = |b: &mut Builder| match shift {
                Shift::Lowered => b.subscript(text),
                _ => b.superscript(text),
            };
            if done > from {
                b.corrected(&layer, write);
            } else {
                write(b);
            }
        }
        from = to;
    }
}

/// Goes along a word and says where what is written is drawn.
struct Pen<'a> {
    inks: std::slice::Iter<'a, Ink>,
    /// How much of the word is known to be drawn where.
    drawn: usize,
}

impl Pen<'_> {
    /// The next text to be written goes from one byte of the word to another.
    fn draw(&mut self, b: &mut Builder, from: usize, to: usize) {
        while self.drawn < to {
            let Some(ink) = self.inks.next() else { break };
            b.drawn(self.drawn.saturating_sub(from), ink.area);
            self.drawn = ink.end as usize;
        }
    }

    /// Writes text that begins at a byte of the word.
    fn write(&mut self, b: &mut Builder, from: usize, text: &str) {
        if !text.is_empty() {
            self.draw(b, from, from + text.len());
            b.text(text);
        }
    }
}

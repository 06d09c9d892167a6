//! From blocks to the manuscript: parts, headings, and the text with its raised and lowered
//! characters, page by page and line by line.

use super::lines::{Shift, Word};
use super::paragraphs::{Block, Body};
use super::roles::{self, Named};
use crate::manuscript::{BlockKind, Builder, Part};

/// What the composer knows of a page.
#[derive(Clone, Copy, Debug)]
pub struct Sheet {
    pub number: u32,
    pub height: f32,
}

/// Fills the builder.
pub fn compose(b: &mut Builder, blocks: &[Block], body: Body, sheets: &[Sheet]) {
    let mut state = State::new(blocks, body);
    for (index, block) in blocks.iter().enumerate() {
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
        state.enter(index, block, kind);
        b.part(state.part_of(block, kind));
        b.open(kind);
        write(b, block);
        b.close();
    }
}

struct State {
    part: Part,
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
            roles::named(&text) == Some(Named::Abstract) || roles::run_in(&text) == Some(Named::Abstract)
        });
        let intro_at = blocks
            .iter()
            .position(|b| roles::named(&b.text()).is_some_and(|n| n == Named::Main) && !b.row);
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
        let part = if abstract_at.is_some() {
            Part::Front
        } else {
            Part::Body
        };
        State {
            part,
            title,
            abstract_at,
            float_page: None,
            entries_raised: None,
        }
    }

    /// The part that a block belongs to; a title is front matter wherever the rest begins.
    fn part_of(&mut self, block: &Block, kind: BlockKind) -> Part {
        if self.part == Part::References && !matches!(kind, BlockKind::Heading(_)) {
            let raised = roles::begins_raised(block);
            let entries_raised = *self.entries_raised.get_or_insert(raised);
            // Not numbered like the entries: a footnote to the text above the references on this page.
            if kind == BlockKind::Footnote && raised && !entries_raised {
                return Part::Body;
            }
        }
        if self.float_page.is_some()
            && self.part == Part::References
            && !matches!(kind, BlockKind::Heading(_))
        {
            return Part::Body;
        }
        self.part
    }

    fn enter(&mut self, index: usize, block: &Block, kind: BlockKind) {
        if self.title == Some(index) && self.part == Part::Body {
            // Without an abstract to end the front matter only the title is surely front matter.
            return;
        }
        let page = block.first().page;
        if self.float_page.is_some_and(|p| p != page) {
            self.float_page = None;
        }
        if self.part == Part::References && matches!(kind, BlockKind::Caption) {
            self.float_page = Some(page);
        }
        if self.abstract_at == Some(index) {
            self.part = Part::Abstract;
            return;
        }
        let text = block.text();
        if self.part == Part::Abstract && roles::run_in(&text) == Some(Named::Keywords) {
            self.part = Part::Front;
            return;
        }
        let BlockKind::Heading(depth) = kind else {
            // A paper whose introduction has no heading: running text on a later page is the body.
            if self.part == Part::Front
                && self.abstract_at.is_some_and(|a| index > a)
                && block.text().len() > 250
            {
                self.part = Part::Body;
            }
            return;
        };
        self.part = match (self.part, roles::named(&text)) {
            (_, Some(Named::References)) => Part::References,
            (_, Some(Named::Appendix)) => Part::Body,
            (Part::References, Some(Named::Back)) => Part::Back,
            (_, Some(Named::Back)) => Part::Back,
            (Part::Abstract, Some(Named::Keywords)) => Part::Front,
            // Structured abstracts have headings of their own, often the same names.
            (Part::Abstract, Some(Named::Main)) if !ends_abstract(&text) => Part::Abstract,
            (Part::Front, None) if self.abstract_at.is_none_or(|a| index < a) => Part::Front,
            (Part::References, None) => Part::References,
            (Part::References, Some(_)) => Part::Body,
            (Part::Back, None) if depth > 1 => Part::Back,
            (part @ Part::Back, Some(Named::Abstract | Named::Keywords)) => part,
            _ => Part::Body,
        };
    }
}

fn ends_abstract(heading: &str) -> bool {
    let lower = heading.to_lowercase();
    lower.contains("introduction")
        || lower.contains("einleitung")
        || heading.starts_with(|c: char| c.is_ascii_digit())
}

/// Writes the lines of a block, marking where each stands.
fn write(b: &mut Builder, block: &Block) {
    for (i, (number, line)) in block.lines.iter().enumerate() {
        if i > 0 {
            b.line_break();
        }
        b.page(line.page);
        b.line(*number);
        for (w, word) in line.words.iter().enumerate() {
            if w > 0 {
                b.text(" ");
            }
            write_word(b, word);
        }
    }
}

fn write_word(b: &mut Builder, word: &Word) {
    for (shift, text) in &word.parts {
        match shift {
            Shift::None => b.text(text),
            Shift::Raised => b.superscript(text),
            Shift::Lowered => b.subscript(text),
        }
    }
}

//! Web pages, as browsers, word processors, R Markdown, Quarto and pandoc write them and as
//! journals publish them.
//!
//! What a person sees on the page is read, in the order of the file: hidden elements, scripts,
//! navigation, form controls and program code are left out, and a formula that the page holds in
//! several forms is read once. Tags may be missing or crossed, as in any web page.

mod blocks;
mod elements;
mod formulas;
mod marks;
mod tokens;

use super::Unreadable;
use super::headings::Parts;
use crate::manuscript::{BlockKind, Builder, Description, Format, Manuscript, Part};
use elements::{Element, element};
use formulas::Ahead;
use marks::Marks;
use tokens::{Start, Token, Tokens, decode};

/// Elements open at the same time beyond this are read as if they were not there.
const DEEPEST: usize = 1000;

/// End tags look for their start among this many open elements.
const LOOK_BACK: usize = 200;

/// Reads the document.
pub fn read(source: &str) -> Result<Manuscript, Unreadable> {
    let mut reading = Reading::new(source);
    while let Some(token) = reading.tokens.next() {
        reading.token(token);
    }
    Ok(reading.finish())
}

/// What an element passes on to the elements in it.
#[derive(Clone, Copy)]
struct Context {
    kind: BlockKind,
    /// The part that an element around says its content is.
    part: Option<Part>,
    /// Nothing in here is seen.
    silent: bool,
    /// A formula may be read in here even so: it is the form of it meant for reading.
    math_in_silence: bool,
    /// In a formula whose form for reading stands beside the one kept from screen readers.
    twofold: bool,
    /// Inside a formula, where `$` and `\(` are marks of TeX.
    formula: bool,
    /// Blocks become text of the block around them.
    joined: bool,
    /// Line ends count.
    preformatted: bool,
    /// Notes at the end of the page.
    notes: bool,
    head: bool,
    foot: bool,
    /// In a table that only arranges the page.
    layout: bool,
    /// In a table that is read as one.
    table: bool,
}

struct Open<'a> {
    name: &'a str,
    element: Element,
    outside: Context,
    /// Section and part to return to where a sectioning element ends.
    section: Option<usize>,
    part: Part,
    /// A table of its own, a cell of its own, a figure with captions to hand over.
    own: bool,
}

/// Captions and tables of a figure or of one table.
#[derive(Default)]
struct Group {
    first_table: usize,
    about: Description,
    /// The table has ended, though not its element: what follows are notes.
    ended: bool,
}

struct Reading<'a> {
    source: &'a str,
    tokens: Tokens<'a>,
    b: Builder,
    open: Vec<Open<'a>>,
    context: Context,
    parts: Parts,
    /// Raised (true) or lowered text being collected, and how it nests.
    shifts: Vec<bool>,
    shifted: String,
    groups: Vec<Group>,
    /// The last block, if it is a caption that a table may follow: its index and label.
    waiting_caption: Option<(usize, Option<String>)>,
    /// A row of the foot has begun, but none of its cells.
    row_due: bool,
    /// A formula has just been read, in a form that others may follow.
    formula_read: bool,
    next_script: Ahead,
    next_math: Ahead,
    /// Line of the file (from 1) and the position up to which lines are counted.
    line: u32,
    counted: usize,
    formula_pictures: usize,
}

impl<'a> Reading<'a> {
    fn new(source: &'a str) -> Reading<'a> {
        Reading {
            source,
            tokens: Tokens::new(source),
            b: Builder::new(Format::Html),
            open: Vec::new(),
            context: Context {
                kind: BlockKind::Paragraph,
                part: None,
                silent: false,
                math_in_silence: false,
                twofold: false,
                formula: false,
                joined: false,
                preformatted: false,
                notes: false,
                head: false,
                foot: false,
                layout: false,
                table: false,
            },
            parts: Parts::new(),
            shifts: Vec::new(),
            shifted: String::new(),
            groups: Vec::new(),
            waiting_caption: None,
            row_due: false,
            formula_read: false,
            next_script: Ahead::of(b"<script"),
            next_math: Ahead::of(b"<math"),
            line: 1,
            counted: 0,
            formula_pictures: 0,
        }
    }

    fn finish(mut self) -> Manuscript {
        self.close_down_to(0);
        self.close_block();
        self.b.close_table();
        match self.formula_pictures {
            0 => {}
            1 => self.b.remark("1 formula is only a picture and was not read"),
            n => self
                .b
                .remark(format!("{n} formulas are only pictures and were not read")),
        }
        self.b.finish()
    }

    fn token(&mut self, token: Token<'a>) {
        match token {
            Token::Text(raw) => self.raw_text(raw),
            Token::Literal(text) => self.text(text),
            Token::Start(start) => self.start(start),
            Token::End(name) => self.end(name),
        }
    }

    fn raw_text(&mut self, raw: &'a str) {
        if self.context.silent {
            return;
        }
        let breaks = |raw: &str| raw.bytes().filter(|b| *b == b'\n').count();
        let blank = raw.bytes().all(|b| b.is_ascii_whitespace());
        if blank && !(self.context.preformatted && breaks(raw) > 1) {
            return self.text(raw);
        }
        let begins = raw.as_ptr() as usize - self.source.as_ptr() as usize;
        let line = self.line_at(begins);
        if self.holds_tex(raw) {
            self.b.line(line);
            return self.text_with_tex(&decode(raw));
        }
        if memchr::memchr(b'\n', raw.as_bytes()).is_none() {
            self.b.line(line);
            return self.text(&decode(raw));
        }
        for (count, part) in (0..).zip(raw.split_inclusive('\n')) {
            let blank = part.trim().is_empty();
            if self.context.preformatted && blank && !self.context.joined {
                self.close_block();
            }
            if !blank {
                self.b.line(line + count);
            }
            self.text(&decode(part));
        }
    }

    /// The line of a position; positions must not go back.
    fn line_at(&mut self, at: usize) -> u32 {
        if at > self.counted {
            let between = &self.source.as_bytes()[self.counted..at];
            self.line += memchr::memchr_iter(b'\n', between).count() as u32;
            self.counted = at;
        }
        self.line
    }

    fn start(&mut self, start: Start<'a>) {
        let mut lower = [0; 16];
        let name = lower_case(start.name, &mut lower);
        let element = element(name);
        match element {
            Element::Void => return,
            Element::Break => {
                self.text(" ");
                return;
            }
            Element::Raw => {
                self.tokens.raw_until_end_of(name);
                return;
            }
            Element::Script => return self.script(&start),
            Element::DocumentTitle => return self.document_title(),
            Element::Image => return self.image(&start),
            Element::Math => return self.math(),
            _ => {}
        }
        self.imply_ends(element);
        if element == Element::Rule {
            self.close_block();
            return;
        }
        if self.open.len() >= DEEPEST {
            return;
        }
        let marks = Marks::of(&start);
        let mut open = Open {
            name: start.name,
            element,
            outside: self.context,
            section: None,
            part: Part::Body,
            own: false,
        };
        let hidden =
            element == Element::Hidden || marks.hidden || (marks.aria_hidden && self.context.twofold);
        if hidden {
            self.context.silent = true;
            self.context.math_in_silence = false;
        } else if marks.rendered_formula && !self.context.silent {
            self.rendered_formula(&start);
        }
        self.context.math_in_silence |= marks.math_in_silence;
        if self.context.silent {
            self.open.push(open);
            return;
        }
        self.context.formula |= marks.formula;
        if element.is_block() {
            // A heading may be called like its section, but does not contain it.
            if marks.part.is_some() && !matches!(element, Element::Heading(_)) {
                self.context.part = marks.part;
            }
            self.context.notes |= marks.notes;
            if marks.notes && !self.context.joined {
                self.context.kind = BlockKind::Footnote;
            }
            if marks.caption && !self.context.joined {
                self.context.kind = BlockKind::Caption;
            }
            if marks.table_note && !self.context.joined {
                self.context.kind = BlockKind::TableNote;
            }
        }
        self.enter(element, &start, &marks, &mut open);
        self.open.push(open);
    }

    fn enter(&mut self, element: Element, start: &Start<'a>, marks: &Marks, open: &mut Open<'a>) {
        match element {
            Element::Sup => self.open_shift(true),
            Element::Sub => self.open_shift(false),
            Element::Quotation => self.text("\""),
            Element::Block | Element::List => self.close_block(),
            Element::Sectioning => {
                self.close_block();
                open.section = self.b.section();
                open.part = self.parts.current();
            }
            Element::Figure => {
                self.close_block();
                self.groups.push(Group {
                    first_table: self.b.table_count(),
                    ..Group::default()
                });
                open.own = true;
            }
            Element::Paragraph => self.open_block(self.context.kind),
            Element::Heading(level) => {
                self.open_block(BlockKind::Heading(level));
                if marks.title && self.context.part.is_none() {
                    self.context.part = Some(Part::Front);
                }
            }
            Element::Item => {
                self.close_block();
                if !self.context.joined
                    && matches!(self.context.kind, BlockKind::Paragraph | BlockKind::ListItem)
                {
                    self.context.kind = BlockKind::ListItem;
                }
            }
            Element::Quote => {
                self.close_block();
                if !self.context.joined {
                    self.context.kind = BlockKind::Quote;
                }
            }
            Element::Preformatted => {
                self.close_block();
                let code = self.is_program(start);
                self.context.silent |= code;
                self.context.preformatted = true;
            }
            Element::Caption => {
                if !self.context.joined {
                    self.context.kind = BlockKind::Caption;
                }
                self.open_block(self.context.kind);
            }
            Element::Table => open.own = self.open_table(marks),
            Element::TableHead => self.context.head = true,
            Element::TableFoot => self.context.foot = true,
            Element::Row => self.open_row(),
            Element::Cell => open.own = self.open_cell(start),
            _ => {}
        }
    }

    fn end(&mut self, name: &str) {
        let found = self.reach(name);
        match found {
            Some(back) => self.close_down_to(self.open.len() - 1 - back),
            None if name.eq_ignore_ascii_case("br") => self.text(" "),
            None if name.eq_ignore_ascii_case("p") => self.close_block(),
            None => {}
        }
    }

    /// How far back the element is that an end tag ends: not beyond the cell or table around.
    fn reach(&self, name: &str) -> Option<usize> {
        let mut lower = [0; 16];
        let of_table = matches!(
            element(lower_case(name, &mut lower)),
            Element::Table
                | Element::Row
                | Element::Cell
                | Element::TableHead
                | Element::TableBody
                | Element::TableFoot
        );
        for (back, open) in self.open.iter().rev().take(LOOK_BACK).enumerate() {
            if open.name.eq_ignore_ascii_case(name) {
                return Some(back);
            }
            if open.element == Element::Table || (!of_table && open.element.is_border()) {
                return None;
            }
        }
        None
    }

    /// Ends every element above this depth.
    fn close_down_to(&mut self, depth: usize) {
        while self.open.len() > depth {
            let Some(open) = self.open.pop() else { return };
            self.leave(open);
        }
    }

    fn leave(&mut self, open: Open<'a>) {
        let inside = self.context;
        self.context = open.outside;
        if inside.silent {
            // Nothing was begun that would have to be ended.
            return;
        }
        match open.element {
            Element::Sup | Element::Sub => {
                self.flush_shift();
                self.shifts.pop();
            }
            Element::Quotation => self.text("\""),
            Element::Heading(level) => self.close_heading(level, inside),
            Element::Table if open.own => self.close_table(),
            Element::Cell if open.own => {
                self.flush_shift();
                self.b.close();
            }
            Element::Row | Element::TableHead | Element::TableBody | Element::TableFoot => {}
            Element::Cell | Element::Caption => self.close_block_in(inside),
            element if element.is_block() => {
                self.close_block_in(inside);
                match element {
                    Element::Sectioning => self.leave_section(&open),
                    Element::Figure if open.own => self.describe_group(),
                    _ => {}
                }
            }
            _ => {}
        }
    }

    /// Ends the elements that a start tag ends without saying so.
    fn imply_ends(&mut self, element: Element) {
        use Element::*;
        let closes: fn(Element) -> bool = match element {
            Item => |e| e == Item,
            Row => |e| matches!(e, Row | Cell),
            Cell => |e| e == Cell,
            TableHead | TableBody | TableFoot => {
                |e| matches!(e, TableHead | TableBody | TableFoot | Row | Cell)
            }
            Heading(_) => |e| matches!(e, Heading(_) | Paragraph),
            e if e.is_block() => |e| e == Paragraph,
            _ => return,
        };
        let stops: fn(Element) -> bool = match element {
            Item => |e| e == List || e.is_border(),
            Row | Cell | TableHead | TableBody | TableFoot => |e| e == Table,
            _ => |e| e.is_border() || matches!(e, Item | Block | Sectioning),
        };
        let open = self.open.iter().rev().take(LOOK_BACK);
        let back = open
            .take_while(|o| !stops(o.element))
            .enumerate()
            .filter(|(_, o)| closes(o.element))
            .last();
        if let Some((back, _)) = back {
            self.close_down_to(self.open.len() - 1 - back);
        }
        // An item also ends the paragraph before it.
        if element == Element::Item {
            self.imply_ends(Element::Rule);
        }
    }
}

/// The name in lower case; names too long for the buffer are no known elements.
fn lower_case<'b>(name: &str, buffer: &'b mut [u8; 16]) -> &'b str {
    let length = name.len();
    if length > buffer.len() || !name.is_ascii() {
        return "";
    }
    buffer[..length].copy_from_slice(name.as_bytes());
    buffer[..length].make_ascii_lowercase();
    std::str::from_utf8(&buffer[..length]).unwrap_or("")
}

#[cfg(test)]
mod tests;

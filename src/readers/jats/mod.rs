//! JATS and NLM XML, in which journals and archives keep articles.
//!
//! The file is read as a stream of events; nothing of it is kept but the text as read. Footnotes
//! and floats that stand inside a paragraph are read after it, so that no sentence is torn apart.
//! Reference lists, metadata and letters about the article are left out.

mod blocks;
mod declared;
mod tags;
mod trouble;

use super::Unreadable;
use super::mathml::Math;
use crate::manuscript::{BlockKind, Builder, CellShape, Description, Format, Manuscript, Part};
use blocks::local_is;
use declared::Declared;
use quick_xml::Reader;
use quick_xml::events::{BytesStart, Event};
use tags::Tag;
use trouble::{Trouble, last_open, not_well_formed};

/// Elements nested deeper than this make a file unreadable.
const DEEPEST: usize = 1000;

/// Floats and notes inside one another are put off at most this often; deeper ones are read where
/// they stand, so that no part of a file is gone through more than this many times.
const PUT_OFF_AT_MOST: u8 = 4;

/// Reads the document.
pub fn read(source: &str) -> Result<Manuscript, Unreadable> {
    let mut reading = Reading::new(source);
    reading.run(source)?;
    reading.finish()
}

/// What an element passes on to the elements in it.
#[derive(Clone, Copy)]
struct Context {
    /// The kind of block that a paragraph or loose text becomes.
    kind: BlockKind,
    part: Part,
    /// Number of sections around.
    level: u8,
    /// Text does not count here.
    silent: bool,
    /// Inside metadata.
    front: bool,
    /// Blocks become text of the block around them: table cells, definitions.
    joined: bool,
    /// Inside the head of a table.
    head: bool,
    /// Inside a group of notes at the end of the article.
    note_group: bool,
}

struct Frame {
    tag: Tag,
    outside: Context,
    /// What the end of the element needs to know, depending on the tag.
    note: usize,
}

#[derive(Default)]
struct Formula {
    /// Something readable has been found.
    read: bool,
    picture: bool,
    tex: String,
    textual: String,
}

#[derive(Default)]
struct TableWrap {
    about: Description,
    first_table: usize,
    picture: bool,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Shift {
    Raised,
    Lowered,
}

/// Where text goes at the moment.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Sink {
    Block,
    Label,
    Tex,
    Textual,
}

/// A float or note that stands inside a paragraph and is read after it.
struct PutOff<'a> {
    start: BytesStart<'a>,
    content: &'a str,
    context: Context,
}

struct Reading<'a> {
    source: &'a str,
    b: Builder,
    context: Context,
    frames: Vec<Frame>,
    sink: Sink,
    shifts: Vec<Shift>,
    shifted: String,
    /// A label read but not yet written, because its block has not begun.
    label: String,
    /// The element whose label it is.
    label_of: Tag,
    /// Heading to be written before the next block.
    due_heading: Option<&'static str>,
    formulas: Vec<Formula>,
    wraps: Vec<TableWrap>,
    put_off: Vec<PutOff<'a>>,
    nesting: u8,
    /// Last byte of the text written last.
    last: u8,
    /// A displayed formula has ended: a space follows, unless punctuation does.
    space_due: bool,
    in_citation: bool,
    declared: Declared<'a>,
    article_seen: bool,
    letters: usize,
    formula_pictures: usize,
    /// Labels of tables that are pictures, the first few of them, and how many there are.
    table_pictures: Vec<String>,
    table_picture_count: usize,
    root_closed: bool,
}

impl<'a> Reading<'a> {
    fn new(source: &'a str) -> Reading<'a> {
        Reading {
            source,
            b: Builder::new(Format::Jats),
            context: Context {
                kind: BlockKind::Paragraph,
                part: Part::Body,
                level: 0,
                silent: true,
                front: false,
                joined: false,
                head: false,
                note_group: false,
            },
            frames: Vec::new(),
            sink: Sink::Block,
            shifts: Vec::new(),
            shifted: String::new(),
            label: String::new(),
            label_of: Tag::Inline,
            due_heading: None,
            formulas: Vec::new(),
            wraps: Vec::new(),
            put_off: Vec::new(),
            nesting: 0,
            last: b' ',
            space_due: false,
            in_citation: false,
            declared: Declared::default(),
            article_seen: false,
            letters: 0,
            formula_pictures: 0,
            table_pictures: Vec::new(),
            table_picture_count: 0,
            root_closed: false,
        }
    }

    fn finish(mut self) -> Result<Manuscript, Unreadable> {
        if !self.article_seen {
            return Err(Unreadable::new(
                "is XML but not an article in JATS or NLM form; export it in another format",
            ));
        }
        self.close_block();
        if self.letters > 0 {
            self.b
                .remark("letters about the article that stand in the same file were not read");
        }
        match self.table_picture_count {
            0 => {}
            1 => self.b.remark(format!(
                "{} is stored as a picture and was not read",
                self.table_pictures.concat()
            )),
            n => self.b.remark(format!(
                "{n} tables are stored as pictures and were not read: {}",
                self.table_pictures.join(", ")
            )),
        }
        match self.formula_pictures {
            0 => {}
            1 => self
                .b
                .remark("1 formula is stored only as a picture and was not read"),
            n => self.b.remark(format!(
                "{n} formulas are stored only as pictures and were not read"
            )),
        }
        self.declared.remark_unknown(&mut self.b);
        Ok(self.b.finish())
    }

    /// Reads a stretch of the source: the whole of it, or the content of an element put off.
    fn run(&mut self, text: &'a str) -> Result<(), Unreadable> {
        let floor = self.frames.len();
        let mut reader = Reader::from_str(text);
        loop {
            match reader.read_event() {
                Ok(Event::Start(e)) => {
                    if let Err(error) = self.start(e, Some(&mut reader), text) {
                        return Err(self.explain(error, &reader, text));
                    }
                }
                Ok(Event::Empty(e)) => {
                    if let Err(error) = self.start(e, None, text) {
                        return Err(self.explain(error, &reader, text));
                    }
                }
                Ok(Event::End(_)) => self.end()?,
                Ok(Event::Text(t)) => self.text(&t),
                Ok(Event::GeneralRef(name)) => self.entity(&name),
                Ok(Event::CData(t)) => self.text(&t),
                Ok(Event::DocType(t)) => self.declared.read(t.into_inner()),
                Ok(Event::Eof) => break,
                Ok(_) => {}
                Err(error) => return Err(self.explain(Trouble::Xml(error), &reader, text)),
            }
        }
        if self.frames.len() > floor {
            let at = self.source.trim_end().len();
            let open = format!("the file ends before `</{}>`", last_open(self.source));
            return Err(not_well_formed(self.source, at, &open));
        }
        Ok(())
    }

    fn explain(&self, trouble: Trouble, reader: &Reader<&[u8]>, text: &str) -> Unreadable {
        match trouble {
            Trouble::Xml(error) => {
                // `text` is a slice of the source.
                let offset = text.as_ptr() as usize - self.source.as_ptr() as usize;
                let at = offset + reader.error_position() as usize;
                let reason = match error {
                    quick_xml::Error::Syntax(e) => e.to_string(),
                    quick_xml::Error::IllFormed(e) => e.to_string(),
                    e => e.to_string(),
                };
                not_well_formed(self.source, at, &reason)
            }
            Trouble::Told(unreadable) => unreadable,
        }
    }

    fn start(
        &mut self,
        e: BytesStart<'a>,
        reader: Option<&mut Reader<&'a [u8]>>,
        text: &'a str,
    ) -> Result<(), Trouble> {
        let local = e.local_name();
        let mut tag = tags::tag(local.as_ref());
        if self.frames.len() >= DEEPEST {
            return Err(Trouble::Told(Unreadable::new(format!(
                "has elements nested more than {DEEPEST} deep; export it again"
            ))));
        }
        if self.frames.is_empty() && self.root_closed {
            let at = reader.map_or(0, |r| r.buffer_position() as usize);
            return Err(Trouble::Told(not_well_formed(
                self.source,
                at,
                "a second root element begins",
            )));
        }
        if self.context.front && !matches!(tag, Tag::Meta | Tag::ArticleTitle | Tag::Abstract) {
            tag = Tag::Skip;
        }
        if self.sink != Sink::Block && tag != Tag::Skip {
            // Labels and formula sources hold nothing but text.
            tag = if tag == Tag::Math { Tag::Skip } else { Tag::Inline };
        }
        let floats = match tag {
            Tag::Note | Tag::Float | Tag::TableWrap => true,
            Tag::Table => !self.context.joined,
            _ => false,
        };
        if floats && self.b.is_open() && self.nesting < PUT_OFF_AT_MOST {
            if let Some(reader) = reader {
                let span = reader.read_to_end(e.name())?;
                let content = text.get(span.start as usize..span.end as usize).unwrap_or("");
                let mut context = self.context;
                context.joined = false;
                self.put_off.push(PutOff {
                    start: e,
                    content,
                    context,
                });
            }
            return Ok(());
        }
        match (tag, reader) {
            (Tag::Skip | Tag::Letter, reader) => {
                self.letters += (tag == Tag::Letter) as usize;
                if let Some(reader) = reader {
                    reader.read_to_end(e.name())?;
                }
                Ok(())
            }
            (Tag::Math, Some(reader)) => self.math(reader),
            (Tag::Math, None) => Ok(()),
            (tag, Some(_)) => {
                self.open(tag, &e);
                Ok(())
            }
            (tag, None) => {
                self.open(tag, &e);
                self.end().map_err(Trouble::Told)
            }
        }
    }

    /// An element begins that is neither left out nor put off.
    fn open(&mut self, tag: Tag, e: &BytesStart<'a>) {
        let parent = self.frames.last().map_or(Tag::Inline, |f| f.tag);
        let mut frame = Frame {
            tag,
            outside: self.context,
            note: 0,
        };
        match tag {
            Tag::Inline | Tag::Meta | Tag::Skip | Tag::Letter | Tag::Math => {}
            Tag::Xref => frame.note = self.open_xref(e),
            Tag::Sup => self.open_shift(Shift::Raised),
            Tag::Sub => self.open_shift(Shift::Lowered),
            Tag::Break => self.text(" "),
            Tag::Article => self.article_seen = true,
            Tag::Front => {
                self.context.front = true;
                self.context.silent = true;
            }
            Tag::ArticleTitle => {
                if self.context.front {
                    self.context.front = false;
                    self.context.silent = false;
                    self.context.part = Part::Front;
                    self.context.joined = true;
                    let kind = if local_is(e, "subtitle") {
                        BlockKind::Paragraph
                    } else {
                        BlockKind::Heading(1)
                    };
                    self.b.part(Part::Front);
                    self.b.open(kind);
                    frame.note = 1;
                }
            }
            Tag::Abstract => {
                frame.note = self.enter_division(Part::Abstract);
                self.context.level = 1;
                self.due_heading = Some("Abstract");
            }
            Tag::Body => {
                self.article_seen = true;
                frame.note = self.enter_division(Part::Body);
            }
            Tag::Back => frame.note = self.enter_division(Part::Back),
            Tag::BackMatter | Tag::NoteGroup => {
                frame.note = self.enter_division(Part::Back);
                self.context.note_group = tag == Tag::NoteGroup;
                self.context.level = self.context.level.saturating_add(1);
            }
            Tag::Appendix => {
                frame.note = self.enter_division(Part::Body);
                self.context.level = self.context.level.saturating_add(1);
            }
            Tag::Section => {
                frame.note = self.enter_division(self.context.part);
                self.context.level = self.context.level.saturating_add(1);
            }
            Tag::Title => self.open_title(parent),
            Tag::Label => {
                self.flush_shift();
                self.label.clear();
                self.label_of = parent;
                self.sink = Sink::Label;
            }
            Tag::Paragraph | Tag::Attrib => self.open_block(self.context.kind),
            Tag::List => self.split(),
            Tag::ListItem => {
                self.split();
                self.context.kind = BlockKind::ListItem;
            }
            Tag::DefItem => {
                self.split();
                self.open_block(BlockKind::ListItem);
                self.context.joined = true;
            }
            Tag::Term => {}
            Tag::Def => self.text(": "),
            Tag::Quote => {
                self.split();
                self.context.kind = BlockKind::Quote;
            }
            Tag::Set => self.split(),
            Tag::Float => {
                self.split();
                self.context.kind = BlockKind::Paragraph;
            }
            Tag::TableWrap => {
                self.split();
                self.wraps.push(TableWrap {
                    first_table: self.b.table_count(),
                    ..TableWrap::default()
                });
                self.context.kind = BlockKind::TableNote;
            }
            Tag::TableFoot => {
                self.split();
                self.context.kind = BlockKind::TableNote;
            }
            Tag::Caption => {
                self.split();
                self.context.kind = BlockKind::Caption;
            }
            Tag::Note => {
                self.split();
                self.open_note(e);
            }
            Tag::Table => frame.note = self.open_table(),
            Tag::TableHead => self.context.head = true,
            Tag::Row => {
                if self.context.joined {
                    self.text(" ");
                } else {
                    self.b.row();
                }
            }
            Tag::DataCell | Tag::HeaderCell => frame.note = self.open_cell(tag, e),
            Tag::Graphic => {
                if let Some(formula) = self.formulas.last_mut() {
                    formula.picture = true;
                }
                if let Some(wrap) = self.wraps.last_mut() {
                    wrap.picture = true;
                }
            }
            Tag::DisplayFormula => {
                if self.b.is_open() {
                    self.text(" ");
                } else {
                    self.open_block(self.context.kind);
                    frame.note = 1;
                }
                self.flush_shift();
                self.formulas.push(Formula::default());
            }
            Tag::InlineFormula | Tag::Alternatives => {
                self.flush_shift();
                self.formulas.push(Formula::default());
            }
            Tag::Tex => {
                // Outside of any formula element the source stands for itself.
                if self.formulas.is_empty() {
                    self.flush_shift();
                    self.formulas.push(Formula::default());
                    frame.note = 1;
                }
                self.sink = Sink::Tex;
            }
            Tag::TextualForm => {
                if !self.formulas.is_empty() {
                    self.sink = Sink::Textual;
                }
            }
        }
        self.frames.push(frame);
    }

    fn end(&mut self) -> Result<(), Unreadable> {
        let Some(frame) = self.frames.pop() else {
            return Ok(());
        };
        self.context = frame.outside;
        match frame.tag {
            Tag::Inline | Tag::Meta | Tag::Skip | Tag::Letter | Tag::Math | Tag::Break => {}
            Tag::Article | Tag::TableHead | Tag::Row | Tag::Graphic | Tag::Front => {}
            Tag::Xref => match frame.note {
                1 => self.close_shift(),
                2 => self.in_citation = false,
                _ => {}
            },
            Tag::Sup | Tag::Sub => self.close_shift(),
            Tag::ArticleTitle => {
                if frame.note == 1 {
                    self.flush_shift();
                    self.b.close();
                    self.flush_put_off()?;
                    // The title names no section: text before the first heading stands in none.
                    self.b.return_to_section(None);
                }
            }
            Tag::Abstract
            | Tag::Body
            | Tag::Back
            | Tag::BackMatter
            | Tag::NoteGroup
            | Tag::Appendix
            | Tag::Section => {
                self.due_heading = None;
                self.label.clear();
                self.close_block();
                self.flush_put_off()?;
                self.b.return_to_section(frame.note.checked_sub(1));
            }
            Tag::Label => self.close_label(),
            Tag::Title => {
                self.close_title();
                self.flush_put_off()?;
            }
            Tag::Paragraph | Tag::Attrib | Tag::Caption | Tag::TableFoot | Tag::DefItem => {
                self.close_block();
                self.flush_put_off()?;
            }
            Tag::List | Tag::ListItem | Tag::Quote | Tag::Set | Tag::Note => {
                if matches!(frame.tag, Tag::ListItem | Tag::Note) {
                    self.label.clear();
                }
                self.close_block();
                self.flush_put_off()?;
            }
            Tag::Term => {}
            Tag::Def => self.text(" "),
            Tag::Float => {
                self.write_lonely_label();
                self.close_block();
                self.flush_put_off()?;
            }
            Tag::TableWrap => {
                self.write_lonely_label();
                self.close_block();
                self.flush_put_off()?;
                self.describe_tables();
            }
            Tag::Table => {
                if frame.note == 1 {
                    self.flush_shift();
                    self.b.close_table();
                    if let Some(formula) = self.formulas.last_mut() {
                        formula.read = true;
                    }
                    self.flush_put_off()?;
                }
            }
            Tag::DataCell | Tag::HeaderCell => {
                self.flush_shift();
                if frame.note == 1 {
                    self.label.clear();
                    self.b.close();
                } else {
                    self.text(" ");
                }
            }
            Tag::DisplayFormula => {
                self.close_formula();
                self.label.clear();
                if frame.note == 1 {
                    self.close_block();
                    self.flush_put_off()?;
                } else {
                    self.space_due = true;
                }
            }
            Tag::InlineFormula | Tag::Alternatives => self.close_formula(),
            Tag::Tex => {
                self.sink = Sink::Block;
                if frame.note == 1 {
                    self.close_formula();
                }
            }
            Tag::TextualForm => self.sink = Sink::Block,
        }
        if self.frames.is_empty() && self.nesting == 0 {
            self.root_closed = true;
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests;

//! Walks through the text of a Word file and makes the flow of it.

use super::fields::{Fields, Holds, holds};
use super::omml;
use super::styles::{self, Styles};
use super::{choice, symbol_element, table};
use crate::manuscript::{Builder, Part};
use crate::readers::office::flow::{Item, Paragraph, Role, lines};
use crate::readers::office::line::Line;
use crate::readers::office::setting::Setting;
use crate::readers::office::symbols;
use crate::readers::office::tree::Element;
use std::collections::{HashMap, HashSet};

/// Footnotes and endnotes by their number in the file.
#[derive(Default)]
pub struct Notes<'t> {
    foot: HashMap<i64, Element<'t>>,
    end: HashMap<i64, Element<'t>>,
}

impl<'t> Notes<'t> {
    /// Takes the roots of the two parts.
    pub fn read(foot: Option<Element<'t>>, end: Option<Element<'t>>) -> Notes<'t> {
        let by_number = |root: Option<Element<'t>>| -> HashMap<i64, Element<'t>> {
            root.iter()
                .flat_map(Element::children)
                // Those with a type are the separators above the notes.
                .filter(|n| n.attribute("type").is_none_or(|t| t == "normal"))
                .filter_map(|n| Some((n.number("id")?, n)))
                .collect()
        };
        Notes {
            foot: by_number(foot),
            end: by_number(end),
        }
    }
}

/// What surrounds a block.
#[derive(Clone, Copy, Default)]
pub struct Around {
    /// The part that a content control puts it in.
    pub part: Option<Part>,
    pub contents: bool,
}

/// Collects one paragraph.
#[derive(Default)]
struct Open<'t> {
    line: Line,
    /// What the paragraph's style says about its text.
    setting: Setting,
    notes: Vec<Element<'t>>,
    boxes: Vec<Element<'t>>,
    held: Option<Holds>,
}

/// Walks through a Word file.
pub struct Walker<'s, 't> {
    styles: &'s Styles,
    notes: &'s Notes<'t>,
    fields: Fields,
    /// Notes already read: a file that refers to one a million times shows it once.
    seen: HashSet<(&'static str, i64)>,
    in_note: bool,
    equations: usize,
    linked: usize,
}

impl<'s, 't> Walker<'s, 't> {
    pub fn new(styles: &'s Styles, notes: &'s Notes<'t>) -> Self {
        Walker {
            styles,
            notes,
            fields: Fields::default(),
            seen: HashSet::new(),
            in_note: false,
            equations: 0,
            linked: 0,
        }
    }

    /// Says what could not be read.
    pub fn remarks(&self, b: &mut Builder) {
        if self.equations > 0 {
            b.remark(format!(
                "{} equation{} embedded as an object or picture and not read",
                self.equations,
                if self.equations == 1 { " is" } else { "s are" }
            ));
        }
        if self.linked > 0 {
            b.remark("the file includes another document, which was not read");
        }
    }

    /// Appends everything in an element that holds blocks.
    pub fn blocks(&mut self, holder: Element<'t>, out: &mut Vec<Item>, around: Around) {
        let mut ahead: Option<Paragraph> = None;
        self.blocks_after(holder, out, around, &mut ahead);
        out.extend(ahead.map(Item::Paragraph));
    }

    /// `ahead` is a paragraph whose end was deleted: the next one continues it.
    fn blocks_after(
        &mut self,
        holder: Element<'t>,
        out: &mut Vec<Item>,
        around: Around,
        ahead: &mut Option<Paragraph>,
    ) {
        for child in holder.children() {
            match child.name() {
                "p" => self.paragraph(child, out, around, ahead),
                "tbl" => {
                    out.extend(ahead.take().map(Item::Paragraph));
                    table::push(child, out, &mut |tc| {
                        let mut items = Vec::new();
                        self.blocks(tc, &mut items, Around { part: None, ..around });
                        items
                    });
                }
                "sdt" => {
                    let around = control(child, around);
                    if let Some(content) = child.child("sdtContent") {
                        self.blocks_after(content, out, around, ahead);
                    }
                }
                "AlternateContent" => {
                    if let Some(choice) = choice(child) {
                        self.blocks_after(choice, out, around, ahead);
                    }
                }
                "oMathPara" | "oMath" => {
                    let mut line = Line::default();
                    omml::push(child, &mut line);
                    out.push(Item::Paragraph(Paragraph {
                        line,
                        ..Paragraph::default()
                    }));
                }
                "altChunk" => self.linked += 1,
                "ins" | "moveTo" | "customXml" | "smartTag" | "hyperlink" | "sdtContent" | "body" => {
                    self.blocks_after(child, out, around, ahead);
                }
                _ => {}
            }
        }
    }

    fn paragraph(
        &mut self,
        p: Element<'t>,
        out: &mut Vec<Item>,
        around: Around,
        ahead: &mut Option<Paragraph>,
    ) {
        let properties = p.child("pPr");
        let style_id = properties.and_then(|e| e.child("pStyle")).and_then(|s| s.val());
        let below = self.styles.get(style_id.as_deref());
        let direct = properties.map(styles::paragraph).unwrap_or_default();
        let mark_deleted = properties
            .and_then(|e| e.child("rPr"))
            .is_some_and(|r| r.child("del").is_some() || r.child("moveFrom").is_some());

        let mut open = Open {
            setting: below.setting,
            ..Open::default()
        };
        if direct.page_before.or(below.page_before) == Some(true) {
            open.line.page(true);
        }
        let begin = self.fields.holds();
        if begin != Holds::Text {
            open.held = Some(begin);
        }
        self.inline(p, &mut open);
        self.fields.end_paragraph();

        let listed = direct.listed.or(below.listed) == Some(true);
        let role = match direct.role.or(below.role) {
            _ if around.contents || open.held == Some(Holds::Contents) => Role::Contents,
            Some(role) => role,
            None if listed => Role::ListItem,
            None => Role::Body,
        };
        let part = match open.held {
            Some(Holds::ReferenceList) => Some(Part::References),
            _ => around.part.or(below.part),
        };
        let mut paragraph = Paragraph {
            line: open.line,
            role,
            part,
            centred: direct.centred.or(below.centred) == Some(true),
        };
        if let Some(mut before) = ahead.take() {
            before.line.append(std::mem::take(&mut paragraph.line));
            paragraph.line = before.line;
        }
        if mark_deleted {
            *ahead = Some(paragraph);
        } else {
            out.push(Item::Paragraph(paragraph));
        }
        for note in open.notes {
            self.note(note, out);
        }
        for text_box in open.boxes {
            // Fields in a box do not go on from those around it.
            let outside = std::mem::take(&mut self.fields);
            self.blocks(text_box, out, Around::default());
            self.fields = outside;
        }
    }

    fn note(&mut self, note: Element<'t>, out: &mut Vec<Item>) {
        if self.in_note {
            return;
        }
        self.in_note = true;
        let outside = std::mem::take(&mut self.fields);
        let mut items = Vec::new();
        self.blocks(note, &mut items, Around::default());
        self.fields = outside;
        self.in_note = false;
        out.extend(lines(items).into_iter().filter(|l| !l.is_blank()).map(Item::Note));
    }

    /// Runs and what holds them.
    fn inline(&mut self, holder: Element<'t>, open: &mut Open<'t>) {
        for child in holder.children() {
            match child.name() {
                "r" => self.run(child, open),
                "fldSimple" => {
                    let held = holds(&child.attribute("instr").unwrap_or_default());
                    if held != Holds::Text {
                        open.held = Some(held);
                    }
                    self.inline(child, open);
                }
                "oMath" | "oMathPara" if self.fields.shown() => {
                    self.fields.fill();
                    omml::push(child, &mut open.line);
                }
                "sdt" => {
                    let around = control(child, Around::default());
                    if around.part == Some(Part::References) {
                        open.held = Some(Holds::ReferenceList);
                    }
                    if let Some(content) = child.child("sdtContent") {
                        self.inline(content, open);
                    }
                }
                "AlternateContent" => {
                    if let Some(choice) = choice(child) {
                        self.inline(choice, open);
                    }
                }
                "hyperlink" | "ins" | "moveTo" | "smartTag" | "customXml" | "dir" | "bdo" | "sdtContent"
                | "rubyBase" => self.inline(child, open),
                _ => {}
            }
        }
    }

    fn run(&mut self, run: Element<'t>, open: &mut Open<'t>) {
        let mut setting = open.setting;
        if let Some(properties) = run.child("rPr") {
            // A deletion can be noted in the run itself.
            if properties.child("del").is_some() || properties.child("moveFrom").is_some() {
                return;
            }
            if let Some(style) = properties.child("rStyle").and_then(|s| s.val()) {
                setting = self.styles.get(Some(&style)).setting.over(setting);
            }
            setting = styles::setting(properties).over(setting);
        }
        self.run_content(run, setting, open);
    }

    fn run_content(&mut self, run: Element<'t>, setting: Setting, open: &mut Open<'t>) {
        for child in run.children() {
            match child.name() {
                "t" => {
                    let mut text = String::new();
                    symbols::push(&child.text(), setting.font(), &mut text);
                    self.show(&text, setting, open);
                }
                "tab" | "ptab" | "cr" => self.show(" ", setting, open),
                "br" => match child.attribute("type").as_deref() {
                    Some("page") => open.line.page(true),
                    _ => self.show(" ", setting, open),
                },
                "lastRenderedPageBreak" => open.line.page(false),
                "noBreakHyphen" => self.show("-", setting, open),
                "sym" => self.show(&symbol_element(child), setting, open),
                "fldChar" => {
                    let kind = child.attribute("fldCharType").unwrap_or_default();
                    if let Some(shown) = self.fields.mark(&kind) {
                        self.show(shown.encode_utf8(&mut [0; 4]), setting, open);
                    }
                    if kind == "separate" && self.fields.holds() != Holds::Text {
                        open.held = Some(self.fields.holds());
                    }
                }
                "instrText" => self.fields.instruct(&child.text()),
                "footnoteReference" => self.refer("foot", child, open),
                "endnoteReference" => self.refer("end", child, open),
                "drawing" | "pict" | "object" => self.drawing(child, open),
                "AlternateContent" => {
                    if let Some(choice) = choice(child) {
                        self.run_content(choice, setting, open);
                    }
                }
                "ruby" => {
                    if let Some(base) = child.child("rubyBase") {
                        self.inline(base, open);
                    }
                }
                _ => {}
            }
        }
    }

    fn show(&mut self, text: &str, setting: Setting, open: &mut Open<'t>) {
        if !text.is_empty() && self.fields.shown() {
            self.fields.fill();
            open.line.push(text, setting.look());
        }
    }

    fn refer(&mut self, kind: &'static str, reference: Element<'t>, open: &mut Open<'t>) {
        let Some(id) = reference.number("id") else { return };
        let notes = if kind == "foot" {
            &self.notes.foot
        } else {
            &self.notes.end
        };
        if self.seen.insert((kind, id)) {
            open.notes.extend(notes.get(&id));
        }
    }

    /// Text boxes in a drawing, and equations of the old editors, which are objects.
    fn drawing(&mut self, drawing: Element<'t>, open: &mut Open<'t>) {
        let mut ahead = vec![drawing];
        while let Some(e) = ahead.pop() {
            match e.name() {
                "txbxContent" => open.boxes.push(e),
                "AlternateContent" => ahead.extend(choice(e)),
                "OLEObject" => {
                    let program = e.attribute("ProgID").unwrap_or_default();
                    self.equations += usize::from(program.starts_with("Equation"));
                }
                _ => {
                    let from = ahead.len();
                    ahead.extend(e.children());
                    ahead[from..].reverse();
                }
            }
        }
    }
}

/// What a content control says about what it holds.
fn control(sdt: Element<'_>, around: Around) -> Around {
    let Some(properties) = sdt.child("sdtPr") else {
        return around;
    };
    let gallery = properties
        .path(&["docPartObj", "docPartGallery"])
        .and_then(|g| g.val())
        .unwrap_or_default()
        .to_lowercase();
    let tag = properties
        .child("tag")
        .and_then(|t| t.val())
        .unwrap_or_default()
        .to_uppercase();
    let list = gallery.contains("bibliograph")
        || properties.child("bibliography").is_some()
        || tag.contains("BIBLIOGRAPHY") && !tag.contains("CITATION");
    Around {
        part: if list { Some(Part::References) } else { around.part },
        contents: around.contents || gallery.contains("table of contents"),
    }
}

//! Walks through the text of an OpenDocument file and makes the flow of it.

use super::styles::Styles;
use super::{formula, table};
use crate::manuscript::Part;
use crate::readers::office::flow::{Item, Paragraph, Role, lines};
use crate::readers::office::line::{Line, Look};
use crate::readers::office::setting::Setting;
use crate::readers::office::symbols;
use crate::readers::office::tree::Element;
use std::collections::{HashMap, HashSet};

/// What surrounds a block.
#[derive(Clone, Copy, Default)]
pub struct Around {
    pub part: Option<Part>,
    pub contents: bool,
    pub listed: bool,
}

/// Collects one paragraph.
#[derive(Default)]
struct Open<'t> {
    line: Line,
    notes: Vec<Element<'t>>,
    boxes: Vec<Element<'t>>,
}

/// Walks through an OpenDocument file.
pub struct Walker<'s> {
    styles: &'s Styles,
    formulas: &'s HashMap<String, String>,
    in_note: bool,
    /// The next paragraph begins on a new page; `true` if somebody asked for it.
    turn: Option<bool>,
    /// Something has been read, so that a page can end.
    begun: bool,
    /// Formulas already read: each object stands in one place.
    seen: HashSet<String>,
    /// Bytes that repeated rows and cells may still add to the document.
    spare: usize,
}

impl<'s> Walker<'s> {
    pub fn new(styles: &'s Styles, formulas: &'s HashMap<String, String>) -> Self {
        Walker {
            styles,
            formulas,
            in_note: false,
            turn: None,
            begun: false,
            seen: HashSet::new(),
            spare: 16 << 20,
        }
    }

    /// Appends everything in an element that holds blocks.
    pub fn blocks<'t>(&mut self, holder: Element<'t>, out: &mut Vec<Item>, around: Around) {
        for child in holder.children() {
            match child.name() {
                "p" | "h" => self.paragraph(child, out, around),
                "table" => table::push(&mut Inside { walker: self, around }, child, out),
                "list" => self.blocks(
                    child,
                    out,
                    Around {
                        listed: true,
                        ..around
                    },
                ),
                "section" if child.attribute("display").as_deref() == Some("none") => {}
                "bibliography" => self.blocks(
                    child,
                    out,
                    Around {
                        part: Some(Part::References),
                        ..around
                    },
                ),
                "table-of-content" | "illustration-index" | "table-index" | "object-index" | "user-index"
                | "alphabetical-index" => self.blocks(
                    child,
                    out,
                    Around {
                        contents: true,
                        ..around
                    },
                ),
                "list-item" | "list-header" | "section" | "numbered-paragraph" | "index-body"
                | "index-title" => {
                    self.blocks(child, out, around);
                }
                "soft-page-break" => self.turn = Some(false),
                "frame" | "g" | "custom-shape" | "rect" | "text-box" | "a" => {
                    let mut open = Open::default();
                    self.drawing(child, &mut open);
                    self.finish(open, Role::Body, around.part, false, out);
                }
                _ => {}
            }
        }
    }

    fn paragraph<'t>(&mut self, p: Element<'t>, out: &mut Vec<Item>, around: Around) {
        let name = p.attribute("style-name").unwrap_or_default();
        let style = self.styles.paragraph(&name);
        let mut open = Open::default();
        if style.page_before == Some(true) && self.begun {
            self.turn = Some(true);
        }
        if let Some(asked) = self.turn.take() {
            open.line.page(asked);
        }
        self.begun = true;
        self.inline(p, style.setting, &mut open);
        if style.page_after == Some(true) {
            self.turn = Some(true);
        }
        let role = if around.contents {
            Role::Contents
        } else if p.name() == "h" && !matches!(style.role, Some(Role::Title | Role::Caption)) {
            Role::Heading(p.number("outline-level").unwrap_or(1).clamp(1, 9) as u8)
        } else {
            match style.role {
                Some(role) => role,
                None if around.listed => Role::ListItem,
                None => Role::Body,
            }
        };
        let part = around.part.or(style.part);
        self.finish(open, role, part, style.centred == Some(true), out);
    }

    fn finish(&mut self, open: Open<'_>, role: Role, part: Option<Part>, centred: bool, out: &mut Vec<Item>) {
        out.push(Item::Paragraph(Paragraph {
            line: open.line,
            role,
            part,
            centred,
        }));
        for note in open.notes {
            if self.in_note {
                break;
            }
            self.in_note = true;
            let mut items = Vec::new();
            self.blocks(note, &mut items, Around::default());
            self.in_note = false;
            out.extend(lines(items).into_iter().filter(|l| !l.is_blank()).map(Item::Note));
        }
        for text_box in open.boxes {
            self.blocks(text_box, out, Around::default());
        }
    }

    /// Text and what holds it.
    fn inline<'t>(&mut self, holder: Element<'t>, setting: Setting, open: &mut Open<'t>) {
        for node in holder.nodes() {
            if node.is_text() {
                let mut text = String::new();
                symbols::push(&node.text(), setting.font(), &mut text);
                open.line.push(&text, setting.look());
                continue;
            }
            match node.name() {
                "span" => {
                    let name = node.attribute("style-name").unwrap_or_default();
                    let inner = self.styles.text(&name).over(setting);
                    self.inline(node, inner, open);
                }
                "s" | "tab" | "line-break" => open.line.push(" ", setting.look()),
                "soft-page-break" => open.line.page(false),
                "note" => open.notes.extend(node.child("note-body")),
                // Comments, text that is not shown, what stands above the line in ruby text.
                "annotation" | "annotation-end" | "hidden-text" | "hidden-paragraph" | "script"
                | "ruby-text" | "label" | "tracked-changes" => {}
                "frame" | "g" | "custom-shape" | "rect" | "ellipse" | "text-box" => self.drawing(node, open),
                "math" => open.line.push(&formula(node), Look::default()),
                _ => self.inline(node, setting, open),
            }
        }
    }

    /// Text boxes and formulas in a drawing. Pictures, their titles and descriptions are not text.
    fn drawing<'t>(&mut self, drawing: Element<'t>, open: &mut Open<'t>) {
        let mut ahead = vec![drawing];
        while let Some(e) = ahead.pop() {
            match e.name() {
                "object" => {
                    let named = e
                        .attribute("href")
                        .filter(|name| self.seen.insert(name.to_string()))
                        .and_then(|name| self.formulas.get(&*name));
                    let text = match (named, e.child("math")) {
                        (Some(text), _) => text.clone(),
                        (None, Some(math)) => formula(math),
                        (None, None) => continue,
                    };
                    open.line.push(&text, Look::default());
                }
                "title" | "desc" | "image" | "annotation" => {}
                _ if e
                    .children()
                    .any(|c| matches!(c.name(), "p" | "h" | "list" | "table")) =>
                {
                    open.boxes.push(e)
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

/// Reads the cells of a table that stands in these surroundings.
struct Inside<'w, 's> {
    walker: &'w mut Walker<'s>,
    around: Around,
}

impl<'t> table::Cells<'t> for Inside<'_, '_> {
    fn read(&mut self, cell: Element<'t>) -> Vec<Item> {
        let mut items = Vec::new();
        let around = Around {
            part: None,
            listed: false,
            ..self.around
        };
        self.walker.blocks(cell, &mut items, around);
        items
    }

    fn affords(&mut self, bytes: usize) -> bool {
        let rest = self.walker.spare.checked_sub(bytes);
        self.walker.spare = rest.unwrap_or(self.walker.spare);
        rest.is_some()
    }
}

//! Word files (`.docx`, `.docm`, `.dotx`): the text as it would be printed with all tracked
//! changes accepted and without comments.

mod body;
#[cfg(test)]
mod damage_tests;
mod fields;
mod omml;
mod styles;
mod table;
#[cfg(test)]
mod tests;

use super::Unreadable;
use super::office::tree::{Element, Tree};
use super::office::{flow, symbols};
use super::package::{Package, SAVE_AGAIN, damaged};
use crate::manuscript::{Builder, Format, Manuscript};
use body::{Notes, Walker};
use styles::Styles;

const NOUN: &str = "Word file";

/// Reads a Word file.
///
/// # Errors
/// Files that are damaged, encrypted, suspiciously packed or no Word documents, each with one line
/// for the person. A damaged part that only adds to the text (styles, footnotes) is a remark.
pub fn read(bytes: &[u8]) -> Result<Manuscript, Unreadable> {
    let mut package = Package::open(bytes, NOUN)?;
    let main = main_part(&mut package)?;
    let folder = main.rsplit_once('/').map_or("", |(folder, _)| folder).to_string();
    let text = package
        .part(&main)?
        .ok_or_else(|| damaged(NOUN, "its main part is missing"))?;
    let document = Tree::parse(&text).map_err(|e| damaged(NOUN, &format!("in its main part {e}")))?;
    let Some(content) = document.root().child("body") else {
        return Err(Unreadable::new(format!(
            "is not a Word document (its main part has no text body); {SAVE_AGAIN} as .docx"
        )));
    };

    let mut b = Builder::new(Format::Docx);
    let mut parts = Vec::new();
    for (relation, usual) in [
        ("styles", "styles.xml"),
        ("footnotes", "footnotes.xml"),
        ("endnotes", "endnotes.xml"),
    ] {
        let name = related(&mut package, &main, relation).unwrap_or_else(|| in_folder(&folder, usual));
        let text = package.part(&name).unwrap_or_else(|_| {
            b.remark(format!(
                "the {relation} of the file are damaged and were not read"
            ));
            None
        });
        parts.push((relation, text.unwrap_or_default()));
    }
    let trees: Vec<Option<Tree<'_>>> = parts
        .iter()
        .map(|(relation, text)| {
            let tree = (!text.is_empty()).then(|| Tree::parse(text))?;
            if tree.is_err() {
                b.remark(format!(
                    "the {relation} of the file are damaged and were not read"
                ));
            }
            tree.ok()
        })
        .collect();
    let root = |i: usize| trees[i].as_ref().map(Tree::root);
    let styles = root(0).map(Styles::read).unwrap_or_default();
    let notes = Notes::read(root(1), root(2));
    // Word records where its pages ended when it last laid the document out; others do not.
    let paged = memchr::memmem::find(text.as_bytes(), b"lastRenderedPageBreak").is_some();

    let mut walker = Walker::new(&styles, &notes);
    let mut items = Vec::new();
    walker.blocks(content, &mut items, body::Around::default());
    walker.remarks(&mut b);
    flow::write(&items, &mut b, paged);
    Ok(b.finish())
}

/// The name of the main part: the package's relations name it; without them its usual place.
fn main_part(package: &mut Package<'_>) -> Result<String, Unreadable> {
    const USUAL: &str = "word/document.xml";
    if let Some(relations) = package.part("_rels/.rels")?
        && let Ok(tree) = Tree::parse(&relations)
    {
        let found = tree.root().children().find_map(|r| {
            let kind = r.attribute("Type")?;
            kind.ends_with("/officeDocument").then(|| r.attribute("Target"))?
        });
        if let Some(target) = found
            && package.has(&in_folder("", &target))
        {
            return Ok(in_folder("", &target));
        }
    }
    if let Some(types) = package.part("[Content_Types].xml")?
        && let Ok(tree) = Tree::parse(&types)
    {
        let found = tree.root().children().find_map(|o| {
            let kind = o.attribute("ContentType")?;
            let main = kind.contains("wordprocessingml") && kind.ends_with(".main+xml")
                || kind.starts_with("application/vnd.ms-word") && kind.ends_with(".main+xml");
            main.then(|| o.attribute("PartName"))?
        });
        if let Some(name) = found
            && package.has(&name)
        {
            return Ok(in_folder("", &name));
        }
    }
    if package.has(USUAL) {
        return Ok(USUAL.to_string());
    }
    Err(Unreadable::new(format!(
        "is a zip file but not a Word document (it has no main part); {SAVE_AGAIN} as .docx"
    )))
}

/// The part of this kind that belongs to another part, by that part's relations.
fn related(package: &mut Package<'_>, part: &str, relation: &str) -> Option<String> {
    let (folder, file) = part.rsplit_once('/').unwrap_or(("", part));
    let relations = package
        .part(&in_folder(folder, &format!("_rels/{file}.rels")))
        .ok()??;
    let tree = Tree::parse(&relations).ok()?;
    let target = tree.root().children().find_map(|r| {
        let kind = r.attribute("Type")?;
        (kind.rsplit('/').next() == Some(relation)).then(|| r.attribute("Target"))?
    })?;
    let name = in_folder(folder, &target);
    package.has(&name).then_some(name)
}

/// A target as written in a relation of a part in `folder`, as a part name.
fn in_folder(folder: &str, target: &str) -> String {
    let mut steps: Vec<&str> = match target.strip_prefix('/') {
        Some(_) => Vec::new(),
        None => folder.split('/').filter(|s| !s.is_empty()).collect(),
    };
    for step in target.split('/') {
        match step {
            "" | "." => {}
            ".." => {
                steps.pop();
            }
            step => steps.push(step),
        }
    }
    steps.join("/")
}

/// The character of a symbol element.
fn symbol_element(sym: Element<'_>) -> String {
    let font = symbols::font(&sym.attribute("font").unwrap_or_default());
    let code = sym
        .attribute("char")
        .and_then(|c| u32::from_str_radix(&c, 16).ok());
    code.and_then(|code| symbols::element(font, code))
        .map(String::from)
        .unwrap_or_default()
}

/// Of an alternative, so many elements are looked at for something to read.
const LOOK_AHEAD: usize = 100_000;

/// Of several ways to store the same thing, the first that has something to read.
fn choice(alternatives: Element<'_>) -> Option<Element<'_>> {
    let readable = |e: &Element<'_>| {
        e.all()
            .take(LOOK_AHEAD)
            .any(|d| matches!(d.name(), "txbxContent" | "t" | "oMath" | "tbl"))
    };
    let choices = || {
        alternatives
            .children()
            .filter(|c| matches!(c.name(), "Choice" | "Fallback"))
    };
    choices().find(readable).or_else(|| choices().next())
}

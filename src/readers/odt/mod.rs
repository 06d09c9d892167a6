//! OpenDocument text files (`.odt`, `.ott`): the text as it stands with all tracked changes
//! accepted and without comments.

mod body;
mod styles;
mod table;
#[cfg(test)]
mod tests;

use super::Unreadable;
use super::mathml::Math;
use super::office::flow;
use super::office::tree::{Element, Tree};
use super::package::{Package, SAVE_AGAIN, damaged, locked};
use crate::manuscript::{Builder, Format, Manuscript};
use body::Walker;
use std::collections::HashMap;
use styles::Styles;

const NOUN: &str = "OpenDocument file";
/// Formulas beyond this number are not read.
const MOST_FORMULAS: usize = 10_000;

/// Reads an OpenDocument text.
///
/// # Errors
/// Files that are damaged, encrypted, suspiciously packed or no text documents, each with one line
/// for the person. Damaged styles are a remark.
pub fn read(bytes: &[u8]) -> Result<Manuscript, Unreadable> {
    let mut package = Package::open(bytes, NOUN)?;
    let manifest = package
        .part("META-INF/manifest.xml")
        .ok()
        .flatten()
        .unwrap_or_default();
    if manifest.contains("encryption-data") || package.has("encrypted-package") {
        return Err(locked());
    }
    let Some(text) = package.part("content.xml")? else {
        return Err(Unreadable::new(format!(
            "is a zip file but not an OpenDocument text (it has no content part); {SAVE_AGAIN} as .odt"
        )));
    };
    let document = Tree::parse(&text).map_err(|e| damaged(NOUN, &format!("in its content {e}")))?;
    let Some(content) = document.root().path(&["body", "text"]) else {
        return Err(Unreadable::new(format!(
            "is not an OpenDocument text (it has no text body, as a table sheet or slides have none); {SAVE_AGAIN} \
             as .odt"
        )));
    };
    let mut b = Builder::new(Format::Odt);
    let common = package.part("styles.xml").unwrap_or_else(|_| {
        b.remark("the styles of the file are damaged and were not read");
        None
    });
    let common = common.unwrap_or_default();
    let common = match Tree::parse(&common) {
        Ok(tree) => tree,
        Err(_) => {
            b.remark("the styles of the file are damaged and were not read");
            Tree::default()
        }
    };
    let styles = Styles::read(common.root(), document.root());
    let formulas = formulas(&mut package, document.root());
    let paged = memchr::memmem::find(text.as_bytes(), b"soft-page-break")
        .is_some_and(|_| document.root().all().any(|e| e.name() == "soft-page-break"));

    let mut walker = Walker::new(&styles, &formulas);
    let mut items = Vec::new();
    walker.blocks(content, &mut items, body::Around::default());
    flow::write(&items, &mut b, paged);
    Ok(b.finish())
}

/// The formulas of the document as lines of text, by the name of the object that holds each.
fn formulas(package: &mut Package<'_>, document: Element<'_>) -> HashMap<String, String> {
    let mut found = HashMap::new();
    for object in document.all().filter(|e| e.name() == "object") {
        let Some(name) = object.attribute("href") else {
            continue;
        };
        if found.len() >= MOST_FORMULAS || found.contains_key(&*name) {
            continue;
        }
        let part = format!(
            "{}/content.xml",
            name.trim_start_matches("./").trim_end_matches('/')
        );
        // An object that cannot be read, or is a chart, is no text.
        let Ok(Some(content)) = package.part(&part) else {
            continue;
        };
        if let Ok(tree) = Tree::parse(&content)
            && tree.root().name() == "math"
        {
            found.insert(name.into_owned(), formula(tree.root()));
        }
    }
    found
}

/// A formula as text.
fn formula(math: Element<'_>) -> String {
    fn walk(e: Element<'_>, math: &mut Math) {
        for node in e.nodes() {
            if node.is_text() {
                math.text(&node.text());
            } else {
                math.start(node.name(), |a| node.attribute(a).map(|v| v.into_owned()));
                walk(node, math);
                math.end();
            }
        }
    }
    let mut reading = Math::new();
    walk(math, &mut reading);
    let mut b = Builder::new(Format::Odt);
    reading.finish(&mut b);
    b.finish().text.trim().to_string()
}

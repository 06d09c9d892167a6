//! Entities that an XML file declares or uses without declaring them.
//!
//! Declared entities are replaced by their text once: an entity inside an entity is not, so that
//! no file can grow by its declarations. Entities of an external DTD are known by their usual
//! names (see [`crate::readers::entities`]).

use crate::manuscript::Builder;
use crate::readers::entities::{numbered, predefined};
use std::borrow::Cow;
use std::collections::HashMap;

/// At most this much text is taken from declared entities.
const LARGEST_EXPANSION: usize = 1 << 20;

/// At most this many declarations are looked at.
const MOST_DECLARATIONS: usize = 10_000;

#[derive(Default)]
pub(super) struct Declared<'a> {
    entities: HashMap<&'a str, Cow<'a, str>>,
    spent: usize,
    unknown: Vec<String>,
}

impl<'a> Declared<'a> {
    /// Reads the internal subset of a DTD.
    pub(super) fn read(&mut self, dtd: Cow<'a, str>) {
        let Cow::Borrowed(mut rest) = dtd else { return };
        while let Some(at) = rest.find("<!ENTITY") {
            rest = &rest[at + "<!ENTITY".len()..];
            if self.entities.len() >= MOST_DECLARATIONS {
                return;
            }
            let declaration = rest.trim_start();
            let Some(name_end) = declaration.find(|c: char| c.is_whitespace()) else {
                return;
            };
            let (name, value) = declaration.split_at(name_end);
            let value = value.trim_start();
            // Parameter entities and entities in other files have no text here.
            let Some(quote) = value.chars().next().filter(|c| matches!(c, '"' | '\'')) else {
                continue;
            };
            let Some(text) = value[1..].split(quote).next() else {
                continue;
            };
            // Everything up to the closing quote belongs to this declaration.
            rest = &value[1 + text.len()..];
            if let Some(text) = plain(text) {
                // The first declaration of a name holds.
                self.entities.entry(name).or_insert(text);
            }
        }
    }

    /// The text of a declared entity.
    pub(super) fn text(&mut self, name: &str) -> Option<Cow<'a, str>> {
        if self.entities.is_empty() {
            return None;
        }
        let text = self.entities.get(name)?.clone();
        self.spent += text.len();
        (self.spent <= LARGEST_EXPANSION).then_some(text)
    }

    /// An entity has been met that is neither declared nor known.
    pub(super) fn unknown(&mut self, name: &str) {
        if self.unknown.len() < 20 && !self.unknown.iter().any(|n| n == name) {
            self.unknown.push(name.chars().take(40).collect());
        }
    }

    pub(super) fn remark_unknown(&self, b: &mut Builder) {
        if !self.unknown.is_empty() {
            b.remark(format!(
                "characters named {} in the file are not known and were left out",
                self.unknown.join(", ")
            ));
        }
    }
}

/// The text of a declaration, unless it contains markup or further entities.
fn plain(text: &str) -> Option<Cow<'_, str>> {
    if text.contains('<') {
        return None;
    }
    if !text.contains('&') {
        return Some(Cow::Borrowed(text));
    }
    let mut out = String::new();
    let mut rest = text;
    while let Some(at) = rest.find('&') {
        out.push_str(&rest[..at]);
        let (name, after) = rest[at + 1..].split_once(';')?;
        match name.strip_prefix('#') {
            Some(number) => out.push(numbered(number)?),
            None => out.push_str(predefined(name)?),
        }
        rest = after;
    }
    out.push_str(rest);
    Some(Cow::Owned(out))
}

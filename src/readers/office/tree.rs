//! An XML part as a *tree* that borrows from the part's text. Names are local names: documents
//! that follow the strict and the transitional standard differ in their namespaces only.
//!
//! Entities that a document type might define are not expanded, and nesting is limited, so
//! reading takes time and memory in proportion to the text.

use crate::readers::entities;
use quick_xml::Reader;
use quick_xml::events::Event;
use std::borrow::Cow;

/// The deepest nesting that is read. Real documents stay below 60.
pub const DEEPEST: usize = 1000;
/// The most nodes one part may have; each takes 48 bytes.
pub const MOST_NODES: usize = 20_000_000;

const NONE: u32 = u32::MAX;

#[derive(Clone, Copy, PartialEq)]
enum Kind {
    Element,
    Text,
    /// A character reference or a predefined entity; `content` is its name.
    Reference,
}

struct Node<'a> {
    /// Local name; empty for text.
    name: &'a str,
    /// The attributes of an element as written, or text.
    content: &'a str,
    first_child: u32,
    next: u32,
    kind: Kind,
}

/// The tree of one part.
pub struct Tree<'a> {
    nodes: Vec<Node<'a>>,
}

/// An element or a piece of text of a [`Tree`].
#[derive(Clone, Copy)]
pub struct Element<'t> {
    nodes: &'t [Node<'t>],
    at: u32,
}

impl Default for Tree<'_> {
    /// The tree of an empty part.
    fn default() -> Self {
        Tree {
            nodes: vec![Node {
                name: "",
                content: "",
                first_child: NONE,
                next: NONE,
                kind: Kind::Element,
            }],
        }
    }
}

impl<'a> Tree<'a> {
    /// Reads a part.
    ///
    /// # Errors
    /// What is wrong with it, as words that fit into a bracket.
    pub fn parse(source: &'a str) -> Result<Tree<'a>, String> {
        let source = source.trim_start_matches('\u{feff}');
        let mut reader = Reader::from_str(source);
        reader.config_mut().allow_dangling_amp = true;
        let mut nodes: Vec<Node<'a>> = Vec::with_capacity(source.len() / 24);
        // The open elements, each with its last child so far.
        let mut open: Vec<(u32, u32)> = vec![(0, NONE)];
        nodes.push(Node {
            name: "",
            content: "",
            first_child: NONE,
            next: NONE,
            kind: Kind::Element,
        });
        loop {
            let from = reader.buffer_position() as usize;
            let event = reader
                .read_event()
                .map_err(|_| format!("its text stops making sense at byte {}", from + 1))?;
            let to = reader.buffer_position() as usize;
            let (kind, name, content, opens) = match event {
                Event::Start(_) | Event::Empty(_) => {
                    let (name, attributes) = split_tag(source.get(from..to).unwrap_or(""));
                    (Kind::Element, name, attributes, matches!(event, Event::Start(_)))
                }
                Event::End(_) => {
                    open.pop();
                    if open.is_empty() {
                        return Err("it closes more than it opened".to_string());
                    }
                    continue;
                }
                Event::Text(_) => (Kind::Text, "", source.get(from..to).unwrap_or(""), false),
                Event::CData(_) => {
                    let all = source.get(from..to).unwrap_or("");
                    let inner = all.strip_prefix("<![CDATA[").and_then(|t| t.strip_suffix("]]>"));
                    (Kind::Text, "", inner.unwrap_or(""), false)
                }
                Event::GeneralRef(_) => {
                    let all = source.get(from..to).unwrap_or("");
                    let name = all.trim_start_matches('&').trim_end_matches(';');
                    (Kind::Reference, "", name, false)
                }
                Event::Eof => break,
                Event::Comment(_) | Event::Decl(_) | Event::PI(_) | Event::DocType(_) => continue,
            };
            if nodes.len() >= MOST_NODES {
                return Err("it has too many elements".to_string());
            }
            let at = nodes.len() as u32;
            nodes.push(Node {
                name,
                content,
                first_child: NONE,
                next: NONE,
                kind,
            });
            if let Some((parent, last)) = open.last_mut() {
                match *last {
                    NONE => nodes[*parent as usize].first_child = at,
                    last => nodes[last as usize].next = at,
                }
                *last = at;
            }
            if opens {
                if open.len() > DEEPEST {
                    return Err(format!("its elements are nested more than {DEEPEST} deep"));
                }
                open.push((at, NONE));
            }
        }
        if open.len() > 1 {
            return Err("its end is missing".to_string());
        }
        Ok(Tree { nodes })
    }

    /// The outermost element; an empty part has one without name.
    pub fn root(&self) -> Element<'_> {
        let all = Element {
            nodes: &self.nodes,
            at: 0,
        };
        all.children().next().unwrap_or(all)
    }
}

/// Local name and attributes of a start tag.
fn split_tag(tag: &str) -> (&str, &str) {
    let inner = tag.trim_start_matches('<').trim_end_matches('>');
    let inner = inner.strip_suffix('/').unwrap_or(inner);
    let end = inner
        .find(|c: char| c.is_ascii_whitespace())
        .unwrap_or(inner.len());
    let (name, attributes) = inner.split_at(end);
    (local(name), attributes)
}

fn local(name: &str) -> &str {
    name.rsplit_once(':').map_or(name, |(_, local)| local)
}

impl<'t> Element<'t> {
    fn node(&self) -> &'t Node<'t> {
        &self.nodes[self.at as usize]
    }

    /// Local name; empty for text.
    pub fn name(&self) -> &'t str {
        self.node().name
    }

    /// Whether this is text, not an element.
    pub fn is_text(&self) -> bool {
        self.node().kind != Kind::Element
    }

    /// Elements and text in it, in order.
    pub fn nodes(&self) -> impl Iterator<Item = Element<'t>> + use<'t> {
        let nodes = self.nodes;
        let mut at = self.node().first_child;
        std::iter::from_fn(move || {
            if at == NONE {
                return None;
            }
            let found = Element { nodes, at };
            at = nodes[at as usize].next;
            Some(found)
        })
    }

    /// Elements in it, in order.
    pub fn children(&self) -> impl Iterator<Item = Element<'t>> + use<'t> {
        self.nodes().filter(|n| !n.is_text())
    }

    /// The first element of this name in it.
    pub fn child(&self, name: &str) -> Option<Element<'t>> {
        self.children().find(|c| c.name() == name)
    }

    /// The element reached by these names, each the first of its name in the one before.
    pub fn path(&self, names: &[&str]) -> Option<Element<'t>> {
        names.iter().try_fold(*self, |at, name| at.child(name))
    }

    /// Itself and everything below it, in document order.
    pub fn all(&self) -> impl Iterator<Item = Element<'t>> + use<'t> {
        let mut ahead = vec![*self];
        std::iter::from_fn(move || {
            let found = ahead.pop()?;
            let from = ahead.len();
            ahead.extend(found.children());
            ahead[from..].reverse();
            Some(found)
        })
    }

    /// Whether elements below it are nested deeper than this.
    pub fn is_deeper_than(&self, limit: usize) -> bool {
        let mut ahead = vec![(*self, 0)];
        while let Some((e, depth)) = ahead.pop() {
            if depth > limit {
                return true;
            }
            ahead.extend(e.children().map(|c| (c, depth + 1)));
        }
        false
    }

    /// The value of the attribute with this local name.
    pub fn attribute(&self, wanted: &str) -> Option<Cow<'t, str>> {
        if self.is_text() {
            return None;
        }
        let mut rest = self.node().content;
        loop {
            let (name, after) = rest.split_once('=')?;
            let after = after.trim_start();
            let quote = after.chars().next().filter(|c| matches!(c, '"' | '\''))?;
            let (value, after) = after[1..].split_once(quote)?;
            if local(name.trim()) == wanted {
                return Some(quick_xml::escape::unescape(value).unwrap_or(Cow::Borrowed(value)));
            }
            rest = after;
        }
    }

    /// The `val` attribute, where Word keeps nearly everything.
    pub fn val(&self) -> Option<Cow<'t, str>> {
        self.attribute("val")
    }

    /// An attribute as a whole number.
    pub fn number(&self, name: &str) -> Option<i64> {
        self.attribute(name)?.trim().parse().ok()
    }

    /// Appends the text of this node, if it is text, or of everything below it.
    pub fn push_text(&self, out: &mut String) {
        let node = self.node();
        match node.kind {
            Kind::Text => out.push_str(node.content),
            Kind::Reference => out.extend(referenced(node.content)),
            Kind::Element => {
                let mut ahead: Vec<Element<'t>> = Vec::new();
                let mut next = Some(*self);
                while let Some(at) = next {
                    if at.is_text() {
                        at.push_text(out);
                    } else {
                        let from = ahead.len();
                        ahead.extend(at.nodes());
                        ahead[from..].reverse();
                    }
                    next = ahead.pop();
                }
            }
        }
    }

    /// The text of this node and everything below it.
    pub fn text(&self) -> String {
        let mut out = String::new();
        self.push_text(&mut out);
        out
    }
}

/// The character a reference stands for; entities of the document's own are left out.
fn referenced(name: &str) -> Option<char> {
    match name.strip_prefix('#') {
        Some(number) => entities::numbered(number),
        // An ampersand alone is meant as one.
        None if name.is_empty() => Some('&'),
        None => entities::predefined(name)?.chars().next(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_attributes_and_text() {
        let tree = Tree::parse(
            "\u{feff}<?xml version='1.0'?><w:p a:id = \"1\" w:val='x &lt; &#x3c7;'><w:r>p &lt; .05 &#961;<!-- no --></w:r>\
             <t/><![CDATA[a < b]]></w:p>",
        )
        .unwrap();
        let p = tree.root();
        assert_eq!(p.name(), "p");
        assert_eq!(p.attribute("id").as_deref(), Some("1"));
        assert_eq!(p.val().as_deref(), Some("x < χ"));
        assert_eq!(p.attribute("none"), None);
        assert_eq!(p.child("r").unwrap().text(), "p < .05 ρ");
        assert_eq!(p.text(), "p < .05 ρa < b");
        let names: Vec<_> = p.all().map(|e| e.name()).collect();
        assert_eq!(names, ["p", "r", "t"]);
    }

    #[test]
    fn broken_parts_say_where() {
        let said = |s| Tree::parse(s).map(|_| ()).unwrap_err();
        assert_eq!(said("<a><b></b>"), "its end is missing");
        assert_eq!(said("<a></b></a>"), "its text stops making sense at byte 4");
        assert_eq!(
            said(&"<a>".repeat(1002)),
            "its elements are nested more than 1000 deep"
        );
    }

    #[test]
    fn entities_of_the_document_are_not_expanded() {
        let bomb = "<!DOCTYPE a [<!ENTITY b \"bbbb\"><!ENTITY c \"&b;&b;&b;\">]><a>x&c;y</a>";
        assert_eq!(Tree::parse(bomb).unwrap().root().text(), "xy");
    }
}

//! *Forms* are ways of writing results in which a number comes before its name or needs none:
//! `12/34 (35%)`. Each is a short pattern of slots, marks and words, from `grammars/forms.toml`.

use super::Scan;
use super::tokens::Kind;
use super::values::{Company, Value};

#[derive(Debug)]
enum Element {
    Slot(&'static str),
    /// One of these marks or words, in lower case.
    Literal {
        any: Vec<String>,
        optional: bool,
    },
    /// Up to so many words.
    Words(usize),
    /// One of these marks must follow; it stays outside.
    Ahead(Vec<String>),
}

/// One compiled pattern.
#[derive(Debug)]
pub struct Form {
    elements: Vec<Element>,
}

impl Form {
    /// Compiles a pattern; `name` gives symbols their names.
    ///
    /// # Errors
    /// A line saying what is wrong with the pattern.
    pub fn compile(pattern: &str, name: &mut dyn FnMut(&str) -> &'static str) -> Result<Form, String> {
        let mut elements = Vec::new();
        for part in pattern.split_whitespace() {
            elements.push(
                if let Some(inner) = part.strip_prefix('{').and_then(|p| p.strip_suffix('}')) {
                    Element::Slot(name(inner))
                } else if let Some(marks) = part.strip_prefix('&').filter(|m| !m.is_empty()) {
                    Element::Ahead(marks.split('|').map(str::to_lowercase).collect())
                } else if let Some(count) = part.strip_prefix("..") {
                    Element::Words(
                        count
                            .parse()
                            .map_err(|_| format!("form {pattern:?}: {part:?} needs a number"))?,
                    )
                } else {
                    let (optional, rest) = match part.strip_prefix('?') {
                        Some(rest) if !rest.is_empty() => (true, rest),
                        _ => (false, part),
                    };
                    Element::Literal {
                        any: rest.split('|').map(str::to_lowercase).collect(),
                        optional,
                    }
                },
            );
        }
        match elements.first() {
            Some(Element::Slot(_)) if elements.len() > 1 => Ok(Form { elements }),
            _ => Err(format!("form {pattern:?} must begin with a {{symbol}} and go on")),
        }
    }

    pub fn len(&self) -> usize {
        self.elements.len()
    }

    /// Matches the pattern at token `at`: the numbers of its slots and the token behind.
    pub(crate) fn at(&self, scan: &Scan, at: usize) -> Option<(Vec<(&'static str, Value)>, usize)> {
        let mut slots = Vec::new();
        let next = self.from(scan, 0, at, &mut slots)?;
        Some((slots, next))
    }

    fn from(
        &self,
        scan: &Scan,
        element: usize,
        at: usize,
        slots: &mut Vec<(&'static str, Value)>,
    ) -> Option<usize> {
        let Some(this) = self.elements.get(element) else {
            return Some(at);
        };
        match this {
            Element::Slot(symbol) => {
                let company = if matches!(*symbol, "count" | "n" | "N") {
                    Company::Whole
                } else {
                    Company::Single
                };
                let value = scan.value(at, company)?;
                let next = value.next;
                slots.push((symbol, value));
                let done = self.from(scan, element + 1, next, slots);
                if done.is_none() {
                    slots.pop();
                }
                done
            }
            Element::Literal { any, optional } => {
                for literal in any {
                    if let Some(next) = literal_at(scan, literal, at)
                        && let Some(done) = self.from(scan, element + 1, next, slots)
                    {
                        return Some(done);
                    }
                }
                if *optional {
                    self.from(scan, element + 1, at, slots)
                } else {
                    None
                }
            }
            Element::Ahead(any) => any
                .iter()
                .any(|literal| literal_at(scan, literal, at).is_some())
                .then(|| self.from(scan, element + 1, at, slots))
                .flatten(),
            Element::Words(most) => (0..=*most).find_map(|count| {
                let all_words = (at..at + count).all(|i| scan.word(i).is_some());
                if all_words {
                    self.from(scan, element + 1, at + count, slots)
                } else {
                    None
                }
            }),
        }
    }
}

/// The token behind the literal, which may be several tokens in the text (`d.f.`).
fn literal_at(scan: &Scan, literal: &str, at: usize) -> Option<usize> {
    let mut rest = literal;
    let mut i = at;
    while !rest.is_empty() {
        let token = scan.tokens.get(i)?;
        if i > at && token.spaced {
            return None;
        }
        let shown = token.text(scan.text);
        let same = rest.len() >= shown.len()
            && rest.is_char_boundary(shown.len())
            && rest[..shown.len()].eq_ignore_ascii_case(shown)
            && (token.kind != Kind::Word || !rest[shown.len()..].starts_with(char::is_alphabetic));
        if !same {
            return None;
        }
        rest = &rest[shown.len()..];
        i += 1;
    }
    Some(i)
}

//! *Links* and what else stands in brackets: images, citations, references to notes, attributes.

use super::inline::{Node, Scanner};
use std::collections::HashMap;

impl Scanner<'_> {
    /// Links, images, citations and references to notes.
    pub(super) fn bracket(&mut self, at: usize) -> Option<usize> {
        let image = self.text.as_bytes()[at] == b'!';
        let open = at + usize::from(image);
        if self.text.as_bytes().get(open) != Some(&b'[') {
            return None;
        }
        let close = *self.brackets.get(&open)?;
        let inner = &self.text[open + 1..close];
        if inner.starts_with('^') && !inner.contains(char::is_whitespace) && inner.len() > 1 && !image {
            self.notes.push((at, inner));
            return Some(close + 1);
        }
        if !image && inner.len() < 5000 && is_citation(inner) {
            return Some(close + 1);
        }
        let rest = &self.text[close + 1..];
        if rest.starts_with('(') {
            let end = link_target(rest, inner, image)?;
            self.behind.insert(close, self.skip_attributes(close + 1 + end));
            return Some(open + 1);
        }
        if rest.starts_with('{') {
            let end = self.skip_attributes(close + 1);
            if end > close + 1 {
                self.behind.insert(close, end);
                return Some(open + 1);
            }
        }
        if rest.starts_with('[') {
            let second = *self.brackets.get(&(close + 1))?;
            let id = match &self.text[close + 2..second] {
                "" => inner,
                id => id,
            };
            if id.len() < 1000 && self.references.contains(&id.to_lowercase()) {
                self.behind.insert(close, second + 1);
                return Some(open + 1);
            }
        } else if inner.len() < 1000 && self.references.contains(&inner.to_lowercase()) {
            self.behind.insert(close, close + 1);
            return Some(open + 1);
        }
        None
    }

    /// `@key` names a source, `@fig-key` something in the document.
    pub(super) fn citation(&mut self, at: usize) -> Option<usize> {
        let before = self.text[..at].chars().next_back();
        if before.is_some_and(|c| c.is_alphanumeric() || c == '.' || c == '_') {
            return None;
        }
        let rest = &self.text[at + 1..];
        if !rest.starts_with(|c: char| c.is_alphabetic() || matches!(c, '_' | '{')) {
            return None;
        }
        let length = match rest.strip_prefix('{') {
            Some(inner) => inner.find('}')? + 2,
            None => {
                let end = rest
                    .find(|c: char| !(c.is_alphanumeric() || "_:.-/+#".contains(c)))
                    .unwrap_or(rest.len());
                rest[..end].trim_end_matches(['.', ':', '-', '/', '+', '#']).len()
            }
        };
        let key = &rest[..length];
        if ["fig-", "tbl-", "sec-", "eq-", "fig:", "tbl:", "tab:", "eq:"]
            .iter()
            .any(|p| key.starts_with(p))
        {
            self.nodes.push(Node::Char(at, '…'));
        }
        let end = at + 1 + length;
        // `@key [p. 3]`
        let bare = self.text[end..].trim_start_matches(' ');
        let open = self.text.len() - bare.len();
        if let Some(close) = self.brackets.get(&open)
            && ["[p.", "[pp.", "[chap", "[see", "[sec"]
                .iter()
                .any(|p| bare.starts_with(p))
        {
            return Some(close + 1);
        }
        Some(end)
    }

    /// The position behind `{#id .class key=value}`, if that stands at `at`.
    pub(super) fn skip_attributes(&self, at: usize) -> usize {
        match attributes(&self.text[at..]) {
            Some(length) => at + length,
            None => at,
        }
    }
}

/// The length of `{#id .class key=value}` at the beginning of the text.
pub(super) fn attributes(text: &str) -> Option<usize> {
    let inner = text.strip_prefix('{')?;
    let end = inner.bytes().take(300).position(|b| b == b'}')?;
    let fine = inner[..end].split_whitespace().all(|word| {
        word.starts_with(['#', '.', '=']) || word == "-" || word.contains('=') || word.ends_with(['"', '\''])
    });
    fine.then_some(end + 2)
}

/// Whether the text between brackets cites: `@key`, `see @key, p. 3; -@other`.
fn is_citation(inner: &str) -> bool {
    memchr::memchr_iter(b'@', inner.as_bytes()).any(|at| {
        let before = inner[..at].chars().next_back();
        before.is_none_or(|c| c.is_whitespace() || matches!(c, '-' | ';' | '[' | '('))
            && inner[at + 1..].starts_with(|c: char| c.is_alphanumeric() || matches!(c, '_' | '{'))
    })
}

/// The length of `(target "title")`, if it is one. A pair of parentheses behind a confidence
/// interval is not.
fn link_target(rest: &str, words: &str, image: bool) -> Option<usize> {
    let bytes = rest.as_bytes();
    let mut depth = 0;
    let mut end = None;
    for (i, b) in bytes.iter().enumerate().take(3000) {
        match b {
            b'(' => depth += 1,
            b')' => {
                depth -= 1;
                if depth == 0 {
                    end = Some(i);
                    break;
                }
            }
            _ => {}
        }
    }
    let end = end?;
    let target = rest[1..end].trim();
    let address = match target.find([' ', '\n']) {
        Some(space) => {
            let title = target[space..].trim();
            let quoted = title.starts_with(['"', '\'', '(']) && title.ends_with(['"', '\'', ')']);
            if !quoted && !target.starts_with('<') {
                return None;
            }
            &target[..space]
        }
        None => target,
    };
    let plausible = image || address.contains(['/', '#', '@']) || words.contains(char::is_alphabetic);
    plausible.then_some(end + 1)
}

/// Every opening bracket with its partner.
pub(super) fn brackets(text: &str) -> HashMap<usize, usize> {
    let bytes = text.as_bytes();
    let mut pairs = HashMap::new();
    let mut open = Vec::new();
    let mut skip = 0;
    for at in memchr::memchr3_iter(b'[', b']', b'\\', bytes) {
        if at < skip {
            continue;
        }
        match bytes[at] {
            b'\\' => skip = at + 2,
            b'[' => open.push(at),
            _ => {
                if let Some(start) = open.pop() {
                    pairs.insert(start, at);
                }
            }
        }
    }
    pairs
}

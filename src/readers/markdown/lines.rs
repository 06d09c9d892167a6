//! What a *line* of Markdown is by its look: a heading, the beginning of an item, a fence, a
//! definition, a caption …

use super::inline::Source;
use super::links::attributes;
use std::collections::{HashMap, HashSet};

/// Links defined anywhere in the file: `[name]: address`.
pub(super) fn references(lines: &[&str]) -> HashSet<String> {
    let mut found = HashSet::new();
    for line in lines {
        if let Some((name, _)) = definition(line).filter(|(name, _)| !name.starts_with('^')) {
            found.insert(name.to_lowercase());
        }
    }
    found
}

/// Notes defined anywhere in the file, with the index of their first line: `[^name]: text`.
pub(super) fn notes(lines: &[&str]) -> HashMap<String, usize> {
    let mut found = HashMap::new();
    for (i, line) in lines.iter().enumerate() {
        if let Some(name) = definition(line).and_then(|(name, _)| name.strip_prefix('^')) {
            found.entry(name.to_string()).or_insert(i);
        }
    }
    found
}

/// `[name]: rest`
pub(super) fn definition(line: &str) -> Option<(&str, &str)> {
    let indent = line.bytes().take_while(|b| *b == b' ').count();
    let inner = line[indent..].strip_prefix('[').filter(|_| indent <= 3)?;
    let (name, rest) = inner.split_once("]:")?;
    let known = !name.is_empty() && !name.contains(['[', ']']) && name.len() < 200;
    // `[F(1, 61) = 4.40]: that is` defines nothing: an address is one word, and a title is quoted.
    let (address, title) = rest.trim().split_once([' ', '\t']).unwrap_or((rest.trim(), ""));
    let plausible = name.starts_with('^')
        || (address.contains(['/', '#', '.', '@', '<'])
            && (title.is_empty() || title.trim().starts_with(['"', '\'', '('])));
    (known && plausible).then_some((name, rest))
}

/// The kind of item a line begins, and the length of its marker.
pub(super) fn list_marker(line: &str) -> Option<usize> {
    let indent = line.len() - line.trim_start().len();
    let rest = &line[indent..];
    let bytes = rest.as_bytes();
    let marker = match bytes.first()? {
        b'-' | b'*' | b'+' => 1,
        b'0'..=b'9' | b'#' | b'(' | b'a'..=b'z' | b'A'..=b'Z' => {
            let open = usize::from(bytes[0] == b'(');
            let label = bytes[open..]
                .iter()
                .take_while(|b| b.is_ascii_alphanumeric() || matches!(b, b'@' | b'#'))
                .count();
            let text = &rest[open..open + label];
            let number = text.len() <= 9 && text.bytes().all(|b| b.is_ascii_digit());
            let roman = text.len() <= 4 && text.bytes().all(|b| matches!(b, b'i' | b'v' | b'x'));
            let letter = text.len() == 1 && text != "p" && text != "F";
            let example = text.starts_with('@') || text == "#";
            if text.is_empty() || !(number || roman || letter || example) {
                return None;
            }
            let close = *bytes.get(open + label)?;
            if close != b')' && (open == 1 || close != b'.') {
                return None;
            }
            // `p. 3` and `M. Rake` are not items: letters want two spaces or a parenthesis.
            let wide = close == b')' || number || text == "#" || rest[open + label + 1..].starts_with("  ");
            if !wide {
                return None;
            }
            open + label + 1
        }
        _ => return None,
    };
    let after = &rest[marker..];
    let space = after.len() - after.trim_start().len();
    (space > 0 && !after.trim().is_empty()).then_some(indent + marker + space)
}

/// The fence a line opens: its mark and length.
pub(super) fn fence(line: &str) -> Option<(u8, usize)> {
    let bare = line.trim_start();
    let mark = *bare.as_bytes().first()?;
    if mark != b'`' && mark != b'~' {
        return None;
    }
    let run = bare.bytes().take_while(|b| *b == mark).count();
    (run >= 3 && !(mark == b'`' && bare[run..].contains('`'))).then_some((mark, run))
}

pub(super) fn atx(line: &str) -> Option<(u8, &str)> {
    let indent = line.len() - line.trim_start().len();
    let bare = &line[indent..];
    let level = bare.bytes().take_while(|b| *b == b'#').count();
    if !(1..=6).contains(&level) || indent > 3 || !bare[level..].starts_with([' ', '\t']) {
        return None;
    }
    let mut title = bare[level..].trim();
    if let Some(open) = title.rfind('{')
        && attributes(&title[open..]) == Some(title.len() - open)
    {
        title = title[..open].trim_end();
    }
    let title = title.trim_end_matches('#').trim();
    (!title.is_empty()).then_some((level as u8, title))
}

pub(super) fn is_rule(line: &str) -> bool {
    let mut marks = line.chars().filter(|c| !c.is_whitespace());
    let Some(first) = marks.next() else { return false };
    matches!(first, '*' | '-' | '_') && marks.clone().count() >= 2 && marks.all(|c| c == first)
}

/// `Table 2` at the beginning of a caption.
pub(super) fn label(text: &str) -> Option<String> {
    let bare = text.trim_start_matches(['*', '_', ' ', ':']);
    let word = ["Table", "Tabelle", "Tabla", "Tableau", "Tabela", "Tabella"]
        .iter()
        .find(|w| bare.starts_with(**w))?;
    let rest = bare[word.len()..].trim_start_matches([' ', '\u{a0}']);
    let end = rest
        .find(|c: char| !(c.is_ascii_alphanumeric() || matches!(c, '-' | '.')))
        .unwrap_or(rest.len());
    let number = rest[..end].trim_end_matches(['.', '-']);
    let printed = number.len() <= 6 && number.contains(|c: char| c.is_ascii_digit());
    let spaced = bare.len() > word.len() + rest.len();
    (printed && spaced).then(|| format!("{word} {number}"))
}

/// Whether a display formula is open at the end of the line.
pub(super) fn opens_formula(line: &str, open: bool) -> bool {
    open ^ (line.matches("$$").count() % 2 == 1)
}

/// Indented lines that are code or what a program printed.
pub(super) fn is_code(bare: &str) -> bool {
    bare.starts_with(['#', '>', '$', '[', '{', '}', '\\'])
        || [
            "<-",
            "library(",
            "%>%",
            "|>",
            "();",
            "= function",
            "import ",
            "return ",
        ]
        .iter()
        .any(|m| bare.contains(m))
        || bare.ends_with([';', '{'])
}

/// `(\#tab:x)` and `{#tbl-x}` in captions.
pub(super) fn strip_marks(text: &mut String) {
    if let Some(rest) = text.trim_start().strip_prefix("(\\#")
        && let Some(end) = rest.find(')')
    {
        *text = rest[end + 1..].trim_start().to_string();
    }
    if let Some(open) = text.rfind('{')
        && attributes(&text[open..]) == Some(text.len() - open)
    {
        text.truncate(open);
    }
}

/// The lines without a prefix they share.
pub(super) fn without_prefix(source: &Source, prefix: &str) -> Source {
    let mut out = Source::default();
    for (text, line) in source.text.split('\n').zip(&source.lines) {
        out.push(text.strip_prefix(prefix).unwrap_or(text).trim(), *line);
    }
    out
}

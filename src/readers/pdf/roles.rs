//! What a block is: heading, caption, note, paragraph …

use super::paragraphs::{Block, Body, is_marker};
use crate::manuscript::{BlockKind, Part};
use crate::readers::headings;
use regex::Regex;
use std::sync::LazyLock;

fn pattern(text: &str) -> Regex {
    // The patterns are constants, and a test compiles them all.
    Regex::new(text).expect("constant pattern")
}

static NUMBERING: LazyLock<Regex> = LazyLock::new(|| {
    pattern(r"^(?:(?:section|chapter)\s+)?(?:\d{1,2}(?:\.\d{1,2}){0,4}\.?|[IVX]{1,5}\.|[A-Z]\.)\s+")
});
static CAPTION: LazyLock<Regex> = LazyLock::new(|| {
    pattern(
        r"(?i)^(?:supplementa(?:ry|l)\s+|extended\s+data\s+|online\s+|web\s+|appendix\s+)?(figure|fig\.|fig|e?table|tab\.|abbildung|abb\.|tabelle|tableau|tabla|figura|tabela|scheme|box)\s*(?:[A-Z]{0,2}[.-]?\d{1,3}(?:[.-]\d{1,2})?[a-z]?|[IVX]{1,5})\b",
    )
});
static NOTE: LazyLock<Regex> = LazyLock::new(|| pattern(r"^(?:Notes?\s*[.:]|NOTES?\s*[.:]|Anmerkung)"));

/// The label of a caption.
pub struct Label {
    /// Bytes of the text that it takes, from its beginning.
    pub range: std::ops::Range<usize>,
    /// Of a table rather than of a figure.
    pub table: bool,
}

/// The label that a text begins with: `Table 2`, `Fig. 3`.
pub fn label(text: &str) -> Option<Label> {
    let found = CAPTION.captures(text)?;
    let word = found.get(1)?.as_str().to_lowercase();
    Some(Label {
        range: 0..found.get(0)?.end(),
        table: word.trim_start_matches('e').starts_with("tab"),
    })
}

/// Begins like the caption of a figure or table.
pub fn is_caption(block: &Block, body: Body) -> bool {
    if block.row || !block.apart && !block.first().bold {
        return false;
    }
    let text = block.text();
    let Some(found) = CAPTION.find(&text) else {
        return false;
    };
    let rest = &text[found.end()..];
    let label_alone = rest.trim().is_empty();
    let punctuated =
        rest.starts_with(['.', ':', '|', '—', '–']) || rest.trim_start().starts_with(['|', '—', '–']);
    let first_word_bold = block.first().words.first().is_some_and(|w| w.bold);
    // `Table 2 shows that …` at the top of a column is a sentence.
    let sentence = rest
        .trim_start()
        .chars()
        .next()
        .is_some_and(|c| c.is_lowercase() || c == ',' || c == ')');
    label_alone
        || punctuated
        || (first_word_bold && !sentence)
        || (!body.is_size(block.size()) && !sentence)
        || { !sentence && text.chars().count() < 160 && !text.trim_end().ends_with(',') }
}

/// Begins with raised digits or a raised mark, as footnotes and some lists of references do.
pub fn begins_raised(block: &Block) -> bool {
    let first = block.first().words.first();
    first.is_some_and(|w| matches!(w.parts.first(), Some((super::lines::Shift::Raised, _))))
}

/// Browsers print notes as a list at the end, each with an arrow that leads back to its mark.
pub fn leads_back(text: &str) -> bool {
    text.trim_end_matches(|c: char| c.is_whitespace() || matches!(c, '\u{fe0e}' | '\u{fe0f}'))
        .ends_with('↩')
}

/// The kind of a block that is no heading.
pub fn kind(block: &Block, body: Body, page_height: f32) -> BlockKind {
    if is_caption(block, body) {
        return BlockKind::Caption;
    }
    let text = block.text();
    if NOTE.is_match(&text) {
        return BlockKind::TableNote;
    }
    if leads_back(&text) {
        return BlockKind::Footnote;
    }
    let first = block.first();
    let raised = begins_raised(block);
    let marked = first.words.first().is_some_and(|w| {
        raised
            || w.text().starts_with(['*', '†', '‡', '§', '¹', '²', '³'])
            || w.text().chars().next().is_some_and(|c| c.is_ascii_digit())
    });
    let smaller = block.size() < 0.93 * body.size && marked;
    if !block.row && (smaller || raised) && first.baseline > 0.5 * page_height {
        return BlockKind::Footnote;
    }
    if !block.row
        && first.words.len() > 1
        && is_marker(&first.words[0].text())
        && !first.words[0].text().starts_with('[')
    {
        return BlockKind::ListItem;
    }
    BlockKind::Paragraph
}

/// The depth of a heading, if the block is one.
pub fn heading(block: &Block, body: Body) -> Option<u8> {
    if block.row || block.aside || block.lines.len() > 4 {
        return None;
    }
    let text = block.text();
    let count = text.chars().count();
    if !(3..=160).contains(&count) || is_caption(block, body) {
        return None;
    }
    let letters = text.chars().filter(|c| c.is_alphabetic()).count();
    if letters * 2 < count {
        return None;
    }
    let known = headings::known(&text);
    let depth = NUMBERING.find(&text).map(|m| {
        let number = m.as_str().trim().trim_end_matches('.');
        number.split('.').count().min(6) as u8
    });
    let size = block.size() / body.size;
    let bold = block.bold();
    let shouting = letters >= 4 && !text.chars().any(char::is_lowercase);
    let ends_open = text.ends_with([',', ';', '=', '-'])
        || (text.ends_with('.') && known.is_none() && depth.is_none() && !bold);
    let stands_out = size > 1.07 || (bold && size > 0.9);
    let sentence = text.ends_with('.') && count > 90;
    let running = !bold && size < 1.2 && known.is_none() && text.split(' ').count() > 12;
    if ends_open
        || sentence
        || running
        || !text
            .chars()
            .next()
            .is_some_and(|c| c.is_alphanumeric() && !c.is_lowercase())
    {
        return None;
    }
    let is_heading = known.is_some_and(|k| k.level == 1 || block.apart)
        || (block.apart && (stands_out || (shouting && block.lines.len() <= 2 && size > 0.9 && count < 80)));
    if !is_heading {
        return None;
    }
    Some(match (depth, known) {
        (Some(depth), _) => depth,
        (None, Some(k)) if k.part == Part::Body && size < 1.03 && !bold && !shouting => 2,
        (None, Some(k)) => k.level,
        (None, None) if size > 1.25 || shouting && bold => 1,
        (None, None) => 2,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn captions_and_notes_by_their_first_words() {
        assert!(CAPTION.is_match("Fig. 3. Water") && NOTE.is_match("Note. SD in brackets"));
        assert!(!CAPTION.is_match("Figures show") && !NOTE.is_match("Noted above"));
        assert!(NUMBERING.is_match("2.1 Participants"));
        let found = |text: &str| label(text).map(|l| (text[l.range].to_string(), l.table));
        assert_eq!(found("Table 2. Litres"), Some(("Table 2".into(), true)));
        assert_eq!(found("TABLE IV"), Some(("TABLE IV".into(), true)));
        assert_eq!(found("Tabelle A.1: Liter"), Some(("Tabelle A.1".into(), true)));
        assert_eq!(found("Table 4.2 Cans"), Some(("Table 4.2".into(), true)));
        assert_eq!(found("Fig. 3. Water"), Some(("Fig. 3".into(), false)));
        assert_eq!(found("Tables show"), None);
    }
}

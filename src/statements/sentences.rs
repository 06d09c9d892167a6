//! *Sentences*: the stretch of text around a range, from one full stop to the next.

use super::Scan;
use super::lists::{List, WordList};
use std::ops::Range;

/// No sentence is looked for farther than this, in bytes, from the range.
const LONGEST: usize = 3000;

impl Scan<'_> {
    /// The sentence of the block that holds these bytes.
    pub(super) fn sentence(&self, block: &Range<usize>, range: &Range<usize>) -> Range<usize> {
        around(self.list(List::Abbreviations), self.text, block, range)
    }
}

fn around(abbreviations: &WordList, text: &str, block: &Range<usize>, range: &Range<usize>) -> Range<usize> {
    let from = text.ceil_char_boundary(block.start.max(range.start.saturating_sub(LONGEST)));
    let start = ends(abbreviations, &text[from..range.start])
        .last()
        .map_or(from, |e| from + e);
    let to = text.floor_char_boundary(block.end.min(range.end + LONGEST));
    let end = ends(abbreviations, &text[range.end..to])
        .next()
        .map_or(to, |e| range.end + e);
    let lead = text[start..end].len() - text[start..end].trim_start().len();
    let trail = text[start..end].len() - text[start..end].trim_end().len();
    start + lead..(end - trail).max(range.end)
}

/// Byte offsets behind the ends of sentences.
fn ends<'a>(abbreviations: &'a WordList, text: &'a str) -> impl Iterator<Item = usize> + 'a {
    let bytes = text.as_bytes();
    memchr::memchr3_iter(b'.', b'?', b'!', bytes).filter_map(move |at| {
        let mut end = at + 1;
        while end < bytes.len() && matches!(bytes[end], b')' | b'"' | b'\'' | b']') {
            end += 1;
        }
        // Citation numbers raised behind the stop.
        let rest =
            text[end..].trim_start_matches(|c: char| matches!(c, '⁰'..='⁹' | '¹' | '²' | '³' | ',' | '⁻'));
        let skipped = text.len() - end - rest.len();
        end += skipped;
        if end >= bytes.len() {
            return Some(end);
        }
        let space = bytes[end] == b' ' || bytes[end] == b'\n';
        let next = text[end..].trim_start().chars().next()?;
        let opens = next.is_uppercase()
            || matches!(next, '(' | '[' | '"')
            || next.is_ascii_digit() && bytes[at] != b'.';
        (space && opens && !abbreviation(abbreviations, &text[..at], next)).then_some(end)
    })
}

/// The dot at the end of `before` belongs to an abbreviation.
fn abbreviation(abbreviations: &WordList, before: &str, next: char) -> bool {
    let word = before
        .rsplit(|c: char| !(c.is_alphanumeric() || c == '.'))
        .next()
        .unwrap_or("");
    if abbreviations.has(word) {
        return true;
    }
    // Initials; but a result may well end in a single letter: `higher for group B. The`.
    word.len() == 1 && word.as_bytes()[0].is_ascii_lowercase() && next != '('
}

#[cfg(test)]
mod tests {
    use super::super::Grammar;
    use super::*;

    fn around_text(text: &str, needle: &str) -> String {
        let at = text.find(needle).expect("the needle is there");
        let abbreviations = Grammar::built_in().lists.get(List::Abbreviations);
        text[around(abbreviations, text, &(0..text.len()), &(at..at + needle.len()))].to_string()
    }

    #[test]
    fn a_sentence_goes_from_stop_to_stop() {
        let text = "Plots were dry. Watering (cf. Fig. 2) differed, t(28) = 2.20, p = .036.¹² Beds did not.";
        assert_eq!(
            around_text(text, "t(28) = 2.20, p = .036"),
            "Watering (cf. Fig. 2) differed, t(28) = 2.20, p = .036.¹²"
        );
        assert_eq!(around_text("One p = .03. Two", "p = .03"), "One p = .03.");
        assert_eq!(
            around_text("t = 2.2, d.f. = 28 alone", "t = 2.2"),
            "t = 2.2, d.f. = 28 alone"
        );
    }
}

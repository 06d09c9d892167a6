//! What the words of a table line look like: values, running text, notes; and the *chunks* that
//! lines fall into.

use super::super::lines::{Line, Shift, Word};
use regex::Regex;
use std::ops::Range;
use std::sync::LazyLock;

/// Words of a line with no gap between them that could separate cells.
#[derive(Clone, Debug)]
pub struct Chunk {
    /// Of the line's words.
    pub words: Range<usize>,
    pub left: f32,
    pub right: f32,
}

impl Chunk {
    pub fn middle(&self) -> f32 {
        (self.left + self.right) / 2.0
    }
}

/// The chunks of a line: cut where a gap is wider than `space`, and at the `walls` (rules that run
/// down the table).
pub fn chunks(line: &Line, space: f32, walls: &[f32]) -> Vec<Chunk> {
    let mut out: Vec<Chunk> = Vec::new();
    for (i, word) in line.words.iter().enumerate() {
        // Code among other text has wider spaces.
        let code = i > 0 && is_code(word, line.size) && is_code(&line.words[i - 1], line.size);
        let space = if code { space.max(0.95 * line.size) } else { space };
        let walled = |left: f32| walls.iter().any(|w| *w > left - 1.0 && *w < word.area[0] + 1.0);
        match out.last_mut() {
            Some(last) if word.area[0] - last.right <= space && !walled(last.right) => {
                last.words.end = i + 1;
                last.right = last.right.max(word.area[2]);
            }
            _ => out.push(Chunk {
                words: i..i + 1,
                left: word.area[0],
                right: word.area[2],
            }),
        }
    }
    out
}

/// The words with single spaces between.
pub fn text_of(words: &[Word]) -> String {
    let mut text = String::new();
    for word in words {
        if !text.is_empty() {
            text.push(' ');
        }
        for (_, part) in &word.parts {
            text.push_str(part);
        }
    }
    text
}

/// Looks like a value rather than a label: `12.3`, `.45***`, `12 (40.0%)`, `[0.10, 0.47]`, `< .001`, `—`.
pub fn is_value(text: &str) -> bool {
    let text = text.trim();
    if is_blank_mark(text) {
        return true;
    }
    let (mut digits, mut letters) = (0, 0);
    for c in text.chars() {
        digits += usize::from(c.is_ascii_digit());
        letters += usize::from(c.is_alphabetic());
    }
    let named = text.chars().next().is_some_and(char::is_alphabetic);
    digits > 0 && letters <= digits && !named
}

/// What stands in a cell that has no value.
fn is_blank_mark(text: &str) -> bool {
    matches!(
        text,
        "-" | "–"
            | "—"
            | "−"
            | "–."
            | "…"
            | "..."
            | "."
            | "n.s."
            | "ns"
            | "NA"
            | "n/a"
            | "N/A"
            | "n.a."
            | "NS"
            | "Ref."
            | "Ref"
            | "ref"
            | "ref."
            | "Yes"
            | "No"
            | "x"
            | "X"
            | "✓"
            | "NaN"
    )
}

/// Runs like a sentence: several words in small letters.
pub fn is_prose(words: &[Word]) -> bool {
    let low = |w: &Word| {
        let text = w.text();
        text.chars().filter(|c| c.is_lowercase()).count() >= 2
    };
    words.len() >= 7 && words.iter().filter(|w| low(w)).count() * 3 >= words.len() * 2
}

static NOTE: LazyLock<Regex> = LazyLock::new(|| {
    let pattern = concat!(
        r"^(?:(?:Notes?|NOTES?|Legend|Sources?|Abbreviations?|Anmerkung(?:en)?|Nota|Notas|Quelle|Remarques?)\s*[.:—–]",
        r"|[*∗†‡§¶#+]{1,4}\s?[\p{L}pP<>=.]|[*∗]+\s*[pP<]|(?:ns|n\.s\.)\s*[=:]|p\s*[<≤]\s*0?\.\d",
        r"|(?:Values|Standard errors|Numbers|Figures) (?:are|in|given)|SE = |SD = |CI = |CI, |SD, |SE, |M = |N = .{0,20}[.,;])",
    );
    // The pattern is a constant, and a test compiles it.
    Regex::new(pattern).expect("constant pattern")
});

/// Begins like a note below a table.
pub fn begins_note(line: &Line) -> bool {
    let raised = line.words.first().is_some_and(|w| {
        matches!(w.parts.first(), Some((Shift::Raised, mark))
            if mark.trim().chars().count() <= 3 && (w.parts.len() > 1 || line.words.len() > 1))
    });
    raised && !line.words.iter().all(|w| is_value(&w.text())) || NOTE.is_match(&line.text())
}

/// Width of a word for each of its characters, in sizes.
fn each(word: &Word, size: f32) -> (f32, usize) {
    let count: usize = word.parts.iter().map(|(_, t)| t.chars().count()).sum();
    ((word.area[2] - word.area[0]) / count.max(1) as f32 / size, count)
}

/// Set in one of the usual fonts whose characters are all equally wide.
fn is_code(word: &Word, size: f32) -> bool {
    let (each, _) = each(word, size);
    (each - 0.6).abs() < 0.006 || (each - 0.525).abs() < 0.005
}

/// The widest gap that is still a space between words, for lines of this size: wider where all
/// characters are equally wide.
pub fn space_of<'a>(lines: impl Iterator<Item = &'a Line>, size: f32) -> f32 {
    let (mut same, mut all) = (0, 0);
    for word in lines.flat_map(|l| &l.words) {
        if each(word, size).1 >= 3 {
            same += usize::from(is_code(word, size));
            all += 1;
        }
    }
    if all >= 4 && same * 10 >= all * 9 {
        0.95 * size
    } else {
        0.45 * size
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_and_labels() {
        for value in [
            "12.3",
            ".45***",
            "12 (40.0%)",
            "[0.10, 0.47]",
            "< .001",
            "—",
            "1,294",
            "−.29",
            "12 ± 3",
            "2.61a",
        ] {
            assert!(is_value(value), "{value}");
        }
        for label in [
            "North",
            "M",
            "Study 2",
            "Litres (n = 30)",
            "Age, years",
            "F(2, 115)",
            "",
        ] {
            assert!(!is_value(label), "{label}");
        }
    }

    #[test]
    fn notes_by_their_first_words() {
        for note in [
            "Note. SD in brackets.",
            "* p < .05",
            "*p < .05. **p < .01",
            "† Two beds",
            "Notes: as above",
            "Source: the diaries",
        ] {
            assert!(NOTE.is_match(note), "{note}");
        }
        for other in ["Noted above", "Model 1", "p", "North 12.3"] {
            assert!(!NOTE.is_match(other), "{other}");
        }
    }
}

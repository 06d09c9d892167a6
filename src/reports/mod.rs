//! A *report* shows what was found in one or more manuscripts. One file per kind of report; none
//! of them knows how the findings were found. Reports make text and write nothing themselves, so
//! that many files can be worked on at once and still come out in order.

mod boxes;
mod excerpt;
mod json;
#[cfg(test)]
mod samples;
mod text;
mod text_only;
mod words;

use crate::judge::{Counts, Document, Finding, Verdict};
use crate::readers::Unreadable;

pub use boxes::page_svg;
pub use json::{Json, NdJson};
pub use text::Text;
pub use text_only::TextOnly;

/// One input and what became of it.
pub struct Entry {
    /// The name under which the input was given: a path, or `-` for standard input.
    pub name: String,
    pub outcome: Result<Document, Unreadable>,
}

/// Which findings are shown; each choice includes those after it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, clap::ValueEnum)]
pub enum Show {
    /// Every finding, also where the numbers agree
    All,
    /// What could not be decided, and all that conflicts
    Open,
    /// What cannot all be right
    Conflicts,
    /// Only conflicts that change which side of α a result is on
    Reverses,
}

impl Show {
    /// Whether a finding with this verdict is shown.
    pub fn includes(self, verdict: Verdict) -> bool {
        let least = match self {
            Show::All => Verdict::Agrees,
            Show::Open => Verdict::Open,
            Show::Conflicts => Verdict::Conflicts,
            Show::Reverses => Verdict::Reverses,
        };
        verdict >= least
    }

    /// The findings that are shown, in their own order.
    fn pick(self, findings: &[Finding]) -> impl Iterator<Item = &Finding> {
        findings.iter().filter(move |f| self.includes(f.verdict))
    }
}

/// A way of showing results. The parts are put together as
/// `opening entry between entry between … closing`; an empty entry is left out.
pub trait Report: Send + Sync {
    fn opening(&self) -> String {
        String::new()
    }

    /// What is shown of one input.
    fn entry(&self, entry: &Entry) -> String;

    fn between(&self) -> &'static str {
        ""
    }

    /// What is shown at the very end.
    fn closing(&self, _tally: &Tally) -> String {
        String::new()
    }
}

/// What a run over several inputs came to.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Tally {
    /// Inputs that were read.
    pub read: usize,
    /// Inputs that could not be read.
    pub unreadable: usize,
    /// Inputs in which something reverses.
    pub with_reversals: usize,
    /// Inputs in which something conflicts or reverses.
    pub with_conflicts: usize,
    /// Inputs in which not a single statement was found.
    pub without_statements: usize,
    /// Inputs in which something could not be decided.
    pub with_open: usize,
}

impl Tally {
    /// Takes one more input in: its counts, or nothing if it could not be read.
    pub fn add(&mut self, counts: Option<Counts>) {
        let Some(counts) = counts else {
            self.unreadable += 1;
            return;
        };
        self.read += 1;
        self.with_reversals += usize::from(counts.reverses > 0);
        self.with_conflicts += usize::from(counts.reverses + counts.conflicts > 0);
        self.with_open += usize::from(counts.open > 0);
        self.without_statements += usize::from(counts.statements == 0);
    }
}

/// Names with a line of explanation each, side by side; `width` columns in all.
pub fn two_columns(entries: &[(&str, String)], width: usize) -> String {
    let room = entries
        .iter()
        .map(|(name, _)| excerpt::columns(name))
        .max()
        .unwrap_or(0)
        + 2;
    let mut text = String::new();
    for (name, about) in entries {
        let lines = excerpt::paragraph(about, width.saturating_sub(room).max(20));
        for (i, line) in lines.iter().enumerate() {
            let name = if i == 0 { name } else { "" };
            text += &format!("{name:<room$}{line}\n");
        }
        if lines.is_empty() {
            text += &format!("{name}\n");
        }
    }
    text
}

/// Text in paragraphs with an empty line between them, broken into lines of at most `width` columns.
pub fn paragraphs(text: &str, width: usize) -> String {
    let paragraphs = text.split("\n\n").map(|paragraph| {
        let joined = paragraph.split_whitespace().collect::<Vec<_>>().join(" ");
        excerpt::paragraph(&joined, width).join("\n") + "\n"
    });
    paragraphs.collect::<Vec<_>>().join("\n")
}

/// `text` with everything replaced that could move the cursor, change colours or turn the writing
/// direction of a terminal. Each such character becomes one U+FFFD; tabs and line ends stay.
pub fn harmless(text: &str) -> String {
    text.chars()
        .map(|c| if is_harmful(c) { '\u{fffd}' } else { c })
        .collect()
}

fn is_harmful(c: char) -> bool {
    match c {
        '\t' | '\n' => false,
        // The marks, embeddings, overrides and isolates of the bidirectional algorithm.
        '\u{61c}' | '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' => true,
        c => c.is_control(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn each_choice_of_findings_includes_the_more_serious_ones() {
        let verdicts = [
            Verdict::Agrees,
            Verdict::Open,
            Verdict::Conflicts,
            Verdict::Reverses,
        ];
        let shown = |show: Show| verdicts.map(|v| show.includes(v));
        assert_eq!(shown(Show::All), [true, true, true, true]);
        assert_eq!(shown(Show::Open), [false, true, true, true]);
        assert_eq!(shown(Show::Conflicts), [false, false, true, true]);
        assert_eq!(shown(Show::Reverses), [false, false, false, true]);
    }

    #[test]
    fn names_stand_beside_what_they_mean() {
        let entries = [
            ("p-from-t", "p follows from t and df".to_string()),
            ("x", "a b c d e f g h i j k l".into()),
        ];
        assert_eq!(
            two_columns(&entries, 30),
            "p-from-t  p follows from t and\n          df\nx         a b c d e f g h i j\n          k l\n"
        );
    }

    #[test]
    fn nothing_in_a_manuscript_can_drive_the_terminal() {
        assert_eq!(
            harmless("p\u{1b}[2J = \u{9b}.03\u{202e}\r\n\tok"),
            "p\u{fffd}[2J = \u{fffd}.03\u{fffd}\u{fffd}\n\tok"
        );
    }
}

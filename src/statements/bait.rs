//! *Bait*: what looks like a result and is none: thresholds, legends, plans, coordinates, quotations.

use super::grammar::{Class, Symbol};
use super::join::Draft;
use super::tokens::Kind;
use super::values::Value;
use super::{Scan, sentences};
use crate::numbers::Comparator;
use std::ops::Range;

/// Levels that thresholds and legends are printed with.
const LEVELS: [f64; 12] = [
    0.1, 0.05, 0.025, 0.02, 0.01, 0.005, 0.001, 0.0005, 0.0001, 0.00001, 5e-8, 1e-8,
];

impl Scan<'_> {
    /// Whether the draft is a result. `supported`: a p, a df or the word for a test stands in the block.
    pub(super) fn is_result(&self, draft: &Draft, block: &Range<usize>, supported: bool) -> bool {
        let bytes = draft.items[0].bytes.start..draft.items.iter().map(|i| i.bytes.end).max().unwrap_or(0);
        if draft.items.iter().any(|i| i.class == Class::Bait) {
            return false;
        }
        if self.quoted(&bytes, block) {
            return false;
        }
        let lonely = draft.items.len() == 1;
        let first = &draft.items[0];
        if lonely && first.class == Class::Df {
            return false;
        }
        // Letters that stand for a rank test only where ranks are spoken of: `entropy (H = 0.82)`.
        let ranks = matches!(first.quantities[0].symbol, "H" | "W" | "U" | "Q");
        if lonely
            && ranks
            && !first.plain
            && !ranks_are_named(&self.text[block.clone()])
            && !self.mostly(&bytes, block)
        {
            return false;
        }
        // `a range of 2–20 mg` describes what was set; a result has it in brackets or behind a comma.
        if lonely && first.quantities[0].symbol == "range_low" {
            let before = self.text[block.start..bytes.start].trim_end();
            let what = &self.text[bytes.clone()];
            let said = ["range of", "range from", "ranges of", "range between"];
            if said.iter().any(|s| what.starts_with(s)) && !before.ends_with(['(', '[', ',', ';', ':']) {
                return false;
            }
        }
        // Nearly the whole block is this: somebody typed just the result.
        let whole = self.mostly(&bytes, block);
        if draft.items.iter().all(|i| !i.alone && !i.plain) && !supported && !whole {
            return false;
        }
        let holds_p = draft.items.iter().any(|i| i.class == Class::P);
        let only_p = holds_p
            && draft.items.iter().all(|i| {
                // `P < 0.10 and I² > 50%` is a threshold, too.
                let bound = i.class == Class::Other && i.quantities[0].comparator != Comparator::Equal;
                i.class == Class::P || i.class == Class::Size || bound
            });
        let level = draft.items.iter().all(|i| {
            i.class != Class::P
                || matches!(i.quantities[0].comparator, Comparator::Below | Comparator::AtMost)
                    && LEVELS.contains(&i.quantities[0].number.value())
        });
        let equal_level = only_p && lonely && LEVELS.contains(&first.quantities[0].number.value());
        if only_p && (level || equal_level) {
            let sentence = sentences::around(self.text, block, &bytes);
            let any_p = draft.items.iter().any(|i| i.class == Class::P);
            if level && any_p && self.legend(&bytes, block) {
                return false;
            }
            // Up to the end of the sentence for `if …` and the like, the part before decides.
            let before = &self.text[sentence.start..bytes.start];
            if self.grammar.thresholds.is_match(&self.text[sentence.clone()])
                && draft.items.iter().all(|i| i.class != Class::Size)
                || self.grammar.thresholds.is_match(before) && before.len() < 60
            {
                return false;
            }
        }
        let planned = draft.items.iter().all(|i| {
            matches!(i.class, Class::Effect | Class::Size)
                || matches!(i.quantities[0].symbol, "power" | "level")
        });
        if planned && !draft.items.iter().all(|i| i.class == Class::Size) {
            let sentence = sentences::around(self.text, block, &bytes);
            if self.grammar.plans.is_match(&self.text[sentence]) {
                return false;
            }
        }
        true
    }

    /// The range is most of its block.
    fn mostly(&self, bytes: &Range<usize>, block: &Range<usize>) -> bool {
        (bytes.end - bytes.start) * 2 > block.end - block.start
    }

    /// What stands behind a comparator and yet is no value of such a symbol: times of day and
    /// proportions (`median 08:35`, `1:3`), the start of a run (`n = 1, 2, …`), `100-fold`, and bounds
    /// and powers that no p can have (`p ≥ 0`, `p = 10`).
    pub(super) fn is_no_size(&self, symbol: &Symbol, comparator: Option<Comparator>, value: &Value) -> bool {
        let class = symbol.class;
        let next = value.next;
        let tight = |i: usize| self.tokens.get(i).is_some_and(|t| !t.spaced);
        let proportion = self.mark(next) == Some(":")
            && tight(next)
            && tight(next + 1)
            && self.tokens[next + 1].kind == Kind::Number;
        let compound = self.mark(next) == Some("-")
            && tight(next)
            && tight(next + 1)
            && self.word(next + 1).is_some()
            && matches!(class, Class::Descriptive | Class::Estimate | Class::Ratio);
        let number = value.number.value();
        let no_p = class == Class::P
            && value.number.is_whole()
            && (number > 1.0
                || matches!(comparator, Some(Comparator::AtLeast | Comparator::Above)) && number == 0.0
                || matches!(comparator, Some(Comparator::AtMost | Comparator::Below)) && number == 1.0);
        // `correlation of 14,737 genes`, `SD were 0.85 ± 0.16`
        let no_correlation =
            matches!(symbol.name, "r" | "rho" | "tau") && value.number.is_whole() && number.abs() > 1.0;
        // `FMNH PR 2512`
        let number_of_a_plate =
            class == Class::Ratio && comparator.is_none() && value.number.is_whole() && number >= 1000.0;
        let no_spread = matches!(symbol.name, "SD" | "SE") && self.mark(next) == Some("±");
        let start = !symbol.zero && value.number.is_whole() && number == 0.0;
        proportion
            || compound
            || no_p
            || start
            || number_of_a_plate
            || no_correlation
            || no_spread
            || self.runs_on(next)
    }

    /// `*p < .05`, `** P < 0.01`, `a: p < .05`, `† = p < .1`: the explanation of a mark.
    fn legend(&self, bytes: &Range<usize>, block: &Range<usize>) -> bool {
        let before = self.text[block.start..bytes.start].trim_end_matches([' ', '=', ':', '(', ',']);
        before.ends_with(['*', '†', '‡', '§', '#', '¶', '+', '^'])
            || self.text[block.start..].starts_with(['*', '†', '‡', '§', '#', '¶', '&'])
                && !before.contains(". ")
            || before.ends_with("indicates")
            || before.ends_with("indicate")
            || before.ends_with("denotes")
            || before.ends_with("denote")
            || before.chars().next_back().is_some_and(|c| matches!(c, 'ᵃ'..='ᶻ'))
    }

    /// Inside quotation marks of one sentence: somebody else's words.
    fn quoted(&self, bytes: &Range<usize>, block: &Range<usize>) -> bool {
        let window = sentences::around(self.text, block, bytes);
        let from = self.text[window.start..bytes.start].rfind('"');
        let Some(open) = from.map(|o| window.start + o) else {
            return false;
        };
        let Some(close) = self.text[bytes.end..window.end].find('"').map(|c| bytes.end + c) else {
            return false;
        };
        let opens = !self.text[..open]
            .ends_with(|c: char| c.is_alphanumeric() || matches!(c, '.' | ',' | ')'))
            && !self.text[open + 1..].starts_with(' ');
        opens && close - open < 200
    }
}

/// Words for tests whose statistics are H, W, U or Q.
fn ranks_are_named(text: &str) -> bool {
    const WORDS: [&str; 10] = [
        "rusk", "ilcox", "Mann", "mann", "hapiro", "endall", "ochran", "eterogen", "riedman", "rank",
    ];
    WORDS
        .iter()
        .any(|w| memchr::memmem::find(text.as_bytes(), w.as_bytes()).is_some())
}

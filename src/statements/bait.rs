//! *Bait*: what looks like a result and is none: thresholds, legends, plans, coordinates, quotations.

use super::Scan;
use super::grammar::{Around, Class};
use super::items::Item;
use super::join::Draft;
use super::lists::{List, Phrase};
use crate::numbers::Comparator;
use std::ops::Range;

/// Levels that thresholds and legends are printed with.
const LEVELS: [f64; 12] = [
    0.1, 0.05, 0.025, 0.02, 0.01, 0.005, 0.001, 0.0005, 0.0001, 0.00001, 5e-8, 1e-8,
];

/// Up to so many bytes before a p, what begins its sentence decides whether it is a threshold.
const SHORT: usize = 60;

impl Scan<'_> {
    /// Whether the draft is a result. `supported`: a p, a df or the word for a test stands in the block.
    pub(super) fn is_result(&self, draft: &Draft, block: &Range<usize>, supported: bool) -> bool {
        let bytes = draft.items[0].bytes.start..draft.bytes().end;
        let bait = draft.items.iter().any(|i| i.class == Class::Bait);
        // Nearly the whole block is this: somebody typed just the result.
        let whole = (bytes.end - bytes.start) * 2 > block.end - block.start;
        let letters = draft.items.iter().all(|i| !i.alone && !i.plain);
        !(bait
            || letters && !supported && !whole
            || draft.items.len() == 1 && self.means_nothing_alone(&draft.items[0], &bytes, block, whole)
            || self.quoted(&bytes, block)
            || self.threshold(draft, &bytes, block)
            || self.planned(draft, &bytes, block))
    }

    /// Items that are no result by themselves.
    fn means_nothing_alone(
        &self,
        item: &Item,
        bytes: &Range<usize>,
        block: &Range<usize>,
        whole: bool,
    ) -> bool {
        // Letters that stand for a rank test only where ranks are spoken of: `entropy (H = 0.82)`.
        let ranks = self.grammar.has(item.symbol(), |s| s.ranks)
            && !item.plain
            && !whole
            && !self
                .list(List::RankFragments)
                .is_in(&self.text.as_bytes()[block.clone()]);
        // `a range of 2–20 mg` describes what was set; a result has it in brackets or behind a comma.
        let set = self.phrase(item.tokens.start, Phrase::RangeSet).is_some()
            && self.grammar.around(item.symbol()) == Some(Around::All)
            && !self.text[block.start..bytes.start]
                .trim_end()
                .ends_with(['(', '[', ',', ';', ':']);
        item.class == Class::Df || ranks || set
    }

    /// A threshold or the explanation of a mark: nothing but a p, at a usual level.
    fn threshold(&self, draft: &Draft, bytes: &Range<usize>, block: &Range<usize>) -> bool {
        let is_level = |i: &Item| LEVELS.contains(&i.quantities[0].number.value());
        let below = |i: &Item| matches!(i.quantities[0].comparator, Comparator::Below | Comparator::AtMost);
        let mut ps = draft.items.iter().filter(|i| i.class == Class::P).peekable();
        let only_p = ps.peek().is_some()
            && draft.items.iter().all(|i| {
                // `P < 0.10 and I² > 50%` is a threshold, too.
                let bound = i.class == Class::Other && i.quantities[0].comparator != Comparator::Equal;
                matches!(i.class, Class::P | Class::Size) || bound
            });
        let level = ps.all(|i| below(i) && is_level(i));
        let equal_level = draft.items.len() == 1 && is_level(&draft.items[0]);
        if !only_p || !level && !equal_level {
            return false;
        }
        if level && self.legend(bytes, block) {
            return true;
        }
        // Up to the end of the sentence for `if …` and the like, the part before decides.
        let sentence = self.sentence(block, bytes);
        let before = &self.text[sentence.start..bytes.start];
        let sized = draft.items.iter().any(|i| i.class == Class::Size);
        !sized && self.grammar.thresholds.is_match(&self.text[sentence])
            || before.len() < SHORT && self.grammar.thresholds.is_match(before)
    }

    /// An effect size or a power that a study was planned with.
    fn planned(&self, draft: &Draft, bytes: &Range<usize>, block: &Range<usize>) -> bool {
        let size = |i: &Item| i.class == Class::Size;
        let plan = |i: &Item| i.class == Class::Effect || self.grammar.has(i.symbol(), |s| s.planned);
        draft.items.iter().all(|i| size(i) || plan(i))
            && !draft.items.iter().all(size)
            && self
                .grammar
                .plans
                .is_match(&self.text[self.sentence(block, bytes)])
    }

    /// `*p < .05`, `** P < 0.01`, `a: p < .05`, `† = p < .1`: the explanation of a mark.
    fn legend(&self, bytes: &Range<usize>, block: &Range<usize>) -> bool {
        let before = self.text[block.start..bytes.start].trim_end_matches([' ', '=', ':', '(', ',']);
        before.ends_with(['*', '†', '‡', '§', '#', '¶', '+', '^'])
            || self.text[block.start..].starts_with(['*', '†', '‡', '§', '#', '¶', '&'])
                && !before.contains(". ")
            || self.list(List::LegendVerbs).ends(before)
            || before.ends_with(|c| matches!(c, 'ᵃ'..='ᶻ'))
    }

    /// Inside quotation marks of one sentence: somebody else's words.
    fn quoted(&self, bytes: &Range<usize>, block: &Range<usize>) -> bool {
        let window = self.sentence(block, bytes);
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

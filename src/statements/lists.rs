//! *Lists* of words and marks that the engine asks for by what they do, such as the verbs that lead
//! from a name to its number. The words are in `grammars/lists.toml` and `grammars/bait.toml`.

use super::Scan;
use super::spellings::Spellings;
use super::tokens::Token;
use aho_corasick::AhoCorasick;
use serde::Deserialize;
use std::sync::OnceLock;

/// The lists that the engine knows; the grammar files say what each is for.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum List {
    Abbreviations,
    And,
    Before,
    BeforeEnds,
    BeforeReplicates,
    Contrasts,
    CountedUnits,
    Dimensions,
    IntervalOf,
    Labels,
    LeadsAway,
    LeadsToEstimate,
    LegendVerbs,
    Multiples,
    NoThings,
    Of,
    OfTheWhole,
    Or,
    PromisingFragments,
    RankFragments,
    Relations,
    RelationsOfP,
    RelationsOfTwo,
    Replicates,
    Resampling,
    Respectively,
    Shares,
    ShortUnits,
    Sided,
    TestFragments,
    To,
    Totals,
    Turns,
    Units,
    Verbs,
    WholeNumberFollows,
}

/// Runs of words that the engine knows.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Phrase {
    NotSignificant,
    RangeSet,
    SingleCase,
}

/// A set of words that answers quickly for the many that are not in it.
#[derive(Debug, Default)]
pub struct WordList {
    /// In order, so that they can be searched.
    words: Vec<String>,
    /// The lengths and the first bytes that occur, as bits.
    lengths: u64,
    firsts: [u64; 4],
    any_capitals: bool,
    search: OnceLock<AhoCorasick>,
}

impl WordList {
    /// Adds words, in lower case if capitals shall not matter.
    pub fn add(&mut self, words: impl IntoIterator<Item = String>, any_capitals: bool) {
        self.words.extend(words);
        self.words.sort();
        self.words.dedup();
        self.any_capitals |= any_capitals;
        for word in self.words.iter().filter(|w| !w.is_empty()) {
            self.lengths |= 1 << word.len().min(63);
            let first = word.as_bytes()[0];
            for byte in [first, first.to_ascii_uppercase()] {
                self.firsts[usize::from(byte) / 64] |= 1 << (byte % 64);
            }
        }
    }

    pub fn has(&self, word: &str) -> bool {
        let first = word.as_bytes().first().copied().unwrap_or(0);
        if self.firsts[usize::from(first) / 64] & (1 << (first % 64)) == 0
            || self.lengths & (1 << word.len().min(63)) == 0
        {
            return false;
        }
        let find = |word: &str| self.words.binary_search_by(|w| w.as_str().cmp(word)).is_ok();
        match self.any_capitals {
            true => find(&word.to_lowercase()),
            false => find(word),
        }
    }

    /// Whether one of the words stands anywhere in the text, also inside other words.
    pub fn is_in(&self, text: &[u8]) -> bool {
        let search = self.search.get_or_init(|| {
            // A few dozen short words always compile.
            AhoCorasick::new(&self.words).unwrap_or_else(|why| unreachable!("{why}"))
        });
        search.is_match(text)
    }

    /// Whether the text ends in one of the words.
    pub fn ends(&self, text: &str) -> bool {
        self.words.iter().any(|w| text.ends_with(w.as_str()))
    }
}

/// All lists and phrases of a grammar.
#[derive(Debug, Default)]
pub struct Lists {
    lists: Vec<WordList>,
    phrases: Spellings,
}

impl Lists {
    pub fn add(&mut self, list: List, words: Vec<String>, any_capitals: bool) {
        let index = list as usize;
        if self.lists.len() <= index {
            self.lists.resize_with(index + 1, WordList::default);
        }
        self.lists[index].add(words, any_capitals);
    }

    pub fn set_phrases(&mut self, phrases: Spellings) {
        self.phrases = phrases;
    }

    /// The list of this name; the built-in files fill them all.
    pub fn get(&self, list: List) -> &WordList {
        &self.lists[list as usize]
    }

    fn phrase(&self, text: &str, tokens: &[Token], at: usize, phrase: Phrase) -> Option<usize> {
        self.phrases
            .at(text, tokens, at, |s| s.meaning == phrase as usize)
            .map(|found| found.next)
    }
}

impl Scan<'_> {
    /// The word or mark at token `at` is in this list.
    pub(super) fn is(&self, at: usize, list: List) -> bool {
        self.shown(at).is_some_and(|shown| self.list(list).has(shown))
    }

    pub(super) fn list(&self, list: List) -> &WordList {
        self.grammar.lists.get(list)
    }

    /// The token behind the phrase at token `at`.
    pub(super) fn phrase(&self, at: usize, phrase: Phrase) -> Option<usize> {
        self.grammar.lists.phrase(self.text, self.tokens, at, phrase)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_list_knows_its_words_in_the_capitals_it_was_given() {
        let mut list = WordList::default();
        list.add(["fig".to_string(), "table".to_string()], true);
        assert!(list.has("Table") && list.has("FIG") && !list.has("tables") && !list.has(""));
        assert!(list.is_in(b"the tablet") && !list.is_in(b"the bed"));
        assert!(list.ends("config") && !list.ends("figs"));
        let mut exact = WordList::default();
        exact.add(["SD".to_string()], false);
        assert!(exact.has("SD") && !exact.has("sd"));
    }
}

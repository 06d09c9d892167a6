//! A *grammar* says how people write results. It is data, from `grammars/*.toml`; here are the tables
//! that the engine looks things up in. `compile.rs` fills them.

use super::Scan;
use super::compile::compile;
use super::context::Glyph;
use super::expressions::Expression;
use super::forms::Form;
use super::lists::{Lists, WordList};
use super::spellings::{Beginnings, Found, Spellings};
use crate::numbers::Comparator;
use aho_corasick::AhoCorasick;
use serde::Deserialize;
use std::collections::HashMap;
use std::path::PathBuf;
use std::sync::OnceLock;

/// What a symbol may start and be joined to; see `grammars/symbols.toml`.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Class {
    Statistic,
    P,
    Df,
    Effect,
    Estimate,
    Ratio,
    Descriptive,
    Size,
    Interval,
    Other,
    Bait,
}

/// What a bracket right behind the number of a symbol holds when it does not say so.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Bracket {
    Spread,
    Quartiles,
}

/// What the ends of an interval lie around.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Around {
    #[default]
    Estimate,
    Median,
    /// All values; the name of such an interval is an everyday word.
    All,
}

/// A symbol of the grammar. What each field does is said at the head of `grammars/symbols.toml`.
#[derive(Debug)]
pub struct Symbol {
    pub name: &'static str,
    pub class: Class,
    pub arguments: Vec<Argument>,
    pub whole: bool,
    pub exact: bool,
    pub bounded: bool,
    pub alone: bool,
    pub bare: bool,
    pub integers: bool,
    pub units: bool,
    pub zero: bool,
    pub above: Option<(f64, &'static str)>,
    pub below: Option<(f64, &'static str)>,
    pub beside: Option<[&'static str; 3]>,
    pub several: Option<&'static str>,
    pub argued: Option<&'static str>,
    pub pair: Option<[&'static str; 2]>,
    pub sure: Option<(f64, f64)>,
    pub labelled: Vec<char>,
    pub middle: bool,
    pub spread: bool,
    pub dealt: bool,
    pub ranks: bool,
    pub planned: bool,
    pub bracket: Option<Bracket>,
    pub with: Vec<&'static str>,
    pub behind_p: bool,
    pub second: bool,
}

impl Symbol {
    /// How many arguments may not be missing.
    pub fn required(&self) -> usize {
        self.arguments.iter().filter(|a| !a.optional).count()
    }
}

/// One argument of a symbol, e.g. `df2` of F.
#[derive(Debug)]
pub struct Argument {
    pub name: &'static str,
    pub optional: bool,
}

/// Names of the ends of an interval.
#[derive(Debug)]
pub struct IntervalNames {
    pub low: &'static str,
    pub high: &'static str,
    pub level: &'static str,
    pub around: Around,
}

/// The compiled grammar.
pub struct Grammar {
    pub(super) symbols: Vec<Symbol>,
    pub(super) by_name: HashMap<&'static str, usize>,
    pub(super) spellings: Spellings,
    pub(super) beginnings: Beginnings,
    pub(super) intervals: Vec<IntervalNames>,
    pub(super) interval_spellings: Spellings,
    pub(super) comparators: Vec<Comparator>,
    pub(super) comparator_spellings: Spellings,
    pub(super) forms: Vec<Form>,
    /// What may stand behind the first number of a form.
    pub(super) behind_first: WordList,
    pub(super) lists: Lists,
    /// Numbers in words, and which words they may be.
    pub(super) numbers: Vec<(String, u32)>,
    pub(super) number_words: Beginnings,
    pub(super) thresholds: Expression,
    pub(super) plans: Expression,
    pub(super) medians: Expression,
    /// Characters that texts have instead of others.
    pub(super) glyphs: Vec<Glyph>,
    pub(super) words: AhoCorasick,
    pub(super) word_meanings: Vec<&'static str>,
    /// Expressions whose groups give numbers, by meaning.
    pub patterns: Vec<(&'static str, Vec<Expression>)>,
}

impl Grammar {
    /// The built-in grammar.
    pub fn built_in() -> &'static Grammar {
        static GRAMMAR: OnceLock<Grammar> = OnceLock::new();
        GRAMMAR.get_or_init(|| {
            // The files are part of the program, and a test compiles them.
            compile(&[]).unwrap_or_else(|why| unreachable!("built-in grammar: {why}"))
        })
    }

    /// The built-in grammar with further files, which are read after it and may add symbols,
    /// spellings of known symbols, comparators, intervals, forms, words and bait.
    ///
    /// # Errors
    /// One line that names the file, the place in it and what is wrong.
    pub fn built_in_with(files: &[PathBuf]) -> Result<Grammar, String> {
        let mut more = Vec::new();
        for file in files {
            let text = std::fs::read_to_string(file)
                .map_err(|e| format!("{}: the grammar cannot be read ({e})", file.display()))?;
            more.push((file.display().to_string(), text));
        }
        let borrowed: Vec<(&str, &str)> = more.iter().map(|(a, b)| (a.as_str(), b.as_str())).collect();
        compile(&borrowed)
    }

    /// The symbol of this name, with the properties that its first entry gives it.
    pub(super) fn named(&self, name: &str) -> Option<&Symbol> {
        self.by_name.get(name).map(|index| &self.symbols[*index])
    }

    /// Whether the symbol of this name has a property. Names that only forms and intervals give have none.
    pub(super) fn has(&self, name: &str, property: impl Fn(&Symbol) -> bool) -> bool {
        self.named(name).is_some_and(property)
    }

    /// Whether a number of this name is exact when it is printed without decimals.
    pub(super) fn exact(&self, name: &str) -> bool {
        self.has(name, |s| s.whole || s.exact) || self.intervals.iter().any(|i| i.level == name)
    }

    /// What the interval lies around that has an end of this name.
    pub(super) fn around(&self, end: &str) -> Option<Around> {
        let interval = self
            .intervals
            .iter()
            .find(|i| [i.low, i.high, i.level].contains(&end))?;
        Some(interval.around)
    }

    /// The number that a word stands for, in any capitals: 9 for `nine`.
    pub fn number_word(&self, word: &str) -> Option<u32> {
        if !self.number_words.may_be(word) {
            return None;
        }
        self.numbers
            .iter()
            .find(|(w, _)| w.eq_ignore_ascii_case(word))
            .map(|(_, number)| *number)
    }

    /// Whether a symbol, the name of an interval or a number in words may begin with this word.
    pub(super) fn may_begin(&self, word: &str) -> bool {
        self.beginnings.may_be(word)
    }

    /// All words that matter in a text: meaning and byte range, in order.
    pub fn words_in<'a>(
        &'a self,
        text: &'a str,
    ) -> impl Iterator<Item = (&'static str, std::ops::Range<usize>)> + 'a {
        self.words.find_iter(text).filter_map(move |m| {
            // Whole words only at the front: `unilateral` in `multilateral` is another word.
            let inside = text[..m.start()]
                .chars()
                .next_back()
                .is_some_and(char::is_alphanumeric)
                && text[m.start()..].starts_with(|c: char| c.is_alphanumeric());
            (!inside).then(|| (self.word_meanings[m.pattern().as_usize()], m.range()))
        })
    }
}

impl Scan<'_> {
    /// The spelling of a symbol at token `at`.
    pub(super) fn spelling(&self, at: usize) -> Option<Found<'_>> {
        self.grammar.spellings.at(self.text, self.tokens, at, |_| true)
    }

    /// The symbol at token `at`, and the token behind it.
    pub(super) fn symbol(&self, at: usize) -> Option<(&Symbol, usize)> {
        let found = self.spelling(at)?;
        Some((&self.grammar.symbols[found.spelling.meaning], found.next))
    }

    /// The comparator at token `at`, and the token behind it. Word comparators only where `words`.
    pub(super) fn comparator(&self, at: usize, words: bool) -> Option<(Comparator, usize)> {
        let spellings = &self.grammar.comparator_spellings;
        let found = spellings.at(self.text, self.tokens, at, |s| words || !s.words)?;
        // `n <- 50` gives a variable its value in program code.
        let arrow = self.shown(found.next - 1) == Some("<")
            && self.mark(found.next) == Some("-")
            && !self.tokens[found.next].spaced
            && self.tokens.get(found.next + 1).is_some_and(|t| t.spaced);
        if arrow {
            return None;
        }
        Some((self.grammar.comparators[found.spelling.meaning], found.next))
    }
}

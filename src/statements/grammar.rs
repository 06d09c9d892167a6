//! A *grammar* says how people write results. It is data, from `grammars/*.toml`; this file turns
//! it into tables that the engine looks things up in.

use super::expressions::Expression;
use super::forms::Form;
use super::spellings::{Beginnings, Spelling, Spellings};
use super::tokens::Token;
use crate::numbers::Comparator;
use aho_corasick::{AhoCorasick, AhoCorasickKind, MatchKind};
use serde::Deserialize;
use std::collections::{HashMap, HashSet};
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

/// A symbol of the grammar.
#[derive(Debug)]
pub struct Symbol {
    pub name: &'static str,
    pub class: Class,
    pub arguments: Vec<Argument>,
    pub whole: bool,
    pub alone: bool,
    pub bare: bool,
    pub units: bool,
    pub above: Option<(f64, &'static str)>,
    pub below: Option<(f64, &'static str)>,
    pub several: Option<&'static str>,
    pub argued: Option<&'static str>,
    pub sure: Option<(f64, f64)>,
    /// Letters of the symbol that a label may be run together with.
    pub labelled: Vec<char>,
    pub zero: bool,
    pub beside: Option<[&'static str; 3]>,
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
}

/// The compiled grammar.
pub struct Grammar {
    pub symbols: Vec<Symbol>,
    pub spellings: Spellings,
    beginnings: Beginnings,
    pub intervals: Vec<IntervalNames>,
    pub interval_spellings: Spellings,
    comparators: Vec<Comparator>,
    comparator_spellings: Spellings,
    pub forms: Vec<Form>,
    pub units: HashSet<String>,
    pub replicates: HashSet<String>,
    pub before: HashSet<String>,
    pub labels: HashSet<String>,
    pub resampling: HashSet<String>,
    pub thresholds: Expression,
    pub plans: Expression,
    pub medians: Expression,
    words: AhoCorasick,
    word_meanings: Vec<&'static str>,
    pub patterns: Vec<(&'static str, Vec<Expression>)>,
}

#[derive(Deserialize, Default)]
#[serde(deny_unknown_fields, default)]
struct File {
    symbol: Vec<RawSymbol>,
    comparator: Vec<RawComparator>,
    interval: Vec<RawInterval>,
    form: Vec<RawForm>,
    word: Vec<RawWord>,
    pattern: Vec<RawPattern>,
    units: Vec<String>,
    replicates: Vec<String>,
    before: Vec<String>,
    labels: Vec<String>,
    resampling: Vec<String>,
    thresholds: Vec<String>,
    plans: Vec<String>,
    medians: Vec<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawSymbol {
    name: String,
    class: Option<Class>,
    #[serde(default)]
    spellings: Vec<String>,
    #[serde(default)]
    plural: Vec<String>,
    #[serde(default)]
    words: Vec<String>,
    #[serde(default)]
    arguments: Vec<String>,
    #[serde(default)]
    whole: bool,
    #[serde(default = "yes")]
    alone: bool,
    #[serde(default)]
    bare: bool,
    #[serde(default = "yes")]
    units: bool,
    above: Option<(f64, String)>,
    below: Option<(f64, String)>,
    several: Option<String>,
    argued: Option<String>,
    sure: Option<(f64, f64)>,
    #[serde(default)]
    labelled: Vec<char>,
    #[serde(default = "yes")]
    zero: bool,
    beside: Option<[String; 3]>,
}

fn yes() -> bool {
    true
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawComparator {
    means: Comparator,
    #[serde(default)]
    words: bool,
    spellings: Vec<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawInterval {
    low: String,
    high: String,
    level: String,
    #[serde(default)]
    spellings: Vec<String>,
    #[serde(default)]
    words: Vec<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawForm {
    pattern: String,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawWord {
    meaning: String,
    spellings: Vec<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawPattern {
    meaning: String,
    expressions: Vec<String>,
}

/// The grammars that are part of the program.
const BUILT_IN: &[(&str, &str)] = &[
    (
        "grammars/symbols.toml",
        include_str!("../../grammars/symbols.toml"),
    ),
    (
        "grammars/comparators.toml",
        include_str!("../../grammars/comparators.toml"),
    ),
    (
        "grammars/intervals.toml",
        include_str!("../../grammars/intervals.toml"),
    ),
    ("grammars/forms.toml", include_str!("../../grammars/forms.toml")),
    ("grammars/words.toml", include_str!("../../grammars/words.toml")),
    ("grammars/bait.toml", include_str!("../../grammars/bait.toml")),
];

impl Grammar {
    /// The built-in grammar.
    pub fn built_in() -> &'static Grammar {
        static GRAMMAR: OnceLock<Grammar> = OnceLock::new();
        GRAMMAR.get_or_init(|| {
            // The files are part of the program, and a test compiles them.
            Grammar::compile(&[]).unwrap_or_else(|why| unreachable!("built-in grammar: {why}"))
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
        Grammar::compile(&borrowed)
    }

    fn compile(more: &[(&str, &str)]) -> Result<Grammar, String> {
        let check = !more.is_empty();
        let mut all = File::default();
        for (name, text) in BUILT_IN.iter().chain(more) {
            let file: File = toml::from_str(text)
                .map_err(|e| format!("{name}: {}", e.to_string().lines().collect::<Vec<_>>().join(" ")))?;
            all.symbol.extend(file.symbol);
            all.comparator.extend(file.comparator);
            all.interval.extend(file.interval);
            all.form.extend(file.form);
            all.word.extend(file.word);
            all.pattern.extend(file.pattern);
            all.units.extend(file.units);
            all.replicates.extend(file.replicates);
            all.before.extend(file.before);
            all.labels.extend(file.labels);
            all.resampling.extend(file.resampling);
            all.thresholds.extend(file.thresholds);
            all.plans.extend(file.plans);
            all.medians.extend(file.medians);
        }
        let mut names = Names::default();
        let mut symbols: Vec<Symbol> = Vec::new();
        let mut spellings = Spellings::default();
        for raw in &all.symbol {
            let name = names.get(&raw.name);
            let class = match (raw.class, symbols.iter().find(|s| s.name == name)) {
                (Some(class), _) => class,
                (None, Some(known)) => known.class,
                (None, None) => return Err(format!("symbol {name:?} needs a class")),
            };
            let index = symbols.len();
            for (list, plural, words) in [
                (&raw.spellings, false, false),
                (&raw.plural, true, false),
                (&raw.words, false, true),
            ] {
                for text in list {
                    // `p values`, `z scores`
                    let several = words
                        && matches!(class, Class::Statistic | Class::P)
                        && text.ends_with('s')
                        && !text.ends_with(" s");
                    spellings.add(text, Spelling::new(!words, index, plural || several, words))?;
                }
            }
            symbols.push(Symbol {
                name,
                class,
                arguments: raw
                    .arguments
                    .iter()
                    .map(|a| Argument {
                        name: names.get(a.trim_end_matches('?')),
                        optional: a.ends_with('?'),
                    })
                    .collect(),
                whole: raw.whole,
                alone: raw.alone,
                bare: raw.bare,
                units: raw.units,
                above: raw.above.as_ref().map(|(v, s)| (*v, names.get(s))),
                below: raw.below.as_ref().map(|(v, s)| (*v, names.get(s))),
                sure: raw.sure,
                several: raw.several.as_ref().map(|s| names.get(s)),
                argued: raw.argued.as_ref().map(|s| names.get(s)),
                labelled: raw.labelled.clone(),
                zero: raw.zero,
                beside: raw
                    .beside
                    .as_ref()
                    .map(|b| [names.get(&b[0]), names.get(&b[1]), names.get(&b[2])]),
            });
        }
        let mut comparators = Vec::new();
        let mut comparator_spellings = Spellings::default();
        for raw in &all.comparator {
            for text in &raw.spellings {
                let words = raw.words;
                comparator_spellings.add(text, Spelling::new(false, comparators.len(), false, words))?;
            }
            comparators.push(raw.means);
        }
        let mut intervals = Vec::new();
        let mut interval_spellings = Spellings::default();
        for raw in &all.interval {
            for (list, exact) in [(&raw.spellings, true), (&raw.words, false)] {
                for text in list {
                    interval_spellings.add(text, Spelling::new(exact, intervals.len(), false, !exact))?;
                }
            }
            intervals.push(IntervalNames {
                low: names.get(&raw.low),
                high: names.get(&raw.high),
                level: names.get(&raw.level),
            });
        }
        let mut forms = Vec::new();
        for raw in &all.form {
            forms.push(Form::compile(&raw.pattern, &mut |name| names.get(name))?);
        }
        forms.sort_by_key(|f: &Form| std::cmp::Reverse(f.len()));
        let mut word_meanings = Vec::new();
        let mut words = Vec::new();
        for raw in &all.word {
            for text in &raw.spellings {
                word_meanings.push(names.get(&raw.meaning));
                words.push(text.as_str());
            }
        }
        let words = AhoCorasick::builder()
            .ascii_case_insensitive(true)
            .match_kind(MatchKind::LeftmostLongest)
            // The words are few, and every manuscript is searched for them from end to end.
            .kind(Some(AhoCorasickKind::DFA))
            .build(words)
            .map_err(|e| format!("words: {e}"))?;
        let mut patterns = Vec::new();
        for raw in &all.pattern {
            let compiled: Result<Vec<Expression>, String> = raw
                .expressions
                .iter()
                .map(|e| Expression::new(std::slice::from_ref(e), check))
                .collect();
            patterns.push((names.get(&raw.meaning), compiled?));
        }
        let mut beginnings = Beginnings::default();
        beginnings.join(spellings.beginnings());
        beginnings.join(interval_spellings.beginnings());
        super::spelled::WORDS.iter().for_each(|w| beginnings.add(w));
        Ok(Grammar {
            beginnings,
            symbols,
            spellings: spellings.sorted(),
            intervals,
            interval_spellings: interval_spellings.sorted(),
            comparators,
            comparator_spellings: comparator_spellings.sorted(),
            forms,
            units: all.units.into_iter().collect(),
            replicates: all.replicates.into_iter().collect(),
            before: all.before.into_iter().collect(),
            labels: all.labels.into_iter().collect(),
            resampling: all.resampling.into_iter().collect(),
            thresholds: either(&all.thresholds, check)?,
            plans: either(&all.plans, check)?,
            medians: either(&all.medians, check)?,
            words,
            word_meanings,
            patterns,
        })
    }

    /// The index of a symbol that the program itself needs to name.
    pub fn symbol(&self, name: &str) -> Option<usize> {
        self.symbols.iter().position(|s| s.name == name)
    }

    /// Whether a symbol, the name of an interval or a number in words may begin with this word.
    pub fn may_begin(&self, word: &str) -> bool {
        self.beginnings.may_be(word)
    }

    /// The comparator at token `at`, and the token behind it. Word comparators only where `words`.
    pub fn comparator(
        &self,
        text: &str,
        tokens: &[Token],
        at: usize,
        words: bool,
    ) -> Option<(Comparator, usize)> {
        let found = self
            .comparator_spellings
            .at(text, tokens, at, |s| words || !s.words)?;
        Some((self.comparators[found.spelling.meaning], found.next))
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

/// One expression for all, in any capitals.
fn either(expressions: &[String], check: bool) -> Result<Expression, String> {
    let folded: Vec<String> = expressions.iter().map(|e| format!("(?i:{e})")).collect();
    Expression::new(&folded, check)
}

/// Names live as long as the program: there are a few dozen, and they are compared everywhere.
#[derive(Default)]
struct Names(HashMap<String, &'static str>);

impl Names {
    fn get(&mut self, name: &str) -> &'static str {
        if let Some(known) = self.0.get(name) {
            return known;
        }
        let kept: &'static str = Box::leak(name.to_string().into_boxed_str());
        self.0.insert(name.to_string(), kept);
        kept
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_grammar_file_of_ones_own_adds_spellings_or_says_what_is_wrong() {
        let more = "[[symbol]]\nname = \"t\"\nspellings = [\"tee\"]\narguments = [\"df\"]\n";
        let grammar = Grammar::compile(&[("mine.toml", more)]).expect("it is well formed");
        let mut t = Vec::new();
        super::super::tokens::tokenize("tee", 0, 3, &mut t);
        assert!(grammar.spellings.at("tee", &t, 0, |_| true).is_some());
        let wrong = Grammar::compile(&[("mine.toml", "[[symbol]]\nnam = 3\n")])
            .err()
            .expect("it is wrong");
        assert!(wrong.starts_with("mine.toml: "), "{wrong}");
    }
}

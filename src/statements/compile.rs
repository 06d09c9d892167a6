//! *Compiling* a grammar: the files of `grammars/` and those that a person adds are parsed one after
//! the other, and what they say is put into the tables of `grammar.rs`.

use super::context::{Glyph, Impostor};
use super::expressions::Expression;
use super::forms::Form;
use super::grammar::{Argument, Around, Bracket, Class, Grammar, IntervalNames, Symbol};
use super::lists::{List, Lists, Phrase, WordList};
use super::spellings::{Beginnings, Spelling, Spellings};
use crate::numbers::Comparator;
use aho_corasick::{AhoCorasick, AhoCorasickKind, MatchKind};
use serde::Deserialize;
use std::collections::{BTreeMap, HashMap};

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
    ("grammars/lists.toml", include_str!("../../grammars/lists.toml")),
    ("grammars/bait.toml", include_str!("../../grammars/bait.toml")),
    ("grammars/glyphs.toml", include_str!("../../grammars/glyphs.toml")),
];

#[derive(Deserialize, Default)]
#[serde(deny_unknown_fields, default)]
struct File {
    symbol: Vec<RawSymbol>,
    comparator: Vec<RawComparator>,
    interval: Vec<RawInterval>,
    form: Vec<RawForm>,
    word: Vec<RawWord>,
    pattern: Vec<RawPattern>,
    list: Vec<RawList>,
    phrase: Vec<RawPhrase>,
    numbers: BTreeMap<String, u32>,
    thresholds: Vec<String>,
    plans: Vec<String>,
    medians: Vec<String>,
    glyph: Vec<RawGlyph>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawGlyph {
    read: String,
    written: Vec<String>,
    places: Vec<String>,
    unless: Vec<String>,
    #[serde(default)]
    proof: Vec<String>,
    least: usize,
    or: Option<Comparator>,
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
    #[serde(default)]
    exact: bool,
    #[serde(default)]
    bounded: bool,
    #[serde(default = "yes")]
    alone: bool,
    #[serde(default)]
    bare: bool,
    #[serde(default)]
    integers: bool,
    #[serde(default = "yes")]
    units: bool,
    #[serde(default = "yes")]
    zero: bool,
    above: Option<(f64, String)>,
    below: Option<(f64, String)>,
    beside: Option<[String; 3]>,
    several: Option<String>,
    argued: Option<String>,
    pair: Option<[String; 2]>,
    sure: Option<(f64, f64)>,
    #[serde(default)]
    labelled: Vec<char>,
    #[serde(default)]
    middle: bool,
    #[serde(default)]
    spread: bool,
    #[serde(default)]
    dealt: bool,
    #[serde(default)]
    ranks: bool,
    #[serde(default)]
    planned: bool,
    bracket: Option<Bracket>,
    #[serde(default)]
    with: Vec<String>,
    #[serde(default)]
    behind_p: bool,
    #[serde(default)]
    second: bool,
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
    around: Around,
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

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawList {
    name: List,
    #[serde(default)]
    any_capitals: bool,
    words: Vec<String>,
}

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct RawPhrase {
    name: Phrase,
    spellings: Vec<String>,
}

impl File {
    /// The built-in files and further ones, as if they were one.
    fn read(more: &[(&str, &str)]) -> Result<File, String> {
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
            all.list.extend(file.list);
            all.phrase.extend(file.phrase);
            all.numbers.extend(file.numbers);
            all.thresholds.extend(file.thresholds);
            all.plans.extend(file.plans);
            all.medians.extend(file.medians);
            all.glyph.extend(file.glyph);
        }
        Ok(all)
    }
}

/// Compiles the built-in grammar and what `more` files, by name and content, add to it.
///
/// # Errors
/// One line that names the file or the entry and what is wrong.
pub fn compile(more: &[(&str, &str)]) -> Result<Grammar, String> {
    // Expressions of the program itself are compiled when first needed.
    let check = !more.is_empty();
    let all = File::read(more)?;
    let mut names = Names::default();
    let (symbols, spellings) = symbols(&all.symbol, &mut names)?;
    let mut by_name = HashMap::new();
    for (index, symbol) in symbols.iter().enumerate() {
        by_name.entry(symbol.name).or_insert(index);
    }
    let (comparators, comparator_spellings) = comparators(&all.comparator)?;
    let (intervals, interval_spellings) = intervals(&all.interval, &mut names)?;
    let (words, word_meanings) = words(&all.word, &mut names)?;
    let whole = |name: &str| by_name.get(name).is_some_and(|i| symbols[*i].whole);
    let (forms, behind_first) = forms(&all.form, &mut names, &whole)?;
    let numbers: Vec<(String, u32)> = all.numbers.into_iter().collect();
    let mut beginnings = Beginnings::default();
    beginnings.join(spellings.beginnings());
    beginnings.join(interval_spellings.beginnings());
    let mut number_words = Beginnings::default();
    numbers.iter().for_each(|(word, _)| number_words.add(word));
    beginnings.join(&number_words);
    Ok(Grammar {
        beginnings,
        symbols,
        by_name,
        spellings,
        intervals,
        interval_spellings,
        comparators,
        comparator_spellings,
        forms,
        behind_first,
        lists: lists(all.list, &all.phrase)?,
        numbers,
        number_words,
        thresholds: either(&all.thresholds, check)?,
        plans: either(&all.plans, check)?,
        medians: either(&all.medians, check)?,
        glyphs: all
            .glyph
            .iter()
            .map(|raw| glyph(raw, check))
            .collect::<Result<_, String>>()?,
        words,
        word_meanings,
        patterns: patterns(&all.pattern, &mut names, check)?,
    })
}

fn glyph(raw: &RawGlyph, check: bool) -> Result<Glyph, String> {
    let impostor = |written: &String| {
        let escaped = regex::escape(written);
        // Each alternative has a group of its own; a name may stand only once.
        let filled = |all: &[String]| -> Vec<String> {
            let one =
                |(i, e): (usize, &String)| e.replace("{}", &escaped).replace("?P<x>", &format!("?P<x{i}>"));
            all.iter().enumerate().map(one).collect()
        };
        Ok(Impostor {
            written: written.clone(),
            places: Expression::new(&filled(&raw.places), check)?,
            proof: match raw.proof.as_slice() {
                [] => None,
                proof => Some(Expression::new(&filled(proof), check)?),
            },
        })
    };
    Ok(Glyph {
        read: raw.read.clone(),
        impostors: raw.written.iter().map(impostor).collect::<Result<_, String>>()?,
        unless: Expression::new(&raw.unless, check)?,
        least: raw.least,
        or: raw.or,
    })
}

fn symbols(all: &[RawSymbol], names: &mut Names) -> Result<(Vec<Symbol>, Spellings), String> {
    let mut symbols: Vec<Symbol> = Vec::new();
    let mut spellings = Spellings::default();
    for raw in all {
        let known = symbols.iter().find(|s| s.name == raw.name).map(|s| s.class);
        let class = raw
            .class
            .or(known)
            .ok_or_else(|| format!("symbol {:?} needs a class", raw.name))?;
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
                let spelling = Spelling::new(!words, symbols.len(), plural || several, words);
                spellings.add(text, spelling)?;
            }
        }
        symbols.push(symbol(raw, class, names));
    }
    Ok((symbols, spellings.sorted()))
}

fn symbol(raw: &RawSymbol, class: Class, names: &mut Names) -> Symbol {
    let arguments = raw.arguments.iter().map(|a| Argument {
        name: names.get(a.trim_end_matches('?')),
        optional: a.ends_with('?'),
    });
    Symbol {
        arguments: arguments.collect(),
        name: names.get(&raw.name),
        class,
        whole: raw.whole,
        exact: raw.exact,
        bounded: raw.bounded,
        alone: raw.alone,
        bare: raw.bare,
        integers: raw.integers,
        units: raw.units,
        zero: raw.zero,
        above: raw.above.as_ref().map(|(limit, s)| (*limit, names.get(s))),
        below: raw.below.as_ref().map(|(limit, s)| (*limit, names.get(s))),
        beside: raw.beside.as_ref().map(|b| b.each_ref().map(|s| names.get(s))),
        several: raw.several.as_ref().map(|s| names.get(s)),
        argued: raw.argued.as_ref().map(|s| names.get(s)),
        pair: raw.pair.as_ref().map(|p| p.each_ref().map(|s| names.get(s))),
        sure: raw.sure,
        labelled: raw.labelled.clone(),
        middle: raw.middle,
        spread: raw.spread,
        dealt: raw.dealt,
        ranks: raw.ranks,
        planned: raw.planned,
        bracket: raw.bracket,
        with: raw.with.iter().map(|s| names.get(s)).collect(),
        behind_p: raw.behind_p,
        second: raw.second,
    }
}

fn comparators(all: &[RawComparator]) -> Result<(Vec<Comparator>, Spellings), String> {
    let mut comparators = Vec::new();
    let mut spellings = Spellings::default();
    for raw in all {
        for text in &raw.spellings {
            spellings.add(text, Spelling::new(false, comparators.len(), false, raw.words))?;
        }
        comparators.push(raw.means);
    }
    Ok((comparators, spellings.sorted()))
}

fn intervals(all: &[RawInterval], names: &mut Names) -> Result<(Vec<IntervalNames>, Spellings), String> {
    let mut intervals = Vec::new();
    let mut spellings = Spellings::default();
    for raw in all {
        for (list, exact) in [(&raw.spellings, true), (&raw.words, false)] {
            for text in list {
                spellings.add(text, Spelling::new(exact, intervals.len(), false, !exact))?;
            }
        }
        intervals.push(IntervalNames {
            low: names.get(&raw.low),
            high: names.get(&raw.high),
            level: names.get(&raw.level),
            around: raw.around,
        });
    }
    Ok((intervals, spellings.sorted()))
}

/// The forms, the longest first, and what may stand behind the first number of one.
fn forms(
    all: &[RawForm],
    names: &mut Names,
    whole: &dyn Fn(&str) -> bool,
) -> Result<(Vec<Form>, WordList), String> {
    let mut forms = Vec::new();
    let mut behind_first = WordList::default();
    for raw in all {
        let form = Form::compile(&raw.pattern, &mut |name| names.get(name), whole)?;
        behind_first.add(form.behind_first().iter().cloned(), true);
        forms.push(form);
    }
    forms.sort_by_key(|f: &Form| std::cmp::Reverse(f.len()));
    Ok((forms, behind_first))
}

fn words(all: &[RawWord], names: &mut Names) -> Result<(AhoCorasick, Vec<&'static str>), String> {
    let mut meanings = Vec::new();
    let mut words = Vec::new();
    for raw in all {
        for text in &raw.spellings {
            meanings.push(names.get(&raw.meaning));
            words.push(text.as_str());
        }
    }
    let search = AhoCorasick::builder()
        .ascii_case_insensitive(true)
        .match_kind(MatchKind::LeftmostLongest)
        // The words are few, and every manuscript is searched for them from end to end.
        .kind(Some(AhoCorasickKind::DFA))
        .build(words)
        .map_err(|e| format!("words: {e}"))?;
    Ok((search, meanings))
}

fn lists(all: Vec<RawList>, phrases: &[RawPhrase]) -> Result<Lists, String> {
    let mut lists = Lists::default();
    for raw in all {
        lists.add(raw.name, raw.words, raw.any_capitals);
    }
    let mut spellings = Spellings::default();
    for raw in phrases {
        for text in &raw.spellings {
            spellings.add(text, Spelling::new(false, raw.name as usize, false, true))?;
        }
    }
    lists.set_phrases(spellings.sorted());
    Ok(lists)
}

type Patterns = Vec<(&'static str, Vec<Expression>)>;

fn patterns(all: &[RawPattern], names: &mut Names, check: bool) -> Result<Patterns, String> {
    let mut patterns = Vec::new();
    for raw in all {
        let compiled: Result<Vec<Expression>, String> = raw
            .expressions
            .iter()
            .map(|e| Expression::new(std::slice::from_ref(e), check))
            .collect();
        patterns.push((names.get(&raw.meaning), compiled?));
    }
    Ok(patterns)
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
    use super::super::tokens::tokenize;
    use super::*;

    #[test]
    fn a_grammar_file_of_ones_own_adds_spellings_or_says_what_is_wrong() {
        let more = "[[symbol]]\nname = \"t\"\nspellings = [\"tee\"]\narguments = [\"df\"]\n";
        let grammar = compile(&[("mine.toml", more)]).expect("it is well formed");
        let mut t = Vec::new();
        tokenize("tee", 0, 3, &mut t);
        assert!(grammar.spellings.at("tee", &t, 0, |_| true).is_some());
        for wrong in ["[[symbol]]\nnam = 3\n", "[[list]]\nname = \"verb\"\nwords = []\n"] {
            let why = compile(&[("mine.toml", wrong)]).err().expect("it is wrong");
            assert!(why.starts_with("mine.toml: "), "{why}");
        }
    }
}

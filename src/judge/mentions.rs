//! Which words that matter stand near a statement.

use crate::manuscript::{Block, Manuscript};
use crate::relations::{Mention, Reach};
use crate::statements::{Grammar, Quantity, Statement};
use std::collections::HashMap;
use std::ops::Range;

/// A word that matters, somewhere in the manuscript.
struct Hit {
    meaning: &'static str,
    range: Range<usize>,
    block: usize,
    /// The sentence holds a result, which the word is about: `Bonferroni-adjusted p = .050` says
    /// nothing about results elsewhere, unlike `post hoc tests were Bonferroni-corrected`.
    about_one: bool,
}

/// Meanings that concern the one result they stand with, if they stand with one.
const ABOUT_ONE: [&str; 5] = [
    "adjusted",
    "adjusted-pairs",
    "adjusted-unnamed",
    "bonferroni",
    "one-sided",
];

/// Bytes of a paragraph, to either side of a statement, that are looked at for a scale or a number
/// of items: more than any paragraph that a person would write.
const WINDOW: usize = 4000;

/// The words of one meaning, and where to find the nearest.
#[derive(Default)]
struct Words {
    /// In the order of the text.
    hits: Vec<Hit>,
    /// The first that speaks for its whole section, by section; and the first of all.
    by_section: HashMap<Option<usize>, usize>,
    first: Option<usize>,
}

/// All words that matter in a manuscript.
pub struct Mentions<'a> {
    manuscript: &'a Manuscript,
    grammar: &'a Grammar,
    words: Vec<Words>,
}

impl<'a> Mentions<'a> {
    /// Finds them once for the whole text.
    pub fn collect(
        manuscript: &'a Manuscript,
        grammar: &'a Grammar,
        statements: &[Statement],
    ) -> Mentions<'a> {
        let results: Vec<&Statement> = statements
            .iter()
            .filter(|s| s.quantities.iter().any(|q| q.symbol == "p"))
            .collect();
        let mut hits = Vec::new();
        let mut block = 0;
        let mut result = 0;
        for (meaning, range) in grammar.words_in(&manuscript.text) {
            while block + 1 < manuscript.blocks.len()
                && manuscript.blocks[block + 1].range.start <= range.start
            {
                block += 1;
            }
            let inside = manuscript
                .blocks
                .get(block)
                .is_some_and(|b| b.range.contains(&range.start));
            if inside && manuscript.blocks[block].is_authors_own() {
                while results.get(result).is_some_and(|s| s.sentence.end < range.start) {
                    result += 1;
                }
                let with_result = results
                    .get(result)
                    .is_some_and(|s| s.sentence.contains(&range.start));
                let about_one = with_result && ABOUT_ONE.contains(&meaning);
                hits.push(Hit {
                    meaning,
                    range,
                    block,
                    about_one,
                });
            }
        }
        // "Corrected for multiple comparisons" means the method that the manuscript names, if it names one.
        let named = hits
            .iter()
            .any(|h| matches!(h.meaning, "adjusted" | "adjusted-pairs" | "bonferroni"));
        hits.retain(|h| h.meaning != "adjusted-unnamed" || !named);
        let mut words: Vec<Words> = Vec::new();
        for mut hit in hits {
            if hit.meaning == "adjusted-unnamed" {
                hit.meaning = "adjusted";
            }
            let slot = words
                .iter()
                .position(|w| w.hits[0].meaning == hit.meaning)
                .unwrap_or_else(|| {
                    words.push(Words::default());
                    words.len() - 1
                });
            let same = &mut words[slot];
            if !hit.about_one {
                let index = same.hits.len();
                same.by_section
                    .entry(manuscript.blocks[hit.block].section)
                    .or_insert(index);
                same.first.get_or_insert(index);
            }
            same.hits.push(hit);
        }
        Mentions {
            manuscript,
            grammar,
            words,
        }
    }

    /// The nearest mention of each meaning, seen from a statement.
    pub fn around(&self, statement: &Statement, quantities: &[Quantity]) -> Vec<Mention> {
        let home = &self.manuscript.blocks[statement.block];
        let paragraph = self.surroundings(home);
        let mut near: Vec<Mention> = Vec::new();
        for words in &self.words {
            let within = |range: &Range<usize>| {
                let first = words.hits.partition_point(|h| h.range.start < range.start);
                words.hits.get(first).filter(|h| h.range.end <= range.end)
            };
            let nearest = within(&statement.sentence)
                .map(|h| (h, Reach::Sentence))
                .or_else(|| within(&paragraph).map(|h| (h, Reach::Paragraph)))
                .or_else(|| {
                    words
                        .by_section
                        .get(&home.section)
                        .map(|i| (&words.hits[*i], Reach::Section))
                })
                .or_else(|| words.first.map(|i| (&words.hits[i], Reach::Document)));
            let Some((hit, reach)) = nearest else { continue };
            near.push(Mention {
                meaning: hit.meaning,
                words: self.manuscript.text[hit.range.clone()].trim().to_string(),
                numbers: Vec::new(),
                reach,
                paragraph: self.manuscript.blocks[hit.block].paragraph,
            });
        }
        // The reasons to think that answers are whole numbers matter to means of known samples only.
        let has = |symbol: &str| quantities.iter().any(|q| q.symbol == symbol);
        if has("M") && (has("n") || has("N")) {
            self.patterns(statement, home, &mut near);
        }
        near
    }

    /// What counts as the same paragraph: the block, or the whole table around a cell.
    fn surroundings(&self, home: &Block) -> Range<usize> {
        let Some(at) = home.cell else {
            return home.range.clone();
        };
        let cells = &self.manuscript.tables[at.table].cells;
        let blocks = &self.manuscript.blocks;
        let start = cells
            .first()
            .and_then(|c| blocks.get(c.block))
            .map(|b| b.range.start);
        let end = cells
            .last()
            .and_then(|c| blocks.get(c.block))
            .map(|b| b.range.end);
        match (start, end) {
            (Some(start), Some(end)) if start <= home.range.start && home.range.end <= end => start..end,
            _ => home.range.clone(),
        }
    }

    /// A number in digits or in words.
    fn number(&self, text: &str) -> Option<f64> {
        self.grammar
            .number_word(text)
            .map(f64::from)
            .or_else(|| text.parse().ok())
    }

    fn patterns(&self, statement: &Statement, home: &Block, near: &mut Vec<Mention>) {
        for (meaning, expressions) in &self.grammar.patterns {
            if *meaning == "alpha" {
                continue;
            }
            let text = &self.manuscript.text;
            let window = text.floor_char_boundary(statement.range.start.saturating_sub(WINDOW))
                ..text.ceil_char_boundary((statement.range.end + WINDOW).min(text.len()));
            let paragraph = home.range.start.max(window.start)..home.range.end.min(window.end);
            for (reach, range) in [
                (Reach::Sentence, &statement.sentence),
                (Reach::Paragraph, &paragraph),
            ] {
                if near.iter().any(|m| m.meaning == *meaning) {
                    break;
                }
                let text = &self.manuscript.text[range.clone()];
                let Some(found) = expressions.iter().find_map(|e| e.captures(text)) else {
                    continue;
                };
                near.push(Mention {
                    meaning,
                    words: found[0].trim().to_string(),
                    numbers: found
                        .iter()
                        .skip(1)
                        .flatten()
                        .filter_map(|g| self.number(g.as_str()))
                        .collect(),
                    reach,
                    paragraph: home.paragraph,
                });
            }
        }
    }
}

/// Levels of significance that manuscripts use.
const LEVELS: [f64; 7] = [0.1, 0.05, 0.025, 0.02, 0.01, 0.005, 0.001];

/// Bytes before a level in which a word shows that it is the level of something else.
const ASIDE: usize = 160;

/// The level of significance that a manuscript states, if it states exactly one.
pub fn stated_alpha(manuscript: &Manuscript, grammar: &Grammar) -> Option<f64> {
    let (_, expressions) = grammar.patterns.iter().find(|(meaning, _)| *meaning == "alpha")?;
    let mut stated: Option<f64> = None;
    for block in manuscript.blocks.iter().filter(|b| b.is_authors_own()) {
        let text = manuscript.block_text(block);
        // A level is printed as .05, .01, .1 …; most paragraphs hold nothing like it.
        let level = |part: &str| memchr::memmem::find(text.as_bytes(), part.as_bytes()).is_some();
        if ![".0", ".1", ",0", "·0"].into_iter().any(level) {
            continue;
        }
        for found in expressions.iter().flat_map(|e| e.captures_all(text)) {
            let (value, at) = match found.get(1) {
                Some(g) => (g.as_str().replace([',', '·'], ".").parse().ok(), g.range()),
                None => continue,
            };
            let value = value.filter(|v| LEVELS.contains(v));
            let near = text.floor_char_boundary(at.start.saturating_sub(ASIDE))
                ..text.ceil_char_boundary((at.end + ASIDE / 2).min(text.len()));
            if grammar
                .words_in(&text[near])
                .any(|(meaning, _)| meaning == "side-issue")
            {
                continue;
            }
            match (value, stated) {
                (Some(value), None) => stated = Some(value),
                (Some(value), Some(known)) if value != known => return None,
                _ => {}
            }
        }
    }
    stated
}

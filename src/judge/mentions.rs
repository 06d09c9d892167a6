//! Which words that matter stand near a statement.

use crate::manuscript::{Block, BlockKind, Manuscript, Part};
use crate::relations::{Mention, Reach};
use crate::statements::{Grammar, Statement};
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
const ABOUT_ONE: [&str; 2] = ["adjusted", "one-sided"];

/// All words that matter in a manuscript.
pub struct Mentions<'a> {
    manuscript: &'a Manuscript,
    grammar: &'a Grammar,
    hits: Vec<Hit>,
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
            if inside && speaks(&manuscript.blocks[block]) {
                let before = results.partition_point(|s| s.sentence.end < range.start);
                let about_one = ABOUT_ONE.contains(&meaning)
                    && results
                        .get(before)
                        .is_some_and(|s| s.sentence.contains(&range.start));
                hits.push(Hit {
                    meaning,
                    range,
                    block,
                    about_one,
                });
            }
        }
        Mentions {
            manuscript,
            grammar,
            hits,
        }
    }

    /// The nearest mention of each meaning, seen from a statement.
    pub fn around(&self, statement: &Statement) -> Vec<Mention> {
        let home = &self.manuscript.blocks[statement.block];
        let mut near: Vec<Mention> = Vec::new();
        for hit in &self.hits {
            let block = &self.manuscript.blocks[hit.block];
            let reach = if hit.block == statement.block {
                let inside =
                    hit.range.start >= statement.sentence.start && hit.range.end <= statement.sentence.end;
                if inside { Reach::Sentence } else { Reach::Paragraph }
            } else if same_table(home, block) {
                Reach::Paragraph
            } else if block.section == home.section {
                Reach::Section
            } else {
                Reach::Document
            };
            if hit.about_one && reach >= Reach::Section {
                continue;
            }
            match near.iter_mut().find(|m| m.meaning == hit.meaning) {
                Some(known) if known.reach <= reach => {}
                known => {
                    let mention = Mention {
                        meaning: hit.meaning,
                        words: self.manuscript.text[hit.range.clone()].trim().to_string(),
                        numbers: Vec::new(),
                        reach,
                        paragraph: block.paragraph,
                    };
                    match known {
                        Some(known) => *known = mention,
                        None => near.push(mention),
                    }
                }
            }
        }
        // The reasons to think that answers are whole numbers matter to means only.
        if statement.quantities.iter().any(|q| q.symbol == "M") {
            self.patterns(statement, home, &mut near);
        }
        near
    }

    fn patterns(&self, statement: &Statement, home: &Block, near: &mut Vec<Mention>) {
        for (meaning, expressions) in &self.grammar.patterns {
            if *meaning == "alpha" {
                continue;
            }
            for (reach, range) in [
                (Reach::Sentence, &statement.sentence),
                (Reach::Paragraph, &home.range),
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
                        .filter_map(|g| number(g.as_str()))
                        .collect(),
                    reach,
                    paragraph: home.paragraph,
                });
            }
        }
    }
}

/// Words in reference lists and headings of the back matter say nothing about the results.
fn speaks(block: &Block) -> bool {
    matches!(block.part, Part::Abstract | Part::Body) && block.kind != BlockKind::Quote
}

fn same_table(a: &Block, b: &Block) -> bool {
    match (a.cell, b.cell) {
        (Some(a), Some(b)) => a.table == b.table,
        _ => false,
    }
}

/// A number in digits or in words.
fn number(text: &str) -> Option<f64> {
    const WORDS: [&str; 13] = [
        "zero", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten", "eleven",
        "twelve",
    ];
    match WORDS.iter().position(|w| text.eq_ignore_ascii_case(w)) {
        Some(n) => Some(n as f64),
        None => text.parse().ok(),
    }
}

/// The level of significance that a manuscript states, if it states exactly one.
pub fn stated_alpha(manuscript: &Manuscript, grammar: &Grammar) -> Option<f64> {
    let (_, expressions) = grammar.patterns.iter().find(|(meaning, _)| *meaning == "alpha")?;
    let mut stated: Option<f64> = None;
    for block in manuscript.blocks.iter().filter(|b| speaks(b)) {
        let text = manuscript.block_text(block);
        for found in expressions.iter().flat_map(|e| e.captures_iter(text)) {
            let value = found
                .get(1)
                .and_then(|g| g.as_str().replace([',', '·'], ".").parse().ok());
            match (value, stated) {
                (Some(value), None) if value > 0.0 && value < 0.2 => stated = Some(value),
                (Some(value), Some(known)) if value != known => return None,
                _ => {}
            }
        }
    }
    stated
}

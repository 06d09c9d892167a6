//! Finding all statements of a manuscript, block by block.

use super::grammar::{Class, Grammar};
use super::tokens::{self, Token};
use super::{Quantity, Scan, Statement, sentences, values};
use crate::manuscript::{Block, BlockKind, Manuscript, Part};
use aho_corasick::AhoCorasick;
use std::ops::Range;
use std::sync::OnceLock;

/// Finds the statements of the abstract and the body.
pub fn find(manuscript: &Manuscript, grammar: &Grammar, alpha: f64) -> Vec<Statement> {
    let text = manuscript.text.as_str();
    let commas = values::writes_decimal_commas(text);
    let medians = grammar.medians.is_match(text);
    let mut tokens: Vec<Token> = Vec::new();
    let mut statements = Vec::new();
    for (index, block) in manuscript.blocks.iter().enumerate() {
        if !holds_results(block) || !may_hold_results(&text.as_bytes()[block.range.clone()]) {
            continue;
        }
        tokens.clear();
        tokens::tokenize(text, block.range.start, block.range.end, &mut tokens);
        let scan = Scan {
            text,
            tokens: &tokens,
            grammar,
            commas,
            alpha,
            medians,
            cell: block.kind == BlockKind::Cell,
            words: Default::default(),
        };
        scan.statements(index, &block.range, &mut statements);
    }
    for (i, statement) in statements.iter_mut().enumerate() {
        statement.id = i + 1;
    }
    statements
}

fn holds_results(block: &Block) -> bool {
    matches!(block.part, Part::Abstract | Part::Body) && block.kind != BlockKind::Quote
}

/// A quick look: where none of these marks and words stands there is no result.
fn may_hold_results(bytes: &[u8]) -> bool {
    static SIGNS: OnceLock<AhoCorasick> = OnceLock::new();
    if memchr::memchr3(b'=', b'<', b'>', bytes).is_some()
        || memchr::memchr3(b'%', b':', 0xc2, bytes).is_some()
    {
        return true;
    }
    // 0xe2 begins ≤, ≥ and ≈, 0xc2 the ±.
    let signs = SIGNS.get_or_init(|| {
        let words = [
            "\u{2264}", "\u{2265}", "\u{2248}", "\u{226a}", "\u{226b}", "CI", "SD", "SE", "OR", "RR", "HR",
            "ean", "edian", "verag", "ange", "alue", "atio", "isk", "n.s.", "evia", "rror", "IQR", "egree",
            "d.f.", "df", "lpha", "appa", "oeff", "out of", " of 1", " of 2", " of 3", " of 4", " of 5",
            " of 6", " of 7", " of 8", " of 9",
        ];
        // A handful of short words always compiles.
        AhoCorasick::new(words).unwrap_or_else(|why| unreachable!("{why}"))
    });
    signs.is_match(bytes)
}

impl Scan<'_> {
    /// Appends the statements of one block.
    fn statements(&self, block: usize, range: &Range<usize>, found: &mut Vec<Statement>) {
        let items = self.items();
        if items.is_empty() {
            return;
        }
        let supported = items.iter().any(|i| {
            let spread = i.class == Class::Descriptive && matches!(i.quantities[0].symbol, "SD" | "SE");
            i.class == Class::P || i.class == Class::Statistic && i.plain || spread
        }) || tests_are_named(&self.text[range.clone()]);
        for draft in self.join(items) {
            if !self.is_result(&draft, range, supported) {
                continue;
            }
            let start = draft
                .items
                .iter()
                .map(|i| i.bytes.start)
                .min()
                .unwrap_or(range.start);
            let end = draft.items.iter().map(|i| i.bytes.end).max().unwrap_or(start);
            let quantities: Vec<Quantity> = draft
                .items
                .iter()
                .flat_map(|i| {
                    i.quantities.iter().chain(if i.class == Class::P {
                        i.more_values.iter()
                    } else {
                        [].iter()
                    })
                })
                .cloned()
                .collect();
            found.push(Statement {
                id: 0,
                block,
                range: start..end,
                sentence: sentences::around(self.text, range, &(start..end)),
                quantities,
            });
        }
    }
}

/// Words that show that single letters in this block are statistics.
fn tests_are_named(text: &str) -> bool {
    const WORDS: [&str; 12] = [
        "ignifican",
        "orrelat",
        "t-test",
        "t test",
        "ANOVA",
        "egress",
        "effect",
        "chi-square",
        "variance",
        "Cohen",
        "Wilcoxon",
        "Mann",
    ];
    WORDS
        .iter()
        .any(|w| memchr::memmem::find(text.as_bytes(), w.as_bytes()).is_some())
}

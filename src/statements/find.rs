//! Finding all statements of a manuscript, block by block.

use super::context::Context;
use super::grammar::{Class, Grammar};
use super::lists::List;
use super::tokens::{self, Token};
use super::{Scan, Statement, values};
use crate::manuscript::{BlockKind, Manuscript};
use std::ops::Range;

/// Finds the statements of the abstract and the body.
pub fn find(manuscript: &Manuscript, grammar: &Grammar, alpha: f64) -> Vec<Statement> {
    let context = Context::of(&manuscript.text, grammar);
    let text = context.text.as_ref();
    let commas = values::writes_decimal_commas(text);
    let medians = grammar.medians.is_match(text);
    let mut tokens: Vec<Token> = Vec::new();
    let mut statements = Vec::new();
    for (index, block) in manuscript.blocks.iter().enumerate() {
        let range = context.range(&block.range);
        if !block.is_authors_own() || !may_hold_results(grammar, &text.as_bytes()[range.clone()]) {
            continue;
        }
        tokens.clear();
        tokens::tokenize(text, range.start, range.end, &mut tokens);
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
        scan.statements(index, &range, &mut statements);
    }
    context.carry_back(&mut statements, grammar, &manuscript.text);
    for (i, statement) in statements.iter_mut().enumerate() {
        statement.id = i + 1;
    }
    statements
}

/// A quick look: where none of these marks and words stands there is no result.
fn may_hold_results(grammar: &Grammar, bytes: &[u8]) -> bool {
    // 0xc2 begins ±.
    memchr::memchr3(b'=', b'<', b'>', bytes).is_some()
        || memchr::memchr3(b'%', b':', 0xc2, bytes).is_some()
        || grammar.lists.get(List::PromisingFragments).is_in(bytes)
}

impl Scan<'_> {
    /// Appends the statements of one block.
    fn statements(&self, block: usize, range: &Range<usize>, found: &mut Vec<Statement>) {
        let items = self.items();
        if items.is_empty() {
            return;
        }
        let text = &self.text.as_bytes()[range.clone()];
        // Whether single letters may be statistics in this block.
        let supported = items.iter().any(|i| {
            i.class == Class::P
                || i.class == Class::Statistic && i.plain
                || self.grammar.has(i.symbol(), |s| s.spread)
        }) || self.list(List::TestFragments).is_in(text);
        for mut draft in self.join(items) {
            draft.without_equation();
            if !self.is_result(&draft, range, supported) {
                continue;
            }
            let bytes = draft.bytes();
            let quantities = draft.items.iter().flat_map(|i| {
                // Several p without tests to go to stay together.
                let more = if i.class == Class::P {
                    &i.more_values[..]
                } else {
                    &[]
                };
                i.quantities.iter().chain(more)
            });
            found.push(Statement {
                id: 0,
                block,
                sentence: self.sentence(range, &bytes),
                quantities: quantities.cloned().collect(),
                range: bytes,
            });
        }
    }
}

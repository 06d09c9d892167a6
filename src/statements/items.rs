//! *Items* are the assignments that stand in a text: a symbol with its arguments, a comparator and
//! a number (`t(28) = 2.20`), an interval (`95% CI [0.1, 1.5]`), or a form without a comparator.

use super::grammar::Class;
use super::names::has_label;
use super::tokens::{Kind, on_the_line};
use super::values::Value;
use super::{Doubt, Quantity, Scan};
use crate::numbers::Comparator;
use std::ops::Range;

/// One assignment as it stands in the text.
#[derive(Clone, Debug)]
pub struct Item {
    pub class: Class,
    /// First token and the token behind the last.
    pub tokens: Range<usize>,
    /// Byte range in the text, closing bracket of an interval included.
    pub bytes: Range<usize>,
    /// The symbol's quantity first, then its arguments.
    pub quantities: Vec<Quantity>,
    /// Several values for several results: `ps = .036 and .759`.
    pub more_values: Vec<Quantity>,
    pub plural: bool,
    /// May stand without a p, a df or a test nearby.
    pub alone: bool,
    /// Written out or with arguments: the letter cannot mean anything else.
    pub plain: bool,
}

impl Item {
    /// An item that stands for itself and cannot mean anything else.
    pub(super) fn new(
        class: Class,
        tokens: Range<usize>,
        bytes: Range<usize>,
        quantities: Vec<Quantity>,
    ) -> Item {
        Item {
            class,
            tokens,
            bytes,
            quantities,
            more_values: Vec::new(),
            plural: false,
            alone: true,
            plain: true,
        }
    }

    /// The symbol of its first quantity.
    pub(super) fn symbol(&self) -> &'static str {
        self.quantities[0].symbol
    }
}

impl Scan<'_> {
    /// All items of the block, in the order of the text.
    pub fn items(&self) -> Vec<Item> {
        let mut items: Vec<Item> = Vec::new();
        let mut at = 0;
        while at < self.tokens.len() {
            let Some((found, next)) = self.items_at(at) else {
                at += 1;
                continue;
            };
            for item in found {
                let followers = self.followers(&item);
                items.push(self.shared_power(item, &followers));
                items.extend(followers);
            }
            let end = items.last().map_or(next, |i| i.tokens.end);
            at = next.max(end).max(at + 1);
        }
        items
    }

    /// What begins at token `at`, and the token behind it.
    fn items_at(&self, at: usize) -> Option<(Vec<Item>, usize)> {
        let token = self.tokens[at];
        let shown = token.text(self.text);
        let one = |(item, next)| (vec![item], next);
        match token.kind {
            // Nearly all words of a text end here.
            Kind::Word if !self.grammar.may_begin(shown) => {
                has_label(shown).then(|| self.assignment(at))?.map(one)
            }
            Kind::Word => self
                .interval(at)
                .or_else(|| self.paired(at))
                .or_else(|| self.assignment(at))
                .map(one)
                .or_else(|| self.spelled_out(at).and_then(|_| self.form(at))),
            Kind::Number => self
                .form(at)
                .or_else(|| self.mean_and_spread(at))
                .or_else(|| self.unnamed(at)),
            Kind::Mark if !shown.is_ascii() => self.assignment(at).map(one),
            _ => None,
        }
    }

    /// The quantity of a symbol, from the number as read.
    pub(super) fn quantity(&self, symbol: &'static str, comparator: Comparator, value: &Value) -> Quantity {
        let whole = self.grammar.exact(symbol);
        let interval = comparator.interval(&value.number, whole);
        // A character that nobody could read stands right before the digits: it may be a minus.
        let before = &self.text[..value.span.start];
        let unreadable = before.strip_suffix(' ').unwrap_or(before).ends_with('\u{fffd}');
        let unsigned = (unreadable && !whole && !value.number.negative).then_some(interval);
        Quantity {
            symbol,
            printed: on_the_line(&self.text[value.span.clone()]),
            comparator,
            number: value.number,
            interval: unsigned.map_or(interval, |i| i.hull(i.negate())),
            span: value.span.clone(),
            borrowed: None,
            doubt: Doubt {
                unsigned,
                by_context: None,
            },
        }
    }

    /// The byte range of tokens.
    pub(super) fn bytes(&self, from: usize, to: usize) -> Range<usize> {
        self.tokens[from].start as usize..self.tokens[to - 1].end as usize
    }
}

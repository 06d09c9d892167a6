//! *Surroundings*: what stands right before or behind a symbol and its number and shows that it is,
//! or is not, what it looks like.

use super::Scan;
use super::grammar::Class;
use super::lists::{List, Phrase};
use super::tokens::Kind;
use super::values::Company;

impl Scan<'_> {
    /// `n.s.`, `ns`, `NS` at token `at`: the token behind it.
    pub(super) fn not_significant(&self, at: usize) -> Option<usize> {
        self.phrase(at, Phrase::NotSignificant)
    }

    /// A unit stands at token `at`.
    pub(super) fn unit(&self, at: usize) -> bool {
        // A symbol of the next result is no unit: `d = 0.5 M = 3`.
        self.is(at, List::Units) && self.comparator(at + 1, false).is_none()
    }

    /// A word for a unit stands at token `at`, where it may also be one that is something else elsewhere.
    pub(super) fn unit_word(&self, at: usize) -> bool {
        self.word(at).is_some() && (self.is(at, List::Units) || self.is(at, List::ShortUnits))
    }

    /// The number behind the symbol at token `at` has a unit at token `next`, or shares that of a list:
    /// `r = .75, r = 1.75 and r = 3.25 μm`.
    pub(super) fn has_unit(&self, at: usize, mut next: usize) -> bool {
        const LONGEST: usize = 6;
        if self.unit(next) {
            return true;
        }
        for _ in 0..LONGEST {
            let from = next;
            next += usize::from(self.mark(next) == Some(","));
            next += usize::from(self.is(next, List::And) || self.is(next, List::Or));
            if next == from || self.shown(next) != self.shown(at) || self.mark(next + 1) != Some("=") {
                return false;
            }
            let Some(value) = self.value(next + 2, Company::Single) else {
                return false;
            };
            next = value.next;
            if self.unit(next) {
                return true;
            }
        }
        false
    }

    /// The word before shows that the letter means something else: `learning rate r = 0.04`.
    pub(super) fn misleading_before(&self, at: usize) -> bool {
        let mut i = at;
        while i > 0 && matches!(self.mark(i - 1), Some("(" | "," | "[")) {
            i -= 1;
        }
        i > 0 && self.is(i - 1, List::Before)
    }

    /// A df or a p stands behind the comma at token `at`: what is before it is a test.
    pub(super) fn test_goes_on(&self, at: usize) -> bool {
        matches!(self.mark(at), Some("," | ";" | ":"))
            && self
                .symbol(at + 1)
                .is_some_and(|(symbol, _)| matches!(symbol.class, Class::P | Class::Df))
    }

    /// A word of this meaning stands in the block.
    pub(super) fn near(&self, meaning: &str) -> bool {
        let words = self.words.get_or_init(|| {
            self.grammar
                .words_in(self.text_of_block())
                .map(|(found, _)| found)
                .collect()
        });
        words.contains(meaning)
    }

    fn text_of_block(&self) -> &str {
        match (self.tokens.first(), self.tokens.last()) {
            (Some(first), Some(last)) => &self.text[first.start as usize..last.end as usize],
            _ => "",
        }
    }

    /// The token at `at` does not continue a word, number or hyphenated compound.
    pub(super) fn begins_word(&self, at: usize) -> bool {
        if at == 0 || self.tokens[at].spaced {
            return true;
        }
        match self.tokens[at - 1].kind {
            // The bounds of a sum: `∑_(m = 1)`.
            Kind::Mark if self.shown(at - 1) == Some("(") => at < 2 || self.mark(at - 2) != Some("_"),
            // `&P = 0.09` below a table explains a sign.
            Kind::Mark if self.shown(at - 1) == Some("&") => self.tokens[at - 1].spaced,
            // The letter at the end of a name: `IL-2`, `BEAN-S2`.
            Kind::Mark if self.shown(at - 1) == Some("-") && at > 1 && !self.tokens[at - 1].spaced => !self
                .word(at - 2)
                .is_some_and(|w| w.len() > 1 && w.bytes().all(|b| b.is_ascii_uppercase())),
            Kind::Mark => !matches!(self.shown(at - 1), Some("@" | "#" | "$" | "\\" | "^")),
            Kind::Raised => true,
            _ => false,
        }
    }
}

//! *Surroundings*: what stands right before or behind a symbol and its number and shows that it is,
//! or is not, what it looks like.

use super::Scan;
use super::grammar::Class;
use super::tokens::Kind;

impl Scan<'_> {
    /// `n.s.`, `ns`, `NS` at token `at`: the token behind it.
    pub(super) fn not_significant(&self, at: usize) -> Option<usize> {
        let word = self.word(at)?;
        if word.eq_ignore_ascii_case("ns") {
            return Some(at + 1);
        }
        if word.eq_ignore_ascii_case("n")
            && self.mark(at + 1) == Some(".")
            && self.word(at + 2).is_some_and(|w| w.eq_ignore_ascii_case("s"))
        {
            return Some(if self.mark(at + 3) == Some(".") {
                at + 4
            } else {
                at + 3
            });
        }
        None
    }

    /// A unit stands at token `at`.
    pub(super) fn unit(&self, at: usize) -> bool {
        let Some(shown) = self.shown(at) else { return false };
        if self.tokens[at].kind == Kind::Mark && matches!(shown, "°") {
            return true;
        }
        // A symbol of the next result is no unit: `d = 0.5 M = 3`.
        let starts_next = self
            .grammar
            .comparator(self.text, self.tokens, at + 1, false)
            .is_some();
        self.grammar.units.contains(shown) && !starts_next
    }

    /// The word before shows that the letter means something else: `learning rate r = 0.04`.
    pub(super) fn misleading_before(&self, at: usize) -> bool {
        let mut i = at;
        while i > 0 && matches!(self.mark(i - 1), Some("(" | "," | "[")) {
            i -= 1;
        }
        i > 0
            && self
                .word(i - 1)
                .is_some_and(|w| self.grammar.before.contains(w.to_lowercase().as_str()))
    }

    /// A df or a p stands behind the comma at token `at`: what is before it is a test.
    pub(super) fn goes_on(&self, at: usize) -> bool {
        matches!(self.mark(at), Some("," | ";" | ":"))
            && self
                .grammar
                .spellings
                .at(self.text, self.tokens, at + 1, |_| true)
                .is_some_and(|f| {
                    matches!(
                        self.grammar.symbols[f.spelling.meaning].class,
                        Class::P | Class::Df
                    )
                })
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

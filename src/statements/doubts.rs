//! *Doubts*: whether a symbol with a number behind it is what it looks like. Most letters stand for other
//! things, too; the number, what stands behind it and what stands before the letter tell.

use super::Scan;
use super::assignment::{Head, Link, Tie};
use super::grammar::{Class, Symbol};
use super::lists::List;
use super::tokens::Kind;
use super::values::Value;
use crate::numbers::Comparator;

/// How many words before an n may show that it counts resamples.
const RESAMPLES_WITHIN: usize = 4;

impl Scan<'_> {
    /// The assignment is not what it looks like. Token `next` is behind the value and its percent sign.
    pub(super) fn doubtful(&self, head: &Head, link: &Link, value: &Value, next: usize) -> bool {
        let symbol = head.symbol;
        // `T2 = 40 ms` has no argument that shows it to be a test.
        let bracketed = (head.at..head.next).any(|i| matches!(self.mark(i), Some("(" | "[")));
        self.lacks_decimals(head, link)
            || out_of_bounds(symbol, link, value)
            || self.goes_on_otherwise(symbol, value.next)
            || symbol.class == Class::Size && self.counts_other_things(head.at, next)
            || !symbol.units && !bracketed && self.has_unit(head.at, next)
            || self.formula(symbol.class, value, next)
            || head.bare_letter() && self.misleading_before(head.at) && !self.test_goes_on(next)
    }

    /// A number without a sign before it needs decimals, or a bracket or `±` behind it, as `mean 2014` and
    /// `median (12)` show; so does that of a test behind a word: `the Spearman correlation of 14,737 pairs`.
    fn lacks_decimals(&self, head: &Head, link: &Link) -> bool {
        let class = head.symbol.class;
        let needed = match link.tie {
            Tie::Things => false,
            Tie::Compared => class == Class::Statistic && self.word(link.value_at - 1).is_some(),
            // `Bayes factor 16` can be nothing else; `HR 2 (…)`, `SD 4` and `df 28` are usual.
            Tie::Nearness if head.words => !head.symbol.integers,
            Tie::Nearness => !matches!(class, Class::Ratio | Class::Descriptive | Class::Df),
        };
        let signed = matches!(self.mark(link.value_at), Some("-" | "+"));
        let number = link.value_at + usize::from(signed);
        needed && !self.has_decimals(number) && !matches!(self.mark(number + 1), Some("(" | "[" | "±"))
    }

    /// What stands behind the number makes it another thing: times of day and proportions (`median 08:35`,
    /// `1:3`), `100-fold`, the mean of spreads (`SD were 0.85 ± 0.16`).
    fn goes_on_otherwise(&self, symbol: &Symbol, next: usize) -> bool {
        let tight = self.tight(next) && self.tight(next + 1);
        let proportion = tight && self.mark(next) == Some(":") && self.tokens[next + 1].kind == Kind::Number;
        let compound = tight
            && self.mark(next) == Some("-")
            && self.word(next + 1).is_some()
            && matches!(symbol.class, Class::Descriptive | Class::Estimate | Class::Ratio);
        proportion || compound || symbol.spread && self.mark(next) == Some("±")
    }

    /// An n that counts replicates or resamples: `n = 3 independent experiments`, `Bootstrap values (n = 1000)`.
    fn counts_other_things(&self, at: usize, next: usize) -> bool {
        let next = next + usize::from(self.is(next, List::BeforeReplicates));
        self.is(next, List::Replicates)
            || (at.saturating_sub(RESAMPLES_WITHIN)..at).any(|i| self.is(i, List::Resampling))
    }
}

/// No such symbol has such a value.
fn out_of_bounds(symbol: &Symbol, link: &Link, value: &Value) -> bool {
    let number = value.number.value();
    if !value.number.is_whole() {
        // No size has decimals.
        return symbol.whole;
    }
    // `correlation of 14,737 genes`, `p = 10`
    let beyond = symbol.bounded && number.abs() > 1.0;
    // `p ≥ 0`, `p < 1`
    let says_nothing = symbol.class == Class::P
        && match link.comparator {
            Comparator::AtLeast | Comparator::Above => number == 0.0,
            Comparator::AtMost | Comparator::Below => number == 1.0,
            _ => false,
        };
    // `t = 0`
    let start = !symbol.zero && number == 0.0;
    // `FMNH PR 2512`
    let number_of_a_plate = symbol.class == Class::Ratio && link.tie == Tie::Nearness && number >= 1000.0;
    beyond || says_nothing || start || number_of_a_plate
}

//! *Several* numbers behind one comparator: the ends of a range of results (`rs = .34–.51`), the results
//! of several tests (`ps = .036 and .759`), or two degrees of freedom (`df = 2, 45`).

use super::Scan;
use super::assignment::Head;
use super::grammar::Class;
use super::lists::List;
use super::values::{Company, Value};
use crate::numbers::Comparator;

/// The numbers of one assignment.
pub(super) struct Values {
    pub first: Value,
    /// The upper end of a range of results, all of which lie inside.
    pub upper: Option<Value>,
    pub more: Vec<Value>,
    /// The sentence deals the values out to several results.
    pub respectively: bool,
    /// The token behind the last.
    pub next: usize,
}

impl Scan<'_> {
    /// What follows the first value, from token `next`. Nothing if a unit behind the last number shows
    /// that the symbol means something else.
    pub(super) fn values(
        &self,
        head: &Head,
        comparator: Comparator,
        first: Value,
        next: usize,
    ) -> Option<Values> {
        let symbol = head.symbol;
        let dealt = symbol.dealt || matches!(symbol.class, Class::Statistic | Class::P | Class::Size);
        let mut values = Values {
            upper: self.range_end(symbol.class, comparator, next),
            respectively: dealt && !head.plural && self.respectively(next),
            more: Vec::new(),
            first,
            next,
        };
        if let Some(upper) = &values.upper {
            values.next = upper.next;
            return Some(values);
        }
        if !(head.plural || symbol.pair.is_some() || values.respectively) {
            return Some(values);
        }
        let company = match symbol.whole {
            true => Company::Whole,
            false => Company::List,
        };
        while let Some(further) = self.next_in_list(values.next, company) {
            values.next = further.next;
            values.more.push(further);
            if symbol.pair.is_some() {
                break;
            }
        }
        let something_else =
            !symbol.units && head.arguments.is_empty() && !values.more.is_empty() && self.unit(values.next);
        (!something_else).then_some(values)
    }

    /// The upper end of a range of results at token `at`: `–.51`, `-.51`, ` to .51`.
    fn range_end(&self, class: Class, comparator: Comparator, at: usize) -> Option<Value> {
        let ranged = matches!(
            class,
            Class::Statistic | Class::P | Class::Effect | Class::Estimate | Class::Ratio | Class::Size
        );
        let goes_on = self.mark(at) == Some("–")
            || self.mark(at) == Some("-") && !self.tokens[at].spaced
            || self.is(at, List::To) && self.has_decimals(at + 1);
        if !ranged || !goes_on || comparator != Comparator::Equal {
            return None;
        }
        self.value(at + 1, Company::Single)
            .filter(|v| v.number.value().is_finite())
    }

    /// A list goes on at token `at` that the sentence deals out with `respectively`.
    fn respectively(&self, at: usize) -> bool {
        const WITHIN: usize = 40;
        self.next_in_list(at, Company::List).is_some()
            && (at..self.tokens.len().min(at + WITHIN))
                .take_while(|i| self.mark(*i) != Some("."))
                .any(|i| self.is(i, List::Respectively))
    }

    /// A further number of a list at token `at`: `, .31`, ` and .759`, `, and .2`, `/ .3`, `or`, `&`.
    fn next_in_list(&self, at: usize, company: Company) -> Option<Value> {
        let mut i = at;
        if matches!(self.mark(i), Some("," | ";" | "/" | "&")) {
            i += 1;
        }
        if self.is(i, List::And) || self.is(i, List::Or) {
            i += 1;
        }
        (i > at).then(|| self.value(i, company))?
    }
}

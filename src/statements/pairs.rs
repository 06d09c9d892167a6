//! *Pairs*: means with their spread (`3.71 ± 0.94`, `mean (SD) 3.4 (1.1)`), ratios and medians with the ends
//! of their interval in brackets (`OR = 1.52 (1.10–2.11)`), sizes with their share (`n = 12 (35%)`).

use super::Scan;
use super::arguments::closing;
use super::grammar::{Bracket, Class};
use super::items::Item;
use super::tokens::Kind;
use super::values::{Company, Value};
use crate::numbers::Comparator;

/// Signs of multiplication before a power of ten.
const TIMES: [char; 5] = ['×', 'x', 'X', '*', '∙'];

impl Scan<'_> {
    /// What may follow an item in brackets without a name: the interval of a ratio or a median, the
    /// spread of a mean, the share of a size.
    pub(super) fn followers(&self, item: &Item) -> Vec<Item> {
        self.follower(item).into_iter().collect()
    }

    fn follower(&self, item: &Item) -> Option<Item> {
        let at = item.tokens.end;
        if self.mark(at) == Some("±") {
            return self.spread_behind(at + 1);
        }
        if item.class == Class::Statistic {
            return self.bare_not_significant(at);
        }
        // `OR = 0.20, [0.06, 0.67]`
        let estimate = matches!(item.class, Class::Ratio | Class::Estimate | Class::Effect);
        if estimate && self.mark(at) == Some(",") && self.mark(at + 1) == Some("[") && !item.plural {
            return self.ends_behind(item, at + 1, "CI_low", "CI_high", true);
        }
        let size = item.class == Class::Size;
        let listed = size && matches!(self.mark(at), Some("," | ";"));
        if !matches!(self.mark(at), Some("(" | "[")) && !listed || item.plural {
            return None;
        }
        if size {
            return self.bracketed_percent(at);
        }
        match self.grammar.named(item.symbol()).and_then(|s| s.bracket) {
            _ if item.class == Class::Ratio => self.ends_behind(item, at, "CI_low", "CI_high", false),
            Some(Bracket::Quartiles) if self.near("medians") => {
                self.ends_behind(item, at, "IQR_low", "IQR_high", true)
            }
            Some(Bracket::Quartiles) => self.ends_behind(item, at, "range_low", "range_high", true),
            Some(Bracket::Spread) => self.bracketed_spread(at),
            None => None,
        }
    }

    /// `(1.10–2.11)` at token `at`, behind an item. `inside`: its number must lie between the ends.
    fn ends_behind(
        &self,
        item: &Item,
        at: usize,
        low_name: &'static str,
        high_name: &'static str,
        inside: bool,
    ) -> Option<Item> {
        let (low, high, behind) = self.two_ends(at)?;
        let number = item.quantities[0].number.value();
        if inside && !(low.number.value() <= number && number <= high.number.value()) {
            return None;
        }
        let quantities = vec![
            self.quantity(low_name, Comparator::Equal, &low),
            self.quantity(high_name, Comparator::Equal, &high),
        ];
        let bytes = low.span.start..self.bytes(at, behind).end;
        Some(Item::new(Class::Interval, at + 1..behind, bytes, quantities))
    }

    /// `(1.1)` behind a mean, alone in its brackets.
    fn bracketed_spread(&self, at: usize) -> Option<Item> {
        let symbol = self.spread_symbol()?;
        let value = self.value(at + 1, Company::Single)?;
        let closes = matches!(self.mark(value.next), Some(")" | "]"));
        (closes && value.number.digits >= 0).then(|| self.spread(symbol, &value, at + 1))
    }

    fn spread(&self, symbol: &'static str, value: &Value, from: usize) -> Item {
        Item {
            tokens: from..value.next,
            alone: false,
            ..self.lone(symbol, Class::Descriptive, value, from)
        }
    }

    /// A number that stands for itself, by the symbol that is meant.
    pub(super) fn lone(&self, symbol: &'static str, class: Class, value: &Value, from: usize) -> Item {
        let quantity = self.quantity(symbol, Comparator::Equal, value);
        Item::new(class, from..value.next, value.span.clone(), vec![quantity])
    }

    /// `(35.3%)` behind a number of cases.
    pub(super) fn bracketed_percent(&self, at: usize) -> Option<Item> {
        let value = self.value(at + 1, Company::Single)?;
        let next = value.next;
        if self.mark(next) != Some("%") || !matches!(self.mark(next + 1), Some(")" | "]" | "," | ";")) {
            return None;
        }
        let quantities = vec![self.quantity("percent", Comparator::Equal, &value)];
        let bytes = self.bytes(at + 1, next + 1);
        Some(Item::new(Class::Other, at + 1..next + 1, bytes, quantities))
    }

    /// `0.94` behind `±` at token `at`; what it is may stand behind it: `0.94 (SD)`, `0.94° SE`.
    fn spread_behind(&self, at: usize) -> Option<Item> {
        let value = self.value(at, Company::Single)?;
        if value.number.digits < 0 {
            return None;
        }
        let symbol = self
            .spread_told(value.next)
            .or_else(|| self.spread_symbol())
            .or_else(|| self.spread_before(value.span.start))
            .unwrap_or("spread");
        Some(self.spread(symbol, &value, at))
    }

    /// The spread that is named behind its number, at token `at`: `(SD)`, `° SE`.
    fn spread_told(&self, at: usize) -> Option<&'static str> {
        let unit = matches!(self.mark(at), Some("%" | "°")) || self.unit_word(at);
        let next = at + usize::from(unit);
        let bracket = matches!(self.mark(next), Some("(" | "["));
        let (symbol, behind) = self.symbol(next + usize::from(bracket))?;
        let ends = match self.tokens.get(behind) {
            Some(_) if bracket => matches!(self.mark(behind), Some(")" | "]")),
            // A number, or a sign before it, makes it the symbol of that number.
            Some(t) => t.kind != Kind::Number && !matches!(self.mark(behind), Some("=" | ":" | "(")),
            None => true,
        };
        (symbol.spread && ends).then_some(symbol.name)
    }

    /// Where a block speaks of several spreads: the last one named in the sentence before this byte.
    fn spread_before(&self, byte: usize) -> Option<&'static str> {
        if !self.near("spread-sd") || !self.near("spread-se") {
            return None;
        }
        let block = self.tokens.first()?.start as usize..self.tokens.last()?.end as usize;
        let start = self.sentence(&block, &(byte..byte)).start;
        self.grammar
            .words_in(&self.text[start..byte])
            .filter_map(|(meaning, _)| match meaning {
                "spread-sd" => Some("SD"),
                "spread-se" => Some("SE"),
                _ => None,
            })
            .last()
    }

    /// What the number behind a mean is, as far as the block says.
    fn spread_symbol(&self) -> Option<&'static str> {
        match (
            self.near("spread-sd"),
            self.near("spread-se"),
            self.near("spread-ci"),
        ) {
            (true, false, false) => Some("SD"),
            (false, true, false) => Some("SE"),
            _ => None,
        }
    }

    /// `3.71 ± 0.94` without a symbol before it.
    pub(super) fn mean_and_spread(&self, at: usize) -> Option<(Vec<Item>, usize)> {
        const WITHIN: usize = 8;
        if !(at + 1..at + WITHIN).any(|i| self.mark(i) == Some("±")) {
            return None;
        }
        // `pH 7.0 ± 3.0`
        if self.misleading_before(at) {
            return None;
        }
        let signed = at > 0 && self.mark(at - 1) == Some("-") && self.tokens[at - 1].spaced;
        let from = at - usize::from(signed);
        let value = self.value(from, Company::Single)?;
        // `32.5° ± 9.2°`
        let unit = matches!(self.mark(value.next), Some("°" | "%"));
        let sign = value.next + usize::from(unit);
        if self.mark(sign) != Some("±") {
            return None;
        }
        let mean = Item {
            tokens: from..sign,
            ..self.lone("M", Class::Descriptive, &value, from)
        };
        Some((vec![mean], value.next))
    }

    /// `M (SD) = 3.4 (1.1)`, `mean ± SD 3.4 ± 1.1`, `median (IQR) 54 (50–62)` at token `at`.
    pub(super) fn paired(&self, at: usize) -> Option<(Item, usize)> {
        let (first, behind) = self.symbol(at)?;
        let close = match self.mark(behind)? {
            "±" => None,
            open @ ("(" | "[") => closing(open),
            _ => return None,
        };
        // `odds ratio (OR) 1.5 (1.1–2.0)`: one symbol, named twice.
        if self.abbreviation(behind, first.name).is_some() {
            return None;
        }
        let inside = behind + 1;
        let (second, mut next) = match self.symbol(inside) {
            Some((symbol, behind)) => (Second::Symbol(symbol.name), behind),
            None => {
                let (names, behind) = self.interval_name(inside)?;
                (Second::Ends(names.low, names.high), behind)
            }
        };
        if let Some(close) = close {
            if self.mark(next) != Some(close) {
                return None;
            }
            next += 1;
        }
        next = match self.comparator(next, true) {
            Some((_, behind)) => behind,
            None => next + usize::from(matches!(self.mark(next), Some("," | ":"))),
        };
        let company = match first.whole {
            true => Company::Whole,
            false => Company::Single,
        };
        let value = self.value(next, company)?;
        if !matches!(self.mark(value.next), Some("(" | "[" | "±")) {
            return None;
        }
        let mut quantities = vec![self.quantity(first.name, Comparator::Equal, &value)];
        let behind = match second {
            Second::Ends(low_name, high_name) => {
                let (low, high, behind) = self.two_ends(value.next)?;
                quantities.push(self.quantity(low_name, Comparator::Equal, &low));
                quantities.push(self.quantity(high_name, Comparator::Equal, &high));
                behind
            }
            Second::Symbol(name) => {
                let second = self.value(value.next + 1, Company::Single)?;
                quantities.push(self.quantity(name, Comparator::Equal, &second));
                let closes = close.is_some() && matches!(self.mark(second.next), Some(")" | "]"));
                second.next + usize::from(closes)
            }
        };
        let item = Item::new(first.class, at..behind, self.bytes(at, behind), quantities);
        Some((item, behind))
    }

    /// `4.6 ± 0.8 × 10⁻³`: the power belongs to the mean, too.
    pub(super) fn shared_power(&self, mut item: Item, followers: &[Item]) -> Item {
        let (Some(head), Some(spread)) = (
            item.quantities.first_mut(),
            followers.first().and_then(|f| f.quantities.first()),
        ) else {
            return item;
        };
        let between = &self.text[head.span.end.min(spread.span.start)..spread.span.start];
        let factor = spread
            .printed
            .find(TIMES)
            .map(|end| spread.printed[..end].trim_end());
        let (Some(factor), "±") = (factor, between.trim()) else {
            return item;
        };
        if head.printed.contains("10") && head.printed.contains(TIMES) {
            return item;
        }
        let decimals = factor
            .find(['.', '·'])
            .map_or(0, |point| factor[point..].chars().count() as i32 - 1);
        head.number.place += spread.number.place + decimals;
        head.interval = head.comparator.interval(&head.number, false);
        item
    }
}

/// What the second number of a pair is.
enum Second {
    Symbol(&'static str),
    Ends(&'static str, &'static str),
}

//! *Items* are the assignments that stand in a text: a symbol with its arguments, a comparator and
//! a number (`t(28) = 2.20`), an interval (`95% CI [0.1, 1.5]`), or a form without a comparator.

use super::grammar::{Class, Symbol};
use super::names::has_label;
use super::spellings::Spelling;
use super::tokens::{Kind, on_the_line};
use super::values::{Company, Value};
use super::{Quantity, Scan};
use crate::numbers::{Comparator, Decimal};
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

impl Scan<'_> {
    /// All items of the block, in the order of the text.
    pub fn items(&self) -> Vec<Item> {
        let mut items: Vec<Item> = Vec::new();
        let mut at = 0;
        while at < self.tokens.len() {
            let token = self.tokens[at];
            let found = match token.kind {
                Kind::Word if !self.grammar.may_begin(token.text(self.text)) => {
                    if has_label(token.text(self.text)) {
                        self.assignment(at).map(|(item, next)| (vec![item], next))
                    } else {
                        None
                    }
                }
                Kind::Word => self
                    .interval(at)
                    .or_else(|| self.paired(at))
                    .or_else(|| self.assignment(at))
                    .map(|(item, next)| (vec![item], next))
                    .or_else(|| self.spelled_out(at).and_then(|_| self.form(at))),
                Kind::Number => self
                    .form(at)
                    .or_else(|| self.mean_and_spread(at))
                    .or_else(|| self.unnamed(at)),
                Kind::Mark if !token.text(self.text).is_ascii() => {
                    self.assignment(at).map(|(item, next)| (vec![item], next))
                }
                _ => None,
            };
            match found {
                Some((found, next)) => {
                    for item in found {
                        let follower = self.follower(&item);
                        items.push(self.shared_power(item, &follower));
                        items.extend(follower);
                    }
                    let end = items.last().map_or(next, |i| i.tokens.end);
                    at = next.max(end).max(at + 1);
                }
                None => at += 1,
            }
        }
        items
    }

    /// `symbol arguments comparator number` at token `at`.
    pub(super) fn assignment(&self, at: usize) -> Option<(Item, usize)> {
        // `f₂,₄₅`: the lowered digits are two df, and no `f₂`.
        let lowered = |i: usize| {
            self.tokens
                .get(i)
                .is_some_and(|t| t.kind == Kind::Lowered && !t.spaced)
        };
        let pair = lowered(at + 1) && self.mark(at + 2) == Some(",") && lowered(at + 3);
        let takes_two = |s: &Spelling| !pair || self.grammar.symbols[s.meaning].arguments.len() > 1;
        let found = self
            .squared_behind(at)
            .or_else(|| self.grammar.spellings.at(self.text, self.tokens, at, takes_two))
            .or_else(|| self.labelled(at))?;
        let labelled = has_label(&self.text[self.bytes(at, at + 1)]);
        if !self.begins_word(at) {
            return None;
        }
        let symbol = &self.grammar.symbols[found.spelling.meaning];
        if self.factor(at, found.next, symbol.class) {
            return None;
        }
        let words = found.spelling.words;
        let (mut arguments, mut next) = self.arguments(&found);
        let with_arguments = !arguments.is_empty();
        if arguments.is_empty() && !symbol.arguments.is_empty() && self.mark(next) == Some("_") {
            next += 1;
        }
        // A remark in brackets: `p (two-tailed) = .03`, `odds ratio [OR] 1.5`.
        if let Some(behind) = self.remark(next).or_else(|| self.abbreviation(next, symbol.name)) {
            next = behind;
        }
        let wordy = words || symbol.bare || with_arguments || symbol.class == Class::P;
        let compared = self
            .grammar
            .comparator(self.text, self.tokens, next, wordy)
            .filter(|(_, behind)| {
                // `mean of the` is no comparator yet.
                let on = self.word(next).is_some() && self.word(*behind).is_some();
                !on || self.not_significant(*behind).is_some()
            })
            .or_else(|| {
                let passes = words || matches!(symbol.class, Class::P | Class::Ratio);
                passes.then(|| self.passing(symbol.class, next))?
            })
            .or_else(|| {
                // `Estimate: 0.81`
                let long = symbol.class == Class::Estimate && self.word(at).is_some_and(|w| w.len() > 2);
                (long && self.mark(next) == Some(":")).then_some((Comparator::Equal, next + 1))
            });
        // `mean length 25 cm`
        let things = (compared.is_none() && words && matches!(symbol.name, "M" | "Mdn"))
            .then(|| self.behind_things(next))
            .flatten();
        let (comparator, value_at) = match compared {
            Some((comparator, behind)) => {
                // `p-value was < .001`: the sign decides.
                match self.grammar.comparator(self.text, self.tokens, behind, false) {
                    Some((sign, further)) if comparator == Comparator::Equal => (sign, further),
                    _ => (comparator, behind),
                }
            }
            // `(SD ± 3.1)`
            None if matches!(symbol.name, "SD" | "SE") && self.mark(next) == Some("±") => {
                (Comparator::Equal, next + 1)
            }
            None if things.is_some() => (Comparator::Equal, things?),
            None if words || symbol.bare => {
                let skipped = matches!(self.mark(next), Some("," | ":"));
                // `SD118` is a name.
                let decimals = self.shown(next).is_some_and(|s| s.contains(['.', '·']));
                if !skipped && !decimals && self.tokens.get(next).is_some_and(|t| !t.spaced) {
                    return None;
                }
                (Comparator::Equal, if skipped { next + 1 } else { next })
            }
            None if symbol.class == Class::P && self.not_significant(next).is_some() => {
                (Comparator::Equal, next)
            }
            None => return None,
        };
        if symbol.class == Class::P
            && let Some(behind) = self.not_significant(value_at)
        {
            let bytes = self.bytes(at, behind);
            let span = self.bytes(value_at, behind);
            let number = Decimal::round(self.alpha, -2)
                .filter(|d| d.value() == self.alpha)
                .or_else(|| Decimal::round(self.alpha, -4))?;
            let quantity = Quantity {
                symbol: symbol.name,
                printed: self.text[span.clone()].to_string(),
                comparator: Comparator::Above,
                number,
                interval: Comparator::Above.interval(&number, false),
                span,
                borrowed: None,
            };
            let item = Item {
                class: symbol.class,
                tokens: at..behind,
                bytes,
                quantities: vec![quantity],
                more_values: vec![],
                plural: found.spelling.plural,
                alone: true,
                plain: true,
            };
            return Some((item, behind));
        }
        let company = if found.spelling.plural {
            Company::List
        } else if symbol.whole {
            Company::Whole
        } else {
            Company::Single
        };
        let value = self.value(value_at, company)?;
        // `Bayes factor 16` can be nothing else.
        let named = words && symbol.name == "BF10";
        let plain = words || !matches!(symbol.class, Class::Ratio | Class::Descriptive | Class::Df);
        if compared.is_none() && things.is_none() && !named && !self.stands_by(value_at, plain)
            || self.is_no_size(symbol, compared.map(|c| c.0), &value)
        {
            return None;
        }
        // `the Spearman correlation of 14,737 pairs`
        let told = compared.is_some() && value_at > 0 && self.word(value_at - 1).is_some();
        if told && symbol.class == Class::Statistic && !self.stands_by(value_at, true) {
            return None;
        }
        let mut next = value.next;
        if matches!(self.mark(next), Some("%")) {
            if matches!(
                symbol.class,
                Class::Statistic | Class::P | Class::Df | Class::Size
            ) {
                return None;
            }
            next += 1;
        }
        if !symbol.units && !with_arguments && (self.unit(next) || self.shares_a_unit(at, next)) {
            return None;
        }
        if symbol.class == Class::Size
            && self
                .word(next + usize::from(self.word(next) == Some("independent")))
                .is_some_and(|w| self.grammar.replicates.contains(w))
        {
            return None;
        }
        // `Bootstrap values (n = 1000)`
        if symbol.class == Class::Size
            && (at.saturating_sub(4)..at)
                .filter_map(|i| self.word(i))
                .any(|w| self.grammar.resampling.contains(w.to_lowercase().as_str()))
        {
            return None;
        }
        // `k = 1, …, n` and `t = 2t₁`: a running index, a formula.
        let runs_on = usize::from(self.mark(next) == Some(","));
        let multiplied = self.word(next).is_some_and(|_| !self.tokens[next].spaced)
            && self
                .tokens
                .get(next + 1)
                .is_some_and(|t| t.kind == Kind::Lowered && !t.spaced);
        if self.mark(next + runs_on) == Some("…") || multiplied {
            return None;
        }
        if self.calculates(symbol.class, &value) {
            return None;
        }
        // No size has decimals.
        if symbol.whole && !value.number.is_whole() {
            return None;
        }
        if !with_arguments && !words && self.misleading_before(at) && !self.goes_on(next) {
            return None;
        }
        let mut name = self.renamed(symbol, &value, words);
        let mut more_values = Vec::new();
        // `rs = .34–.51`: several results, all of them inside.
        let upper = self.range_end(symbol, comparator, next);
        if let Some(upper) = &upper {
            next = upper.next;
        }
        // `df = 2, 45` behind F.
        let paired_off =
            matches!(symbol.class, Class::Statistic | Class::P | Class::Size) || symbol.name == "M";
        let respectively = paired_off && !found.spelling.plural && self.respectively(next);
        if upper.is_none() && (found.spelling.plural || symbol.name == "df" || respectively) {
            let mut behind = next;
            let listed = if symbol.whole {
                Company::Whole
            } else {
                Company::List
            };
            while let Some((further, after)) = self.next_in_list(behind, listed) {
                more_values.push(self.quantity(name, comparator, &further, symbol.whole));
                behind = after;
                if symbol.name == "df" {
                    break;
                }
            }
            next = behind;
            if !symbol.units && !with_arguments && !more_values.is_empty() && self.unit(next) {
                return None;
            }
        }
        if let Some(several) = symbol.several
            && (upper.is_some() || !more_values.is_empty())
        {
            name = several;
        }
        // `f(2, 45)` is an F.
        let argued = symbol.argued.filter(|_| with_arguments);
        name = argued.unwrap_or(name);
        let class = match argued {
            Some(_) => Class::Statistic,
            None if matches!(name, "level" | "time") => Class::Bait,
            None => symbol.class,
        };
        let mut first = self.quantity(name, comparator, &value, symbol.whole);
        if let Some(upper) = &upper {
            first.span.end = upper.span.end;
            first.printed = on_the_line(&self.text[first.span.clone()]);
            first.interval = first
                .interval
                .hull(comparator.interval(&upper.number, symbol.whole));
        }
        // `OR 1.80`, `r² = 0.48`; a whole number may be a heart rate or a rate of breaths.
        let sure = symbol.sure.is_some_and(|(low, high)| {
            comparator == Comparator::Equal
                && !first.number.is_whole()
                && (low..=high).contains(&first.number.value())
        });
        let has_more = !more_values.is_empty();
        let mut quantities = vec![first];
        quantities.append(&mut arguments);
        if symbol.name == "df" && more_values.len() == 1 {
            let second = Quantity {
                symbol: "df2",
                ..more_values.remove(0)
            };
            quantities[0].symbol = "df1";
            quantities.push(second);
        }
        let item = Item {
            class,
            tokens: at..next,
            bytes: self.bytes(at, next),
            quantities,
            more_values,
            plural: found.spelling.plural || respectively && has_more,
            alone: symbol.alone || sure,
            plain: words || with_arguments && argued.is_none() || labelled,
        };
        Some((item, next))
    }

    /// The upper end of a range of results at token `at`: `–.51`, `-.51`.
    fn range_end(&self, symbol: &Symbol, comparator: Comparator, at: usize) -> Option<Value> {
        let ranged = matches!(
            symbol.class,
            Class::Statistic | Class::P | Class::Effect | Class::Estimate | Class::Ratio | Class::Size
        );
        let dash = self.mark(at) == Some("–")
            || self.mark(at) == Some("-") && !self.tokens[at].spaced
            || self.word(at) == Some("to") && self.shown(at + 1).is_some_and(|s| s.contains(['.', '·']));
        if !ranged || !dash || comparator != Comparator::Equal {
            return None;
        }
        self.value(at + 1, Company::Single)
            .filter(|v| v.number.value().is_finite())
    }

    /// A number that stands by itself right behind a symbol: not the start of a range, a date, or a unit.
    fn stands_by(&self, at: usize, words: bool) -> bool {
        let signed = matches!(self.mark(at), Some("-" | "+"));
        let number = if signed { at + 1 } else { at };
        // `mean 2014`, `median (12)`: written-out symbols need a decimal point or a bracket behind.
        let shown = self.shown(number).unwrap_or_default();
        !words || shown.contains(['.', '·']) || matches!(self.mark(number + 1), Some("(" | "[" | "±"))
    }

    /// The symbol that the value shows to be meant.
    fn renamed(&self, symbol: &Symbol, value: &Value, words: bool) -> &'static str {
        let size = value.number.value().abs();
        match (symbol.above, symbol.below) {
            (Some((limit, other)), _) if size > limit => other,
            (_, Some((limit, other))) if size <= limit && !words => other,
            _ => match symbol.beside {
                Some([here, not_here, other]) if !words && self.near(here) && !self.near(not_here) => other,
                _ => symbol.name,
            },
        }
    }

    pub(super) fn quantity(
        &self,
        symbol: &'static str,
        comparator: Comparator,
        value: &Value,
        whole: bool,
    ) -> Quantity {
        let whole = whole || matches!(symbol, "df" | "df1" | "df2" | "n" | "N" | "count");
        Quantity {
            symbol,
            printed: on_the_line(&self.text[value.span.clone()]),
            comparator,
            number: value.number,
            interval: comparator.interval(&value.number, whole),
            span: value.span.clone(),
            borrowed: None,
        }
    }

    /// A list goes on at token `at` that the sentence deals out with `respectively`.
    fn respectively(&self, at: usize) -> bool {
        const WITHIN: usize = 40;
        self.next_in_list(at, Company::List).is_some()
            && (at..self.tokens.len().min(at + WITHIN))
                .take_while(|i| self.mark(*i) != Some("."))
                .any(|i| self.word(i) == Some("respectively"))
    }

    /// A further number of a list at token `at`: `, .31`, ` and .759`, `, and .2`, `/ .3`, `or`, `&`.
    fn next_in_list(&self, at: usize, company: Company) -> Option<(Value, usize)> {
        let mut i = at;
        if matches!(self.mark(i), Some("," | ";" | "/" | "&")) {
            i += 1;
        }
        if self
            .word(i)
            .is_some_and(|w| matches!(w, "and" | "or" | "und" | "et" | "y" | "e"))
        {
            i += 1;
        }
        if i == at {
            return None;
        }
        let value = self.value(i, company)?;
        let next = value.next;
        Some((value, next))
    }

    /// The byte range of tokens.
    pub(super) fn bytes(&self, from: usize, to: usize) -> Range<usize> {
        self.tokens[from].start as usize..self.tokens[to - 1].end as usize
    }

    /// A form without comparator at token `at`.
    fn form(&self, at: usize) -> Option<(Vec<Item>, usize)> {
        if !(self.begins_word(at) || at > 0 && self.tokens[at - 1].kind == Kind::Mark) {
            return None;
        }
        // `1.2-3/4 (5%)` and `12–34 (5%)`: the number is the end of something else.
        if at > 0
            && !self.tokens[at].spaced
            && matches!(
                self.mark(at - 1),
                Some("-" | "–" | "/" | "." | "·" | "," | ":" | "'")
            )
        {
            return None;
        }
        // All forms go on with a mark or one of few words; look before trying each.
        let last = self.spelled_out(at).map_or(at, |v| v.next - 1);
        let behind = self.shown(last + 1)?;
        let promising = matches!(
            behind,
            "/" | "(" | "[" | "%" | "," | "of" | "out" | "df" | "d" | "degrees" | "degree" | "and"
        );
        if !promising && !self.may_count(at, last) {
            return None;
        }
        for form in &self.grammar.forms {
            if let Some((slots, next)) = form.at(self, at) {
                let quantities: Vec<Quantity> = slots
                    .iter()
                    .map(|(symbol, value)| self.quantity(symbol, Comparator::Equal, value, false))
                    .collect();
                let sensible = quantities.iter().all(|q| match q.symbol {
                    "count" | "n" => q.number.is_whole() && q.number.digits >= 0,
                    "percent" => q.number.value() <= 1000.0,
                    _ => true,
                });
                // `2014 (95% CI`: a level is no share.
                let level = self
                    .grammar
                    .interval_spellings
                    .at(self.text, self.tokens, next, |_| true)
                    .is_some();
                if !sensible || level {
                    return None;
                }
                let class = if quantities[0].symbol.starts_with("df") {
                    Class::Df
                } else {
                    Class::Other
                };
                let item = Item {
                    class,
                    tokens: at..next,
                    bytes: self.bytes(at, next),
                    quantities,
                    more_values: vec![],
                    plural: false,
                    alone: true,
                    plain: true,
                };
                return Some((vec![item], next));
            }
        }
        None
    }
}

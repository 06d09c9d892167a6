//! *Items* are the assignments that stand in a text: a symbol with its arguments, a comparator and
//! a number (`t(28) = 2.20`), an interval (`95% CI [0.1, 1.5]`), or a form without a comparator.

use super::grammar::{Class, Symbol};
use super::spellings::Found;
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
                Kind::Word => self
                    .interval(at)
                    .or_else(|| self.paired(at))
                    .or_else(|| self.assignment(at))
                    .map(|(item, next)| (vec![item], next)),
                Kind::Number => self
                    .form(at)
                    .or_else(|| self.counted(at))
                    .or_else(|| self.mean_and_spread(at)),
                Kind::Mark if !token.text(self.text).is_ascii() => {
                    self.assignment(at).map(|(item, next)| (vec![item], next))
                }
                _ => None,
            };
            match found {
                Some((found, next)) => {
                    for item in found {
                        let follower = self.follower(&item);
                        items.push(item);
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
    fn assignment(&self, at: usize) -> Option<(Item, usize)> {
        let found = self
            .squared_behind(at)
            .or_else(|| self.grammar.spellings.at(self.text, self.tokens, at, |_| true))
            .or_else(|| self.labelled(at))?;
        if !self.begins_word(at) || self.index_of_a_sum(at) {
            return None;
        }
        let symbol = &self.grammar.symbols[found.spelling.meaning];
        let words = found.spelling.words;
        let (mut arguments, mut next) = self.arguments(&found);
        let with_arguments = !arguments.is_empty();
        if arguments.is_empty() && !symbol.arguments.is_empty() && self.mark(next) == Some("_") {
            next += 1;
        }
        // A remark in brackets: `p (two-tailed) = .03`.
        if let Some(behind) = self.remark(next) {
            next = behind;
        }
        let named = words || symbol.bare || symbol.class == Class::P;
        let compared = self
            .grammar
            .comparator(self.text, self.tokens, next, named)
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
        let (comparator, value_at) = match compared {
            Some((comparator, behind)) => {
                // `p-value was < .001`: the sign decides.
                match self.grammar.comparator(self.text, self.tokens, behind, false) {
                    Some((sign, further)) if comparator == Comparator::Equal => (sign, further),
                    _ => (comparator, behind),
                }
            }
            None if words || symbol.bare => {
                let skipped = matches!(self.mark(next), Some("," | ":"));
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
        if compared.is_none() && !self.stands_by(value_at, symbol.class, words)
            || self.is_no_size(symbol, compared.map(|c| c.0), &value)
        {
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
        if !symbol.units && !with_arguments && self.unit(next) {
            return None;
        }
        if symbol.class == Class::Size
            && self
                .word(next)
                .is_some_and(|w| self.grammar.replicates.contains(w))
        {
            return None;
        }
        if !with_arguments && !words && self.misleading_before(at) {
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
        if upper.is_none() && (found.spelling.plural || symbol.name == "df") {
            let mut behind = next;
            while let Some((further, after)) = self.next_in_list(behind) {
                more_values.push(self.quantity(name, comparator, &further, symbol.whole));
                behind = after;
                if symbol.name == "df" {
                    break;
                }
            }
            next = behind;
        }
        if let Some(several) = symbol.several
            && (upper.is_some() || !more_values.is_empty())
        {
            name = several;
        }
        let class = if matches!(name, "level" | "time") {
            Class::Bait
        } else {
            symbol.class
        };
        let mut first = self.quantity(name, comparator, &value, symbol.whole);
        if let Some(upper) = &upper {
            first.span.end = upper.span.end;
            first.printed = on_the_line(&self.text[first.span.clone()]);
            first.interval = first.interval.hull(upper.number.rounding());
        }
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
            plural: found.spelling.plural,
            alone: symbol.alone,
            plain: words || with_arguments || symbol.class == Class::Ratio && compared.is_some(),
        };
        Some((item, next))
    }

    /// The upper end of a range of results at token `at`: `–.51`, `-.51`.
    fn range_end(&self, symbol: &Symbol, comparator: Comparator, at: usize) -> Option<Value> {
        let ranged = matches!(
            symbol.class,
            Class::Statistic | Class::P | Class::Effect | Class::Estimate
        );
        let dash = self.mark(at) == Some("–") || self.mark(at) == Some("-") && !self.tokens[at].spaced;
        if !ranged || !dash || comparator != Comparator::Equal {
            return None;
        }
        self.value(at + 1, Company::Single)
            .filter(|v| v.number.value().is_finite())
    }

    /// A number that stands by itself right behind a symbol: not the start of a range, a date, or a unit.
    fn stands_by(&self, at: usize, class: Class, words: bool) -> bool {
        let signed = matches!(self.mark(at), Some("-" | "+"));
        let number = if signed { at + 1 } else { at };
        // `ET08` is a name; so is `PR 2512`.
        let name = !words
            && (!self.tokens[at].spaced
                || class == Class::Ratio
                    && self
                        .shown(number)
                        .is_some_and(|n| n.len() > 3 && !n.contains(['.', '·'])));
        if name {
            return false;
        }
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
            _ => symbol.name,
        }
    }

    /// The token at `at` does not continue a word, number or hyphenated compound.
    fn begins_word(&self, at: usize) -> bool {
        if at == 0 || self.tokens[at].spaced {
            return true;
        }
        match self.tokens[at - 1].kind {
            Kind::Mark => !matches!(self.shown(at - 1), Some("@" | "#" | "$" | "\\" | "&" | "^")),
            Kind::Raised => true,
            _ => false,
        }
    }

    /// What stands in brackets or lowered right behind a symbol.
    fn arguments(&self, found: &Found) -> (Vec<Quantity>, usize) {
        let symbol = &self.grammar.symbols[found.spelling.meaning];
        let none = (Vec::new(), found.next);
        if symbol.arguments.is_empty() {
            return none;
        }
        if let Some((start, end)) = found.rest {
            let span = start as usize..end as usize;
            if let Some(number) = Decimal::read(&on_the_line(&self.text[span.clone()]), false, 0) {
                let value = Value {
                    number,
                    span,
                    next: found.next,
                };
                return (vec![self.argument(symbol, 0, &value)], found.next);
            }
            return none;
        }
        let mut at = found.next;
        if self.mark(at) == Some("_") {
            at += 1;
        }
        let open = match self.mark(at) {
            Some(open @ ("(" | "[" | "{")) => Some(open),
            _ => None,
        };
        match open {
            Some(open) => self.bracketed(symbol, at, open).unwrap_or(none),
            None => self.lowered(symbol, at).unwrap_or(none),
        }
    }

    fn bracketed(&self, symbol: &Symbol, open_at: usize, open: &str) -> Option<(Vec<Quantity>, usize)> {
        let close = match open {
            "(" => ")",
            "[" => "]",
            _ => "}",
        };
        let mut at = open_at + 1;
        // How many numbers there are decides whether `1,150` is one of them.
        let end = (at..self.tokens.len().min(at + 24)).find(|i| self.mark(*i) == Some(close))?;
        let required = symbol.arguments.iter().filter(|a| !a.optional).count();
        let company = if required == 1 {
            Company::Sole
        } else {
            Company::List
        };
        let mut numbers = Vec::new();
        let mut named = Vec::new();
        while at < end {
            if let Some(value) = self.value(at, company).filter(|v| v.next <= end) {
                at = value.next;
                numbers.push(value);
            } else if let Some((item, next)) = self.assignment(at).filter(|(_, next)| *next <= end) {
                named.extend(item.quantities);
                at = next;
            } else if matches!(self.mark(at), Some("," | ";" | "/" | ":" | "=" | "~"))
                || self.word(at).is_some()
            {
                // `χ²(df: 2)`, `t(28 df)`, `t(28, two-tailed)`.
                at += 1;
            } else if self.mark(at) == Some("-") {
                at += 1;
            } else {
                return None;
            }
        }
        if numbers.is_empty() && named.is_empty() {
            return None;
        }
        let mut next = end + 1;
        // `F(2)(45)` and the like are not read; a second bracket is a remark.
        if let Some(behind) = self.remark(next) {
            next = behind;
        }
        let mut quantities: Vec<Quantity> = Vec::new();
        let most = symbol.arguments.len();
        let unnamed: Vec<usize> = (0..most)
            .filter(|i| {
                named
                    .iter()
                    .all(|q: &Quantity| q.symbol != symbol.arguments[*i].name)
            })
            .collect();
        if numbers.len() <= unnamed.len() && (numbers.len() >= required || !named.is_empty()) {
            for (value, index) in numbers.iter().zip(&unnamed) {
                quantities.push(self.argument(symbol, *index, value));
            }
        }
        quantities.extend(named);
        // Nothing understood: the bracket stays part of the result, its numbers unnamed.
        if quantities.is_empty() && !numbers.is_empty() {
            return Some((Vec::new(), next));
        }
        Some((quantities, next))
    }

    /// `F₁,₆₃`, `t96`, `F1,63`: lowered or run together, and then a comparator.
    fn lowered(&self, symbol: &Symbol, at: usize) -> Option<(Vec<Quantity>, usize)> {
        let mut i = at;
        let mut quantities = Vec::new();
        let first = self.tokens.get(i)?;
        if first.spaced && first.kind != Kind::Lowered {
            return None;
        }
        loop {
            let token = self.tokens.get(i)?;
            let lowered = token.kind == Kind::Lowered;
            if !lowered && token.kind != Kind::Number {
                return None;
            }
            let mut shown = on_the_line(token.text(self.text));
            let mut end = token.end;
            i += 1;
            // A lowered decimal point stays on the line: ₄₁₂.₃₅.
            if lowered
                && self.mark(i) == Some(".")
                && self
                    .tokens
                    .get(i + 1)
                    .is_some_and(|t| t.kind == Kind::Lowered && !t.spaced)
            {
                shown.push('.');
                shown.push_str(&on_the_line(self.tokens[i + 1].text(self.text)));
                end = self.tokens[i + 1].end;
                i += 2;
            }
            let number = Decimal::read(&shown, false, 0)?;
            let value = Value {
                number,
                span: token.start as usize..end as usize,
                next: i,
            };
            if quantities.len() >= symbol.arguments.len() {
                return None;
            }
            quantities.push(self.argument(symbol, quantities.len(), &value));
            match self.mark(i) {
                Some("," | ";")
                    if self
                        .tokens
                        .get(i + 1)
                        .is_some_and(|t| matches!(t.kind, Kind::Lowered | Kind::Number)) =>
                {
                    i += 1;
                }
                _ => break,
            }
        }
        let compared = self
            .grammar
            .comparator(self.text, self.tokens, i, false)
            .is_some();
        let required = symbol.arguments.iter().filter(|a| !a.optional).count();
        (compared && quantities.len() >= required).then_some((quantities, i))
    }

    fn argument(&self, symbol: &Symbol, index: usize, value: &Value) -> Quantity {
        self.quantity(symbol.arguments[index].name, Comparator::Equal, value, true)
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

    /// A short remark in brackets without numbers, at token `at`: the token behind it.
    fn remark(&self, at: usize) -> Option<usize> {
        if self.mark(at) != Some("(") {
            return None;
        }
        let close = (at + 1..self.tokens.len().min(at + 8)).find(|i| self.mark(*i) == Some(")"))?;
        let wordy = (at + 1..close).all(|i| {
            self.word(i).is_some() || matches!(self.mark(i), Some("-" | "–" | "'" | "," | "/")) || {
                // `1-tailed`, `2-sided`, `2-t`.
                self.tokens[i].kind == Kind::Number
                    && self.mark(i + 1) == Some("-")
                    && self
                        .word(i + 2)
                        .is_some_and(|w| w.starts_with("tail") || w.starts_with("side") || w == "t")
            }
        });
        // The brackets of `M (SD) = …` are no remark, but a second symbol.
        let pair = self
            .grammar
            .spellings
            .at(self.text, self.tokens, at + 1, |_| true)
            .is_some_and(|f| f.next == close);
        (wordy && close > at + 1 && !pair).then_some(close + 1)
    }

    /// `n.s.`, `ns`, `NS` at token `at`: the token behind it.
    fn not_significant(&self, at: usize) -> Option<usize> {
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

    /// A further number of a list at token `at`: `, .31`, ` and .759`, `, and .2`, `/ .3`, `or`, `&`.
    fn next_in_list(&self, at: usize) -> Option<(Value, usize)> {
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
        let value = self.value(i, Company::List)?;
        let next = value.next;
        Some((value, next))
    }

    /// A unit stands at token `at`.
    fn unit(&self, at: usize) -> bool {
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
    fn misleading_before(&self, at: usize) -> bool {
        let mut i = at;
        while i > 0 && matches!(self.mark(i - 1), Some("(" | "," | "[")) {
            i -= 1;
        }
        i > 0
            && self
                .word(i - 1)
                .is_some_and(|w| self.grammar.before.contains(w.to_lowercase().as_str()))
    }

    /// The byte range of tokens.
    pub(super) fn bytes(&self, from: usize, to: usize) -> Range<usize> {
        self.tokens[from].start as usize..self.tokens[to - 1].end as usize
    }

    /// A form without comparator at token `at`.
    fn form(&self, at: usize) -> Option<(Vec<Item>, usize)> {
        if !self.begins_word(at) && !(at > 0 && self.tokens[at - 1].kind == Kind::Mark) {
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
        let behind = self.shown(at + 1)?;
        if !matches!(
            behind,
            "/" | "(" | "[" | "%" | "," | "of" | "out" | "df" | "d" | "degrees" | "degree" | "and"
        ) {
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

//! *Items* are the assignments that stand in a text: a symbol with its arguments, a comparator and
//! a number (`t(28) = 2.20`), an interval (`95% CI [0.1, 1.5]`), or a form without a comparator.

use super::grammar::{Class, Symbol};
use super::names::has_label;
use super::spellings::{Found, Spelling};
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

    /// The token at `at` does not continue a word, number or hyphenated compound.
    fn begins_word(&self, at: usize) -> bool {
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
            let value = self.value(at, company).or_else(|| self.lowered_value(at));
            if let Some(value) = value.filter(|v| v.next <= end) {
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
            let value = if lowered {
                self.lowered_value(i)?
            } else {
                Value {
                    number: Decimal::read(token.text(self.text), false, 0)?,
                    span: token.start as usize..token.end as usize,
                    next: i + 1,
                }
            };
            i = value.next;
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

    /// The number in lowered digits at token `at`.
    fn lowered_value(&self, at: usize) -> Option<Value> {
        let is_lowered = |i: usize| self.tokens.get(i).filter(|t| t.kind == Kind::Lowered);
        let token = is_lowered(at)?;
        let mut shown = on_the_line(token.text(self.text));
        let mut end = token.end;
        let mut next = at + 1;
        // A lowered decimal point stays on the line: ₄₁₂.₃₅.
        if self.mark(next) == Some(".")
            && let Some(part) = is_lowered(next + 1).filter(|t| !t.spaced)
        {
            shown.push('.');
            shown.push_str(&on_the_line(part.text(self.text)));
            end = part.end;
            next += 2;
        }
        Some(Value {
            number: Decimal::read(&shown, false, 0)?,
            span: token.start as usize..end as usize,
            next,
        })
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
    pub(super) fn remark(&self, at: usize) -> Option<usize> {
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

    /// `[SD]`, `(aOR)` at token `at`, another spelling of the symbol before it: the token behind.
    pub(super) fn abbreviation(&self, at: usize, name: &str) -> Option<usize> {
        let close = match self.mark(at)? {
            "(" => ")",
            "[" => "]",
            _ => return None,
        };
        let found = self
            .grammar
            .spellings
            .at(self.text, self.tokens, at + 1, |_| true)?;
        let same = self.grammar.symbols[found.spelling.meaning].name == name;
        (same && self.mark(found.next) == Some(close)).then_some(found.next + 1)
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

    /// A df or a p stands behind the comma at token `at`: what is before it is a test.
    fn goes_on(&self, at: usize) -> bool {
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

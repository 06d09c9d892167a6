//! *Pairs*: intervals (`95% CI [0.1, 1.5]`), means with their spread (`3.71 ± 0.94`,
//! `mean (SD) 3.4 (1.1)`), ratios with the ends of their interval in brackets (`OR = 1.52 (1.10–2.11)`).

use super::grammar::Class;
use super::items::Item;
use super::tokens::Kind;
use super::values::{Company, Value};
use super::{Scan, sentences};
use crate::numbers::Comparator;

/// Most tokens between a level and the word for its interval: `95% bias-corrected bootstrap CI`.
const BETWEEN_LEVEL_AND_NAME: usize = 6;

impl Scan<'_> {
    /// An interval whose name stands at token `at`.
    pub(super) fn interval(&self, at: usize) -> Option<(Item, usize)> {
        let found = self
            .grammar
            .interval_spellings
            .at(self.text, self.tokens, at, |_| true)?;
        let names = &self.grammar.intervals[found.spelling.meaning];
        let mut next = found.next;
        // `confidence interval [CI]`
        if let (Some(open @ ("(" | "[")), Some(named)) = (
            self.mark(next),
            self.grammar
                .interval_spellings
                .at(self.text, self.tokens, next + 1, |_| true),
        ) && self.mark(named.next) == Some(if open == "(" { ")" } else { "]" })
        {
            next = named.next + 1;
        }
        let mut start = at;
        let mut level = None;
        if let Some((value, from)) = self.level_before(at) {
            start = from;
            level = Some(value);
        }
        // CI95%, CI₉₅, CI (95%), CI 95%
        if level.is_none() {
            let bracket = matches!(self.mark(next), Some("(" | "["));
            let number = if bracket { next + 1 } else { next };
            let percent = self.mark(number + 1) == Some("%");
            if let Some(value) = self.level_value(number).filter(|v| {
                (80.0..100.0).contains(&v.number.value())
                    && (percent || !bracket && !self.tokens[number].spaced && !self.pair_sign(number + 1))
            }) {
                next = number + if percent { 2 } else { 1 };
                if bracket && matches!(self.mark(next), Some(")" | "]")) {
                    next += 1;
                }
                level = Some(value);
            }
        }
        if names.low != "range_low" {
            next = self.behind_interval_name(next);
        }
        // `CI = [`, `CI: `, `CI, `, `CI of `, `CI (`, `CI for the difference [`
        for _ in 0..3 {
            match self.shown(next) {
                Some(
                    "=" | ":" | "," | "of" | "from" | "was" | "were" | "ranged" | "ranging" | "is"
                    | "between" | ";" | "≈" | "s" | "(s)",
                ) => {
                    next += 1;
                }
                _ => break,
            }
        }
        let (low, high, behind) = self.two_ends(next)?;
        let mut quantities = Vec::new();
        if let Some(level) = &level {
            quantities.push(self.quantity(names.level, Comparator::Equal, level, true));
        }
        quantities.push(self.quantity(names.low, Comparator::Equal, &low, false));
        quantities.push(self.quantity(names.high, Comparator::Equal, &high, false));
        let item = Item {
            class: Class::Interval,
            tokens: start..behind,
            bytes: self.bytes(start, behind),
            quantities,
            more_values: vec![],
            plural: false,
            alone: names.low != "range_low",
            plain: true,
        };
        Some((item, behind))
    }

    fn level_value(&self, at: usize) -> Option<Value> {
        let token = self.tokens.get(at)?;
        if token.kind == Kind::Lowered {
            let shown = super::tokens::on_the_line(token.text(self.text));
            let number = crate::numbers::Decimal::read(&shown, false, 0)?;
            return Some(Value {
                number,
                span: token.start as usize..token.end as usize,
                next: at + 1,
            });
        }
        (token.kind == Kind::Number)
            .then(|| self.value(at, Company::List))
            .flatten()
    }

    /// `95%` before the name at token `at`, a few words between allowed.
    fn level_before(&self, at: usize) -> Option<(Value, usize)> {
        for back in 1..=BETWEEN_LEVEL_AND_NAME.min(at) {
            let i = at - back;
            match self.tokens[i].kind {
                Kind::Word => {}
                Kind::Mark if self.shown(i) == Some("%") && i > 0 => {
                    let value = self.level_value(i - 1)?;
                    let sensible = (50.0..100.0).contains(&value.number.value());
                    return sensible.then_some((value, i - 1));
                }
                Kind::Mark if matches!(self.shown(i), Some("-" | "–" | "'")) => {}
                // `95 CI`, `.95 CI`, `0.95 CI`
                Kind::Number if back == 1 => {
                    let value = self.level_value(i)?;
                    let v = value.number.value();
                    return ((80.0..100.0).contains(&v)).then_some((value, i));
                }
                _ => return None,
            }
        }
        None
    }

    fn pair_sign(&self, at: usize) -> bool {
        matches!(self.shown(at), Some("," | ";" | "-" | "–" | "to" | "and"))
    }

    /// A dash or `to` stands at token `at`, and a number behind it.
    fn range_goes_on(&self, at: usize) -> bool {
        matches!(self.shown(at), Some("–" | "-" | "to"))
            && self.tokens.get(at + 1).is_some_and(|t| t.kind == Kind::Number)
    }

    /// Two numbers with something between that makes them the ends of an interval, in brackets or
    /// not: both, and the token behind (behind a closing bracket if there is one).
    pub(super) fn two_ends(&self, at: usize) -> Option<(Value, Value, usize)> {
        let mut i = at;
        let mut open = false;
        while let Some("(" | "[" | "{" | "=") = self.mark(i) {
            open |= self.mark(i) != Some("=");
            i += 1;
            if i > at + 3 {
                return None;
            }
        }
        // `18,6–73,1`: a comma on each side can only be a decimal mark.
        let comma = self
            .value(i, Company::Single)
            .filter(|v| self.mark(i + 1) == Some(",") && v.next == i + 3 && self.range_goes_on(v.next));
        let (low, high) = match comma {
            Some(low) => {
                let high = self.value(low.next + 1, Company::Single);
                (Some(low), high)
            }
            None => (self.end_of_interval(i, true), None),
        };
        let low = low?;
        i = self.skip_unit(low.next);
        let separator = self.shown(i)?;
        let spaced = self.tokens[i].spaced;
        match separator {
            "," | ";" | "to" | "–" | "—" | "-" | "and" | "/" | ":" | "à" | "bis" | "a" | "through" => {
                i += 1
            }
            "." if self.mark(i + 1) == Some(".") => i += 2,
            "<" => return None,
            _ => return None,
        }
        if separator == "and" && !open && !spaced {
            return None;
        }
        let high = high.or_else(|| self.end_of_interval(i, false))?;
        let mut next = self.skip_unit(high.next);
        // The interval's own bracket closes; what else stands in it stays outside.
        if open && matches!(self.mark(next), Some(")" | "]" | "}")) {
            next += 1;
        } else {
            next = high.next;
            if self.mark(next) == Some("%") {
                next += 1;
            }
        }
        Some((low, high, next))
    }

    /// One end of an interval at token `at`: a comma in it separates, unless what stands behind shows
    /// that it groups thousands (`698–1,196`, `1,200 to 1,500`).
    fn end_of_interval(&self, at: usize, low: bool) -> Option<Value> {
        let listed = self.value(at, Company::List)?;
        let Some(grouped) = self.value(at, Company::Sole).filter(|g| g.next > listed.next) else {
            return Some(listed);
        };
        let spaced = self.tokens.get(grouped.next + 1).is_some_and(|t| t.spaced);
        let groups = match self.shown(grouped.next) {
            Some("–" | "—" | "-" | "to" | "and" | ";") => low,
            Some(",") => !low || spaced,
            _ => !low,
        };
        Some(if groups { grouped } else { listed })
    }

    /// Percent signs, degrees and short units behind the end of an interval.
    fn skip_unit(&self, at: usize) -> usize {
        match self.shown(at) {
            Some("%") => at + 1,
            Some(unit)
                if unit != "a" && self.grammar.units.contains(unit) && self.tokens[at].kind == Kind::Word =>
            {
                at + 1
            }
            _ => at,
        }
    }

    /// What may follow an item in brackets without a name: the interval of a ratio or a median, the
    /// spread of a mean.
    pub(super) fn follower(&self, item: &Item) -> Vec<Item> {
        let at = item.tokens.end;
        let head = &item.quantities[0];
        if self.mark(at) == Some("±") {
            return self.spread_behind(at + 1).into_iter().collect();
        }
        let listed = item.class == Class::Size && matches!(self.mark(at), Some("," | ";"));
        if !matches!(self.mark(at), Some("(" | "[")) && !listed || item.plural {
            return Vec::new();
        }
        if item.class == Class::Size {
            return self.bracketed_percent(at).into_iter().collect();
        }
        let (low_name, high_name) = match (item.class, head.symbol) {
            (Class::Ratio, _) => ("CI_low", "CI_high"),
            (_, "Mdn") if self.near("medians") => ("IQR_low", "IQR_high"),
            (_, "Mdn") => ("range_low", "range_high"),
            (_, "M") => return self.bracketed_spread(at).into_iter().collect(),
            _ => return Vec::new(),
        };
        let Some((low, high, behind)) = self.two_ends(at) else {
            return Vec::new();
        };
        let ordered = low.number.value() <= head.number.value() && head.number.value() <= high.number.value();
        if !ordered && head.symbol == "Mdn" {
            return Vec::new();
        }
        vec![Item {
            class: Class::Interval,
            tokens: at + 1..behind,
            bytes: low.span.start..self.bytes(at, behind).end,
            quantities: vec![
                self.quantity(low_name, Comparator::Equal, &low, false),
                self.quantity(high_name, Comparator::Equal, &high, false),
            ],
            more_values: vec![],
            plural: false,
            alone: true,
            plain: true,
        }]
    }

    /// `(1.1)` behind a mean, alone in its brackets.
    fn bracketed_spread(&self, at: usize) -> Option<Item> {
        let item = self.spread_named(at + 1, self.spread_symbol()?)?;
        matches!(self.mark(item.tokens.end), Some(")" | "]")).then_some(item)
    }

    /// `(35.3%)` behind a number of cases.
    pub(super) fn bracketed_percent(&self, at: usize) -> Option<Item> {
        let value = self.value(at + 1, Company::Single)?;
        let next = value.next;
        if self.mark(next) != Some("%") || !matches!(self.mark(next + 1), Some(")" | "]" | "," | ";")) {
            return None;
        }
        Some(Item {
            class: Class::Other,
            tokens: at + 1..next + 1,
            bytes: self.bytes(at + 1, next + 1),
            quantities: vec![self.quantity("percent", Comparator::Equal, &value, false)],
            more_values: vec![],
            plural: false,
            alone: true,
            plain: true,
        })
    }

    /// `0.94` behind `±` at token `at`; what it is may stand behind it: `0.94 (SD)`, `0.94° SE`.
    fn spread_behind(&self, at: usize) -> Option<Item> {
        let value = self.value(at, Company::Single)?;
        if value.number.digits < 0 {
            return None;
        }
        let mut next = value.next;
        if matches!(self.mark(next), Some("%" | "°")) || self.unit_word(next) {
            next += 1;
        }
        let bracket = matches!(self.mark(next), Some("(" | "["));
        let told = self
            .grammar
            .spellings
            .at(self.text, self.tokens, next + usize::from(bracket), |_| true)
            .filter(|found| match self.tokens.get(found.next) {
                Some(_) if bracket => matches!(self.mark(found.next), Some(")" | "]")),
                Some(t) => t.kind != Kind::Number && !matches!(self.mark(found.next), Some("=" | ":" | "(")),
                None => true,
            })
            .map(|found| self.grammar.symbols[found.spelling.meaning].name)
            .filter(|name| matches!(*name, "SD" | "SE"));
        let symbol = told
            .or_else(|| self.spread_symbol())
            .or_else(|| self.spread_before(value.span.start))
            .unwrap_or("spread");
        Some(Item {
            class: Class::Descriptive,
            tokens: at..value.next,
            bytes: value.span.clone(),
            quantities: vec![self.quantity(symbol, Comparator::Equal, &value, false)],
            more_values: vec![],
            plural: false,
            alone: false,
            plain: true,
        })
    }

    /// Where a block speaks of several spreads: the last one named in the sentence before this byte.
    fn spread_before(&self, byte: usize) -> Option<&'static str> {
        if !self.near("spread-sd") || !self.near("spread-se") {
            return None;
        }
        let block = self.tokens.first()?.start as usize..self.tokens.last()?.end as usize;
        let start = sentences::around(self.text, &block, &(byte..byte)).start;
        self.grammar
            .words_in(&self.text[start..byte])
            .filter_map(|(meaning, _)| match meaning {
                "spread-sd" => Some("SD"),
                "spread-se" => Some("SE"),
                _ => None,
            })
            .last()
    }

    fn spread_named(&self, at: usize, symbol: &'static str) -> Option<Item> {
        let value = self.value(at, Company::Single)?;
        if value.number.digits < 0 || self.mark(value.next) == Some("%") {
            return None;
        }
        let next = value.next;
        Some(Item {
            class: Class::Descriptive,
            tokens: at..next,
            bytes: value.span.clone(),
            quantities: vec![self.quantity(symbol, Comparator::Equal, &value, false)],
            more_values: vec![],
            plural: false,
            alone: false,
            plain: true,
        })
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

    /// `3.71 ± 0.94` without a symbol before it.
    pub(super) fn mean_and_spread(&self, at: usize) -> Option<(Vec<Item>, usize)> {
        if !(at + 1..at + 8).any(|i| self.mark(i) == Some("±")) {
            return None;
        }
        let from = if at > 0 && self.mark(at - 1) == Some("-") && self.tokens[at - 1].spaced {
            at - 1
        } else {
            at
        };
        let value = self.value(from, Company::Single)?;
        let next = value.next;
        // `32.5° ± 9.2°`
        let unit = matches!(self.mark(next), Some("°" | "%"));
        let sign = if unit { next + 1 } else { next };
        if self.mark(sign) != Some("±") {
            return None;
        }
        let mean = Item {
            class: Class::Descriptive,
            tokens: from..sign,
            bytes: value.span.clone(),
            quantities: vec![self.quantity("M", Comparator::Equal, &value, false)],
            more_values: vec![],
            plural: false,
            alone: true,
            plain: true,
        };
        Some((vec![mean], next))
    }

    /// `M (SD) = 3.4 (1.1)`, `mean ± SD 3.4 ± 1.1`, `median (IQR) 54 (50–62)` at token `at`.
    pub(super) fn paired(&self, at: usize) -> Option<(Item, usize)> {
        let first = self.grammar.spellings.at(self.text, self.tokens, at, |_| true)?;
        let sign = self.mark(first.next)?;
        let close = match sign {
            "(" => Some(")"),
            "[" => Some("]"),
            "±" => None,
            _ => return None,
        };
        // `odds ratio (OR) 1.5 (1.1–2.0)`: one symbol, named twice.
        if self
            .abbreviation(first.next, self.grammar.symbols[first.spelling.meaning].name)
            .is_some()
        {
            return None;
        }
        let inside = first.next + 1;
        let (second, ends, mut next) = if let Some(found) =
            self.grammar
                .spellings
                .at(self.text, self.tokens, inside, |_| true)
        {
            (
                self.grammar.symbols[found.spelling.meaning].name,
                None,
                found.next,
            )
        } else {
            let found = self
                .grammar
                .interval_spellings
                .at(self.text, self.tokens, inside, |_| true)?;
            let names = &self.grammar.intervals[found.spelling.meaning];
            ("", Some((names.low, names.high)), found.next)
        };
        if let Some(close) = close {
            if self.mark(next) != Some(close) {
                return None;
            }
            next += 1;
        }
        if let Some((_, behind)) = self.grammar.comparator(self.text, self.tokens, next, true) {
            next = behind;
        } else if matches!(self.mark(next), Some("," | ":")) {
            next += 1;
        }
        let symbol = &self.grammar.symbols[first.spelling.meaning];
        let company = if symbol.whole {
            Company::Whole
        } else {
            Company::Single
        };
        let value = self.value(next, company)?;
        let mut quantities = vec![self.quantity(symbol.name, Comparator::Equal, &value, symbol.whole)];
        let mut behind = value.next;
        if !matches!(self.mark(behind), Some("(" | "[" | "±")) {
            return None;
        }
        if let Some((low_name, high_name)) = ends {
            let (low, high, after) = self.two_ends(behind)?;
            quantities.push(self.quantity(low_name, Comparator::Equal, &low, false));
            quantities.push(self.quantity(high_name, Comparator::Equal, &high, false));
            behind = after;
        } else {
            let value = self.value(behind + 1, Company::Single)?;
            behind = value.next;
            if close.is_some() && matches!(self.mark(behind), Some(")" | "]")) {
                behind += 1;
            }
            quantities.push(self.quantity(second, Comparator::Equal, &value, false));
        }
        let item = Item {
            class: symbol.class,
            tokens: at..behind,
            bytes: self.bytes(at, behind),
            quantities,
            more_values: vec![],
            plural: false,
            alone: true,
            plain: true,
        };
        Some((item, behind))
    }
}

//! *Unnamed* numbers: a number right before an interval or a spread that has a name is what the
//! interval or spread belongs to: `was lower by 2.46 (95% CI 1.21 to 3.72)`, `came 8.7 times
//! (SD = 3.34)`. What it is called may stand earlier in the sentence: `the odds ratio for wet beds was 1.5
//! (95% CI 1.1–2.0)`.

use super::Scan;
use super::grammar::Class;
use super::items::Item;
use super::tokens::Kind;
use super::values::{Company, Value};
use crate::numbers::Comparator;

/// How many tokens before a number its name is looked for.
const NAME_WITHIN: usize = 16;

/// How many estimates before a number its name may serve, too.
const NAME_SERVES: usize = 6;

/// How many words may say of what a mean is: `the mean length of the dry beds was 3.1`.
const THINGS: usize = 5;

impl Scan<'_> {
    /// A number at token `at` whose interval or spread follows.
    pub(super) fn unnamed(&self, at: usize) -> Option<(Vec<Item>, usize)> {
        if !self.something_follows(at) {
            return None;
        }
        let (value, from) = self.with_sign(at)?;
        let mut next = value.next;
        let percent = self.mark(next) == Some("%");
        if percent || self.unit_word(next) {
            next += 1;
        }
        let bracket = matches!(self.mark(next), Some("(" | "["));
        if !bracket && !matches!(self.mark(next), Some("," | ";")) || self.counts_something(from) {
            return None;
        }
        let follows = next + 1;
        let (symbol, class) = if let Some(low) = self.interval_after(follows) {
            match low {
                "IQR_low" if !percent => ("Mdn", Class::Descriptive),
                "CI_low" | "CrI_low" if percent => ("percent", Class::Other),
                "CI_low" | "CrI_low" => self.name_before(from).unwrap_or(("est", Class::Estimate)),
                _ => return None,
            }
        } else if bracket && !percent && self.spread_after(follows) {
            ("M", Class::Descriptive)
        } else if let Some(ratio) = (bracket && !percent)
            .then(|| self.ratio_with_ends(&value, from))
            .flatten()
        {
            ratio
        } else if bracket
            && !percent
            && (self.near("medians") || self.medians && !self.names_intervals() || self.after_spread(from))
        {
            return self.quartiles(&value, from, next);
        } else {
            return None;
        };
        let item = self.lone(symbol, class, &value, from);
        Some((vec![item], value.next))
    }

    /// The token of the number that follows `mean` and what it is a mean of, at token `at`:
    /// `mean length of beds was 3.1`, `mean length 25 cm`.
    pub(super) fn behind_things(&self, at: usize) -> Option<usize> {
        if self.word(at - 1).is_none_or(|w| w.ends_with('s')) {
            return None;
        }
        let mut i = at;
        for _ in 0..THINGS {
            let word = self.word(i)?;
            // Means of these are other quantities.
            if matches!(
                word,
                "rank"
                    | "ranks"
                    | "difference"
                    | "differences"
                    | "change"
                    | "changes"
                    | "square"
                    | "squared"
                    | "error"
                    | "and"
                    | "or"
                    | "that"
                    | "increases"
                    | "increased"
                    | "was"
                    | "were"
                    | "is"
                    | "are"
            ) {
                return None;
            }
            // `mean depth in 2014`, `was more than 0.1`: the number says something else.
            let leads_away = matches!(
                word,
                "to" | "than"
                    | "from"
                    | "for"
                    | "with"
                    | "by"
                    | "in"
                    | "at"
                    | "over"
                    | "under"
                    | "about"
                    | "after"
            );
            i += 1;
            // `CD4`, `long-term`, `(all beds)`
            if self
                .tokens
                .get(i)
                .is_some_and(|t| t.kind == Kind::Number && !t.spaced)
            {
                i += 1;
            }
            while self.mark(i) == Some("-") && self.word(i + 1).is_some() && !self.tokens[i].spaced {
                i += 2;
            }
            if let Some(behind) = self.remark(i) {
                i = behind;
            }
            let said = self.mark(i) == Some("=")
                || self
                    .word(i)
                    .is_some_and(|w| matches!(w, "was" | "were" | "is" | "are" | "of"));
            let number = if said { i + 1 } else { i };
            let Some(token) = self.tokens.get(number).filter(|t| t.kind == Kind::Number) else {
                continue;
            };
            if leads_away && !said {
                return None;
            }
            let decimals = token.text(self.text).contains(['.', '·']);
            let times = matches!(self.word(number + 1), Some("times" | "fold"));
            let measured = self.unit_word(number + 1) && !times || self.mark(number + 1) == Some("±");
            let plainly = said && matches!(self.shown(i), Some("=" | "was" | "were"));
            return (token.spaced && (decimals || measured || plainly)).then_some(number);
        }
        None
    }

    /// A quick look: a bracket, or a comma and then a name or a percentage, stands close behind.
    fn something_follows(&self, at: usize) -> bool {
        const WITHIN: usize = 6;
        (at + 1..self.tokens.len().min(at + WITHIN)).any(|i| match self.mark(i) {
            Some("(" | "[") => true,
            Some("," | ";") => match self.tokens.get(i + 1).map(|t| t.kind) {
                Some(Kind::Number) => self.mark(i + 2) == Some("%") || self.word(i + 2).is_some(),
                Some(Kind::Word) => self
                    .shown(i + 1)
                    .is_some_and(|w| w.starts_with(|c: char| c.is_ascii_uppercase())),
                _ => false,
            },
            _ => false,
        })
    }

    /// `62 ± 12 57 (43–84)`: the median of a cell that gives both, in a manuscript that says so.
    fn after_spread(&self, from: usize) -> bool {
        // Stars and daggers of the table's notes may stand between.
        let before = (0..from).rev().find(|i| {
            !matches!(self.mark(*i), Some("*" | "†" | "‡" | "#" | "&" | "§"))
                && self.tokens[*i].kind != Kind::Raised
        });
        self.medians && before.is_some_and(|i| i > 0 && self.mark(i - 1) == Some("±"))
    }

    /// The block speaks of other intervals or ranges, or is a cell, which its own head names.
    fn names_intervals(&self) -> bool {
        self.cell
            || self.tokens.iter().enumerate().any(|(i, t)| {
                t.kind == Kind::Word
                    && self
                        .grammar
                        .interval_spellings
                        .at(self.text, self.tokens, i, |_| true)
                        .is_some()
            })
    }

    fn lone(&self, symbol: &'static str, class: Class, value: &Value, from: usize) -> Item {
        Item {
            class,
            tokens: from..value.next,
            bytes: value.span.clone(),
            quantities: vec![self.quantity(symbol, Comparator::Equal, value, false)],
            more_values: vec![],
            plural: false,
            alone: true,
            plain: true,
        }
    }

    /// The number at token `at` with the sign before it: its value and first token.
    fn with_sign(&self, at: usize) -> Option<(Value, usize)> {
        let before = |i: usize| at >= i && self.mark(at - i).is_some();
        let from = if before(1) && matches!(self.mark(at - 1), Some("-" | "+" | "–")) {
            let opens = self.tokens[at - 1].spaced || before(2);
            if !opens {
                return None;
            }
            at - 1
        } else {
            at
        };
        // The end of a range, of a fraction or of a compound.
        if from == at
            && at > 0
            && !self.tokens[at].spaced
            && !matches!(self.mark(at - 1), Some("(" | "[" | "="))
        {
            return None;
        }
        let value = self.value(from, Company::Single)?;
        Some((value, from))
    }

    pub(super) fn unit_word(&self, at: usize) -> bool {
        // `y` is no unit where it may be Spanish.
        self.word(at)
            .is_some_and(|w| self.grammar.units.contains(w) || matches!(w, "y" | "mo" | "wk"))
    }

    /// The number that begins at token `from` counts a table, a week or the like.
    fn counts_something(&self, from: usize) -> bool {
        let mut i = from;
        while i > 0 && self.mark(i - 1) == Some(".") {
            i -= 1;
        }
        i > 0
            && self
                .word(i - 1)
                .is_some_and(|w| self.grammar.labels.contains(w.to_lowercase().as_str()))
    }

    /// What an interval whose level or name stands at token `at` calls its lower end.
    fn interval_after(&self, at: usize) -> Option<&'static str> {
        let mut name = at;
        if self.tokens.get(at)?.kind == Kind::Number {
            name += 1;
            if self.mark(name) == Some("%") {
                name += 1;
            }
        }
        // `95% bootstrap CI`
        for i in name..name + 3 {
            self.word(i)?;
            if let Some((item, _)) = self.interval(i) {
                return item
                    .quantities
                    .iter()
                    .map(|q| q.symbol)
                    .find(|s| s.ends_with("_low"));
            }
        }
        None
    }

    /// `SD = 3.34` or `SE 0.4` at token `at`.
    fn spread_after(&self, at: usize) -> bool {
        self.assignment(at)
            .is_some_and(|(item, _)| matches!(item.quantities[0].symbol, "SD" | "SE"))
    }

    /// A name written out, or a ratio, in the same sentence before token `from`, no number between.
    fn name_before(&self, from: usize) -> Option<(&'static str, Class)> {
        let told = self.mark(from.wrapping_sub(1)) == Some(":")
            || self
                .word(from.wrapping_sub(1))
                .is_some_and(|w| matches!(w, "was" | "were" | "is" | "of" | "to" | "being" | "by"));
        let mut i = from;
        let mut steps = 0;
        let mut shared = 0;
        while i > 0 && steps < NAME_WITHIN {
            i -= 1;
            steps += 1;
            let token = self.tokens[i];
            // `1.46 (CI 1.06–2.02) and 1.38 (CI …`: the name serves both. What else stands in brackets
            // is passed over.
            if let Some((start, estimate)) = self.bracket_before(i) {
                i = start;
                if estimate {
                    shared += 1;
                    steps = 0;
                    if shared > NAME_SERVES {
                        return None;
                    }
                }
                continue;
            }
            if matches!(token.kind, Kind::Number | Kind::Dotted)
                || matches!(self.mark(i), Some("." | ";" | "?" | "="))
            {
                return None;
            }
            if token.kind != Kind::Word {
                continue;
            }
            if let Some(found) = self.grammar.spellings.at(self.text, self.tokens, i, |_| true) {
                let symbol = &self.grammar.symbols[found.spelling.meaning];
                let named = match symbol.class {
                    Class::Ratio => true,
                    Class::Estimate | Class::Effect | Class::Descriptive | Class::Other => {
                        told && (found.spelling.words || token.text(self.text).len() > 2)
                    }
                    _ => false,
                };
                if named && found.next <= from {
                    return Some((symbol.name, symbol.class));
                }
            }
        }
        None
    }

    /// `and 1.57 (1.08–2.30)` behind another ratio and its interval, or behind the name of a ratio.
    fn ratio_with_ends(&self, value: &Value, from: usize) -> Option<(&'static str, Class)> {
        let shown = &self.text[value.span.clone()];
        if !shown.contains(['.', '·']) || value.number.value() <= 0.0 {
            return None;
        }
        let (low, high, _) = self.two_ends(value.next)?;
        let inside = (low.number.value()..=high.number.value()).contains(&value.number.value());
        self.name_before(from)
            .filter(|(_, class)| inside && *class == Class::Ratio)
    }

    /// Where the bracket that closes at token `at` begins, or the estimate before it if it holds the
    /// estimate's interval; whether it does.
    fn bracket_before(&self, at: usize) -> Option<(usize, bool)> {
        const LONGEST: usize = 14;
        if !matches!(self.mark(at), Some(")" | "]")) {
            return None;
        }
        let open = (at.saturating_sub(LONGEST)..at)
            .rev()
            .find(|i| matches!(self.mark(*i), Some("(" | "[" | ")" | "]")))
            .filter(|i| matches!(self.mark(*i), Some("(" | "[")))?;
        let number = open.checked_sub(1)?;
        let estimate = self.tokens[number].kind == Kind::Number
            && (self.interval_after(open + 1).is_some() || self.two_ends(open).is_some());
        Some(if estimate { (number, true) } else { (open, false) })
    }

    /// `74 (43–106)` where quartiles are spoken of.
    fn quartiles(&self, value: &Value, from: usize, open: usize) -> Option<(Vec<Item>, usize)> {
        let (low, high, behind) = self.two_ends(open)?;
        // Nothing else in the bracket: `55 (5.9%, 95% CI …)` is another thing.
        let tight = behind > high.next && matches!(self.mark(behind - 1), Some(")" | "]"));
        if !tight || self.mark(low.next) == Some("%") {
            return None;
        }
        let x = value.number.value();
        let (least, most) = (low.number.value(), high.number.value());
        if !(least <= x && x <= most && least < most) {
            return None;
        }
        let mut item = self.lone("Mdn", Class::Descriptive, value, from);
        item.tokens.end = behind;
        item.bytes.end = self.bytes(open, behind).end;
        item.quantities
            .push(self.quantity("IQR_low", Comparator::Equal, &low, false));
        item.quantities
            .push(self.quantity("IQR_high", Comparator::Equal, &high, false));
        Some((vec![item], behind))
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
            .find(['×', 'x', 'X', '*', '∙'])
            .map(|end| spread.printed[..end].trim_end());
        let (Some(factor), "±") = (factor, between.trim()) else {
            return item;
        };
        if head.printed.contains("10") && head.printed.contains(['×', 'x', 'X', '*', '∙']) {
            return item;
        }
        let decimals = factor
            .find(['.', '·'])
            .map_or(0, |point| factor[point..].chars().count() as i32 - 1);
        head.number.place += spread.number.place + decimals;
        head.interval = head.comparator.interval(&head.number, false);
        item
    }

    /// What is counted rather than measured, though it stands among the units.
    fn countable(&self, at: usize) -> bool {
        matches!(
            self.word(at),
            Some("individuals" | "cells" | "units" | "generations")
        )
    }

    /// Whether the number at tokens `at..=last` may be a count of things that are named behind it:
    /// `266 gardeners (88.1%)`, but not `8 weeks (40%)` or `nine of 302 gardeners (3%)`.
    pub(super) fn may_count(&self, at: usize, last: usize) -> bool {
        let bracket = (last + 2..last + 5).find(|i| matches!(self.mark(*i), Some("(" | "[")));
        let Some(bracket) = bracket else { return false };
        if !(last + 1..bracket).all(|i| self.word(i).is_some())
            || self.mark(bracket + 2) != Some("%")
            || self.unit_word(last + 1) && !self.countable(last + 1)
            || self.counts_something(at)
        {
            return false;
        }
        // `in only one bed (17.1%)`: the share is of something else.
        let one = self.word(at).is_some_and(|w| w.eq_ignore_ascii_case("one"));
        let before = |i: usize| at.checked_sub(i).and_then(|i| self.word(i));
        if one && before(1) == Some("only") && before(2) == Some("in") {
            return false;
        }
        // `of 302 gardeners` is the whole, unless it is `a total of`; so is `the 302 gardeners`.
        at < 2
            || self.word(at - 1) != Some("the") && self.word(at - 1) != Some("of")
            || self
                .word(at - 2)
                .is_some_and(|w| matches!(w, "total" | "number" | "sum" | "sample"))
    }
}

#[cfg(test)]
mod tests {
    use crate::manuscript::{BlockKind, Builder, Format};
    use crate::statements::{Grammar, find};

    #[test]
    fn quartiles_are_read_where_the_manuscript_announces_them() {
        let read = |announced: &str| {
            let mut builder = Builder::new(Format::Text);
            for text in [
                announced,
                "Watering took 35 ± 6 min, 33 (28–40) in the east, see Figures 3 (5–9).",
            ] {
                builder.open(BlockKind::Paragraph);
                builder.text(text);
            }
            let manuscript = builder.finish();
            let found = find(&manuscript, Grammar::built_in(), 0.05);
            let symbols = found.iter().flat_map(|s| s.quantities.iter().map(|q| q.symbol));
            symbols.collect::<Vec<_>>()
        };
        assert_eq!(
            read("We give means ± SEM and medians (1st quartile–3rd quartile)."),
            ["M", "spread", "Mdn", "IQR_low", "IQR_high"]
        );
        assert_eq!(read("We give means ± SEM and medians."), ["M", "spread"]);
    }
}

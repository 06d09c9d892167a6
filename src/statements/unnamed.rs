//! *Unnamed* numbers: a number right before an interval or a spread that has a name is what the
//! interval or spread belongs to: `was lower by 2.46 (95% CI 1.21 to 3.72)`, `came 8.7 times
//! (SD = 3.34)`. What it is called may stand earlier in the sentence: `the odds ratio for wet beds was 1.5
//! (95% CI 1.1–2.0)`.

use super::Scan;
use super::grammar::{Around, Class};
use super::items::Item;
use super::lists::List;
use super::tokens::Kind;
use super::values::{Company, Value};
use crate::numbers::Comparator;

/// How many tokens before a number its name is looked for.
const NAME_WITHIN: usize = 16;

/// How many estimates before a number its name may serve, too.
const NAME_SERVES: usize = 6;

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
        let (symbol, class) = if let Some(around) = self.interval_after(follows) {
            match around {
                Around::Median if !percent => ("Mdn", Class::Descriptive),
                Around::Estimate if percent => ("percent", Class::Other),
                Around::Estimate => self.name_before(from).unwrap_or(("est", Class::Estimate)),
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
        self.cell || (0..self.tokens.len()).any(|i| self.word(i).is_some() && self.interval_name(i).is_some())
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

    /// What the interval lies around whose level or name stands at token `at`.
    fn interval_after(&self, at: usize) -> Option<Around> {
        let mut name = at;
        if self.tokens.get(at)?.kind == Kind::Number {
            name += 1 + usize::from(self.mark(at + 1) == Some("%"));
        }
        // `95% bootstrap CI`
        for i in name..name + 3 {
            self.word(i)?;
            if let Some((item, _)) = self.interval(i) {
                return self.grammar.around(item.symbol());
            }
        }
        None
    }

    /// `SD = 3.34` or `SE 0.4` at token `at`.
    fn spread_after(&self, at: usize) -> bool {
        self.assignment(at)
            .is_some_and(|(item, _)| self.grammar.has(item.symbol(), |s| s.spread))
    }

    /// A name written out, or a ratio, in the same sentence before token `from`, no number between.
    fn name_before(&self, from: usize) -> Option<(&'static str, Class)> {
        let told = from > 0 && self.is(from - 1, List::LeadsToEstimate);
        let mut i = from;
        let mut steps = 0;
        let mut shared = 0;
        while i > 0 && steps < NAME_WITHIN {
            i -= 1;
            steps += 1;
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
            if matches!(self.tokens[i].kind, Kind::Number | Kind::Dotted)
                || matches!(self.mark(i), Some("." | ";" | "?" | "="))
            {
                return None;
            }
            if let Some(name) = self.word(i).and_then(|_| self.name_at(i, from, told)) {
                return Some(name);
            }
        }
        None
    }

    /// The name at token `at` that a number at token `from` may have. `told`: a word leads to the number.
    fn name_at(&self, at: usize, from: usize, told: bool) -> Option<(&'static str, Class)> {
        let found = self.spelling(at)?;
        let symbol = &self.grammar.symbols[found.spelling.meaning];
        let fits = match symbol.class {
            Class::Ratio => true,
            Class::Estimate | Class::Effect | Class::Descriptive | Class::Other => {
                told && (found.spelling.words || self.word(at)?.len() > 2)
            }
            _ => false,
        };
        (fits && found.next <= from).then_some((symbol.name, symbol.class))
    }

    /// `and 1.57 (1.08–2.30)` behind another ratio and its interval, or behind the name of a ratio.
    fn ratio_with_ends(&self, value: &Value, from: usize) -> Option<(&'static str, Class)> {
        if !self.text[value.span.clone()].contains(['.', '·']) || value.number.value() <= 0.0 {
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
            .push(self.quantity("IQR_low", Comparator::Equal, &low));
        item.quantities
            .push(self.quantity("IQR_high", Comparator::Equal, &high));
        Some((vec![item], behind))
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

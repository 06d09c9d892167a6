//! *Intervals*: `95% CI [0.1, 1.5]`, `CI for the slope, 0.1 to 0.4`, `IQR 41–55`. A level, a name and two
//! ends.

use super::Scan;
use super::arguments::closing;
use super::grammar::{Around, Class, IntervalNames};
use super::items::Item;
use super::lists::List;
use super::tokens::Kind;
use super::values::{Company, Value};
use crate::numbers::Comparator;

/// Most tokens between a level and the word for its interval: `95% bias-corrected bootstrap CI`.
const BETWEEN_LEVEL_AND_NAME: usize = 6;

/// How many marks and words may stand between the name of an interval and its ends.
const BEFORE_ENDS: usize = 3;

impl Scan<'_> {
    /// What an interval is called whose name stands at token `at`, and the token behind the name.
    pub(super) fn interval_name(&self, at: usize) -> Option<(&IntervalNames, usize)> {
        let spellings = &self.grammar.interval_spellings;
        let found = spellings.at(self.text, self.tokens, at, |_| true)?;
        Some((&self.grammar.intervals[found.spelling.meaning], found.next))
    }

    /// An interval whose name stands at token `at`.
    pub(super) fn interval(&self, at: usize) -> Option<(Item, usize)> {
        let (names, mut next) = self.interval_name(at)?;
        // `confidence interval [CI]`
        if let Some(close) = self.mark(next).and_then(closing).filter(|close| *close != "}")
            && let Some((_, behind)) = self.interval_name(next + 1)
            && self.mark(behind) == Some(close)
        {
            next = behind + 1;
        }
        let mut start = at;
        let mut level = None;
        if let Some((value, from)) = self.level_before(at) {
            start = from;
            level = Some(value);
        } else if let Some((value, behind)) = self.level_behind(next) {
            next = behind;
            level = Some(value);
        }
        if names.around != Around::All {
            next = self.behind_interval_name(next);
        }
        // `CI = [`, `CI: `, `CI, `, `CI of `, `CI (`, `CI for the difference [`
        for _ in 0..BEFORE_ENDS {
            next += usize::from(self.is(next, List::BeforeEnds));
        }
        let (low, high, behind) = self.two_ends(next)?;
        let mut quantities = Vec::new();
        if let Some(level) = &level {
            quantities.push(self.quantity(names.level, Comparator::Equal, level));
        }
        quantities.push(self.quantity(names.low, Comparator::Equal, &low));
        quantities.push(self.quantity(names.high, Comparator::Equal, &high));
        let bytes = self.bytes(start, behind);
        let item = Item {
            alone: names.around != Around::All,
            ..Item::new(Class::Interval, start..behind, bytes, quantities)
        };
        Some((item, behind))
    }

    fn level_value(&self, at: usize) -> Option<Value> {
        match self.tokens.get(at)?.kind {
            Kind::Lowered => self.lowered_value(at),
            Kind::Number => self.value(at, Company::List),
            _ => None,
        }
    }

    /// `95%` before the name at token `at`, a few words between allowed: the level and its token.
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
                    return usual_level(&value).then_some((value, i));
                }
                _ => return None,
            }
        }
        None
    }

    /// `CI95%`, `CI₉₅`, `CI (95%)`, `CI 95%`: the level at token `at`, behind a name, and the token behind.
    fn level_behind(&self, at: usize) -> Option<(Value, usize)> {
        let bracket = matches!(self.mark(at), Some("(" | "["));
        let number = at + usize::from(bracket);
        let value = self.level_value(number).filter(usual_level)?;
        let percent = self.mark(number + 1) == Some("%");
        if !percent && (bracket || !self.tight(number) || self.parts_ends(number + 1)) {
            return None;
        }
        let next = number + 1 + usize::from(percent);
        let closes = bracket && matches!(self.mark(next), Some(")" | "]"));
        Some((value, next + usize::from(closes)))
    }

    /// What stands at token `at` may part the two ends of an interval.
    fn parts_ends(&self, at: usize) -> bool {
        matches!(self.mark(at), Some("," | ";" | "-" | "–"))
            || self.is(at, List::To)
            || self.is(at, List::And)
    }

    /// A dash or `to` stands at token `at`, and a number behind it.
    fn range_goes_on(&self, at: usize) -> bool {
        (matches!(self.mark(at), Some("–" | "-")) || self.is(at, List::To)) && self.is_number(at + 1)
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
                (low, high)
            }
            None => (self.end_of_interval(i, true)?, None),
        };
        i = self.skip_unit(low.next);
        i = self.behind_parting(i, open)?;
        let high = high.or_else(|| self.end_of_interval(i, false))?;
        // The interval's own bracket closes; what else stands in it stays outside.
        let next = self.skip_unit(high.next);
        if open && matches!(self.mark(next), Some(")" | "]" | "}")) {
            return Some((low, high, next + 1));
        }
        let percent = self.mark(high.next) == Some("%");
        let next = high.next + usize::from(percent);
        Some((low, high, next))
    }

    /// The token behind what parts two ends at token `at`: `0.1, 1.5`, `0.1 – 1.5`, `0.1..1.5`, `0.1 to 1.5`.
    fn behind_parting(&self, at: usize, open: bool) -> Option<usize> {
        match self.shown(at)? {
            "," | ";" | "–" | "—" | "-" | "/" | ":" => Some(at + 1),
            "." if self.mark(at + 1) == Some(".") => Some(at + 2),
            _ if self.is(at, List::To) => Some(at + 1),
            _ if self.is(at, List::And) => (open || !self.tight(at)).then_some(at + 1),
            _ => None,
        }
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
            Some("–" | "—" | "-" | ";") => low,
            Some(",") => !low || spaced,
            _ if self.is(grouped.next, List::To) || self.is(grouped.next, List::And) => low,
            _ => !low,
        };
        Some(if groups { grouped } else { listed })
    }

    /// Percent signs, degrees and short units behind the end of an interval.
    fn skip_unit(&self, at: usize) -> usize {
        let unit = self.mark(at) == Some("%") || self.word(at).is_some() && self.is(at, List::Units);
        at + usize::from(unit)
    }
}

/// A level that an interval may have though no percent sign stands behind.
fn usual_level(value: &Value) -> bool {
    (80.0..100.0).contains(&value.number.value())
}

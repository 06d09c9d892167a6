//! What may stand *between* a name and its number: what it is of (`mean age at sowing was 54.3`, `mean
//! length 25 cm`), or what an interval is for (`95% CI for the slope, 0.1 to 0.4`).

use super::Scan;
use super::grammar::Class;
use super::lists::List;
use super::tokens::Kind;
use crate::numbers::Comparator;

/// Most tokens between a name and the `was` before its number.
const PASSED: usize = 14;

/// How many words may say of what a mean is: `the mean length of the dry beds was 3.1`.
const THINGS: usize = 5;

/// Most tokens between the name of an interval and the mark before its ends.
const INTERVAL_OF: usize = 6;

impl Scan<'_> {
    /// Words between a name and its number, from token `at`, up to the comparator: `(mean) age at sowing
    /// was`. The comparator and the token of the number.
    pub(super) fn passing(&self, class: Class, at: usize) -> Option<(Comparator, usize)> {
        self.word(at)?;
        let relation = self.is(at, List::Relations);
        let never = matches!(class, Class::Size | Class::Df | Class::Estimate)
            || self.is(at, List::Verbs)
            || class == Class::P && !self.is(at, List::RelationsOfP)
            // `by means of …`, `medians of both …`
            || class == Class::Descriptive && at > 0 && self.word(at - 1).is_some_and(|w| w.ends_with('s'));
        if never {
            return None;
        }
        let of_two = self.is(at, List::RelationsOfTwo);
        for i in at..at + PASSED {
            if let Some(compared) = self.comparator(i, true).filter(|_| i > at) {
                let sign = self.mark(i).is_some_and(|m| m != ":");
                let found = self.compared_behind(class, i, compared, !sign || i <= at + 2 && !relation);
                if found.is_some() || sign || self.is(i, List::Verbs) {
                    return found;
                }
            }
            // `hazard ratio for high against low, 2.2`
            if relation && i > at && self.mark(i) == Some(",") {
                let number = self.has_decimals(i + 1) && self.a_number(i + 1, true);
                return number.then_some((Comparator::Equal, i + 1));
            }
            if !self.passable(class, i, of_two) {
                return None;
            }
        }
        None
    }

    /// The comparator at token `i` behind words, if it fits the class and a number stands behind it.
    /// `near`: a mean may have it though it is a sign.
    fn compared_behind(
        &self,
        class: Class,
        i: usize,
        compared: (Comparator, usize),
        near: bool,
    ) -> Option<(Comparator, usize)> {
        let (comparator, behind) = self.sign_decides(compared);
        let sign = self.mark(i).is_some_and(|m| m != ":");
        let equal = matches!(comparator, Comparator::Equal | Comparator::About);
        let fits = match class {
            Class::P => true,
            Class::Descriptive => equal && near,
            _ => equal && !sign,
        };
        let given = !self.is(i, List::Of) || self.measured(behind);
        (fits && given && self.a_number(behind, class == Class::Other)).then_some((comparator, behind))
    }

    /// The token may stand between a name of this class and its comparator. `of_two`: an `and` may.
    fn passable(&self, class: Class, i: usize, of_two: bool) -> bool {
        let Some(token) = self.tokens.get(i) else {
            return false;
        };
        match token.kind {
            Kind::Word => {
                let turns = self.is(i, List::Turns) && !(of_two && self.is(i, List::And));
                // Another name takes the number: `mean of the difference was 0.5`.
                let another = class != Class::P
                    && [&self.grammar.spellings, &self.grammar.interval_spellings]
                        .iter()
                        .any(|s| s.at(self.text, self.tokens, i, |s| s.words).is_some());
                !turns && !another
            }
            Kind::Number => !token.text(self.text).contains('.') && self.mark(i + 1) != Some(":"),
            Kind::Mark => matches!(token.text(self.text), "-" | "–" | "/" | "'") && !token.spaced,
            _ => false,
        }
    }

    /// A number with decimals, or with a unit, a percent sign, a bracket or a spread behind it.
    fn measured(&self, at: usize) -> bool {
        let number = if self.mark(at).is_some() { at + 1 } else { at };
        let grouped =
            self.mark(number + 1) == Some(",") && self.shown(number + 2).is_some_and(|n| n.len() == 3);
        let behind = if grouped { number + 3 } else { number + 1 };
        self.has_decimals(number)
            || matches!(self.mark(behind), Some("%" | "(" | "[" | "±" | "°"))
            || self.is(behind, List::Units)
    }

    /// A number, signed or not, that counts nothing (`5 times greater`).
    fn a_number(&self, at: usize, decimals: bool) -> bool {
        let signed = matches!(self.mark(at), Some("-" | "–" | "−" | "+"));
        let number = if signed { at + 1 } else { at };
        let behind = if self.mark(number + 1) == Some("-") {
            number + 2
        } else {
            number + 1
        };
        self.is_number(number)
            && (!decimals || self.has_decimals(number))
            && !self.is(behind, List::Multiples)
            && !self.is(behind, List::Shares)
    }

    /// The token of the number that follows `mean` and what it is a mean of, at token `at`:
    /// `mean length of beds was 3.1`, `mean length 25 cm`.
    pub(super) fn behind_things(&self, at: usize) -> Option<usize> {
        if self.word(at - 1).is_none_or(|w| w.ends_with('s')) {
            return None;
        }
        let mut i = at;
        for _ in 0..THINGS {
            self.word(i)?;
            // Means of these are other quantities.
            if self.is(i, List::NoThings) {
                return None;
            }
            // `mean depth in 2014`, `was more than 0.1`: the number says something else.
            let leads_away = self.is(i, List::LeadsAway);
            i = self.behind_thing(i);
            let said = self.mark(i) == Some("=") || self.is(i, List::Verbs) || self.is(i, List::Of);
            let number = i + usize::from(said);
            if !self.is_number(number) {
                continue;
            }
            if leads_away && !said {
                return None;
            }
            let measured = self.unit_word(number + 1) && !self.is(number + 1, List::Multiples)
                || self.mark(number + 1) == Some("±");
            let plainly = said && self.is(i, List::WholeNumberFollows);
            return (!self.tight(number) && (self.has_decimals(number) || measured || plainly))
                .then_some(number);
        }
        None
    }

    /// The token behind the word at token `at` and what belongs to it: `CD4`, `long-term`, `(all beds)`.
    fn behind_thing(&self, at: usize) -> usize {
        let mut i = at + 1;
        if self.is_number(i) && self.tight(i) {
            i += 1;
        }
        while self.mark(i) == Some("-") && self.word(i + 1).is_some() && self.tight(i) {
            i += 2;
        }
        self.remark(i).unwrap_or(i)
    }

    /// What may stand between the name of an interval and its ends: `CI [confidence interval],`,
    /// `CI for the slope,`. The token behind the words.
    pub(super) fn behind_interval_name(&self, at: usize) -> usize {
        let mut next = at;
        if let Some("(" | "[") = self.mark(next)
            && let Some(close) =
                (next + 1..next + INTERVAL_OF).find(|i| matches!(self.mark(*i), Some(")" | "]")))
            && (next + 1..close).all(|i| self.word(i).is_some() || self.mark(i) == Some("-"))
        {
            next = close + 1;
        }
        if !self.is(next, List::IntervalOf) {
            return next;
        }
        for i in next + 1..next + 1 + INTERVAL_OF {
            match self.shown(i) {
                Some("," | ":" | "=" | "[" | "(") if i > next + 1 => return i,
                _ if self.word(i).is_some() || self.mark(i) == Some("-") => {}
                _ => break,
            }
        }
        next
    }
}

//! *Formulas*: a number that is only the first piece of a calculation (`R² = 1-(a/b)`, `p = 1/12`,
//! `R = 1:10`) or of a run (`k = 1, 2, …, n`) is no result, nor is a letter that is multiplied or taken
//! from 1 (`1 - β`).

use super::Scan;
use super::grammar::Class;
use super::tokens::{Kind, Token};
use super::values::Value;

/// Most tokens from the start of a run of numbers to its dots.
const RUN: usize = 8;

/// Most tokens of one side of a fraction.
const BRACKET: usize = 12;

impl Scan<'_> {
    /// The value, with `next` the token behind it and its percent sign, goes on as a formula.
    pub(super) fn formula(&self, class: Class, value: &Value, next: usize) -> bool {
        self.runs_on(next) || self.multiplied(next) || self.calculates(class, value)
    }

    /// `1, 2, …`, `1…`: the start of a run of numbers. Token `at` is behind the first.
    fn runs_on(&self, at: usize) -> bool {
        if self.mark(at) != Some(",") {
            return self.mark(at) == Some("…");
        }
        for i in at + 1..at + RUN {
            match self.tokens.get(i).map(|t| t.kind) {
                Some(Kind::Number) => {}
                Some(Kind::Mark) => match self.shown(i) {
                    Some("…" | "⋯") => return true,
                    Some(",") => {}
                    Some(".") => return self.mark(i + 1) == Some(".") && self.mark(i + 2) == Some("."),
                    _ => return false,
                },
                _ => return false,
            }
        }
        false
    }

    /// `t = 2t₁`
    fn multiplied(&self, at: usize) -> bool {
        self.word(at).is_some()
            && self.tight(at)
            && self.tight(at + 1)
            && self.tokens[at + 1].kind == Kind::Lowered
    }

    /// The value goes on as a calculation: `1-(a/b)`, `1/12`, `1:10`.
    fn calculates(&self, class: Class, value: &Value) -> bool {
        if matches!(
            class,
            Class::Size | Class::Df | Class::Descriptive | Class::Ratio | Class::Interval
        ) {
            return false;
        }
        let at = value.next;
        let Some(sign) = self.mark(at).filter(|_| self.tight(at) && self.tight(at + 1)) else {
            return false;
        };
        let whole = !self.text[value.span.clone()].contains(['.', '·', ',']);
        let opens = self.mark(at + 1) == Some("(");
        let next = self.tokens[at + 1].kind;
        match sign {
            "/" | ":" => whole && (opens || matches!(next, Kind::Number | Kind::Word)),
            "-" | "–" | "+" => opens || whole && next == Kind::Word,
            "^" => true,
            _ => false,
        }
    }

    /// The token at which a value begins, behind the fractions that it was calculated from:
    /// `F = MSbetween/MSwithin = 24.1/3.32 = 7.25`.
    pub(super) fn behind_fractions(&self, mut at: usize) -> usize {
        while let Some(next) = self.behind_fraction(at) {
            at = next;
        }
        at
    }

    /// The token behind `24.1/3.32 =`.
    fn behind_fraction(&self, at: usize) -> Option<usize> {
        let slash = self.behind_term(at)?;
        if self.mark(slash) != Some("/") {
            return None;
        }
        let equal = self.behind_term(slash + 1)?;
        (self.mark(equal) == Some("=")).then_some(equal + 1)
    }

    /// The token behind a number or word with what is run together with it, or behind a bracket.
    fn behind_term(&self, at: usize) -> Option<usize> {
        if self.mark(at) == Some("(") {
            let inside = (at + 1..at + BRACKET).find(|i| matches!(self.mark(*i), Some("(" | ")")))?;
            return (self.mark(inside) == Some(")")).then_some(inside + 1);
        }
        let starts = matches!(self.tokens.get(at)?.kind, Kind::Number | Kind::Word);
        let goes_on = |i: usize| {
            let part = |t: &Token| matches!(t.kind, Kind::Number | Kind::Word | Kind::Lowered | Kind::Raised);
            self.tight(i) && self.tokens.get(i).is_some_and(part)
        };
        starts.then(|| (at + 1..).find(|i| !goes_on(*i)))?
    }

    /// The symbol at tokens `at..behind` is a factor behind a bracket (`(a + b)r`), or is taken from 1.
    pub(super) fn factor(&self, at: usize, behind: usize, class: Class) -> bool {
        if at == 0 || behind > at + 1 || class == Class::P {
            return false;
        }
        let letter = self.tokens[at].text(self.text).chars().count() == 1;
        match self.mark(at - 1) {
            Some(")" | "]") => letter && !self.tokens[at].spaced,
            Some("-" | "–") => letter && at > 1 && self.shown(at - 2) == Some("1"),
            _ => false,
        }
    }
}

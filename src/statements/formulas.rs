//! *Formulas*: a number that is only the first piece of a calculation (`R² = 1-(a/b)`, `p = 1/12`,
//! `R = 1:10`) is no result, nor is a letter that is multiplied or taken from 1 (`1 - β`).

use super::Scan;
use super::grammar::Class;
use super::tokens::Kind;
use super::values::Value;

impl Scan<'_> {
    /// The value goes on as a calculation.
    pub(super) fn calculates(&self, class: Class, value: &Value) -> bool {
        if matches!(
            class,
            Class::Size | Class::Df | Class::Descriptive | Class::Ratio | Class::Interval
        ) {
            return false;
        }
        let at = value.next;
        let (Some(sign), Some(next)) = (self.mark(at), self.tokens.get(at + 1)) else {
            return false;
        };
        if self.tokens[at].spaced || next.spaced {
            return false;
        }
        let whole = !self.text[value.span.clone()].contains(['.', '·', ',']);
        let opens = self.mark(at + 1) == Some("(");
        match sign {
            "/" | ":" => whole && (opens || matches!(next.kind, Kind::Number | Kind::Word)),
            "-" | "–" | "+" => opens || whole && next.kind == Kind::Word,
            "^" => true,
            _ => false,
        }
    }

    /// The symbol at tokens `at..behind` is a factor behind a bracket, or is taken from 1.
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

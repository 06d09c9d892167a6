//! *Arguments*: what stands in brackets, lowered or run together right behind a symbol, such as the
//! degrees of freedom in `F(1, 52)` and `t₉₆`, and remarks in brackets that are none.

use super::grammar::Symbol;
use super::lists::List;
use super::spellings::Found;
use super::tokens::{Kind, on_the_line};
use super::values::{Company, Value};
use super::{Quantity, Scan};
use crate::numbers::{Comparator, Decimal};

/// Most tokens in the bracket of a symbol.
const BRACKET: usize = 24;

/// Most tokens in a remark and its brackets.
const REMARK: usize = 8;

impl Scan<'_> {
    /// What stands in brackets or lowered right behind a symbol: `(1, 52)`, `₉₆`, `χ217` (a 17 behind `χ2`).
    /// The quantities, and the token behind them.
    pub(super) fn arguments(&self, found: &Found) -> (Vec<Quantity>, usize) {
        let symbol = &self.grammar.symbols[found.spelling.meaning];
        let none = (Vec::new(), found.next);
        if symbol.arguments.is_empty() {
            return none;
        }
        if let Some((start, end)) = found.rest {
            let span = start as usize..end as usize;
            let number = Decimal::read(&on_the_line(&self.text[span.clone()]), false, 0);
            return number.map_or(none, |number| {
                let value = Value {
                    number,
                    span,
                    next: found.next,
                };
                (vec![self.argument(symbol, 0, &value)], found.next)
            });
        }
        let at = found.next + usize::from(self.mark(found.next) == Some("_"));
        match self.mark(at).and_then(closing) {
            Some(close) => self.bracketed(symbol, at, close),
            None => self.lowered(symbol, at),
        }
        .unwrap_or(none)
    }

    /// `(1, 52)`, `(2, N = 90)`, `[df: 2]`: the bracket opens at token `at`.
    fn bracketed(&self, symbol: &Symbol, at: usize, close: &str) -> Option<(Vec<Quantity>, usize)> {
        // How many numbers there are decides whether `1,150` is one of them.
        let end = (at + 1..self.tokens.len().min(at + 1 + BRACKET)).find(|i| self.mark(*i) == Some(close))?;
        let (numbers, named) = self.inside_bracket(symbol, at + 1, end)?;
        if numbers.is_empty() && named.is_empty() {
            return None;
        }
        // `F(2)(45)` and the like are not read; a second bracket is a remark.
        let next = self.remark(end + 1).unwrap_or(end + 1);
        let unnamed: Vec<usize> = (0..symbol.arguments.len())
            .filter(|i| named.iter().all(|q| q.symbol != symbol.arguments[*i].name))
            .collect();
        // Where nothing is understood the bracket stays part of the result, its numbers unnamed.
        let mut quantities: Vec<Quantity> = Vec::new();
        let enough = numbers.len() >= symbol.required() || !named.is_empty();
        if numbers.len() <= unnamed.len() && enough {
            let placed = numbers.iter().zip(&unnamed);
            quantities.extend(placed.map(|(value, index)| self.argument(symbol, *index, value)));
        }
        quantities.extend(named);
        Some((quantities, next))
    }

    /// The numbers of a bracket, those without and those with a symbol.
    fn inside_bracket(
        &self,
        symbol: &Symbol,
        mut at: usize,
        end: usize,
    ) -> Option<(Vec<Value>, Vec<Quantity>)> {
        let company = match symbol.required() {
            1 => Company::Sole,
            _ => Company::List,
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
            } else if matches!(self.mark(at), Some("," | ";" | "/" | ":" | "=" | "~" | "-"))
                || self.word(at).is_some()
            {
                // `χ²(df: 2)`, `t(28 df)`, `t(28, two-tailed)`.
                at += 1;
            } else {
                return None;
            }
        }
        Some((numbers, named))
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
        let compared = self.comparator(i, false).is_some();
        (compared && quantities.len() >= symbol.required()).then_some((quantities, i))
    }

    /// The number in lowered digits at token `at`.
    pub(super) fn lowered_value(&self, at: usize) -> Option<Value> {
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
        self.quantity(symbol.arguments[index].name, Comparator::Equal, value)
    }

    /// What stands in brackets behind a symbol and only speaks of it, at token `at`: the token behind.
    pub(super) fn aside(&self, at: usize, name: &str) -> Option<usize> {
        self.remark(at).or_else(|| self.abbreviation(at, name))
    }

    /// A short remark in brackets without numbers: `(two-tailed)`, `(all beds)`.
    pub(super) fn remark(&self, at: usize) -> Option<usize> {
        if self.mark(at) != Some("(") {
            return None;
        }
        let close = (at + 1..self.tokens.len().min(at + REMARK)).find(|i| self.mark(*i) == Some(")"))?;
        let wordy = (at + 1..close).all(|i| {
            self.word(i).is_some()
                || matches!(self.mark(i), Some("-" | "–" | "'" | "," | "/"))
                || self.sided(i)
        });
        // The brackets of `M (SD) = …` are no remark, but a second symbol.
        let pair = self.symbol(at + 1).is_some_and(|(_, behind)| behind == close);
        (wordy && close > at + 1 && !pair).then_some(close + 1)
    }

    /// `[SD]`, `(aOR)`: another spelling of the symbol before it.
    pub(super) fn abbreviation(&self, at: usize, name: &str) -> Option<usize> {
        let close = closing(self.mark(at)?).filter(|close| *close != "}")?;
        let (symbol, behind) = self.symbol(at + 1)?;
        (symbol.name == name && self.mark(behind) == Some(close)).then_some(behind + 1)
    }

    /// The number at token `at` is part of a word: `1-tailed`, `2-sided`.
    pub(super) fn sided(&self, at: usize) -> bool {
        self.tokens[at].kind == Kind::Number && self.mark(at + 1) == Some("-") && self.is(at + 2, List::Sided)
    }
}

/// The bracket that closes one that opens.
pub(super) fn closing(open: &str) -> Option<&'static str> {
    match open {
        "(" => Some(")"),
        "[" => Some("]"),
        "{" => Some("}"),
        _ => None,
    }
}

//! *Arguments*: what stands in brackets, lowered or run together right behind a symbol, such as the
//! degrees of freedom in `F(1, 52)` and `t₉₆`, and remarks in brackets that are none.

use super::grammar::Symbol;
use super::spellings::Found;
use super::tokens::{Kind, on_the_line};
use super::values::{Company, Value};
use super::{Quantity, Scan};
use crate::numbers::{Comparator, Decimal};

impl Scan<'_> {
    /// What stands in brackets or lowered right behind a symbol.
    pub(super) fn arguments(&self, found: &Found) -> (Vec<Quantity>, usize) {
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
}

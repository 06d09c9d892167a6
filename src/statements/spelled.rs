//! *Spelled-out* numbers up to ninety-nine: `Twenty-three gardeners (54.5%)`.

use super::Scan;
use super::values::Value;
use crate::numbers::Decimal;

/// Zero to nineteen, then the tens from twenty.
pub(super) const WORDS: [&str; 28] = [
    "zero",
    "one",
    "two",
    "three",
    "four",
    "five",
    "six",
    "seven",
    "eight",
    "nine",
    "ten",
    "eleven",
    "twelve",
    "thirteen",
    "fourteen",
    "fifteen",
    "sixteen",
    "seventeen",
    "eighteen",
    "nineteen",
    "twenty",
    "thirty",
    "forty",
    "fifty",
    "sixty",
    "seventy",
    "eighty",
    "ninety",
];

impl Scan<'_> {
    /// The number written out at token `at`.
    pub(super) fn spelled_out(&self, at: usize) -> Option<Value> {
        let known = |i: usize| {
            let word = self.word(i)?;
            WORDS.iter().position(|w| w.eq_ignore_ascii_case(word))
        };
        let first = known(at)?;
        let (number, next) = if first < 20 {
            (first, at + 1)
        } else {
            let tens = 10 * (first - 18);
            match known(at + 2).filter(|ones| (1..10).contains(ones)) {
                Some(ones) if matches!(self.mark(at + 1), Some("-" | "–")) => (tens + ones, at + 3),
                _ => (tens, at + 1),
            }
        };
        // `two-thirds`, `one-sided`
        if matches!(self.mark(next), Some("-" | "–")) && !self.tokens[next].spaced {
            return None;
        }
        Some(Value {
            number: Decimal::read(&number.to_string(), false, 0)?,
            span: self.bytes(at, next),
            next,
        })
    }
}

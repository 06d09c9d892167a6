//! *Spelled-out* numbers up to ninety-nine: `Twenty-three gardeners (54.5%)`.

use super::Scan;
use super::values::Value;
use crate::numbers::Decimal;

const ONES: [&str; 20] = [
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
];
const TENS: [&str; 8] = [
    "twenty", "thirty", "forty", "fifty", "sixty", "seventy", "eighty", "ninety",
];

impl Scan<'_> {
    /// The number written out at token `at`.
    pub(super) fn spelled_out(&self, at: usize) -> Option<Value> {
        let one = |i: usize| {
            let word = self.word(i)?;
            ONES.iter().position(|o| o.eq_ignore_ascii_case(word))
        };
        let word = self.word(at)?;
        // Nearly every word goes out here.
        let starts = |c: u8| b"otfsenz".contains(&c.to_ascii_lowercase());
        if !(3..=9).contains(&word.len()) || !starts(word.as_bytes()[0]) {
            return None;
        }
        let (number, next) = if let Some(ones) = one(at) {
            (ones, at + 1)
        } else {
            let tens = 10 * (2 + TENS.iter().position(|t| t.eq_ignore_ascii_case(word))?);
            match one(at + 2).filter(|o| (1..10).contains(o)) {
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

//! *Spelled-out* numbers up to ninety-nine: `Twenty-three gardeners (54.5%)`.

use super::Scan;
use super::values::Value;
use crate::numbers::Decimal;

impl Scan<'_> {
    /// The number written out at token `at`.
    pub(super) fn spelled_out(&self, at: usize) -> Option<Value> {
        let known = |i: usize| self.grammar.number_word(self.word(i)?);
        let first = known(at)?;
        let tens = first >= 20 && first % 10 == 0;
        let hyphen = tens && matches!(self.mark(at + 1), Some("-" | "–"));
        let ones = known(at + 2).filter(|ones| hyphen && (1..10).contains(ones));
        let (number, next) = ones.map_or((first, at + 1), |ones| (first + ones, at + 3));
        // `two-thirds`, `one-sided`
        if matches!(self.mark(next), Some("-" | "–")) && self.tight(next) {
            return None;
        }
        Some(Value {
            number: Decimal::read(&number.to_string(), false, 0)?,
            span: self.bytes(at, next),
            next,
        })
    }
}

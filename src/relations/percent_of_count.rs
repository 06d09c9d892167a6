//! A percentage follows from its count and total.
//!
//! Formula: 100 · count / N prints as the percentage; count ≤ N.
//!
//! Assumes: count, total and percentage stand directly beside each other, as in 34 of 90 (38%). A total that
//! is taken from elsewhere leaves the result open if it does not fit, because persons may be missing.
//!
//! Caution: percentages may be weighted, or of those who answered.
//!
//! Source: the definition; the rounding as in every relation here.
//!
//! Example: 34 of 90 is 37.8 %, so 38 % agrees and 83 % conflicts.

use super::laws::Anything;
use super::{Case, Tie, Variant};
use crate::numbers::{Interval, Set};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let symbol = |i: usize| case.quantities[i].symbol;
    let total = |i: usize| matches!(symbol(i), "n" | "N");
    let mut ties = Vec::new();
    for percent in (0..case.quantities.len()).filter(|i| symbol(*i) == "percent" && case.own(*i)) {
        // count, total, percentage in this order, or the percentage first.
        let before = percent
            .checked_sub(2)
            .filter(|i| symbol(*i) == "count" && total(i + 1))
            .map(|i| (i, i + 1));
        let after = (percent + 2 < case.quantities.len()
            && symbol(percent + 1) == "count"
            && total(percent + 2)
            && case.own(percent + 2)
            && before.is_none()
            && case.all("percent").len() == 1)
            .then_some((percent + 1, percent + 2));
        // The percentage in between, as in 34 (38%) of 90.
        let around = percent
            .checked_sub(1)
            .filter(|i| symbol(*i) == "count" && before.is_none())
            .filter(|_| percent + 1 < case.quantities.len() && total(percent + 1) && case.own(percent + 1))
            .map(|i| (i, percent + 1));
        // A count (or n) alone before it: the total is borrowed.
        let alone = percent
            .checked_sub(1)
            .filter(|i| matches!(symbol(*i), "count" | "n") && before.is_none() && after.is_none())
            .and_then(|i| {
                let whole = (0..case.quantities.len())
                    .rev()
                    .find(|j| symbol(*j) == "N" && !case.own(*j))?;
                Some((i, whole))
            });
        let Some((count, whole)) = before.or(after).or(around).or(alone) else {
            continue;
        };
        let whole_numbers = [count, whole]
            .iter()
            .all(|i| case.quantities[*i].number.is_whole());
        if !whole_numbers || case.quantities[whole].interval.high < 1.0 {
            continue;
        }
        let mut variants = vec![Variant::new(&[], law)];
        if case.quantities[whole].borrowed.is_some() {
            let reason = "the percentage may be of another total than the one found elsewhere";
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
        ties.push(case.tie(vec![percent, count, whole], variants));
    }
    ties
}

/// Parts: percentage, count, total.
fn law(target: usize, values: &[Interval]) -> Set {
    let hundred = Interval {
        low: 0.0,
        high: 100.0,
    };
    let count = |v: Interval| v.meet(Interval::at_least(0.0));
    let found = match target {
        0 => count(values[1])
            .zip(values[2].meet(Interval::at_least(1.0)))
            .and_then(|(part, whole)| part.times(Interval::point(100.0)).over(whole).meet(hundred)),
        1 => values[0]
            .meet(hundred)
            .zip(count(values[2]))
            .map(|(percent, whole)| rounded(percent.times(whole).times(Interval::point(0.01)), values[1])),
        _ => values[0]
            .meet(hundred)
            .zip(count(values[1]))
            .map(|(percent, part)| {
                let whole = part.times(Interval::point(100.0)).over(percent);
                rounded(
                    Interval {
                        low: whole.low.max(part.low).max(1.0),
                        high: whole.high,
                    },
                    values[2],
                )
            }),
    };
    found.filter(|f| f.low <= f.high).into_iter().collect()
}

/// The whole numbers inside, if the reported number is a single one.
fn rounded(found: Interval, reported: Interval) -> Interval {
    if reported.low == reported.high {
        Interval {
            low: found.low.ceil(),
            high: found.high.floor(),
        }
    } else {
        found
    }
}

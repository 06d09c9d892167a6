//! What sets of values have in common, and what they make together.

use super::{Interval, Set};

/// All values of any of the intervals, as disjoint intervals in rising order.
pub fn union(mut intervals: Vec<Interval>) -> Set {
    intervals.retain(|i| i.low <= i.high);
    intervals.sort_by(|a, b| a.low.total_cmp(&b.low));
    let mut all: Set = Vec::with_capacity(intervals.len());
    for interval in intervals {
        match all.last_mut() {
            Some(last) if interval.low <= last.high => last.high = last.high.max(interval.high),
            _ => all.push(interval),
        }
    }
    all
}

/// The values that lie in both.
pub fn common(a: &[Interval], b: &[Interval]) -> Set {
    let both = a.iter().flat_map(|x| b.iter().filter_map(|y| x.meet(*y)));
    union(both.collect())
}

/// The smallest interval around all values; None if there are none.
pub fn hull(set: &[Interval]) -> Option<Interval> {
    set.iter().copied().reduce(Interval::hull)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn some() -> impl Strategy<Value = Vec<Interval>> {
        let interval = (-9.0..9.0f64, 0.0..4.0f64).prop_map(|(a, w)| Interval::new(a, a + w));
        proptest::collection::vec(interval, 0..5)
    }

    proptest! {
        #[test]
        fn a_value_is_in_the_union_or_the_common_part_exactly_when_it_is_in_one_or_both(
            a in some(), b in some(), x in -10.0..14.0f64,
        ) {
            let within = |set: &[Interval]| set.iter().any(|i| i.contains(x));
            let together = union(a.iter().chain(&b).copied().collect());
            prop_assert_eq!(within(&together), within(&a) || within(&b));
            prop_assert!(together.windows(2).all(|w| w[0].high < w[1].low));
            prop_assert_eq!(within(&common(&a, &b)), within(&a) && within(&b));
        }
    }
}

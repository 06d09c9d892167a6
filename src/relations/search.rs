//! *Search*: which values of one quantity are compatible with all others, found by bisection over
//! the doubles themselves, so that the answer is as exact as the function that is searched.

use crate::numbers::{Interval, Set};

/// Degrees of freedom and sample sizes are searched up to here; a set that reaches it is open-ended.
pub(super) const MOST: f64 = 1e6;

/// A whole number that has the same order as the double.
fn rank(x: f64) -> i64 {
    let bits = x.to_bits() as i64;
    if bits < 0 {
        i64::MIN.wrapping_sub(bits)
    } else {
        bits
    }
}

fn unrank(rank: i64) -> f64 {
    let bits = if rank < 0 {
        i64::MIN.wrapping_sub(rank)
    } else {
        rank
    };
    f64::from_bits(bits as u64)
}

/// The two neighbours (last where the condition is not met, first where it is), for a condition
/// that is not met at `low` and met at `high`. With `whole`, over the whole numbers.
fn border(low: f64, high: f64, whole: bool, met: impl Fn(f64) -> bool) -> (f64, f64) {
    if whole {
        let (mut low, mut high) = (low, high);
        while high - low > 1.0 {
            let middle = (0.5 * (low + high)).floor();
            if met(middle) { high = middle } else { low = middle }
        }
        return (low, high);
    }
    let (mut low, mut high) = (rank(low), rank(high));
    while i128::from(high) - i128::from(low) > 1 {
        let middle = ((i128::from(low) + i128::from(high)) >> 1) as i64;
        if met(unrank(middle)) {
            high = middle
        } else {
            low = middle
        }
    }
    (unrank(low), unrank(high))
}

/// All x in the domain whose range [low(x), high(x)] meets the target, for two functions that never
/// rise. With `whole`, only whole x, from the first to the last.
pub(super) fn falling(
    domain: Interval,
    whole: bool,
    target: Interval,
    low: impl Fn(f64) -> f64,
    high: impl Fn(f64) -> f64,
) -> Set {
    let reachable = |x: f64| low(x) <= target.high;
    let beyond = |x: f64| high(x) < target.low;
    if !reachable(domain.high) || beyond(domain.low) {
        return Set::new();
    }
    let first = if reachable(domain.low) {
        domain.low
    } else {
        border(domain.low, domain.high, whole, reachable).1
    };
    let last = if beyond(domain.high) {
        border(domain.low, domain.high, whole, beyond).0
    } else {
        domain.high
    };
    if first <= last {
        vec![Interval {
            low: first,
            high: last,
        }]
    } else {
        Set::new()
    }
}

/// The same for two functions that never fall.
pub(super) fn rising(
    domain: Interval,
    whole: bool,
    target: Interval,
    low: impl Fn(f64) -> f64,
    high: impl Fn(f64) -> f64,
) -> Set {
    falling(domain.negate(), whole, target, |x| low(-x), |x| high(-x))
        .into_iter()
        .map(Interval::negate)
        .collect()
}

/// Where the range of the searched function lies.
#[derive(Clone, Copy, PartialEq)]
enum Side {
    Above,
    Meets,
    Below,
    Nowhere,
}

/// All x in the domain whose range meets the target, for any smooth function: a grid whose steps
/// are 5 % (1 for small whole numbers), and bisection in every cell in which something changes.
pub(super) fn scan(
    domain: Interval,
    whole: bool,
    target: Interval,
    range: impl Fn(f64) -> Option<Interval>,
) -> Set {
    let side = |x: f64| match range(x) {
        Some(r) if r.low > target.high => Side::Above,
        Some(r) if r.high < target.low => Side::Below,
        Some(r) if r.meets(target) => Side::Meets,
        _ => Side::Nowhere,
    };
    let mut found = Set::new();
    let mut add = |low: f64, high: f64| match found.last_mut() {
        Some(last) if low <= last.high + if whole { 1.0 } else { 0.0 } => last.high = last.high.max(high),
        _ => found.push(Interval { low, high }),
    };
    let points = grid(domain, whole);
    let mut before: Option<(f64, Side)> = None;
    for x in points {
        let here = side(x);
        if let Some((a, then)) = before
            && then != here
        {
            match (then, here) {
                (Side::Meets, _) => add(a, border(a, x, whole, |v| side(v) != Side::Meets).0),
                (_, Side::Meets) => add(border(a, x, whole, |v| side(v) == Side::Meets).1, x),
                (Side::Nowhere, _) | (_, Side::Nowhere) => {}
                _ => {
                    let first = border(a, x, whole, |v| side(v) != then).1;
                    if side(first) == Side::Meets {
                        let last = border(first, x, whole, |v| side(v) != Side::Meets).0;
                        add(first, last);
                    }
                }
            }
        } else if here == Side::Meets {
            add(before.map_or(x, |b| b.0), x);
        }
        before = Some((x, here));
    }
    found
}

/// Points of the domain in rising order, the ends among them.
fn grid(domain: Interval, whole: bool) -> Vec<f64> {
    let mut sizes = Vec::new();
    let mut x: f64 = if whole { 1.0 } else { 1e-6 };
    while x < 2e7 {
        sizes.push(x);
        x = if whole {
            (x * 1.05).floor().max(x + 1.0)
        } else {
            x * 1.05
        };
    }
    let mut points: Vec<f64> = sizes.iter().rev().map(|x| -x).collect();
    points.push(0.0);
    points.extend(sizes);
    points.retain(|x| domain.low < *x && *x < domain.high);
    points.insert(0, domain.low);
    if domain.high > domain.low {
        points.push(domain.high);
    }
    points
}

/// Sets that reach the end of the search have no end.
pub(super) fn open_ended(mut set: Set, most: f64) -> Set {
    if let Some(last) = set.last_mut()
        && last.high >= most
    {
        last.high = f64::INFINITY;
    }
    set
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn bisection_over_the_doubles_is_exact() {
        let set = falling(
            Interval::new(0.0, f64::INFINITY),
            false,
            Interval::new(0.25, 0.5),
            |x| 1.0 / x,
            |x| 1.0 / x,
        );
        assert_eq!(set, vec![Interval::new(2.0, 4.0)]);
        let set = rising(
            Interval::new(-9.0, 9.0),
            true,
            Interval::new(-7.5, 8.5),
            |x| x,
            |x| x,
        );
        assert_eq!(set, vec![Interval::new(-7.0, 8.0)]);
    }

    #[test]
    fn a_hill_is_met_on_both_slopes() {
        let hill = |x: f64| Some(Interval::point(-(x - 50.0) * (x - 50.0)));
        let set = scan(Interval::new(1.0, MOST), true, Interval::new(-101.0, -80.0), hill);
        assert_eq!(set, vec![Interval::new(40.0, 41.0), Interval::new(59.0, 60.0)]);
    }

    proptest! {
        #[test]
        fn ranks_keep_the_order(a in any::<f64>(), b in any::<f64>()) {
            prop_assume!(!a.is_nan() && !b.is_nan());
            prop_assert_eq!(unrank(rank(a)).to_bits(), if a == 0.0 { unrank(rank(a)).to_bits() } else { a.to_bits() });
            if a < b { prop_assert!(rank(a) < rank(b)); }
        }
    }
}

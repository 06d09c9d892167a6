//! An interval's lower end is not above its upper end, and the estimate lies between them.
//!
//! Formula: CI lower ≤ estimate ≤ CI upper.
//!
//! Assumes: the interval belongs to the nearest estimate before it that lies inside, or to the nearest if
//! none does. Two means before an interval, or a mean before a test, are not taken as its estimate, because
//! the interval is then that of a difference.
//!
//! Caution: bootstrapped and credible intervals can, rarely, exclude their estimate; that is left open.
//!
//! Source: Neyman (1937), Philosophical Transactions A 236:333–380.
//!
//! Example: OR = 1.52, 95% CI [1.61, 2.11] conflicts, because the estimate lies below the interval.

use super::laws::Anything;
use super::{Case, Reach, Tie, Variant, p_value};
use crate::numbers::{Interval, Set};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for bounds in case.intervals() {
        let interval = |i: usize| case.quantities[i].interval;
        let (low, high) = (interval(bounds.low), interval(bounds.high));
        let fits = |e: &usize| low.low <= interval(*e).high && interval(*e).low <= high.high;
        let inside = bounds.estimates.iter().copied().find(fits);
        let Some(estimate) = inside.or(bounds.estimates.first().copied()) else {
            // Without an estimate only the order is left to say, and only where it is wrong.
            if low.low > high.high {
                ties.push(case.tie(vec![bounds.low, bounds.high], vec![Variant::new(&[], ordered)]));
            }
            continue;
        };
        let mut variants = vec![Variant::new(&[], between)];
        // An estimate that may be in other units than its interval, or of another kind.
        let uncertain = match case.quantities[estimate].symbol {
            "S" | "alpha" => Some("it is not certain that the interval is that of the number before it"),
            _ if bounds.credible => Some("a credible interval can exclude its estimate"),
            _ if bounds.estimates.len() > 1 => {
                Some("the interval belongs to none of the numbers before it, perhaps to something else")
            }
            _ => None,
        };
        if low.low <= high.high {
            if let Some(reason) = uncertain {
                variants.push(Variant::new(&[], Anything).left_open(reason));
            }
            for meaning in ["bootstrap", "bayes"] {
                if let Some(mention) = case.mention(meaning, Reach::Document) {
                    let reason = format!(
                        "the interval excludes the estimate, which can happen with the method named ({})",
                        p_value::quoted(mention)
                    );
                    variants.push(Variant::new(&[], Anything).left_open(reason));
                }
            }
        }
        ties.push(case.tie(vec![estimate, bounds.low, bounds.high], variants));
    }
    ties
}

/// Parts: lower end, upper end.
fn ordered(target: usize, values: &[Interval]) -> Set {
    match target {
        0 => vec![Interval::at_most(values[1].high)],
        _ => vec![Interval::at_least(values[0].low)],
    }
}

/// Parts: estimate, lower end, upper end.
pub(super) fn between(target: usize, values: &[Interval]) -> Set {
    let (estimate, low, high) = (values[0], values[1], values[2]);
    match target {
        0 if low.low <= high.high => vec![Interval {
            low: low.low,
            high: high.high,
        }],
        1 if estimate.low <= high.high => vec![Interval::at_most(estimate.high.min(high.high))],
        2 if low.low <= estimate.high => vec![Interval::at_least(estimate.low.max(low.low))],
        _ => Set::new(),
    }
}

//! A ratio follows from its coefficient on the scale of logarithms.
//!
//! Formula: OR, RR, HR or IRR = e^B.
//!
//! Assumes: the one coefficient and the one ratio of a statement belong together, and the coefficient is that
//! of a logistic, Poisson or Cox model. A ratio for the opposite category, e^−B, and a ratio for several units
//! at once are left open.
//!
//! Caution: a ratio adjusted for other variables than the coefficient differs.
//!
//! Source: Cox (1972), Journal of the Royal Statistical Society B 34:187–220; common practice.
//!
//! Example: B = 0.35 gives OR = 1.42, so OR = 1.42 agrees and OR = 1.24 conflicts.

use super::laws::formula;
use super::{Case, Law, Tie, Variant};
use crate::numbers::Interval;

const COEFFICIENT: Interval = Interval {
    low: -30.0,
    high: 30.0,
};

const RATIO: Interval = Interval {
    low: 1e-12,
    high: 1e12,
};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    // The coefficient often stands in a bracket of its own.
    let count = case.quantities.len() + case.linked.len();
    let all = |symbols: &[&str]| -> Vec<usize> {
        (0..count)
            .filter(|i| case.own(*i) && symbols.contains(&case.quantity(*i).symbol))
            .collect()
    };
    let ([ratio], [coefficient]) = (
        &all(&["OR", "RR", "HR", "IRR"])[..],
        &all(&["b", "B", "beta"])[..],
    ) else {
        return Vec::new();
    };
    // Each of the statements of a sentence sees all of them; the one with the ratio takes the case.
    if *ratio >= case.quantities.len() {
        return Vec::new();
    }
    let opposite = "it fits if the ratio is that of the opposite category, e^−B";
    let variants = vec![
        Variant::new(&[], law(1.0)),
        Variant::new(&[], law(-1.0)).left_open(opposite),
    ];
    vec![case.tie(vec![*ratio, *coefficient], variants)]
}

/// Parts: ratio, coefficient.
fn law(sign: f64) -> impl Law {
    formula(vec![RATIO, COEFFICIENT], move |v| (sign * v[0]).exp())
}

//! The standardised difference d follows from the means and SDs of two groups.
//!
//! Formula: d = (M1 − M2) / s, with s the pooled SD, the SD of one group (Glass), or the root of the mean of
//! both variances; g = J·d with J = 1 − 3/(4·df − 1).
//!
//! Assumes: the two means and SDs and the only d in one sentence belong together; its sign is not judged.
//! Where the sizes are not printed, the pooled SD lies between the two. For the same persons twice d may be
//! standardised by the SD of the differences, which the two SDs only bound; that is left open.
//!
//! Caution: a d from a model with covariates differs.
//!
//! Source: Cohen (1988), Statistical Power Analysis, 2nd ed., ch. 2; Hedges (1981), Journal of Educational
//! Statistics 6:107–128.
//!
//! Example: M = 3.12, SD = 1.07 and M = 2.50, SD = 1.10 give d = 0.57; d = 0.75 conflicts.

use super::groups::{difference, over, sized};
use super::laws::{Anything, corners};
use super::{Case, Reach, Tie, Variant, p_value};
use crate::numbers::Interval;

/// How much J can take off: with the fewest degrees of freedom that a study has.
const LEAST_J: f64 = 0.5;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let Some(pair) = case.two_groups() else {
        return Vec::new();
    };
    let own = |symbol: &str| {
        let mut all = case.all(symbol).into_iter().filter(|i| case.own(*i));
        (all.next(), all.next())
    };
    let (effect, corrected) = match (own("d"), own("g")) {
        ((Some(d), None), (None, _)) => (d, false),
        ((None, _), (Some(g), None)) => (g, true),
        _ => return Vec::new(),
    };
    let parts = vec![effect, pair.a.mean, pair.sds.0, pair.b.mean, pair.sds.1];
    let n = pair
        .sizes
        .map(|(a, b)| (case.quantity(a).interval.low, case.quantity(b).interval.low));
    let least = match (corrected, n) {
        (false, _) => 1.0,
        (true, Some((n1, n2))) if n1 + n2 > 4.0 => 1.0 - 3.0 / (4.0 * (n1 + n2 - 2.0) - 1.0) - 0.002,
        _ => LEAST_J,
    };
    let shrink = move |d: Interval| Interval {
        low: d.low * least,
        high: d.high,
    };
    let pooled = move |v: &[Interval]| {
        let sd = match n {
            Some((n1, n2)) if n1 + n2 > 2.0 => corners(&[v[2], v[4]], |x| {
                (((n1 - 1.0) * x[0] * x[0] + (n2 - 1.0) * x[1] * x[1]) / (n1 + n2 - 2.0)).sqrt()
            })?,
            _ => Interval::new(v[2].low.min(v[4].low), v[2].high.max(v[4].high)),
        };
        Some(shrink(over(difference(v[1], v[3]), sd)))
    };
    let average = move |v: &[Interval]| {
        let sd = corners(&[v[2], v[4]], |x| (0.5 * (x[0] * x[0] + x[1] * x[1])).sqrt())?;
        Some(shrink(over(difference(v[1], v[3]), sd)))
    };
    let mut variants = vec![
        Variant {
            law: sized(0, pooled),
            ..Variant::new(&["standardised by the pooled SD"], Anything)
        },
        Variant {
            law: sized(0, average),
            ..Variant::new(&["standardised by the mean of both variances"], Anything)
        },
    ];
    for (which, at) in [("first", 2), ("second", 4)] {
        let law = sized(0, move |v: &[Interval]| {
            Some(shrink(over(difference(v[1], v[3]), v[at])))
        });
        let says = format!("standardised by the SD of the {which} group");
        variants.push(Variant {
            law,
            ..Variant::new(&[&says], Anything)
        });
    }
    if pair.design(case).paired {
        let bounded = sized(0, move |v: &[Interval]| {
            let apart = v[2].minus(v[4]).abs();
            let sd = Interval {
                low: apart.low,
                high: v[2].high + v[4].high,
            };
            Some(shrink(over(difference(v[1], v[3]), sd)))
        });
        let reason = "it fits if the same persons were measured twice and d is standardised by the SD of the differences";
        variants.push(
            Variant {
                law: bounded,
                ..Variant::new(&[], Anything)
            }
            .left_open(reason),
        );
    }
    for meaning in ["bayes", "partial"] {
        if let Some(mention) = case.mention(meaning, Reach::Paragraph) {
            let reason = format!("d may come from a model ({})", p_value::quoted(mention));
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
    }
    vec![case.tie(parts, variants)]
}

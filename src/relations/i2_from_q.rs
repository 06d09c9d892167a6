//! I² follows from the heterogeneity statistic Q and its degrees of freedom.
//!
//! Formula: I² = 100·max(0, (Q − df)/Q) percent.
//!
//! Assumes: I² by Q. Programs that take I² from another estimate of the variance between studies (REML,
//! Paule–Mandel) give somewhat different values: left open within 15 percentage points where the manuscript
//! names such an estimate or a multilevel model.
//!
//! Caution: in multilevel meta-analyses I² is divided among levels.
//!
//! Source: Higgins & Thompson (2002), Statistics in Medicine 21:1539–1558.
//!
//! Example: Q(11) = 23.4 gives 53 %, so I² = 53% agrees and I² = 35% conflicts.

use super::laws::{Anything, COUNTS, POSITIVE, between, formula};
use super::{Case, Reach, Tie, Variant, p_value};
use crate::numbers::Interval;

const PERCENT: Interval = Interval {
    low: 0.0,
    high: 100.0,
};

/// How far I² by other estimates may lie from the one by Q, in percentage points.
const OTHER_ESTIMATES: f64 = 15.0;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let [i2] = case.all("I2")[..] else {
        return Vec::new();
    };
    let tests: Vec<_> = case
        .tests()
        .into_iter()
        .filter(|t| matches!(t.symbol, "Q" | "chi2"))
        .collect();
    let [test] = &tests[..] else { return Vec::new() };
    let Some(df) = test.df else { return Vec::new() };
    let value = |q: f64, df: f64| {
        if q > 0.0 {
            (100.0 * (1.0 - df / q)).max(0.0)
        } else {
            0.0
        }
    };
    let domains = || vec![PERCENT, POSITIVE, COUNTS];
    let law = formula(domains(), move |v| value(v[0], v[1]));
    let mut variants = vec![Variant::new(&[], law)];
    if let Some(mention) = case.mention("heterogeneity-estimate", Reach::Document) {
        let near = between(
            domains(),
            move |v| value(v[0], v[1]) - OTHER_ESTIMATES,
            move |v| value(v[0], v[1]) + OTHER_ESTIMATES,
        );
        let reason = format!(
            "I² may come from another estimate than Q ({})",
            p_value::quoted(mention)
        );
        variants.push(Variant::new(&[], near).left_open(reason));
    }
    if let Some(mention) = case.mention("multilevel", Reach::Document) {
        let reason = format!("I² may be that of one level ({})", p_value::quoted(mention));
        variants.push(Variant::new(&[], Anything).left_open(reason));
    }
    vec![case.tie(vec![i2, test.at, df], variants)]
}

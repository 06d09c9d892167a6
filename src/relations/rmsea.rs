//! RMSEA follows from the χ² of a model, its degrees of freedom and N.
//!
//! Formula: RMSEA = √(max(0, χ² − df) / (df·(N − 1))), or with N in place of N − 1; for G groups times √G.
//!
//! Assumes: one group unless the paragraph speaks of several, and the χ² of the RMSEA, not a scaled one beside
//! it; where the manuscript names a scaled or robust χ² the result is left open.
//!
//! Caution: N may be smaller in this model than the N that is printed.
//!
//! Source: Steiger (1990), Multivariate Behavioral Research 25:173–180.
//!
//! Example: χ²(38) = 61.2, N = 160 gives .062, so RMSEA = .06 agrees and RMSEA = .02 conflicts.

use super::laws::{Anything, COUNTS, POSITIVE, formula};
use super::{Case, Law, Reach, Tie, Variant, p_value};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let [rmsea] = case.all("RMSEA")[..] else {
        return Vec::new();
    };
    let tests: Vec<_> = case.tests().into_iter().filter(|t| t.symbol == "chi2").collect();
    let [test] = &tests[..] else { return Vec::new() };
    let Some(df) = test.df else { return Vec::new() };
    let sizes = case.sizes(test);
    let [n] = sizes[..] else {
        return vec![Tie::open(vec![rmsea, test.at, df], "the sample size is missing")];
    };
    let mut variants = vec![
        Variant::new(&[], law(1.0)),
        Variant::new(&["with N in place of N − 1"], law(0.0)),
    ];
    for meaning in ["scaled-chi2", "several-groups", "bayes", "bootstrap"] {
        if let Some(mention) = case.mention(meaning, Reach::Document) {
            let reason = format!("RMSEA may be by another formula ({})", p_value::quoted(mention));
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
    }
    vec![case.tie(vec![rmsea, test.at, df, n], variants)]
}

/// Parts: RMSEA, χ², df, N.
fn law(less: f64) -> impl Law {
    formula(vec![POSITIVE, POSITIVE, COUNTS, COUNTS], move |v| {
        ((v[0] - v[1]).max(0.0) / (v[1] * (v[2] - less).max(1.0))).sqrt()
    })
}

//! p follows from χ² and its degrees of freedom.
//!
//! Formula: p = P(X > χ²), X with the χ² distribution with df degrees of freedom.
//!
//! The same holds for H of Kruskal and Wallis, Friedman's and the log-rank χ², the likelihood ratio
//! G², Wald's χ² and Q of heterogeneity.
//!
//! Assumes: the upper tail. With one degree of freedom and a sentence that says one-sided, half of
//! it is tried too. A p that is adjusted for multiple tests may be larger, never smaller.
//!
//! Caution: an exact test (Fisher, permutation) may be meant by the p beside a χ².
//!
//! Source: Pearson (1900), Philosophical Magazine 50:157–175; NIST/SEMATECH e-Handbook 1.3.6.7.4.
//!
//! Example: χ²(1) = 6.83 gives p from .0089 to .0090, so p = .009 agrees and p = .09 conflicts.

use super::laws::{Anything, Side, TailLaw};
use super::{Case, Tie, Variant, p_value};
use crate::distributions::chi2_upper;
use crate::numbers::Interval;

/// Symbols of statistics that follow this distribution when they come with degrees of freedom.
const SYMBOLS: [&str; 5] = ["chi2", "H", "Q", "G2", "W"];

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (test, p) in case.tests_with_p() {
        if !SYMBOLS.contains(&test.symbol) {
            continue;
        }
        let statistic = &case.quantities[test.at];
        // A W is Wald's χ² only if it has degrees of freedom and is not a correlation as in the
        // test of normality.
        if test.symbol == "W" && (test.df.is_none() || statistic.interval.high <= 1.0) {
            continue;
        }
        let Some(df) = test.df.filter(|i| case.quantities[*i].interval.high > 0.0) else {
            let missing = format!("the degrees of freedom of {} are missing", name(test.symbol));
            ties.push(Tie::open(vec![p, test.at], missing));
            continue;
        };
        let one = case.quantities[df].interval == Interval::point(1.0);
        let mut variants = p_value::variants(case, &test, p, one, |side| Box::new(law(side)));
        // χ² has one tail; what is halved is said by the variant itself.
        for variant in &mut variants {
            variant.assumes.retain(|a| a != "two-sided");
        }
        if test.symbol == "W" {
            let reason = "W may be something else than Wald's χ²";
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
        let mut tie = case.tie(vec![p, test.at, df], variants);
        tie.remarks = p_value::remarks(case, p);
        ties.push(tie);
    }
    ties
}

fn name(symbol: &str) -> &str {
    match symbol {
        "chi2" => "χ²",
        "G2" => "G²",
        other => other,
    }
}

/// Parts: p, χ², df.
fn law(side: Side) -> TailLaw {
    TailLaw {
        tail: chi2_upper,
        rises_with_df: true,
        signed: false,
        largest: f64::INFINITY,
        less: Interval::point(0.0),
        side,
    }
}

//! The effect size r follows from t, F or z.
//!
//! Formula: r = t / √(t² + df); r = √(F / (F + df2)) for F with df1 = 1; r = z / √N.
//!
//! Assumes: an r without df or n of its own beside such a test is its effect size. Beside z, N may be the
//! number of persons or, in a paired design, of observations (twice as many).
//!
//! Caution: beside U or W, r may be the rank-biserial correlation, which z does not give; that is left open.
//!
//! Source: Cohen (1988), Statistical Power Analysis, 2nd ed., ch. 11; Rosenthal (1991), Meta-analytic
//! Procedures for Social Research, ch. 2.
//!
//! Example: t(28) = 2.20 gives r = .384, so r = .38 agrees and r = .83 conflicts.

use super::laws::{Anything, COUNTS, POSITIVE, Sizes, UNIT, formula};
use super::{Case, Law, Tie, Variant};
use crate::numbers::Interval;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let tests = case.tests();
    let mut ties = Vec::new();
    for (test, effect) in case.tests_with(&["r"]) {
        // Only an r that is not itself a test, and has no p of its own.
        let is_effect = tests
            .iter()
            .any(|t| t.at == effect && t.symbol == "r" && t.secondary());
        if !is_effect || test.secondary() || has_own_p(case, test.at, effect) {
            continue;
        }
        let df1_is_one = test
            .df1
            .is_some_and(|i| case.quantities[i].interval == Interval::point(1.0));
        let sizes = case.sizes(&test);
        let (parts, variants) = match (test.symbol, test.df, test.df2) {
            ("t", Some(df), _) => (
                vec![effect, test.at, df],
                vec![Variant::new(&[], law(3, |v| v[0] / v[0].hypot(v[1].sqrt())))],
            ),
            ("F", _, Some(df2)) if df1_is_one => (
                vec![effect, test.at, df2],
                vec![Variant::new(&[], law(3, |v| (v[0] / (v[0] + v[1])).sqrt()))],
            ),
            ("z", _, _) if sizes.len() == 1 => (vec![effect, test.at, sizes[0]], of_z(case, 3)),
            ("z", _, _) if sizes.len() == 2 => (vec![effect, test.at, sizes[0], sizes[1]], of_z(case, 4)),
            _ => continue,
        };
        if parts[2..].iter().any(|i| case.quantities[*i].interval.high < 1.0) {
            continue;
        }
        ties.push(case.tie(parts, variants));
    }
    ties
}

/// Whether a p belongs to the r rather than to the test: one stands between them and, if the r comes last,
/// another follows it.
fn has_own_p(case: &Case, test: usize, effect: usize) -> bool {
    let between = case.between(test, effect, &["p"]);
    let after = case.quantities[effect + 1..]
        .iter()
        .take_while(|q| q.symbol != "r" && q.borrowed.is_none());
    between && (effect < test || after.into_iter().any(|q| q.symbol == "p"))
}

fn of_z(case: &Case, parts: usize) -> Vec<Variant> {
    let mut variants = vec![
        Variant::new(
            &["r = z/√N"],
            law(parts, |v| v[0] / v[1..].iter().sum::<f64>().sqrt()),
        ),
        Variant::new(
            &["paired design, r = z/√N with N the number of observations"],
            law(parts, |v| v[0] / (2.0 * v[1..].iter().sum::<f64>()).sqrt()),
        ),
    ];
    if case.first_of(&["U", "W"]).is_some() {
        let reason = "beside U or W, r may be the rank-biserial correlation";
        variants.push(Variant::new(&[], Anything).left_open(reason));
    }
    variants
}

/// Parts: r, the statistic, and df or sizes.
fn law(parts: usize, f: impl Fn(&[f64]) -> f64 + Send + Sync + 'static) -> impl Law {
    let mut domains = vec![UNIT, POSITIVE];
    domains.resize(parts, COUNTS);
    let signed = (0..parts).map(|i| i < 2).collect();
    Sizes {
        law: Box::new(formula(domains, f)),
        signed,
    }
}

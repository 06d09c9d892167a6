//! Cramér's V (or φ) follows from χ² and N.
//!
//! Formula: V = √(χ² / (N·m)), m = min(r, c) − 1, for every table with (r − 1)(c − 1) = df;
//! φ = √(χ² / N).
//!
//! Assumes: N is the number of observations in the table. Only the size counts, since φ may have a sign.
//!
//! Caution: a V corrected for bias is smaller, and beside a χ² with Yates' correction φ is often the one
//! without it; both are left open.
//!
//! Source: Cramér (1946), Mathematical Methods of Statistics, ch. 21.
//!
//! Example: χ²(1, N = 90) = 6.83 gives V = .275, so V = .28 agrees and V = .82 conflicts.

use super::laws::{COUNTS, POSITIVE, Sizes, UNIT, between, formula};
use super::{Case, Law, Tie, Variant};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (test, effect) in case.tests_with(&["V", "phi"]) {
        let (Some(df), sizes) = (test.df, case.sizes(&test)) else {
            continue;
        };
        let df = case.quantities[df].interval;
        if test.symbol != "chi2" || sizes.len() != 1 || df.low != df.high || df.low < 1.0 || df.low > 1e6 {
            continue;
        }
        if case.quantities[sizes[0]].interval.high < 1.0 {
            continue;
        }
        let phi = case.quantities[effect].symbol == "phi";
        let variants = variants(df.low.round() as u32, phi);
        ties.push(case.tie(vec![effect, test.at, sizes[0]], variants));
    }
    ties
}

/// Parts: V, χ², N.
fn variants(df: u32, phi: bool) -> Vec<Variant> {
    let domains = vec![UNIT, POSITIVE, COUNTS];
    let sized = |law: Box<dyn Law>| Sizes {
        law,
        signed: vec![true, false, false],
    };
    let shorter: Vec<u32> = (1..=df)
        .take_while(|m| m * m <= df)
        .filter(|m| df.is_multiple_of(*m))
        .collect();
    let mut variants = Vec::new();
    for m in if phi { vec![1] } else { shorter } {
        let law = formula(domains.clone(), move |v| (v[0] / (v[1] * f64::from(m))).sqrt());
        let table = format!("a table of {} by {}", m + 1, df / m + 1);
        variants.push(Variant::new(&[table.as_str()], sized(Box::new(law))));
    }
    if !phi {
        let law = between(domains.clone(), |_| 0.0, |v| (v[0] / v[1]).sqrt());
        let reason = "V is smaller than the formula gives, as it is after a correction for bias";
        variants.push(Variant::new(&[], sized(Box::new(law))).left_open(reason));
    }
    if df == 1 {
        let law = between(
            domains,
            |v| (v[0] / v[1]).sqrt(),
            |v| (v[0] / v[1]).sqrt() + 10.0 / v[1],
        );
        let reason = "it fits if χ² has Yates' correction and the effect size has not";
        variants.push(Variant::new(&[], sized(Box::new(law))).left_open(reason));
    }
    variants
}

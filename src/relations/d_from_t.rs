//! Cohen's d (or Hedges' g) follows from t.
//!
//! Formula: d = t·√(1/n1 + 1/n2) for two groups, which is 2t/√N for equal ones; often 2t/√df;
//! d = t/√n for paired or one-sample tests. For groups of unknown size |d| lies between 2|t|/√N and
//! |t|·√(N/(N − 1)). g is d times J = 1 − 3/(4·df − 1). An F with df1 = 1 counts as t = √F.
//!
//! Assumes: the sizes of the groups where the statement gives them; otherwise every design that the degrees
//! of freedom allow. Only the size of d counts, as signs are printed now this way, now that.
//!
//! Caution: a d that is standardised by the SD of one group (Glass), of the raw scores in a paired design,
//! or of a mixed model does not follow from t; such values are left open where they can occur.
//!
//! Source: Cohen (1988), Statistical Power Analysis, 2nd ed., ch. 2; Hedges (1981), Journal of
//! Educational Statistics 6:107–128.
//!
//! Example: t(28) = 2.20 with 15 per group gives d from 0.801 to 0.805, so d = 0.80 agrees and d = 8.0 conflicts.

use super::laws::{Anything, COUNTS, POSITIVE, Sizes, between, formula};
use super::{Case, Law, Reach, Tie, Variant};
use crate::numbers::Interval;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (test, effect) in case.tests_with(&["d", "g"]) {
        let df = match (test.symbol, test.df, test.df1, test.df2) {
            ("t", Some(df), _, _) => df,
            ("F", _, Some(df1), Some(df2)) if case.quantities[df1].interval == Interval::point(1.0) => df2,
            _ => continue,
        };
        let degrees = case.quantities[df].interval;
        if degrees.high <= 1.0 {
            continue;
        }
        let root = test.symbol == "F";
        let corrected = case.quantities[effect].symbol == "g";
        let own: Vec<usize> = (0..case.quantities.len())
            .filter(|i| case.own(*i) && case.quantities[*i].symbol == "n")
            .collect();
        let groups = if test.sizes.len() == 2 {
            test.sizes.clone()
        } else {
            own
        };
        // Two sizes that add up to the degrees of freedom: independent groups, whose d is fixed by t.
        let total = |g: &[usize]| g.iter().map(|i| case.quantities[*i].number.value()).sum::<f64>();
        let known = groups.len() == 2 && degrees.low == degrees.high && total(&groups) == degrees.low + 2.0;
        let mut parts = vec![effect, test.at, df];
        if known {
            parts.extend(groups);
        }
        let welch = !known && case.mention("welch", Reach::Paragraph).is_some();
        let fractional = welch || degrees.low != degrees.high || degrees.low.fract() != 0.0;
        let mut variants = variants(root, corrected, known, fractional);
        if case.mention("glass", Reach::Sentence).is_some() {
            let reason = "Glass's Δ is standardised by the SD of one group, which t does not give";
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
        ties.push(case.tie(parts, variants));
    }
    ties
}

/// d per unit of t from df and, if known, the two sizes.
type Factor = fn(&[f64]) -> f64;

fn variants(root: bool, corrected: bool, known: bool, fractional: bool) -> Vec<Variant> {
    let mut factors: Vec<(&str, Factor)> = Vec::new();
    if known {
        factors.push(("d = t·√(1/n1 + 1/n2)", |v| (1.0 / v[1] + 1.0 / v[2]).sqrt()));
    }
    factors.push(("two groups of equal size, d = 2t/√N", |v| {
        2.0 / (v[0] + 2.0).sqrt()
    }));
    factors.push(("two groups, d = 2t/√df", |v| 2.0 / v[0].sqrt()));
    if !known {
        factors.push(("paired or one-sample test, d = t/√n", |v| {
            1.0 / (v[0] + 1.0).sqrt()
        }));
    }
    let parts = if known { 5 } else { 3 };
    let wrap = |law: Box<dyn Law>| -> Box<dyn Law> {
        let signed = (0..parts).map(|i| i < 2).collect();
        Box::new(Sizes { law, signed })
    };
    let mut domains = vec![POSITIVE, POSITIVE];
    domains.resize(parts, COUNTS);
    let t = move |f: f64| if root { f.sqrt() } else { f };
    let make = |text: String, law: Box<dyn Law>| Variant {
        assumes: vec![text],
        only_open: None,
        law: wrap(law),
    };
    let mut variants = Vec::new();
    for (text, factor) in &factors {
        let factor = *factor;
        let plain = formula(domains.clone(), move |v| t(v[0]) * factor(&v[1..]));
        if corrected {
            let smaller = between(
                domains.clone(),
                move |v| t(v[0]) * factor(&v[1..]) * (correction(v[1]) - 0.002).max(0.0),
                move |v| t(v[0]) * factor(&v[1..]) * (correction(v[1]) + 0.002).min(1.0),
            );
            variants.push(make(format!("{text}, times J"), Box::new(smaller)));
            variants.push(make(format!("{text}, without J"), Box::new(plain)));
        } else {
            variants.push(make(text.to_string(), Box::new(plain)));
        }
    }
    // g may be as much smaller than d as J says.
    let shrink = move |df: f64| {
        if corrected {
            (correction(df) - 0.002).max(0.0)
        } else {
            1.0
        }
    };
    if !known {
        let split = between(
            domains.clone(),
            move |v| t(v[0]) * 2.0 / (v[1] + 2.0).sqrt() * shrink(v[1]),
            move |v| t(v[0]) * ((v[1] + 2.0) / (v[1] + 1.0)).sqrt(),
        );
        variants.push(make("two groups of unequal size".into(), Box::new(split)));
    }
    if fractional {
        let reason = "with the degrees of freedom of Welch's test d does not follow from t";
        variants.push(Variant::new(&[], Anything).left_open(reason));
    } else if !known {
        // |d| = |t|/√n · √(2(1 − ρ)) ≤ 2|t|/√n for a correlation ρ between the two measurements.
        let raw = between(domains, |_| 0.0, move |v| t(v[0]) * 2.0 / (v[1] + 1.0).sqrt());
        let reason = "it fits if the design is paired and d is standardised by the SD of the raw scores";
        variants.push(make(String::new(), Box::new(raw)).left_open(reason));
    } else {
        // Standardised by one group's SD, d can differ, but not by any amount.
        let glass = between(
            domains,
            move |v| t(v[0]) * (1.0 / v[2] + 1.0 / v[3]).sqrt() * 0.6 * shrink(v[1]),
            move |v| t(v[0]) * (1.0 / v[2] + 1.0 / v[3]).sqrt() * 1.6,
        );
        let reason = "it is near the value from t; d may be standardised by the SD of one group";
        variants.push(make(String::new(), Box::new(glass)).left_open(reason));
    }
    for variant in &mut variants {
        variant.assumes.retain(|a| !a.is_empty());
    }
    variants
}

/// Hedges' approximate correction for small samples.
fn correction(df: f64) -> f64 {
    if df <= 1.0 {
        0.0
    } else {
        1.0 - 3.0 / (4.0 * df - 1.0)
    }
}

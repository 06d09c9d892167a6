//! The test of a coefficient follows from its estimate and standard error.
//!
//! Formula: t or z = estimate/SE; Wald's χ² = (estimate/SE)²; without a printed statistic p = 2·P(Z > |z|), or
//! by t where degrees of freedom are printed.
//!
//! Assumes: estimate and standard error stand side by side and belong to the statistic or p that follows. A
//! standardised β is left out where an unstandardised coefficient stands before it, since the standard error
//! is that of the other.
//!
//! Caution: likelihood-ratio tests, profile likelihood and bootstrapping give a p that differs from Wald's: a
//! p without a statistic is left open as long as it is on the side of α that the formula says, or nearly so.
//!
//! Source: Wald (1943), Transactions of the American Mathematical Society 54:426–482; common practice.
//!
//! Example: b = 0.23, SE = 0.08 gives t = 2.88, so t(120) = 2.9 agrees and t(120) = 3.4 conflicts.

use super::laws::{Anything, ByRange, Loosened, POSITIVE, UNIT, corners, probability};
use super::{Case, Law, Reach, Tie, Variant, p_value};
use crate::distributions::{normal_two_sided, t_two_sided};
use crate::numbers::Interval;

/// Coefficients that are printed with a standard error.
const ESTIMATES: [&str; 4] = ["b", "B", "beta", "Mdiff"];

/// What may stand between the estimate and its standard error, or behind both before the test.
const BETWEEN: [&str; 6] = ["CI_level", "CI_low", "CI_high", "beta", "df", "SE"];

const ANY: Interval = Interval { low: -1e9, high: 1e9 };

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    let symbol = |i: usize| case.quantities[i].symbol;
    for estimate in (0..case.quantities.len()).filter(|i| ESTIMATES.contains(&symbol(*i)) && case.own(*i)) {
        let next = |from: usize, wanted: &[&str]| {
            let mut at = from + 1;
            while at < case.quantities.len() && case.own(at) {
                if wanted.contains(&symbol(at)) {
                    return Some(at);
                }
                if !BETWEEN.contains(&symbol(at)) {
                    return None;
                }
                at += 1;
            }
            None
        };
        let Some(se) = next(estimate, &["SE"]) else {
            continue;
        };
        // `b = 0.35, SE = 0.12, β = .21`: the SE is the first one's.
        let second = (0..estimate)
            .rev()
            .take_while(|i| !ESTIMATES.contains(&symbol(*i)) && symbol(*i) != "p");
        if symbol(estimate) == "beta" && second.into_iter().any(|i| symbol(i) == "SE") {
            continue;
        }
        let lone_beta = symbol(estimate) == "beta"
            && estimate > 0
            && case.own(estimate - 1)
            && ["b", "B"].contains(&symbol(estimate - 1));
        if lone_beta || case.quantities[se].interval.low <= 0.0 {
            continue;
        }
        let mut variants = Vec::new();
        let (target, parts) = match next(se, &["t", "z", "chi2", "p"]) {
            Some(at) if symbol(at) == "chi2" => {
                if case
                    .tests()
                    .iter()
                    .find(|t| t.at == at)
                    .and_then(|t| t.df)
                    .is_some_and(|df| case.quantities[df].interval != Interval::point(1.0))
                {
                    continue;
                }
                variants.push(Variant::new(&["Wald's test"], ratio(|z| z * z)));
                (at, vec![at, estimate, se])
            }
            Some(at) if symbol(at) == "p" => {
                let df = case.only(&(0..case.quantities.len()).collect::<Vec<_>>(), &["df"]);
                let df = df
                    .map(|i| case.quantities[i].interval.low)
                    .filter(|df| *df >= 1.0);
                variants.push(Variant::new(&["two-sided", "Wald's test"], p_law(df)));
                let loose = Loosened {
                    law: Box::new(p_law(df)),
                    shrink: 0.3,
                    grow: 2.5,
                    more: 0.02,
                };
                let reason = "p is near the one that estimate and standard error give; it may come from another test than Wald's";
                variants.push(Variant::new(&[], loose).left_open(reason));
                if case.one_sided || case.mention("one-sided", Reach::Sentence).is_some() {
                    let half = Loosened {
                        law: Box::new(p_law(df)),
                        shrink: 0.5,
                        grow: 0.5,
                        more: 0.0,
                    };
                    variants.push(Variant::new(&["one-sided"], half));
                }
                for meaning in ["adjusted", "bonferroni", "adjusted-pairs"] {
                    if let Some(mention) = case.mention(meaning, Reach::Document) {
                        let reason = format!(
                            "p may be adjusted for multiple tests ({})",
                            p_value::quoted(mention)
                        );
                        variants.push(Variant::new(&[], Anything).left_open(reason));
                    }
                }
                (at, vec![at, estimate, se])
            }
            Some(at) => {
                variants.push(Variant::new(&[], ratio(|z| z)));
                (at, vec![at, estimate, se])
            }
            None => continue,
        };
        for meaning in ["bootstrap", "permutation", "bayes", "profile"] {
            if let Some(mention) = case.mention(meaning, Reach::Paragraph) {
                let reason = format!(
                    "{} may come from another method ({})",
                    symbol(target),
                    p_value::quoted(mention)
                );
                variants.push(Variant::new(&[], Anything).left_open(reason));
            }
        }
        ties.push(case.tie(parts, variants));
    }
    ties
}

/// The sizes of estimate/SE.
fn size(v: &[Interval]) -> Option<Interval> {
    let se = v[2].meet(Interval::at_least(0.0))?;
    let estimate = v[1].abs();
    Some(
        Interval {
            low: if se.high > 0.0 {
                estimate.low / se.high
            } else {
                0.0
            },
            high: if se.low > 0.0 {
                estimate.high / se.low
            } else {
                f64::INFINITY
            },
        }
        .widen(1e-12),
    )
}

/// Parts: the statistic, estimate, SE. Its sign follows that of the estimate, unless it is a square; but signs
/// are printed by size only by some.
fn ratio(f: fn(f64) -> f64) -> impl Law {
    let law = ByRange {
        range: move |v: &[Interval]| corners(&[size(v)?], |x| f(x[0])),
        domains: vec![POSITIVE, ANY, POSITIVE],
    };
    super::laws::Sizes {
        law: Box::new(law),
        signed: vec![true, true, false],
    }
}

/// Parts: p, estimate, SE.
fn p_law(df: Option<f64>) -> impl Law {
    let range = move |v: &[Interval]| {
        let z = size(v)?;
        let p = |z: f64| match df {
            Some(df) => t_two_sided(z, df),
            None => normal_two_sided(z),
        };
        Some(probability(p(z.high.min(1e9))?, p(z.low)?))
    };
    ByRange {
        range,
        domains: vec![UNIT, ANY, POSITIVE],
    }
}

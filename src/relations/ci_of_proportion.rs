//! The confidence interval of a proportion follows from the proportion and n.
//!
//! Formula: Wald: p ± z·√(p(1−p)/n); Wilson: (p + z²/2n ± z·√(p(1−p)/n + z²/4n²)) / (1 + z²/n);
//! Agresti–Coull: Wald at (x + z²/2)/(n + z²); Clopper–Pearson: quantiles of beta distributions.
//!
//! Assumes: percentage, interval and n in one statement belong together; 95 % where the level is not printed.
//! Where none of the four fits but the end lies between the outermost of them, widened by a correction for
//! continuity, the result is left open.
//!
//! Caution: weights, clusters and finite populations change the interval.
//!
//! Source: Wilson (1927), JASA 22:209–212; Clopper & Pearson (1934), Biometrika 26:404–413; Agresti & Coull
//! (1998), The American Statistician 52:119–126.
//!
//! Example: 34 % of 120 gives 26 % to 43 % by all four; 34 % (95 % CI 29–39 %) conflicts.

use super::laws::{Anything, ByRange, COUNTS, corners};
use super::{Case, Law, Reach, Tie, Variant, p_value};
use crate::distributions::normal_quantile_upper;
use crate::numbers::Interval;

const PERCENT: Interval = Interval {
    low: 0.0,
    high: 100.0,
};

/// How much farther from the percentage an end may lie by corrections and exact methods: in units of 1/n.
const CORRECTION: f64 = 1.5;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let symbol = |i: usize| case.quantities[i].symbol;
    let all = |wanted: &str| -> Vec<usize> {
        (0..case.quantities.len())
            .filter(|i| case.own(*i) && symbol(*i) == wanted)
            .collect()
    };
    let ([percent], [low], [high]) = (&all("percent")[..], &all("CI_low")[..], &all("CI_high")[..]) else {
        return Vec::new();
    };
    let n = match (&all("n")[..], &all("N")[..]) {
        ([n], []) | ([], [n]) => *n,
        _ => return Vec::new(),
    };
    let others = [
        "M", "OR", "RR", "HR", "IRR", "b", "B", "beta", "r", "d", "Mdiff", "AUC", "kappa",
    ];
    if case.quantities.iter().any(|q| others.contains(&q.symbol)) || low < percent {
        return Vec::new();
    }
    let level = all("CI_level")
        .first()
        .map_or(0.95, |i| case.quantities[*i].number.value() / 100.0);
    let Some(z) = normal_quantile_upper(0.5 * (1.0 - level)) else {
        return Vec::new();
    };
    let mut ties = Vec::new();
    for (end, sign) in [(*low, -1.0), (*high, 1.0)] {
        let methods: [(&str, fn(f64, f64, f64, f64) -> f64); 3] = [
            ("Wilson's interval", wilson),
            ("Wald's interval", wald),
            ("Agresti and Coull's interval", agresti_coull),
        ];
        let mut variants: Vec<Variant> = methods
            .into_iter()
            .map(|(says, f)| Variant::new(&[says], law(move |p, n| f(p, n, z, sign), 0.0)))
            .collect();
        let reason = "it is near the usual intervals of a proportion; it may be an exact one or corrected for continuity";
        variants
            .push(Variant::new(&[], law(move |p, n| wilson(p, n, z, sign), CORRECTION)).left_open(reason));
        variants.push(Variant::new(&[], law(move |p, n| wald(p, n, z, sign), CORRECTION)).left_open(reason));
        for meaning in ["bootstrap", "bayes", "robust", "multilevel"] {
            if let Some(mention) = case.mention(meaning, Reach::Document) {
                let reason = format!(
                    "the interval may come from another method ({})",
                    p_value::quoted(mention)
                );
                variants.push(Variant::new(&[], Anything).left_open(reason));
            }
        }
        ties.push(case.tie(vec![end, *percent, n], variants));
    }
    ties
}

fn wald(p: f64, n: f64, z: f64, sign: f64) -> f64 {
    p + sign * z * (p * (1.0 - p) / n).sqrt()
}

fn wilson(p: f64, n: f64, z: f64, sign: f64) -> f64 {
    let middle = p + z * z / (2.0 * n);
    let half = z * (p * (1.0 - p) / n + z * z / (4.0 * n * n)).sqrt();
    (middle + sign * half) / (1.0 + z * z / n)
}

fn agresti_coull(p: f64, n: f64, z: f64, sign: f64) -> f64 {
    let larger = n + z * z;
    let moved = (p * n + 0.5 * z * z) / larger;
    moved + sign * z * (moved * (1.0 - moved) / larger).sqrt()
}

/// Parts: one end and the percentage in percent, n. The ends rise with the percentage but for the last few
/// tenths of a percent of Wald's, which the slack covers.
fn law(end: impl Fn(f64, f64) -> f64 + Send + Sync + 'static, slack: f64) -> impl Law {
    let range = move |v: &[Interval]| {
        let n = v[2].meet(COUNTS)?;
        let found = corners(&[v[1].meet(PERCENT)?, n], |x| 100.0 * end(x[0] / 100.0, x[1]))?;
        let extra = 100.0 * slack / n.low + 1e-7;
        Some(Interval {
            low: (found.low - extra).max(-50.0),
            high: found.high + extra,
        })
    };
    ByRange {
        range,
        domains: vec![PERCENT, PERCENT, COUNTS],
    }
}

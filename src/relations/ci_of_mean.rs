//! The confidence interval of a mean follows from its SD (or SE) and n.
//!
//! Formula: M ± q·SD/√n, with q the quantile of t with n − 1 degrees of freedom, or of the normal
//! distribution; SE in place of SD/√n where it is printed.
//!
//! Assumes: mean, SD, n and interval in one statement belong together; 95 % where the level is not printed.
//! A narrower interval than the formula gives is left open where the paragraph speaks of bootstrapping,
//! of a model or of repeated measurements.
//!
//! Caution: intervals within subjects, of estimated marginal means and of clustered data differ.
//!
//! Source: NIST/SEMATECH e-Handbook 1.3.5.2.
//!
//! Example: M = 3.42, SD = 1.10, n = 64 gives 3.15 to 3.69; an upper end of 3.96 conflicts.

use super::laws::{Anything, ByRange, COUNTS, POSITIVE, corners};
use super::reading::Bounds;
use super::{Case, Law, Reach, Tie, Variant, p_value};
use crate::distributions::{normal_quantile_upper, t_quantile_two_sided};
use crate::numbers::Interval;

/// Where means and ends are searched.
const ANY: Interval = Interval { low: -1e9, high: 1e9 };

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for bounds in case.intervals().into_iter().filter(|b| !b.credible) {
        let [mean] = bounds.estimates[..] else { continue };
        let Some(sample) = case.samples().into_iter().find(|s| s.own && s.mean == mean) else {
            continue;
        };
        let Some(level) = level(case, &bounds) else {
            continue;
        };
        let spread = match (sample.se, sample.sd, sample.n) {
            (_, Some(sd), Some(n)) => (sd, n, false),
            (Some(se), _, Some(n)) => (se, n, true),
            _ => continue,
        };
        let (spread, n, is_se) = spread;
        if case.quantity(n).interval.low < 2.0 {
            continue;
        }
        for (end, sign) in [(bounds.low, -1.0), (bounds.high, 1.0)] {
            let mut assumes = Vec::new();
            if bounds.level.is_none() {
                assumes.push("a 95% interval");
            }
            let t = Variant::new(
                &[&assumes[..], &["by the t distribution"]].concat(),
                law(sign, level, is_se, true),
            );
            let z = Variant::new(
                &[&assumes[..], &["by the normal distribution"]].concat(),
                law(sign, level, is_se, false),
            );
            let mut variants = vec![t, z];
            for meaning in ["bootstrap", "bayes", "partial", "robust", "profile"] {
                if let Some(mention) = case.mention(meaning, Reach::Paragraph) {
                    let reason = format!(
                        "the interval may come from another method ({})",
                        p_value::quoted(mention)
                    );
                    variants.push(Variant::new(&[], Anything).left_open(reason));
                }
            }
            ties.push(case.tie(vec![end, mean, spread, n], variants));
        }
    }
    ties
}

fn level(case: &Case, bounds: &Bounds) -> Option<f64> {
    let level = bounds
        .level
        .map_or(0.95, |i| case.quantities[i].number.value() / 100.0);
    (0.5..1.0).contains(&level).then_some(level)
}

/// Parts: one end, mean, SD or SE, n.
fn law(sign: f64, level: f64, is_se: bool, by_t: bool) -> impl Law {
    let range = move |v: &[Interval]| {
        corners(&[v[1], v[2].abs(), v[3].meet(Interval::at_least(2.0))?], |x| {
            let n = x[2].min(1e9);
            let q = match by_t {
                true => t_quantile_two_sided(1.0 - level, n - 1.0),
                false => normal_quantile_upper(0.5 * (1.0 - level)),
            };
            let se = if is_se { x[1] } else { x[1] / n.sqrt() };
            x[0] + sign * q.unwrap_or(f64::NAN) * se
        })
        .map(|i| i.widen(1e-9))
    };
    ByRange {
        range,
        domains: vec![ANY, ANY, POSITIVE, COUNTS],
    }
}

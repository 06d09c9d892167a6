//! The estimate lies in the middle of its confidence interval.
//!
//! Formula: estimate = (lower + upper)/2 for means, differences and coefficients; the same for their
//! logarithms for OR, RR and HR, and for Fisher's z = artanh r for correlations.
//!
//! Medians, η², R², V, percentages and other estimates with one-sided limits are left out, since their
//! intervals are not symmetric.
//!
//! Assumes: an interval by the normal or t distribution. One that is lopsided, but not by more than profile
//! likelihood, exact or bootstrapped intervals are, is left open, and so is every lopsided one of d and g (noncentral t)
//! and every one where the manuscript speaks of bootstrapping, profile likelihood or Bayesian estimation.
//!
//! Caution: the interval may belong to another number than the one before it.
//!
//! Source: Altman & Bland (2011), BMJ 343:d2090; Fisher (1921), Metron 1:3–32.
//!
//! Example: OR = 1.52, 95% CI [1.10, 2.11] has the middle 1.52 and agrees; OR = 1.25 with it conflicts.

use super::laws::Anything;
use super::reading::Bounds;
use super::scale::Scale;
use super::{Case, Law, Reach, Tie, Variant, p_value};
use crate::numbers::{Interval, Set};

/// Where an estimate lies in an interval that is lopsided as methods other than the formula make it: so far
/// from the lower end, as a part of the whole.
const LOPSIDED: Interval = Interval {
    low: 0.33,
    high: 0.67,
};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for bounds in case.intervals() {
        let interval = |i: usize| case.quantities[i].interval;
        let (low, high) = (interval(bounds.low), interval(bounds.high));
        if !low.low.is_finite() || !high.high.is_finite() || low.high >= high.low {
            continue;
        }
        // Only estimates that lie inside; what does not is the business of ci-order.
        let inside: Vec<usize> = bounds
            .estimates
            .iter()
            .copied()
            .filter(|e| {
                interval(*e).meets(Interval {
                    low: low.low,
                    high: high.high,
                })
            })
            .collect();
        let Some(&nearest) = inside.first() else { continue };
        let fits = |e: &usize| {
            let values = [interval(*e), low, high];
            variants(case, &bounds, *e)
                .iter()
                .any(|v| v.only_open.is_none() && v.law.holds(&values))
        };
        let estimate = inside.iter().copied().find(fits);
        let variants = match estimate {
            Some(e) => variants(case, &bounds, e),
            // Of several it may belong to any.
            None if inside.len() > 1 => continue,
            None => variants(case, &bounds, nearest),
        };
        if !variants.is_empty() {
            ties.push(case.tie(
                vec![estimate.unwrap_or(nearest), bounds.low, bounds.high],
                variants,
            ));
        }
    }
    ties
}

fn variants(case: &Case, bounds: &Bounds, estimate: usize) -> Vec<Variant> {
    let symbol = case.quantities[estimate].symbol;
    let Some(scale) = Scale::of(symbol) else {
        return Vec::new();
    };
    let middle = Interval::point(0.5);
    let on = match scale {
        Scale::Plain => "an interval by the normal or t distribution",
        Scale::Log => "an interval on the scale of logarithms",
        Scale::Fisher => "an interval on the scale of Fisher's z",
    };
    let mut variants = vec![Variant::new(&[on], Position { scale, at: middle })];
    if scale == Scale::Fisher {
        let plain = Position {
            scale: Scale::Plain,
            at: middle,
        };
        variants.push(Variant::new(
            &["an interval that is symmetric around r itself"],
            plain,
        ));
    }
    let lopsided = Position { scale, at: LOPSIDED };
    let reason = "the interval is lopsided, but no more than those by profile likelihood, exact methods or bootstrapping can be";
    variants.push(Variant::new(&[], lopsided).left_open(reason));
    if matches!(symbol, "d" | "g" | "rho") || bounds.credible {
        let reason = "intervals of this kind need not be symmetric";
        variants.push(Variant::new(&[], Anything).left_open(reason));
    }
    for meaning in ["bootstrap", "profile", "bayes"] {
        if let Some(mention) = case.mention(meaning, Reach::Document) {
            let reason = format!(
                "the interval need not be symmetric with the method named ({})",
                p_value::quoted(mention)
            );
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
    }
    variants
}

/// The estimate lies at `at` (0 is the lower end, 1 the upper). Parts: estimate, lower end, upper end.
struct Position {
    scale: Scale,
    at: Interval,
}

impl Law for Position {
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        let on: Vec<Interval> = values.iter().map(|v| self.scale.interval(*v)).collect();
        // e = (1 − s)·l + s·h is monotone in each of s and two of e, l and h, so the ends decide.
        let (a, b) = match target {
            0 => (on[1], on[2]),
            1 => (on[0], on[2]),
            _ => (on[0], on[1]),
        };
        let mut found: Option<Interval> = None;
        for s in [self.at.low, self.at.high] {
            for x in [a.low, a.high] {
                for y in [b.low, b.high] {
                    let value = match target {
                        0 => (1.0 - s) * x + s * y,
                        1 => (x - s * y) / (1.0 - s),
                        _ => (x - (1.0 - s) * y) / s,
                    };
                    // Minus infinity less minus infinity: a ratio whose interval begins at zero.
                    if value.is_nan() {
                        return vec![Interval::ALL];
                    }
                    let value = Interval::point(value);
                    found = Some(found.map_or(value, |f| f.hull(value)));
                }
            }
        }
        found.map(|f| self.scale.interval_back(f)).into_iter().collect()
    }
}

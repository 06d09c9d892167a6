//! p follows from an estimate and its confidence interval.
//!
//! Formula: SE = (upper − lower) / (2·q), z = (estimate − null)/SE, p = 2·P(Z > |z|), with q the quantile of
//! the level (1.96 for 95 %). Ratios (OR, RR, HR) are taken on the scale of logarithms, where the null is 0.
//! With known degrees of freedom q and p are those of t.
//!
//! Assumes: two-sided p and interval, and a null of no difference. Interval and p by different usual methods
//! (Wald, likelihood ratio, score, exact, t with unknown degrees of freedom) are left open as long as the
//! interval excludes the null where p is below 1 − level, or nearly so where the groups are small; 95 % where
//! the level is not printed.
//!
//! Caution: the p may be that of another comparison than the interval.
//!
//! Source: Altman & Bland (2011), BMJ 343:d2090 and d2304.
//!
//! Example: HR = 0.72, 95% CI [0.56, 0.93] gives p = .011, so p = .01 agrees and p = .30 conflicts.

use super::laws::{Adjusted, Anything, ByRange, Loosened, UNIT, probability};
use super::reading::Bounds;
use super::scale::Scale;
use super::{Case, Law, Reach, Tie, Variant, p_value};
use crate::distributions::{normal_quantile_upper, normal_two_sided, t_quantile_two_sided, t_two_sided};
use crate::numbers::Interval;

/// Fewest degrees of freedom of a t whose degrees of freedom are not known.
const FEWEST_DF: f64 = 3.0;

/// How far the z behind p may be from the one behind the interval when both are made by different usual
/// methods: between these times z, and these many units more or less.
const METHODS: (f64, f64, f64) = (0.75, 1.35, 0.3);

/// How far p may be on the wrong side of 1 − level for the same reason.
const EDGE: f64 = 1.3;

/// The same for ratios, whose p may be exact or corrected for continuity: so many standard errors of the
/// logarithm in units of z. The correction takes half of one from z, since under independence
/// N³ / (product of the margins) is near 1/a + 1/b + 1/c + 1/d.
const CORRECTION: f64 = 0.55;

/// And so many more units between z of p and z of the interval.
const SPARSE: f64 = 0.25;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for bounds in case.intervals().into_iter().filter(|b| !b.credible) {
        let interval = |i: usize| case.quantities[i].interval;
        let (low, high) = (interval(bounds.low), interval(bounds.high));
        if !low.low.is_finite() || !high.high.is_finite() || low.high >= high.low {
            continue;
        }
        let mut inside = bounds.estimates.iter().copied().filter(|e| {
            interval(*e).meets(Interval {
                low: low.low,
                high: high.high,
            })
        });
        let (Some(estimate), None) = (inside.next(), inside.next()) else {
            continue;
        };
        let scale = match case.quantities[estimate].symbol {
            "Mdiff" | "b" | "B" | "beta" => Scale::Plain,
            "OR" | "RR" | "HR" | "IRR" => Scale::Log,
            _ => continue,
        };
        // An interval that begins at zero on a log scale says nothing about its width.
        if scale == Scale::Log && (low.low <= 0.0 || interval(estimate).low <= 0.0) {
            continue;
        }
        let Some(p) = p_of(case, estimate, &bounds) else {
            continue;
        };
        let Some(variants) = variants(case, &bounds, scale) else {
            continue;
        };
        let mut tie = case.tie(vec![p, estimate, bounds.low, bounds.high], variants);
        tie.remarks = p_value::remarks(case, p);
        ties.push(tie);
    }
    ties
}

/// The only p between the estimate and the next estimate or test that has a p of its own.
fn p_of(case: &Case, estimate: usize, bounds: &Bounds) -> Option<usize> {
    let ends = [
        "F", "chi2", "H", "Q", "G2", "U", "W", "r", "rho", "tau", "M", "Mdn", "Mdiff", "b", "B", "beta", "d",
        "g", "OR", "RR", "HR", "IRR", "CI_low", "CrI_low",
    ];
    let mut found = None;
    for i in estimate + 1..case.quantities.len() {
        let symbol = case.quantities[i].symbol;
        if i == bounds.low || !case.own(i) {
            continue;
        }
        if ends.contains(&symbol) {
            // Another test between the estimate and its interval: the p may be its own.
            if i < bounds.low && matches!(symbol, "F" | "chi2" | "H" | "Q" | "G2" | "U" | "W") {
                return None;
            }
            if i > bounds.low {
                break;
            }
        }
        if symbol == "p" && found.replace(i).is_some() {
            return None;
        }
    }
    found
}

fn variants(case: &Case, bounds: &Bounds, scale: Scale) -> Option<Vec<Variant>> {
    let level = match bounds.level {
        Some(i) => case.quantities[i].number.value() / 100.0,
        None => 0.95,
    };
    if !(0.5..1.0).contains(&level) {
        return None;
    }
    let outside = 1.0 - level;
    let q = normal_quantile_upper(0.5 * outside)?;
    let mut assumed = vec!["two-sided"];
    if bounds.level.is_none() {
        assumed.push("a 95% interval");
    }
    let normal = move |c: f64, _: f64| normal_two_sided(c * q);
    let mut variants = vec![Variant::new(&assumed, law(scale, normal, normal))];
    let one_sided = case.mention("one-sided", Reach::Sentence);
    if case.one_sided || one_sided.is_some() {
        let half = Loosened {
            law: Box::new(law(scale, normal, normal)),
            shrink: 0.5,
            grow: 0.5,
            more: 0.0,
        };
        variants.push(Variant::new(&["one-sided p beside a two-sided interval"], half));
    }
    let df = case
        .first("t")
        .and(case.only(&(0..case.quantities.len()).collect::<Vec<_>>(), &["df"]));
    if scale == Scale::Plain
        && let Some(df) = df
            .map(|i| case.quantities[i].number.value())
            .filter(|df| *df >= 1.0)
    {
        let tq = t_quantile_two_sided(outside, df)?;
        let by_t = move |c: f64, _: f64| t_two_sided(c * tq, df);
        let text = format!("t distribution with {df} degrees of freedom");
        variants.push(Variant::new(&[assumed[0], &text], law(scale, by_t, by_t)));
    }
    // Everything that usual methods make of the interval: z somewhat different, t with few degrees of freedom.
    let tq = t_quantile_two_sided(outside, FEWEST_DF)?;
    let (less, more, units) = METHODS;
    let lowest = move |c: f64, se: f64| {
        let units = units + SPARSE * se;
        Some(normal_two_sided(c * q * more + units)?.min(t_two_sided(c * tq * more + units, FEWEST_DF)?))
    };
    let highest = move |c: f64, se: f64| {
        let units = units + SPARSE * se;
        let z = |q: f64| (c * q * less - units).max(0.0);
        Some(normal_two_sided(z(q))?.max(t_two_sided(z(tq), FEWEST_DF)?))
    };
    let methods = one_side(scale, q, outside, lowest, highest);
    let reason = "p and interval fit only if they come from different methods (Wald, likelihood ratio, score, exact, t)";
    variants.push(Variant::new(&[], methods).left_open(reason));
    if let Some(mention) = case.mention("adjusted", Reach::Document) {
        let reason = format!(
            "it fits if p is adjusted for multiple tests and the interval is not ({})",
            p_value::quoted(mention)
        );
        let adjusted = Adjusted(Box::new(spread_law(scale, q, lowest, highest)));
        variants.push(Variant::new(&[], adjusted).left_open(reason));
    }
    for meaning in ["bootstrap", "permutation", "bayes"] {
        if let Some(mention) = case.mention(meaning, Reach::Paragraph) {
            let reason = format!(
                "p or interval may come from another method ({})",
                p_value::quoted(mention)
            );
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
    }
    Some(variants)
}

/// Distance of the estimate from the null in half widths of the interval: all possible values.
fn distance(scale: Scale, values: &[Interval]) -> Option<Interval> {
    let (e, l, h) = (
        scale.interval(values[1]),
        scale.interval(values[2]),
        scale.interval(values[3]),
    );
    // The null is 0 on every scale.
    let size = e.abs();
    let half = Interval {
        low: 0.5 * (h.low - l.high),
        high: 0.5 * (h.high - l.low),
    };
    if half.high.is_nan() || half.high <= 0.0 {
        return None;
    }
    Some(Interval {
        low: size.low / half.high,
        high: if half.low > 0.0 {
            size.high / half.low
        } else {
            f64::INFINITY
        },
    })
}

/// The standard error of the logarithm at most, where the interval is one of a ratio; else 0.
fn standard_error(scale: Scale, q: f64, values: &[Interval]) -> f64 {
    if scale != Scale::Log {
        return 0.0;
    }
    let (low, high) = (scale.interval(values[2]), scale.interval(values[3]));
    let se = (high.high - low.low) / (2.0 * q);
    // Above this a table of counts says nothing anyway.
    if se.is_finite() { se.clamp(0.0, 3.0) } else { 3.0 }
}

/// Lowest or highest p for an estimate that is so many half widths away from the null, and the standard
/// error of its logarithm.
trait End: Fn(f64, f64) -> Option<f64> + Send + Sync + 'static {}

impl<F: Fn(f64, f64) -> Option<f64> + Send + Sync + 'static> End for F {}

/// Where estimate and ends are searched.
fn domains(scale: Scale) -> Vec<Interval> {
    let ends = match scale {
        Scale::Log => Interval { low: 1e-9, high: 1e9 },
        _ => Interval { low: -1e9, high: 1e9 },
    };
    vec![UNIT, ends, ends, ends]
}

/// Parts: p, estimate, lower end, upper end.
fn law(scale: Scale, lowest: impl End, highest: impl End) -> impl Law {
    spread_law(scale, 1.0, lowest, highest)
}

/// The same, for ends that look at the standard error; q is the quantile of the level.
fn spread_law(scale: Scale, q: f64, lowest: impl End, highest: impl End) -> impl Law {
    let range = move |values: &[Interval]| {
        let c = distance(scale, values)?;
        let se = standard_error(scale, q, values);
        Some(probability(lowest(c.high, se)?, highest(c.low, se)?))
    };
    ByRange {
        range,
        domains: domains(scale),
    }
}

/// The same, and p has to be on the side of `outside` = 1 − level that the interval says.
fn one_side(scale: Scale, q: f64, outside: f64, lowest: impl End, highest: impl End) -> impl Law {
    let range = move |values: &[Interval]| {
        let c = distance(scale, values)?;
        let se = standard_error(scale, q, values);
        probability(lowest(c.high, se)?, highest(c.low, se)?).meet(side(scale, q, outside, values))
    };
    ByRange {
        range,
        domains: domains(scale),
    }
}

fn side(scale: Scale, q: f64, outside: f64, values: &[Interval]) -> Interval {
    let (low, high) = (scale.interval(values[2]), scale.interval(values[3]));
    let slack = CORRECTION * standard_error(scale, q, values);
    if low.low > 0.0 || high.high < 0.0 {
        let corrected = normal_two_sided((q - slack).max(0.0)).unwrap_or(1.0);
        Interval {
            low: 0.0,
            high: (outside * EDGE).max(corrected),
        }
    } else if low.high < 0.0 && high.low > 0.0 {
        let corrected = normal_two_sided(q + slack).unwrap_or(0.0);
        Interval {
            low: (outside / EDGE).min(corrected),
            high: 1.0,
        }
    } else {
        UNIT
    }
}

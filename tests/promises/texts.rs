//! Simulated results that are more than one test with its p: intervals, ratios, ratings, shares.
//! Formulas are the textbook ones (common practice), with the quantiles found by bisection on this
//! test's own tail probabilities.

use crate::studies::{Random, mean, variance};
use crate::{Style, tails};

type Text = fn(&mut Random, &Style) -> String;

pub const TEXTS: [Text; 7] = [
    mean_difference,
    odds_ratio,
    hazard_ratio,
    slope,
    correlation_interval,
    rating,
    share,
];

/// The value whose two-sided p is .05.
fn critical(two_sided: impl Fn(f64) -> f64) -> f64 {
    let (mut low, mut high) = (0.5, 60.0);
    for _ in 0..40 {
        let middle = (low + high) / 2.0;
        if two_sided(middle) > 0.05 {
            low = middle;
        } else {
            high = middle;
        }
    }
    (low + high) / 2.0
}

const Z: f64 = 1.959_963_984_540_054;

/// `[a, b]`, `a to b`, `(a; b)`.
fn pair(r: &mut Random, style: &Style, low: String, high: String) -> String {
    let separator = if style.comma { "; " } else { ", " };
    match r.whole(0, 2) {
        0 => format!("[{low}{separator}{high}]"),
        1 => format!("{low} to {high}"),
        _ => format!("({low}{separator}{high})"),
    }
}

fn interval(r: &mut Random, style: &Style, low: String, high: String) -> String {
    let pair = pair(r, style, low, high);
    match r.whole(0, 2) {
        0 => format!("95% CI = {pair}"),
        1 => format!("95% CI: {pair}"),
        _ => format!("95% CI {pair}"),
    }
}

/// Two groups: difference, its interval by t, and p.
fn mean_difference(r: &mut Random, style: &Style) -> String {
    let (n1, n2) = (r.whole(3, 60), r.whole(3, 60));
    let shift = 1.5 * r.normal();
    let (a, b) = (r.sample(n1, 20.0 + shift, 3.0), r.sample(n2, 20.0, 3.0));
    let df = (n1 + n2 - 2) as f64;
    let pooled = ((variance(&a) * (n1 - 1) as f64 + variance(&b) * (n2 - 1) as f64) / df).sqrt();
    let se = pooled * (1.0 / n1 as f64 + 1.0 / n2 as f64).sqrt();
    let difference = mean(&a) - mean(&b);
    let half = se * critical(|t| tails::p_t(t, df));
    let d = style.decimals;
    let (low, high) = (
        style.number(difference - half, d),
        style.number(difference + half, d),
    );
    format!(
        "mean difference{}{}{}{}{}{}",
        style.equals,
        style.number(difference, d),
        style.separator,
        interval(r, style, low, high),
        style.separator,
        style.p(tails::p_t(difference / se, df))
    )
}

/// A 2×2 table: odds ratio with Wald interval and p.
fn odds_ratio(r: &mut Random, style: &Style) -> String {
    let counts: Vec<f64> = (0..4).map(|_| r.whole(3, 80) as f64).collect();
    let log = (counts[0] * counts[3] / (counts[1] * counts[2])).ln();
    let se = counts.iter().map(|c| 1.0 / c).sum::<f64>().sqrt();
    ratio(r, style, "OR", log, se)
}

/// A coefficient of a survival model on its log scale.
fn hazard_ratio(r: &mut Random, style: &Style) -> String {
    let (log, se) = (0.6 * r.normal(), 0.08 + 0.4 * r.unit());
    ratio(r, style, "HR", log, se)
}

fn ratio(r: &mut Random, style: &Style, name: &str, log: f64, se: f64) -> String {
    let d = style.decimals.max(2);
    let (low, high) = (
        style.number((log - Z * se).exp(), d),
        style.number((log + Z * se).exp(), d),
    );
    let estimate = style.number(log.exp(), d);
    let p = style.p(tails::p_z(log / se));
    match r.whole(0, 2) {
        0 => format!(
            "{name}{}{estimate}{}{}{}{p}",
            style.equals,
            style.separator,
            interval(r, style, low, high),
            style.separator
        ),
        1 => format!("{name} {estimate} ({}; {p})", interval(r, style, low, high)),
        _ => format!("{name}, {estimate}; {}; {p}", interval(r, style, low, high)),
    }
}

/// Simple regression: slope, standard error, t, p, interval.
fn slope(r: &mut Random, style: &Style) -> String {
    let n = r.whole(5, 80);
    let beta = r.normal();
    let x = r.sample(n, 5.0, 2.0);
    let y: Vec<f64> = x.iter().map(|x| 1.0 + beta * x + 3.0 * r.normal()).collect();
    let (mx, my) = (mean(&x), mean(&y));
    let sxx = variance(&x) * (n - 1) as f64;
    let b = x.iter().zip(&y).map(|(a, b)| (a - mx) * (b - my)).sum::<f64>() / sxx;
    let rest: f64 = x
        .iter()
        .zip(&y)
        .map(|(a, c)| (c - my - b * (a - mx)).powi(2))
        .sum();
    let df = (n - 2) as f64;
    let se = (rest / df / sxx).sqrt();
    let half = se * critical(|t| tails::p_t(t, df));
    let d = style.decimals;
    let s = style.separator;
    let (low, high) = (style.number(b - half, d), style.number(b + half, d));
    format!(
        "b{}{}{s}SE{}{}{s}t({df}){}{}{s}{}{s}{}",
        style.equals,
        style.number(b, d),
        style.equals,
        style.number(se, d),
        style.equals,
        style.number(b / se, d),
        style.p(tails::p_t(b / se, df)),
        interval(r, style, low, high)
    )
}

/// Pearson's r with its interval by Fisher's z.
fn correlation_interval(r: &mut Random, style: &Style) -> String {
    let n = r.whole(10, 200);
    let slope = 0.6 * r.normal();
    let x = r.sample(n, 0.0, 1.0);
    let y: Vec<f64> = x.iter().map(|x| slope * x + r.normal()).collect();
    let (mx, my) = (mean(&x), mean(&y));
    let sxy: f64 = x.iter().zip(&y).map(|(a, b)| (a - mx) * (b - my)).sum();
    let value = sxy / ((variance(&x) * variance(&y)).sqrt() * (n - 1) as f64);
    let half = Z / ((n - 3) as f64).sqrt();
    let d = style.decimals.max(2);
    let (low, high) = (
        style.bounded((value.atanh() - half).tanh(), d),
        style.bounded((value.atanh() + half).tanh(), d),
    );
    format!(
        "r({}){}{}{}{}",
        n - 2,
        style.equals,
        style.bounded(value, d),
        style.separator,
        interval(r, style, low, high)
    )
}

/// Answers on a rating scale, one or several items.
fn rating(r: &mut Random, style: &Style) -> String {
    let (n, top, items) = (r.whole(3, 90), r.whole(3, 9), r.whole(1, 4));
    let answers: Vec<f64> = (0..n)
        .map(|_| (0..items).map(|_| r.whole(1, top) as f64).sum::<f64>() / items as f64)
        .collect();
    let d = style.decimals.max(2);
    let scale = if items == 1 {
        format!("a {top}-point scale")
    } else {
        format!("{items} items on a {top}-point scale")
    };
    format!(
        "mood on {scale} (M{}{}{}SD{}{}{}n{}{n})",
        style.equals,
        style.number(mean(&answers), d),
        style.separator,
        style.equals,
        style.number(variance(&answers).sqrt(), d),
        style.separator,
        style.equals
    )
}

/// Counts with percentages.
fn share(r: &mut Random, style: &Style) -> String {
    let n = r.whole(2, 900);
    let count = r.whole(0, n);
    let percent = style.number(100.0 * count as f64 / n as f64, style.decimals - 1);
    match r.whole(0, 2) {
        0 => format!("{count}/{n} ({percent}%)"),
        1 => format!("{count} of {n} ({percent}%)"),
        _ => format!("{count} out of {n} gardeners ({percent}%)"),
    }
}

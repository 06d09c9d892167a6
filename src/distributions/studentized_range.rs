//! The *studentized range* q: the range of k independent normal means over an independent estimate of their standard
//! error with df degrees of freedom. Tukey's honestly significant difference and its p rest on it.
//!
//! The double integral of Lund & Lund (1983, AS 190), each side by the trapezoid rule, with the integrand rewritten
//! so that the upper tail is added up itself: over the largest mean z, with A = Φ(z) and B = Φ(z − w), the range
//! exceeds w with density k·φ(z)·(A^(k−1) − (A − B)^(k−1)).

use super::special::{HALF_LN_2PI, exp_rest};
use super::tails::Tails;
use super::{ENDLESS_DF, bump, gamma, legal_df, solve, t_quantile_two_sided};
use std::f64::consts::{FRAC_1_SQRT_2, LN_2, SQRT_2};

/// Fewer degrees of freedom are not legal here.
const FEWEST_DF: f64 = 1.0;

/// More nodes than the integral over the largest mean can need on either side.
const MOST_NODES: u32 = 100_000;

/// Relative change by which a halved step is taken not to change anything: the integrand is nearly Gaussian, whose
/// error by the next halving is the fourth power of this.
const SETTLED: f64 = 1e-8;

/// Both tails at q for k groups; None unless q is a number, k ≥ 2 and df ≥ 1. Below 0 there is nothing.
pub fn studentized_range_tails(q: f64, groups: u32, df: f64) -> Option<Tails> {
    let df = legal(groups, df)?;
    (!q.is_nan()).then(|| tails(q, f64::from(groups), df))
}

/// Upper tail P(Q > q), the p adjusted by Tukey's method; None unless q is a number, k ≥ 2 and df ≥ 1.
pub fn studentized_range_upper(q: f64, groups: u32, df: f64) -> Option<f64> {
    Some(studentized_range_tails(q, groups, df)?.upper())
}

/// The q with P(Q > q) = p; None unless 0 < p < 1, k ≥ 2 and df ≥ 1.
pub fn studentized_range_quantile_upper(p: f64, groups: u32, df: f64) -> Option<f64> {
    let df = legal(groups, df)?;
    if !(p > 0.0 && p < 1.0) {
        return None;
    }
    let k = f64::from(groups);
    // The range exceeds q whenever the first two means do, and only if some of the pairs do (Bonferroni).
    let low = SQRT_2 * t_quantile_two_sided(p, df)?;
    let high = SQRT_2 * t_quantile_two_sided(p / (0.5 * k * (k - 1.0)), df)?;
    let (ln_upper, ln_lower) = (p.ln(), (-p).ln_1p());
    Some(solve::between(low, high, |q| {
        let tails = tails(q, k, df);
        if p <= 0.5 {
            ln_upper - tails.ln_upper()
        } else {
            tails.ln_lower() - ln_lower
        }
    }))
}

fn legal(groups: u32, df: f64) -> Option<f64> {
    legal_df(df).filter(|df| *df >= FEWEST_DF && groups >= 2)
}

fn tails(q: f64, k: f64, df: f64) -> Tails {
    if q <= 0.0 {
        return Tails::AT_BEGINNING;
    }
    if q == f64::INFINITY {
        return Tails::AT_END;
    }
    // The mean range of k normal values is near 2·√(2·ln k).
    let beyond = q > 1.1 * (2.0 * (1.3 * k).ln()).sqrt();
    super::smaller_tail(beyond, |upper| ln_tail(q, k, df, upper))
}

fn ln_tail(q: f64, k: f64, df: f64, upper: bool) -> f64 {
    if df == ENDLESS_DF {
        return range_tail(q, k, upper).ln();
    }
    // Where the density of ln s times exp(−(q·s)²/4) peaks; see `noncentral_t` for the rest.
    let s = if upper {
        1.0 / (1.0 + 0.5 * q * (q / df)).sqrt()
    } else {
        1.0
    }
    .max(1e-140);
    let a = 0.5 * df;
    let x = a * s * s;
    let excess = a * (s - 1.0) * (s + 1.0);
    let ln_density = LN_2 + gamma::ln_density(a, x, excess);
    let width = 1.0 / (2.0 * a * (1.0 + s * s)).sqrt();
    bump::ln_integral(0.0, width, |v| {
        let ln_f = ln_density - 2.0 * excess * v - x * exp_rest(2.0 * v);
        // Where the density is nothing the range does not have to be asked.
        if ln_f < -800.0 {
            f64::NEG_INFINITY
        } else {
            ln_f + range_tail(q * s * v.exp(), k, upper).ln()
        }
    })
}

/// A tail of the range of k standard normal values at w ≥ 0.
fn range_tail(w: f64, k: f64, upper: bool) -> f64 {
    // The integrand has one peak. Far out in the upper tail it is near w/2; for the lower tail it is between 0 and that,
    // and never beyond where the largest of k values is to be expected.
    let middle = if upper {
        0.5 * w.min(200.0)
    } else {
        (0.5 * w).min((2.0 * k.ln()).sqrt())
    };
    let at = |z: f64| {
        let share = if upper {
            exceeding(z, w, k)
        } else {
            within(z, w, k)
        };
        (-0.5 * z * z - HALF_LN_2PI).exp() * share
    };
    let mut step = 0.5;
    let mut sum = at(middle) + outward(middle, step, at) + outward(middle, -step, at);
    for _ in 0..12 {
        let between = outward(middle - 0.5 * step, step, at) + outward(middle + 0.5 * step, -step, at);
        let settled = (between - sum).abs() <= SETTLED * sum;
        sum += between;
        step *= 0.5;
        if settled {
            break;
        }
    }
    (k * step * sum).min(1.0)
}

/// The sum of a function with one peak at `start` + `step`, `start` + 2·`step` … until nothing is added any more.
fn outward(start: f64, step: f64, at: impl Fn(f64) -> f64) -> f64 {
    let (mut sum, mut last) = (0.0, 0.0);
    for node in 1..=MOST_NODES {
        let term = at(start + step * f64::from(node));
        sum += term;
        if term <= last && term <= 1e-17 * sum {
            break;
        }
        last = term;
    }
    sum
}

/// A^(k−1) − (A − B)^(k−1): the other means are below z, and not all within w of it.
fn exceeding(z: f64, w: f64, k: f64) -> f64 {
    let ln_a = (-normal(-z)).ln_1p();
    let b = normal(z - w);
    let share = b / normal(z);
    -((k - 1.0) * ln_a).exp() * ((k - 1.0) * (-share).ln_1p()).exp_m1()
}

/// (A − B)^(k−1): the other means are all within w below z.
fn within(z: f64, w: f64, k: f64) -> f64 {
    let m = z - 0.5 * w;
    let between = if w < 1e-3 {
        // The density in the middle, with its second derivative.
        w * (-0.5 * m * m - HALF_LN_2PI).exp() * (1.0 + (m * m - 1.0) * w * w / 24.0)
    } else if m > 0.0 {
        normal(w - z) - normal(-z)
    } else {
        normal(z) - normal(z - w)
    };
    between.max(0.0).powf(k - 1.0)
}

/// Φ(z)
fn normal(z: f64) -> f64 {
    0.5 * libm::erfc(-z * FRAC_1_SQRT_2)
}

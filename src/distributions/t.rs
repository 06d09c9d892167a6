//! *Student's t* with any positive degrees of freedom, whole, fractional or infinite, by the incomplete beta
//! function: P(|T| > t) = I_x(df/2, ½) with x = df/(df + t²).

use super::beta::{Cut, ln_odds_with_lower};
use super::normal::normal_quantile_upper;
use super::tails::Tails;
use super::{ENDLESS_DF, legal_df};
use std::f64::consts::LN_2;

/// Both tails at t; None unless t is a number and df > 0.
pub fn t_tails(t: f64, df: f64) -> Option<Tails> {
    let beyond = absolute(t, df)?.ln_upper();
    let tails = Tails::from_ln_upper(beyond - LN_2);
    Some(if t < 0.0 { tails.mirrored() } else { tails })
}

/// Two-sided p = P(|T| > |t|) with `df` degrees of freedom; None unless t is a number and df > 0.
pub fn t_two_sided(t: f64, df: f64) -> Option<f64> {
    Some(absolute(t, df)?.upper())
}

/// Upper tail P(T > t).
pub fn t_upper(t: f64, df: f64) -> Option<f64> {
    Some(t_tails(t, df)?.upper())
}

/// The tails of |T| at |t|.
fn absolute(t: f64, df: f64) -> Option<Tails> {
    let df = legal_df(df)?;
    if t.is_nan() {
        return None;
    }
    let t = t.abs();
    if t == f64::INFINITY {
        return Some(Tails::AT_END);
    }
    let ratio = t / df * t;
    let x = 1.0 / (1.0 + ratio);
    let cut = Cut {
        a: 0.5 * df,
        b: 0.5,
        x,
        y: 1.0 / (1.0 + 1.0 / ratio),
        excess: 0.5 * x * (t - 1.0) * (t + 1.0),
        ln_odds: df.ln() - 2.0 * t.ln(),
    };
    Some(cut.tails().mirrored())
}

/// The t ≥ 0 with P(|T| > t) = p; None unless 0 < p ≤ 1 and df > 0. Infinite where it exceeds every double.
pub fn t_quantile_two_sided(p: f64, df: f64) -> Option<f64> {
    let df = legal_df(df)?;
    if !(p > 0.0 && p <= 1.0) {
        return None;
    }
    if p == 1.0 {
        return Some(0.0);
    }
    if df == ENDLESS_DF {
        return normal_quantile_upper(0.5 * p);
    }
    Some(df.sqrt() * (-0.5 * ln_odds_with_lower(p, 0.5 * df, 0.5)).exp())
}

/// The t with P(T > t) = p; None unless 0 < p < 1 and df > 0.
pub fn t_quantile_upper(p: f64, df: f64) -> Option<f64> {
    if !(p > 0.0 && p < 1.0) {
        return None;
    }
    if p <= 0.5 {
        t_quantile_two_sided(2.0 * p, df)
    } else {
        Some(-t_quantile_two_sided(2.0 * (1.0 - p), df)?)
    }
}

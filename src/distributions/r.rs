//! The *correlation* r of a sample whose true correlation is 0, with df = n − 2 (less one for each variable held
//! constant). r²/(1 − r²) is t²/df, so that 1 − r² itself is the argument of the incomplete beta function.

use super::beta::{Cut, excess, ln_odds_with_lower};
use super::legal_df;
use super::tails::Tails;
use std::f64::consts::LN_2;

/// Both tails at r; None unless |r| ≤ 1 and df > 0.
pub fn r_tails(r: f64, df: f64) -> Option<Tails> {
    let beyond = absolute(r, df)?.ln_upper();
    let tails = Tails::from_ln_upper(beyond - LN_2);
    Some(if r < 0.0 { tails.mirrored() } else { tails })
}

/// Two-sided p = P(|R| > |r|); None unless |r| ≤ 1 and df > 0.
pub fn r_two_sided(r: f64, df: f64) -> Option<f64> {
    Some(absolute(r, df)?.upper())
}

/// The tails of |R| at |r|.
fn absolute(r: f64, df: f64) -> Option<Tails> {
    let df = legal_df(df)?;
    let r = r.abs();
    if r.is_nan() || r > 1.0 {
        return None;
    }
    let (a, b) = (0.5 * df, 0.5);
    let x = (1.0 - r) * (1.0 + r);
    let cut = Cut {
        a,
        b,
        x,
        y: r * r,
        excess: excess(a, b, x, r * r),
        ln_odds: x.ln() - 2.0 * r.ln(),
    };
    Some(cut.tails().mirrored())
}

/// The r ≥ 0 with P(|R| > r) = p; None unless 0 < p ≤ 1 and df > 0.
pub fn r_quantile_two_sided(p: f64, df: f64) -> Option<f64> {
    let df = legal_df(df)?;
    if !(p > 0.0 && p <= 1.0) {
        return None;
    }
    if p == 1.0 {
        return Some(0.0);
    }
    let ln_odds = ln_odds_with_lower(p, 0.5 * df, 0.5);
    Some(1.0 / (1.0 + ln_odds.exp()).sqrt())
}

//! The *F* distribution with any positive degrees of freedom, by the incomplete beta function:
//! P(F > f) = I_x(df2/2, df1/2) with x = df2/(df2 + df1·f). Infinite degrees of freedom lead to χ².

use super::beta::{Cut, ln_odds_with_lower};
use super::tails::Tails;
use super::{ENDLESS_DF, gamma, legal_df};

/// Both tails at f; None unless f is a number and both degrees of freedom are > 0. Below 0 there is nothing.
pub fn f_tails(f: f64, df1: f64, df2: f64) -> Option<Tails> {
    let (df1, df2) = (legal_df(df1)?, legal_df(df2)?);
    if f.is_nan() {
        return None;
    }
    if f <= 0.0 {
        return Some(Tails::AT_BEGINNING);
    }
    if f == f64::INFINITY {
        return Some(Tails::AT_END);
    }
    let (a, b) = (0.5 * df2, 0.5 * df1);
    Some(match (df1 == ENDLESS_DF, df2 == ENDLESS_DF) {
        (false, false) => cut(f, df1, df2).tails().mirrored(),
        (false, true) => gamma::tails(b, b * f, b * (f - 1.0)),
        (true, false) => gamma::tails(a, a / f, a / f * (1.0 - f)).mirrored(),
        (true, true) if f < 1.0 => Tails::AT_BEGINNING,
        (true, true) => Tails::AT_END,
    })
}

/// Where the beta distribution of df2/(df2 + df1·F) is cut; for f > 0 and legal, finite degrees of freedom.
pub(super) fn cut(f: f64, df1: f64, df2: f64) -> Cut {
    let (a, b) = (0.5 * df2, 0.5 * df1);
    let scale = df1 / df2;
    let ratio = if (1e-290..1e290).contains(&scale) {
        scale * f
    } else {
        (df1.ln() - df2.ln() + f.ln()).exp()
    };
    let x = 1.0 / (1.0 + ratio);
    Cut {
        a,
        b,
        x,
        y: 1.0 / (1.0 + 1.0 / ratio),
        excess: b * x * (f - 1.0),
        ln_odds: df2.ln() - df1.ln() - f.ln(),
    }
}

/// Upper tail P(F > f), the p of an F test; None unless f is a number and both degrees of freedom are > 0.
/// A negative f has p = 1.
pub fn f_upper(f: f64, df1: f64, df2: f64) -> Option<f64> {
    Some(f_tails(f, df1, df2)?.upper())
}

/// P(χ²(df1) / χ²(df2) > w) for degrees of freedom > 0: the F distribution without its scaling.
/// It falls in w, rises in df1 and falls in df2, which is what interval bounds need.
pub(crate) fn ratio_upper(w: f64, df1: f64, df2: f64) -> f64 {
    if w <= 0.0 {
        return 1.0;
    }
    if w == f64::INFINITY {
        return 0.0;
    }
    let (a, b) = (0.5 * df2, 0.5 * df1);
    let x = 1.0 / (1.0 + w);
    let cut = Cut {
        a,
        b,
        x,
        y: 1.0 / (1.0 + 1.0 / w),
        excess: a.mul_add(w, -b) * x,
        ln_odds: -w.ln(),
    };
    cut.tails().lower()
}

/// The f with P(F > f) = p, the critical value at level p; None unless 0 < p < 1 and both degrees of freedom
/// are > 0. Infinite where it exceeds every double, 0 where it is below all of them.
pub fn f_quantile_upper(p: f64, df1: f64, df2: f64) -> Option<f64> {
    let (df1, df2) = (legal_df(df1)?, legal_df(df2)?);
    if !(p > 0.0 && p < 1.0) {
        return None;
    }
    let (a, b) = (0.5 * df2, 0.5 * df1);
    Some(match (df1 == ENDLESS_DF, df2 == ENDLESS_DF) {
        (false, false) => (df2.ln() - df1.ln() - ln_odds_with_lower(p, a, b)).exp(),
        (false, true) => (gamma::ln_quantile_upper(p, b) - b.ln()).exp(),
        (true, false) => (a.ln() - gamma::ln_quantile_lower(p, a)).exp(),
        (true, true) => 1.0,
    })
}

/// The f with P(F < f) = p; None unless 0 < p < 1 and both degrees of freedom are > 0.
pub fn f_quantile_lower(p: f64, df1: f64, df2: f64) -> Option<f64> {
    // 1/F is F with the degrees of freedom exchanged.
    Some(1.0 / f_quantile_upper(p, df2, df1)?)
}

//! The *χ²* distribution with any positive degrees of freedom, by the incomplete gamma function.

use super::tails::Tails;
use super::{gamma, legal_df};

/// Both tails at x; None unless x is a number and df > 0. Below 0 there is nothing.
pub fn chi2_tails(x: f64, df: f64) -> Option<Tails> {
    let df = legal_df(df)?;
    (!x.is_nan()).then(|| gamma::tails(0.5 * df, 0.5 * x, 0.5 * (x - df)))
}

/// Upper tail P(X > x), the p of a χ² test; None unless x is a number and df > 0. A negative x has p = 1.
pub fn chi2_upper(x: f64, df: f64) -> Option<f64> {
    Some(chi2_tails(x, df)?.upper())
}

/// The x with P(X > x) = p, the critical value at level p; None unless 0 < p < 1 and df > 0.
pub fn chi2_quantile_upper(p: f64, df: f64) -> Option<f64> {
    let df = legal_df(df)?;
    (p > 0.0 && p < 1.0).then(|| 2.0 * gamma::ln_quantile_upper(p, 0.5 * df).exp())
}

/// The x with P(X < x) = p; None unless 0 < p < 1 and df > 0.
pub fn chi2_quantile_lower(p: f64, df: f64) -> Option<f64> {
    let df = legal_df(df)?;
    (p > 0.0 && p < 1.0).then(|| 2.0 * gamma::ln_quantile_lower(p, 0.5 * df).exp())
}

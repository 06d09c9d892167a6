//! The standard *normal* distribution. Its tails are erfc of the crate `libm`, its quantile that of `statrs`: both
//! are good to the last places, and erfc is monotone where `statrs`' own tail rises by 1e-10 here and there.

use super::special::ln_normal_upper;
use super::tails::Tails;
use statrs::distribution::{ContinuousCDF, Normal};
use std::f64::consts::FRAC_1_SQRT_2;

/// Both tails at z; None for a z that is no number.
pub fn normal_tails(z: f64) -> Option<Tails> {
    if z.is_nan() {
        return None;
    }
    let tails = Tails::from_ln_upper(ln_normal_upper(z.abs()));
    Some(if z < 0.0 { tails.mirrored() } else { tails })
}

/// Upper tail P(Z > z); None for a z that is no number.
pub fn normal_upper(z: f64) -> Option<f64> {
    (!z.is_nan()).then(|| 0.5 * libm::erfc(z * FRAC_1_SQRT_2))
}

/// Two-sided p = P(|Z| > |z|).
pub fn normal_two_sided(z: f64) -> Option<f64> {
    (!z.is_nan()).then(|| libm::erfc(z.abs() * FRAC_1_SQRT_2))
}

/// The z with P(Z > z) = p; None unless 0 < p < 1.
pub fn normal_quantile_upper(p: f64) -> Option<f64> {
    if !(p > 0.0 && p < 1.0) {
        return None;
    }
    // The lower tail is asked, whose probabilities near zero keep their digits.
    Some(-Normal::standard().inverse_cdf(p))
}

/// The z ≥ 0 with P(|Z| > z) = p; None unless 0 < p ≤ 1.
pub fn normal_quantile_two_sided(p: f64) -> Option<f64> {
    normal_quantile_upper(0.5 * p)
        .map(|z| z.max(0.0))
        .filter(|_| p <= 1.0)
}

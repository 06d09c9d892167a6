//! *Quantiles*: the value that leaves a given probability above it.

use super::tails::t_two_sided;
use statrs::distribution::{ContinuousCDF, Normal};

/// The z with P(Z > z) = p; None unless 0 < p < 1.
pub fn normal_quantile_upper(p: f64) -> Option<f64> {
    if !(p > 0.0 && p < 1.0) {
        return None;
    }
    // The lower tail is asked, whose probabilities near zero keep their digits.
    Some(-Normal::standard().inverse_cdf(p))
}

/// The t ≥ 0 with P(|T| > t) = p for `df` degrees of freedom; None unless 0 < p ≤ 1 and df > 0.
/// By bisection of the tail itself, to 15 digits.
pub fn t_quantile_two_sided(p: f64, df: f64) -> Option<f64> {
    if !(p > 0.0 && p <= 1.0) || df.is_nan() || df <= 0.0 {
        return None;
    }
    let (mut low, mut high) = (0.0, 1.0);
    while t_two_sided(high, df)? > p {
        low = high;
        high *= 2.0;
        if high == f64::INFINITY {
            return None;
        }
    }
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if middle <= low || middle >= high {
            break;
        }
        if t_two_sided(middle, df)? > p {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some(0.5 * (low + high))
}

//! *Quantiles*: the value that leaves a given probability above it.

use super::tails::{normal_upper, t_two_sided};
use statrs::distribution::{ContinuousCDF, Normal};

/// The z with P(Z > z) = p; None unless 0 < p < 1.
pub fn normal_quantile_upper(p: f64) -> Option<f64> {
    if !(p > 0.0 && p < 1.0) {
        return None;
    }
    // Where 1 − p would lose digits the symmetric side is asked.
    let z = -Normal::standard().inverse_cdf(p);
    // One Newton step on the tail, because the promise is about the tail.
    let tail = normal_upper(z)?;
    let density = (-0.5 * z * z).exp() / (2.0 * std::f64::consts::PI).sqrt();
    Some(if density > 1e-290 {
        z + (tail - p) / density
    } else {
        z
    })
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

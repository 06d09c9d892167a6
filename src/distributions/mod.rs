//! Tail probabilities and quantiles of the distributions that test statistics follow, each with a
//! stated accuracy. Statistics and p are plain numbers; no text is known here.
//!
//! The probabilities come from `statrs` where it was measured to be accurate; [`ACCURACY`] is the
//! relative error that is promised, and relations widen their intervals by it.

use statrs::distribution::{ContinuousCDF, StudentsT};

/// Promised relative error of every probability in this room, for p of 1e-300 and more.
pub const ACCURACY: f64 = 1e-7;

/// Two-sided p of Student's t with `df` > 0 degrees of freedom (may be fractional).
pub fn t_two_sided(t: f64, df: f64) -> f64 {
    StudentsT::new(0.0, 1.0, df).map_or(f64::NAN, |d| (2.0 * d.sf(t.abs())).min(1.0))
}

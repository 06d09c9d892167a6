//! The *tails*: the probability that a test statistic is at least as far out as the one observed.
//! Always computed as such, never as one minus the other side, so that tiny p keep their digits.

use super::incomplete::{beta, gamma_upper};
use statrs::distribution::{ContinuousCDF, Normal};

/// Degrees of freedom above this are taken as this: no p of 1e-300 or more changes by the promised error.
const MOST_DF: f64 = 1e16;

/// From here on t is turned into a z that has the same tail (Hill 1970, CACM 13:617); its error
/// falls with the third power of the degrees of freedom.
const LARGE_DF: f64 = 1e5;

fn legal_df(df: f64) -> Option<f64> {
    (df > 0.0).then(|| df.min(MOST_DF))
}

/// Upper tail P(Z > z) of the standard normal distribution; None for a z that is no number.
pub fn normal_upper(z: f64) -> Option<f64> {
    (!z.is_nan()).then(|| Normal::standard().sf(z))
}

/// Two-sided p = P(|Z| > |z|) of the standard normal distribution.
pub fn normal_two_sided(z: f64) -> Option<f64> {
    Some((2.0 * normal_upper(z.abs())?).min(1.0))
}

/// Two-sided p = P(|T| > |t|) of Student's t with `df` degrees of freedom, which may be fractional
/// or infinite; None unless df > 0.
pub fn t_two_sided(t: f64, df: f64) -> Option<f64> {
    let df = legal_df(df)?;
    if t.is_nan() {
        return None;
    }
    let t = t.abs();
    if t == f64::INFINITY {
        return Some(0.0);
    }
    if df >= LARGE_DF {
        let a = df - 0.5;
        let b = 48.0 * a * a;
        let square = a * (t / df * t).ln_1p();
        let z = square.sqrt();
        let z = z + ((square + 3.0) * z) / b
            - z * (4.0 * square.powi(3) + 33.0 * square * square + 240.0 * square + 855.0)
                / (10.0 * b * (b + 0.8 * square * square + 100.0));
        return normal_two_sided(z);
    }
    // Through 1/t² for a huge t, whose square would overflow.
    let (x, y) = if t > 1e100 {
        let x = df / t / t;
        (x, 1.0)
    } else {
        (df / (df + t * t), t * t / (df + t * t))
    };
    Some(beta(0.5 * df, 0.5, x, y))
}

/// Upper tail P(T > t) of Student's t.
pub fn t_upper(t: f64, df: f64) -> Option<f64> {
    let half = 0.5 * t_two_sided(t, df)?;
    Some(if t > 0.0 { half } else { 1.0 - half })
}

/// Upper tail P(F > f) of the F distribution; None unless both degrees of freedom are > 0.
/// A negative f has p = 1.
pub fn f_upper(f: f64, df1: f64, df2: f64) -> Option<f64> {
    let (df1, df2) = (legal_df(df1)?, legal_df(df2)?);
    if f.is_nan() {
        return None;
    }
    Some(ratio_upper(df1 * f / df2, df1, df2))
}

/// P(χ²(df1) / χ²(df2) > w) for legal degrees of freedom: the F distribution without its scaling.
/// It falls in w, rises in df1 and falls in df2, which is what interval bounds need.
pub(crate) fn ratio_upper(w: f64, df1: f64, df2: f64) -> f64 {
    if w <= 0.0 {
        return 1.0;
    }
    if w == f64::INFINITY {
        return 0.0;
    }
    beta(0.5 * df2, 0.5 * df1, 1.0 / (1.0 + w), w / (1.0 + w))
}

/// Upper tail P(X > x) of the χ² distribution; None unless df > 0. A negative x has p = 1.
pub fn chi2_upper(x: f64, df: f64) -> Option<f64> {
    let df = legal_df(df)?;
    (!x.is_nan()).then(|| gamma_upper(0.5 * df, 0.5 * x))
}

/// Two-sided p of a correlation r with `df` = n − 2 degrees of freedom; None unless |r| ≤ 1 and df > 0.
pub fn r_two_sided(r: f64, df: f64) -> Option<f64> {
    let df = legal_df(df)?;
    let r = r.abs();
    if r.is_nan() || r > 1.0 {
        return None;
    }
    // t² / df = r² / (1 − r²), so that 1 − r² is the argument of the beta function itself.
    if df >= LARGE_DF {
        return t_two_sided(r * (df / ((1.0 - r) * (1.0 + r))).sqrt(), df);
    }
    Some(beta(0.5 * df, 0.5, (1.0 - r) * (1.0 + r), r * r))
}

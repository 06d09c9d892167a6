//! Tail probabilities by plain numerical integration of the densities: slow, simple, and written
//! without a look at the program's own code, so that the two can be held against each other.
//! The densities are those of any handbook (common practice).

use std::f64::consts::PI;

/// ln Γ(x) for x > 0, by Stirling's series after shifting x beyond 12.
fn ln_gamma(x: f64) -> f64 {
    let mut x = x;
    let mut shift = 0.0;
    while x < 12.0 {
        shift -= x.ln();
        x += 1.0;
    }
    let r = 1.0 / (x * x);
    let series = (1.0 / 12.0 - r * (1.0 / 360.0 - r * (1.0 / 1260.0 - r * (1.0 / 1680.0)))) / x;
    shift + (x - 0.5) * x.ln() - x + 0.5 * (2.0 * PI).ln() + series
}

/// The integral of a density from `from` to infinity; `scale` is about how far the tail reaches.
fn tail(from: f64, scale: f64, ln_density: impl Fn(f64) -> f64) -> f64 {
    const STEPS: usize = 3000;
    // x = from + scale·u/(1−u) maps (0, 1) to the tail; Simpson's rule in u.
    let f = |u: f64| {
        if u >= 1.0 {
            return 0.0;
        }
        let x = from + scale * u / (1.0 - u);
        (ln_density(x) + scale.ln() - 2.0 * (1.0 - u).ln()).exp()
    };
    let h = 1.0 / STEPS as f64;
    let inner: f64 = (1..STEPS)
        .map(|i| f(i as f64 * h) * if i % 2 == 1 { 4.0 } else { 2.0 })
        .sum();
    (f(0.0) + inner + f(1.0 - 1e-12)) * h / 3.0
}

/// Two-sided p of Student's t.
pub fn p_t(t: f64, df: f64) -> f64 {
    let c = ln_gamma((df + 1.0) / 2.0) - ln_gamma(df / 2.0) - 0.5 * (df * PI).ln();
    2.0 * tail(t.abs(), 1.0, |x| c - (df + 1.0) / 2.0 * (1.0 + x * x / df).ln())
}

/// Two-sided p of the normal distribution.
pub fn p_z(z: f64) -> f64 {
    2.0 * tail(z.abs(), 0.5, |x| -0.5 * x * x - 0.5 * (2.0 * PI).ln())
}

/// Upper tail of χ². With one degree of freedom it is the square of a standard normal, whose density
/// is finite at 0.
pub fn p_chi2(x: f64, df: f64) -> f64 {
    if df == 1.0 {
        return p_z(x.sqrt());
    }
    let x = x.max(1e-300);
    let c = -ln_gamma(df / 2.0) - df / 2.0 * 2f64.ln();
    tail(x, 1.0 + df.sqrt(), |x| c + (df / 2.0 - 1.0) * x.ln() - x / 2.0)
}

/// Upper tail of F; with one degree of freedom above it is the square of t.
pub fn p_f(x: f64, df1: f64, df2: f64) -> f64 {
    if df1 == 1.0 {
        return p_t(x.sqrt(), df2);
    }
    let x = x.max(1e-300);
    let c = ln_gamma((df1 + df2) / 2.0) - ln_gamma(df1 / 2.0) - ln_gamma(df2 / 2.0)
        + df1 / 2.0 * (df1 / df2).ln();
    tail(x, 1.0, |x| {
        c + (df1 / 2.0 - 1.0) * x.ln() - (df1 + df2) / 2.0 * (1.0 + df1 * x / df2).ln()
    })
}

#[test]
fn the_yardstick_itself_is_right() {
    // NIST/SEMATECH e-Handbook 1.3.6.7.2 to 1.3.6.7.4 (from memory): t(0.975; 10) = 2.228,
    // F(0.95; 3, 20) = 3.098, χ²(0.95; 4) = 9.488; the normal 1.959964 of every handbook.
    assert!((p_t(2.228, 10.0) - 0.05).abs() < 2e-5);
    assert!((p_f(3.098, 3.0, 20.0) - 0.05).abs() < 3e-5);
    assert!((p_chi2(9.488, 4.0) - 0.05).abs() < 1e-5);
    assert!((p_z(1.959964) - 0.05).abs() < 1e-7);
    // F(0.95; 1, 10) = 4.965.
    assert!((p_f(4.965, 1.0, 10.0) - 0.05).abs() < 2e-5);
}

//! The *noncentral t* distribution: (Z + δ)/S, where Z is standard normal and S² is χ²/df. It is what t follows when
//! there is an effect, so that it gives power and exact intervals of d.
//!
//! P(T > t) is the mean of P(Z > t·s − δ) over S, integrated over ln s. (The series of AS 243, Lenth 1989, has no
//! relative accuracy in the tails.)

use super::special::{exp_rest, ln_normal_upper};
use super::tails::{Tails, ln_of_rest};
use super::{ENDLESS_DF, bump, gamma, legal_df, solve};
use std::f64::consts::LN_2;

/// Fewer degrees of freedom are not legal here: the integral would become too long.
const FEWEST_DF: f64 = 0.1;

/// Noncentralities beyond this are not legal.
const FARTHEST: f64 = 1e10;

/// Both tails at t with `df` degrees of freedom and noncentrality `delta`; None unless t is a number, df ≥ 0.1 and
/// |δ| ≤ 1e10.
pub fn noncentral_t_tails(t: f64, df: f64, delta: f64) -> Option<Tails> {
    let df = legal(t, df)?;
    (delta.abs() <= FARTHEST).then(|| tails(t, df, delta))
}

/// The noncentrality with which P(T > t) = p. With p = α/2 it is the lower end of the two-sided interval for δ.
/// None unless t is a number, df ≥ 0.1, 0 < p < 1, and |δ| ≤ 1e10.
pub fn t_noncentrality_upper(p: f64, t: f64, df: f64) -> Option<f64> {
    let df = legal(t, df)?;
    if !(p > 0.0 && p < 1.0) || t.is_infinite() {
        return None;
    }
    // Rises with δ; always asked of the tail that is the smaller one in the solution.
    let (ln_p, ln_rest) = (p.ln(), ln_of_rest(p.ln()));
    let spread = (1.0 + 0.5 * t * (t / df)).sqrt();
    let delta = solve::around(t, spread, -FARTHEST, FARTHEST, |delta| {
        if p <= 0.5 {
            ln_upper(t, df, delta) - ln_p
        } else {
            ln_rest - ln_upper(-t, df, -delta)
        }
    });
    (delta.abs() < FARTHEST).then_some(delta)
}

/// The noncentrality with which P(T < t) = p. With p = α/2 it is the upper end of the two-sided interval for δ.
/// None unless t is a number, df ≥ 0.1, 0 < p < 1, and |δ| ≤ 1e10.
pub fn t_noncentrality_lower(p: f64, t: f64, df: f64) -> Option<f64> {
    Some(-t_noncentrality_upper(p, -t, df)?)
}

fn legal(t: f64, df: f64) -> Option<f64> {
    legal_df(df).filter(|df| *df >= FEWEST_DF && !t.is_nan())
}

fn tails(t: f64, df: f64, delta: f64) -> Tails {
    if t.is_infinite() {
        return if t > 0.0 {
            Tails::AT_END
        } else {
            Tails::AT_BEGINNING
        };
    }
    super::smaller_tail(t > delta, |upper| {
        if upper {
            ln_upper(t, df, delta)
        } else {
            ln_upper(-t, df, -delta)
        }
    })
}

/// ln P(T > t) for a finite t.
fn ln_upper(t: f64, df: f64, delta: f64) -> f64 {
    if df == ENDLESS_DF || t == 0.0 {
        return ln_normal_upper(t - delta);
    }
    // Where the density of ln s times exp(−(t·s − δ)²/2) peaks: (t² + df)·s² − t·δ·s − df = 0. With everything
    // over df, so that nothing overflows.
    let tilt = t / df * delta;
    let scale = 1.0 + t / df * t;
    let in_tail = t > delta;
    let s = if in_tail {
        let root = (tilt * tilt + 4.0 * scale).sqrt();
        let s = if tilt < 0.0 {
            2.0 / (root - tilt)
        } else {
            (tilt + root) / (2.0 * scale)
        };
        s.clamp(1e-140, 1e140)
    } else {
        1.0
    };
    // Everything relative to this s, v = ln(s'/s), so that no digits are lost when the degrees of freedom are many.
    let a = 0.5 * df;
    let x = a * s * s;
    let excess = a * (s - 1.0) * (s + 1.0);
    let ln_density = LN_2 + gamma::ln_density(a, x, excess);
    let z = t.mul_add(s, -delta);
    let rate = t * s;
    let width = 1.0 / (2.0 * a * (1.0 + s * s)).sqrt().max(0.5);
    bump::ln_integral(0.0, width, |v| {
        ln_density - 2.0 * excess * v - x * exp_rest(2.0 * v) + ln_normal_upper(z + rate * v.exp_m1())
    })
}

//! The *noncentral F* distribution: what F follows when there are effects; λ is the noncentrality of its numerator.
//! A Poisson mixture of incomplete beta functions (Ding 1992, AS 275, for its χ²; Johnson, Kotz & Balakrishnan 1995,
//! chapter 30).

use super::beta::Cut;
use super::mixture::{Central, ln_mixture};
use super::tails::{Tails, ln_of_rest};
use super::{ENDLESS_DF, f, legal_df, legal_noncentrality, noncentral_chi2_tails, solve};

/// Both tails at f with noncentrality λ; None unless f is a number, both degrees of freedom are > 0 and
/// 0 ≤ λ ≤ 1e100.
pub fn noncentral_f_tails(f: f64, df1: f64, df2: f64, lambda: f64) -> Option<Tails> {
    let (df1, df2) = (legal_df(df1)?, legal_df(df2)?);
    let lambda = legal_noncentrality(lambda)?;
    (!f.is_nan()).then(|| tails(f, df1, df2, lambda))
}

/// The λ with which P(F > f) = p, so that with p = 1 − β and the critical f it is what a power of 1 − β needs.
/// 0 where p is not more than without noncentrality. None unless f ≥ 0 is finite, both degrees of freedom are > 0
/// and 0 < p < 1.
pub fn f_noncentrality_upper(p: f64, f: f64, df1: f64, df2: f64) -> Option<f64> {
    let (ln_upper, ln_lower) = (p.ln(), ln_of_rest(p.ln()));
    noncentrality(p, [f, df1, df2], p <= 0.5, ln_upper, ln_lower)
}

/// The λ with which P(F < f) = p, for the upper end of an interval; otherwise as [`f_noncentrality_upper`].
pub fn f_noncentrality_lower(p: f64, f: f64, df1: f64, df2: f64) -> Option<f64> {
    let (ln_lower, ln_upper) = (p.ln(), ln_of_rest(p.ln()));
    noncentrality(p, [f, df1, df2], p > 0.5, ln_upper, ln_lower)
}

fn noncentrality(p: f64, at: [f64; 3], by_upper: bool, ln_upper: f64, ln_lower: f64) -> Option<f64> {
    let [f, df1, df2] = at;
    let (df1, df2) = (legal_df(df1)?, legal_df(df2)?);
    if !(p > 0.0 && p < 1.0 && (0.0..f64::INFINITY).contains(&f)) {
        return None;
    }
    if f == 0.0 {
        return Some(0.0);
    }
    let guess = df1 * (f - 1.0);
    let width = (2.0 * (df1 * f + guess.abs()) + 2.0 * df1 * f * (df1 * f / df2)).sqrt();
    let lambda = solve::around(guess, width, 0.0, f64::MAX, |lambda| {
        let tails = tails(f, df1, df2, lambda.min(super::MOST_NONCENTRAL));
        if by_upper {
            tails.ln_upper() - ln_upper
        } else {
            ln_lower - tails.ln_lower()
        }
    });
    legal_noncentrality(lambda)
}

fn tails(f: f64, df1: f64, df2: f64, lambda: f64) -> Tails {
    if df2 == ENDLESS_DF && df1 != ENDLESS_DF {
        return noncentral_chi2_tails(df1 * f, df1, lambda).unwrap_or(Tails::AT_END);
    }
    if lambda == 0.0 || df1 == ENDLESS_DF || f <= 0.0 || f == f64::INFINITY {
        return f::f_tails(f, df1, df2).unwrap_or(Tails::AT_END);
    }
    let central = F {
        cut: f::cut(f, df1, df2),
    };
    super::smaller_tail(df1 * f > df1 + lambda, |upper| {
        ln_mixture(0.5 * lambda, upper, &central)
    })
}

/// Beta distributions of df2/(df2 + df1·F), whose second parameter grows by j.
struct F {
    cut: Cut,
}

impl F {
    fn at(&self, mean: f64, d: f64) -> Cut {
        Cut {
            b: self.cut.b + mean + d,
            excess: self.cut.excess - mean * self.cut.x - d * self.cut.x,
            ..self.cut
        }
    }
}

impl Central for F {
    fn ln_tail(&self, mean: f64, d: f64, upper: bool) -> f64 {
        let tails = self.at(mean, d).tails();
        if upper { tails.ln_lower() } else { tails.ln_upper() }
    }

    fn ln_gain(&self, j: f64) -> f64 {
        // x^a·y^s·Γ(a + s)/(Γ(a)·Γ(s + 1))
        let cut = self.at(0.0, j);
        cut.ln_density() - cut.b.ln()
    }

    fn gain_ratio(&self, j: f64) -> f64 {
        let s = self.cut.b + j;
        self.cut.y * ((self.cut.a + s) / (s + 1.0))
    }

    fn far_peak(&self, mean: f64) -> f64 {
        // j² = mean·y·(a + j)
        let half = 0.5 * mean * self.cut.y;
        half + (half * half + 2.0 * half * self.cut.a).sqrt()
    }
}

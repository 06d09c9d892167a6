//! The *noncentral χ²* distribution: the sum of the squares of normal variables whose means are not 0, λ being the
//! sum of the squared means. A Poisson mixture of central ones with df + 2j degrees of freedom (Ding 1992, AS 275).

use super::mixture::{Central, ln_mixture};
use super::tails::{Tails, ln_of_rest};
use super::{ENDLESS_DF, chi2_tails, gamma, legal_df, legal_noncentrality, solve};

/// Tails below e^(−800) are not told from 0, which is less than [`SMALLEST`](super::SMALLEST) allows. Birgé (2001, "An
/// alternative point of view on Lepski's method", lemma 8.1) says where they begin.
const FAR: f64 = 800.0;

/// Both tails at x with `df` degrees of freedom and noncentrality λ; None unless x is a number, df > 0 and
/// 0 ≤ λ ≤ 1e100.
pub fn noncentral_chi2_tails(x: f64, df: f64, lambda: f64) -> Option<Tails> {
    let (df, lambda) = (legal_df(df)?, legal_noncentrality(lambda)?);
    (!x.is_nan()).then(|| tails(x, df, lambda))
}

/// The λ with which P(X > x) = p, so that with p = 1 − β and the critical x it is what a power of 1 − β needs.
/// 0 where p is not more than without noncentrality. None unless x ≥ 0 is finite, df > 0 and 0 < p < 1.
pub fn chi2_noncentrality_upper(p: f64, x: f64, df: f64) -> Option<f64> {
    let (ln_upper, ln_lower) = (p.ln(), ln_of_rest(p.ln()));
    noncentrality(p, x, df, p <= 0.5, ln_upper, ln_lower)
}

/// The λ with which P(X < x) = p, for the upper end of an interval; otherwise as [`chi2_noncentrality_upper`].
pub fn chi2_noncentrality_lower(p: f64, x: f64, df: f64) -> Option<f64> {
    let (ln_lower, ln_upper) = (p.ln(), ln_of_rest(p.ln()));
    noncentrality(p, x, df, p > 0.5, ln_upper, ln_lower)
}

fn noncentrality(p: f64, x: f64, df: f64, by_upper: bool, ln_upper: f64, ln_lower: f64) -> Option<f64> {
    let df = legal_df(df)?;
    if !(p > 0.0 && p < 1.0 && (0.0..f64::INFINITY).contains(&x)) {
        return None;
    }
    if x == 0.0 {
        return Some(0.0);
    }
    let guess = x - df;
    let lambda = solve::around(guess, (2.0 * (x + guess.abs())).sqrt(), 0.0, f64::MAX, |lambda| {
        let tails = tails(x, df, lambda.min(super::MOST_NONCENTRAL));
        if by_upper {
            tails.ln_upper() - ln_upper
        } else {
            ln_lower - tails.ln_lower()
        }
    });
    legal_noncentrality(lambda)
}

fn tails(x: f64, df: f64, lambda: f64) -> Tails {
    if lambda == 0.0 || df == ENDLESS_DF || x <= 0.0 || x == f64::INFINITY {
        return chi2_tails(x, df).unwrap_or(Tails::AT_END);
    }
    let central = Chi2 {
        a: 0.5 * df,
        x: 0.5 * x,
        excess: 0.5 * (x - df),
    };
    let spread = (FAR * (df + 2.0 * lambda)).sqrt();
    if x - df - lambda > 2.0 * spread + 2.0 * FAR {
        return Tails::AT_END;
    }
    if x - df - lambda < -2.0 * spread {
        return Tails::AT_BEGINNING;
    }
    super::smaller_tail(x > df + lambda, |upper| ln_mixture(0.5 * lambda, upper, &central))
}

/// Gamma distributions of shape a + j at x.
struct Chi2 {
    a: f64,
    x: f64,
    excess: f64,
}

impl Central for Chi2 {
    fn ln_tail(&self, mean: f64, d: f64, upper: bool) -> f64 {
        let tails = gamma::tails(self.a + mean + d, self.x, self.excess - mean - d);
        if upper { tails.ln_upper() } else { tails.ln_lower() }
    }

    fn ln_gain(&self, j: f64) -> f64 {
        // x^s·e^(−x)/Γ(s + 1)
        let s = self.a + j;
        gamma::ln_density(s, self.x, self.excess - j) - s.ln()
    }

    fn gain_ratio(&self, j: f64) -> f64 {
        self.x / (self.a + j + 1.0)
    }

    fn far_peak(&self, mean: f64) -> f64 {
        (mean * self.x).sqrt()
    }
}

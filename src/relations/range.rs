//! Some quantities have ranges that nothing can leave.
//!
//! Formula: 0 ≤ p ≤ 1; |r|, |ρ|, |τ|, |φ|, |κ| ≤ 1; 0 ≤ η², partial η², V ≤ 1; R², ω², ε², Cronbach's α ≤ 1;
//! CFI, ICC ≤ 1; F, χ², H, Q, G², U, SD, SE, MSE, RMSEA, SRMR, BF, OR, RR, HR ≥ 0; df ≥ 0, of t and F ≥ 1
//! if whole; n and N whole and ≥ 0, beside a mean, an SD or an SE ≥ 1; 0 ≤ I² ≤ 100 %; a percentage behind its
//! n ≤ 100 %; 0 < level of confidence < 100 %.
//!
//! Only a quantity outside its range makes a finding; that one lies inside says nothing.
//!
//! Assumes: nothing, except that n counts persons: with weights an n can be fractional, which is left open.
//! An R² below zero can come from new data and is left open too, and so is a letter that stands alone far from
//! other results.
//!
//! Caution: a lost decimal point or a dash read as a minus is the usual reason.
//!
//! Source: the definitions; e.g. NIST/SEMATECH e-Handbook, ch. 1 and 7.
//!
//! Example: r = 1.24 conflicts, because no correlation is larger than 1.

use super::laws::Anything;
use super::{Case, Tie, Variant};
use crate::numbers::{Interval, Set};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (i, quantity) in case.quantities.iter().enumerate() {
        let Some((low, high)) = limits(case, i).filter(|_| case.own(i)) else {
            continue;
        };
        let natural = Interval { low, high };
        let counts = matches!(quantity.symbol, "n" | "N");
        let broken = counts && !quantity.interval.has_whole();
        if natural.meets(quantity.interval) && !broken {
            continue;
        }
        let law = move |_: usize, _: &[Interval]| -> Set { vec![natural] };
        let mut variants = Vec::new();
        if broken && natural.meets(quantity.interval) {
            // The nearest whole numbers on both sides.
            let value = quantity.number.value();
            let whole = move |_: usize, _: &[Interval]| -> Set {
                vec![Interval::point(value.floor()), Interval::point(value.ceil())]
            };
            variants.push(Variant::new(&["n counts persons"], whole));
            variants.push(Variant::new(&[], law).left_open("an n of weighted data need not be whole"));
        } else {
            variants.push(Variant::new(&[], law));
        }
        if quantity.symbol == "R2" && quantity.interval.high < 0.0 {
            let below = |_: usize, _: &[Interval]| -> Set { vec![Interval::at_most(1.0)] };
            variants.push(Variant::new(&[], below).left_open("R² can be negative for new data"));
        }
        // Far from other results a letter that stands alone may be a parameter of any size.
        let alone = (0..case.quantities.len()).filter(|k| case.own(*k)).count() == 1;
        if alone && !case.among_results && quantity.symbol != "p" {
            let reason = "it stands alone, and the letter may mean something else here";
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
        ties.push(case.tie(vec![i], variants));
    }
    ties
}

/// Lowest and highest value of a quantity where it stands.
fn limits(case: &Case, at: usize) -> Option<(f64, f64)> {
    let quantity = &case.quantities[at];
    let (low, high) = (0.0, 100.0);
    match quantity.symbol {
        // Outside a test of counts φ may be a parameter of any size.
        "phi" if case.first("chi2").is_none() => None,
        // A χ² of a saturated model has none; t and F have at least one.
        "df" | "df1" | "df2" if quantity.number.is_whole() => {
            let test = case
                .tests()
                .into_iter()
                .find(|t| [t.df, t.df1, t.df2].contains(&Some(at)));
            let some = test.is_some_and(|t| matches!(t.symbol, "t" | "F"));
            Some((if some { 1.0 } else { 0.0 }, f64::INFINITY))
        }
        // Nobody at all (n = 0) is a result, but has no mean.
        "n" | "N" if ["M", "Mdn", "SD", "SE"].iter().any(|s| case.first(s).is_some()) => Some((
            if case.all(quantity.symbol).len() == 1 {
                1.0
            } else {
                low
            },
            f64::INFINITY,
        )),
        "percent" => {
            let before = at.checked_sub(1).map(|i| case.quantities[i].symbol);
            (before == Some("n")).then_some((low, high))
        }
        symbol => natural(symbol),
    }
}

/// Lowest and highest value of a quantity wherever it stands.
fn natural(symbol: &str) -> Option<(f64, f64)> {
    const NONE: f64 = f64::INFINITY;
    Some(match symbol {
        "p" | "eta2" | "eta2p" | "eta2G" => (0.0, 1.0),
        "r" | "rho" | "tau" | "phi" | "V" | "kappa" => (-1.0, 1.0),
        "R2" | "CFI" => (0.0, 1.0),
        "R2adj" | "omega2" | "epsilon2" | "alpha" | "ICC" => (-NONE, 1.0),
        "F" | "chi2" | "H" | "Q" | "G2" | "U" | "SD" | "SE" | "MSE" | "RMSEA" | "SRMR" | "BF10" | "OR"
        | "RR" | "HR" | "IRR" | "df" | "df1" | "df2" | "n" | "N" | "count" => (0.0, NONE),
        "I2" | "CI_level" | "CrI_level" | "power" => (0.0, 100.0),
        _ => return None,
    })
}

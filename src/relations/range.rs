//! Some quantities have ranges that nothing can leave.
//!
//! Formula: 0 ≤ p ≤ 1; |r|, |ρ|, |τ|, |φ|, |κ| ≤ 1; 0 ≤ η², partial η², V ≤ 1; R², ω², ε², Cronbach's α ≤ 1;
//! F, χ², H, Q, G², U, SD, SE, MSE, RMSEA, BF, OR, RR, HR ≥ 0; df ≥ 0; n and N whole and ≥ 0;
//! 0 ≤ I² ≤ 100 %; 0 < level of confidence < 100 %.
//!
//! Only a quantity outside its range makes a finding; that one lies inside says nothing.
//!
//! Assumes: nothing, except that n counts persons: with weights an n can be fractional, which is left open.
//! An R² below zero can come from new data and is left open too.
//!
//! Caution: a lost decimal point or a dash read as a minus is the usual reason.
//!
//! Source: the definitions; e.g. NIST/SEMATECH e-Handbook, ch. 1 and 7.
//!
//! Example: r = 1.24 conflicts, because no correlation is larger than 1.

use super::{Case, Tie, Variant};
use crate::numbers::{Interval, Set};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (i, quantity) in case.quantities.iter().enumerate() {
        let Some((low, high)) = limits(quantity.symbol).filter(|_| case.own(i)) else {
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
        ties.push(case.tie(vec![i], variants));
    }
    ties
}

/// Lowest and highest value of a quantity.
fn limits(symbol: &str) -> Option<(f64, f64)> {
    const NONE: f64 = f64::INFINITY;
    Some(match symbol {
        "p" | "eta2" | "eta2p" | "eta2G" => (0.0, 1.0),
        "r" | "rho" | "tau" | "phi" | "V" | "kappa" => (-1.0, 1.0),
        "R2" => (0.0, 1.0),
        "R2adj" | "omega2" | "epsilon2" | "alpha" => (-NONE, 1.0),
        "F" | "chi2" | "H" | "Q" | "G2" | "U" | "SD" | "SE" | "MSE" | "RMSEA" | "BF10" | "OR" | "RR"
        | "HR" | "IRR" | "df" | "df1" | "df2" | "n" | "N" | "count" => (0.0, NONE),
        "I2" | "CI_level" | "CrI_level" | "power" => (0.0, 100.0),
        _ => return None,
    })
}

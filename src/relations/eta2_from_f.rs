//! η², ω², ε², f and R² follow from F and its degrees of freedom.
//!
//! Formula: partial η² = F·df1 / (F·df1 + df2); η² and generalised η² are at most that; f = √(F·df1/df2);
//! ω² = df1·(F − 1) / (df1·(F − 1) + df1 + df2 + 1) and ε² = df1·(F − 1) / (F·df1 + df2) in a one-way
//! design; R² = F·df1 / (F·df1 + df2) for the F of the whole regression. A t counts as F = t² with df1 = 1.
//!
//! Assumes: in designs with several factors η², generalised η², ω² and ε² are smaller than these values.
//! An R² that fits the adjusted R² is left open, and so is one beside a change in R².
//!
//! Caution: the F of one predictor among several says nothing about the R² of the whole model.
//!
//! Source: Cohen (1988), Statistical Power Analysis, 2nd ed., ch. 8 and 9; Olejnik & Algina (2003),
//! Psychological Methods 8:434–447.
//!
//! Example: F(1, 52) = 8.31 gives a partial η² of .138, so ηp² = .14 agrees and ηp² = .41 conflicts.

use super::laws::{Anything, COUNTS, POSITIVE, Sizes, UNIT, between, formula};
use super::{Case, Law, Tie, Variant};
use crate::numbers::Interval;

const EFFECTS: [&str; 7] = ["eta2p", "eta2", "eta2G", "omega2", "epsilon2", "f", "R2"];

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (test, effect) in case.tests_with(&EFFECTS) {
        let symbol = case.quantities[effect].symbol;
        let (parts, square) = match (test.symbol, test.df, test.df1, test.df2) {
            ("F", _, Some(df1), Some(df2)) => (vec![effect, test.at, df1, df2], false),
            ("t", Some(df), _, _) if symbol != "R2" => (vec![effect, test.at, df], true),
            _ => continue,
        };
        if parts[2..]
            .iter()
            .any(|i| case.quantities[*i].interval.high <= 0.0)
        {
            continue;
        }
        ties.push(case.tie(parts, variants(case, symbol, square)));
    }
    ties
}

fn variants(case: &Case, symbol: &str, square: bool) -> Vec<Variant> {
    let one = |domain: Interval, f: fn(f64, f64, f64) -> f64| law(square, domain, f, None);
    let up_to = |domain: Interval, f: fn(f64, f64, f64) -> f64| law(square, domain, f, Some(()));
    let several = "the design has several factors or repeated measures";
    let below_one = Interval { low: -1e3, high: 1.0 };
    match symbol {
        "eta2p" => vec![made(&[], one(UNIT, partial))],
        "eta2" => vec![
            made(
                &["one-way design, where η² is the partial η²"],
                one(UNIT, partial),
            ),
            made(&[several], up_to(UNIT, partial)),
        ],
        "eta2G" => vec![
            made(
                &["one-way design, where generalised η² is the partial η²"],
                one(UNIT, partial),
            ),
            made(&[several], up_to(UNIT, partial)),
        ],
        "omega2" => vec![
            made(&["one-way design"], one(below_one, omega)),
            made(&[several], up_to(below_one, omega)),
        ],
        "epsilon2" => vec![
            made(&["one-way design"], one(below_one, epsilon)),
            made(&[several], up_to(below_one, epsilon)),
        ],
        "f" => vec![
            made(&["from the partial η²"], one(POSITIVE, cohen_f)),
            made(&[several, "f is from η²"], up_to(POSITIVE, cohen_f)),
        ],
        _ => {
            let mut variants = vec![
                made(&["F is that of the whole model"], one(UNIT, partial)),
                made(&[], one(below_one, epsilon)).left_open("it fits if this is the adjusted R²"),
            ];
            if case.first("dR2").is_some() {
                let reason = "beside a change in R², F may be that of the change";
                variants.push(Variant::new(&[], Anything).left_open(reason));
            }
            variants
        }
    }
}

fn made(assumes: &[&str], law: Box<dyn Law>) -> Variant {
    Variant {
        assumes: assumes.iter().map(|s| s.to_string()).collect(),
        only_open: None,
        law,
    }
}

fn partial(f: f64, df1: f64, df2: f64) -> f64 {
    // Divided through, so that a huge F does not overflow.
    1.0 / (1.0 + df2 / (f * df1))
}

fn cohen_f(f: f64, df1: f64, df2: f64) -> f64 {
    (f * df1 / df2).sqrt()
}

fn omega(f: f64, df1: f64, df2: f64) -> f64 {
    (f - 1.0) / (f + (df2 + 1.0) / df1)
}

/// Also the adjusted R² of a regression with df1 predictors: 1 − (1 − R²)·(df1 + df2)/df2.
fn epsilon(f: f64, df1: f64, df2: f64) -> f64 {
    (f - 1.0) / (f + df2 / df1)
}

/// Parts: the effect, F, df1, df2; or the effect, t, df. With `below`, the effect lies between zero and
/// the value.
fn law(square: bool, domain: Interval, f: fn(f64, f64, f64) -> f64, below: Option<()>) -> Box<dyn Law> {
    let value = move |v: &[f64]| {
        if square {
            f(v[0] * v[0], 1.0, v[1])
        } else {
            f(v[0], v[1], v[2])
        }
    };
    let mut domains = vec![domain, POSITIVE, COUNTS];
    let mut signed = vec![false, true, false];
    if !square {
        domains.push(COUNTS);
        signed.push(false);
    }
    let law: Box<dyn Law> = match below {
        None => Box::new(formula(domains, value)),
        Some(()) => Box::new(between(
            domains,
            move |v| value(v).min(0.0),
            move |v| value(v).max(0.0),
        )),
    };
    Box::new(Sizes { law, signed })
}

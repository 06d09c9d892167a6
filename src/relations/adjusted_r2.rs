//! The adjusted R² follows from R² and the degrees of freedom of the model.
//!
//! Formula: R²adj = 1 − (1 − R²)·(n − 1)/(n − k − 1); with F(df1, df2) of the whole model k = df1 and
//! n − k − 1 = df2.
//!
//! Assumes: a linear regression with an intercept, and the F in the statement is that of the whole model; beside
//! a change in R², which may have an F of its own, the result is left open.
//!
//! Caution: pseudo-R² and models with weights have other corrections.
//!
//! Source: Ezekiel (1930), Methods of Correlation Analysis; NIST/SEMATECH e-Handbook 4.4.4 (common practice).
//!
//! Example: R² = .23, F(3, 96) gives .206, so R²adj = .21 agrees and R²adj = .26 conflicts.

use super::laws::{Anything, COUNTS, UNIT, formula};
use super::{Case, Tie, Variant};
use crate::numbers::Interval;

/// The adjusted R² can be a little below zero.
const ADJUSTED: Interval = Interval {
    low: -10.0,
    high: 1.0,
};

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let (all, own) = (case.all("R2adj"), case.all("R2"));
    let ([adjusted], [r2]) = (&all[..], &own[..]) else {
        return Vec::new();
    };
    let tests: Vec<_> = case.tests().into_iter().filter(|t| t.symbol == "F").collect();
    let [test] = &tests[..] else { return Vec::new() };
    let (Some(df1), Some(df2)) = (test.df1, test.df2) else {
        return Vec::new();
    };
    let law = formula(vec![ADJUSTED, UNIT, COUNTS, COUNTS], |v| {
        1.0 - (1.0 - v[0]) * (v[1] + v[2]) / v[2]
    });
    let mut variants = vec![Variant::new(&["F is that of the whole model"], law)];
    if case.first("dR2").is_some() {
        let reason = "beside a change in R², F may be that of the change";
        variants.push(Variant::new(&[], Anything).left_open(reason));
    }
    vec![case.tie(vec![*adjusted, *r2, df1, df2], variants)]
}

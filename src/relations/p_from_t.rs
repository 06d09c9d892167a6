//! p follows from t and its degrees of freedom.
//!
//! Formula: p = 2 · P(T > |t|), T with Student's t distribution with df degrees of freedom;
//! one-sided p = P(T > t) or P(T < t).
//!
//! Printed values are taken as intervals: t = 2.20 is anything from 2.195 to 2.205.
//!
//! Assumes: two-sided, unless the sentence says one-sided, one-tailed or directional (then both
//! are tried). A p that is adjusted for multiple tests may be larger, never smaller. Fractional
//! degrees of freedom (Welch, Satterthwaite, Kenward–Roger) are legitimate.
//!
//! Caution: a bootstrap or permutation test may print a p that no t distribution gives.
//!
//! Source: Student (1908), Biometrika 6:1–25; NIST/SEMATECH e-Handbook 1.3.6.7.2.
//!
//! Example: t(28) = 2.20 gives p from .0359 to .0367, so p = .036 agrees and p = .063 conflicts.

use super::laws::{Side, TailLaw};
use super::{Case, Tie, p_value};
use crate::distributions::t_two_sided;
use crate::numbers::Interval;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let pairs = case
        .tests_with_p()
        .into_iter()
        .filter(|(test, _)| test.symbol == "t");
    pairs
        .map(|(test, p)| {
            let Some(df) = test.df.filter(|i| case.quantities[*i].interval.high > 0.0) else {
                return Tie::open(vec![p, test.at], "the degrees of freedom of t are missing");
            };
            let variants = p_value::variants(case, &test, p, true, |side| Box::new(law(side)));
            let mut tie = case.tie(vec![p, test.at, df], variants);
            tie.remarks = p_value::remarks(case, p);
            tie
        })
        .collect()
}

/// Parts: p, t, df.
fn law(side: Side) -> TailLaw {
    TailLaw {
        tail: t_two_sided,
        rises_with_df: false,
        signed: true,
        largest: f64::INFINITY,
        less: Interval::point(0.0),
        side,
    }
}

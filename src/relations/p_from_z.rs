//! p follows from z.
//!
//! Formula: p = 2 · P(Z > |z|), Z standard normal; one-sided p = P(Z > z) or P(Z < z).
//!
//! Printed values are taken as intervals: z = 1.96 is anything from 1.955 to 1.965. A z that stands
//! beside a Mann–Whitney U or a Wilcoxon W is checked in the same way.
//!
//! Assumes: two-sided, unless the sentence says one-sided, one-tailed or directional (then both
//! are tried). A p that is adjusted for multiple tests may be larger, never smaller.
//!
//! Caution: beside U or W some programs print an exact p that differs from the one of z.
//!
//! Source: NIST/SEMATECH e-Handbook 1.3.6.7.1.
//!
//! Example: z = 2.31 gives p from .0206 to .0212, so p = .021 agrees and p = .012 conflicts.

use super::laws::{Anything, Side, TailLaw};
use super::{Case, Tie, Variant, p_value};
use crate::distributions::normal_two_sided;
use crate::numbers::Interval;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let pairs = case
        .tests_with_p()
        .into_iter()
        .filter(|(test, _)| test.symbol == "z");
    pairs
        .map(|(test, p)| {
            let mut variants = p_value::variants(case, &test, p, true, |side| Box::new(law(side)));
            if case.first_of(&["U", "W"]).is_some() {
                let reason =
                    "beside U or W, p may be the exact one, which the normal distribution does not give";
                variants.push(Variant::new(&[], Anything).left_open(reason));
            }
            let mut tie = case.tie(vec![p, test.at], variants);
            tie.remarks = p_value::remarks(case, p);
            tie
        })
        .collect()
}

/// Parts: p, z.
fn law(side: Side) -> TailLaw {
    TailLaw {
        tail: |z, _| normal_two_sided(z),
        rises_with_df: false,
        signed: true,
        largest: f64::INFINITY,
        less: Interval::point(0.0),
        side,
    }
}

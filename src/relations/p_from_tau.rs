//! p follows from Kendall's τ and the sample size.
//!
//! Formula: z = τ / √(2 · (2n + 5) / (9 · n · (n − 1))) and p = 2 · P(Z > |z|).
//!
//! Assumes: no ties and a sample that is large enough for the normal approximation; two-sided,
//! unless the sentence says one-sided. Where the formula does not fit, the result is left open,
//! because exact tests and ties give another p.
//!
//! Caution: τ-b and τ-c with many ties have another variance.
//!
//! Source: Kendall (1938), Biometrika 30:81–93.
//!
//! Example: τ = .21, n = 50 gives z from 2.11 to 2.21, so p = .031 agrees.

use super::laws::{Anything, Side, TailLaw};
use super::{Case, Tie, Variant, p_value};
use crate::distributions::normal_two_sided;
use crate::numbers::Interval;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for (test, p) in case.tests_with_p() {
        if test.symbol != "tau" {
            continue;
        }
        let Some(n) = test
            .sizes
            .first()
            .copied()
            .filter(|i| case.quantities[*i].interval.high >= 2.0)
        else {
            ties.push(Tie::open(vec![p, test.at], "the sample size of τ is missing"));
            continue;
        };
        let mut variants = p_value::variants(case, &test, p, true, |side| Box::new(law(side)));
        let reason =
            "p is not that of the normal approximation without ties; an exact test or ties may explain it";
        variants.push(Variant::new(&[], Anything).left_open(reason));
        let mut tie = case.tie(vec![p, test.at, n], variants);
        tie.remarks = p_value::remarks(case, p);
        ties.push(tie);
    }
    ties
}

/// Parts: p, τ, n.
fn law(side: Side) -> TailLaw {
    TailLaw {
        tail,
        rises_with_df: false,
        signed: true,
        largest: 1.0,
        less: Interval::point(1.0),
        side,
    }
}

/// Two-sided p for τ with n = `pairs` + 1.
fn tail(tau: f64, pairs: f64) -> Option<f64> {
    let n = pairs + 1.0;
    normal_two_sided(tau * (9.0 * n * pairs / (2.0 * (2.0 * n + 5.0))).sqrt())
}

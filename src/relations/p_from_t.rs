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
//! Example: t(28) = 2.20 gives p from .0358 to .0367, so p = .036 agrees and p = .063 conflicts.

use super::laws::{Side, TailLaw};
use super::{Case, Law, Reach, Tie, p_value};
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
            let mut variants = p_value::variants(case, &test, p, true, |side| Box::new(law(side)));
            let whole = case.quantities[df].number.is_whole();
            if let Some(mention) = case.mention("welch", Reach::Document).filter(|_| whole) {
                let said = format!(
                    "fractional degrees of freedom printed as a whole number ({})",
                    p_value::quoted(mention)
                );
                let rounded = |side| -> Box<dyn Law> {
                    let less = Interval { low: -0.5, high: 0.5 };
                    Box::new(TailLaw { less, ..law(side) })
                };
                for mut variant in p_value::variants(case, &test, p, true, rounded) {
                    variant.assumes.push(said.clone());
                    variants.push(
                        if mention.reach <= Reach::Paragraph || variant.only_open.is_some() {
                            variant
                        } else {
                            variant.left_open(format!("it fits with {said}"))
                        },
                    );
                }
            }
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

//! The standard error of a mean follows from its SD and n.
//!
//! Formula: SE = SD / √n.
//!
//! Assumes: SD, SE and n are those of the same mean, and every answer counts alike.
//!
//! Caution: a standard error from a model, from clusters or from weights differs.
//!
//! Source: NIST/SEMATECH e-Handbook 1.3.5.2 (standard error of the mean).
//!
//! Example: SD = 1.10 with n = 64 gives SE = .1375, so SE = 0.14 agrees and SE = 0.41 conflicts.

use super::laws::{Anything, COUNTS, POSITIVE, formula};
use super::{Case, Reach, Tie, Variant, p_value};

/// Words that say that the standard error is not that of a plain mean.
const OTHERWISE: [&str; 3] = ["bootstrap", "bayes", "robust"];

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let mut ties = Vec::new();
    for sample in case.samples().into_iter().filter(|s| s.own) {
        let (Some(se), Some(sd), Some(n)) = (sample.se, sample.sd, sample.n) else {
            continue;
        };
        let law = formula(vec![POSITIVE, POSITIVE, COUNTS], |v| v[0] / v[1].sqrt());
        let mut variants = vec![Variant::new(&[], law)];
        for meaning in OTHERWISE {
            if let Some(mention) = case.mention(meaning, Reach::Paragraph) {
                let reason = format!(
                    "the standard error may be another one ({})",
                    p_value::quoted(mention)
                );
                variants.push(Variant::new(&[], Anything).left_open(reason));
            }
        }
        ties.push(case.tie(vec![se, sd, n], variants));
    }
    ties
}

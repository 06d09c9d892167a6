//! The difference of two means is what is left when one is taken from the other.
//!
//! Formula: difference = M1 − M2; its sign says which was taken first and is not judged.
//!
//! Assumes: the only two means of a sentence and the only difference in it belong together; a difference that
//! a model adjusts for other variables is left open where the paragraph speaks of one.
//!
//! Caution: means of those who took part twice need not be those of everybody.
//!
//! Source: arithmetic (common practice).
//!
//! Example: M = 3.12 and M = 2.50 differ by 0.62, so a mean difference of 0.62 agrees and one of 0.26 conflicts.

use super::groups::difference;
use super::laws::{Anything, ByRange, POSITIVE};
use super::{Case, Reach, Tie, Variant, p_value};
use crate::numbers::Interval;

const ANY: Interval = Interval { low: -1e9, high: 1e9 };

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let samples = case.samples();
    let [a, b] = &samples[..] else { return Vec::new() };
    let differences: Vec<usize> = case.all("Mdiff").into_iter().filter(|i| case.own(*i)).collect();
    let elsewhere = case.linked.iter().any(|l| l.quantity.symbol == "Mdiff");
    let ([found], false) = (&differences[..], elsewhere) else {
        return Vec::new();
    };
    let law = super::laws::Sizes {
        law: Box::new(ByRange {
            range: |v: &[Interval]| Some(difference(v[1], v[2])),
            domains: vec![POSITIVE, ANY, ANY],
        }),
        signed: vec![true, false, false],
    };
    let mut variants = vec![Variant::new(&[], law)];
    for meaning in ["partial", "bootstrap", "bayes", "robust", "multilevel", "log"] {
        if let Some(mention) = case.mention(meaning, Reach::Paragraph) {
            let reason = format!(
                "the difference may come from a model ({})",
                p_value::quoted(mention)
            );
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
    }
    vec![case.tie(vec![*found, a.mean, b.mean], variants)]
}

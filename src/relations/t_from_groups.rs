//! t follows from the means, SDs and sizes of two groups.
//!
//! Formula: t = (M1 − M2) / SE, with SE² = s²·(1/n1 + 1/n2) and s² the pooled variance (Student), or
//! SE² = SD1²/n1 + SD2²/n2 (Welch). For the same persons twice, SE = SDd/√n, where the SD of the
//! differences lies between |SD1 − SD2| and SD1 + SD2, since the correlation lies between −1 and 1.
//!
//! Where the sizes are not printed, N = df + 2 persons may be divided in any way.
//!
//! Assumes: the two means, SDs and the only t in one sentence belong together; the sign of t says which
//! mean was taken first and is not judged. Which test it was is told by the degrees of freedom.
//!
//! Caution: a t from a model with covariates, from a contrast or from clustered data differs.
//!
//! Source: Student (1908), Biometrika 6:1–25; Welch (1947), Biometrika 34:28–35; NIST/SEMATECH e-Handbook
//! 1.3.5.3.
//!
//! Example: M = 3.12, SD = 1.07, n = 30 and M = 2.50, SD = 1.10, n = 28 give t(56) = 2.18; t(56) = 2.81
//! conflicts.

use super::groups::{difference, over, sized};
use super::laws::{Anything, corners};
use super::{Case, Law, Reach, Tie, Variant, p_value};
use crate::numbers::Interval;

/// See the module documentation.
pub fn ties(case: &Case) -> Vec<Tie> {
    let Some(pair) = case.two_groups() else {
        return Vec::new();
    };
    let Some((t, df)) = pair.test.as_ref().and_then(|test| Some((test.at, test.df?))) else {
        return Vec::new();
    };
    let mut parts = vec![t, pair.a.mean, pair.sds.0, pair.b.mean, pair.sds.1];
    let design = pair.design(case);
    let mut variants: Vec<Variant> = Vec::new();
    let mut add = |says: &str, law: Box<dyn Law>| {
        variants.push(Variant {
            assumes: vec![says.to_string()],
            only_open: None,
            law,
        });
    };
    let fractional = case.quantity(df).interval.low.fract() != 0.0;
    if let Some((n1, n2)) = pair.sizes {
        parts.extend([n1, n2]);
        if design.student {
            add("two groups, equal variances", sized(2, student));
        }
        if design.welch {
            add("two groups, Welch's test", sized(2, welch));
        }
        if design.paired {
            add("the same persons twice", sized(2, |v| paired(v, v[5])));
        }
    } else if fractional {
        let reason = "the sizes of the groups are missing, which Welch's test needs";
        return vec![Tie::open(parts, reason)];
    } else {
        parts.push(df);
        add("two groups of unknown sizes", sized(1, unknown_split));
        add(
            "the same persons twice",
            sized(1, |v| paired(v, v[5].plus(Interval::point(1.0)))),
        );
    }
    if variants.is_empty() {
        let reason = "the degrees of freedom are those of another design than these two groups";
        return vec![Tie::open(parts, reason)];
    }
    for meaning in ["bootstrap", "permutation", "bayes", "partial"] {
        if let Some(mention) = case.mention(meaning, Reach::Paragraph) {
            let reason = format!("t may come from another method ({})", p_value::quoted(mention));
            variants.push(Variant::new(&[], Anything).left_open(reason));
        }
    }
    vec![case.tie(parts, variants)]
}

/// Parts: t, M1, SD1, M2, SD2, n1, n2.
fn student(v: &[Interval]) -> Option<Interval> {
    let se = corners(&[v[2], v[4], v[5], v[6]], |x| {
        let (n1, n2) = (x[2], x[3]);
        let pooled = ((n1 - 1.0) * x[0] * x[0] + (n2 - 1.0) * x[1] * x[1]) / (n1 + n2 - 2.0);
        (pooled * (1.0 / n1 + 1.0 / n2)).sqrt()
    })?;
    Some(over(difference(v[1], v[3]), se))
}

fn welch(v: &[Interval]) -> Option<Interval> {
    let se = corners(&[v[2], v[4], v[5], v[6]], |x| {
        (x[0] * x[0] / x[2] + x[1] * x[1] / x[3]).sqrt()
    })?;
    Some(over(difference(v[1], v[3]), se))
}

/// Parts: t, M1, SD1, M2, SD2, df. However N = df + 2 is divided, the pooled SD lies between the two and
/// 1/n1 + 1/n2 between 4/N and 1/2 + 1/(N − 2).
fn unknown_split(v: &[Interval]) -> Option<Interval> {
    let n = v[5].plus(Interval::point(2.0));
    if n.low < 3.0 {
        return None;
    }
    let (low, high) = (v[2].low.min(v[4].low), v[2].high.max(v[4].high));
    let se = Interval {
        low: low.max(0.0) * (4.0 / n.high).sqrt(),
        high: high * (1.0 + 1.0 / (n.low - 1.0)).sqrt(),
    };
    Some(over(difference(v[1], v[3]), se))
}

fn paired(v: &[Interval], n: Interval) -> Option<Interval> {
    let root = n.rising(f64::sqrt);
    let apart = v[2].minus(v[4]).abs();
    let sd = Interval {
        low: apart.low,
        high: v[2].high + v[4].high,
    };
    Some(over(difference(v[1], v[3]).times(root), sd))
}

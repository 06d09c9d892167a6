//! From a tie to a finding: which variant fits, and what it means if none does.

use super::finding::{Finding, Verdict};
use super::{repairs, wording};
use crate::manuscript::Manuscript;
use crate::numbers::{Interval, Set};
use crate::relations::{Case, Relation, Tie};
use crate::statements::{Quantity, Statement};
use std::collections::HashSet;

/// Decides one tie.
pub fn finding(
    relation: &Relation,
    tie: &Tie,
    case: &Case,
    statement: &Statement,
    manuscript: &Manuscript,
) -> Finding {
    let parts: Vec<&Quantity> = tie.parts.iter().map(|i| &case.quantities[*i]).collect();
    let values: Vec<Interval> = parts.iter().map(|q| q.interval).collect();
    let mut assumes: Vec<String> = parts.iter().filter_map(|q| q.borrowed.clone()).collect();
    let mut expected: Set = Vec::new();
    let mut found_repairs = Vec::new();
    let mut reason = tie.open.clone();
    let verdict = if tie.open.is_some() {
        Verdict::Open
    } else {
        let fits = |only_open: bool| {
            tie.variants
                .iter()
                .find(|v| v.only_open.is_some() == only_open && v.law.holds(&values))
        };
        let main = tie.variants.first();
        expected = main.map(|v| v.law.solve(0, &values)).unwrap_or_default();
        match (fits(false), fits(true)) {
            (Some(variant), _) => {
                assumes.extend(variant.assumes.iter().cloned());
                expected = variant.law.solve(0, &values);
                Verdict::Agrees
            }
            (None, Some(variant)) => {
                assumes.extend(variant.assumes.iter().cloned());
                reason = variant.only_open.clone();
                Verdict::Open
            }
            (None, None) => {
                assumes.extend(main.iter().flat_map(|v| v.assumes.iter().cloned()));
                found_repairs = repairs::repairs(tie, &parts, &values);
                let borrowed = parts.iter().any(|q| q.borrowed.is_some());
                if !borrowed && reverses(tie, &parts, &values, case.alpha) {
                    Verdict::Reverses
                } else {
                    Verdict::Conflicts
                }
            }
        }
    };
    assumes.extend(tie.remarks.iter().cloned());
    let mut seen = HashSet::new();
    assumes.retain(|a| seen.insert(a.clone()));
    let target = parts.first();
    let shown = shown_range(&expected, values.first().copied());
    Finding {
        relation: relation.name,
        verdict,
        statements: vec![statement.id],
        place: manuscript.place(&manuscript.blocks[statement.block], statement.range.clone()),
        quote: manuscript.text[statement.range.clone()].to_string(),
        marks: parts
            .iter()
            .filter(|q| q.borrowed.is_none())
            .map(|q| q.span.clone())
            .collect(),
        sentence: statement.sentence.clone(),
        reported: target
            .map(|q| (q.symbol, wording::claim(q)))
            .into_iter()
            .collect(),
        expected: target
            .zip(shown)
            .map(|(q, [low, high])| (q.symbol, [low, high]))
            .into_iter()
            .collect(),
        says: wording::says(
            verdict,
            &parts,
            &expected,
            shown,
            reason.as_deref(),
            &assumes,
            case.alpha,
        ),
        assumes,
        repairs: found_repairs,
    }
}

/// The one interval of a set; for several, the edges next to what is printed.
fn shown_range(set: &Set, printed: Option<Interval>) -> Option<[f64; 2]> {
    let (first, last) = (set.first()?, set.last()?);
    if set.len() == 1 {
        return Some([first.low, first.high]);
    }
    let middle = printed.map_or(0.0, |p| (p.low + p.high) / 2.0);
    // The same size with either sign: the side of what is printed.
    if set.len() == 2 && first.low == -last.high && first.high == -last.low {
        let side = if middle < 0.0 { first } else { last };
        return Some([side.low, side.high]);
    }
    let below = set
        .iter()
        .rev()
        .find(|i| i.high <= middle)
        .map_or(first.low, |i| i.high);
    let above = set.iter().find(|i| i.low >= middle).map_or(last.high, |i| i.low);
    Some([below.min(above), above.max(below)])
}

/// Whether what follows for p lies wholly on the other side of α than the p that is printed,
/// whichever legitimate variant is taken.
fn reverses(tie: &Tie, parts: &[&Quantity], values: &[Interval], alpha: f64) -> bool {
    if parts.first().is_none_or(|q| q.symbol != "p") {
        return false;
    }
    let significant = values[0].high <= alpha;
    let not_significant = values[0].low >= alpha && !significant;
    let all: Vec<Interval> = tie
        .variants
        .iter()
        .filter(|v| v.only_open.is_none())
        .flat_map(|v| v.law.solve(0, values))
        .collect();
    if all.is_empty() {
        return false;
    }
    significant && all.iter().all(|i| i.low > alpha) || not_significant && all.iter().all(|i| i.high < alpha)
}

//! From a tie to a finding: which variant fits, and what it means if none does. Repairs are the
//! business of the [`network`](super::network).

use super::finding::{Finding, Verdict};
use super::wording;
use crate::manuscript::Manuscript;
use crate::numbers::{Interval, Set};
use crate::relations::{Case, Relation, Tie, Variant};
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
    let parts: Vec<&Quantity> = tie.parts.iter().map(|i| case.quantity(*i)).collect();
    let readings = readings(&parts);
    // Where signs are uncertain, what is not about them is shown by the numbers as printed.
    let values = &readings[0];
    let mut assumes: Vec<String> = parts.iter().filter_map(|q| q.borrowed.clone()).collect();
    assumes.extend(parts.iter().flat_map(|q| q.doubts()));
    let fits = |only_open: bool| {
        let mut alike = tie.variants.iter().filter(|v| v.only_open.is_some() == only_open);
        alike.find(|v| readings.iter().any(|values| v.law.holds(values)))
    };
    // The variant that is shown: the first that fits, otherwise the first of all.
    let (verdict, variant) = if tie.open.is_some() {
        (Verdict::Open, None)
    } else if let Some(variant) = fits(false) {
        (Verdict::Agrees, Some(variant))
    } else if let Some(variant) = fits(true) {
        (Verdict::Open, Some(variant))
    } else {
        let sure = |q: &&Quantity| q.borrowed.is_none() && q.doubts().next().is_none();
        let turns = parts.iter().all(sure) && reverses(tie, &parts, values, case.alpha);
        (
            if turns {
                Verdict::Reverses
            } else {
                Verdict::Conflicts
            },
            tie.variants.first(),
        )
    };
    let reason = tie.open.as_ref().or(match verdict {
        Verdict::Open => variant.and_then(|v| v.only_open.as_ref()),
        _ => None,
    });
    // What follows is shown by the main form of the law, unless another form is the one that agrees.
    let shown_by = if verdict == Verdict::Agrees {
        variant
    } else {
        tie.variants.first()
    };
    let expected: Set = match tie.open {
        Some(_) => Vec::new(),
        None => {
            let solved = |v: &Variant| merged(readings.iter().flat_map(|values| v.law.solve(0, values)));
            shown_by.map(solved).unwrap_or_default()
        }
    };
    assumes.extend(variant.iter().flat_map(|v| v.assumes.iter().cloned()));
    assumes.extend(tie.remarks.iter().cloned());
    let mut seen = HashSet::new();
    assumes.retain(|a| seen.insert(a.clone()));
    let target = parts.first();
    let shown = shown_range(&expected, values.first().copied());
    let mut statements = vec![statement.id];
    for id in tie.parts.iter().map(|i| case.statement_of(*i)) {
        if !statements.contains(&id) {
            statements.push(id);
        }
    }
    Finding {
        relation: relation.name,
        with: Vec::new(),
        verdict,
        statements,
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
            .map(|(q, ends)| (q.symbol, ends))
            .into_iter()
            .collect(),
        says: wording::says(
            verdict,
            &parts,
            &expected,
            shown,
            reason.map(String::as_str),
            &assumes,
            case.alpha,
        ) + &wording::on_the_page(manuscript, statement, &parts),
        assumes,
        // What would mend it is known when all ties of the sentence have been tried.
        repairs: Vec::new(),
    }
}

/// Intervals in order, with those that touch made one.
fn merged(intervals: impl Iterator<Item = Interval>) -> Set {
    let mut all: Vec<Interval> = intervals.collect();
    all.sort_by(|a, b| a.low.total_cmp(&b.low));
    let mut out = Set::new();
    for i in all {
        match out.last_mut() {
            Some(last) if i.low <= last.high => *last = last.hull(i),
            _ => out.push(i),
        }
    }
    out
}

/// Every way to read the parts: where signs are uncertain, with each of them.
fn readings(parts: &[&Quantity]) -> Vec<Vec<Interval>> {
    const MOST: usize = 64;
    let mut all: Vec<Vec<Interval>> = vec![Vec::with_capacity(parts.len())];
    for part in parts {
        let mut ways = part.readings();
        if all.len() * ways.len() > MOST {
            ways = vec![part.interval];
        }
        all = all
            .iter()
            .flat_map(|values| ways.iter().map(|w| values.iter().copied().chain([*w]).collect()))
            .collect();
    }
    all
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
